"""The closed boundaries that a drawing holds, found as a machine has to find them, and held against the design."""

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import chain
from pathlib import Path

import numpy as np
from scipy.spatial import cKDTree

from gearsolid.curves.curve import Curve, Reversed
from gearsolid.curves.field import field_of
from gearsolid.curves.outline import Outline, Piece
from gearsolid.errors import ExportError
from gearsolid.output.flat import Flat

# Ends closer than this meet [mm].
_MEET = 1e-6
# Places on each curve read back, ends left out since neighbours share them.
_POINTS = 7
# The judge's own nearest points are good to about this [mm].
_JUDGE = 1e-7


@dataclass(frozen=True)
class Boundaries:
    """Closed boundaries, by what is cut.

    Args:
        outside: cut outside.
        inside: cut inside.
    """

    outside: tuple[Outline, ...]
    inside: tuple[Outline, ...]

    @property
    def area(self) -> float:
        """Area of the section [mm2]."""
        return sum(abs(o.area) for o in self.outside) - sum(abs(o.area) for o in self.inside)


def closed_chains(curves: Sequence[Curve]) -> list[Outline]:
    """Boundaries that loose curves form, in whatever order and sense they come.

    Args:
        curves: none of them closed on itself.

    Returns:
        One outline a boundary, travelled like its first curve.

    Raises:
        ExportError: an end meets no other end, or several.
    """
    if not curves:
        return []
    count = len(curves)
    ends = np.array([c.start for c in curves] + [c.end for c in curves])
    pairs = cKDTree(np.column_stack([ends.real, ends.imag])).query_pairs(_MEET, output_type="ndarray")
    meets = np.bincount(pairs.ravel(), minlength=2 * count)
    if np.any(meets != 1):
        place = ends[int(np.argmax(meets != 1))]
        raise ExportError(
            f"{int(np.sum(meets != 1))} ends of lines do not meet exactly one other end, one of them at x "
            f"{place.real:.6g}, y {place.imag:.6g} mm; boundaries must be closed, and each line drawn once"
        )
    other = np.empty(2 * count, dtype=int)
    other[pairs[:, 0]], other[pairs[:, 1]] = pairs[:, 1], pairs[:, 0]
    left = set(range(count))
    found = []
    while left:
        run: list[Curve] = []
        start = at = min(left)
        while not run or at != start:
            k = at % count
            left.discard(k)
            forward = at < count
            run.append(curves[k] if forward else Reversed(curves[k]))
            at = int(other[k + count if forward else k])
        found.append(boundary(run))
    return found


def boundary(curves: Sequence[Curve]) -> Outline:
    """One closed boundary of curves that follow each other."""
    return Outline(tuple(Piece(c, "flank") for c in curves), 1)


def prove(found: Boundaries, section: Flat, tol: float, area_tol: float, path: Path) -> float:
    """Refuse boundaries that are not those of a section.

    Args:
        found: what was read.
        section: the design.
        tol: allowed distance of the lines from the exact boundaries [mm].
        area_tol: allowed difference of the areas [mm2].
        path: of the file, for the message.

    Returns:
        Largest distance of the lines from the exact boundaries [mm].

    Raises:
        ExportError: anything differs.
    """
    counts = len(found.outside), len(found.inside)
    expected = _loops([section.outside]), _loops(section.inside)
    if counts != expected:
        raise ExportError(
            f"{path} reads back with {counts[0]} closed outside and {counts[1]} inside boundaries; the design has "
            f"{expected[0]} and {expected[1]}"
        )
    if not abs(found.area - section.area) <= area_tol:
        raise ExportError(
            f"{path} reads back with an area of {found.area:.9g} mm2 and the design has {section.area:.9g} mm2; they "
            f"may differ by {area_tol:.3g} mm2"
        )
    deviation = max(_deviation(found.outside, [section.outside]), _deviation(found.inside, section.inside))
    if not deviation <= tol + _JUDGE:
        raise ExportError(f"{path} reads back {deviation:.3g} mm off the design; {tol:g} mm is allowed")
    return deviation


def chord_length(outline: Outline) -> float:
    """Length of the boundary [mm], by chords: never too large."""
    return outline.order * float(
        sum(np.sum(np.abs(np.diff(p.curve.point(p.curve.sample(65))))) for p in outline.pieces)
    )


def _loops(outlines: Sequence[Outline]) -> int:
    return sum(1 if o.is_chain else o.order for o in outlines)


def _deviation(found: Sequence[Outline], exact: Sequence[Outline]) -> float:
    """Largest distance of lines from the nearest of the exact boundaries [mm]."""
    curves = chain.from_iterable((p.curve for p in o.pieces) for o in found)
    points = [c.point(c.sample(_POINTS + 2)[:-1]) for c in curves]
    if not points:
        return 0.0
    z = np.concatenate(points)
    return float(np.max(np.min([np.abs(field_of(o).near(z).distance) for o in exact], axis=0)))
