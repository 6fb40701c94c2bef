"""Internal involute gears (ring gears, the annulus of an epicyclic): envelopes of the pinion-shaped cutter."""

from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

import numpy as np

from gearsolid.curves.curve import Mirrored, Turned
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc
from gearsolid.curves.rolling import CircleOnCircle, LineOnCircle
from gearsolid.curves.roulette import Trace
from gearsolid.errors import DesignError
from gearsolid.teeth.involute_member import InvoluteMember
from gearsolid.teeth.involute_relations import centre_distance, inv, reach, working_angle
from gearsolid.teeth.rack import BasicRack
from gearsolid.teeth.ring_margins import RingMargins, ring_margins

# A flat shorter than this share of the module is left out of the outline.
_NO_LAND = 1e-9

# Roundings of a cutter's tip [modules] tried in turn when none is named; the first is common practice.
_ROUNDINGS = (0.2, 0.1, 0.05)


@dataclass(frozen=True)
class PinionCutter:
    """A pinion-shaped cutter; module, angles and addendum (the rack's dedendum) are those of the ring it cuts.

    Args:
        teeth: tooth count [-].
        profile_shift: coefficient x0 [-].
        tip_rounding: radius of the corner at its tip [modules]; about 0.2 is common practice.
    """

    teeth: int
    profile_shift: float = 0.0
    tip_rounding: float = 0.2

    def __post_init__(self) -> None:
        if self.teeth != int(self.teeth) or self.teeth < 3:
            raise DesignError(f"the cutter has {self.teeth:g} teeth; it must have a whole number, 3 or more")
        if not self.tip_rounding > 0:
            raise DesignError(f"the cutter's tip rounding is {self.tip_rounding:g} modules; it must be above 0")


@dataclass(frozen=True)
class InternalGear(InvoluteMember):
    """Internal involute gear with the fillet its pinion-shaped cutter leaves.

    `profile_shift` has the sign of ISO 21771: positive moves the profile towards the axis and makes the ring's tooth
    thicker. (Where a ring's shift is counted positive away from the axis, enter the negative of that number.)
    `rack.dedendum` is the cutter's addendum; `rack.root_radius` plays no part, the cutter's tip rounding does.

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
        self._generation.check(self)

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
        if self.tip_land <= _NO_LAND * self.module:
            raise DesignError(
                f"tip land of the ring is {self.tip_land:.4g} mm; it must be above 0: shorten the tip, raise the "
                "profile shift or thin the tooth less"
            )

    @cached_property
    def tool(self) -> PinionCutter:
        """The cutter used: the one given, or the one chosen for this ring."""
        return self.cutter or _largest_cutter(self)

    @property
    def _generation(self) -> "_Generation":
        return _Generation(self, self.tool)

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

    @cached_property
    def outline(self) -> Outline:
        """One pitch, clockwise, a tooth centred on the +x axis: fillet, flank, tip, flank, fillet, root."""
        fillet, flank = self._generation.fillet, self._generation.flank
        tip, land = float(np.angle(flank.end)), float(np.angle(fillet.start))
        pieces = [
            Piece(fillet, "fillet"),
            Piece(flank, "flank"),
            Piece(Arc(0, self.tip_radius, tip, -tip), "tip"),
            Piece(Mirrored(flank), "flank"),
            Piece(Mirrored(fillet), "fillet"),
        ]
        if self._generation.half_land > _NO_LAND * self.module:
            pieces.append(Piece(Arc(0, self.root_radius, -land, land - 2 * np.pi / self.teeth), "root"))
        return Outline(tuple(pieces), self.teeth)


class _Generation:
    """A cutter at work in a ring: the tooth gap of the cutter over the ring's tooth on the +x axis."""

    def __init__(self, ring: InternalGear, cutter: PinionCutter) -> None:
        if cutter.teeth >= ring.teeth:
            raise DesignError(
                f"the cutter has {cutter.teeth} teeth and the ring {ring.teeth}; the cutter must have fewer"
            )
        reach_rack = BasicRack(ring.rack.dedendum, ring.rack.dedendum)
        # Thinner ring teeth come from thicker cutter teeth at the same depth, so the root stays in place.
        self.pinion = InvoluteMember(
            cutter.teeth,
            ring.module,
            ring.pressure_angle_deg,
            cutter.profile_shift,
            ring.helix_angle_deg,
            reach_rack,
            -ring.tooth_thinning,
        )
        angle, helix = np.radians(ring.pressure_angle_deg), np.radians(ring.helix_angle_deg)
        counts, shifts = (cutter.teeth, -ring.teeth), cutter.profile_shift + ring.profile_shift
        self.working = working_angle(*counts, shifts, angle, helix)
        self.distance = -centre_distance(*counts, shifts, angle, helix, module=ring.module)
        self.ring = ring
        self.rounding = cutter.tip_rounding * ring.module

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

    @property
    def margins(self) -> RingMargins:
        return ring_margins(
            teeth=(self.pinion.teeth, self.ring.teeth),
            tip=(self.pinion.tip_radius, self.ring.tip_radius),
            base=(self.pinion.base_radius, self.ring.base_radius),
            distance=self.distance,
            working=self.working,
        )

    @property
    def motion(self) -> CircleOnCircle:
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
        base = LineOnCircle(self.pinion.base_radius)
        involute = Trace(base, 0, -self.tip_reach, -max(self.foot_reach, 0.0))
        return Envelope(Turned(involute, self.flank_turn), self.motion, -1)

    @property
    def fillet(self) -> Envelope:
        first, last = float(np.angle(self.corner_centre)), self.tip_reach / self.pinion.base_radius - np.pi / 2
        corner = Arc(self.corner_centre, self.rounding, first, last)
        return Envelope(Turned(corner, self.flank_turn), self.motion, -1)

    def check(self, ring: InternalGear) -> None:
        """Refuse a cutter that cannot form this ring.

        Raises:
            DesignError: says which rule is broken.
        """
        z0, m = self.pinion.teeth, ring.module
        if self.pinion.tip_radius - self.rounding <= self.pinion.base_radius or self.half_land < 0:
            raise DesignError(
                f"a rounding of {self.rounding:.4g} mm does not fit the tip of a cutter with {z0} teeth of module "
                f"{m:g} mm: take a smaller rounding, more cutter teeth or a smaller cutter shift"
            )
        if self.foot_reach < -_NO_LAND * m:
            raise DesignError(
                f"a cutter with {z0} teeth forms no involute at the ring's tip: it falls {-self.foot_reach:.4g} mm "
                "short on the base tangent: take more cutter teeth, a larger cutter shift or a shorter ring tip"
            )
        if self.margins.trochoid < 0:
            raise DesignError(
                f"the tip of a cutter with {z0} teeth cuts into the tips of a ring with {ring.teeth} teeth (margin "
                f"{self.margins.trochoid:.4g} rad): take fewer cutter teeth or a shorter ring tip"
            )


def _enough_shift(ring: InternalGear, teeth: int) -> float:
    """Least cutter shift from 0 on with which the cutter's involute reaches the ring's tip [-]."""
    gap = (ring.teeth - teeth) / ring.teeth * ring.base_radius
    working = np.arctan(reach(ring.tip_radius, ring.base_radius) / gap)
    loss = float(inv(ring.transverse_angle) - inv(working))
    least = loss * (ring.teeth - teeth) / (2 * np.tan(np.radians(ring.pressure_angle_deg))) - ring.profile_shift
    return max(0.0, float(least))


def _largest_cutter(ring: InternalGear) -> PinionCutter:
    """The cutter with most teeth that forms the whole flank and can be fed radially out of the ring.

    Small rings allow no such cutter; they get the one with most teeth that works along the axis. Steep flanks leave no
    room for the usual rounding at the cutter's tip; they get a smaller one.

    Raises:
        DesignError: no cutter forms the flank.
    """
    for rounding in _ROUNDINGS:
        axial: PinionCutter | None = None
        for teeth in range(ring.teeth - 2, 2, -1):
            cutter = PinionCutter(teeth, _enough_shift(ring, teeth), rounding)
            try:
                generation = _Generation(ring, cutter)
                generation.check(ring)
            except DesignError:
                continue
            if generation.margins.trimming >= 0:
                return cutter
            axial = axial or cutter
        if axial:
            return axial
    raise DesignError(
        f"no pinion-shaped cutter forms a ring with {ring.teeth} teeth, tip radius {ring.tip_radius:.5g} mm, over "
        f"base radius {ring.base_radius:.5g} mm: shorten the tip, lower profile shift, dedendum or pressure angle, or take more teeth"
    )
