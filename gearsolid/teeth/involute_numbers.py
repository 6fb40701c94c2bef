"""Circles and tooth thicknesses of involute members, external and internal, from their numbers alone."""

from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

import numpy as np

from gearsolid.errors import DesignError
from gearsolid.teeth.involute_relations import inv, transverse_angle
from gearsolid.teeth.rack import ISO53_A, BasicRack

# A flat shorter than this share of the module counts as none.
NO_LAND = 1e-9


@dataclass(frozen=True)
class InvoluteNumbers:
    """Numbers of one involute member; signs of ISO 21771, lengths always positive.

    Args:
        teeth: tooth count [-], positive for a ring too.
        module: normal module [mm] (the module itself for straight teeth).
        pressure_angle_deg: normal pressure angle [deg].
        profile_shift: coefficient x [-]; positive makes the tooth thicker.
        helix_angle_deg: at the reference circle [deg], positive right-hand; the outline is the transverse section.
        rack: basic rack in the normal section.
        tooth_thinning: cut from the tooth thickness, an arc of the reference circle [mm]; the root stays in place.
        tip_shortening: how much the tooth is cut short at the tip [mm].

    Raises:
        DesignError: a number is outside its limits.
    """

    teeth: int
    module: float
    pressure_angle_deg: float = 20.0
    profile_shift: float = 0.0
    helix_angle_deg: float = 0.0
    rack: BasicRack = ISO53_A
    tooth_thinning: float = 0.0
    tip_shortening: float = 0.0

    # +1 where teeth point away from the axis, -1 where they point towards it.
    hand: ClassVar[int] = 1

    def __post_init__(self) -> None:
        if self.teeth != int(self.teeth) or self.teeth < 3:
            raise DesignError(f"a gear has {self.teeth:g} teeth; it must have a whole number, 3 or more")
        if not self.module > 0:
            raise DesignError(f"the module is {self.module:g} mm; it must be above 0")
        if not 5 <= self.pressure_angle_deg <= 40:
            raise DesignError(f"the pressure angle is {self.pressure_angle_deg:g} deg; it must lie between 5 and 40")
        if not abs(self.helix_angle_deg) <= 60:
            raise DesignError(f"the helix angle is {self.helix_angle_deg:g} deg; it must lie between -60 and 60")
        for name, value in (
            ("profile shift", self.profile_shift),
            ("tooth thinning", self.tooth_thinning),
            ("tip shortening", self.tip_shortening),
        ):
            if not np.isfinite(value):
                raise DesignError(f"the {name} is {value}; it must be a number")

    @property
    def _stretch(self) -> float:
        """Length along the pitch line in the transverse section per length in the normal section [-]."""
        return float(1 / np.cos(np.radians(self.helix_angle_deg)))

    @cached_property
    def transverse_angle(self) -> float:
        """Pressure angle at the reference circle in the transverse section [rad]."""
        return transverse_angle(float(np.radians(self.pressure_angle_deg)), float(np.radians(self.helix_angle_deg)))

    @cached_property
    def reference_radius(self) -> float:
        """[mm]."""
        return self.teeth * self.module * self._stretch / 2

    @cached_property
    def base_radius(self) -> float:
        """[mm]."""
        return self.reference_radius * float(np.cos(self.transverse_angle))

    @property
    def tip_radius(self) -> float:
        """[mm]."""
        height = self.module * (self.rack.addendum + self.profile_shift) - self.tip_shortening
        return self.reference_radius + self.hand * height

    @property
    def pitch(self) -> float:
        """Transverse pitch at the reference circle [mm]."""
        return float(np.pi) * self.module * self._stretch

    @property
    def base_pitch(self) -> float:
        """Transverse base pitch [mm]."""
        return self.pitch * float(np.cos(self.transverse_angle))

    @property
    def thickness(self) -> float:
        """Tooth thickness at the reference circle, transverse arc [mm], thinning included."""
        tangent = np.tan(np.radians(self.pressure_angle_deg))
        full = self.module * self._stretch * (np.pi / 2 + 2 * self.profile_shift * tangent)
        return float(full) - self.tooth_thinning

    @property
    def generating_shift(self) -> float:
        """Profile shift xE [-] at which a rack of standard thickness would leave this tooth, thinning included."""
        normal = self.tooth_thinning / self._stretch
        return self.profile_shift - normal / (2 * self.module * float(np.tan(np.radians(self.pressure_angle_deg))))

    @property
    def base_helix_cosine(self) -> float:
        """Cosine of the helix angle at the base circle [-]."""
        sine = np.sin(np.radians(self.helix_angle_deg)) * np.cos(np.radians(self.pressure_angle_deg))
        return float(np.sqrt(1 - sine**2))

    def half_angle_at(self, radius: float) -> float:
        """Half the angle a tooth's involutes enclose at `radius` [mm], in [rad]; negative past the point of the tooth.

        Raises:
            DesignError: the radius lies inside the base circle.
        """
        if radius < self.base_radius * (1 - 1e-12):
            raise DesignError(
                f"tooth thickness asked at radius {radius:.6g} mm; the involute starts at the base circle, "
                f"{self.base_radius:.6g} mm"
            )
        angle = np.arccos(min(1.0, self.base_radius / radius))
        gain = inv(self.transverse_angle) - inv(angle)
        return float(self.thickness / (2 * self.reference_radius) + self.hand * gain)

    def thickness_at(self, radius: float) -> float:
        """Tooth thickness between its involutes as an arc at `radius` [mm], in [mm]. ISO 21771."""
        return 2 * radius * self.half_angle_at(radius)

    @property
    def tip_land(self) -> float:
        """Width of the tooth's tip as an arc [mm]."""
        return self.thickness_at(self.tip_radius)
