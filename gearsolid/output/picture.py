"""Outlines as SVG path data: true arcs stay arcs, every other piece becomes Bezier cubics within a tolerance.

Paths are written in the drawing's own sense, x to the right and y up; the picture that uses them flips y once.
"""

from dataclasses import dataclass
from math import ceil, log10

import numpy as np

from gearsolid.curves.curve import Curve, Points, Reals
from gearsolid.curves.outline import Outline, smooth_spans
from gearsolid.curves.primitives import Arc

# Cubics per smooth span: doubled from the first number until within tolerance, at most to the last.
_CUBICS = (1, 2, 4, 8, 16, 32, 64, 128)


@dataclass(frozen=True)
class _Cubics:
    """Bezier cubics in travel order: control points [mm], shape (n, 4), each starting where the last one ended."""

    control: Points

    def data(self, factor: complex, digits: int) -> str:
        points = (self.control[:, 1:] * factor).tolist()
        return "".join("C" + " ".join(_xy(z, digits) for z in three) for three in points)


@dataclass(frozen=True)
class _ArcRun:
    """A circular arc cut into stretches of less than half a turn: their end points [mm], shape (n,)."""

    radius: float
    left: bool
    ends: Points

    def data(self, factor: complex, digits: int) -> str:
        radius = _number(self.radius, digits)
        head = f"A{radius} {radius} 0 0 {int(self.left)} "
        return "".join(head + _xy(z, digits) for z in (self.ends * factor).tolist())


def path(outline: Outline, tol: float = 1e-4) -> str:
    """SVG path data of a whole outline.

    Args:
        outline: closed boundary; all its pitches are drawn.
        tol: largest distance between a drawn and a true flank [mm], an estimate from points between the fitted ones.

    Returns:
        Path data in mm, x right and y up.
    """
    runs = [run for piece in outline.pieces for run in _runs(piece.curve, tol)]
    start = outline.pieces[0].curve.start
    factors = [outline.step**k for k in range(outline.order)]
    # One decimal more than the tolerance needs.
    digits = max(0, ceil(-log10(tol))) + 1
    pitches = ["".join(run.data(f, digits) for run in runs) for f in factors]
    if outline.is_chain:
        return f"M{_xy(start, digits)}{''.join(pitches)}Z"
    return "".join(f"M{_xy(start * f, digits)}{pitch}Z" for f, pitch in zip(factors, pitches, strict=True))


def _runs(curve: Curve, tol: float) -> list[_Cubics | _ArcRun]:
    if isinstance(curve, Arc):
        cuts = int(abs(curve.sweep) / 3.0) + 1
        return [_ArcRun(curve.radius, curve.sweep > 0, curve.point(curve.sample(cuts + 1)[1:]))]
    return [_cubics(curve, a, b, tol) for a, b in smooth_spans(curve)]


def _cubics(curve: Curve, first: float, last: float, tol: float) -> _Cubics:
    """Hermite cubics through the exact points and derivatives, doubled until points between them lie within tol."""
    for count in _CUBICS:
        t = np.linspace(first, last, count + 1)
        h = (last - first) / count
        z = curve.point(t)
        # One-sided derivatives: the ends of a span may be corners, where the curve answers for the other side.
        inside = np.clip(t, first + 1e-9 * (last - first), last - 1e-9 * (last - first))
        v = curve.derivative(inside) * h / 3
        chord = np.gradient(z) / 3
        v = np.where(np.isfinite(v), v, chord)
        control = np.stack([z[:-1], z[:-1] + v[:-1], z[1:] - v[1:], z[1:]], axis=1)
        if _miss(curve, t, control) <= tol:
            break
    return _Cubics(control)


def _miss(curve: Curve, t: Reals, control: Points) -> float:
    """Largest distance between curve and cubics, estimated at quarter points.

    What lies along the curve is only another pace and counts as far as the curve may bend within it.
    """
    u = np.array([0.25, 0.5, 0.75])
    weights = np.stack([(1 - u) ** 3, 3 * u * (1 - u) ** 2, 3 * u**2 * (1 - u), u**3], axis=1)
    at = t[:-1, None] + np.diff(t)[:, None] * u
    gap = (control @ weights.T - curve.point(at)) / curve.tangent(at)
    length = np.abs(control[:, -1:] - control[:, :1])
    return float(np.max(np.abs(gap.imag) + gap.real**2 / np.maximum(length, 1e-12)))


def _xy(z: complex, digits: int) -> str:
    return f"{_number(z.real, digits)} {_number(z.imag, digits)}"


def _number(x: float, digits: int) -> str:
    text = f"{x:.{digits}f}".rstrip("0").rstrip(".")
    return "0" if text in ("-0", "") else text
