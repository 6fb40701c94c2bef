"""Round pins half-buried in the edge of a body: the hole of a housing, or the rim of a disc."""

from dataclasses import dataclass
from math import acos, pi, sin

import numpy as np

from gearsolid.curves.primitives import Arc
from gearsolid.errors import DesignError


@dataclass(frozen=True)
class PinSeat:
    """Where pins leave the edge that holds them. `hand` is +1 for a rim around material, -1 for a hole in it.

    Args:
        pins: number of pins [-].
        circle_radius: of the pin centres [mm].
        pin_radius: [mm].
        edge_radius: of the edge between the pins [mm].
    """

    pins: int
    circle_radius: float
    pin_radius: float
    edge_radius: float

    def check(self, holder: str) -> None:
        """Refuse pins that overlap or that the edge does not hold.

        Args:
            holder: what holds the pins, for the message.

        Raises:
            DesignError: with the limits.
        """
        if self.pins != int(self.pins) or self.pins < 2:
            raise DesignError(f"the {holder} holds {self.pins:g} pins; it must be a whole number, 2 or more")
        if not 0 < self.circle_radius < np.inf:
            raise DesignError(f"the pin circle radius is {self.circle_radius:g} mm; it must be above 0")
        room = self.circle_radius * sin(pi / self.pins)
        if not 0 < self.pin_radius < room:
            raise DesignError(
                f"{self.pins} pins of {self.pin_radius:g} mm radius do not fit on a circle of {self.circle_radius:g} "
                f"mm; the radius must be above 0 and below {room:.4g} mm"
            )
        low, high = abs(self.circle_radius - self.pin_radius), self.circle_radius + self.pin_radius
        if not low < self.edge_radius < high:
            raise DesignError(
                f"the {holder} has a radius of {self.edge_radius:g} mm between the pins; to hold them it must lie "
                f"between {low:g} and {high:g} mm"
            )

    @property
    def bury_angle(self) -> float:
        """Angle at the axis between a pin's centre and where it leaves the edge [rad]."""
        c, h, r = self.circle_radius, self.edge_radius, self.pin_radius
        return acos((c**2 + h**2 - r**2) / (2 * c * h))

    @property
    def _exit_angle(self) -> float:
        """Angle at the pin's centre from the outward direction to where it leaves the edge [rad]."""
        corner = self.edge_radius * np.exp(1j * self.bury_angle) - self.circle_radius
        return float(np.angle(corner))

    def outer(self, hand: int) -> Arc:
        """The part of the first pin outside the edge, in travel order."""
        return Arc(self.circle_radius, self.pin_radius, -hand * self._exit_angle, hand * self._exit_angle)

    def inner(self, hand: int) -> Arc:
        """The part of the first pin inside the edge, in travel order."""
        half = hand * (pi - self._exit_angle)
        return Arc(self.circle_radius, self.pin_radius, pi + half, pi - half)

    def land(self, hand: int) -> Arc:
        """The edge from the first pin to the next, in travel order."""
        return Arc(0, self.edge_radius, hand * self.bury_angle, hand * (2 * pi / self.pins - self.bury_angle))
