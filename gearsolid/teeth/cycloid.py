"""The cycloid a describing circle draws on a pitch circle or pitch line, in closed form."""

from dataclasses import dataclass
from math import asin, atan2, cos, inf, isinf, pi, sin, sqrt

from scipy.optimize import brentq

from gearsolid.curves.rolling import CircleOnCircle, CircleOnLine
from gearsolid.curves.roulette import Trace
from gearsolid.errors import DesignError


@dataclass(frozen=True)
class Cycloid:
    """A cycloid that leaves its pitch circle at the point on the +x axis.

    Its parameter is the roll: the turn of the describing circle about its own centre against the line of centres, 0 at
    the pitch circle, pi at the far end of the arch [rad]. The pressure angle of a contact is half the roll.

    Args:
        pitch_radius: radius of the pitch circle [mm]; infinite for a pitch line.
        describing: radius of the describing circle [mm], positive rolled outside (epicycloid), negative inside
            (hypocycloid; half the pitch radius makes it a radial line).

    Raises:
        DesignError: a radius is not above 0, or the describing circle does not fit inside.

    Source: Encyclopaedia Britannica, 11th ed. (1911), "Mechanics", applied part, articles 49-50.
    """

    pitch_radius: float
    describing: float

    def __post_init__(self) -> None:
        if not self.pitch_radius > 0:
            raise DesignError(f"the pitch radius of a cycloid is {self.pitch_radius:g} mm; it must be above 0")
        if not abs(self.describing) > 0 or isinf(self.describing):
            raise DesignError(f"the describing circle's radius is {abs(self.describing):g} mm; it must be above 0")
        if not self.pitch_radius + self.describing > 0:
            raise DesignError(
                f"the describing circle of {-self.describing:g} mm radius does not fit inside the pitch circle of "
                f"{self.pitch_radius:g} mm; it must be smaller, and half of it makes the flank radial"
            )

    def trace(self, roll: float) -> Trace:
        """The curve from the pitch circle to a roll [rad]."""
        c = self.describing
        motion = CircleOnLine(c) if isinf(self.pitch_radius) else CircleOnCircle(self.pitch_radius, c)
        return Trace(motion, -c, 0.0, roll)

    @property
    def _fullness(self) -> float:
        """Quarter of the rise in squared radius over the arch, by the pitch radius [mm]."""
        return self.describing * (1 + self.describing / self.pitch_radius)

    @property
    def reach(self) -> float:
        """Greatest distance from the pitch circle [mm]."""
        return abs(self.height(pi))

    def height(self, roll: float) -> float:
        """Distance from the pitch circle at a roll [rad], in [mm]; negative inside."""
        rise = 4 * self._fullness * sin(roll / 2) ** 2
        return rise / (1 + sqrt(1 + rise / self.pitch_radius))

    def roll(self, height: float) -> float:
        """Roll [rad] at a signed distance from the pitch circle [mm].

        Raises:
            DesignError: the cycloid does not reach so far.
        """
        share = height * (2 + height / self.pitch_radius) / (4 * self._fullness)
        if not 0 <= share <= 1 + 1e-12:
            raise DesignError(
                f"a cycloid by a circle of {abs(self.describing):g} mm radius goes {self.reach:.6g} mm from its pitch "
                f"circle; {abs(height):.6g} mm was asked for: take a larger describing circle or less height"
            )
        return 2 * asin(sqrt(min(share, 1.0)))

    def lean(self, roll: float) -> float:
        """How far the cycloid has moved sideways, as an arc of the pitch circle [mm], at a roll [rad].

        Positive for an epicycloid and for a hypocycloid by a circle of more than half the pitch radius.
        """
        c, radius = self.describing, self.pitch_radius
        if isinf(radius):
            return c * (roll - sin(roll))
        return c * roll - radius * atan2(c * sin(roll), radius + c * (1 - cos(roll)))

    def roll_at_lean(self, lean: float) -> float:
        """Roll [rad] at which the cycloid has moved sideways by `lean` [mm]; pi where it never does."""
        if abs(self.lean(pi)) <= abs(lean) or self.lean(pi) * lean < 0:
            return pi
        return float(brentq(lambda roll: self.lean(roll) - lean, 0.0, pi, xtol=1e-15))

    def share(self, height: float, pitch: float) -> float:
        """Part of the contact ratio that this curve contributes up to a height [mm], for a pitch [mm]; [-]."""
        return abs(self.describing) * self.roll(height) / pitch

    def takeover(self, pitch: float) -> float:
        """Height [mm] at which a tooth whose contact began at the pitch point has moved on by one pitch [mm].

        The next tooth then stands at the pitch point; infinite when the whole arch is shorter than the pitch.
        """
        roll = pitch / abs(self.describing)
        return self.height(roll) if roll <= pi else inf
