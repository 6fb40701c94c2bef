"""A pin-wheel reducer: cycloid discs on an eccentric shaft, rolling in ring pins and driving output rollers."""

from dataclasses import dataclass
from functools import cached_property
from math import pi

import numpy as np

from gearsolid.curves.loops import disc, holes, pins
from gearsolid.curves.outline import Outline
from gearsolid.errors import DesignError
from gearsolid.pairs.colours import BRASS, PEARL, SLATE, STEEL, TEAL
from gearsolid.pairs.engagement import Engagement, engage
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.part import Body, Boss, Part
from gearsolid.shop.bore import Bore
from gearsolid.teeth.pinwheel import CycloidDisc, PinRing


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

    def __post_init__(self) -> None:
        if not 1 <= self.discs <= 4:
            raise DesignError(f"the reducer has {self.discs} discs; 1 to 4 are possible, 2 are usual")
        if self.ring.pins != self.disc.lobes + 1:
            raise DesignError(
                f"the ring has {self.ring.pins} pins and the disc {self.disc.lobes} lobes; the ring must have one pin "
                f"more than the disc has lobes: {self.disc.lobes + 1}"
            )
        if abs(self.ring.pin_circle_radius - self.disc.pin_circle_radius) > self.disc.eccentricity:
            raise DesignError(
                f"the disc was made for a pin circle of {self.disc.pin_circle_radius:g} mm radius; the ring has "
                f"{self.ring.pin_circle_radius:g} mm"
            )
        self._check_holes()
        self._check_rim()

    def _check_holes(self) -> None:
        hole, circle = self._hole_radius, self.rollers.circle_radius
        if hole >= circle * np.sin(pi / self.rollers.count):
            raise DesignError(
                f"{self.rollers.count} roller holes of {2 * hole:.4g} mm run into each other on a circle of "
                f"{circle:g} mm radius: take fewer or smaller rollers, or less eccentricity"
            )
        if circle + hole >= self.disc.root_radius or circle - hole <= self.disc_bore.reach:
            raise DesignError(
                f"roller holes of {2 * hole:.4g} mm on a circle of {circle:g} mm radius must lie between the disc bore "
                f"({self.disc_bore.reach:.4g} mm) and the valleys ({self.disc.root_radius:.4g} mm): change the roller "
                "circle, the roller size or the bore"
            )
        if circle - self.rollers.radius <= self.output_bore.reach:
            raise DesignError(
                f"the output bore reaches {self.output_bore.reach:.4g} mm from the axis, into the rollers that start "
                f"at {circle - self.rollers.radius:.4g} mm: take a smaller bore"
            )

    def _check_rim(self) -> None:
        least = 2 * (self.ring.pin_circle_radius + self.ring.pin_radius)
        if self.rim_diameter <= least:
            raise DesignError(
                f"the rim diameter is {self.rim_diameter:g} mm; the pin pockets reach {least:g} mm: take a larger rim"
            )

    @property
    def _hole_radius(self) -> float:
        return self.rollers.hole_radius(self.disc.eccentricity)

    @property
    def title(self) -> str:
        return f"pin-wheel reducer, {self.discs} discs of {self.disc.lobes} lobes in {self.ring.pins} pins"

    @property
    def ratio(self) -> float:
        return -float(self.disc.lobes)

    @property
    def centre_distance(self) -> float:
        return self.disc.eccentricity

    @cached_property
    def _drillings(self) -> tuple[tuple[float, int], ...]:
        """For each disc the turn of its roller holes against its lobes [rad], and the whole lobes it is set on by.

        Setting a disc on by whole lobes costs nothing, so each disc takes the setting that makes its holes fall where
        the first disc's are; where none does, its holes are drilled turned.
        """
        return tuple(self._drilling(k) for k in range(self.discs))

    def _drilling(self, index: int) -> tuple[float, int]:
        # In units of a turn / (discs x lobes x rollers) every angle is whole, so equality is exact.
        lobes, rollers, discs = self.disc.lobes, self.rollers.count, self.discs
        hole_pitch, lobe_pitch, lag = discs * lobes, discs * rollers, index * rollers
        best = min(range(hole_pitch), key=lambda j: (lag - j * lobe_pitch) % hole_pitch)
        rest = (lag - best * lobe_pitch) % hole_pitch
        return 2 * pi * rest / (discs * lobes * rollers), best

    @cached_property
    def _disc_motions(self) -> tuple[Motion, ...]:
        motions = []
        for k, (_, lobes_on) in enumerate(self._drillings):
            crank = 2 * pi * k / self.discs
            angle = -crank / self.disc.lobes + lobes_on * 2 * pi / self.disc.lobes
            motions.append(Motion(self.disc.eccentricity, crank, 1.0, angle, -1 / self.disc.lobes))
        return tuple(motions)

    @property
    def _output_motion(self) -> Motion:
        return Motion(rate=-1 / self.disc.lobes)

    @cached_property
    def _hole_patterns(self) -> tuple[Outline, ...]:
        by_turn: dict[float, Outline] = {}
        for turn, _ in self._drillings:
            if turn not in by_turn:
                by_turn[turn] = holes(self.rollers.count, self.rollers.circle_radius, self._hole_radius, turn)
        return tuple(by_turn[turn] for turn, _ in self._drillings)

    @cached_property
    def _roller_pattern(self) -> Outline:
        return pins(self.rollers.count, self.rollers.circle_radius, self.rollers.radius)

    @property
    def identical_discs(self) -> bool:
        """Whether all discs are drilled alike."""
        return len(set(self._hole_patterns)) == 1

    @property
    def disc_names(self) -> tuple[str, ...]:
        """Names of the discs' parts."""
        return tuple(f"disc {k + 1}" for k in range(self.discs))

    @cached_property
    def parts(self) -> tuple[Part, ...]:
        stack, height = self.stack, self.stack.height(self.discs)
        ring = Body(disc(self.rim_diameter / 2), height, holes=(self.ring.pocketed,))
        pin = Body(disc(self.ring.pin_radius), height)
        flange_radius = self.rollers.circle_radius + self.rollers.radius + 2 * stack.gap
        flange = Body(
            disc(flange_radius),
            stack.flange_width,
            bore=self.output_bore,
            bosses=(Boss(self._roller_pattern, height),),
            z=-stack.flange_width,
        )
        return (
            Part("ring", ring, Motion(), SLATE),
            *(
                Part(
                    f"ring pin {k + 1}",
                    pin,
                    Motion(centre_radius=self.ring.pin_circle_radius, centre_angle=2 * pi * k / self.ring.pins),
                    PEARL,
                )
                for k in range(self.ring.pins)
            ),
            *(
                Part(name, self._disc_body(k), motion, BRASS if k % 2 == 0 else TEAL)
                for k, (name, motion) in enumerate(zip(self.disc_names, self._disc_motions, strict=True))
            ),
            Part("output", flange, self._output_motion, STEEL),
        )

    def _disc_body(self, index: int) -> Body:
        return Body(
            self.disc.outline,
            self.stack.disc_width,
            holes=(self._hole_patterns[index],),
            bore=self.disc_bore,
            z=self.stack.disc_z(index),
        )

    @cached_property
    def engagements(self) -> tuple[Engagement, ...]:
        still, output = Motion(), self._output_motion
        found = []
        for name, motion, pattern in zip(self.disc_names, self._disc_motions, self._hole_patterns, strict=True):
            rim = self.disc.outline
            found += [
                engage("ring pins", self.ring.pattern, still, name, rim, motion),
                engage(name, pattern, motion, "rollers", self._roller_pattern, output),
                engage("ring", self.ring.pocketed, still, name, rim, motion, must_touch=False),
            ]
        return tuple(found)
