"""Cycloidal wheels and pinions of clocks and instruments: epicycloid addendum, hypocycloid dedendum."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from gearsolid.curves.curve import Curve, Turned
from gearsolid.curves.outline import Outline
from gearsolid.curves.primitives import Arc
from gearsolid.curves.roulette import Trace
from gearsolid.teeth.cycloidal_member import CycloidalMember
from gearsolid.teeth.root import RootCircle


@dataclass(frozen=True)
class CycloidalGear(CycloidalMember):
    """An external cycloidal wheel or pinion.

    Fields as in `CycloidalMember`. A dedendum circle of half the reference radius makes the flank below the reference
    circle a radial line.

    Raises:
        DesignError: the tooth comes to a point below the tip, the flank does not reach the root, the fillet does not
            fit, or a number is out of its range; the message gives the limit.
    """

    @property
    def tip_radius(self) -> float:
        return self.reference_radius + self.hand * self.addendum

    @property
    def root_radius(self) -> float:
        return self.reference_radius - self.hand * self.dedendum

    @property
    def form_radius(self) -> float:
        """Radius at which the flank leaves the root or its fillet [mm]."""
        return abs(self.foot.form_point)

    def _beside(self, curve: Trace) -> Curve:
        half_angle = self.thickness / (2 * self.reference_radius)
        return Turned(curve, complex(np.exp(-1j * self.hand * half_angle)))

    @property
    def _root(self) -> RootCircle:
        return RootCircle(self.root_radius, self.teeth, self.hand)

    def _tip_land(self, start: complex) -> Arc:
        angle = float(np.angle(start))
        return Arc(0, self.tip_radius, angle, -angle)

    @cached_property
    def outline(self) -> Outline:
        """One pitch, counter-clockwise (clockwise for a ring), a tooth centred on the +x axis."""
        return Outline(self.pitch_pieces, self.teeth)
