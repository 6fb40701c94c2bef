"""Cycloidal teeth of clocks and instruments: epicycloid addendum, hypocycloid dedendum, from two describing circles."""

from dataclasses import dataclass
from functools import cached_property
from math import pi

import numpy as np
from scipy.optimize import brentq

from gearsolid.curves.crossing import fillet
from gearsolid.curves.curve import Curve, Mirrored, Reversed, Section, Turned
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc
from gearsolid.curves.rolling import CircleOnCircle
from gearsolid.curves.roulette import Trace
from gearsolid.errors import DesignError


@dataclass(frozen=True)
class CycloidalGear:
    """An external cycloidal wheel or pinion.

    The circle that describes a member's addendum must describe the dedendum of its mate. A dedendum circle of half the
    reference radius makes the flank below the reference circle a radial line.

    Args:
        teeth: number of teeth or leaves [-].
        module: [mm].
        addendum_circle: radius of the describing circle rolled on the outside [mm].
        dedendum_circle: radius of the describing circle rolled on the inside [mm].
        addendum: height of the tip above the reference circle [mm].
        dedendum: depth of the root below the reference circle [mm].
        tooth_thinning: circumferential reduction of the tooth thickness pi module / 2 at the reference circle [mm].
        root_fillet: radius joining flank and root circle [mm]; 0 leaves a corner.

    Raises:
        DesignError: the tooth comes to a point below the tip, the flank does not reach the root, the fillet does not
            fit, or a number is out of its range; the message gives the limit.
    """

    teeth: int
    module: float
    addendum_circle: float
    dedendum_circle: float
    addendum: float
    dedendum: float
    tooth_thinning: float = 0.0
    root_fillet: float = 0.0

    def __post_init__(self) -> None:
        if self.teeth < 5:
            raise DesignError(f"a cycloidal member has {self.teeth} teeth; at least 5 are possible, 6 are usual")
        for name in ("module", "addendum_circle", "dedendum_circle", "addendum", "dedendum"):
            if not getattr(self, name) > 0:
                raise DesignError(f"{name} is {getattr(self, name):g} mm; it must be above 0")
        radius = self.reference_radius
        if not self.dedendum_circle < radius:
            raise DesignError(
                f"the dedendum circle of {self.dedendum_circle:g} mm radius does not fit inside the reference circle "
                f"of {radius:g} mm; half of it gives radial flanks"
            )
        if not 0 <= self.tooth_thinning < pi * self.module / 2:
            raise DesignError(
                f"tooth_thinning is {self.tooth_thinning:g} mm; it must lie from 0 to below half the pitch, "
                f"{pi * self.module / 2:.4g} mm"
            )
        deepest = radius - abs(radius - 2 * self.dedendum_circle)
        if self.dedendum >= min(deepest, radius):
            raise DesignError(
                f"the dedendum is {self.dedendum:g} mm; this describing circle reaches {deepest:.4g} mm below the "
                "reference circle: lower the dedendum or bring the dedendum circle nearer to half the reference radius"
            )
        if self.addendum >= self.pointed_addendum:
            raise DesignError(
                f"the addendum is {self.addendum:g} mm, but the tooth is pointed at {self.pointed_addendum:.4f} mm: "
                f"lower it (clock practice: {0.95 * self.pointed_addendum:.4f} mm) or reduce the thinning"
            )
        if self._root_half_space <= 0:
            raise DesignError(
                f"the flanks of neighbouring teeth meet above the root circle of {self.root_radius:.4g} mm radius: "
                "lower the dedendum or take a larger dedendum circle"
            )

    @property
    def reference_radius(self) -> float:
        """module x teeth / 2 [mm]."""
        return self.module * self.teeth / 2

    @property
    def tip_radius(self) -> float:
        return self.reference_radius + self.addendum

    @property
    def root_radius(self) -> float:
        return self.reference_radius - self.dedendum

    @property
    def thickness(self) -> float:
        """Tooth thickness as an arc of the reference circle [mm]."""
        return pi * self.module / 2 - self.tooth_thinning

    @property
    def _half_angle(self) -> float:
        return self.thickness / (2 * self.reference_radius)

    @cached_property
    def pointed_addendum(self) -> float:
        """Addendum at which the two epicycloids of a tooth meet on its centre line [mm]."""
        whole = Trace(self._outside, -self.addendum_circle, 0.0, pi)

        def lean(roll: float) -> float:
            return float(np.angle(whole.point(np.asarray(roll)))) - self._half_angle

        if lean(pi) <= 0:
            return 2 * self.addendum_circle
        return abs(complex(whole.point(np.asarray(brentq(lean, 0.0, pi, xtol=1e-14))))) - self.reference_radius

    @property
    def _outside(self) -> CircleOnCircle:
        return CircleOnCircle(self.reference_radius, self.addendum_circle)

    @cached_property
    def _face(self) -> Curve:
        """Epicycloid from the reference circle to the tip, on the side of negative angle."""
        big, a = self.reference_radius + self.addendum_circle, self.addendum_circle
        roll = float(np.arccos((big**2 + a**2 - self.tip_radius**2) / (2 * a * big)))
        return Turned(Trace(self._outside, -a, 0.0, roll), complex(np.exp(-1j * self._half_angle)))

    @cached_property
    def _flank(self) -> Curve:
        """Hypocycloid from the root circle to the reference circle, on the side of negative angle."""
        a = self.dedendum_circle
        small = self.reference_radius - a
        roll = float(np.arccos((self.root_radius**2 - small**2 - a**2) / (2 * a * small)))
        inside = Trace(CircleOnCircle(self.reference_radius, -a), a, 0.0, roll)
        return Reversed(Turned(inside, complex(np.exp(-1j * self._half_angle))))

    @property
    def _root_half_space(self) -> float:
        return pi / self.teeth + float(np.angle(self._flank.start))

    @cached_property
    def outline(self) -> Outline:
        """One pitch, counter-clockwise, a tooth centred on the +x axis."""
        flank, lower = self._flank, []
        if self.root_fillet > 0:
            touch, arc = fillet(flank, self.root_radius, self.root_fillet)
            flank = Section(flank, touch, flank.span[1])
            lower.append(Piece(arc, "fillet"))
        lower += [Piece(flank, "flank"), Piece(self._face, "flank")]
        upper = [Piece(Mirrored(p.curve), p.role) for p in reversed(lower)]
        tip_angle = float(np.angle(self._face.end))
        tip = Piece(Arc(0, self.tip_radius, tip_angle, -tip_angle), "tip")
        foot = float(np.angle(lower[0].curve.start))
        if pi / self.teeth + foot <= 0:
            raise DesignError(
                f"the root fillet of {self.root_fillet:g} mm does not fit between two teeth; the root space is "
                f"{2 * self.root_radius * self._root_half_space:.4g} mm wide: take a smaller fillet"
            )
        root = Piece(Arc(0, self.root_radius, -foot, 2 * pi / self.teeth + foot), "root")
        return Outline((*lower, tip, *upper, root), self.teeth)
