"""External involute gears: flank and fillet are envelopes of the basic rack that rolls on the reference circle."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from scipy.optimize import brentq

from gearsolid.curves.curve import Reversed, Section
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.primitives import Ellipse, Segment
from gearsolid.curves.rolling import LineOnCircle
from gearsolid.errors import DesignError
from gearsolid.teeth.involute_member import InvoluteMember
from gearsolid.teeth.involute_numbers import NO_LAND
from gearsolid.teeth.involute_relations import inv, inverse_inv, reach


@dataclass(frozen=True)
class InvoluteGear(InvoluteMember):
    """External involute gear, spur or helical, as its generating rack leaves it.

    Fields as in `InvoluteMember`. Where the rack's straight flank reaches below the base tangent point the tooth is
    undercut: the fillet then crosses the involute above the base circle, and the outline takes the crossing.

    Raises:
        DesignError: the rack cannot exist, the tooth is pointed, or undercut leaves no usable flank.
    """

    def __post_init__(self) -> None:
        super().__post_init__()
        self.rack.check(self.pressure_angle_deg)
        self._check_root()
        self._check_tip()
        self._check_undercut()
        self._check_tip_form()

    def _check_root(self) -> None:
        if self.root_radius <= 0:
            raise DesignError(
                f"{self.teeth} teeth of module {self.module:g} mm with profile shift {self.profile_shift:g} have their "
                f"root at radius {self.root_radius:.4g} mm; it must be above 0: take more teeth or a larger shift"
            )
        if self._half_root_land < 0:
            raise DesignError(
                f"tooth thinning is {self.tooth_thinning:g} mm; the tool's tip has no flat left below "
                f"{self.tooth_thinning - 2 * self._half_root_land:.4g} mm: take more thinning or a smaller root radius"
            )
        if self.thickness <= 0 or self.thickness >= self.pitch:
            raise DesignError(
                f"tooth thickness at the reference circle is {self.thickness:.4g} mm; it must lie between 0 and the "
                f"pitch, {self.pitch:.4g} mm: change profile shift or thinning"
            )

    def _check_tip(self) -> None:
        if self.tip_radius <= max(self.base_radius, self.root_radius):
            raise DesignError(
                f"tip radius is {self.tip_radius:.5g} mm; it must lie beyond the base circle, {self.base_radius:.5g} "
                f"mm, and the root, {self.root_radius:.5g} mm: take a larger shift, more teeth or less tip shortening"
            )
        if self.tip_land <= NO_LAND * self.module:
            short = self.tip_radius - self.pointed_radius
            raise DesignError(
                f"tip land is {self.tip_land:.4g} mm at tip radius {self.tip_radius:.5g} mm; the flanks meet at radius "
                f"{self.pointed_radius:.5g} mm: shorten the tip by more than {short + self.tip_shortening:.4g} mm "
                "or take a smaller profile shift"
            )

    def _check_undercut(self) -> None:
        if self.form_radius >= self.tip_radius:
            raise DesignError(
                f"the involute would start at radius {self.form_radius:.5g} mm, beyond the tip at "
                f"{self.tip_radius:.5g} mm; raise the profile shift to {self.least_shift:.3f} or the tooth count"
            )
        waist = np.max(np.imag(self._fillet.point(self._fillet.sample(65))))
        if waist >= 0:
            raise DesignError(
                f"undercut cuts through the tooth: its halves overlap by {2 * waist:.4g} mm; raise the profile shift "
                f"from {self.profile_shift:g} towards {self.least_shift:.3f} or the tooth count"
            )

    @property
    def root_radius(self) -> float:
        """[mm]."""
        return self.reference_radius - self.module * (self.rack.dedendum - self.profile_shift)

    @property
    def pointed_radius(self) -> float:
        """Radius at which the two involutes of a tooth meet [mm]."""
        half = self.half_angle_at(self.base_radius)
        return self.base_radius / float(np.cos(inverse_inv(half)))

    @property
    def _flank_depth(self) -> float:
        """Depth of the end of the rack's straight flank below the pitch line [mm]."""
        return self.module * (self.rack.straight_dedendum(self.pressure_angle_deg) - self.profile_shift)

    @property
    def _depth_limit(self) -> float:
        """Depth of the base tangent point below the pitch line [mm]."""
        return self.reference_radius * float(np.sin(self.transverse_angle)) ** 2

    @property
    def undercut(self) -> float:
        """How far the rack's straight flank reaches below the base tangent point [mm]; 0 when nothing is undercut."""
        return max(0.0, self._flank_depth - self._depth_limit)

    @property
    def least_shift(self) -> float:
        """Profile shift [-] from which this rack leaves the tooth without undercut. ISO 21771."""
        return self.rack.straight_dedendum(self.pressure_angle_deg) - self._depth_limit / self.module

    @property
    def least_teeth(self) -> float:
        """Tooth count [-], not whole, from which this rack at this shift undercuts nothing. ISO 21771."""
        return self.teeth * self._flank_depth / self._depth_limit

    @property
    def _half_root_land(self) -> float:
        """Half the flat of the transverse rack's tool tip [mm]."""
        land = max(0.0, self.rack.half_tip_land(self.pressure_angle_deg))
        return self.module * self._stretch * land + self.tooth_thinning / 2

    @property
    def _motion(self) -> LineOnCircle:
        return LineOnCircle(self.reference_radius)

    def _rack_height(self, radius: float) -> float:
        """Height above the pitch line [mm] of the rack's point that forms the involute at `radius` [mm]."""
        sine = float(np.sin(self.transverse_angle))
        return sine * (reach(radius, self.base_radius) - self.reference_radius * sine)

    @cached_property
    def _whole_fillet(self) -> Envelope:
        """Envelope of the whole rounding of the rack's tip, from the root circle to the rack's straight flank."""
        rounding = self.module * self.rack.root_radius
        depth = self.module * (self.rack.dedendum - self.profile_shift) - rounding
        centre = complex(-depth, self._half_root_land - self.pitch / 2)
        flank_end = np.pi / 2 + np.radians(self.pressure_angle_deg)
        # In the transverse section of a helical rack the round tip is drawn out along the pitch line.
        tip = Ellipse(rounding, rounding * self._stretch, float(flank_end), float(np.pi), centre)
        return Envelope(Reversed(tip), self._motion)

    @cached_property
    def _fillet_end(self) -> float:
        """Parameter at which the fillet gives way to the involute: its end, or where it crosses when undercut."""
        first, last = self._whole_fillet.span
        if not self.undercut:
            return last
        half = self.half_angle_at(self.base_radius)

        def height(t: float) -> float:
            return float(np.abs(self._whole_fillet.point(np.asarray(t)))) - self.base_radius

        def inside(t: float) -> float:
            z = complex(self._whole_fillet.point(np.asarray(t)))
            return float(np.angle(z) + half - inv(np.arccos(min(1.0, self.base_radius / abs(z)))))

        base = float(brentq(height, first, last, xtol=1e-15)) if height(last) > 0 else last
        # An undercut too slight to tell from none: fillet and involute meet on the base circle.
        if inside(base) <= 0 or inside(last) >= 0:
            return base
        return float(brentq(inside, base, last, xtol=1e-15))

    @property
    def _fillet(self) -> Section:
        return Section(self._whole_fillet, self._whole_fillet.span[0], self._fillet_end)

    @cached_property
    def form_radius(self) -> float:
        """Radius from which the flank is an involute [mm] (half the root form diameter)."""
        if not self.undercut:
            sine = float(np.sin(self.transverse_angle))
            return float(np.hypot(self.reference_radius * sine - self._flank_depth / sine, self.base_radius))
        return max(abs(self._fillet.end), self.base_radius)

    @cached_property
    def _flank(self) -> Envelope:
        low = self._rack_height(self.form_radius)
        high = self._rack_height(self.tip_radius)
        lean, half = float(np.tan(self.transverse_angle)), self.thickness / 2
        return Envelope(Segment(complex(low, low * lean - half), complex(high, high * lean - half)), self._motion)
