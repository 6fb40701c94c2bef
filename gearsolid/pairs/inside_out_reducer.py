"""A pin-wheel reducer turned inside out: discs with pins on an eccentric shaft, rolling in a lobed ring."""

from dataclasses import dataclass
from functools import cached_property

from gearsolid.curves.loops import disc
from gearsolid.errors import DesignError
from gearsolid.pairs.colours import SLATE
from gearsolid.pairs.crank_discs import CrankDiscs, OutputRollers, Stack
from gearsolid.pairs.eccentric_shaft import EccentricShaft
from gearsolid.pairs.engagement import Engagement, engage
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.part import Body, Part
from gearsolid.shop.bore import Bore
from gearsolid.teeth.lobed_ring import LobedRing, PinDisc


@dataclass(frozen=True)
class InsideOutReducer:
    """Discs, each one piece with its pins, on cranks round the input shaft; the lobed ring is held.

    Args:
        disc: the disc with its pins (all discs are alike at the rim).
        ring: the lobed ring.
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

    disc: PinDisc
    ring: LobedRing
    rollers: OutputRollers
    stack: Stack
    disc_bore: Bore
    output_bore: Bore
    rim_diameter: float
    discs: int = 2
    shaft: EccentricShaft | None = None

    def __post_init__(self) -> None:
        if self.disc.pins != self.ring.pins:
            raise DesignError(
                f"the disc has {self.disc.pins} pins and the ring {self.ring.lobes} lobes; with a tooth difference of "
                f"{self.ring.difference} the disc must have {self.ring.pins} pins"
            )
        if abs(self.disc.pin_circle_radius - self.ring.pin_circle_radius) > self.ring.eccentricity:
            raise DesignError(
                f"the ring was made for a pin circle of {self.ring.pin_circle_radius:g} mm radius; the disc has "
                f"{self.disc.pin_circle_radius:g} mm"
            )
        if self.rim_diameter <= 2 * self.ring.root_radius:
            raise DesignError(
                f"the rim diameter is {self.rim_diameter:g} mm; the valleys of the ring reach "
                f"{2 * self.ring.root_radius:.6g} mm: take a larger rim"
            )
        cranks = self._cranks
        if self.shaft:
            self.shaft.check(cranks)

    @cached_property
    def _cranks(self) -> CrankDiscs:
        return CrankDiscs(
            self.disc.studded,
            self.ring.difference,
            self.ring.eccentricity,
            self.discs,
            self.rollers,
            self.stack,
            self.disc_bore,
            self.output_bore,
        )

    @property
    def title(self) -> str:
        return f"inside-out pin-wheel reducer, {self.discs} discs of {self.disc.pins} pins in {self.ring.lobes} lobes"

    @property
    def ratio(self) -> float:
        return -self.disc.pins / self.ring.difference

    @property
    def centre_distance(self) -> float:
        return self.ring.eccentricity

    @property
    def identical_discs(self) -> bool:
        """Whether all discs are drilled alike."""
        return self._cranks.identical

    @cached_property
    def parts(self) -> tuple[Part, ...]:
        ring = Body(disc(self.rim_diameter / 2), self.stack.height(self.discs), holes=(self.ring.outline,))
        return (
            Part("ring", ring, Motion(), SLATE),
            *self._cranks.parts,
            *(self.shaft.parts(self._cranks) if self.shaft else ()),
        )

    @cached_property
    def engagements(self) -> tuple[Engagement, ...]:
        cranks = self._cranks
        ring = (
            engage("ring", self.ring.outline, Motion(), name, self.disc.studded, motion)
            for name, motion in zip(cranks.names, cranks.motions, strict=True)
        )
        return (*ring, *cranks.engagements)
