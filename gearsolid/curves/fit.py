"""B-splines within a stated distance of a curve, with as few poles as that allows."""

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.polynomial import Polynomial
from scipy.interpolate import BSpline

from gearsolid.curves.curve import Curve, Points, Reals, Section
from gearsolid.curves.outline import smooth_spans
from gearsolid.errors import DesignError, ToleranceError

_DEGREES = (3, 5)
_POLE_BUDGET = 80
_FIT_PER_POLE = 20
_CHECK_PER_POLE = 40
# A peak of the error between two points of the check grid is higher than both by less than this share.
_GRID_MARGIN = 1.01
_FOOT_STEPS = 8
# A curve that would stand still less than this share of its span beyond an end is written by a new parameter there.
_CUSP_REACH = 0.03
_ASIDE = 1e-3
_BESIDE_ENDS = np.array([[0.0, 0.0], [_ASIDE, -_ASIDE]])
# Share of the grading that knots take over from that parameter: measured to give the fewest poles at 0.1 um.
_GRADING = 0.5
# The end directions of a spline may lean from the curve's by this much [rad].
_END_LEAN = 0.05


@dataclass(frozen=True)
class Spline(Curve):
    """A clamped B-spline with parameter 0 to 1.

    Args:
        degree: polynomial degree [-].
        knots: full knot vector [-], each end repeated degree + 1 times, shape (len(poles) + degree + 1,).
        poles: control points [mm]; the first and last are the ends of the curve.
        error: largest distance [mm] from the exact curve, normal to the spline; an estimate, taken on a dense grid.
    """

    degree: int
    knots: tuple[float, ...]
    poles: tuple[complex, ...]
    error: float = 0.0

    @property
    def span(self) -> tuple[float, float]:
        return 0.0, 1.0

    @cached_property
    def _basis(self) -> BSpline:
        return BSpline(np.array(self.knots), np.array(self.poles), self.degree)

    def point(self, t: Reals) -> Points:
        return np.asarray(self._basis(t), dtype=complex)

    def derivative(self, t: Reals) -> Points:
        return np.asarray(self._basis(t, nu=1), dtype=complex)

    def second(self, t: Reals) -> Points:
        return np.asarray(self._basis(t, nu=2), dtype=complex)

    def turned(self, factor: complex) -> "Spline":
        """The spline with its points multiplied by a complex factor (turn and scale)."""
        return replace(self, poles=tuple(p * factor for p in self.poles), error=self.error * abs(factor))

    def mirrored(self) -> "Spline":
        """The spline mirrored in the x axis and travelled backwards, so that material stays on the same hand."""
        knots = tuple(1 - k for k in reversed(self.knots))
        return replace(self, knots=knots, poles=tuple(p.conjugate() for p in reversed(self.poles)))


def fit(curve: Curve, tol: float = 1e-4) -> tuple[Spline, ...]:
    """B-splines within `tol` of a curve, one for each smooth span, exact at the ends of the spans.

    Each keeps the curve's own parameter, since that needs the fewest poles, except towards a cusp at an end: there the
    parameter grows like the square of the curve's own, so that the spline sets out with a speed and a direction. The
    curvature of a spline at a cusp is finite where the curve's is not: the distance is bounded, the curvature is not
    reproduced.

    Args:
        curve: finite on its whole span.
        tol: allowed distance normal to the curve [mm].

    Returns:
        One spline for each smooth span, in travel order, with the error reached.

    Raises:
        DesignError: the tolerance is not above 0, or the curve has no finite point somewhere on its span.
        ToleranceError: the tolerance is not reached within the pole budget.
    """
    if not tol > 0:
        raise DesignError(f"the fit tolerance is {tol:g} mm; it must be above 0, 1e-4 mm (0.1 um) is usual")
    return tuple(_fit_span(Section(curve, t0, t1), tol) for t0, t1 in smooth_spans(curve))


def distance(spline: Spline, points: Points, near: Reals) -> Reals:
    """Distances [mm] of points from a spline, by Newton's method for the foot of the normal; never too small.

    Args:
        spline: where the feet are sought.
        points: [mm], any shape.
        near: first guesses for the parameters of the feet [-], same shape.
    """
    u = np.asarray(near, dtype=float)
    for _ in range(_FOOT_STEPS):
        gap, velocity = spline.point(u) - points, spline.derivative(u)
        speed2 = np.abs(velocity) ** 2
        slope = speed2 + np.real(gap * np.conj(spline.second(u)))
        u = np.clip(u - np.real(gap * np.conj(velocity)) / np.where(slope > speed2 / 2, slope, speed2), 0.0, 1.0)
    gaps: Reals = np.abs(spline.point(u) - points)
    return gaps


def _fit_span(curve: Curve, tol: float) -> Spline:
    t0, t1 = curve.span
    if not np.all(np.isfinite(curve.point(curve.sample(_CHECK_PER_POLE)))):
        raise DesignError(
            f"the curve has no finite point on part of its span {t0:g} to {t1:g}; trim it to the part that exists"
        )
    warp = _parameter(curve)
    # At a corner the end itself belongs to both sides.
    directions = curve.tangent(np.array([t0, t1]) + 1e-9 * (t1 - t0) * np.array([1.0, -1.0]))
    best = np.inf
    for count in range(2, _POLE_BUDGET + 1):
        for degree in sorted({min(d, count - 1) for d in _DEGREES}):
            trial = _least_squares(curve, warp, degree, count)
            shares = _graded(warp, np.linspace(0, 1, _CHECK_PER_POLE * count))
            gaps = distance(trial, curve.point(t0 + (t1 - t0) * shares), warp(shares))
            error = _GRID_MARGIN * float(np.max(gaps))
            lean = np.max(np.abs(np.angle(trial.tangent(np.array([0.0, 1.0])) / directions)))
            if error <= tol and lean <= _END_LEAN:
                return replace(trial, error=error)
            best = min(best, error)
    raise ToleranceError(
        f"the best B-spline with up to {_POLE_BUDGET} poles is {best:.3g} mm from the curve, not the {tol:.3g} mm "
        "asked; ask for a larger tolerance, or cut the curve into shorter spans"
    )


def _least_squares(curve: Curve, warp: Callable[[Reals], Reals], degree: int, count: int) -> Spline:
    """The spline of `count` poles nearest the curve's points at equal parameters, ends kept exactly."""
    t0, t1 = curve.span
    inner = warp(_graded(warp, np.linspace(0, 1, count - degree + 1)))[1:-1]
    knots = np.concatenate((np.zeros(degree + 1), inner, np.ones(degree + 1)))
    shares = _graded(warp, np.linspace(0, 1, _FIT_PER_POLE * count))
    points = curve.point(t0 + (t1 - t0) * shares)
    matrix = BSpline.design_matrix(np.clip(warp(shares), 0.0, 1.0), knots, degree).toarray()
    ends = np.array([points[0], points[-1]])
    free = np.linalg.lstsq(matrix[:, 1:-1], points - matrix[:, [0, -1]] @ ends, rcond=None)[0]
    poles = np.concatenate((ends[:1], free, ends[1:]))
    return Spline(degree, tuple(knots.tolist()), tuple(poles.tolist()))


def _parameter(curve: Curve) -> Callable[[Reals], Reals]:
    """Map from the share of the span to the spline's parameter, both 0 to 1.

    The speed of a curve grows evenly away from a cusp, so the parameter is made to grow at that rate: the spline's own
    speed is then even. `lag` is the share of the span by which the cusp lies outside.
    """
    t0, t1 = curve.span
    at_end, inside = np.abs(curve.derivative(np.array([[t0, t1], [t0, t1]]) + (t1 - t0) * _BESIDE_ENDS))
    with np.errstate(divide="ignore", invalid="ignore"):
        lags = _ASIDE * at_end / np.maximum(inside - at_end, 0.0)
    rate = Polynomial([1.0])
    if lags[0] < _CUSP_REACH:
        rate *= Polynomial([lags[0], 1.0])
    if lags[1] < _CUSP_REACH:
        rate *= Polynomial([1 + lags[1], -1.0])
    grown = rate.integ()
    whole = grown(1.0)
    return lambda share: np.asarray(grown(share) / whole, dtype=float)


def _graded(warp: Callable[[Reals], Reals], even: Reals) -> Reals:
    """Evenly spread shares of the span drawn towards its cusps, where the curve is hardest to follow."""
    return (1 - _GRADING) * even + _GRADING * warp(even)
