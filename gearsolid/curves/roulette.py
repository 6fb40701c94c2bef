"""Roulettes: the curve traced by a point of a body whose pitch curve rolls on a fixed one."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from gearsolid.curves.curve import Curve, Points, Reals
from gearsolid.curves.length import ArcLength
from gearsolid.curves.rolling import Rolling
from gearsolid.errors import DesignError


@dataclass(frozen=True)
class Trace(Curve):
    """Roulette of one carried point under a circular or straight rolling; the parameter is the roll.

    Args:
        motion: the rolling.
        tracer: carried point [mm]; inside, on or outside the carried pitch curve.
        first: first roll ([rad] for circles, [mm] for lines).
        last: last roll.
    """

    motion: Rolling
    tracer: complex
    first: float
    last: float

    @property
    def span(self) -> tuple[float, float]:
        return self.first, self.last

    def breaks(self) -> tuple[float, ...]:
        rests = self.motion.rests(self.tracer, self.first, self.last)
        return tuple(r for r in rests if self.first < r < self.last)

    def point(self, t: Reals) -> Points:
        return self.motion.place(np.asarray(self.tracer), np.asarray(t, dtype=float))

    def derivative(self, t: Reals) -> Points:
        return self.motion.velocity(np.asarray(self.tracer), np.asarray(t, dtype=float))

    def second(self, t: Reals) -> Points:
        return self.motion.acceleration(np.asarray(self.tracer), np.asarray(t, dtype=float))


@dataclass(frozen=True)
class Roulette(Curve):
    """Roulette of a point carried by any curve that rolls on any fixed curve, from their common start.

    Both curves are walked at equal speed: the rolling curve's parameter is found from the fixed curve's through their
    arc lengths, whatever speeds the two were written with. With unit tangents f' and r' the traced point is
    z = f + (tracer - r) f'/r', and it moves about the contact point f, which is the instant centre.

    Args:
        fixed: the fixed curve; its parameter is the roulette's.
        rolling: the rolling curve in its own frame; starts at the first contact, at least as long as `fixed`.
        tracer: carried point in the rolling curve's frame [mm].
        tol: allowed error of the arc lengths [mm].

    Raises:
        DesignError: the rolling curve is shorter than the fixed one.
    """

    fixed: Curve
    rolling: Curve
    tracer: complex
    tol: float = 1e-10

    def __post_init__(self) -> None:
        have, need = self._rolling_length.total, self._fixed_length.total
        if have < need - 10 * self.tol:
            raise DesignError(
                f"the rolling curve is {have:.6g} mm long and the fixed one {need:.6g} mm; it must be at least as "
                "long: extend its span (closed curves may run over several turns) or shorten the fixed one"
            )

    @property
    def span(self) -> tuple[float, float]:
        return self.fixed.span

    def breaks(self) -> tuple[float, ...]:
        lengths = self._rolling_length.at(np.array(self.rolling.breaks()))
        carried = self._fixed_length.parameter(lengths[lengths <= self._fixed_length.total])
        return tuple(sorted({*self.fixed.breaks(), *(float(t) for t in carried)}))

    @cached_property
    def _fixed_length(self) -> ArcLength:
        return ArcLength(self.fixed, self.tol)

    @cached_property
    def _rolling_length(self) -> ArcLength:
        return ArcLength(self.rolling, self.tol)

    def partner(self, t: Reals) -> Reals:
        """Parameter of the rolling curve in contact when the fixed curve is touched at t."""
        walked = np.minimum(self._fixed_length.at(t), self._rolling_length.total)
        return self._rolling_length.parameter(walked)

    def point(self, t: Reals) -> Points:
        u = self.partner(t)
        turn = self.fixed.tangent(t) / self.rolling.tangent(u)
        return self.fixed.point(t) + (self.tracer - self.rolling.point(u)) * turn

    def derivative(self, t: Reals) -> Points:
        bend = self.fixed.curvature(t) - self.rolling.curvature(self.partner(t))
        speed = np.abs(self.fixed.derivative(t))
        return 1j * bend * speed * (self.point(t) - self.fixed.point(t))
