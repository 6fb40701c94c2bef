"""The command: what it prints, its exit codes, and that nobody sees a traceback for a mistake of theirs."""

import subprocess
import sys
from pathlib import Path

import pytest

from gearsolid import __version__
from gearsolid.cli import BAD_INPUT, BINDS, FAILED, ROLLS, main

ROOT = Path(__file__).parents[1]
STAGE = ROOT / "recipes" / "planetary-stage.toml"
BINDING = ROOT / "tests" / "recipes" / "binds.toml"


def test_a_stage_that_rolls(capsys):
    assert main(["roll", str(STAGE)]) == ROLLS
    out = capsys.readouterr().out
    assert "It rolls. " in out
    assert "5 : 1" in out
    assert "22.5000 mm" in out
    assert out.index("planet 1 with ring") < out.index("planet 1 with planet 2"), "the tightest first"


def test_a_pair_that_binds_names_angle_and_place(capsys):
    assert main(["roll", str(BINDING)]) == BINDS
    out = capsys.readouterr().out
    assert "It binds. driver and driven overlap by 0." in out
    assert "input angle" in out
    assert ", at x " in out.replace("\n", " ")


def test_contact_within_the_tolerance_counts_as_rolling_and_is_said(capsys, tmp_path):
    touching = BINDING.read_text().replace("centre_distance = 29.7\n", "").replace("tooth_thinning = 0.04", "")
    recipe = tmp_path / "touching.toml"
    recipe.write_text(touching)
    assert main(["roll", str(recipe)]) == ROLLS
    out = " ".join(capsys.readouterr().out.split())
    assert "It rolls, touching." in out
    assert "Contact within 1e-05 mm counts as rolling." in out


def test_what_is_thin_is_said_below_the_verdict(capsys, tmp_path):
    recipe = tmp_path / "thin.toml"
    clock = (ROOT / "recipes" / "clock-pair.toml").read_text()
    recipe.write_text(clock.replace("rim_diameter = 27.0", "rim_diameter = 28.0"))
    assert main(["roll", str(recipe)]) == ROLLS
    assert "Note: wheel: the rim between openings and root circle is 0.756 mm; 1 mm" in capsys.readouterr().out


@pytest.mark.parametrize("command", ["roll", "make"])
@pytest.mark.parametrize("text", [None, "[", 'machine = "planetary"'], ids=["missing", "not TOML", "incomplete"])
def test_bad_recipes_are_refused_in_a_sentence(capsys, tmp_path, command, text):
    recipe = tmp_path / "recipe.toml"
    if text is not None:
        recipe.write_text(text)
    words = [command, str(recipe)] + (["--out", str(tmp_path / "out")] if command == "make" else [])
    assert main(words) == BAD_INPUT
    said = capsys.readouterr()
    assert said.out == ""
    assert said.err.startswith("gearsolid: ")
    assert "Traceback" not in said.err
    assert not (tmp_path / "out").exists()


def test_a_folder_of_someone_else_is_refused(capsys, tmp_path):
    (tmp_path / "notes.txt").write_text("mine")
    assert main(["make", str(BINDING), "--out", str(tmp_path)]) == FAILED
    assert "notes.txt" in capsys.readouterr().err
    assert [p.name for p in tmp_path.iterdir()] == ["notes.txt"]


@pytest.mark.parametrize("words", [[], ["spin"], ["roll"], ["make", "recipe.toml"]], ids=" ".join)
def test_a_wrong_command_line(words, capsys):
    with pytest.raises(SystemExit) as stopped:
        main(words)
    assert stopped.value.code == BAD_INPUT
    assert "usage: gearsolid" in capsys.readouterr().err


def test_version(capsys):
    with pytest.raises(SystemExit) as stopped:
        main(["--version"])
    assert stopped.value.code == 0
    assert capsys.readouterr().out == f"gearsolid {__version__}\n"


def test_keys(capsys):
    assert main(["keys"]) == 0
    everything = capsys.readouterr().out
    assert main(["keys", "pin-wheel"]) == 0
    assert capsys.readouterr().out in everything
    assert main(["keys", "pinwheel"]) == BAD_INPUT


def run(code: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)


def test_help_loads_nothing_heavy():
    code = """
import sys
from gearsolid.cli import main
try:
    main(["--help"])
except SystemExit:
    pass
print(*sys.modules, file=sys.stderr)
"""
    loaded = set(run(code).stderr.split())
    assert "gearsolid.cli" in loaded
    assert not loaded & {"numpy", "scipy", "pydantic", "rich", "cadquery", "OCP"}


def test_roll_works_without_cad():
    blocked = "".join(f"sys.modules[{m!r}] = None\n" for m in ("cadquery", "OCP", "vtkmodules", "matplotlib", "ezdxf"))
    done = run(f"import sys\n{blocked}from gearsolid.cli import main\nsys.exit(main(['roll', {str(STAGE)!r}]))")
    assert done.returncode == ROLLS, done.stderr


def test_a_missing_kernel_is_said_without_a_traceback(tmp_path):
    code = f"""
import sys
sys.modules["cadquery"] = None
from gearsolid.cli import main
sys.exit(main(["make", {str(STAGE)!r}, "--out", {str(tmp_path / "out")!r}]))
"""
    done = run(code)
    assert done.returncode == FAILED
    assert "cadquery" in done.stderr
    assert "Traceback" not in done.stderr


def test_readme_holds_two_command_lines_and_no_more():
    lines = (ROOT / "README.md").read_text(encoding="utf-8").split("```sh\n")[1:]
    commands = [block.split("\n```")[0] for block in lines]
    assert len(commands) == 2
    assert all("\n" not in c and c.startswith("python3 -m venv .venv && ") for c in commands)
    assert "gearsolid make recipes/" in commands[0]
    assert 'install --quiet -e ".[dev]"' in commands[1]
    assert commands[1].endswith("-m pytest -n auto")
