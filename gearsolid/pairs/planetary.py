"""A planetary stage: sun, planets on a carrier, and ring, with any of the three held."""

from dataclasses import dataclass
from functools import cached_property
from math import gcd, pi, sin
from typing import Literal

from gearsolid.errors import DesignError
from gearsolid.pairs.blank import Blank, is_ring
from gearsolid.pairs.colours import BRASS, SLATE, STEEL
from gearsolid.pairs.engagement import Engagement, engage
from gearsolid.pairs.helix import check_helices, member_body
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.part import Part
from gearsolid.pairs.phasing import mate_angle, tooth_offset
from gearsolid.teeth.member import Member

Shaft = Literal["sun", "ring", "carrier"]


def speeds(sun_teeth: int, ring_teeth: int, fixed: Shaft, driver: Shaft) -> dict[Shaft, float]:
    """Turns of the three shafts per turn of the driver [-].

    Args:
        sun_teeth: [-].
        ring_teeth: [-], positive.
        fixed: the shaft held.
        driver: the shaft driven, turning once.

    Raises:
        DesignError: one shaft is both held and driven.

    Source: R. Willis, Principles of Mechanism: sun_teeth sun + ring_teeth ring = (sun_teeth + ring_teeth) carrier.
    """
    if fixed == driver:
        raise DesignError(f"the {fixed} is both held and driven: hold one of sun, ring, carrier and drive another")
    weight: dict[Shaft, int] = {"sun": sun_teeth, "ring": ring_teeth, "carrier": -(sun_teeth + ring_teeth)}
    output = next(s for s in weight if s not in (fixed, driver))
    return {fixed: 0.0, driver: 1.0, output: -weight[driver] / weight[output]}


@dataclass(frozen=True)
class PlanetaryStage:
    """One sun, equal planets, one ring. The first planet stands on the +x axis at the start.

    Args:
        sun: external member.
        planet: external member.
        ring: annulus.
        planets: number of planets [-].
        centre_distance: of sun and planet, and of planet and ring [mm].
        sun_blank: body of the sun.
        planet_blank: body of each planet.
        ring_blank: body of the ring.
        fixed: the shaft held.
        driver: the shaft driven.
        planet_turns_deg: extra turn of each planet about its own axis as assembled [deg], for faults; empty for none.

    Raises:
        DesignError: the planets cannot be assembled at equal spacing, collide, or the members do not fit together; the
            message gives the numbers and what would do.

    Source: assembly and neighbour conditions, Elements of Metric Gear Technology, eq. 13-7 and 13-9.
    """

    sun: Member
    planet: Member
    ring: Member
    planets: int
    centre_distance: float
    sun_blank: Blank
    planet_blank: Blank
    ring_blank: Blank
    fixed: Shaft = "ring"
    driver: Shaft = "sun"
    planet_turns_deg: tuple[float, ...] = ()

    def __post_init__(self) -> None:
        if self.planets < 1:
            raise DesignError(f"the stage has {self.planets} planets; it needs at least 1, 3 are usual")
        if not is_ring(self.ring.outline) or is_ring(self.sun.outline) or is_ring(self.planet.outline):
            raise DesignError("a stage needs an external sun, external planets and a ring with internal teeth")
        if not self.centre_distance > 0:
            raise DesignError(f"the centre distance is {self.centre_distance:g} mm; it must be above 0")
        if self.planet_turns_deg and len(self.planet_turns_deg) != self.planets:
            raise DesignError(f"{len(self.planet_turns_deg)} planet turns are given for {self.planets} planets")
        speeds(self.sun.teeth, self.ring.teeth, self.fixed, self.driver)
        check_helices(
            {
                "sun": (self.sun, self.sun_blank),
                "planet": (self.planet, self.planet_blank),
                "ring": (self.ring, self.ring_blank),
            }
        )
        self._check_assembly()
        self._check_neighbours()
        self._check_coaxial()

    def _check_assembly(self) -> None:
        total = self.sun.teeth + self.ring.teeth
        if total % self.planets:
            fitting = [n for n in range(1, 13) if total % n == 0]
            raise DesignError(
                f"{self.planets} equally spaced planets cannot be put in: sun and ring have {self.sun.teeth} + "
                f"{self.ring.teeth} = {total} teeth, which {self.planets} does not divide. Planet counts that fit: "
                f"{', '.join(map(str, fitting))}; or change the counts so that the sum is a multiple of {self.planets}"
            )

    def _check_neighbours(self) -> None:
        if self.planets == 1:
            return
        apart, across = 2 * self.centre_distance * sin(pi / self.planets), 2 * self.planet.tip_radius
        if apart <= across:
            most = max(n for n in range(1, self.planets) if n == 1 or 2 * self.centre_distance * sin(pi / n) > across)
            raise DesignError(
                f"neighbouring planets collide: their axes are {apart:.4g} mm apart and their tip diameter is "
                f"{across:.4g} mm. At most {most} of these planets fit side by side"
            )

    def _check_coaxial(self) -> None:
        inner = self.centre_distance - self.sun.reference_radius - self.planet.reference_radius
        outer = self.ring.reference_radius - self.planet.reference_radius - self.centre_distance
        tooth = self.planet.tip_radius - self.planet.root_radius
        if max(abs(inner), abs(outer)) > tooth / 2:
            raise DesignError(
                f"sun, planets and ring do not share one axis: at a centre distance of {self.centre_distance:g} mm the "
                f"reference circles miss each other by {inner:+.4g} mm at the sun and {outer:+.4g} mm at the ring. "
                f"Without profile shift ring teeth = sun teeth + 2 x planet teeth = "
                f"{self.sun.teeth + 2 * self.planet.teeth}"
            )

    @cached_property
    def _speeds(self) -> dict[Shaft, float]:
        return speeds(self.sun.teeth, self.ring.teeth, self.fixed, self.driver)

    @property
    def output(self) -> Shaft:
        """The shaft that is neither held nor driven."""
        shafts: tuple[Shaft, ...] = ("sun", "ring", "carrier")
        return next(s for s in shafts if s not in (self.fixed, self.driver))

    @property
    def ratio(self) -> float:
        return 1.0 / self._speeds[self.output]

    @property
    def title(self) -> str:
        return (
            f"planetary stage {self.sun.teeth}/{self.planet.teeth}/{self.ring.teeth} with {self.planets} planets, "
            f"{self.fixed} held"
        )

    @property
    def hunting(self) -> bool:
        """Whether every sun tooth meets every planet tooth."""
        return gcd(self.sun.teeth, self.planet.teeth) == 1

    @cached_property
    def _sun_motion(self) -> Motion:
        return Motion(rate=self._speeds["sun"])

    @cached_property
    def _planet_motions(self) -> tuple[Motion, ...]:
        carrier, ratio = self._speeds["carrier"], self.sun.teeth / self.planet.teeth
        spin = carrier - ratio * (self._speeds["sun"] - carrier)
        turns = self.planet_turns_deg or (0.0,) * self.planets
        first = mate_angle(self.planet.teeth, pi, -tooth_offset(self.sun.teeth, 0.0, 0.0))
        motions = []
        for k in range(self.planets):
            position = 2 * pi * k / self.planets
            # A planet carried round the standing sun to its place has turned by the angle of place and the rolling.
            angle = first + position * (1 + ratio)
            motion = Motion(self.centre_distance, position, carrier, angle, spin)
            motions.append(motion.turned(turns[k] * pi / 180))
        return tuple(motions)

    @cached_property
    def _ring_motion(self) -> Motion:
        planet_angle = mate_angle(self.planet.teeth, pi, -tooth_offset(self.sun.teeth, 0.0, 0.0))
        offset = tooth_offset(self.planet.teeth, planet_angle, 0.0)
        return Motion(angle=mate_angle(self.ring.teeth, 0.0, offset), rate=self._speeds["ring"])

    @property
    def planet_names(self) -> tuple[str, ...]:
        """Names of the planets' parts."""
        return tuple(f"planet {k + 1}" for k in range(self.planets))

    @cached_property
    def parts(self) -> tuple[Part, ...]:
        planet = member_body(self.planet, self.planet_blank)
        return (
            Part("sun", member_body(self.sun, self.sun_blank), self._sun_motion, BRASS),
            *(
                Part(name, planet, motion, STEEL)
                for name, motion in zip(self.planet_names, self._planet_motions, strict=True)
            ),
            Part("ring", member_body(self.ring, self.ring_blank), self._ring_motion, SLATE),
        )

    @cached_property
    def engagements(self) -> tuple[Engagement, ...]:
        sun, planet, ring = self.sun.outline, self.planet.outline, self.ring.outline
        named = list(zip(self.planet_names, self._planet_motions, strict=True))
        at_sun = [engage("sun", sun, self._sun_motion, name, planet, motion) for name, motion in named]
        at_ring = [engage(name, planet, motion, "ring", ring, self._ring_motion) for name, motion in named]
        neighbours = (
            zip(named, named[1:] + named[:1], strict=True) if self.planets > 2 else [tuple(named)][: self.planets - 1]
        )
        beside = [engage(n1, planet, m1, n2, planet, m2, must_touch=False) for (n1, m1), (n2, m2) in neighbours]
        return (*at_sun, *at_ring, *beside)
