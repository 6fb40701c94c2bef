"""Rolling of one pitch curve on another, for circles and lines: the motion of a carried body and the law of gearing.

The fixed pitch curve touches the carried one at the pitch point. In the fixed frame the line of centres is the x axis
when the roll is zero. A point p of the carried body is given from the carried centre (circles) or from the pitch point
(lines); `place` says where it stands in the fixed frame after a roll, `meet` at which roll a carried curve touches its
envelope: then its normal passes through the pitch point.
"""

import cmath
import math
from abc import ABC, abstractmethod
from dataclasses import dataclass

import numpy as np

from gearsolid.curves.curve import Points, Reals
from gearsolid.errors import DesignError

# A carried point this close to the pitch curve, as a share of its radius, lies on it.
_ON_CIRCLE = 1e-12

# A normal that misses the pitch circle by no more than this share of its radius grazes it.
_ROUNDING = 1e-14


class Rolling(ABC):
    """The motion of a carried body whose pitch curve rolls without slip on a fixed one."""

    @abstractmethod
    def place(self, p: Points, roll: Reals) -> Points:
        """Carried points p [mm] in the fixed frame [mm] after `roll` ([rad] for circles, [mm] for lines)."""

    @abstractmethod
    def velocity(self, p: Points, roll: Reals) -> Points:
        """Derivative of `place` by the roll."""

    @abstractmethod
    def acceleration(self, p: Points, roll: Reals) -> Points:
        """Second derivative of `place` by the roll."""

    @abstractmethod
    def turn(self, roll: Reals) -> Points:
        """Unit complex number that turns carried directions into the fixed frame."""

    @abstractmethod
    def meet(self, p: Points, tangent: Points, branch: int) -> Reals:
        """Roll at which a carried curve through p with unit `tangent` touches its envelope; nan where it never does.

        Rolls of a carried circle lie from -pi to pi.

        Args:
            p: carried points [mm], any shape.
            tangent: unit tangents of the carried curve there, same shape.
            branch: +1 or -1, which of the two solutions of a circular pitch curve; a line has one.
        """

    @abstractmethod
    def meet_rate(self, p: Points, tangent: Points, speed: Reals, turning: Reals, branch: int) -> Reals:
        """Derivative of `meet` by the carried curve's parameter, given its speed [mm] and turning [rad] by the same."""

    @abstractmethod
    def rests(self, p: complex, first: float, last: float) -> tuple[float, ...]:
        """Rolls between `first` and `last` at which carried point p is the pitch point and so stands still."""


def _moment(p: Points, tangent: Points) -> Reals:
    """Distance h [mm] of the normal at p from the carried origin: the normal is {x : Re(x conj t) = h}."""
    return np.real(p * np.conj(tangent))


def _moment_rate(p: Points, tangent: Points, speed: Reals, turning: Reals) -> Reals:
    return speed + turning * np.imag(p * np.conj(tangent))


class _CarriedCircle(Rolling):
    """What the motions of a circular carried pitch curve share: its signed radius decides where it touches."""

    carried: float

    def meet(self, p: Points, tangent: Points, branch: int) -> Reals:
        cosine = -_moment(p, tangent) / self.carried
        with np.errstate(invalid="ignore"):
            lean = np.arccos(np.where(np.abs(cosine) < 1 + _ROUNDING, np.clip(cosine, -1.0, 1.0), np.nan))
        roll = branch * lean - np.angle(tangent)
        return np.angle(np.exp(1j * roll))

    def meet_rate(self, p: Points, tangent: Points, speed: Reals, turning: Reals, branch: int) -> Reals:
        h = _moment(p, tangent)
        with np.errstate(invalid="ignore", divide="ignore"):
            slope = np.sign(self.carried) / np.sqrt(np.maximum(self.carried**2 - h**2, 0.0))
            return branch * slope * _moment_rate(p, tangent, speed, turning) - turning

    def rests(self, p: complex, first: float, last: float) -> tuple[float, ...]:
        if abs(abs(p) - abs(self.carried)) > _ON_CIRCLE * abs(self.carried):
            return ()
        # The pitch point is -carried exp(-i roll) in the carried frame.
        roll = -cmath.phase(-p / self.carried)
        turns = range(math.ceil((first - roll) / (2 * math.pi)), math.floor((last - roll) / (2 * math.pi)) + 1)
        return tuple(roll + 2 * math.pi * n for n in turns)


@dataclass(frozen=True)
class CircleOnCircle(_CarriedCircle):
    """A circle carried round a fixed circle centred at the origin; the roll is the carried circle's own turn [rad].

    Args:
        fixed: radius of the fixed pitch circle [mm].
        carried: signed radius of the carried pitch circle [mm]: positive outside the fixed circle, negative where one
            circle lies inside the other (a smaller one inside, or a larger ring around).
    """

    fixed: float
    carried: float

    def __post_init__(self) -> None:
        if not self.fixed > 0 or self.carried == 0 or self.fixed + self.carried == 0:
            raise DesignError(
                f"rolling circles have radii {self.fixed:g} and {self.carried:g} mm; the fixed one must be above 0 and "
                "the two must not be centred on each other"
            )

    @property
    def centre_distance(self) -> float:
        """Signed place of the carried centre on the x axis at roll zero [mm]."""
        return self.fixed + self.carried

    @property
    def orbit(self) -> float:
        """Turn of the line of centres for one radian of roll [-]."""
        return self.carried / self.fixed

    def place(self, p: Points, roll: Reals) -> Points:
        return self.centre_distance * np.exp(1j * self.orbit * roll) + p * self.turn(roll)

    def velocity(self, p: Points, roll: Reals) -> Points:
        k = self.orbit
        return 1j * k * self.centre_distance * np.exp(1j * k * roll) + 1j * (1 + k) * p * self.turn(roll)

    def acceleration(self, p: Points, roll: Reals) -> Points:
        k = self.orbit
        return -(k**2) * self.centre_distance * np.exp(1j * k * roll) - (1 + k) ** 2 * p * self.turn(roll)

    def turn(self, roll: Reals) -> Points:
        return np.exp(1j * (1 + self.orbit) * np.asarray(roll))


@dataclass(frozen=True)
class CircleOnLine(_CarriedCircle):
    """A circle carried along the fixed line x = 0; the roll is its own turn [rad].

    Args:
        carried: signed radius [mm]: positive on the side x > 0.
    """

    carried: float

    def __post_init__(self) -> None:
        if self.carried == 0:
            raise DesignError("the radius of a circle rolling on a line is 0; give a signed radius in mm")

    def place(self, p: Points, roll: Reals) -> Points:
        return self.carried * (1 + 1j * np.asarray(roll)) + p * self.turn(roll)

    def velocity(self, p: Points, roll: Reals) -> Points:
        return 1j * self.carried + 1j * p * self.turn(roll)

    def acceleration(self, p: Points, roll: Reals) -> Points:
        return -p * self.turn(roll)

    def turn(self, roll: Reals) -> Points:
        return np.exp(1j * np.asarray(roll))


@dataclass(frozen=True)
class LineOnCircle(Rolling):
    """A line (a rack's pitch line) carried round a fixed circle; the roll is the length rolled [mm].

    Carried points are given from the pitch point at roll zero, x outward from the circle and y along the line.

    Args:
        fixed: radius of the fixed pitch circle [mm].
    """

    fixed: float

    def __post_init__(self) -> None:
        if not self.fixed > 0:
            raise DesignError(f"radius of the fixed pitch circle is {self.fixed:g} mm; it must be above 0")

    def place(self, p: Points, roll: Reals) -> Points:
        return (self.fixed + p + 1j * np.asarray(roll)) * self.turn(roll)

    def velocity(self, p: Points, roll: Reals) -> Points:
        return -1j * (p + 1j * np.asarray(roll)) / self.fixed * self.turn(roll)

    def acceleration(self, p: Points, roll: Reals) -> Points:
        return (1 - (p + 1j * np.asarray(roll)) / self.fixed) / self.fixed * self.turn(roll)

    def turn(self, roll: Reals) -> Points:
        return np.exp(-1j * np.asarray(roll) / self.fixed)

    def meet(self, p: Points, tangent: Points, branch: int) -> Reals:
        with np.errstate(divide="ignore", invalid="ignore"):
            return -_moment(p, tangent) / np.imag(tangent)

    def meet_rate(self, p: Points, tangent: Points, speed: Reals, turning: Reals, branch: int) -> Reals:
        h, across = _moment(p, tangent), np.imag(tangent)
        with np.errstate(divide="ignore", invalid="ignore"):
            return -_moment_rate(p, tangent, speed, turning) / across + h * turning * np.real(tangent) / across**2

    def rests(self, p: complex, first: float, last: float) -> tuple[float, ...]:
        on_line = abs(p.real) <= _ON_CIRCLE * self.fixed and first <= -p.imag <= last
        return (-p.imag,) if on_line else ()
