"""A folder appears whole or not at all, and nothing of anyone else's is lost."""

import json

import pytest

from gearsolid.errors import ExportError
from gearsolid.output.swap import REPORT, fingerprint, swapped_in


def write(folder, content="first"):
    part = folder / "part.step"
    part.write_text(content)
    record = {"name": part.name, "content": "a part", "size": part.stat().st_size, "sha256": fingerprint(part)}
    (folder / REPORT).write_text(json.dumps({"format": "gearsolid report 1", "files": [record]}))


def listing(folder):
    return sorted(p.name for p in folder.iterdir())


def test_a_new_folder_is_made_with_its_parents(tmp_path):
    target = tmp_path / "out" / "deep"
    with swapped_in(target) as fresh:
        write(fresh)
        assert not target.exists(), "nothing shows before the end"
    assert listing(target) == ["part.step", REPORT]
    assert listing(tmp_path / "out") == ["deep"]


def test_a_failure_leaves_nothing(tmp_path):
    with pytest.raises(RuntimeError), swapped_in(tmp_path / "out") as fresh:
        write(fresh)
        raise RuntimeError
    assert listing(tmp_path) == []


def test_a_failure_leaves_the_earlier_folder(tmp_path):
    target = tmp_path / "out"
    with swapped_in(target) as fresh:
        write(fresh, "first")
    with pytest.raises(KeyboardInterrupt), swapped_in(target) as fresh:
        write(fresh, "second")
        raise KeyboardInterrupt
    assert (target / "part.step").read_text() == "first"
    assert listing(tmp_path) == ["out"]


def test_our_own_folder_is_replaced(tmp_path):
    target = tmp_path / "out"
    for content in ("first", "second"):
        with swapped_in(target) as fresh:
            write(fresh, content)
    assert (target / "part.step").read_text() == "second"
    assert listing(tmp_path) == ["out"]


def test_an_empty_folder_is_used(tmp_path):
    with swapped_in(tmp_path / "out") as fresh:
        write(fresh)


@pytest.mark.parametrize("spoil", ["stranger", "changed", "no report", "other report", "sub-folder", "link"])
def test_what_is_not_ours_is_never_replaced(tmp_path, spoil):
    target = tmp_path / "out"
    with swapped_in(target) as fresh:
        write(fresh)
    match spoil:
        case "stranger":
            (target / "notes.txt").write_text("mine")
        case "changed":
            (target / "part.step").write_text("edited by hand")
        case "no report":
            (target / REPORT).unlink()
        case "other report":
            (target / REPORT).write_text('{"format": "another program", "files": []}')
        case "sub-folder":
            (target / "kept").mkdir()
        case "link":
            (target / "link").symlink_to(target / "part.step")
    before = listing(target)
    with pytest.raises(ExportError, match="move them away"), swapped_in(target):
        pytest.fail("the block must not run")
    assert listing(target) == before


def test_a_file_in_the_way_is_refused(tmp_path):
    (tmp_path / "out").write_text("a file")
    with pytest.raises(ExportError, match="not a folder"), swapped_in(tmp_path / "out"):
        pass


def test_an_unwritable_place_is_said(tmp_path):
    (tmp_path / "file").write_text("a file")
    with pytest.raises(ExportError, match="choose another place"), swapped_in(tmp_path / "file" / "out"):
        pass
