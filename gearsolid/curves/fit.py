"""B-splines within a stated distance of a curve, with as few poles as that allows."""

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from scipy.interpolate import BSpline

from gearsolid.curves.curve import Curve, Points, Reals, Section
from gearsolid.curves.knots import Spacing, spacing
from gearsolid.curves.outline import smooth_spans
from gearsolid.errors import DesignError, ToleranceError

_DEGREES = (3, 5)
_POLE_BUDGET = 120
_FIT_PER_POLE = 20
_CHECK_PER_POLE = 40
# A peak of the error between two points of the check grid is higher than both by less than this share.
_GRID_MARGIN = 1.01
_FOOT_STEPS = 8
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
    spacings = {degree: spacing(curve, degree) for degree in _DEGREES}
    best, tried, count = np.inf, 1, 2
    while count <= _POLE_BUDGET:
        spline = _best(curve, spacings, count)
        if spline.error <= tol:
            skipped = (_best(curve, spacings, fewer) for fewer in range(tried + 1, count))
            return next((s for s in skipped if s.error <= tol), spline)
        best, tried, count = min(best, spline.error), count, count + max(1, count // 8)
    raise ToleranceError(
        f"the best B-spline with up to {_POLE_BUDGET} poles is {best:.3g} mm from the curve, not the {tol:.3g} mm "
        "asked; ask for a larger tolerance, or cut the curve into shorter spans"
    )


def _best(curve: Curve, spacings: dict[int, Spacing], count: int) -> Spline:
    """The better of the two degrees with `count` poles; its error is infinite when neither sets out along the curve."""
    t0, t1 = curve.span
    # At a corner the end itself belongs to both sides.
    directions = curve.tangent(np.array([t0, t1]) + 1e-9 * (t1 - t0) * np.array([1.0, -1.0]))
    trials = []
    for degree, places in spacings.items():
        trial = _least_squares(curve, places, min(degree, count - 1), count)
        lean = np.max(np.abs(np.angle(trial.tangent(np.array([0.0, 1.0])) / directions)))
        shares = places.spread(_CHECK_PER_POLE * count)
        gaps = distance(trial, curve.point(t0 + (t1 - t0) * shares), places.parameter(shares))
        trials.append(replace(trial, error=_GRID_MARGIN * float(np.max(gaps)) if lean <= _END_LEAN else np.inf))
    return min(trials, key=lambda s: s.error)


def _least_squares(curve: Curve, places: Spacing, degree: int, count: int) -> Spline:
    """The spline of `count` poles nearest the curve's points at equal parameters, ends kept exactly."""
    t0, t1 = curve.span
    knots = places.knots(degree, count - degree)
    shares = places.spread(_FIT_PER_POLE * count)
    matrix = BSpline.design_matrix(places.parameter(shares), knots, degree).toarray()
    ends = np.array([curve.start, curve.end])
    rest = curve.point(t0 + (t1 - t0) * shares) - matrix[:, [0, -1]] @ ends
    free = np.linalg.lstsq(matrix[:, 1:-1], np.stack((rest.real, rest.imag), axis=-1), rcond=None)[0]
    poles = np.concatenate((ends[:1], free @ (1, 1j), ends[1:]))
    return Spline(degree, tuple(knots.tolist()), tuple(poles.tolist()))
