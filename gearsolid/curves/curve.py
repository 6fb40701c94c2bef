"""A plane curve as a complex-valued function of one parameter, and the rigid changes that keep it one.

Points are complex numbers x + iy [mm]. A curve claims a parameter range (`span`), its `point` and its `derivative`;
everything else (tangent, curvature, length, fit, area) follows from these.
"""

from abc import ABC, abstractmethod
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

if TYPE_CHECKING:
    from collections.abc import Sequence

Reals = NDArray[np.float64]
Points = NDArray[np.complex128]

# A speed below this share of the curve's mean speed counts as zero: the curve has a cusp there, and the direction is
# taken from the second derivative.
_STILL = 1e-7


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
        """Second derivative [mm], by central differences of `derivative` kept inside the span unless overridden."""
        t0, t1 = self.span
        step = 1e-5 * (t1 - t0)
        t = np.clip(np.asarray(t, dtype=float), t0 + step, t1 - step)
        return (self.derivative(t + step) - self.derivative(t - step)) / (2 * step)

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
        t0, t1 = self.span
        mean = abs(self.end - self.start) / (t1 - t0) + np.max(speed, initial=0.0)
        still = speed <= _STILL * mean
        if np.any(still):
            away = np.where(t < (t0 + t1) / 2, 1.0, -1.0) * self.second(t)
            velocity = np.where(still, away, velocity)
            speed = np.abs(velocity)
        return velocity / np.where(speed == 0, 1.0, speed)

    def curvature(self, t: Reals) -> Reals:
        """Signed curvature [1/mm], positive where the curve turns left; large but finite at a cusp."""
        velocity = self.derivative(t)
        speed = np.abs(velocity)
        cross = np.imag(np.conj(velocity) * self.second(t))
        return cross / np.maximum(speed, 1e-12) ** 3

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

    def tangent(self, t: Reals) -> Points:
        return self.base.tangent(t)

    def breaks(self) -> tuple[float, ...]:
        return tuple(b for b in self.base.breaks() if self.first < b < self.last)


def chain_gaps(curves: "Sequence[Curve]") -> Reals:
    """Distances [mm] between the end of each curve and the start of the next, shape (len(curves) - 1,)."""
    return np.array([abs(a.end - b.start) for a, b in zip(curves[:-1], curves[1:], strict=True)])
