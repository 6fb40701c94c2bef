"""Closed pitch curves about an axis, walked by their length, and the curve that rolls on one about a fixed axis."""

import math
from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from scipy.optimize import brentq

from gearsolid.curves.curve import Curve, Points, Reals, Reversed, Turned
from gearsolid.curves.length import ArcLength
from gearsolid.curves.outline import smooth_spans
from gearsolid.errors import DesignError, ToleranceError

_PLACES = 2001
# A period must lead to the next within this share of its size.
_JOIN = 1e-8
# Terms of a radius written as a sum of waves, the share that the last of them may have, and the share of rounding.
_WAVES = 512
_LAST_WAVES = 1e-11
_NO_WAVE = 3e-16
# Tables by length: panels, nodes in each, how near they must come as a share, and what they hold.
_FEWEST_PANELS, _MOST_PANELS = 32, 1024
_NODES = np.cos(np.pi * (np.arange(12) + 0.5) / 12)
_TABLE = 1e-12
_POINT, _TANGENT, _CURVATURE = range(3)
# Distances asked for to rounding.
_EXACT = 1e-14


@dataclass(frozen=True)
class Winding(Curve):
    """The real axis walked at a given rate, so that its length is the angle wound up.

    Args:
        rate: angle [rad] for each unit of t, above 0; takes and gives arrays.
        base: curve whose parameter is used.
    """

    rate: Callable[[Reals], Reals]
    base: Curve

    @property
    def span(self) -> tuple[float, float]:
        return self.base.span

    def breaks(self) -> tuple[float, ...]:
        return self.base.breaks()

    @cached_property
    def angle(self) -> ArcLength:
        """Angle wound up from the start [rad], and back."""
        return ArcLength(self, 1e-13)

    def point(self, t: Reals) -> Points:
        return np.asarray(self.angle.at(t), dtype=complex)

    def derivative(self, t: Reals) -> Points:
        return np.asarray(self.rate(np.asarray(t, dtype=float)), dtype=complex)


@dataclass(frozen=True)
class Milestones:
    """Point, direction and curvature of a curve by its length, from tables of polynomials.

    Args:
        lengths: length along the curve.

    Raises:
        ToleranceError: on first use, when the tables do not come near enough within their budget of panels.
    """

    lengths: ArcLength

    @cached_property
    def total(self) -> float:
        """Length of the whole curve [mm]."""
        return self.lengths.total

    @cached_property
    def _table(self) -> tuple[Reals, Points]:
        """Edges of the panels [mm]; coefficients of the polynomials, highest power first, shape (powers, panels, 3)."""
        curve = self.lengths.curve
        stops = [self.lengths.at(np.array(s)) for s in smooth_spans(curve)]
        between = (_NODES[1:] + _NODES[:-1]) / 2
        off, count = np.inf, _FEWEST_PANELS
        while count <= _MOST_PANELS:
            edges = np.unique(np.concatenate([np.linspace(a, b, count + 1) for a, b in stops]))
            middle, half = (edges[1:] + edges[:-1])[:, None] / 2, np.diff(edges)[:, None] / 2
            t = self.lengths.parameter(middle + half * _NODES)
            values = np.stack([curve.point(t), curve.tangent(t), curve.curvature(t) + 0j], axis=-1)
            powers = np.einsum("pn,knv->pkv", np.linalg.inv(np.vander(_NODES)), values)
            u = self.lengths.parameter(middle + half * between)
            guess = np.einsum("np,pkv->knv", np.vander(between, _NODES.size), powers)
            size = float(np.max(np.abs(values[..., 0])))
            misses = np.abs(guess[..., 0] - curve.point(u)) / size, np.abs(guess[..., 1] - curve.tangent(u))
            off = max(float(m.max()) for m in misses)
            if off <= _TABLE:
                return edges, powers
            count *= 2
        raise ToleranceError(
            f"{_MOST_PANELS} panels leave a share of {off:.3g} of error in a pitch curve walked by its length; "
            f"{_TABLE:.3g} is allowed: declare its corners in breaks(), or smooth it"
        )

    def at(self, s: Reals, what: int) -> Points:
        """Points [mm] (0), unit directions (1) or curvatures [1/mm] (2) at lengths s [mm] from the start, any shape."""
        edges, powers = self._table
        k = np.clip(np.searchsorted(edges, s, side="right") - 1, 0, edges.size - 2)
        x = (2 * s - edges[k] - edges[k + 1]) / (edges[k + 1] - edges[k])
        value = powers[0, k, what]
        for row in powers[1:, :, what]:
            value = value * x + row[k]
        return value


@dataclass(frozen=True)
class ByLength(Curve):
    """A closed curve walked at unit speed, any number of times round.

    Args:
        miles: one period of it by length.
        step: turn from one period to the next, as a unit complex number.
        first: first length of the part wanted [mm].
        last: last length [mm].
    """

    miles: Milestones
    step: complex
    first: float
    last: float

    @property
    def span(self) -> tuple[float, float]:
        return self.first, self.last

    def part(self, first: float, last: float) -> "ByLength":
        """The same walk between other lengths [mm]."""
        return ByLength(self.miles, self.step, first, last)

    def _at(self, s: Reals, what: int) -> Points:
        s = np.asarray(s, dtype=float)
        rounds = np.floor(s / self.miles.total)
        value = self.miles.at(s - rounds * self.miles.total, what)
        return value if what == _CURVATURE else value * np.power(self.step, rounds)

    def point(self, t: Reals) -> Points:
        return self._at(t, _POINT)

    def derivative(self, t: Reals) -> Points:
        return self._at(t, _TANGENT)

    def second(self, t: Reals) -> Points:
        return 1j * self._at(t, _CURVATURE) * self._at(t, _TANGENT)

    def turning(self, t: Reals) -> Reals:
        return self._at(t, _CURVATURE).real


@dataclass(frozen=True)
class PitchCurve:
    """A closed pitch curve about the origin, held for one of its equal periods.

    Args:
        curve: one period, counter-clockwise, seen from the axis under ever growing polar angle.
        order: number of periods round the axis [-].

    Raises:
        DesignError: the period does not lead to the next, or the curve does not run round the axis.
    """

    curve: Curve
    order: int = 1

    def __post_init__(self) -> None:
        if self.order < 1:
            raise DesignError(f"a pitch curve of {self.order} periods was asked; it must have 1 or more")
        start, end = self.curve.start, self.curve.end
        if not abs(end - start * self.step) <= _JOIN * abs(start):
            raise DesignError(
                f"the pitch curve misses its own beginning by {abs(end - start * self.step):.4g} mm after one of "
                f"{self.order} periods: let it run from any point to the same place {360 / self.order:.5g} deg on"
            )
        t = self.curve.sample(_PLACES)
        z, slope = self.curve.point(t), self.curve.derivative(t)
        onward = np.imag(slope * np.conj(z))
        if not np.all(onward > 0):
            worst = complex(z[int(np.argmin(onward))])
            raise DesignError(
                f"the pitch curve must run counter-clockwise round the axis everywhere; near x {worst.real:.4g}, y "
                f"{worst.imag:.4g} mm it does not: move the axis inside it, or turn the curve round"
            )
        if not abs(self.winding.angle.total - 2 * math.pi / self.order) < 1e-6:
            raise DesignError(
                f"a period of the pitch curve winds {math.degrees(self.winding.angle.total):.5g} deg round the axis; "
                f"one of {self.order} must wind {360 / self.order:.5g} deg"
            )

    @property
    def step(self) -> complex:
        """Turn from one period to the next, as a unit complex number."""
        return complex(np.exp(2j * np.pi / self.order))

    @cached_property
    def winding(self) -> Winding:
        """Polar angle gained from the start."""

        def rate(t: Reals) -> Reals:
            z = self.curve.point(t)
            return np.imag(self.curve.derivative(t) * np.conj(z)) / np.abs(z) ** 2

        return Winding(rate, self.curve)

    @cached_property
    def lengths(self) -> ArcLength:
        """Length along one period [mm]."""
        return ArcLength(self.curve, 1e-10)

    @property
    def length(self) -> float:
        """Length once round [mm]."""
        return self.order * self.lengths.total

    @cached_property
    def by_length(self) -> ByLength:
        """The curve walked at unit speed."""
        return ByLength(Milestones(self.lengths), self.step, 0.0, self.length)

    @cached_property
    def radii(self) -> tuple[float, float]:
        """Least and greatest distance from the axis [mm]."""
        r = np.abs(self.curve.point(self.curve.sample(_PLACES)))
        return float(r.min()), float(r.max())

    @cached_property
    def sharpest(self) -> tuple[float, complex]:
        """Greatest curvature [1/mm] and where it is [mm]."""
        return self._curvature(1)

    @cached_property
    def flattest(self) -> tuple[float, complex]:
        """Least curvature [1/mm], negative where the curve is hollow, and where it is [mm]."""
        return self._curvature(-1)

    def _curvature(self, sign: int) -> tuple[float, complex]:
        t = self.curve.sample(_PLACES)
        bend = self.curve.curvature(t)
        k = int(np.argmax(sign * bend))
        return float(bend[k]), complex(self.curve.point(t[k]))

    def mate(self, centre_distance: float) -> "MatingCurve":
        """The curve that rolls on one period of this at a centre distance [mm]."""
        return MatingCurve(self, centre_distance)

    def closing_distance(self, order: int) -> float:
        """Centre distance [mm] at which the mating curve closes with `order` periods, each rolling on one of this.

        Raises:
            DesignError: the order is below 1.
        """
        if order < 1:
            raise DesignError(f"the mating curve was asked with {order} periods; it must have 1 or more")

        def excess(distance: float) -> float:
            return self.mate(distance).turn.angle.total - 2 * math.pi / order

        # The mate turns the more the nearer its axis is to the outermost point, without bound.
        reach = self.radii[1]
        gap = reach
        while excess(reach + gap) > 0:
            gap *= 2
        low = gap / 2
        while excess(reach + low) < 0:
            gap, low = low, low / 2
        return float(brentq(lambda d: excess(reach + d), low, gap, xtol=_EXACT * reach, rtol=_EXACT)) + reach


@dataclass(frozen=True)
class MatingCurve(Curve):
    """The pitch curve that rolls on another, both turning about fixed axes: equal lengths pass the line of centres.

    Its own frame: at the start the contact lies on its +x axis; it is walked clockwise, in step with the given curve.

    Args:
        given: the given pitch curve.
        centre_distance: [mm], beyond the given curve's greatest radius.

    Raises:
        DesignError: the centre distance is too small.
    """

    given: PitchCurve
    centre_distance: float

    def __post_init__(self) -> None:
        if not self.centre_distance > self.given.radii[1]:
            raise DesignError(
                f"the centre distance is {self.centre_distance:.6g} mm; it must be above the greatest radius of the "
                f"pitch curve, {self.given.radii[1]:.6g} mm"
            )

    @property
    def span(self) -> tuple[float, float]:
        return self.given.curve.span

    def breaks(self) -> tuple[float, ...]:
        return self.given.curve.breaks()

    @cached_property
    def turn(self) -> Winding:
        """Angle by which the mate turns on from the start."""
        return Winding(self._rate, self.given.curve)

    def _rate(self, t: Reals) -> Reals:
        radius = np.abs(self.given.curve.point(t))
        return self.given.winding.rate(t) * radius / (self.centre_distance - radius)

    def point(self, t: Reals) -> Points:
        radius = np.abs(self.given.curve.point(t))
        return (self.centre_distance - radius) * np.exp(-1j * self.turn.angle.at(t))

    def derivative(self, t: Reals) -> Points:
        z, slope = self.given.curve.point(t), self.given.curve.derivative(t)
        radius = np.abs(z)
        inward = -np.real(slope * np.conj(z)) / radius
        return (inward - 1j * self._rate(t) * (self.centre_distance - radius)) * np.exp(-1j * self.turn.angle.at(t))

    def second(self, t: Reals) -> Points:
        curve, distance = self.given.curve, self.centre_distance
        z, slope, bend = curve.point(t), curve.derivative(t), curve.second(t)
        radius = np.abs(z)
        climb = np.real(slope * np.conj(z)) / radius
        climb_rate = (np.abs(slope) ** 2 + np.real(bend * np.conj(z)) - climb**2) / radius
        angle = np.imag(slope * np.conj(z)) / radius**2
        angle_rate = np.imag(bend * np.conj(z)) / radius**2 - 2 * climb * angle / radius
        own = distance - radius
        turn, turn_rate = angle * radius / own, angle_rate * radius / own + angle * climb * distance / own**2
        along = -climb_rate - own * turn**2 + 1j * (2 * climb * turn - own * turn_rate)
        return along * np.exp(-1j * self.turn.angle.at(t))

    def closed(self, order: int) -> PitchCurve:
        """The whole mate as a pitch curve of so many periods, counter-clockwise from the +x axis."""
        return PitchCurve(Turned(Reversed(self), complex(np.exp(2j * np.pi / order))), order)


@dataclass(frozen=True)
class Polar(Curve):
    """A smooth curve about the origin by its radius over the polar angle, summed from waves.

    Args:
        waves: amplitudes of exp(i n order angle) for n = 0, 1, ... of the radius [mm], shape (n,).
        order: number of equal periods round the axis [-]; the curve is one of them.
    """

    waves: tuple[complex, ...]
    order: int

    @classmethod
    def of(cls, radius: Callable[[Reals], Reals], order: int = 1) -> "Polar":
        """The curve of a radius function.

        Args:
            radius: polar angle [rad] -> radius [mm], smooth, repeating `order` times a turn; takes and gives arrays.
            order: number of equal periods [-].

        Raises:
            DesignError: the radius is not above 0 everywhere, does not repeat, or is not smooth.
        """
        angle = np.arange(2 * _WAVES) / (2 * _WAVES) * 2 * np.pi / order
        r = np.asarray(radius(angle), dtype=float) * np.ones(angle.size)
        if not np.all(r > 0):
            raise DesignError(f"the radius goes down to {r.min():.4g} mm; it must stay above 0")
        again = np.asarray(radius(angle + 2 * np.pi / order), dtype=float) * np.ones(angle.size)
        if not np.max(np.abs(again - r)) <= _JOIN * r.max():
            raise DesignError(
                f"the radius differs by {np.max(np.abs(again - r)):.4g} mm from itself {360 / order:.5g} deg on; it "
                f"must repeat {order} times a turn"
            )
        waves = np.fft.rfft(r) / r.size
        last = float(np.abs(waves[-_WAVES // 8 :]).max())
        if last > _LAST_WAVES * r.max():
            raise DesignError(
                f"the radius is not smooth enough: waves of {_WAVES} to a period still reach {last:.3g} mm; "
                f"{_LAST_WAVES * r.max():.3g} mm is allowed: round its corners"
            )
        keep = int(np.max(np.flatnonzero(np.abs(waves) > _NO_WAVE * r.max()))) + 1
        return cls((complex(waves[0]), *(complex(2 * w) for w in waves[1:keep])), order)

    @property
    def span(self) -> tuple[float, float]:
        return 0.0, 2 * math.pi / self.order

    def radius(self, t: Reals, derivative: int = 0) -> Reals:
        """Radius [mm] at polar angles t [rad], or a derivative of it by the angle."""
        n = 1j * self.order * np.arange(len(self.waves))
        turn = np.exp(1j * self.order * np.asarray(t, dtype=float))
        return np.asarray(np.polyval((np.array(self.waves) * n**derivative)[::-1], turn).real, dtype=float)

    def point(self, t: Reals) -> Points:
        return self.radius(t) * np.exp(1j * np.asarray(t))

    def derivative(self, t: Reals) -> Points:
        return (self.radius(t, 1) + 1j * self.radius(t)) * np.exp(1j * np.asarray(t))

    def second(self, t: Reals) -> Points:
        return (self.radius(t, 2) + 2j * self.radius(t, 1) - self.radius(t)) * np.exp(1j * np.asarray(t))
