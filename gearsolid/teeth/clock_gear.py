"""Wheels and pinions as clockmakers cut them: radial flanks with a top of circular arcs."""

from dataclasses import dataclass
from functools import cached_property
from math import degrees, isfinite, pi

import numpy as np

from gearsolid.curves.outline import Outline
from gearsolid.curves.primitives import Segment
from gearsolid.errors import DesignError
from gearsolid.teeth.leaf_tip import LeafTip
from gearsolid.teeth.root import Foot, RootCircle
from gearsolid.teeth.toothed import pitch_pieces


@dataclass(frozen=True)
class ClockGear:
    """A wheel or pinion with radial flanks and a top of circular arcs.

    The flanks are exact cycloidal ones for a mate whose addendum is described by half this reference radius; the top
    only comes near the exact curve, so the ratio wavers while it drives.

    Args:
        teeth: number of teeth or leaves [-].
        module: [mm].
        thickness: of a tooth as an arc of the reference circle [mm].
        tip: the top.
        dedendum: depth of the root below the reference circle [mm].
        root_fillet: radius joining flank and root circle [mm]; 0 leaves a corner, infinity takes the largest that
            fits, a full round.

    Raises:
        DesignError: a number is out of its range, or top or fillet do not fit; the message gives the limit.
    """

    teeth: int
    module: float
    thickness: float
    tip: LeafTip
    dedendum: float
    root_fillet: float = 0.0

    def __post_init__(self) -> None:
        if self.teeth != int(self.teeth) or self.teeth < 5:
            raise DesignError(f"a clock gear has {self.teeth:g} teeth; a whole number from 5 is possible, 6 are usual")
        if not (self.module > 0 and isfinite(self.module)):
            raise DesignError(f"the module is {self.module:g} mm; it must be above 0")
        if not 0 < self.thickness < pi * self.module:
            raise DesignError(
                f"the tooth thickness is {self.thickness:g} mm; it must lie between 0 and the pitch, "
                f"{pi * self.module:.4g} mm"
            )
        if not 0 < self.dedendum < self.reference_radius:
            raise DesignError(
                f"the dedendum is {self.dedendum:g} mm; it must lie between 0 and the reference radius, "
                f"{self.reference_radius:g} mm"
            )
        if not self.root_fillet >= 0:
            raise DesignError(f"root_fillet is {self.root_fillet:g} mm; it must be 0 or more")
        widest = self.tip.widest(self.reference_radius, self._half_angle)
        if widest >= pi / self.teeth:
            raise DesignError(
                f"the top of a tooth bulges to {degrees(widest):.4g} deg on either side; {self.teeth} teeth leave it "
                f"{180 / self.teeth:.4g} deg: take larger arcs or thinner teeth"
            )
        _ = self.outline

    @property
    def reference_radius(self) -> float:
        """module x teeth / 2 [mm]."""
        return self.module * self.teeth / 2

    @property
    def _half_angle(self) -> float:
        return self.thickness / (2 * self.reference_radius)

    @property
    def addendum(self) -> float:
        """Height of the tip above the reference circle [mm]."""
        return self.tip.height(self.reference_radius, self._half_angle)

    @property
    def tip_radius(self) -> float:
        return self.reference_radius + self.addendum

    @property
    def root_radius(self) -> float:
        return self.reference_radius - self.dedendum

    @property
    def _root(self) -> RootCircle:
        return RootCircle(self.root_radius, self.teeth)

    @property
    def _radial_flank(self) -> Segment:
        ray = complex(np.exp(-1j * self._half_angle))
        return Segment(self.root_radius * ray, self.reference_radius * ray)

    @cached_property
    def foot(self) -> Foot:
        """Root fillet and flank of one side."""
        return self._root.foot(self._radial_flank, self.root_fillet)

    @property
    def form_radius(self) -> float:
        """Radius at which the flank leaves the root or its fillet [mm]."""
        return abs(self.foot.form_point)

    @property
    def largest_root_fillet(self) -> float:
        """Radius of the largest root fillet that fits [mm]."""
        return self._root.largest_fillet(self._radial_flank)

    @cached_property
    def outline(self) -> Outline:
        """One pitch, counter-clockwise, a tooth centred on the +x axis."""
        crown = self.tip.crown(self.reference_radius, self._half_angle)
        return Outline(pitch_pieces(self.foot, crown, self._root), self.teeth)
