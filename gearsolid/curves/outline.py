"""The outline: the one closed shape that area, distance, roll test, drawing and solid all read.

An outline is held for one pitch and repeated `order` times about the origin. Material lies to the LEFT of travel: a
wheel is travelled counter-clockwise, the toothed hole of an annulus clockwise. The pieces of a pitch either lead on to
the next pitch (a toothed rim) or close on themselves (a pattern of pins or holes).
"""

from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from typing import Literal

import numpy as np

from gearsolid.curves.curve import Curve, Points, Reals
from gearsolid.errors import DesignError, ToleranceError

Role = Literal["flank", "fillet", "tip", "root", "pin", "hole"]

# Pieces written by different formulas must meet this closely [mm], relative to the outline's size.
_JOIN = 1e-9

# Breaks closer than this share of the span are one.
_DISTINCT = 1e-9

# Areas that change by less than this share of the squared size when the panels are halved are settled.
_SETTLED = 1e-12
_MOST_PANELS = 4096
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(24)


@dataclass(frozen=True)
class Piece:
    """One smooth stretch of an outline and what the trade calls it."""

    curve: Curve
    role: Role


@dataclass(frozen=True)
class Outline:
    """A closed boundary, one pitch of it, repeated `order` times about the origin.

    Args:
        pieces: the pitch in travel order, material on the left.
        order: how often the pitch stands round the circle.

    Raises:
        DesignError: pieces do not join, or the pitch neither closes nor leads to the next one.
    """

    pieces: tuple[Piece, ...]
    order: int

    def __post_init__(self) -> None:
        if self.order < 1 or not self.pieces:
            raise DesignError(
                f"an outline needs at least one piece and one pitch, not {len(self.pieces)}, {self.order}"
            )
        ends = [p.curve.end for p in self.pieces]
        starts = [p.curve.start for p in self.pieces]
        size = float(np.max(np.abs(starts + ends)))
        if not np.isfinite(size):
            raise DesignError("an outline piece has no finite end point: its flank was asked beyond its reach")
        for k, (a, b) in enumerate(zip(ends[:-1], starts[1:], strict=True)):
            if abs(a - b) > _JOIN * size:
                raise DesignError(
                    f"outline pieces {k} ({self.pieces[k].role}) and {k + 1} ({self.pieces[k + 1].role}) miss each "
                    f"other by {abs(a - b):.3g} mm"
                )
        if min(abs(ends[-1] - starts[0] * f) for f in self._steps) > _JOIN * size:
            raise DesignError("the last outline piece neither closes the pitch nor reaches the next one")
        if self.order > 1 and not self.is_chain and self._surrounds_origin:
            raise DesignError(
                f"an outline closed round the origin cannot be repeated {self.order} times; give one pitch of it, or "
                "order 1"
            )

    @property
    def _steps(self) -> tuple[complex, complex, complex]:
        turn = complex(np.exp(2j * np.pi / self.order))
        return 1.0 + 0j, turn, turn.conjugate()

    @property
    def is_chain(self) -> bool:
        """Whether the pitches join into one boundary round the origin; else they are `order` separate loops."""
        size = max(abs(p.curve.start) for p in self.pieces)
        closed = abs(self.pieces[-1].curve.end - self.pieces[0].curve.start) <= _JOIN * size
        return not closed or (self.order == 1 and self._surrounds_origin)

    @property
    def _surrounds_origin(self) -> bool:
        turns = sum(np.sum(np.angle(z[1:] / z[:-1])) for z in (p.curve.point(p.curve.sample(65)) for p in self.pieces))
        return bool(abs(turns) > np.pi)

    @property
    def step(self) -> complex:
        """Factor from one pitch to the next in travel order: exp(+-2 pi i / order)."""
        end, start = self.pieces[-1].curve.end, self.pieces[0].curve.start
        return min(self._steps[1:], key=lambda f: abs(end - start * f)) if self.is_chain else self._steps[1]

    @cached_property
    def area(self) -> float:
        """Enclosed area of all pitches [mm2]; negative for a hole, by Green's theorem on the exact pieces."""
        return self.order * sum(_green(p.curve) for p in self.pieces)

    @cached_property
    def r_min(self) -> float:
        """Smallest distance of the boundary from the origin [mm]."""
        return min(_extreme_radius(p.curve, -1) for p in self.pieces)

    @cached_property
    def r_max(self) -> float:
        """Largest distance of the boundary from the origin [mm]."""
        return max(_extreme_radius(p.curve, +1) for p in self.pieces)

    @property
    def pitch_angle(self) -> float:
        """2 pi / order [rad]."""
        return 2 * np.pi / self.order

    def points(self, per_piece: int = 33) -> Points:
        """Boundary of one pitch as points [mm], shape (pieces x per_piece,), for pictures only."""
        return np.concatenate([p.curve.point(p.curve.sample(per_piece)) for p in self.pieces])


def smooth_spans(curve: Curve) -> list[tuple[float, float]]:
    """The span cut at the curve's breaks; breaks at its ends or found twice make no span of their own."""
    t0, t1 = curve.span
    cuts = [t0]
    for b in sorted(curve.breaks()):
        if min(b - cuts[-1], t1 - b) > _DISTINCT * (t1 - t0):
            cuts.append(b)
    return list(pairwise([*cuts, t1]))


def _green(curve: Curve) -> float:
    return sum(_swept(curve, t0, t1) for t0, t1 in smooth_spans(curve))


def _swept(curve: Curve, t0: float, t1: float) -> float:
    """Area swept by the ray from the origin [mm2]; panels are halved until only rounding changes."""
    before, panels = np.inf, 8
    while panels <= _MOST_PANELS:
        edges = np.linspace(t0, t1, panels + 1)
        half = np.diff(edges)[:, None] / 2
        t = edges[:-1, None] + half * (1 + _NODES)
        points = curve.point(t)
        area = float(np.sum(half * _WEIGHTS * np.imag(np.conj(points) * curve.derivative(t)))) / 2
        change = abs(area - before)
        if change <= _SETTLED * float(np.max(np.abs(points))) ** 2:
            return area
        before, panels = area, 2 * panels
    raise ToleranceError(
        f"the area under a {type(curve).__name__} still changes by {change:.3g} mm2 with {_MOST_PANELS} panels; a "
        "corner or cusp inside it must be among its breaks"
    )


def _extreme_radius(curve: Curve, sign: int, samples: int = 257) -> float:
    """Largest (+1) or smallest (-1) distance of a curve from the origin [mm], refined to rounding."""
    t: Reals = curve.sample(samples)
    for _ in range(6):
        r = sign * np.abs(curve.point(t))
        k = int(np.argmax(r))
        t = np.linspace(t[max(k - 1, 0)], t[min(k + 1, samples - 1)], samples)
    return float(np.abs(curve.point(t))[int(np.argmax(sign * np.abs(curve.point(t))))])
