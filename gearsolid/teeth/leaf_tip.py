"""Tops of clock teeth and leaves made of circular arcs: the ogive and the round."""

from abc import ABC, abstractmethod
from cmath import exp, phase
from dataclasses import dataclass
from math import acos, asin, cos, degrees, isinf, pi, tan

from gearsolid.curves.outline import Piece
from gearsolid.curves.primitives import Arc
from gearsolid.errors import DesignError
from gearsolid.teeth.toothed import POINTED, mirrored


class LeafTip(ABC):
    """A top that stands on the two points where the flanks of a tooth on the +x axis cross the reference circle."""

    @abstractmethod
    def height(self, radius: float, half_angle: float) -> float:
        """Addendum [mm] on a reference circle of `radius` [mm], half the tooth taking `half_angle` [rad]."""

    @abstractmethod
    def widest(self, radius: float, half_angle: float) -> float:
        """Half the angle that the top takes at the axis [rad]; more than `half_angle` where its arcs bulge."""

    @abstractmethod
    def crown(self, radius: float, half_angle: float) -> tuple[Piece, ...]:
        """The top from the flank of negative angle to the other, counter-clockwise.

        Raises:
            DesignError: the arcs do not make a top.
        """


@dataclass(frozen=True)
class RoundTip(LeafTip):
    """One arc that runs smoothly into both radial flanks: a semicircle, as near as radial flanks allow."""

    def height(self, radius: float, half_angle: float) -> float:
        return radius * (1 / cos(half_angle) + tan(half_angle) - 1)

    def widest(self, radius: float, half_angle: float) -> float:
        return half_angle

    def crown(self, radius: float, half_angle: float) -> tuple[Piece, ...]:
        turn = pi / 2 + half_angle
        return (Piece(Arc(radius / cos(half_angle), radius * tan(half_angle), -turn, turn), "flank"),)


@dataclass(frozen=True)
class Ogive(LeafTip):
    """Two equal arcs that meet in a point on the tooth's centre line.

    Their direction is free at the reference circle, so there is a small kink between flank and arc; where it is
    negative the arcs bulge over the flanks.

    Args:
        point: height of the point above the reference circle [mm].
        arc_radius: [mm].
        cut: how much of the point is turned off, leaving a small land [mm].

    Raises:
        DesignError: a number is out of its range.
    """

    point: float
    arc_radius: float
    cut: float = 0.0

    def __post_init__(self) -> None:
        for name, value in (("height of the point", self.point), ("arc radius", self.arc_radius)):
            if not (value > 0 and not isinf(value)):
                raise DesignError(f"the {name} of an ogive is {value:g} mm; it must be above 0")
        if not 0 <= self.cut < self.point:
            raise DesignError(
                f"{self.cut:g} mm are cut off the point of an ogive; it must be from 0 to below its height, "
                f"{self.point:g} mm"
            )

    def height(self, radius: float, half_angle: float) -> float:
        return self.point - self.cut

    @property
    def _is_cut(self) -> bool:
        return self.cut > POINTED * self.point

    def _chord(self, radius: float, half_angle: float) -> complex:
        """From the flank's end to the point [mm]."""
        return radius + self.point - radius * exp(-1j * half_angle)

    def _half_sweep(self, chord: complex) -> float:
        return asin(min(abs(chord) / (2 * self.arc_radius), 1.0))

    def kink_deg(self, radius: float, half_thickness: float) -> float:
        """Angle between flank and arc at the reference circle [deg].

        Args:
            radius: of the reference circle [mm]; infinite for a tooth with parallel flanks on a straight pitch line.
            half_thickness: half the tooth as an arc of the reference circle [mm].
        """
        if isinf(radius):
            half_angle, chord = 0.0, self.point + 1j * half_thickness
        else:
            half_angle = half_thickness / radius
            chord = self._chord(radius, half_angle)
        return degrees(phase(chord) + half_angle - self._half_sweep(chord))

    def widest(self, radius: float, half_angle: float) -> float:
        if self.kink_deg(radius, radius * half_angle) >= 0:
            return half_angle
        centre, _, _ = self._lower_arc(radius, half_angle)
        return asin(min(1.0, self.arc_radius / abs(centre))) - phase(centre)

    def _lower_arc(self, radius: float, half_angle: float) -> tuple[complex, float, float]:
        """Centre [mm] and end angles [rad] of the uncut arc on the side of negative angle."""
        chord = self._chord(radius, half_angle)
        half_sweep = self._half_sweep(chord)
        start = phase(chord) - half_sweep - pi / 2
        return radius * exp(-1j * half_angle) - self.arc_radius * exp(1j * start), start, start + 2 * half_sweep

    def crown(self, radius: float, half_angle: float) -> tuple[Piece, ...]:
        self._check(self._chord(radius, half_angle))
        centre, start, end = self._lower_arc(radius, half_angle)
        tip = radius + self.point - self.cut
        if self._is_cut:
            end = self._angle_at(tip, centre)
            if not start < end:
                raise DesignError(
                    f"cutting {self.cut:g} mm off an ogive {self.point:g} mm high leaves nothing of its arcs: cut less"
                )
        side = (Piece(Arc(centre, self.arc_radius, start, end), "flank"),)
        corner = phase(side[0].curve.end)
        land = (Piece(Arc(0, tip, corner, -corner), "tip"),) if self._is_cut else ()
        return (*side, *land, *mirrored(side))

    def _angle_at(self, tip: float, centre: complex) -> float:
        """Polar angle about `centre` [rad] where the lower arc crosses the circle of radius `tip` [mm]."""
        cosine = (tip**2 - abs(centre) ** 2 - self.arc_radius**2) / (2 * abs(centre) * self.arc_radius)
        return phase(centre) - acos(max(-1.0, min(1.0, cosine)))

    def _check(self, chord: complex) -> None:
        """Refuse arcs that would dip at the point."""
        least = abs(chord) ** 2 / (2 * chord.real)
        if self.arc_radius < least * (1 - 1e-12):
            raise DesignError(
                f"the arcs of an ogive {self.point:g} mm high have a radius of {self.arc_radius:g} mm; below "
                f"{least:.6g} mm they dip at the point: take a larger arc radius"
            )
