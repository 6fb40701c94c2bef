"""The tables of toothed members."""

from typing import Literal, Self

from pydantic import model_validator

from gearsolid.pairs.blank import Blank
from gearsolid.recipe.table import Table, entry
from gearsolid.shop.bore import Bore
from gearsolid.shop.fits import hole_limits
from gearsolid.shop.keys import KeySeat, key_for_bore
from gearsolid.shop.keys_inch import KeySection, inch_key_for_bore
from gearsolid.teeth.cycloidal import CycloidalGear
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear

_SECTIONS: dict[str, KeySection] = {"inch": "preferred", "inch square": "square", "inch rectangular": "rectangular"}


class Bored(Table):
    """A table of something on a shaft."""

    bore: float | None = entry("diameter of the shaft hole; no hole when left out", "mm", None, gt=0)
    key: bool = entry("whether the bore has the keyway its table gives it", default=False)
    key_table: Literal["metric", "inch", "inch square", "inch rectangular"] = entry(
        "table the key is taken from: ISO/R 773, or ANSI B17.1 with the section it prefers, square or rectangular",
        default="metric",
    )
    second_key: float | None = entry(
        "angle from the first key to a second one of the same size, usually 90 or 180", "deg", None, gt=0, lt=360
    )
    chamfer: float = entry("45 degree chamfer at both mouths of the bore", "mm", 0.0, ge=0)
    fit: str | None = entry("tolerance class of the bore by ISO 286-2, as H7", default=None)
    drawn: Literal["nominal", "middle"] = entry(
        "size at which the solid's bore is drawn: the nominal one, or half way between the limits of its fit",
        default="nominal",
    )

    @model_validator(mode="after")
    def _needs_bore(self) -> Self:
        if self.bore is None and (self.key or self.chamfer or self.fit):
            raise ValueError("a key, chamfer or fit is given without a bore; add the key bore, the diameter in mm")
        if not self.key and (self.second_key or self.key_table != "metric"):
            raise ValueError("second_key or key_table is given without a key; add key = true")
        if self.drawn == "middle" and not self.fit:
            raise ValueError('drawn = "middle" needs the limits of a fit; add the key fit, as in fit = "H7"')
        return self

    def shaft_hole(self) -> Bore | None:
        """The bore the keys describe."""
        if self.bore is None:
            return None
        fit = hole_limits(self.bore, self.fit) if self.fit else None
        diameter = fit.middle if fit and self.drawn == "middle" else self.bore
        return Bore(diameter, self._key_seat(self.bore), self.chamfer, fit, self.second_key)

    def _key_seat(self, bore: float) -> KeySeat | None:
        """The seat the tables give to a nominal bore [mm]."""
        if not self.key:
            return None
        return key_for_bore(bore) if self.key_table == "metric" else inch_key_for_bore(bore, _SECTIONS[self.key_table])


class _Size(Table):
    teeth: int = entry("number of teeth", ge=3)
    face_width: float = entry("width of the teeth along the axis", "mm", gt=0)


class InvoluteTable(Bored, _Size):
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
            tooth_thinning=self.tooth_thinning,
            tip_shortening=self.tip_shortening,
        )

    def blank(self) -> Blank:
        """The body before teeth."""
        return Blank(self.face_width, self.shaft_hole())


class RingTable(_Size):
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
            tooth_thinning=self.tooth_thinning,
            tip_shortening=self.tip_shortening,
        )

    def blank(self) -> Blank:
        """The body before teeth."""
        return Blank(self.face_width, rim_diameter=self.rim_diameter)


class ClockTable(Bored, _Size):
    """A wheel or pinion of a clock, whose teeth follow from the counts."""

    teeth: int = entry("number of teeth or leaves", ge=6)

    def blank(self) -> Blank:
        """The body before teeth."""
        return Blank(self.face_width, self.shaft_hole())


class CycloidalTable(Bored, _Size):
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
        return Blank(self.face_width, self.shaft_hole())
