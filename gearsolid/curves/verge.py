"""Where an envelope sets out: the carried normal only just reaches the pitch circle there."""

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from gearsolid.curves.curve import Curve, Points, Reals
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.rolling import Rolling

# Nearer than this share of its length the curve is continued, from nodes given as multiples of that.
_NEAR = 0.02
_NODES = 0.7 - 0.5 * np.cos(np.pi * (np.arange(7) + 0.5) / 7)


@dataclass(frozen=True)
class Verge(Curve):
    """An envelope up to where the carried normal only just reaches the pitch circle.

    The parameter u counts from there. Close to it the roll is known to half the digits only, so the curve is continued
    by a polynomial from a little further away.

    Args:
        carried: curve in the carried frame.
        motion: the rolling that carries it.
        branch: +1 or -1, the solution of the law of gearing.
        limit: carried parameter where the normal just reaches the pitch circle.
        side: +1 where the carried curve goes on from there with growing parameter, -1 with falling.
        power: carried parameter from the limit is u to this power: 2 where the normal misses the circle beyond, so that
            the roll sets out like a square root; 1 where it only grazes it.
        last: last u.
    """

    carried: Curve
    motion: Rolling
    branch: int
    limit: float
    side: int
    power: int
    last: float

    @property
    def span(self) -> tuple[float, float]:
        return 0.0, self.last

    def parameter(self, t: Reals) -> Reals:
        """Parameter of the carried curve."""
        return self.limit + self.side * np.power(t, self.power)

    @property
    def _plain(self) -> Envelope:
        return Envelope(self.carried, self.motion, self.branch)

    @property
    def _near(self) -> float:
        return _NEAR * self.last

    @cached_property
    def _continued(self) -> list[Points]:
        """Coefficients of the polynomial of u / near through the nodes' points, and of its two derivatives by u."""
        z = self._plain.point(self.parameter(_NODES * self._near))
        powers = [np.polyfit(_NODES, z, _NODES.size - 1)]
        for _ in range(2):
            powers.append(np.asarray(np.polyder(powers[-1]) / self._near, dtype=complex))
        return powers

    def _joined(self, t: Reals, order: int, far: Callable[[Reals], Points]) -> Points:
        """The polynomial's derivative of an order close to the verge, `far` elsewhere."""
        t = np.asarray(t, dtype=float)
        close = t < self._near
        value = far(np.maximum(t, self._near))
        if not np.any(close):
            return value
        return np.where(close, np.polyval(self._continued[order], t / self._near), value)

    def point(self, t: Reals) -> Points:
        return self._joined(t, 0, lambda u: self._plain.point(self.parameter(u)))

    def derivative(self, t: Reals) -> Points:
        def far(u: Reals) -> Points:
            return self._plain.derivative(self.parameter(u)) * self.side * self.power * u ** (self.power - 1)

        return self._joined(t, 1, far)

    def second(self, t: Reals) -> Points:
        return self._joined(t, 2, super().second)
