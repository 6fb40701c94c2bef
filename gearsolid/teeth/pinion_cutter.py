"""The pinion-shaped cutter that generates a ring gear: which one, and the flank and fillet it leaves."""

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from gearsolid.curves.curve import Turned
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.primitives import Arc
from gearsolid.curves.rolling import CircleOnCircle, LineOnCircle
from gearsolid.curves.roulette import Trace
from gearsolid.errors import DesignError
from gearsolid.teeth.involute_numbers import NO_LAND, InvoluteNumbers
from gearsolid.teeth.involute_relations import inv, reach, working_angle
from gearsolid.teeth.rack import BasicRack
from gearsolid.teeth.ring_margins import RingMargins, ring_margins

# Roundings of a cutter's tip [modules] tried in turn when none is named; the first is common practice.
_ROUNDINGS = (0.2, 0.1, 0.05)


@dataclass(frozen=True)
class PinionCutter:
    """A pinion-shaped cutter; its module and angles are those of the ring it cuts.

    Args:
        teeth: tooth count [-].
        profile_shift: coefficient x0 [-].
        tip_rounding: radius of the corner at its tip [modules]; about 0.2 is common practice.
        addendum: haP0* of the cutter's own rack [modules].

    Raises:
        DesignError: a number is outside its limits.
    """

    teeth: int
    profile_shift: float = 0.0
    tip_rounding: float = 0.2
    addendum: float = 1.25

    def __post_init__(self) -> None:
        if self.teeth != int(self.teeth) or self.teeth < 3:
            raise DesignError(f"the cutter has {self.teeth:g} teeth; it must have a whole number, 3 or more")
        for name, value in (("tip rounding", self.tip_rounding), ("addendum", self.addendum)):
            if not 0 < value < 10:
                raise DesignError(f"the cutter's {name} is {value:g} modules; it must lie between 0 and 10")


@dataclass(frozen=True)
class Generation:
    """A cutter at work in a ring: the tooth gap of the cutter over the ring's tooth on the +x axis.

    Args:
        ring: the ring to be cut.
        cutter: the tool.

    Raises:
        DesignError: the cutter has as many teeth as the ring, or their shifts allow no working pressure angle.
    """

    ring: InvoluteNumbers
    cutter: PinionCutter

    def __post_init__(self) -> None:
        if self.cutter.teeth >= self.ring.teeth:
            raise DesignError(
                f"the cutter has {self.cutter.teeth} teeth and the ring {self.ring.teeth}; the cutter must have fewer"
            )

    @cached_property
    def pinion(self) -> InvoluteNumbers:
        """The cutter as a member. Thinner ring teeth come from its thicker teeth, so that the root stays in place."""
        ring, cutter = self.ring, self.cutter
        return InvoluteNumbers(
            cutter.teeth,
            ring.module,
            ring.pressure_angle_deg,
            cutter.profile_shift,
            ring.helix_angle_deg,
            BasicRack(cutter.addendum, cutter.addendum),
            -ring.tooth_thinning,
        )

    @cached_property
    def working(self) -> float:
        """Transverse pressure angle at which the cutter works [rad]."""
        angle, helix = np.radians(self.ring.pressure_angle_deg), np.radians(self.ring.helix_angle_deg)
        shifts = self.cutter.profile_shift + self.ring.profile_shift
        return working_angle(self.cutter.teeth, -self.ring.teeth, shifts, angle, helix)

    @cached_property
    def distance(self) -> float:
        """Distance of the two axes [mm]."""
        return (self.ring.base_radius - self.pinion.base_radius) / float(np.cos(self.working))

    @property
    def rounding(self) -> float:
        """Radius of the corner at the cutter's tip [mm]."""
        return self.cutter.tip_rounding * self.ring.module

    @property
    def offset(self) -> float:
        """Length of the base tangent between the two base circles [mm]."""
        return self.distance * float(np.sin(self.working))

    @property
    def tip_reach(self) -> float:
        """Length of the cutter's base tangent where its involute ends and the rounding starts [mm]."""
        return self.rounding + reach(self.pinion.tip_radius - self.rounding, self.pinion.base_radius)

    @property
    def foot_reach(self) -> float:
        """Length of the cutter's base tangent where it forms the ring's tip [mm]; negative when it cannot."""
        return reach(self.ring.tip_radius, self.ring.base_radius) - self.offset

    @property
    def form_reach(self) -> float:
        """Length of the ring's base tangent where its involute ends [mm]."""
        return self.offset + self.tip_reach

    @cached_property
    def margins(self) -> RingMargins:
        """Margins of the cutter in the ring."""
        return ring_margins(
            teeth=(self.pinion.teeth, self.ring.teeth),
            tip=(self.pinion.tip_radius, self.ring.tip_radius),
            base=(self.pinion.base_radius, self.ring.base_radius),
            distance=self.distance,
            working=self.working,
        )

    @property
    def motion(self) -> CircleOnCircle:
        """The working circle of the cutter rolling in that of the ring."""
        cosine = float(np.cos(self.working))
        return CircleOnCircle(self.ring.base_radius / cosine, -self.pinion.base_radius / cosine)

    @property
    def flank_turn(self) -> complex:
        """Where the cutter's lower involute starts on its base circle, as a unit complex number."""
        start = np.pi / self.pinion.teeth - self.pinion.half_angle_at(self.pinion.base_radius)
        return complex(np.exp(1j * start))

    @property
    def corner_centre(self) -> complex:
        """Centre of the rounding at the cutter's tip [mm], before `flank_turn`."""
        base = self.pinion.base_radius
        return complex((base - 1j * (self.tip_reach - self.rounding)) * np.exp(1j * self.tip_reach / base))

    @property
    def half_land(self) -> float:
        """Half the flat between the roundings at the cutter's tip, an arc [mm]; negative when there is no room."""
        half = self.pinion.half_angle_at(self.pinion.base_radius) - float(np.angle(self.corner_centre))
        return half * self.pinion.tip_radius

    @property
    def flank(self) -> Envelope:
        """Envelope of the cutter's involute, from the ring's fillet to its tip circle."""
        base = LineOnCircle(self.pinion.base_radius)
        involute = Trace(base, 0, -self.tip_reach, -max(self.foot_reach, 0.0))
        return Envelope(Turned(involute, self.flank_turn), self.motion, -1)

    @property
    def fillet(self) -> Envelope:
        """Envelope of the rounding at the cutter's tip, from the ring's root circle to its involute."""
        first, last = float(np.angle(self.corner_centre)), self.tip_reach / self.pinion.base_radius - np.pi / 2
        corner = Arc(self.corner_centre, self.rounding, first, last)
        return Envelope(Turned(corner, self.flank_turn), self.motion, -1)

    @property
    def tip_fits(self) -> bool:
        """Whether the rounding finds room at the cutter's tip."""
        return self.pinion.tip_radius - self.rounding > self.pinion.base_radius and self.half_land >= 0

    def check_path(self) -> None:
        """Refuse a cutter whose teeth do not form the whole flank, or form more than the flank.

        Raises:
            DesignError: says which rule is broken.
        """
        teeth = self.pinion.teeth
        if self.foot_reach < -NO_LAND * self.ring.module:
            raise DesignError(
                f"a cutter with {teeth} teeth forms no involute at the ring's tip: it falls {-self.foot_reach:.4g} mm "
                "short on the base tangent: take more cutter teeth, a larger cutter shift or a shorter ring tip"
            )
        if self.margins.trochoid < 0:
            raise DesignError(
                f"the tip of a cutter with {teeth} teeth cuts into the tips of a ring with {self.ring.teeth} teeth "
                f"(margin {self.margins.trochoid:.4g} rad): take fewer cutter teeth or a shorter ring tip"
            )

    def check(self) -> None:
        """Refuse a cutter that cannot form this ring.

        Raises:
            DesignError: says which rule is broken.
        """
        self.check_path()
        if not self.tip_fits:
            raise DesignError(
                f"a rounding of {self.rounding:.4g} mm does not fit the tip of a cutter with {self.pinion.teeth} teeth "
                f"of module {self.ring.module:g} mm: take a smaller rounding, more cutter teeth or a smaller shift"
            )


def _enough_shift(ring: InvoluteNumbers, teeth: int) -> float:
    """Least cutter shift from 0 on with which the cutter's involute reaches the ring's tip [-]."""
    gap = (ring.teeth - teeth) / ring.teeth * ring.base_radius
    working = np.arctan(reach(ring.tip_radius, ring.base_radius) / gap)
    loss = float(inv(ring.transverse_angle) - inv(working))
    least = loss * (ring.teeth - teeth) / (2 * np.tan(np.radians(ring.pressure_angle_deg))) - ring.profile_shift
    return max(0.0, float(least))


def _cutter_to_depth(ring: InvoluteNumbers, cutter: PinionCutter) -> PinionCutter:
    """The cutter with the addendum that cuts the ring to the root of its basic rack."""
    root = ring.reference_radius + ring.module * (ring.rack.dedendum - ring.profile_shift)
    generation = Generation(ring, cutter)
    height = root - generation.distance - generation.pinion.reference_radius
    return replace(cutter, addendum=height / ring.module - cutter.profile_shift)


def largest_cutter(ring: InvoluteNumbers) -> PinionCutter:
    """The cutter with most teeth that forms the whole flank to full depth and can be fed radially out of the ring.

    Small rings allow no such cutter; they get the one with most teeth that works along the axis. Steep flanks leave no
    room for the usual rounding at the cutter's tip; they get a smaller one.

    Raises:
        DesignError: no cutter forms the flank.
    """
    axial: PinionCutter | None = None
    for teeth in range(ring.teeth - 2, 2, -1):
        try:
            sharp = _cutter_to_depth(ring, PinionCutter(teeth, _enough_shift(ring, teeth)))
            path = Generation(ring, sharp)
            path.check_path()
        except DesignError:
            continue
        rounded = (replace(sharp, tip_rounding=r) for r in _ROUNDINGS)
        cutter = next((c for c in rounded if Generation(ring, c).tip_fits), None)
        if cutter is None and axial:
            # Below a cutter that fits, fewer teeth only have narrower tips.
            break
        if cutter is None:
            continue
        if path.margins.trimming >= 0:
            return cutter
        axial = axial or cutter
    if axial:
        return axial
    raise DesignError(
        f"no pinion-shaped cutter forms a ring with {ring.teeth} teeth, tip radius {ring.tip_radius:.5g} mm, over "
        f"base radius {ring.base_radius:.5g} mm: shorten the tip, lower profile shift, dedendum "
        "or pressure angle, or take more teeth"
    )
