"""An outline made of arcs, segments and B-splines only: what files and CAD kernels can hold."""

import cmath

from gearsolid.curves.curve import Curve, Mirrored, Section, Turned
from gearsolid.curves.fit import Spline, fit
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.errors import ToleranceError

# The distance tolerance is divided by this until the area fits too.
_TIGHTEN = 4.0
_ROUNDS = 6


def fitted(outline: Outline, tol: float = 1e-4, area_tol: float = float("inf")) -> Outline:
    """The outline with every piece written as a true arc, a segment or B-splines.

    A flank and its mirror image get the same poles, mirrored.

    Args:
        outline: exact outline.
        tol: allowed distance of a spline from the exact curve [mm].
        area_tol: allowed error of the area of all pitches [mm2]; the fit is tightened until it is met.

    Returns:
        An outline whose curves are `Arc`, `Segment` or `Spline`, piece roles kept.

    Raises:
        ToleranceError: a tolerance cannot be met.
    """
    for k in range(_ROUNDS):
        fits: dict[int, tuple[Curve, ...]] = {}
        pieces = [Piece(c, p.role) for p in outline.pieces for c in _plain(p.curve, tol / _TIGHTEN**k, fits)]
        result = Outline(tuple(pieces), outline.order)
        error = abs(result.area - outline.area)
        if error <= area_tol:
            return result
    raise ToleranceError(
        f"splines within {tol / _TIGHTEN ** (_ROUNDS - 1):.3g} mm of the outline still enclose an area {error:.3g} mm2 "
        f"off, not the {area_tol:.3g} mm2 asked; ask for a larger area tolerance"
    )


def _plain(curve: Curve, tol: float, fits: dict[int, tuple[Curve, ...]]) -> tuple[Curve, ...]:
    match curve:
        case Arc() | Segment() | Spline():
            return (curve,)
        case Mirrored(base):
            return tuple(_mirrored(c) for c in reversed(_plain(base, tol, fits)))
        case Turned(base, factor, shift) if shift == 0:
            return tuple(turned(c, factor) for c in _plain(base, tol / abs(factor), fits))
        case Section(Arc() as base, first, last):
            start, sweep = base.angle_from, base.sweep
            return (Arc(base.centre, base.radius, start + first * sweep, start + last * sweep),)
    if id(curve) not in fits:
        fits[id(curve)] = fit(curve, tol)
    return fits[id(curve)]


def _mirrored(curve: Curve) -> Curve:
    match curve:
        case Arc(centre, radius, angle_from, angle_to):
            return Arc(complex(centre).conjugate(), radius, -angle_to, -angle_from)
        case Segment(first, last):
            return Segment(complex(last).conjugate(), complex(first).conjugate())
        case Spline():
            return curve.mirrored()
    raise AssertionError(f"{type(curve).__name__} is no plain curve")


def turned(curve: Curve, factor: complex) -> Curve:
    """An arc, segment or spline multiplied by a complex factor (turn and scale), as one of the same kind."""
    match curve:
        case Arc(centre, radius, angle_from, angle_to):
            turn = cmath.phase(factor)
            return Arc(centre * factor, radius * abs(factor), angle_from + turn, angle_to + turn)
        case Segment(first, last):
            return Segment(first * factor, last * factor)
        case Spline():
            return curve.turned(factor)
    raise AssertionError(f"{type(curve).__name__} is no plain curve")
