"""The envelope a carried curve leaves on the fixed body: the mate of a flank, by the law of gearing."""

from dataclasses import dataclass

import numpy as np

from gearsolid.curves.curve import Curve, Points, Reals
from gearsolid.curves.rolling import Rolling


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
        return self.motion.turn(roll) * velocity + self.motion.velocity(p, roll) * rate

    def side(self, t: Reals) -> Points:
        """Unit tangent of the carried curve at contact, turned into the fixed frame: it never flips at a cusp."""
        return self.motion.turn(self.roll(t)) * self.carried.tangent(t)
