"""Where an envelope sets out: the carried normal only just reaches the pitch circle there."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.polynomial import Polynomial

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
    def _continued(self) -> tuple[Polynomial, Polynomial]:
        """Coordinates as polynomials of u / near, through the points at the nodes."""
        z = self._plain.point(self.parameter(_NODES * self._near))
        degree = _NODES.size - 1
        return Polynomial.fit(_NODES, z.real, degree), Polynomial.fit(_NODES, z.imag, degree)

    def _close(self, t: Reals, order: int) -> Points:
        x, y = self._continued
        s = t / self._near
        along: Reals = x.deriv(order)(s)
        across: Reals = y.deriv(order)(s)
        return np.asarray((along + 1j * across) / self._near**order, dtype=complex)

    def point(self, t: Reals) -> Points:
        t = np.asarray(t, dtype=float)
        far = self._plain.point(self.parameter(np.maximum(t, self._near)))
        return np.where(t < self._near, self._close(t, 0), far)

    def derivative(self, t: Reals) -> Points:
        t = np.asarray(t, dtype=float)
        u = np.maximum(t, self._near)
        far = self._plain.derivative(self.parameter(u)) * self.side * self.power * u ** (self.power - 1)
        return np.where(t < self._near, self._close(t, 1), far)

    def second(self, t: Reals) -> Points:
        t = np.asarray(t, dtype=float)
        return np.where(t < self._near, self._close(t, 2), super().second(np.maximum(t, self._near)))
