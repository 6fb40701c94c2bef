"""A plane curve as a complex-valued function of one parameter, and the rigid changes that keep it one.

Points are complex numbers x + iy [mm]. A curve claims a parameter range (`span`), its `point` and its `derivative`;
everything else (tangent, curvature, length, fit, area) follows from these.
"""

from abc import ABC, abstractmethod
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

Reals = NDArray[np.float64]
Points = NDArray[np.complex128]

# A speed below this share of the curve's usual speed counts as zero: the curve has a cusp there, and the direction is
# taken from the second derivative.
_STILL = 1e-8
# Nearer to a cusp than this, in the same measure, the turning is lost in rounding; it is extrapolated from the side, at
# this spacing as a share of the span.
_SLOW = 1e-4
_ASIDE = 1e-3

# Spacing of the differences that stand in for an unknown second derivative, as a share of the span.
_DIFFERENCE = 5e-4


class Curve(ABC):
    """A piecewise smooth plane curve z(t), t in `span`, travelled with growing t."""

    @property
    @abstractmethod
    def span(self) -> tuple[float, float]:
        """First and last parameter value [-]."""

    @abstractmethod
    def point(self, t: Reals) -> Points:
        """Points z(t) [mm] for parameters t [-] of any shape."""

    @abstractmethod
    def derivative(self, t: Reals) -> Points:
        """Derivative dz/dt [mm] for parameters t [-] of any shape."""

    def second(self, t: Reals) -> Points:
        """Second derivative [mm], by fourth-order differences of `derivative` unless overridden.

        The five points used lie inside the span, so that curves with an end of their reach there can be asked.
        """
        t = np.asarray(t, dtype=float)
        t0, t1 = self.span
        step = _DIFFERENCE * (t1 - t0)
        middle = np.clip(t, t0 + 2 * step, t1 - 2 * step)
        s = (t - middle) / step
        weights = (
            (((4 * s - 6) * s - 2) * s + 2) / 24,
            -(((4 * s - 3) * s - 8) * s + 4) / 6,
            (4 * s**2 - 10) * s / 4,
            -(((4 * s + 3) * s - 8) * s - 4) / 6,
            (((4 * s + 6) * s - 2) * s - 2) / 24,
        )
        slopes = [w * self.derivative(middle + k * step) for k, w in zip(range(-2, 3), weights, strict=True)]
        return np.asarray(np.sum(slopes, axis=0) / step, dtype=complex)

    def breaks(self) -> tuple[float, ...]:
        """Parameters inside the span where the direction or the curvature jumps."""
        return ()

    def tangent(self, t: Reals) -> Points:
        """Unit direction of travel; at a cusp, the direction on the side that belongs to the span.

        Args:
            t: parameters [-], any shape.

        Returns:
            Complex numbers of modulus one, same shape.
        """
        t = np.asarray(t, dtype=float)
        velocity = self.derivative(t)
        speed = np.abs(velocity)
        still = speed <= _STILL * self._usual_speed
        if np.any(still):
            velocity = np.where(still, self._inward(t) * self.second(t), velocity)
            speed = np.abs(velocity)
        return velocity / np.where(speed == 0, 1.0, speed)

    def turning(self, t: Reals) -> Reals:
        """Rate at which the direction turns [rad per unit of t], positive to the left; finite at a cusp."""
        t = np.asarray(t, dtype=float)
        slow = np.abs(self.derivative(t)) <= _SLOW * self._usual_speed
        rate = self._plain_turning(t)
        if np.any(slow):
            step = _ASIDE * (self.span[1] - self.span[0]) * self._inward(t)
            beside = [self._plain_turning(np.where(slow, t + k * step, t)) for k in (1, 2, 3)]
            rate = np.where(slow, 3 * beside[0] - 3 * beside[1] + beside[2], rate)
        return rate

    def curvature(self, t: Reals) -> Reals:
        """Signed curvature [1/mm], positive where the curve turns left; large but finite at a cusp."""
        return self.turning(t) / np.maximum(np.abs(self.derivative(t)), 1e-12 * self._usual_speed)

    @cached_property
    def _usual_speed(self) -> float:
        """Largest speed found at a few places, the measure for what is slow [mm per unit of t]."""
        return float(np.fmax.reduce(np.abs(self.derivative(self.sample(12)[1:-1])), initial=0.0))

    def _inward(self, t: Reals) -> Reals:
        """+1 in the first half of the span, -1 in the second: the way to go from t without leaving it."""
        return np.where(t < sum(self.span) / 2, 1.0, -1.0)

    def _plain_turning(self, t: Reals) -> Reals:
        velocity = self.derivative(t)
        squared = np.abs(velocity) ** 2
        return np.imag(np.conj(velocity) * self.second(t)) / np.where(squared == 0, 1.0, squared)

    @property
    def start(self) -> complex:
        """First point [mm]."""
        return complex(self.point(np.asarray(self.span[0])))

    @property
    def end(self) -> complex:
        """Last point [mm]."""
        return complex(self.point(np.asarray(self.span[1])))

    def sample(self, count: int) -> Reals:
        """`count` parameters spread evenly over the span, ends included."""
        return np.linspace(*self.span, count)


@dataclass(frozen=True)
class Turned(Curve):
    """A curve multiplied by a complex factor (turn and scale) and then shifted."""

    base: Curve
    factor: complex
    shift: complex = 0.0

    @property
    def span(self) -> tuple[float, float]:
        return self.base.span

    def point(self, t: Reals) -> Points:
        return self.factor * self.base.point(t) + self.shift

    def derivative(self, t: Reals) -> Points:
        return self.factor * self.base.derivative(t)

    def second(self, t: Reals) -> Points:
        return self.factor * self.base.second(t)

    def tangent(self, t: Reals) -> Points:
        return self.factor / abs(self.factor) * self.base.tangent(t)

    def breaks(self) -> tuple[float, ...]:
        return self.base.breaks()


@dataclass(frozen=True)
class Mirrored(Curve):
    """A curve mirrored in the x axis and travelled backwards, so that material stays on the same hand.

    The parameter is the negative of the base parameter.
    """

    base: Curve

    @property
    def span(self) -> tuple[float, float]:
        t0, t1 = self.base.span
        return -t1, -t0

    def point(self, t: Reals) -> Points:
        return np.conj(self.base.point(-np.asarray(t)))

    def derivative(self, t: Reals) -> Points:
        return -np.conj(self.base.derivative(-np.asarray(t)))

    def second(self, t: Reals) -> Points:
        return np.conj(self.base.second(-np.asarray(t)))

    def tangent(self, t: Reals) -> Points:
        return -np.conj(self.base.tangent(-np.asarray(t)))

    def breaks(self) -> tuple[float, ...]:
        return tuple(-b for b in reversed(self.base.breaks()))


@dataclass(frozen=True)
class Reversed(Curve):
    """A curve travelled backwards; the parameter is the negative of the base parameter."""

    base: Curve

    @property
    def span(self) -> tuple[float, float]:
        t0, t1 = self.base.span
        return -t1, -t0

    def point(self, t: Reals) -> Points:
        return self.base.point(-np.asarray(t))

    def derivative(self, t: Reals) -> Points:
        return -self.base.derivative(-np.asarray(t))

    def second(self, t: Reals) -> Points:
        return self.base.second(-np.asarray(t))

    def tangent(self, t: Reals) -> Points:
        return -self.base.tangent(-np.asarray(t))

    def breaks(self) -> tuple[float, ...]:
        return tuple(-b for b in reversed(self.base.breaks()))


@dataclass(frozen=True)
class Section(Curve):
    """The part of a curve between two parameters."""

    base: Curve
    first: float
    last: float

    @property
    def span(self) -> tuple[float, float]:
        return self.first, self.last

    def point(self, t: Reals) -> Points:
        return self.base.point(t)

    def derivative(self, t: Reals) -> Points:
        return self.base.derivative(t)

    def second(self, t: Reals) -> Points:
        return self.base.second(t)

    def breaks(self) -> tuple[float, ...]:
        return tuple(b for b in self.base.breaks() if self.first < b < self.last)
