"""Imports run downward only, and nothing above the CAD rooms loads the CAD kernel."""

import ast
import subprocess
import sys
from pathlib import Path

import pytest

import gearsolid

HOUSE = Path(gearsolid.__file__).parent
ROOMS = ["errors", "curves", "teeth", "shop", "pairs", "contact", "solids", "output", "recipe", "cli"]
CAD = {"cadquery", "OCP", "vtk", "vtkmodules", "matplotlib", "ezdxf", "casadi"}
CAD_ROOMS = {"solids", "output"}
# Reads old drawings, with the DXF library loaded when one is read.
DRAWING_READERS = {"teeth/drawing.py"}
FILES = sorted(p for p in HOUSE.rglob("*.py") if p.parent != HOUSE or p.name != "__init__.py")


def room(path: Path) -> str:
    return path.relative_to(HOUSE).with_suffix("").parts[0]


def imported(source: str) -> set[str]:
    names = set()
    for node in ast.walk(ast.parse(source)):
        if isinstance(node, ast.Import):
            names |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, "imports name their module in full"
            names |= {node.module} | {f"{node.module}.{alias.name}" for alias in node.names}
    return names


def upward(source: str, own: str) -> set[str]:
    """Rooms above `own` that a module of it imports."""
    rooms = {name.split(".")[1] for name in imported(source) if name.startswith("gearsolid.")}
    return {r for r in rooms if r in ROOMS and ROOMS.index(r) > ROOMS.index(own)}


@pytest.mark.parametrize("path", FILES, ids=lambda p: p.relative_to(HOUSE).as_posix())
def test_imports_run_downward(path):
    assert room(path) in ROOMS, "a new room needs its place in the order"
    assert upward(path.read_text(encoding="utf-8"), room(path)) == set()


@pytest.mark.parametrize("path", FILES, ids=lambda p: p.relative_to(HOUSE).as_posix())
def test_only_the_cad_rooms_import_cad(path):
    outside = {name.split(".")[0] for name in imported(path.read_text(encoding="utf-8"))} & CAD
    if path.relative_to(HOUSE).as_posix() in DRAWING_READERS:
        outside -= {"ezdxf"}
    assert room(path) in CAD_ROOMS or not outside


@pytest.mark.parametrize(
    "line", ["from gearsolid.pairs.part import Part", "import gearsolid.cli", "from gearsolid import solids"]
)
def test_the_check_sees_an_upward_import(line):
    assert upward(line, "curves")


def run(code: str) -> str:
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
    return done.stdout


def test_importing_the_package_loads_nothing_heavy():
    loaded = set(run("import gearsolid, sys; print(*sys.modules)").split())
    assert not loaded & (CAD | {"numpy", "scipy", "pydantic", "rich"})


def test_rooms_below_solids_work_without_cad():
    blocked = "".join(f"sys.modules[{name!r}] = None\n" for name in sorted(CAD))
    modules = [
        ".".join(("gearsolid", *p.relative_to(HOUSE).with_suffix("").parts)).removesuffix(".__init__")
        for p in FILES
        if ROOMS.index(room(p)) < ROOMS.index("solids")
    ]
    assert len(modules) > 20
    run(f"import sys, importlib\n{blocked}for name in {modules!r}: importlib.import_module(name)")


def test_blocking_works():
    done = subprocess.run(
        [sys.executable, "-c", "import sys; sys.modules['cadquery'] = None; import cadquery"],
        capture_output=True,
        check=False,
    )
    assert done.returncode != 0
