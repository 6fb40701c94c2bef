"""A line rolling on any curve: how a rack moves along a non-circular pitch curve."""

from dataclasses import dataclass

import numpy as np

from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.pitch_curve import ByLength
from gearsolid.curves.rolling import Rolling

# Step of the differences that stand in for the growth of the velocity [mm].
_STEP = 1e-3


@dataclass(frozen=True)
class LineOnCurve(Rolling):
    """A rack's pitch line carried round a fixed closed curve; the roll is the length rolled [mm].

    Carried points have x away from the fixed curve and y along the pitch line, counter-clockwise round the curve; the
    pitch point lies at y equal to the roll. The law of gearing needs the rack alone, whatever it rolls on.

    Args:
        fixed: the fixed pitch curve, counter-clockwise.
    """

    fixed: ByLength

    def place(self, p: Points, roll: Reals) -> Points:
        return self.fixed.point(roll) + (p - 1j * np.asarray(roll)) * self.turn(roll)

    def velocity(self, p: Points, roll: Reals) -> Points:
        return (p - 1j * np.asarray(roll)) * self.fixed.second(roll) / 1j

    def acceleration(self, p: Points, roll: Reals) -> Points:
        return (self.velocity(p, roll + _STEP) - self.velocity(p, roll - _STEP)) / (2 * _STEP)

    def turn(self, roll: Reals) -> Points:
        return -1j * self.fixed.derivative(roll)

    def meet(self, p: Points, tangent: Points, branch: int) -> Reals:
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(np.real(p * np.conj(tangent)) / np.imag(tangent), dtype=float)

    def meet_rate(self, p: Points, tangent: Points, speed: Reals, turning: Reals, branch: int) -> Reals:
        moment, across = np.real(p * np.conj(tangent)), np.imag(tangent)
        growth = speed + turning * np.imag(p * np.conj(tangent))
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(growth / across - moment * turning * np.real(tangent) / across**2, dtype=float)

    def rests(self, p: complex, first: float, last: float) -> tuple[float, ...]:
        return (p.imag,) if p.real == 0 and first <= p.imag <= last else ()
