"""DXF drawings of flat sections, true curves or arcs only, proved by reading them back.

Each purpose has its layer, and the layers that are cut hold nothing else. A drawing has no unit of its own: it is set
in the header, and because many machines do not look there it is said in the note, with a line to measure.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from math import degrees, pi
from pathlib import Path

import numpy as np
from ezdxf.document import Drawing
from ezdxf.entities.dxfgfx import DXFGraphic
from ezdxf.entities.lwpolyline import LWPolyline
from ezdxf.entities.spline import Spline as SplineEntity
from ezdxf.filemanagement import new, readfile
from ezdxf.layouts.layout import Modelspace
from ezdxf.lldxf.const import DXFError

from gearsolid.curves.biarcs import arc_loops, arc_through
from gearsolid.curves.curve import Curve
from gearsolid.curves.fit import Spline
from gearsolid.curves.fitted import fitted, turned
from gearsolid.curves.outline import Outline
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.errors import DesignError, ExportError
from gearsolid.output.boundaries import Boundaries, boundary, chord_length, closed_chains, prove
from gearsolid.output.flat import INSIDE, NOTE, OUTSIDE, SHOWN, Flat
from gearsolid.output.whole_file import whole_file

# Colour numbers of the standard palette, and the line type of what is not cut.
_COLOURS = {OUTSIDE: 5, INSIDE: 1, SHOWN: 8, NOTE: 3}
_CHAIN_LINE = "CHAIN"
# The oldest version that knows splines and polylines with a layer and a unit.
_VERSION = "R2000"
_MILLIMETRE, _METRIC = 4, 1
_FULL_TURN = 2 * pi * (1 - 1e-12)
# A section may be off by this share of its area where its curves are splines.
AREA_TOL = 1e-6
_FIT_SHARE = 0.3

Draw = Callable[[Modelspace, Outline, str], None]


@dataclass(frozen=True)
class DxfFile:
    """A DXF file as it read back.

    Args:
        path: where it is.
        size: [bytes].
        loops: number of closed boundaries cut [-].
        area: of the section [mm2].
        deviation: largest distance of the cut lines from the exact boundaries [mm]; an estimate, taken on a grid.
    """

    path: Path
    size: int
    loops: int
    area: float
    deviation: float


def write_dxf(path: Path, section: Flat, tol: float = 1e-4) -> DxfFile:
    """Draw a section with LINE, ARC, CIRCLE and SPLINE; the file appears only when it has read back as the design.

    Args:
        path: file to make or to replace.
        section: what is cut.
        tol: allowed distance of a spline from the exact curve [mm]; tightened where the area asks for it.

    Raises:
        ExportError: the file could not be written, or does not read back as the design.
        ToleranceError: a flank cannot be fitted.
    """
    area_tol = _FIT_SHARE * AREA_TOL * section.area / (1 + len(section.inside))

    def draw(space: Modelspace, outline: Outline, layer: str) -> None:
        _draw_curves(space, fitted(outline, tol, area_tol), layer)

    return _write(path, section, draw, f"Splines within {tol:g} mm of the exact curves", tol, AREA_TOL * section.area)


def write_arc_dxf(path: Path, section: Flat, tol: float = 0.002) -> DxfFile:
    """Draw a section with closed polylines of arcs, for machines that refuse splines; read back like the other kind.

    Args:
        path: file to make or to replace.
        section: what is cut.
        tol: allowed distance of the arcs from the exact curve [mm].

    Raises:
        DesignError: the tolerance is not above 0.
        ExportError: the file could not be written, or does not read back as the design.
        ToleranceError: a flank cannot be followed that closely.
    """

    def draw(space: Modelspace, outline: Outline, layer: str) -> None:
        _draw_arcs(space, outline, tol, layer)

    length = sum(map(chord_length, (section.outside, *section.inside)))
    return _write(path, section, draw, f"Arcs within {tol:g} mm of the exact curves", tol, tol * length)


def read_dxf(path: Path) -> Boundaries:
    """The closed boundaries on the cut layers of a drawing in millimetres.

    Raises:
        ExportError: no drawing, another unit, a line that is no boundary, or one that is not closed.
    """
    try:
        document = readfile(path)
    except (OSError, DXFError) as error:
        raise ExportError(f"{path} is no DXF drawing that can be read: {error}") from error
    units = document.header.get("$INSUNITS", 0), document.header.get("$MEASUREMENT", 0)
    if units != (_MILLIMETRE, _METRIC):
        raise ExportError(
            f"{path} says unit {units[0]}, measurement {units[1]}; millimetres are {_MILLIMETRE}, {_METRIC}"
        )
    lines = {layer: list(document.modelspace().query(f'*[layer=="{layer}"]')) for layer in (OUTSIDE, INSIDE)}
    try:
        return Boundaries(*(tuple(_boundaries(entities)) for entities in lines.values()))
    except (ExportError, DesignError) as error:
        raise ExportError(f"{path} does not read back: {error}") from error


def _write(path: Path, section: Flat, draw: Draw, closeness: str, tol: float, area_tol: float) -> DxfFile:
    document = _document(section, draw, closeness)
    with whole_file(path) as fresh:
        document.saveas(fresh)
        found = read_dxf(fresh)
        deviation = prove(found, section, tol, area_tol, path)
        size = fresh.stat().st_size
    return DxfFile(path, size, len(found.outside) + len(found.inside), found.area, deviation)


def _document(section: Flat, draw: Draw, closeness: str) -> Drawing:
    document = new(_VERSION, units=_MILLIMETRE)
    document.header["$MEASUREMENT"] = _METRIC
    document.linetypes.add(_CHAIN_LINE, [4.0, 2.5, -0.5, 0.5, -0.5])
    for layer, colour in _COLOURS.items():
        document.layers.add(layer, color=colour, linetype=_CHAIN_LINE if layer == SHOWN else "Continuous")
    space = document.modelspace()
    draw(space, section.outside, OUTSIDE)
    for outline in section.inside:
        draw(space, outline, INSIDE)
    for outline in section.raised:
        draw(space, outline, SHOWN)
    for radius in section.circles:
        space.add_circle((0, 0), radius, dxfattribs={"layer": SHOWN})
    bottom = _note(space, section, closeness)
    top = section.diameter / 2
    document.header["$EXTMIN"], document.header["$EXTMAX"] = (-top, bottom, 0), (top, top, 0)
    document.set_modelspace_vport(1.1 * (top - bottom), ((0, (top + bottom) / 2)))
    return document


def _note(space: Modelspace, section: Flat, closeness: str) -> float:
    """A line to measure and the words, below the section; returns the lowest y [mm]."""
    radius = section.diameter / 2
    height = radius / 30
    y = -1.1 * radius - height
    space.add_line((-radius, y), (radius, y), dxfattribs={"layer": NOTE})
    check = f"The line above is {section.diameter:.4f} mm long, the largest diameter about the axis"
    for text in (check, *section.notes, closeness):
        y -= 2 * height
        space.add_text(text, height=height, dxfattribs={"layer": NOTE, "insert": (-radius, y)})
    return y


def _draw_curves(space: Modelspace, outline: Outline, layer: str) -> None:
    """Plain curves of all pitches as entities of their own kind."""
    place = {"layer": layer}
    for k in range(outline.order):
        for piece in outline.pieces:
            match turned(piece.curve, outline.step**k):
                case Arc(centre, radius, first, last):
                    middle = (complex(centre).real, complex(centre).imag)
                    if abs(last - first) >= _FULL_TURN:
                        space.add_circle(middle, radius, dxfattribs=place)
                    else:
                        low, high = sorted((first, last))
                        space.add_arc(middle, radius, degrees(low), degrees(high), dxfattribs=place)
                case Segment(first, last):
                    space.add_line(_xy(first), _xy(last), dxfattribs=place)
                case Spline() as spline:
                    entity = space.add_spline(degree=spline.degree, dxfattribs=place)
                    entity.control_points = [_xy(p) for p in spline.poles]
                    entity.knots = spline.knots


def _draw_arcs(space: Modelspace, outline: Outline, tol: float, layer: str) -> None:
    (first, *more) = outline.pieces
    if not more and isinstance(first.curve, Arc):
        _draw_curves(space, outline, layer)
        return
    for loop in arc_loops(outline, tol):
        rows = np.column_stack([loop.corners.real, loop.corners.imag, loop.bulges])
        space.add_lwpolyline(rows.tolist(), format="xyb", close=True, dxfattribs={"layer": layer})


def _xy(point: complex) -> tuple[float, float, float]:
    z = complex(point)
    return z.real, z.imag, 0.0


def _boundaries(entities: Sequence[DXFGraphic]) -> list[Outline]:
    """Closed boundaries that entities form: circles and closed polylines alone, all others end to end."""
    closed, loose = [], []
    for entity in entities:
        curves = _curves(entity)
        if entity.dxftype() in ("CIRCLE", "LWPOLYLINE"):
            closed.append(boundary(curves))
        else:
            loose += curves
    return closed + closed_chains(loose)


def _curves(entity: DXFGraphic) -> list[Curve]:
    match entity:
        case SplineEntity():
            poles = tuple(_complex(p) for p in entity.control_points)
            return [Spline(entity.dxf.degree, tuple(entity.knots), poles)]
        case LWPolyline() if entity.closed:
            rows = np.array(entity.get_points("xyb"))
            corners = rows[:, 0] + 1j * rows[:, 1]
            ends = corners.tolist(), np.roll(corners, -1).tolist(), rows[:, 2].tolist()
            return [arc_through(first, last, bulge) for first, last, bulge in zip(*ends, strict=True)]
    match entity.dxftype():
        case "LINE":
            return [Segment(_complex(entity.dxf.start), _complex(entity.dxf.end))]
        case "CIRCLE":
            return [Arc(_complex(entity.dxf.center), entity.dxf.radius, 0, 2 * pi)]
        case "ARC":
            first, last = np.radians([entity.dxf.start_angle, entity.dxf.end_angle]).tolist()
            return [Arc(_complex(entity.dxf.center), entity.dxf.radius, first, first + (last - first) % (2 * pi))]
    raise ExportError(f"a cut layer holds {entity.dxftype()}, which is no line to cut or is not closed")


def _complex(point: Sequence[float]) -> complex:
    return complex(point[0], point[1])
