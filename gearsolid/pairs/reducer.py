"""A pin-wheel reducer: cycloid discs on an eccentric shaft, rolling in ring pins and driving output rollers."""

from dataclasses import dataclass
from functools import cached_property
from math import pi

from gearsolid.curves.loops import disc
from gearsolid.errors import DesignError
from gearsolid.pairs.colours import PEARL, SLATE
from gearsolid.pairs.crank_discs import CrankDiscs, OutputRollers, Stack
from gearsolid.pairs.eccentric_shaft import EccentricShaft
from gearsolid.pairs.engagement import Engagement, engage
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.part import Body, Part
from gearsolid.shop.bore import Bore
from gearsolid.teeth.pinwheel import CycloidDisc, PinRing

__all__ = ["OutputRollers", "PinWheelReducer", "Stack"]


@dataclass(frozen=True)
class PinWheelReducer:
    """Discs on cranks spread evenly round the input shaft; the ring is held, the rollers carry the output.

    Args:
        disc: the cycloid disc (all discs have this rim).
        ring: the ring pins in their housing.
        rollers: the output rollers.
        stack: widths along the axis.
        disc_bore: hole for the eccentric's bearing in each disc.
        output_bore: shaft hole of the output flange.
        rim_diameter: outside diameter of the ring [mm].
        discs: number of discs [-]; two run with their cranks at 180 degrees.
        shaft: the eccentric shaft; left out where it is bought or drawn elsewhere.

    Raises:
        DesignError: members do not fit each other; the message gives the numbers.
    """

    disc: CycloidDisc
    ring: PinRing
    rollers: OutputRollers
    stack: Stack
    disc_bore: Bore
    output_bore: Bore
    rim_diameter: float
    discs: int = 2
    shaft: EccentricShaft | None = None

    def __post_init__(self) -> None:
        if self.ring.pins != self.disc.pins:
            raise DesignError(
                f"the ring has {self.ring.pins} pins and the disc {self.disc.lobes} lobes; with a tooth difference of "
                f"{self.disc.difference} the ring must have {self.disc.pins} pins"
            )
        if abs(self.ring.pin_circle_radius - self.disc.pin_circle_radius) > self.disc.eccentricity:
            raise DesignError(
                f"the disc was made for a pin circle of {self.disc.pin_circle_radius:g} mm radius; the ring has "
                f"{self.ring.pin_circle_radius:g} mm"
            )
        least = 2 * (self.ring.pin_circle_radius + self.ring.pin_radius)
        if self.rim_diameter <= least:
            raise DesignError(
                f"the rim diameter is {self.rim_diameter:g} mm; the pin pockets reach {least:g} mm: take a larger rim"
            )
        cranks = self._cranks
        if self.shaft:
            self.shaft.check(cranks)

    @cached_property
    def _cranks(self) -> CrankDiscs:
        return CrankDiscs(
            self.disc.outline,
            self.disc.difference,
            self.disc.eccentricity,
            self.discs,
            self.rollers,
            self.stack,
            self.disc_bore,
            self.output_bore,
        )

    @property
    def title(self) -> str:
        return f"pin-wheel reducer, {self.discs} discs of {self.disc.lobes} lobes in {self.ring.pins} pins"

    @property
    def ratio(self) -> float:
        return -self.disc.lobes / self.disc.difference

    @property
    def centre_distance(self) -> float:
        return self.disc.eccentricity

    @property
    def identical_discs(self) -> bool:
        """Whether all discs are drilled alike."""
        return self._cranks.identical

    @property
    def disc_names(self) -> tuple[str, ...]:
        """Names of the discs' parts."""
        return self._cranks.names

    @cached_property
    def parts(self) -> tuple[Part, ...]:
        height, circle = self.stack.height(self.discs), self.ring.pin_circle_radius
        ring = Body(disc(self.rim_diameter / 2), height, holes=(self.ring.pocketed,))
        pin = Body(disc(self.ring.pin_radius), height)
        places = (Motion(centre_radius=circle, centre_angle=2 * pi * k / self.ring.pins) for k in range(self.ring.pins))
        return (
            Part("ring", ring, Motion(), SLATE),
            *(Part(f"ring pin {k}", pin, place, PEARL) for k, place in enumerate(places, 1)),
            *self._cranks.parts,
            *(self.shaft.parts(self._cranks) if self.shaft else ()),
        )

    @cached_property
    def engagements(self) -> tuple[Engagement, ...]:
        still, rim, cranks = Motion(), self.disc.outline, self._cranks
        found = []
        for name, motion, rollers in zip(cranks.names, cranks.motions, cranks.engagements, strict=True):
            found += [
                engage("ring pins", self.ring.pattern, still, name, rim, motion),
                rollers,
                engage("ring", self.ring.pocketed, still, name, rim, motion, must_touch=False),
            ]
        return tuple(found)
