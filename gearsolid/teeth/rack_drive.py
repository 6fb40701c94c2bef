"""A pinion that drives a straight rack of its own basic profile."""

from dataclasses import dataclass

import numpy as np

from gearsolid.errors import DesignError
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.involute_relations import reach


@dataclass(frozen=True)
class RackDrive:
    """Pinion and rack without play.

    Args:
        pinion: the gear.
        rack_height: from the rack's base to its datum line [mm].

    Raises:
        DesignError: the rack has no height.
    """

    pinion: InvoluteGear
    rack_height: float

    def __post_init__(self) -> None:
        if not self.rack_height > 0:
            raise DesignError(f"the rack's datum line is {self.rack_height:g} mm above its base; it must be above 0 mm")

    @property
    def axis_height(self) -> float:
        """From the rack's base to the pinion's axis [mm]."""
        return self.rack_height + self.pinion.reference_radius + self.pinion.profile_shift * self.pinion.module

    @property
    def rack_addendum(self) -> float:
        """Height of the rack's teeth above the datum line [mm]."""
        return self.pinion.rack.addendum * self.pinion.module

    @property
    def travel_per_turn(self) -> float:
        """Way of the rack for one turn of the pinion [mm]."""
        return self.pinion.teeth * self.pinion.pitch

    @property
    def contact_ratio(self) -> float:
        """Transverse contact ratio [-] if both flanks are used up to their tips. ISO 21771."""
        gear, sine = self.pinion, float(np.sin(self.pinion.transverse_angle))
        beyond = reach(gear.tip_radius, gear.base_radius) - gear.reference_radius * sine
        before = (self.rack_addendum - gear.profile_shift * gear.module) / sine
        return (beyond + before) / gear.base_pitch
