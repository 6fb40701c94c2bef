"""The folder of a machine: STEP and STL of each distinct part, STEP of the whole, and the report in two forms."""

from collections.abc import Mapping, Sequence
from pathlib import Path

import cadquery as cq

from gearsolid import __version__
from gearsolid.contact.result import RollResult
from gearsolid.contact.roll import roll_test
from gearsolid.errors import DesignError
from gearsolid.output.deviation import flank_deviation
from gearsolid.output.made import Made, distinct
from gearsolid.output.page import page
from gearsolid.output.progress import Tell
from gearsolid.output.report import FileRecord, PartRecord, make_report
from gearsolid.output.step import write_step
from gearsolid.output.stl import write_stl
from gearsolid.output.swap import REPORT, fingerprint, swapped_in
from gearsolid.pairs.machine import Machine
from gearsolid.solids.assembly import assembly

PAGE = "report.html"
WHOLE = "assembly.step"

# Distance of solids from the exact outlines [mm]: far below what any workshop measures.
_TOL = 1e-4
# Distance of STL facets from the exact outlines [mm]: below what printers resolve.
_FACET_TOL = 0.01


def make_folder(
    name: str, machine: Machine, recipe: Mapping[str, Mapping[str, str]], target: Path, tell: Tell
) -> RollResult:
    """Test a machine, make its solids, and write everything about it into a folder that appears whole or not at all.

    A machine that binds is written too: the report shows where.

    Args:
        name: of the design.
        machine: the machine.
        recipe: table -> key -> value as text, for the report.
        target: folder to make, or to replace when this program wrote it.
        tell: told what is being done.

    Returns:
        The roll test.

    Raises:
        DesignError: two parts ask for the same file name.
        ExportError: the folder is not ours to replace, or a file does not read back as written.
        SolidError: a body cannot be made.
    """
    made = distinct(machine.parts)
    _check_names(made)
    steps = ["turning the machine", "making solids", "whole machine as STEP", *(m.name for m in made), "report"]

    def now(step: int) -> None:
        tell(step, len(steps), steps[step])

    with swapped_in(target) as folder:
        now(0)
        result = roll_test(machine)
        now(1)
        whole = assembly(machine.parts, name=_ascii(name), tol=_TOL)
        solids = {child.name: child.shapes[0] for child in whole.children}
        now(2)
        write_step(folder / WHOLE, whole)
        contents = {WHOLE: "the machine, its parts placed at input angle 0"}
        records = []
        for k, part in enumerate(made):
            now(3 + k)
            records.append(_write_part(folder, part, solids[part.parts[0].name]))
            contents |= dict(zip(records[-1].files, (f"solid of {part.name}", f"facets of {part.name}"), strict=True))
        now(len(steps) - 1)
        files = [_file(folder, file, content) for file, content in contents.items()]
        report = make_report(
            version=__version__, name=name, machine=machine, result=result, parts=records, recipe=recipe, files=files
        )
        (folder / PAGE).write_text(page(report, machine, result, made), encoding="utf-8")
        files.append(_file(folder, PAGE, "this report as a page"))
        whole_report = report.model_copy(update={"files": tuple(files)})
        (folder / REPORT).write_text(whole_report.model_dump_json(indent=1) + "\n", encoding="utf-8")
    tell(len(steps), len(steps), "done")
    return result


def _check_names(made: Sequence[Made]) -> None:
    names = [Path(WHOLE).stem, *(m.file_name for m in made)]
    twice = sorted({n for n in names if names.count(n) > 1})
    if twice:
        raise DesignError(f"two files of the folder would be called {twice[0]}.step; give one part another name")


def _write_part(folder: Path, made: Made, solid: cq.Shape) -> PartRecord:
    step = write_step(folder / f"{made.file_name}.step", cq.Assembly(solid, name=made.name))
    stl = write_stl(folder / f"{made.file_name}.stl", made.body, _FACET_TOL)
    (back,) = step.parts
    return PartRecord(
        name=made.name,
        placed_as=tuple(p.name for p in made.parts),
        width=made.body.width,
        diameter=2 * made.body.outer.r_max,
        bore=made.body.bore.callout if made.body.bore else None,
        volume=step.volume,
        exact_volume=made.body.volume,
        valid=back.shape.isValid(),
        flank_deviation=flank_deviation(back.shape, made.body),
        triangles=stl.triangles,
        facet_volume=stl.volume,
        files=(step.path.name, stl.path.name),
    )


def _file(folder: Path, name: str, content: str) -> FileRecord:
    path = folder / name
    return FileRecord(name=name, content=content, size=path.stat().st_size, sha256=fingerprint(path))


def _ascii(name: str) -> str:
    """A design's name as STEP files can hold it."""
    return name.encode("ascii", "replace").decode().replace("?", "_")
