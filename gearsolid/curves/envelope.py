"""The envelope a carried curve leaves on the fixed body: the mate of a flank, by the law of gearing."""

from dataclasses import dataclass

import numpy as np

from gearsolid.curves.curve import Curve, Points, Reals
from gearsolid.curves.rolling import Rolling

# Nearer to the pitch point than this share of the distance from the carried centre, a contact is at the pitch point.
_AT_PITCH = 1e-6
# Slower than this share of the usual speed the way to go is read beside, this share of the span away.
_SLOW = 1e-6
_ASIDE = 1e-3


@dataclass(frozen=True)
class Envelope(Curve):
    """Envelope of `carried` under `motion`; its parameter is that of the carried curve.

    Points where the carried curve never touches its envelope are nan; `touches` tells which.

    Args:
        carried: curve in the carried frame.
        motion: the rolling that carries it.
        branch: +1 or -1, the solution of the law of gearing for a circular carried pitch curve.
    """

    carried: Curve
    motion: Rolling
    branch: int = 1

    @property
    def span(self) -> tuple[float, float]:
        return self.carried.span

    def breaks(self) -> tuple[float, ...]:
        return self.carried.breaks()

    def roll(self, t: Reals) -> Reals:
        """Roll at which the carried point t is in contact ([rad] for circles, [mm] for lines)."""
        return self.motion.meet(self.carried.point(t), self.carried.tangent(t), self.branch)

    def touches(self, t: Reals) -> np.ndarray:
        """Whether the carried point t ever touches the envelope."""
        return np.isfinite(self.roll(t))

    def point(self, t: Reals) -> Points:
        return self.motion.place(self.carried.point(t), self.roll(t))

    def derivative(self, t: Reals) -> Points:
        p, tangent, velocity = self.carried.point(t), self.carried.tangent(t), self.carried.derivative(t)
        roll = self.motion.meet(p, tangent, self.branch)
        rate = self.motion.meet_rate(p, tangent, np.abs(velocity), self.carried.turning(t), self.branch)
        drift = self.motion.velocity(p, roll)
        with np.errstate(invalid="ignore"):
            # In contact at the pitch point itself nothing slides, however fast the contact moves on.
            slide = np.where(np.abs(drift) <= _AT_PITCH * np.abs(p) * ~np.isfinite(rate), 0.0, drift * rate)
        return self.motion.turn(roll) * velocity + slide

    def tangent(self, t: Reals) -> Points:
        """Unit direction of travel: that of the carried curve at contact, or its reverse."""
        t = np.asarray(t, dtype=float)
        side = self.side(t)
        velocity, beside = self.derivative(t), side
        slow = np.abs(velocity) <= _SLOW * self._usual_speed
        if np.any(slow):
            t = np.where(slow, t + _ASIDE * (self.span[1] - self.span[0]) * self._inward(t), t)
            velocity, beside = self.derivative(t), self.side(t)
        return side * np.where(np.real(velocity * np.conj(beside)) < 0, -1.0, 1.0)

    def side(self, t: Reals) -> Points:
        """Unit tangent of the carried curve at contact, turned into the fixed frame: it never flips at a cusp."""
        return self.motion.turn(self.roll(t)) * self.carried.tangent(t)
