"""SVG drawings of flat sections in millimetres, holding nothing but what is cut, proved by reading them back."""

import re
from dataclasses import dataclass
from math import asin, ceil, tan
from pathlib import Path
from xml.etree import ElementTree
from xml.sax.saxutils import escape

from gearsolid.curves.biarcs import arc_through
from gearsolid.curves.curve import Curve
from gearsolid.curves.fit import Spline
from gearsolid.curves.outline import Outline
from gearsolid.curves.primitives import Segment
from gearsolid.errors import DesignError, ExportError
from gearsolid.output.boundaries import Boundaries, boundary, chord_length, prove
from gearsolid.output.flat import INSIDE, OUTSIDE, Flat
from gearsolid.output.picture import path as path_data
from gearsolid.output.whole_file import whole_file

_SVG = "http://www.w3.org/2000/svg"
_COLOURS = {OUTSIDE: "#0000ff", INSIDE: "#ff0000"}
# Air round the section and width of its lines [mm].
_AIR, _LINE = 1, 0.05
_STEP = re.compile(r"([MACZ])([-\d. ]*)")
_BEZIER = (0.0, 0.0, 0.0, 0.0, 1.0, 1.0, 1.0, 1.0)


@dataclass(frozen=True)
class SvgFile:
    """An SVG file as it read back.

    Args:
        path: where it is.
        size: [bytes].
        loops: number of closed boundaries [-].
        area: of the section [mm2].
        deviation: largest distance of the lines from the exact boundaries [mm]; an estimate, taken on a grid.
    """

    path: Path
    size: int
    loops: int
    area: float
    deviation: float


def write_svg(path: Path, section: Flat, tol: float = 1e-3) -> SvgFile:
    """Draw a section at true size; the file appears only when it has read back as the design.

    Args:
        path: file to make or to replace.
        section: what is cut; its notes stand in the description, which is not drawn.
        tol: allowed distance of the lines from the exact curves [mm].

    Raises:
        DesignError: the tolerance is not above 0.
        ExportError: the file could not be written, or does not read back as the design.
    """
    if not tol > 0:
        raise DesignError(f"the drawing tolerance is {tol:g} mm; it must be above 0, 0.001 mm is usual")
    length = sum(map(chord_length, (section.outside, *section.inside)))
    with whole_file(path) as fresh:
        fresh.write_text(_text(section, tol), encoding="utf-8", newline="\n")
        found = read_svg(fresh)
        deviation = prove(found, section, tol, tol * length, path)
        size = fresh.stat().st_size
    return SvgFile(path, size, len(found.outside) + len(found.inside), found.area, deviation)


def read_svg(path: Path) -> Boundaries:
    """The closed boundaries of an SVG drawing of this kind at true size.

    Raises:
        ExportError: no such drawing, or not at true size.
    """
    try:
        drawing = ElementTree.fromstring(path.read_bytes())
    except (OSError, ElementTree.ParseError) as error:
        raise ExportError(f"{path} is no SVG drawing that can be read: {error}") from error
    size = drawing.get("width", ""), drawing.get("height", "")
    box = drawing.get("viewBox", "").split()[2:]
    if drawing.tag != f"{{{_SVG}}}svg" or list(size) != [f"{b}mm" for b in box]:
        raise ExportError(f"{path} shows {box} drawing units on {size}; at true size each must be 1 mm")
    data = {p.get("id"): p.get("d", "") for p in drawing.iter(f"{{{_SVG}}}path")}
    try:
        return Boundaries(*(tuple(_loops(data.get(layer, ""))) for layer in (OUTSIDE, INSIDE)))
    except (DesignError, ValueError) as error:
        raise ExportError(f"{path} does not read back: {error}") from error


def _text(section: Flat, tol: float) -> str:
    half = ceil(section.diameter / 2) + _AIR
    groups = {OUTSIDE: [section.outside], INSIDE: section.inside}
    # Half the tolerance is left for the rounding of the numbers and for what the estimate misses.
    paths = "".join(
        f'<path id="{layer}" stroke="{_COLOURS[layer]}" d="{"".join(path_data(o, tol / 2) for o in outlines)}"/>'
        for layer, outlines in groups.items()
        if outlines
    )
    return (
        f'<?xml version="1.0" encoding="UTF-8"?>\n<svg xmlns="{_SVG}" width="{2 * half}mm" height="{2 * half}mm" '
        f'viewBox="{-half} {-half} {2 * half} {2 * half}"><title>{escape(section.name)}</title>'
        f"<desc>{escape('. '.join(section.notes))}. Lines within {tol:g} mm of the exact curves.</desc>"
        f'<g transform="scale(1 -1)" fill="none" stroke-width="{_LINE}">{paths}</g></svg>\n'
    )


def _loops(data: str) -> list[Outline]:
    """Closed loops of path data made of M, A, C and Z, as this program writes it."""
    loops: list[list[Curve]] = []
    start = at = 0j
    for command, text in _STEP.findall(data):
        numbers = [float(n) for n in text.split()]
        places = numbers[5:] if command == "A" else numbers
        points = [complex(x, y) for x, y in zip(places[::2], places[1::2], strict=True)]
        match command:
            case "M":
                (start,) = points
                loops.append([])
            case "C":
                loops[-1].append(Spline(3, _BEZIER, (at, *points)))
            case "A":
                loops[-1].append(_arc(at, points[-1], numbers[0], left=numbers[4] == 1))
            case "Z":
                # Closing draws a line where rounding has left a gap.
                loops[-1] += [Segment(at, start)] if at != start else []
        at = points[-1] if points else start
    return [boundary(curves) for curves in loops]


def _arc(first: complex, last: complex, radius: float, *, left: bool) -> Curve:
    """The arc of less than half a turn between two points."""
    bulge = tan(asin(abs(last - first) / (2 * radius)) / 2)
    return arc_through(first, last, bulge if left else -bulge)
