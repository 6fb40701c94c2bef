"""Parallel curves, with the places where they turn back on themselves."""

from dataclasses import dataclass

import numpy as np
from scipy.optimize import brentq

from gearsolid.curves.curve import Curve, Points, Reals


@dataclass(frozen=True)
class Parallel(Curve):
    """The curve at a fixed distance to the left of `base`, with the same parameter.

    Args:
        base: curve with a second derivative.
        distance: [mm]; negative lies to the right.
    """

    base: Curve
    distance: float

    @property
    def span(self) -> tuple[float, float]:
        return self.base.span

    def stretch(self, t: Reals) -> Reals:
        """1 - curvature x distance [-]: the speed ratio to the base; negative where the curve runs backwards."""
        return 1 - self.base.curvature(t) * self.distance

    def point(self, t: Reals) -> Points:
        return self.base.point(t) + 1j * self.distance * self.base.tangent(t)

    def derivative(self, t: Reals) -> Points:
        return self.base.derivative(t) * self.stretch(t)

    def tangent(self, t: Reals) -> Points:
        return self.base.tangent(t) * np.where(self.stretch(t) < 0, -1.0, 1.0)

    def regressions(self, samples: int = 513) -> tuple[float, ...]:
        """Parameters where the parallel has a cusp: 1 - curvature x distance changes sign there."""
        t = self.sample(samples)
        sign = np.sign(self.stretch(t))
        found = np.flatnonzero(sign[:-1] * sign[1:] < 0)
        return tuple(float(brentq(lambda u: float(self.stretch(np.asarray(u))), t[k], t[k + 1])) for k in found)

    def breaks(self) -> tuple[float, ...]:
        return tuple(sorted({*self.base.breaks(), *self.regressions()}))
