"""Parallel curves, with the places where they turn back on themselves."""

from dataclasses import dataclass

import numpy as np
from scipy.optimize import brentq

from gearsolid.curves.curve import Curve, Points, Reals


@dataclass(frozen=True)
class Parallel(Curve):
    """The curve at a fixed distance to the left of `base`, with the same parameter.

    Args:
        base: curve with a second derivative; cusps only at the ends of its span, since a parallel curve leaps there.
        distance: [mm]; negative lies to the right.
    """

    base: Curve
    distance: float

    @property
    def span(self) -> tuple[float, float]:
        return self.base.span

    def pace(self, t: Reals) -> Reals:
        """Signed speed along the base's direction; negative where the curve runs backwards."""
        return np.abs(self.base.derivative(t)) - self.distance * self.base.turning(t)

    def point(self, t: Reals) -> Points:
        return self.base.point(t) + 1j * self.distance * self.base.tangent(t)

    def derivative(self, t: Reals) -> Points:
        return self.base.tangent(t) * self.pace(t)

    def regressions(self, samples: int = 513) -> tuple[float, ...]:
        """Parameters where the parallel has a cusp: 1 - curvature x distance changes sign there."""
        t = self.sample(samples)
        sign = np.sign(self.pace(t))
        found = np.flatnonzero(sign[:-1] * sign[1:] < 0)
        return tuple(float(brentq(lambda u: float(self.pace(np.asarray(u))), t[k], t[k + 1])) for k in found)

    def breaks(self) -> tuple[float, ...]:
        return tuple(sorted({*self.base.breaks(), *self.regressions()}))
