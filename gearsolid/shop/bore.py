"""The round shaft hole of a body: up to two hub keyways, and 45 degree chamfers at both mouths."""

from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from math import asin, degrees, hypot, log, pi, radians, sqrt

import numpy as np

from gearsolid.curves.curve import Curve
from gearsolid.curves.loops import hole
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.errors import DesignError
from gearsolid.shop.fits import Limits
from gearsolid.shop.keys import KeySeat, key_for_bore


@dataclass(frozen=True)
class Bore:
    """Hole for the shaft, its first keyway centred on the +x axis, where members have a tooth.

    A keyway in line with a tooth leaves the root over it thick (common practice; state it on the drawing).

    Args:
        diameter: of the solid [mm]; a toleranced bore is drawn at the size chosen here: `fit.nominal`, `fit.middle`, or
            larger where the process makes holes small.
        key: key seat, or None for a plain hole.
        chamfer: [mm] along the axis and along the radius, at both mouths.
        fit: limits the made bore must keep, for drawing and report; or None.
        second_key: angle from the first to a second key of the same size [deg], usually 90 or 180; or None.

    Raises:
        DesignError: a size out of range; the message gives the limit.
    """

    diameter: float
    key: KeySeat | None = None
    chamfer: float = 0.0
    fit: Limits | None = None
    second_key: float | None = None

    def __post_init__(self) -> None:
        if not self.diameter > 0:
            raise DesignError(f"the bore diameter is {self.diameter:g} mm; it must be above 0")
        if not self.chamfer >= 0:
            raise DesignError(f"the bore chamfer is {self.chamfer:g} mm; it must be 0 or more")
        if self.key is None:
            if self.second_key is not None:
                raise DesignError("a second key is asked for and no first one; give the key seat too")
            return
        if not self.key.width < self.diameter:
            raise DesignError(
                f"a keyway {self.key.width:g} mm wide does not fit a bore of {self.diameter:g} mm; it must be narrower "
                "than the bore: take the key tabulated for the bore"
            )
        if not self.chamfer < self.key.hub_depth:
            raise DesignError(
                f"the bore chamfer is {self.chamfer:g} mm; it must be below the keyway depth of "
                f"{self.key.hub_depth:g} mm, or it would eat the keyway floor"
            )
        least = degrees(2 * asin(self.key.width / self.diameter))
        if self.second_key is not None and not least < self.second_key < 360 - least:
            raise DesignError(
                f"a second keyway {self.second_key:g} deg from the first runs into it; keyways {self.key.width:g} mm "
                f"wide in a bore of {self.diameter:g} mm must be more than {least:.2f} deg apart: take 90 or 180 deg"
            )

    @classmethod
    def keyed(cls, diameter: float, chamfer: float = 0.0) -> "Bore":
        """A bore of `diameter` [mm] with the key ISO/R 773 gives it and a mouth chamfer [mm].

        Raises:
            DesignError: no key is tabulated for this bore.
        """
        return cls(diameter, key_for_bore(diameter), chamfer)

    @property
    def callout(self) -> str:
        """The size as a drawing states it [mm]: that of the fit, or the diameter."""
        return f"⌀ {self.fit.callout if self.fit else f'{self.diameter:g}'}"

    @property
    def radius(self) -> float:
        """[mm]."""
        return self.diameter / 2

    @property
    def floor(self) -> float:
        """Distance of the keyway floor from the axis [mm]: radius + t2; the radius for a plain hole."""
        return self.radius + (self.key.hub_depth if self.key else 0.0)

    @property
    def reach(self) -> float:
        """Largest distance of removed material from the axis [mm]: keyway corner or chamfer edge."""
        corner = hypot(self.floor, self.key.width / 2) if self.key else 0.0
        return max(corner, self.radius + self.chamfer)

    @cached_property
    def outline(self) -> Outline:
        """Section of the hole between the chamfers, clockwise: material outside."""
        return self.section(self.radius)

    @cached_property
    def mouth(self) -> Outline:
        """Boundary of the hole in the end faces, clockwise."""
        return self.section(self.radius + self.chamfer)

    def section(self, radius: float) -> Outline:
        """Boundary of the hole at a level where its round part has `radius` [mm], clockwise.

        Plain: one full turn from the +x axis. Keyed: an arc up to each keyway and its three sides, floor second; the
        keyway on the +x axis comes last.
        """
        if self.key is None:
            return hole(radius)
        side = self.key.width / 2
        half = asin(side / radius)
        second = () if self.second_key is None else (radians(self.second_key),)
        curves: list[Curve] = []
        for before, angle in pairwise((2 * pi, *second, 0.0)):
            arc = Arc(0, radius, before - half, angle + half)
            upper, lower = (complex(np.exp(1j * angle)) * complex(self.floor, y) for y in (side, -side))
            end = radius * complex(np.exp(1j * (angle - half)))
            curves += [arc, Segment(arc.end, upper), Segment(upper, lower), Segment(lower, end)]
        return Outline(tuple(Piece(c, "hole") for c in curves), 1)

    def volume(self, width: float) -> float:
        """Volume taken out of a body [mm3], exact.

        Args:
            width: length of the hole [mm].

        Raises:
            DesignError: the two chamfers meet.
        """
        if not width > 2 * self.chamfer:
            raise DesignError(
                f"a hole {width:g} mm long has no room for two chamfers of {self.chamfer:g} mm; the chamfer must be "
                f"below {width / 2:g} mm"
            )
        return -self.outline.area * (width - 2 * self.chamfer) + 2 * self._mouth_volume

    @property
    def _mouth_volume(self) -> float:
        """Volume of one chamfered mouth [mm3]: hole section of radius R, summed from the bore to the chamfer edge."""
        r, edge = self.radius, self.radius + self.chamfer
        cone = pi * (edge**3 - r**3) / 3
        if self.key is None:
            return cone
        side, keys = self.key.width / 2, 1 if self.second_key is None else 2
        return cone + keys * (2 * side * self.floor * self.chamfer - (_strip(edge, side) - _strip(r, side)))


def _strip(radius: float, side: float) -> float:
    """Antiderivative by the radius of the half-disc area within the strip |y| < side, x > 0 [mm3].

    That area is side s + R^2 arcsin(side / R) with s = sqrt(R^2 - side^2).
    """
    s = sqrt(radius**2 - side**2)
    return 2 * side * radius * s / 3 - side**3 * log(radius + s) / 3 + radius**3 * asin(side / radius) / 3
