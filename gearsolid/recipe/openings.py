"""The tables of what is left out of a wheel between bore and teeth."""

from gearsolid.curves.outline import Outline
from gearsolid.recipe.table import Table, entry, of_table
from gearsolid.shop.openings import Crossings, hole_circle


class CrossingsTable(Table):
    """Openings between the arms of a wheel."""

    arms: int = entry("number of arms, one on the centre line of a tooth; clock wheels have 3 to 6", ge=3, le=12)
    hub_diameter: float = entry("diameter of the circle on which the openings end inside", "mm", gt=0)
    rim_diameter: float = entry("diameter of the circle on which they end outside, the inside of the rim", "mm", gt=0)
    arm_width: float = entry("width of an arm at the hub circle", "mm", gt=0)
    arm_width_at_rim: float | None = entry(
        "width of an arm at the rim circle; straight arms when left out", "mm", None, gt=0
    )
    fillet: float = entry("radius of the corners of an opening", "mm", gt=0)

    def outline(self) -> Outline:
        """The openings."""
        crossings = Crossings(
            self.arms, self.hub_diameter, self.rim_diameter, self.arm_width, self.fillet, self.arm_width_at_rim
        )
        return crossings.outline


class HolesTable(Table):
    """Round holes on a circle about the axis."""

    count: int = entry("number of holes", ge=1)
    circle_diameter: float = entry("diameter of the circle through their centres", "mm", gt=0)
    diameter: float = entry("diameter of a hole", "mm", gt=0)
    angle: float = entry("where the first hole stands, from the centre line of the keyway", "deg", 0.0)

    def outline(self) -> Outline:
        """The holes."""
        return hole_circle(self.count, self.circle_diameter, self.diameter, self.angle)


class Opened(Table):
    """A table of something with openings."""

    crossings: CrossingsTable | None = entry("arms with openings between them, as clock wheels have", default=None)
    holes: HolesTable | None = entry("holes for bolts, or to lighten the wheel", default=None)

    def openings(self) -> tuple[Outline, ...]:
        """The openings the keys describe."""
        found = []
        for name, table in (("crossings", self.crossings), ("holes", self.holes)):
            if table:
                with of_table(name):
                    found.append(table.outline())
        return tuple(found)
