"""Internal involute gears (ring gears, the annulus of an epicyclic): envelopes of the pinion-shaped cutter."""

from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

import numpy as np

from gearsolid.curves.curve import Curve
from gearsolid.errors import DesignError
from gearsolid.teeth.involute_member import InvoluteMember
from gearsolid.teeth.involute_numbers import NO_LAND
from gearsolid.teeth.pinion_cutter import Generation, PinionCutter, largest_cutter
from gearsolid.teeth.ring_margins import RingMargins


@dataclass(frozen=True)
class InternalGear(InvoluteMember):
    """Internal involute gear with the fillet its pinion-shaped cutter leaves.

    `profile_shift` has the sign of ISO 21771: positive moves the profile towards the axis and makes the ring's tooth
    thicker. (Where a ring's shift is counted positive away from the axis, enter the negative of that number.)
    Without a `cutter` the root lies where `rack.dedendum` puts it; a named cutter cuts as deep as it reaches.
    `rack.root_radius` plays no part: the fillet comes from the rounding of the cutter's tip.

    Args:
        cutter: pinion-shaped cutter; None takes the largest that forms the whole flank, fed radially if possible.

    Raises:
        DesignError: the ring's tip lies inside its base circle, or the cutter cannot form the ring.
    """

    cutter: PinionCutter | None = None

    hand: ClassVar[int] = -1

    def __post_init__(self) -> None:
        super().__post_init__()
        self._check_tooth()
        self._generation.check()
        self._check_tip_form()

    def _check_tooth(self) -> None:
        if self.tip_radius < self.base_radius:
            need = self.reference_radius - self.base_radius
            have = self.reference_radius - self.tip_radius
            least = int(np.ceil(2 * have / (self.module * self._stretch * (1 - np.cos(self.transverse_angle)))))
            raise DesignError(
                f"the tip of a ring with {self.teeth} teeth stands {have:.4g} mm inside its reference circle; the base "
                f"circle allows {need:.4g} mm: shorten the tip by {have - need:.4g} mm, lower the profile shift or "
                f"take {least} teeth"
            )
        if not 0 < self.thickness < self.pitch:
            raise DesignError(
                f"tooth thickness at the reference circle is {self.thickness:.4g} mm; it must lie between 0 and the "
                f"pitch, {self.pitch:.4g} mm: change profile shift or thinning"
            )
        if self.tip_land <= NO_LAND * self.module:
            raise DesignError(
                f"tip land of the ring is {self.tip_land:.4g} mm; it must be above 0: shorten the tip, raise the "
                "profile shift or thin the tooth less"
            )

    @cached_property
    def tool(self) -> PinionCutter:
        """The cutter used: the one given, or the one chosen for this ring."""
        return self.cutter or largest_cutter(self)

    @cached_property
    def _generation(self) -> Generation:
        return Generation(self, self.tool)

    @property
    def margins(self) -> RingMargins:
        """Margins of the cutter in this ring; a negative trimming margin asks for another way of cutting."""
        return self._generation.margins

    @property
    def root_radius(self) -> float:
        """[mm], where the cutter's tip reaches."""
        return self._generation.distance + self._generation.pinion.tip_radius

    @property
    def form_radius(self) -> float:
        """Radius up to which the flank is an involute [mm] (half the root form diameter)."""
        return float(np.hypot(self._generation.form_reach, self.base_radius))

    @property
    def _fillet(self) -> Curve:
        return self._generation.fillet

    @property
    def _flank(self) -> Curve:
        return self._generation.flank

    @property
    def _half_root_land(self) -> float:
        return self._generation.half_land
