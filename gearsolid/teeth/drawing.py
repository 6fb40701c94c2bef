"""Points of an old wheel from files: a list of measured points, or the outline in a DXF drawing."""

import math
from collections.abc import Iterator
from itertools import pairwise
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from gearsolid.curves.curve import Points, Reals
from gearsolid.errors import DesignError

if TYPE_CHECKING:
    from ezdxf.entities.dxfentity import DXFEntity

# Points taken along the outline of a drawing.
_POINTS = 5000
# Chords by which the length along a spline is measured.
_CHORDS = 400


def read_points(path: str | Path) -> Points:
    """Measured points from a text file with x and y in mm on each line, by comma, semicolon or blanks apart.

    Args:
        path: file; empty lines, lines that start with # and one line of headings are passed over.

    Returns:
        Points x + iy [mm] in the order of the file, shape (n,).

    Raises:
        DesignError: a line does not hold two numbers.
    """
    found: list[complex] = []
    for number, line in enumerate(Path(path).read_text(encoding="utf-8-sig").splitlines(), 1):
        words = line.replace(";", " ").replace(",", " ").split()
        if not words or words[0].startswith("#"):
            continue
        try:
            x, y = float(words[0]), float(words[1])
        except (ValueError, IndexError):
            if not found and not any(w[:1].isdigit() for w in words):
                continue
            raise DesignError(
                f"line {number} of {Path(path).name} is {line.strip()!r}; each line must hold x and y in mm, such as "
                "12.345, -6.789"
            ) from None
        found.append(complex(x, y))
    return np.array(found, dtype=complex)


def read_drawing(path: str | Path, layer: str | None = None, join: float = 1e-3) -> Points:
    """Points along the longest closed outline of a DXF drawing.

    Lines, arcs, circles, polylines with or without bulges, and splines are followed exactly; text, dimensions and all
    else is passed over. Drawings in inches or other units are brought to mm; a drawing without units is taken as mm.

    Args:
        path: DXF file.
        layer: layer of the outline, or None for all.
        join: ends this close belong together [mm].

    Returns:
        Points x + iy [mm] in order round the outline, evenly spaced on each of its parts, corners included, shape (n,).

    Raises:
        DesignError: the file is no DXF drawing, holds no outline, or the outline is open.
    """
    from ezdxf import filemanagement  # noqa: PLC0415 - loaded only to read a drawing
    from ezdxf.lldxf.const import DXFError  # noqa: PLC0415

    try:
        document = filemanagement.readfile(path)
    except (OSError, DXFError) as error:
        raise DesignError(f"{Path(path).name} cannot be read as a DXF drawing: {error}") from error
    scale = _mm(document)
    entities = [e for e in document.modelspace() if layer is None or e.dxf.layer == layer]
    strokes = [s for e in entities for s in _strokes(e, scale)]
    if not strokes:
        raise DesignError(
            f"{Path(path).name} holds no line, arc, circle, polyline or spline"
            + (f" on layer {layer!r}" if layer else "")
            + f"; it has {len(entities)} entities in all: check the layer, and explode blocks"
        )
    chain = max(_chains(strokes, join), key=lambda c: sum(s.length for s in c))
    gap = abs(chain[-1].end - chain[0].start)
    if gap > join:
        first, last = chain[0].start, chain[-1].end
        raise DesignError(
            f"the longest outline in {Path(path).name} is open by {gap:.4g} mm, from x {last.real:.4f}, y "
            f"{last.imag:.4f} to x {first.real:.4f}, y {first.imag:.4f} mm; ends up to {join:g} mm apart are joined: "
            "close it, or allow more"
        )
    whole = sum(s.length for s in chain)
    return np.concatenate([s.points(max(2, math.ceil(_POINTS * s.length / whole)))[:-1] for s in chain])


def _mm(document: Any) -> float:
    """Millimetres for one unit of a drawing; one without units is taken as drawn in mm."""
    from ezdxf.enums import InsertUnits  # noqa: PLC0415
    from ezdxf.units import conversion_factor  # noqa: PLC0415

    return float(conversion_factor(document.units, InsertUnits.Millimeters)) if document.units else 1.0


class _Stroke:
    """A part of the drawing between two ends, as points at chosen shares of its length."""

    def __init__(self, at: Any, length: float) -> None:
        self._at = at
        self.length = length
        self.start, self.end = (complex(z) for z in at(np.array([0.0, 1.0])))

    def points(self, count: int) -> Points:
        """Evenly spaced points, both ends included."""
        return np.asarray(self._at(np.linspace(0, 1, count + 1)), dtype=complex)

    def reversed(self) -> "_Stroke":
        """The same part the other way round."""
        return _Stroke(lambda u: self._at(1 - u), self.length)


def _line(a: complex, b: complex) -> _Stroke:
    return _Stroke(lambda u: a + (b - a) * u, abs(b - a))


def _arc(centre: complex, radius: float, start: float, sweep: float) -> _Stroke:
    return _Stroke(lambda u: centre + radius * np.exp(1j * (start + sweep * u)), radius * abs(sweep))


def _bulged(a: complex, b: complex, bulge: float) -> _Stroke:
    """A polyline's part; the bulge is the tangent of a quarter of the arc's angle."""
    if bulge == 0:
        return _line(a, b)
    half = (b - a) / 2
    centre = a + half + half * 1j * (1 - bulge**2) / (2 * bulge)
    return _arc(centre, abs(a - centre), float(np.angle(a - centre)), 4 * math.atan(bulge))


def _spline(tool: Any, scale: float) -> _Stroke:
    def at(t: Reals) -> Points:
        xy = np.array([(v.x, v.y) for v in tool.points(t)])
        return np.asarray(scale * (xy[:, 0] + 1j * xy[:, 1]), dtype=complex)

    knots = np.unique(tool.knots())
    t = np.unique(np.concatenate([np.linspace(a, b, 1 + _CHORDS) for a, b in pairwise(knots)]))
    way = np.concatenate(([0.0], np.cumsum(np.abs(np.diff(at(t))))))
    return _Stroke(lambda u: at(np.interp(u * way[-1], way, t)), float(way[-1]))


def _strokes(entity: "DXFEntity", scale: float) -> Iterator[_Stroke]:
    """The parts of one entity [mm]; none for text and the like."""
    e: Any = entity
    match e.dxftype():
        case "LINE":
            yield _line(scale * complex(e.dxf.start.x, e.dxf.start.y), scale * complex(e.dxf.end.x, e.dxf.end.y))
        case "ARC" | "CIRCLE" as kind:
            centre = scale * complex(e.dxf.center.x, e.dxf.center.y)
            first, last = (e.dxf.start_angle, e.dxf.end_angle) if kind == "ARC" else (0.0, 360.0)
            sweep = (last - first) % 360 or 360
            yield _arc(centre, scale * e.dxf.radius, math.radians(first), math.radians(sweep))
        case "LWPOLYLINE":
            corners = [(scale * complex(x, y), bulge) for x, y, bulge in e.get_points("xyb")]
            following = corners[1:] + (corners[:1] if e.closed else [])
            for (a, bulge), (b, _) in zip(corners, following, strict=False):
                if a != b:
                    yield _bulged(a, b, bulge)
        case "SPLINE":
            yield _spline(e.construction_tool(), scale)


def _chains(strokes: list[_Stroke], join: float) -> list[list[_Stroke]]:
    """Strokes strung together by their ends, as far as they go."""
    left, chains = list(strokes), []
    while left:
        chain = [left.pop(0)]
        grown = True
        while grown and abs(chain[-1].end - chain[0].start) > join:
            ways = [(abs(s.start - chain[-1].end), k, False) for k, s in enumerate(left)]
            ways += [(abs(s.end - chain[-1].end), k, True) for k, s in enumerate(left)]
            gap, k, turn = min(ways, default=(math.inf, 0, False))
            grown = gap <= join
            if grown:
                stroke = left.pop(k)
                chain.append(stroke.reversed() if turn else stroke)
        chains.append(chain)
    return chains
