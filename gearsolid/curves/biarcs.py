"""Outlines as chains of circular arcs within a stated distance: for machines that know nothing else."""

from typing import NamedTuple

import numpy as np

from gearsolid.curves.curve import Curve, Points, Reals
from gearsolid.curves.fit import Spline
from gearsolid.curves.fitted import fitted
from gearsolid.curves.outline import Outline
from gearsolid.curves.primitives import Arc, Formula, Segment
from gearsolid.errors import DesignError, ToleranceError

# Share of the tolerance that the splines, from which the arcs are taken, may use up.
_SPLINE_SHARE = 0.1
# A stretch between two knots of the arc chain is halved at most this often.
_ROUNDS = 14
# Arcs turn through less than this [rad], so that their ends fix them well.
_LARGEST_TURN = 3.0
# Places on each stretch, between its ends, where the distance is taken.
_SHARES = np.linspace(0, 1, 21)[1:-1]
# A peak of the distance between two of these places is higher than both by less than this share.
_GRID_MARGIN = 1.05


class ArcLoop(NamedTuple):
    """A closed chain of arcs.

    Args:
        corners: where arcs meet [mm], in travel order, shape (n,).
        bulges: tangent of a quarter of the turn of the arc that follows each corner [-], positive to the left, 0 for a
            straight line, shape (n,).
        error: largest distance from the exact outline [mm]; an estimate, taken on a grid.
    """

    corners: Points
    bulges: Reals
    error: float


def arc_loops(outline: Outline, tol: float) -> list[ArcLoop]:
    """Closed chains of arcs within `tol` of an outline: one rim, or one for each loop of a pattern.

    True arcs and segments stay as they are. Flanks become pairs of arcs that meet with one tangent and keep the
    flank's direction at their ends, the fewest that halving gives.

    Args:
        outline: exact outline.
        tol: allowed distance [mm].

    Raises:
        DesignError: the tolerance is not above 0.
        ToleranceError: a flank cannot be followed that closely.
    """
    if not tol > 0:
        raise DesignError(f"the arc tolerance is {tol:g} mm; it must be above 0, 0.002 mm is usual")
    chains = [_chain(p.curve, tol) for p in fitted(outline, _SPLINE_SHARE * tol).pieces]
    corners, bulges = (np.concatenate([c[k] for c in chains]) for k in range(2))
    error = max(c.error for c in chains)
    turned = corners * (outline.step ** np.arange(outline.order))[:, None]
    if outline.is_chain:
        return [ArcLoop(turned.ravel(), np.tile(bulges, outline.order), error)]
    return [ArcLoop(row, bulges, error) for row in turned]


def arc_through(first: complex, last: complex, bulge: float) -> Formula:
    """The arc that a bulge stands for, written so that a straight line is no exception; parameter 0 to 1.

    Args:
        first: [mm].
        last: [mm].
        bulge: tangent of a quarter of the turn [-], positive to the left.
    """
    chord, turn = last - first, 4 * float(np.arctan(bulge))
    # The chord to a place grows as the sine of half the turn to it, and lies half the turn left of the first direction.
    scale = chord / float(np.sinc(turn / (2 * np.pi)))

    def value(t: Reals) -> Points:
        return first + scale * t * np.sinc(turn * t / (2 * np.pi)) * np.exp(0.5j * turn * (t - 1))

    def slope(t: Reals) -> Points:
        return scale * np.exp(1j * turn * (t - 0.5))

    def bend(t: Reals) -> Points:
        return 1j * turn * slope(t)

    return Formula(value, slope, bend, 0.0, 1.0)


def _chain(curve: Curve, tol: float) -> ArcLoop:
    """A piece as arcs, its last point left out."""
    match curve:
        case Segment(first, _):
            return ArcLoop(np.array([first], dtype=complex), np.zeros(1), 0.0)
        case Arc():
            count = int(abs(curve.sweep) / _LARGEST_TURN) + 1
            bulge = np.tan(curve.sweep / count / 4)
            return ArcLoop(curve.point(curve.sample(count + 1)[:-1]), np.full(count, bulge), 0.0)
        case Spline():
            return _from_spline(curve, tol - curve.error)
    raise AssertionError(f"{type(curve).__name__} is no plain curve")


def _from_spline(spline: Spline, tol: float) -> ArcLoop:
    cuts = np.array(sorted(set(spline.knots)))
    for _ in range(_ROUNDS):
        pairs = _Biarcs.along(spline, cuts)
        gaps = _GRID_MARGIN * pairs.gaps(spline, cuts)
        far = gaps > tol
        if not np.any(far):
            return ArcLoop(*pairs.corners, spline.error + float(np.max(gaps)))
        cuts = np.sort(np.concatenate([cuts, (cuts[:-1] + cuts[1:])[far] / 2]))
    raise ToleranceError(
        f"{2 * cuts.size} arcs are still {float(np.max(gaps)):.3g} mm from the flank, not within the {tol:.3g} mm "
        "asked; ask for a larger arc tolerance"
    )


class _Biarcs(NamedTuple):
    """Pairs of arcs, one pair a stretch of a curve: ends, the place where the two meet, and directions at the ends."""

    first: Points
    middle: Points
    last: Points
    leaving: Points
    arriving: Points

    @classmethod
    def along(cls, curve: Curve, cuts: Reals) -> "_Biarcs":
        """Pairs with the curve's directions at the cuts, both arcs' tangents to their common corner equally long."""
        z, t = curve.point(cuts), curve.tangent(cuts)
        chord, t0, t1 = np.diff(z), t[:-1], t[1:]
        along = np.real(chord * np.conj(t0 + t1))
        opening = 2 * (1 - np.real(t0 * np.conj(t1)))
        # The tangents' length d solves |chord - d (t0 + t1)| = 2 d.
        d = np.abs(chord) ** 2 / (along + np.sqrt(along**2 + opening * np.abs(chord) ** 2))
        return cls(z[:-1], (z[:-1] + z[1:] + d * (t0 - t1)) / 2, z[1:], t0, t1)

    @property
    def corners(self) -> tuple[Points, Reals]:
        """Where arcs begin and the bulges of these arcs, pair after pair."""
        bulges = (self._half(self.middle - self.first, self.leaving), self._half(self.last - self.middle, None))
        places = np.stack([self.first, self.middle], axis=1).ravel()
        return places, np.tan(np.stack(bulges, axis=1).ravel() / 2)

    def _half(self, chord: Points, leaving: Points | None) -> Reals:
        """Half the turn of the arcs on a chord [rad]."""
        ratio = chord / leaving if leaving is not None else self.arriving / chord
        half: Reals = np.angle(ratio)
        return half

    def gaps(self, curve: Curve, cuts: Reals) -> Reals:
        """Largest distance of the curve from each pair [mm]; infinite where a pair turns so far that it may loop."""
        z = curve.point(cuts[:-1, None] + np.diff(cuts)[:, None] * _SHARES)
        turns = [self._half(self.middle - self.first, self.leaving), self._half(self.last - self.middle, None)]
        # Direction where the two arcs meet: the side of it tells which arc a place belongs to.
        direction = self.leaving * np.exp(2j * turns[0])
        ahead = np.real((z - self.middle[:, None]) * np.conj(direction)[:, None]) > 0
        to_first = _from_circle(z, self.first, self.leaving, self._bend(self.middle - self.first, turns[0]))
        to_second = _from_circle(z, self.last, self.arriving, self._bend(self.last - self.middle, turns[1]))
        gap = np.max(np.where(ahead, to_second, to_first), axis=1)
        calm = np.max(np.abs(turns), axis=0) < _LARGEST_TURN / 4
        return np.where(calm, gap, np.inf)

    @staticmethod
    def _bend(chord: Points, half: Reals) -> Reals:
        """Curvature [1/mm] of the arcs on chords, from half their turns [rad]."""
        return 2 * np.sin(half) / np.abs(chord)


def _from_circle(z: Points, through: Points, direction: Points, curvature: Reals) -> Reals:
    """Distances [mm] of rows of points from one circle a row, given by a point, its direction and its curvature."""
    local = (z - through[:, None]) / direction[:, None]
    k = curvature[:, None]
    # |local - i / k| - 1 / |k|, written so that straight lines are no exception.
    excess = k * np.abs(local) ** 2 - 2 * local.imag
    return np.abs(excess) / (1 + np.sqrt(np.maximum(1 + k * excess, 0.0)))
