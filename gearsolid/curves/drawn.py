"""A curve drawn a rounding error longer or shorter, so that its end meets its neighbour."""

from dataclasses import dataclass

import numpy as np

from gearsolid.curves.curve import Curve, Points, Reals


@dataclass(frozen=True)
class Drawn(Curve):
    """A curve whose points move by a growing share of `shift`: nothing at the start, all of it at the end.

    Args:
        base: the curve.
        shift: displacement of its end [mm], tiny beside its length.
    """

    base: Curve
    shift: complex

    @property
    def span(self) -> tuple[float, float]:
        return self.base.span

    @property
    def _rate(self) -> complex:
        first, last = self.span
        return self.shift / (last - first)

    def point(self, t: Reals) -> Points:
        return self.base.point(t) + self._rate * (np.asarray(t, dtype=float) - self.span[0])

    def derivative(self, t: Reals) -> Points:
        return self.base.derivative(t) + self._rate

    def second(self, t: Reals) -> Points:
        return self.base.second(t)

    def breaks(self) -> tuple[float, ...]:
        return self.base.breaks()
