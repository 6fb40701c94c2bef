"""Curves with a closed form: segment, arc, ellipse, and any formula with its two derivatives."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from gearsolid.curves.curve import Curve, Points, Reals
from gearsolid.errors import DesignError


@dataclass(frozen=True)
class Segment(Curve):
    """Straight line from `first` to `last` [mm], parameter 0 to 1."""

    first: complex
    last: complex

    @property
    def span(self) -> tuple[float, float]:
        return 0.0, 1.0

    def point(self, t: Reals) -> Points:
        return self.first + (self.last - self.first) * np.asarray(t, dtype=float)

    def derivative(self, t: Reals) -> Points:
        return np.full(np.shape(t), self.last - self.first, dtype=complex)

    def second(self, t: Reals) -> Points:
        return np.zeros(np.shape(t), dtype=complex)


@dataclass(frozen=True)
class Arc(Curve):
    """Circular arc about `centre`, parameter 0 to 1; counter-clockwise where `angle_to` exceeds `angle_from`.

    Args:
        centre: [mm].
        radius: [mm], above zero.
        angle_from: polar angle of the first point [rad].
        angle_to: polar angle of the last point [rad].
    """

    centre: complex
    radius: float
    angle_from: float
    angle_to: float

    def __post_init__(self) -> None:
        if not self.radius > 0:
            raise DesignError(f"arc radius is {self.radius:g} mm; it must be above 0")

    @property
    def span(self) -> tuple[float, float]:
        return 0.0, 1.0

    @property
    def sweep(self) -> float:
        """Angle travelled [rad], negative when clockwise."""
        return self.angle_to - self.angle_from

    def _ray(self, t: Reals) -> Points:
        return self.radius * np.exp(1j * (self.angle_from + self.sweep * np.asarray(t, dtype=float)))

    def point(self, t: Reals) -> Points:
        return self.centre + self._ray(t)

    def derivative(self, t: Reals) -> Points:
        return 1j * self.sweep * self._ray(t)

    def second(self, t: Reals) -> Points:
        return -(self.sweep**2) * self._ray(t)


@dataclass(frozen=True)
class Ellipse(Curve):
    """Ellipse about `centre` with half axes a and b [mm], from eccentric anomaly `first` to `last` [rad]."""

    a: float
    b: float
    first: float = 0.0
    last: float = 2 * np.pi
    centre: complex = 0.0

    def __post_init__(self) -> None:
        if not (self.a > 0 and self.b > 0):
            raise DesignError(f"ellipse half axes are {self.a:g} and {self.b:g} mm; both must be above 0")

    @property
    def span(self) -> tuple[float, float]:
        return self.first, self.last

    def point(self, t: Reals) -> Points:
        return self.centre + self.a * np.cos(t) + 1j * self.b * np.sin(t)

    def derivative(self, t: Reals) -> Points:
        return -self.a * np.sin(t) + 1j * self.b * np.cos(t)

    def second(self, t: Reals) -> Points:
        return -self.a * np.cos(t) - 1j * self.b * np.sin(t)


@dataclass(frozen=True)
class Formula(Curve):
    """A curve given by vectorised functions of the parameter: point, first and second derivative.

    Args:
        value: t [-] -> complex points [mm].
        slope: t [-] -> first derivative [mm].
        bend: t [-] -> second derivative [mm].
        first: first parameter [-].
        last: last parameter [-].
        corners: parameters where direction or curvature jumps [-].
    """

    value: Callable[[Reals], Points]
    slope: Callable[[Reals], Points]
    bend: Callable[[Reals], Points]
    first: float
    last: float
    corners: tuple[float, ...] = ()

    @property
    def span(self) -> tuple[float, float]:
        return self.first, self.last

    def point(self, t: Reals) -> Points:
        return np.asarray(self.value(np.asarray(t, dtype=float)), dtype=complex)

    def derivative(self, t: Reals) -> Points:
        return np.asarray(self.slope(np.asarray(t, dtype=float)), dtype=complex)

    def second(self, t: Reals) -> Points:
        return np.asarray(self.bend(np.asarray(t, dtype=float)), dtype=complex)

    def breaks(self) -> tuple[float, ...]:
        return self.corners
