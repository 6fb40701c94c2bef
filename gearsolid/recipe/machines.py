"""The machines a recipe can ask for, one schema each."""

from abc import abstractmethod
from dataclasses import replace
from math import radians
from typing import Literal, Protocol, Self

from pydantic import model_validator

from gearsolid.pairs.blank import DOUBLE_HELICAL, HELICAL, Blank, body_of
from gearsolid.pairs.eccentric_shaft import EccentricShaft
from gearsolid.pairs.helix import member_body
from gearsolid.pairs.machine import Machine
from gearsolid.pairs.part import Groove
from gearsolid.pairs.planetary import PlanetaryStage
from gearsolid.pairs.reducer import OutputRollers, PinWheelReducer, Stack
from gearsolid.pairs.spur_pair import SpurPair
from gearsolid.recipe.members import ClockTable, CycloidalTable, InvoluteTable, RingTable
from gearsolid.recipe.shaft_holes import Bored
from gearsolid.recipe.table import Table, entry, of_table
from gearsolid.shop.bore import Bore
from gearsolid.teeth.clock import cycloidal_pair, ogival_pair
from gearsolid.teeth.clock_pair import ClockPair, Drives
from gearsolid.teeth.involute_relations import centre_distance
from gearsolid.teeth.member import Member
from gearsolid.teeth.pinwheel import CycloidDisc, PinRing

_NAME = r"^[A-Za-z][A-Za-z0-9 -]*$"


class MachineTable(Table):
    """The top level of a recipe."""

    name: str = entry("name of the design, heads the report", min_length=1, max_length=80)
    machine: str = entry("kind of machine")

    @abstractmethod
    def build(self) -> Machine:
        """The machine the recipe describes.

        Raises:
            DesignError: it cannot exist; the message names the table.
        """


class _InvoluteStage(MachineTable):
    module: float = entry("module of all members, normal to the teeth", "mm", gt=0)
    pressure_angle: float = entry("pressure angle of all members, normal to the teeth", "deg", 20.0, ge=5, le=40)
    centre_distance: float | None = entry(
        "distance of the working axes; when left out, the one at which teeth that are not thinned have no play",
        "mm",
        None,
        gt=0,
    )

    def _distance(self, z1: int, z2: int, shift_sum: float, helix_angle: float) -> float:
        if self.centre_distance is not None:
            return self.centre_distance
        angles = radians(self.pressure_angle), radians(helix_angle)
        return abs(centre_distance(z1, z2, shift_sum, *angles, module=self.module))


class _Named(Table):
    name: str | None = entry(
        "what the part is called: letters, digits, spaces and hyphens; the table's name when left out",
        default=None,
        pattern=_NAME,
    )


class InvoluteMemberTable(_Named, InvoluteTable):
    """An external involute member with a name of its own."""

    double_helical: bool = entry(
        "whether the teeth turn back at the middle of the face width, where both members need it; the helix angle is "
        "that of the lower half",
        default=False,
    )
    groove_width: float | None = entry(
        "width of a relief groove between the two halves of double helical teeth, for hob or cutter to run out in; no "
        "groove when left out",
        "mm",
        None,
        gt=0,
    )
    groove_depth: float = entry("depth of that groove below the root circle", "mm", 0.5, gt=0)

    @model_validator(mode="after")
    def _needs_helix(self) -> Self:
        if self.groove_width and not self.double_helical:
            raise ValueError("groove_width needs double_helical = true; other teeth have no middle to relieve")
        if self.double_helical and not self.helix_angle:
            raise ValueError(
                "double_helical needs a helix_angle that is not 0; 20 to 30 deg are usual, common practice"
            )
        return self

    def blank(self) -> Blank:
        """The body before teeth."""
        groove = Groove(self.groove_width, self.groove_depth) if self.groove_width else None
        return replace(super().blank(), course=DOUBLE_HELICAL if self.double_helical else HELICAL, groove=groove)


class CycloidalMemberTable(_Named, CycloidalTable):
    """A cycloidal member with a name of its own."""


class InvolutePair(_InvoluteStage):
    """Two external involute members; the driver turns with the input."""

    machine: Literal["involute-pair"] = entry("kind of machine")
    driver: InvoluteMemberTable = entry("the member on the input shaft")
    driven: InvoluteMemberTable = entry("its mate")

    @model_validator(mode="after")
    def _two_names(self) -> Self:
        _check_names(self.driver, self.driven)
        return self

    def build(self) -> SpurPair:
        driver, driver_blank = _made("driver", self.driver, self.module, self.pressure_angle)
        driven, driven_blank = _made("driven", self.driven, self.module, self.pressure_angle)
        shifts = self.driver.profile_shift + self.driven.profile_shift
        distance = self._distance(driver.teeth, driven.teeth, shifts, self.driver.helix_angle)
        names = self.driver.name or "driver", self.driven.name or "driven"
        return SpurPair(driver, driven, distance, driver_blank, driven_blank, *names)


class RingPair(_InvoluteStage):
    """An involute pinion that drives an annulus from inside."""

    machine: Literal["ring-pair"] = entry("kind of machine")
    pinion: InvoluteTable = entry("the member on the input shaft")
    ring: RingTable = entry("the annulus it drives")

    def build(self) -> SpurPair:
        pinion, pinion_blank = _made("pinion", self.pinion, self.module, self.pressure_angle)
        ring, ring_blank = _made("ring", self.ring, self.module, self.pressure_angle)
        shifts = self.pinion.profile_shift + self.ring.profile_shift
        distance = self._distance(pinion.teeth, -ring.teeth, shifts, self.pinion.helix_angle)
        return SpurPair(pinion, ring, distance, pinion_blank, ring_blank, "pinion", "ring")


class CycloidalPair(MachineTable):
    """Two cycloidal members, every proportion chosen freely; the driver turns with the input."""

    machine: Literal["cycloidal-pair"] = entry("kind of machine")
    module: float = entry("module of both members", "mm", gt=0)
    centre_distance: float | None = entry(
        "distance of the axes (depthing); the sum of the reference radii when left out", "mm", None, gt=0
    )
    driver: CycloidalMemberTable = entry("the member on the input arbor")
    driven: CycloidalMemberTable = entry("its mate")

    @model_validator(mode="after")
    def _two_names(self) -> Self:
        _check_names(self.driver, self.driven)
        return self

    def build(self) -> SpurPair:
        circles = self.driver.describing(self.module), self.driven.describing(self.module)
        driver, driver_blank = _made("driver", self.driver, self.module, circles[1])
        driven, driven_blank = _made("driven", self.driven, self.module, circles[0])
        distance = self.centre_distance
        if distance is None:
            distance = driver.reference_radius + driven.reference_radius
        names = self.driver.name or "driver", self.driven.name or "driven"
        return SpurPair(driver, driven, distance, driver_blank, driven_blank, *names)


class _Clock(MachineTable):
    module: float = entry("module of both members", "mm", gt=0)
    wheel: ClockTable = entry("the wheel; it has more teeth than the pinion")
    pinion: ClockTable = entry("the pinion")

    def _pair(self, members: ClockPair) -> SpurPair:
        with of_table("wheel"):
            wheel_blank = self.wheel.blank()
            body_of(members.wheel.outline, wheel_blank)
        with of_table("pinion"):
            pinion_blank = self.pinion.blank()
            body_of(members.pinion.outline, pinion_blank)
        sides = (members.wheel, wheel_blank, "wheel"), (members.pinion, pinion_blank, "pinion")
        (driver, b1, n1), (driven, b2, n2) = sides if members.drives is Drives.WHEEL else sides[::-1]
        return SpurPair(driver, driven, members.centre_distance, b1, b2, n1, n2)


class ExactClockPair(_Clock):
    """A clock wheel and pinion with exact cycloidal teeth and radial flanks; addenda follow from the counts."""

    machine: Literal["clock-pair"] = entry("kind of machine")
    drives: Literal["wheel", "pinion"] = entry("the member on the input arbor", default="wheel")
    play: float = entry(
        "circumferential play as a share of the pitch, taken from the leaves", default=0.1, ge=0, lt=0.5
    )
    early: float = entry(
        "contact ratio beyond 1 that the driven member's addendum gives, by contact before the line of centres",
        default=0.05,
        gt=0,
        lt=0.5,
    )

    def build(self) -> SpurPair:
        members = cycloidal_pair(
            self.wheel.teeth,
            self.pinion.teeth,
            self.module,
            drives=Drives(self.drives),
            play=self.play,
            early=self.early,
        )
        return self._pair(members)


class OgivalClockPair(_Clock):
    """A practical clock wheel that drives a pinion: radial flanks and tops of arcs, by the counts alone."""

    machine: Literal["ogival-pair"] = entry("kind of machine")
    root_fillet: float = entry("radius at the roots of the wheel; a corner when 0", "mm", 0.0, ge=0)

    def build(self) -> SpurPair:
        return self._pair(ogival_pair(self.wheel.teeth, self.pinion.teeth, self.module, root_fillet=self.root_fillet))


class Planetary(_InvoluteStage):
    """Sun, planets and ring, any of sun, ring and carrier held."""

    machine: Literal["planetary"] = entry("kind of machine")
    planets: int = entry("number of planets", default=3, ge=1)
    fixed: Literal["sun", "ring", "carrier"] = entry("the shaft held", default="ring")
    driver: Literal["sun", "ring", "carrier"] = entry("the shaft that turns with the input", default="sun")
    sun: InvoluteTable = entry("the sun")
    planet: InvoluteTable = entry("every planet")
    ring: RingTable = entry("the ring")

    def build(self) -> PlanetaryStage:
        sun, sun_blank = _made("sun", self.sun, self.module, self.pressure_angle)
        planet, planet_blank = _made("planet", self.planet, self.module, self.pressure_angle)
        ring, ring_blank = _made("ring", self.ring, self.module, self.pressure_angle)
        shifts = self.sun.profile_shift + self.planet.profile_shift
        return PlanetaryStage(
            sun,
            planet,
            ring,
            self.planets,
            self._distance(sun.teeth, planet.teeth, shifts, self.sun.helix_angle),
            sun_blank,
            planet_blank,
            ring_blank,
            self.fixed,
            self.driver,
        )


class PinRingTable(Table):
    """The ring pins in their housing."""

    pins: int = entry("number of pins; one more than each disc has lobes", ge=3)
    pin_circle_radius: float = entry("radius of the circle on which the pins stand", "mm", gt=0)
    pin_radius: float = entry("radius of a pin", "mm", gt=0)
    housing_radius: float = entry("radius of the housing bore between the pins; the lobes must clear it", "mm", gt=0)
    rim_diameter: float = entry("outside diameter of the housing", "mm", gt=0)

    def member(self) -> PinRing:
        """The ring."""
        return PinRing(self.pins, self.pin_circle_radius, self.pin_radius, self.housing_radius)


class DiscTable(Table):
    """The cycloid discs."""

    count: int = entry("number of discs, their cranks spread evenly", default=2, ge=1)
    width: float = entry("width of a disc along the axis", "mm", gt=0)
    bore: float = entry("diameter of the hole for the eccentric or its bearing", "mm", gt=0)
    chamfer: float = entry("45 degree chamfer at both mouths of the bore", "mm", 0.0, ge=0)
    equidistant: float = entry(
        "how far the profile lies inside the exact one everywhere: play, as by a pin radius taken larger", "mm", 0.0
    )
    moved_distance: float = entry(
        "how much larger the pin circle is taken when the profile is generated; negative gives play", "mm", 0.0
    )


class RollerTable(Table):
    """The output rollers, which reach through holes of the discs."""

    count: int = entry("number of rollers", ge=2)
    circle_radius: float = entry("radius of the circle on which they stand", "mm", gt=0)
    radius: float = entry("radius of a roller", "mm", gt=0)
    hole_clearance: float = entry("play of a roller in its hole, on the diameter", "mm", 0.0, ge=0)


class FlangeTable(Bored):
    """The output flange."""

    flange_width: float = entry("width of the flange along the axis", "mm", gt=0)
    bore: float = entry("diameter of the output shaft hole", "mm", gt=0)


class ShaftTable(Table):
    """The eccentric input shaft: a plain shaft with an eccentric pressed on for each disc."""

    diameter: float = entry("diameter of the shaft; it runs free in the output bore", "mm", gt=0)
    eccentric_diameter: float = entry("diameter of the eccentrics: the inner seat of their bearings", "mm", gt=0)
    overhang: float = entry("length of shaft beyond the output flange and beyond the ring", "mm", gt=0)

    def member(self) -> EccentricShaft:
        """The shaft."""
        return EccentricShaft(self.diameter, self.eccentric_diameter, self.overhang)


class PinWheel(MachineTable):
    """Cycloid discs on an eccentric input shaft, rolling in ring pins; rollers carry the output."""

    machine: Literal["pin-wheel"] = entry("kind of machine")
    eccentricity: float = entry("throw of the input cranks", "mm", gt=0)
    gap: float = entry("axial gap between flange, discs and ends", "mm", gt=0)
    ring: PinRingTable = entry("the ring pins and their housing")
    disc: DiscTable = entry("the cycloid discs")
    rollers: RollerTable = entry("the output rollers")
    output: FlangeTable = entry("the output flange")
    shaft: ShaftTable | None = entry("the input shaft; left out where it is bought or drawn elsewhere", default=None)

    def build(self) -> PinWheelReducer:
        with of_table("ring"):
            ring = self.ring.member()
        with of_table("disc"):
            disc = CycloidDisc(
                self.ring.pins - 1,
                self.eccentricity,
                self.ring.pin_circle_radius,
                self.ring.pin_radius,
                self.disc.equidistant,
                self.disc.moved_distance,
            )
            disc_bore = Bore(self.disc.bore, chamfer=self.disc.chamfer)
        with of_table("rollers"):
            t = self.rollers
            rollers = OutputRollers(t.count, t.circle_radius, t.radius, t.hole_clearance)
        with of_table("output"):
            output_bore = self.output.shaft_hole() or Bore(self.output.bore)
        with of_table("shaft"):
            shaft = self.shaft.member() if self.shaft else None
        stack = Stack(self.disc.width, self.gap, self.output.flange_width)
        return PinWheelReducer(
            disc, ring, rollers, stack, disc_bore, output_bore, self.ring.rim_diameter, self.disc.count, shaft
        )


MACHINES: dict[str, type[MachineTable]] = {
    "involute-pair": InvolutePair,
    "ring-pair": RingPair,
    "cycloidal-pair": CycloidalPair,
    "clock-pair": ExactClockPair,
    "ogival-pair": OgivalClockPair,
    "planetary": Planetary,
    "pin-wheel": PinWheel,
}


class _MemberTable(Protocol):
    """A table that gives a toothed member and its blank."""

    def member(self, module: float, system: float, /) -> Member:
        """The member, given the module [mm] and what its tooth system needs from the stage."""
        ...

    def blank(self) -> Blank:
        """The body before teeth."""
        ...


def _made(name: str, table: _MemberTable, module: float, system: float) -> tuple[Member, Blank]:
    """Member and blank of a table, proved to make a body.

    Raises:
        DesignError: they cannot; the message starts with the table's name.
    """
    with of_table(name):
        member, blank = table.member(module, system), table.blank()
        member_body(member, blank)
    return member, blank


def _check_names(driver: _Named, driven: _Named) -> None:
    first, second = driver.name or "driver", driven.name or "driven"
    if first == second:
        raise ValueError(f'driver and driven are both called "{first}"; give one another name')
