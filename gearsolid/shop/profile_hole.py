"""Shaft holes that carry a torque without a key: with one flat or two, square, hexagonal."""

import csv
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from math import acos, pi, sin, tan

from gearsolid.curves.curve import Curve
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.errors import DesignError


@dataclass(frozen=True)
class ProfileHole:
    """A shaft hole of constant section, the middle of a flat on the +x axis, where members have a tooth.

    Args:
        diameter: of the round part, or across flats where there is none [mm].
        outline: the section, clockwise: material outside.
        callout: the size as a drawing states it [mm].
    """

    diameter: float
    outline: Outline
    callout: str

    @property
    def radius(self) -> float:
        """Half the diameter [mm]."""
        return self.diameter / 2

    @property
    def chamfer(self) -> float:
        """These holes have none."""
        return 0.0

    @property
    def reach(self) -> float:
        """Largest distance of removed material from the axis [mm]: a corner."""
        return self.outline.r_max

    @property
    def mouth(self) -> Outline:
        """Boundary of the hole in the end faces: the section."""
        return self.outline

    def volume(self, width: float) -> float:
        """Volume taken out of a body over a length [mm] of hole [mm3]."""
        return -self.outline.area * width


def d_hole(diameter: float, across_flat: float | None = None) -> ProfileHole:
    """A hole with one flat.

    Args:
        diameter: [mm].
        across_flat: from the flat to the far side of the hole [mm]; `usual_flat` of the diameter when left out.

    Raises:
        DesignError: no flat is usual for this diameter, or the flat misses the hole or passes its axis.
    """
    flat = usual_flat(diameter) if across_flat is None else across_flat
    if not 0 < diameter / 2 < flat < diameter:
        raise DesignError(
            f"a D-shaped hole of {diameter:g} mm measures {flat:g} mm from its flat to the far side; that must lie "
            f"between the radius, {diameter / 2:g} mm, and the diameter"
        )
    r, x = diameter / 2, flat - diameter / 2
    half = acos(x / r)
    curves = (Arc(0, r, -half, half - 2 * pi), _down(x, r * sin(half)))
    return ProfileHole(diameter, _outline(1, *curves), f"⌀ {diameter:g}, {flat:g} across the flat")


def double_d_hole(diameter: float, across_flats: float) -> ProfileHole:
    """A hole with two flats opposite each other.

    Args:
        diameter: [mm].
        across_flats: [mm].

    Raises:
        DesignError: the flats miss the hole or meet.
    """
    if not 0 < across_flats < diameter:
        raise DesignError(
            f"a hole of {diameter:g} mm with two flats measures {across_flats:g} mm across them; that must lie between "
            "0 and the diameter"
        )
    r, x = diameter / 2, across_flats / 2
    half = acos(x / r)
    curves = (_down(x, r * sin(half)), Arc(0, r, -half, half - pi))
    return ProfileHole(diameter, _outline(2, *curves), f"⌀ {diameter:g}, {across_flats:g} across flats")


def square_hole(across_flats: float, relief: float = 0.0) -> ProfileHole:
    """A square hole; `across_flats` and `relief` [mm] as for `hexagon_hole`, and the same refusals."""
    return _polygon(4, across_flats, relief, "□")


def hexagon_hole(across_flats: float, relief: float = 0.0) -> ProfileHole:
    """A hexagonal hole.

    Args:
        across_flats: [mm].
        relief: radius of a hole drilled at each corner [mm], so that a bar with sharp corners goes in; 0 for none.

    Raises:
        DesignError: a size is not above 0, or the drilled corners meet.
    """
    return _polygon(6, across_flats, relief, "hexagon")


def _polygon(sides: int, across_flats: float, relief: float, sign: str) -> ProfileHole:
    if not across_flats > 0:
        raise DesignError(f"the size across flats is {across_flats:g} mm; it must be above 0")
    x, turn = across_flats / 2, 2 * pi / sides
    y = x * tan(turn / 2)
    if not 0 <= relief < y:
        raise DesignError(
            f"corners drilled with a radius of {relief:g} mm meet on sides {2 * y:.4g} mm long; the radius must be 0 "
            f"or more and below {y:.4g} mm"
        )
    curves: list[Curve] = [_down(x, y - relief)]
    if relief:
        curves.append(Arc(complex(x, -y), relief, pi / 2, -pi / 2 - turn))
    drilled = f", corners drilled R {relief:g}" if relief else ""
    return ProfileHole(across_flats, _outline(sides, *curves), f"{sign} {across_flats:g}{drilled}")


def _down(x: float, y: float) -> Segment:
    """The flat at x, from y down to -y [mm]."""
    return Segment(complex(x, y), complex(x, -y))


def _outline(order: int, *curves: Curve) -> Outline:
    return Outline(tuple(Piece(c, "hole") for c in curves), order)


@cache
def _usual() -> dict[float, float]:
    with files("gearsolid.shop").joinpath("data/d-shafts.csv").open(encoding="ascii") as lines:
        return {float(row["shaft_d_mm"]): float(row["across_flat_mm"]) for row in csv.DictReader(lines)}


def usual_flat(diameter: float) -> float:
    """Size across the flat of a small motor's shaft [mm]: common practice, no standard; measure the shaft.

    Args:
        diameter: of the shaft [mm].

    Raises:
        DesignError: none is usual for this diameter.
    """
    if diameter not in _usual():
        known = ", ".join(f"{d:g}" for d in _usual())
        raise DesignError(
            f"no flat is usual on a shaft of {diameter:g} mm; known are {known} mm: measure the shaft, give the size "
            "across its flat"
        )
    return _usual()[diameter]
