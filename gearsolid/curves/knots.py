"""Where a B-spline wants its knots: a parameter that tames cusps, and knots crowded where a curve is hard to follow."""

from dataclasses import dataclass

import numpy as np
from numpy.polynomial import Polynomial
from scipy.interpolate import make_lsq_spline

from gearsolid.curves.curve import Curve, Reals

# A curve that would stand still less than this share of its span beyond an end is written by a new parameter there.
_CUSP_REACH = 0.03
_ASIDE = 1e-3
_BESIDE_ENDS = np.array([[0.0, 0.0], [_ASIDE, -_ASIDE]])
# Share of the knots that go where the derivatives are large; the others are spread evenly, in case these mislead.
_CROWDED = 0.9
_INTERVALS = 48
_POINTS_PER_INTERVAL = 20
_ROUNDS = 3


@dataclass(frozen=True)
class Spacing:
    """Places for knots and samples of splines of one degree along one smooth curve.

    Args:
        growth: share of the curve's span -> parameter of the spline, both 0 to 1.
        counts: share of the knots met up to each of `places`, 0 to 1, shape (n,).
        places: shares of the span, 0 to 1, shape (n,).
    """

    growth: Polynomial
    counts: Reals
    places: Reals

    def spread(self, count: int) -> Reals:
        """`count` shares of the span, ends included, as dense as the knots should be."""
        return np.interp(np.linspace(0.0, 1.0, count), self.counts, self.places)

    def parameter(self, share: Reals) -> Reals:
        """Parameters of the spline [-] at shares of the span [-], any shape."""
        return np.clip(self.growth(share), 0.0, 1.0)

    def knots(self, degree: int, intervals: int) -> Reals:
        """Full clamped knot vector with `intervals` intervals, shape (intervals + 2 degree + 1,)."""
        inner = self.parameter(self.spread(intervals + 1)[1:-1])
        return np.concatenate((np.zeros(degree + 1), inner, np.ones(degree + 1)))


def spacing(curve: Curve, degree: int) -> Spacing:
    """The spacing for splines of a degree along a smooth curve.

    The error of a spline grows with the derivative one above its degree and with that power of the knot distance, so
    knots are spread like that root of the derivative. It is read off a trial spline with many knots (the idea of knot
    choice in de Boor, A Practical Guide to Splines, 1978, chapter XII; from memory).
    """
    t0, t1 = curve.span
    even = np.linspace(0.0, 1.0, _INTERVALS + 1)
    result = Spacing(growth(curve), even, even)
    for _ in range(_ROUNDS):
        shares = result.spread(_POINTS_PER_INTERVAL * _INTERVALS)
        points = curve.point(t0 + (t1 - t0) * shares)
        parts = np.stack((points.real, points.imag), axis=-1)
        trial = make_lsq_spline(result.parameter(shares), parts, result.knots(degree, _INTERVALS), degree)
        edges = result.parameter(result.spread(_INTERVALS + 1))
        middles = (edges[:-1] + edges[1:]) / 2
        highest = trial(middles, nu=degree)
        jumps = np.linalg.norm(np.diff(highest, axis=0), axis=-1) / np.diff(middles)
        roots = np.pad(jumps ** (1 / (degree + 1)), 1, mode="edge")
        crowd = np.diff(edges) * (roots[:-1] + roots[1:]) / 2
        places = result.spread(_INTERVALS + 1)
        wanted = np.diff(places)
        if np.sum(crowd) > 0:
            wanted = _CROWDED * crowd / np.sum(crowd) + (1 - _CROWDED) * wanted
        result = Spacing(result.growth, np.append(0.0, np.cumsum(wanted) / np.sum(wanted)), places)
    return result


def growth(curve: Curve) -> Polynomial:
    """Map from the share of a curve's span to the parameter of its spline, both 0 to 1.

    It is the curve's own parameter, except towards a cusp: the speed of a curve grows evenly away from it, so the
    parameter is made to grow at that rate, and the speed of the spline is even. `lag` is the share of the span by which
    the cusp lies outside.
    """
    t0, t1 = curve.span
    at_end, inside = np.abs(curve.derivative(np.array([t0, t1]) + (t1 - t0) * _BESIDE_ENDS))
    with np.errstate(divide="ignore", invalid="ignore"):
        lags = _ASIDE * at_end / np.maximum(inside - at_end, 0.0)
    rate = Polynomial([1.0])
    if lags[0] < _CUSP_REACH:
        rate *= Polynomial([lags[0], 1.0])
    if lags[1] < _CUSP_REACH:
        rate *= Polynomial([1 + lags[1], -1.0])
    grown = rate.integ()
    return grown / float(grown(1.0))
