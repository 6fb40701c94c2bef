"""What lightens a wheel or bolts it on: crossings between the arms of a clock wheel, and round holes on a circle."""

import cmath
from dataclasses import dataclass
from functools import cached_property
from math import atan, cos, pi, radians, sin, sqrt

from gearsolid.curves.loops import holes
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.errors import DesignError


@dataclass(frozen=True)
class Crossings:
    """The openings between the arms of a wheel, one arm on the +x axis, where members have a tooth.

    Args:
        arms: how many, 3 to 12; clock wheels have 3 to 6.
        hub_diameter: of the circle on which the openings end inside [mm].
        rim_diameter: of the circle on which they end outside, the inside of the rim [mm].
        arm_width: width of an arm where its sides meet the hub circle [mm].
        fillet: radius of the four corners of an opening [mm].
        arm_width_at_rim: width where the sides meet the rim circle [mm]; None for straight arms.

    Raises:
        DesignError: a number out of range, or nothing is left of the openings; the message gives the limit.
    """

    arms: int
    hub_diameter: float
    rim_diameter: float
    arm_width: float
    fillet: float
    arm_width_at_rim: float | None = None

    def __post_init__(self) -> None:
        if not 3 <= self.arms <= 12:
            raise DesignError(f"a wheel cannot have {self.arms} arms; it can have 3 to 12, clock wheels have 3 to 6")
        for name in ("hub_diameter", "arm_width", "fillet"):
            if not getattr(self, name) > 0:
                raise DesignError(f"the {name.replace('_', ' ')} is {getattr(self, name):g} mm; it must be above 0")
        if not self._width_at_rim > 0:
            raise DesignError(f"the arm width at the rim is {self._width_at_rim:g} mm; it must be above 0")
        room = (self.rim_diameter - self.hub_diameter) / 2
        if not 2 * self.fillet < room:
            raise DesignError(
                f"between the hub circle of {self.hub_diameter:g} mm and the rim circle of {self.rim_diameter:g} mm "
                f"the arms are {room:g} mm long; two fillets of {self.fillet:g} mm need more: the fillet must be below "
                f"{room / 2:.4g} mm, the circles further apart"
            )
        for name, circle, centre in (
            ("hub", self.hub_diameter, self.hub_diameter / 2 + self.fillet),
            ("rim", self.rim_diameter, self.rim_diameter / 2 - self.fillet),
        ):
            least = self._least_reach
            if not centre > least:
                need = circle + 2 * (least - centre)
                raise DesignError(
                    f"{self.arms} arms {self.arm_width:g} mm wide with fillets of {self.fillet:g} mm leave no opening "
                    f"at the {name} circle of {circle:g} mm; it must be above about {need:.4g} mm: take a larger "
                    "circle, fewer or narrower arms, or a smaller fillet"
                )

    @property
    def _width_at_rim(self) -> float:
        return self.arm_width if self.arm_width_at_rim is None else self.arm_width_at_rim

    @property
    def _slope(self) -> float:
        """Angle of the left side of the arm on the +x axis [rad], negative where the arm narrows towards the rim."""
        return atan((self._width_at_rim - self.arm_width) / (self.rim_diameter - self.hub_diameter))

    @property
    def _stand_off(self) -> float:
        """Distance of the axis from that side [mm]."""
        return (self.arm_width * cos(self._slope) - self.hub_diameter * sin(self._slope)) / 2

    @property
    def _least_reach(self) -> float:
        """Distance from the axis at which the fillets of two neighbouring arms would be one [mm]."""
        spread = pi / self.arms - self._slope
        return (self._stand_off + self.fillet) / sin(min(spread, pi / 2)) if spread > 0 else float("inf")

    def _fillet_centre(self, reach: float) -> complex:
        """Centre of a fillet at the left side of the arm on the +x axis, `reach` [mm] from the axis."""
        aside = self._stand_off + self.fillet
        return cmath.exp(1j * self._slope) * complex(sqrt(reach**2 - aside**2), aside)

    @cached_property
    def outline(self) -> Outline:
        """The openings: one of them, clockwise, repeated for each arm."""
        hub, rim, r = self.hub_diameter / 2, self.rim_diameter / 2, self.fillet
        inner, outer = self._fillet_centre(hub + r), self._fillet_centre(rim - r)
        low, high = cmath.phase(inner), cmath.phase(outer)
        pitch, side = 2 * pi / self.arms, self._slope - pi / 2
        foot = r * cmath.exp(1j * side)

        def mirrored(point: complex) -> complex:
            return cmath.exp(1j * pitch) * point.conjugate()

        curves = (
            Arc(0, rim, pitch - high, high),
            Arc(outer, r, high, side),
            Segment(outer + foot, inner + foot),
            Arc(inner, r, side, low - pi),
            Arc(0, hub, low, pitch - low),
            Arc(mirrored(inner), r, pitch - low + pi, pitch - side),
            Segment(mirrored(inner + foot), mirrored(outer + foot)),
            Arc(mirrored(outer), r, pitch - side, pitch - high),
        )
        return Outline(tuple(Piece(c, "hole") for c in curves), self.arms)


def hole_circle(count: int, circle_diameter: float, diameter: float, angle_deg: float = 0.0) -> Outline:
    """Round holes on a circle about the axis, for bolts or to lighten a wheel.

    Args:
        count: how many [-].
        circle_diameter: of the circle through their centres [mm].
        diameter: of a hole [mm].
        angle_deg: where the first stands, from the +x axis [deg].

    Raises:
        DesignError: no holes, or they reach the axis or each other; the message gives the limit.
    """
    if count < 1:
        raise DesignError(f"{count} holes on a circle are none; give at least 1, or leave them out")
    most = circle_diameter * (sin(pi / count) if count > 1 else 1.0)
    if not 0 < diameter < most:
        raise DesignError(
            f"{count} holes of {diameter:g} mm on a circle of {circle_diameter:g} mm run into each other or the axis; "
            f"their diameter must be above 0 and below {most:.4g} mm"
        )
    return holes(count, circle_diameter / 2, diameter / 2, radians(angle_deg))
