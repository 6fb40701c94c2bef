"""The folder of a machine: each distinct part as solid, facets and flat section, the whole placed, and the report."""

from collections.abc import Mapping, Sequence
from pathlib import Path

import cadquery as cq

from gearsolid import __version__
from gearsolid.contact.causes import causes
from gearsolid.contact.result import RollResult
from gearsolid.contact.roll import roll_test
from gearsolid.errors import DesignError
from gearsolid.output.deviation import flank_deviation
from gearsolid.output.dxf import write_arc_dxf, write_dxf
from gearsolid.output.flat import flat
from gearsolid.output.made import Made, distinct, pitch_radii
from gearsolid.output.page import page
from gearsolid.output.progress import Tell
from gearsolid.output.report import FileRecord, PartRecord, make_report
from gearsolid.output.step import write_step
from gearsolid.output.stl import write_stl
from gearsolid.output.svg import write_svg
from gearsolid.output.swap import REPORT, fingerprint, swapped_in
from gearsolid.output.threemf import write_machine_threemf, write_part_threemf
from gearsolid.pairs.machine import Machine
from gearsolid.solids.assembly import assembly

PAGE = "report.html"
WHOLE = "assembly.step"
WHOLE_FACETS = "assembly.3mf"

# The files of a part, in the order of its record. A part's name holds no dot, so none of them can be another part's.
_CONTENTS = (
    "solid of {}",
    "facets of {}",
    "facets of {}, with their unit",
    "section of {}, true curves",
    "section of {}, arcs only",
    "section of {}, cut lines at true size",
)

# Distance of solids and drawings from the exact outlines [mm]: far below what any workshop measures.
_TOL = 1e-4
# Distance of facets from the exact outlines [mm]: below what printers resolve.
_FACET_TOL = 0.01
# Distance of arcs, and of lines for a laser, from the exact outlines [mm]: below what sheet is cut to.
_ARC_TOL = 0.002


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
    steps = ["turning the machine", "making solids", "whole machine as STEP and 3MF", *(m.name for m in made), "report"]

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
        write_machine_threemf(folder / WHOLE_FACETS, machine.parts, name, _FACET_TOL)
        placed = "its parts placed at input angle 0"
        contents = {WHOLE: f"the machine, {placed}", WHOLE_FACETS: f"facets of the machine, {placed}"}
        records = []
        for k, part in enumerate(made):
            now(3 + k)
            records.append(_write_part(folder, part, solids[part.parts[0].name], pitch_radii(machine, part.parts)))
            contents |= {f: c.format(part.name) for f, c in zip(records[-1].files, _CONTENTS, strict=True)}
        now(len(steps) - 1)
        files = [_file(folder, file, content) for file, content in contents.items()]
        report = make_report(
            version=__version__,
            name=name,
            machine=machine,
            result=result,
            found=causes(machine, result),
            parts=records,
            recipe=recipe,
            files=files,
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


def _write_part(folder: Path, made: Made, solid: cq.Shape, circles: Sequence[float]) -> PartRecord:
    step = write_step(folder / f"{made.file_name}.step", cq.Assembly(solid, name=made.name))
    stl = write_stl(folder / f"{made.file_name}.stl", made.body, _FACET_TOL)
    facets = write_part_threemf(folder / f"{made.file_name}.3mf", made.body, made.name, _FACET_TOL)
    section = flat(made.body, made.name, circles)
    curves = write_dxf(folder / f"{made.file_name}.dxf", section, _TOL)
    arcs = write_arc_dxf(folder / f"{made.file_name}.arcs.dxf", section, _ARC_TOL)
    lines = write_svg(folder / f"{made.file_name}.svg", section, _ARC_TOL)
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
        curve_deviation=curves.deviation,
        arc_deviation=arcs.deviation,
        files=tuple(f.path.name for f in (step, stl, facets, curves, arcs, lines)),
    )


def _file(folder: Path, name: str, content: str) -> FileRecord:
    path = folder / name
    return FileRecord(name=name, content=content, size=path.stat().st_size, sha256=fingerprint(path))


def _ascii(name: str) -> str:
    """A design's name as STEP files can hold it."""
    return name.encode("ascii", "replace").decode().replace("?", "_")
