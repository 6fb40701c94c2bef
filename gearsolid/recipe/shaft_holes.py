"""The tables of shaft holes."""

from typing import Literal, Self

from pydantic import model_validator

from gearsolid.recipe.table import Table, entry
from gearsolid.shop.bore import Bore
from gearsolid.shop.fits import hole_limits
from gearsolid.shop.keys import KeySeat, key_for_bore
from gearsolid.shop.keys_inch import KeySection, inch_key_for_bore
from gearsolid.shop.processes import ProcessName, process
from gearsolid.shop.profile_hole import d_hole, double_d_hole, hexagon_hole, square_hole
from gearsolid.shop.shaft_hole import ShaftHole

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
    made_by: ProcessName | None = entry(
        "process whose holes come out small: the bore is drawn larger by what is usually added, and named by its fit",
        default=None,
    )

    @model_validator(mode="after")
    def _needs_bore(self) -> Self:
        if self.bore is None and (self.key or self.chamfer or self.fit or self.made_by):
            raise ValueError(
                "a key, chamfer, fit or made_by is given without a bore; add the key bore, the diameter in mm"
            )
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
        growth = process(self.made_by).hole_growth if self.made_by else 0.0
        return Bore(diameter + growth, self._key_seat(self.bore), self.chamfer, fit, self.second_key)

    def _key_seat(self, bore: float) -> KeySeat | None:
        """The seat the tables give to a nominal bore [mm]."""
        if not self.key:
            return None
        return key_for_bore(bore) if self.key_table == "metric" else inch_key_for_bore(bore, _SECTIONS[self.key_table])


class Profiled(Bored):
    """A table of something on a shaft that may also carry it without a key."""

    bore: float | None = entry(
        "diameter of the shaft hole, or its size across flats when square or hexagonal; no hole when left out",
        "mm",
        None,
        gt=0,
    )
    bore_form: Literal["round", "D", "double D", "square", "hexagon"] = entry(
        "section of the shaft hole, the middle of a flat on the centre line of a tooth", default="round"
    )
    across_flat: float | None = entry(
        "D: from the flat to the far side of the hole, that of the usual motor shaft when left out; double D: from "
        "flat to flat",
        "mm",
        None,
        gt=0,
    )
    corner_relief: float = entry(
        "radius of a hole drilled at each corner of a square or hexagon; sharp corners when 0", "mm", 0.0, ge=0
    )

    @model_validator(mode="after")
    def _fits_form(self) -> Self:
        form, flats, cornered = (
            self.bore_form,
            self.bore_form in ("D", "double D"),
            self.bore_form in ("square", "hexagon"),
        )
        if form != "round" and self.bore is None:
            raise ValueError(f'bore_form = "{form}" is given without a bore; add the key bore, its size in mm')
        if form != "round" and (self.key or self.chamfer or self.fit or self.made_by):
            raise ValueError(
                f'key, chamfer, fit and made_by are for a round bore; leave them out with bore_form = "{form}"'
            )
        if self.across_flat is not None and not flats:
            raise ValueError('across_flat is for bore_form = "D" or "double D"; leave it out or change the form')
        if form == "double D" and self.across_flat is None:
            raise ValueError('bore_form = "double D" needs across_flat, the size from flat to flat in mm')
        if self.corner_relief and not cornered:
            raise ValueError('corner_relief is for bore_form = "square" or "hexagon"; leave it out or change the form')
        return self

    def hole(self) -> ShaftHole | None:
        """The shaft hole the keys describe."""
        if self.bore is None:
            return None
        match self.bore_form:
            case "D":
                return d_hole(self.bore, self.across_flat)
            case "double D":
                return double_d_hole(self.bore, self.across_flat or 0.0)
            case "square":
                return square_hole(self.bore, self.corner_relief)
            case "hexagon":
                return hexagon_hole(self.bore, self.corner_relief)
        return self.shaft_hole()
