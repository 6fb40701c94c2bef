"""The two rotors of a lobe blower, kept in step by timing gears."""

from dataclasses import dataclass
from functools import cached_property
from math import pi

from gearsolid.pairs.blank import Blank, body_of
from gearsolid.pairs.colours import BRASS, STEEL
from gearsolid.pairs.engagement import Engagement, engage
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.part import Part
from gearsolid.pairs.phasing import mate_angle
from gearsolid.shop.bore import Bore
from gearsolid.teeth.lobes import LobeRotor


@dataclass(frozen=True)
class LobeRotors:
    """Two equal rotors that turn opposite ways at equal speed, a lobe of one in a space of the other.

    Args:
        rotor: both rotors; the running clearance is twice its inset.
        width: of the rotors [mm].
        bore: shaft hole of both.
    """

    rotor: LobeRotor
    width: float
    bore: Bore

    @property
    def title(self) -> str:
        return f"lobe rotors, {self.rotor.lobes} lobes each"

    @property
    def ratio(self) -> float:
        return -1.0

    @property
    def centre_distance(self) -> float:
        return 2 * self.rotor.pitch_radius

    @property
    def clearance(self) -> float:
        """Running clearance between the rotors [mm]."""
        return 2 * self.rotor.inset

    @property
    def displacement(self) -> float:
        """Volume both rotors move in one turn [mm3], the casing touching the tips."""
        return 2 * self.width * (pi * self.rotor.tip_radius**2 - self.rotor.outline.area)

    @property
    def _motions(self) -> tuple[Motion, Motion]:
        angle = mate_angle(self.rotor.lobes, pi, 0.0)
        return Motion(rate=1.0), Motion(centre_radius=self.centre_distance, angle=angle, rate=-1.0)

    @cached_property
    def parts(self) -> tuple[Part, ...]:
        body = body_of(self.rotor.outline, Blank(self.width, self.bore))
        first, second = self._motions
        return Part("rotor 1", body, first, BRASS), Part("rotor 2", body, second, STEEL)

    @cached_property
    def engagements(self) -> tuple[Engagement, ...]:
        outline = self.rotor.outline
        first, second = self._motions
        return (engage("rotor 1", outline, first, "rotor 2", outline, second),)
