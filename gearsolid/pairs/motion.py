"""How a part of a machine moves: it turns about its own axis, and that axis may circle the machine's centre."""

from dataclasses import dataclass, replace

import numpy as np


@dataclass(frozen=True)
class Motion:
    """Pose of a part as a function of the machine's input angle psi [rad].

    Args:
        centre_radius: distance of the part's axis from the machine's origin [mm].
        centre_angle: polar angle of the axis at psi = 0 [rad].
        centre_rate: turns of the axis about the origin per input turn [-].
        angle: turn of the part at psi = 0 [rad].
        rate: turns of the part per input turn [-], in the frame at rest.
    """

    centre_radius: float = 0.0
    centre_angle: float = 0.0
    centre_rate: float = 0.0
    angle: float = 0.0
    rate: float = 0.0

    def centre(self, psi: float) -> complex:
        """Place of the part's axis [mm]."""
        return self.centre_radius * complex(np.exp(1j * (self.centre_angle + self.centre_rate * psi)))

    def turn(self, psi: float) -> float:
        """Turn of the part [rad]."""
        return self.angle + self.rate * psi

    def turned(self, angle: float) -> "Motion":
        """The same motion with the part set `angle` [rad] further about its own axis."""
        return replace(self, angle=self.angle + angle)
