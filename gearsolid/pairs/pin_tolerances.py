"""What small errors of a pin-wheel reducer do to the gap at a pin, to first order."""

from dataclasses import dataclass

import numpy as np

from gearsolid.curves.curve import Reals
from gearsolid.teeth.pinwheel import CycloidDisc


@dataclass(frozen=True)
class PinErrors:
    """Errors of ring, pin, crank and disc position; all zero where nothing is said.

    Args:
        ring_radius: pin further out from the ring axis [mm].
        pin_radius: pin larger [mm].
        tangential: pin further round the ring axis, counter-clockwise [mm].
        eccentricity: disc axis further out along the crank [mm].
        turn_deg: disc turned counter-clockwise, towards the pins ahead of the crank [deg].
    """

    ring_radius: float = 0.0
    pin_radius: float = 0.0
    tangential: float = 0.0
    eccentricity: float = 0.0
    turn_deg: float = 0.0

    def gap(self, disc: CycloidDisc, phase_deg: Reals) -> Reals:
        """Normal gap added at pins of an unmodified disc [mm].

        Args:
            disc: the disc.
            phase_deg: polar angles of the pins from the crank [deg], any shape.
        """
        path, phase = disc.exact_path, np.radians(phase_deg)
        k, cosine, sine = path.shortening, np.cos(phase), np.sin(phase)
        along = self.ring_radius * (1 - k * cosine) + self.tangential * k * sine + self.eccentricity * (k - cosine)
        turned = np.radians(self.turn_deg) * disc.disc_pitch_radius * sine
        gap: Reals = (along - turned) / path.stretch(phase) - self.pin_radius
        return gap

    def play_deg(self, disc: CycloidDisc) -> float:
        """Play that errors of one pin add where its pressure angle is zero [deg]; twice that where all pins share them.

        Args:
            disc: the disc.
        """
        quiet = np.degrees(np.arccos(disc.exact_path.shortening))
        return float(np.degrees(self.gap(disc, quiet) / disc.disc_pitch_radius))
