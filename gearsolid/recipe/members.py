"""The tables of toothed members."""

from gearsolid.pairs.blank import Blank
from gearsolid.recipe.openings import Opened
from gearsolid.recipe.shaft_holes import Profiled
from gearsolid.recipe.table import Table, entry
from gearsolid.teeth.cycloidal import CycloidalGear
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear


class _Size(Table):
    teeth: int = entry("number of teeth", ge=3)
    face_width: float = entry("width of the teeth along the axis", "mm", gt=0)


class _Involute(_Size):
    helix_angle: float = entry(
        "helix angle at the reference circle, positive right-hand, negative left-hand; members that work together have "
        "equal angles: of opposite hand on two external members, of the same hand on a ring and what runs in it",
        "deg",
        0.0,
        ge=-60,
        le=60,
    )


class InvoluteTable(Opened, Profiled, _Involute):
    """An external involute member."""

    profile_shift: float = entry("profile shift coefficient; positive makes the tooth thicker", default=0.0)
    tooth_thinning: float = entry(
        "how much thinner each tooth is, as an arc of the reference circle: this member's share of the play", "mm", 0.0
    )
    tip_shortening: float = entry("how much the tip is cut short", "mm", 0.0)

    def member(self, module: float, pressure_angle: float) -> InvoluteGear:
        """The member, given the stage's module [mm] and pressure angle [deg]."""
        return InvoluteGear(
            self.teeth,
            module,
            pressure_angle,
            self.profile_shift,
            self.helix_angle,
            tooth_thinning=self.tooth_thinning,
            tip_shortening=self.tip_shortening,
        )

    def blank(self) -> Blank:
        """The body before teeth."""
        return Blank(self.face_width, self.hole(), openings=self.openings())


class RingTable(_Involute):
    """An involute annulus."""

    rim_diameter: float | None = entry(
        "outside diameter; two tooth depths beyond the root circle when left out", "mm", None, gt=0
    )
    profile_shift: float = entry(
        "profile shift coefficient; positive makes the tooth thicker, towards the axis", default=0.0
    )
    tooth_thinning: float = entry("how much thinner each tooth is, as an arc of the reference circle", "mm", 0.0)
    tip_shortening: float = entry("how much the tip is cut short", "mm", 0.0)

    def member(self, module: float, pressure_angle: float) -> InternalGear:
        """The member, given the stage's module [mm] and pressure angle [deg]."""
        return InternalGear(
            self.teeth,
            module,
            pressure_angle,
            self.profile_shift,
            self.helix_angle,
            tooth_thinning=self.tooth_thinning,
            tip_shortening=self.tip_shortening,
        )

    def blank(self) -> Blank:
        """The body before teeth."""
        return Blank(self.face_width, rim_diameter=self.rim_diameter)


class ClockTable(Opened, Profiled, _Size):
    """A wheel or pinion of a clock, whose teeth follow from the counts."""

    teeth: int = entry("number of teeth or leaves", ge=6)

    def blank(self) -> Blank:
        """The body before teeth."""
        return Blank(self.face_width, self.hole(), openings=self.openings())


class CycloidalTable(Opened, Profiled, _Size):
    """A cycloidal member of a clock or instrument."""

    teeth: int = entry("number of teeth or leaves", ge=5)
    addendum: float = entry("height of the tip above the reference circle", "mm", gt=0)
    dedendum: float = entry("depth of the root below the reference circle", "mm", gt=0)
    describing_radius: float | None = entry(
        "radius of the circle that describes this member's dedendum and its mate's addendum; half the reference radius "
        "when left out, which makes the dedendum radial",
        "mm",
        None,
        gt=0,
    )
    tooth_thinning: float = entry("how much thinner each tooth is, as an arc of the reference circle", "mm", 0.0, ge=0)
    root_fillet: float = entry("radius between flank and root circle; a corner when 0", "mm", 0.0, ge=0)

    def describing(self, module: float) -> float:
        """Radius of the describing circle [mm], given the module [mm]."""
        return self.describing_radius if self.describing_radius is not None else module * self.teeth / 4

    def member(self, module: float, mate_describing: float) -> CycloidalGear:
        """The member, given the module [mm] and the mate's describing radius [mm]."""
        return CycloidalGear(
            self.teeth,
            module,
            addendum_circle=mate_describing,
            dedendum_circle=self.describing(module),
            addendum=self.addendum,
            dedendum=self.dedendum,
            tooth_thinning=self.tooth_thinning,
            root_fillet=self.root_fillet,
        )

    def blank(self) -> Blank:
        """The body before teeth."""
        return Blank(self.face_width, self.hole(), openings=self.openings())
