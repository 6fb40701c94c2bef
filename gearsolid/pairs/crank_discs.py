"""Discs on the cranks of an input shaft, and the rollers that take their slow turn to the output."""

from dataclasses import dataclass
from functools import cached_property
from math import pi, sin

from gearsolid.curves.loops import disc, holes, pins
from gearsolid.curves.outline import Outline
from gearsolid.errors import DesignError
from gearsolid.pairs.colours import BRASS, STEEL, TEAL
from gearsolid.pairs.engagement import Engagement, engage
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.part import Body, Boss, Part
from gearsolid.shop.bore import Bore


@dataclass(frozen=True)
class OutputRollers:
    """The rollers (or plain pins) of the output flange that reach through holes of the discs.

    Args:
        count: [-].
        circle_radius: of their axes [mm].
        radius: of a roller [mm].
        hole_clearance: play of a roller in its disc hole on the diameter [mm].
    """

    count: int
    circle_radius: float
    radius: float
    hole_clearance: float = 0.0

    def __post_init__(self) -> None:
        if self.count < 2:
            raise DesignError(f"the output has {self.count} rollers; at least 2 are needed, 6 to 12 are usual")
        for name in ("circle_radius", "radius"):
            if not getattr(self, name) > 0:
                raise DesignError(f"roller {name} is {getattr(self, name):g} mm; it must be above 0")
        if not self.hole_clearance >= 0:
            raise DesignError(f"roller hole clearance is {self.hole_clearance:g} mm; it must be 0 or more")

    def hole_radius(self, eccentricity: float) -> float:
        """Radius of the disc holes [mm]: the roller plus the eccentricity plus half the clearance."""
        return self.radius + eccentricity + self.hole_clearance / 2

    @property
    def play_deg(self) -> float:
        """Play of the output in the holes [deg]: clearance over circle radius."""
        return 180 / pi * self.hole_clearance / self.circle_radius


@dataclass(frozen=True)
class Stack:
    """How a reducer is laid out along its axis, from the output flange upward.

    Args:
        disc_width: [mm].
        gap: between the flange, the discs and the ends of ring and rollers [mm].
        flange_width: [mm].
    """

    disc_width: float
    gap: float
    flange_width: float

    def __post_init__(self) -> None:
        for name in ("disc_width", "gap", "flange_width"):
            if not getattr(self, name) > 0:
                raise DesignError(f"{name} is {getattr(self, name):g} mm; it must be above 0")

    def disc_z(self, index: int) -> float:
        """Bottom of a disc [mm]; the ring stands on z = 0."""
        return self.gap + index * (self.disc_width + self.gap)

    def height(self, discs: int) -> float:
        """Width of ring and rollers [mm]."""
        return self.disc_z(discs)


@dataclass(frozen=True)
class CrankDiscs:
    """Like discs on cranks spread evenly round the input shaft, driving one set of output rollers.

    Args:
        rim: boundary of a disc, `order` teeth (lobes or pins).
        difference: tooth difference to the ring [-].
        eccentricity: throw of the cranks [mm].
        count: number of discs [-].
        rollers: the output rollers.
        stack: widths along the axis.
        bore: hole for the eccentric's bearing in each disc.
        output_bore: shaft hole of the output flange.

    Raises:
        DesignError: holes, bores and rollers run into each other; the message gives the numbers.
    """

    rim: Outline
    difference: int
    eccentricity: float
    count: int
    rollers: OutputRollers
    stack: Stack
    bore: Bore
    output_bore: Bore

    def __post_init__(self) -> None:
        if not 1 <= self.count <= 4:
            raise DesignError(f"the reducer has {self.count} discs; 1 to 4 are possible, 2 are usual")
        hole, circle = self._hole_radius, self.rollers.circle_radius
        if hole >= circle * sin(pi / self.rollers.count):
            raise DesignError(
                f"{self.rollers.count} roller holes of {2 * hole:.4g} mm run into each other on a circle of "
                f"{circle:g} mm radius: take fewer or smaller rollers, or less eccentricity"
            )
        if circle + hole >= self.rim.r_min or circle - hole <= self.bore.reach:
            raise DesignError(
                f"roller holes of {2 * hole:.4g} mm on a circle of {circle:g} mm radius must lie between the disc bore "
                f"({self.bore.reach:.4g} mm) and the valleys ({self.rim.r_min:.4g} mm): change the roller circle, the "
                "roller size or the bore"
            )
        if circle - self.rollers.radius <= self.output_bore.reach:
            raise DesignError(
                f"the output bore reaches {self.output_bore.reach:.4g} mm from the axis, into the rollers that start "
                f"at {circle - self.rollers.radius:.4g} mm: take a smaller bore"
            )

    @property
    def _hole_radius(self) -> float:
        return self.rollers.hole_radius(self.eccentricity)

    @property
    def rate(self) -> float:
        """Turns of discs and output per input turn, the ring held [-]."""
        return -self.difference / self.rim.order

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the discs' parts."""
        return tuple(f"disc {k + 1}" for k in range(self.count))

    @property
    def identical(self) -> bool:
        """Whether all discs are drilled alike."""
        return len(set(self.hole_patterns)) == 1

    @cached_property
    def _drillings(self) -> tuple[tuple[float, int], ...]:
        """For each disc the turn of its roller holes against its teeth [rad], and the whole teeth it is set on by.

        Setting a disc on by whole teeth costs nothing, so each disc takes the setting that makes its holes fall where
        the first disc's are; where none does, its holes are drilled turned.
        """
        return tuple(self._drilling(k) for k in range(self.count))

    def _drilling(self, index: int) -> tuple[float, int]:
        # In units of a turn / (discs x teeth x rollers) every angle is whole, so equality is exact.
        teeth, rollers, discs = self.rim.order, self.rollers.count, self.count
        hole_pitch, tooth_pitch, lag = discs * teeth, discs * rollers, index * rollers * self.difference
        best = min(range(hole_pitch), key=lambda j: (lag - j * tooth_pitch) % hole_pitch)
        rest = (lag - best * tooth_pitch) % hole_pitch
        return 2 * pi * rest / (discs * teeth * rollers), best

    @cached_property
    def motions(self) -> tuple[Motion, ...]:
        """How each disc moves."""
        motions = []
        for k, (_, teeth_on) in enumerate(self._drillings):
            crank = 2 * pi * k / self.count
            angle = self.rate * crank + teeth_on * self.rim.pitch_angle
            motions.append(Motion(self.eccentricity, crank, 1.0, angle, self.rate))
        return tuple(motions)

    @property
    def output_motion(self) -> Motion:
        """How the output flange moves."""
        return Motion(rate=self.rate)

    @cached_property
    def hole_patterns(self) -> tuple[Outline, ...]:
        """Roller holes of each disc; discs drilled alike share one outline."""
        by_turn: dict[float, Outline] = {}
        for turn, _ in self._drillings:
            if turn not in by_turn:
                by_turn[turn] = holes(self.rollers.count, self.rollers.circle_radius, self._hole_radius, turn)
        return tuple(by_turn[turn] for turn, _ in self._drillings)

    @cached_property
    def _roller_pattern(self) -> Outline:
        return pins(self.rollers.count, self.rollers.circle_radius, self.rollers.radius)

    @cached_property
    def parts(self) -> tuple[Part, ...]:
        """The discs and the output flange."""
        stack = self.stack
        flange = Body(
            disc(self.rollers.circle_radius + self.rollers.radius + 2 * stack.gap),
            stack.flange_width,
            bore=self.output_bore,
            bosses=(Boss(self._roller_pattern, stack.height(self.count)),),
            z=-stack.flange_width,
        )
        discs = (
            Part(name, self._body(k), motion, BRASS if k % 2 == 0 else TEAL)
            for k, (name, motion) in enumerate(zip(self.names, self.motions, strict=True))
        )
        return (*discs, Part("output", flange, self.output_motion, STEEL))

    def _body(self, index: int) -> Body:
        return Body(
            self.rim,
            self.stack.disc_width,
            holes=(self.hole_patterns[index],),
            bore=self.bore,
            z=self.stack.disc_z(index),
        )

    @cached_property
    def engagements(self) -> tuple[Engagement, ...]:
        """Each disc's holes with the rollers."""
        return tuple(
            engage(name, pattern, motion, "rollers", self._roller_pattern, self.output_motion)
            for name, motion, pattern in zip(self.names, self.motions, self.hole_patterns, strict=True)
        )
