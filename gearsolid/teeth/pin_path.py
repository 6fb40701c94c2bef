"""The path of a ring pin's centre seen from the toothed body: a curtate epi- or hypotrochoid, and its curvature."""

from dataclasses import dataclass

import numpy as np

from gearsolid.curves.curve import Curve, Reals, Reversed
from gearsolid.curves.rolling import CircleOnCircle
from gearsolid.curves.roulette import Trace


@dataclass(frozen=True)
class PinPath:
    """The trochoid c(t) = R exp(it) - e exp(iZt), told by the phase phi = (Z - 1) t; phi = 0 is the bottom of a valley.

    Pins outside a disc trace an epitrochoid with Z = pins / tooth difference. Pins inside a ring trace a hypotrochoid:
    there e and Z are entered negative, Z = -pins, and phi runs against t.

    Args:
        pin_circle_radius: R [mm].
        eccentricity: e [mm]; negative for a hypotrochoid.
        winding: Z [-]; negative for a hypotrochoid.

    Source: curvature of the curtate epitrochoid, e.g. Chen, Fang, Li, Wang, Sci. China Ser. E 51(5), 2008, 598-610.
    """

    pin_circle_radius: float
    eccentricity: float
    winding: float

    @property
    def shortening(self) -> float:
        """Shortening factor k = e Z / R [-]: below 1 the path has no cusp and no loop."""
        return self.eccentricity * self.winding / self.pin_circle_radius

    @property
    def quietest(self) -> float:
        """sqrt(1 - k^2) [-]: the least of (1 - k cos phi) / S, where the pressure angle is zero (cos phi = k)."""
        return float(np.sqrt(1 - self.shortening**2))

    def curve(self, first: float, last: float) -> Curve:
        """The path between two phases [rad], its parameter the phase; the body is on its left.

        It is the roulette of the pin's centre when the pitch circle e Z of the pins rolls with that of the body,
        e (Z - 1).
        """
        rolling = CircleOnCircle(self.eccentricity * (self.winding - 1), -self.eccentricity * self.winding)
        return Reversed(Trace(rolling, self.pin_circle_radius, -last, -first))

    def stretch(self, phi: Reals) -> Reals:
        """S = sqrt(1 + k^2 - 2 k cos phi) [-]: distance from pin centre to pitch point, in pin circle radii."""
        k = self.shortening
        stretch: Reals = np.sqrt(1 + k**2 - 2 * k * np.cos(phi))
        return stretch

    def curvature_radius(self, phi: Reals) -> Reals:
        """Signed curvature radius of the path [mm], positive where its hollow side faces the axis; inf where straight.

        A disc is convex where it is positive, a ring where it is negative.
        """
        with np.errstate(divide="ignore"):
            return self.pin_circle_radius * self.stretch(phi) ** 3 / self._bend(np.cos(phi))

    def _bend(self, cosine: Reals) -> Reals:
        k, z = self.shortening, self.winding
        return 1 + z * k**2 - (z + 1) * k * cosine

    @property
    def least_convex_radius(self) -> float:
        """Smallest curvature radius of the path where the body is convex [mm]; larger pins undercut. inf for none.

        Source: two branches, at the crest for a small shortening factor, else on the flank (Rao, planetary transmission
        handbook, cycloid chapter; from memory, confirmed by scanning the curvature).
        """
        k, z = self.shortening, self.winding
        if k <= (z - 2) / (2 * z - 1):
            radius = self.pin_circle_radius * (1 + k) ** 2 / (1 + z * k) if z * k != -1 else np.inf
            return abs(radius) if radius * z > 0 else np.inf
        return self.pin_circle_radius * float(np.sqrt(27 * (1 - k**2) * (z - 1) / (z + 1) ** 3))
