"""Signed distance from an outline, positive outside the material and negative inside.

One pitch is sampled and joined by quintic pieces that share point and two derivatives with the exact curves; the error
of that stand-in is measured and kept. Queries are folded into one pitch, so their cost does not depend on the order.
"""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy.spatial import cKDTree

from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.outline import Outline, smooth_spans
from gearsolid.errors import ToleranceError

Integers = NDArray[np.int64]

# Largest error of the quintic stand-in, relative to the outline's size: far below any gap that is asked about.
_STAND_IN = 2e-9
# Largest error of a distance read off the osculating circle of the nearest sample, as a share of the pitch length.
_ROUGH = 5e-5
_SAMPLES_PER_PITCH = 96
_MOST_SAMPLES_PER_PITCH = 5000
_FEWEST_PER_SPAN = 9
_NEWTON_STEPS = 4

# How often the sample spacing is halved towards a corner.
_HALVINGS = 6


@dataclass(frozen=True)
class Cloud:
    """Samples of one pitch in travel order, and the quintic from each to the next.

    Args:
        piece: piece index of each sample, shape (n,).
        point: [mm], shape (n,).
        tangent: unit direction of travel, shape (n,).
        curvature: signed curvature [1/mm], limited by the sample spacing, shape (n,).
        hand: direction that decides the side at span ends: the mean of the two tangents that meet there, shape (n,).
        edge: -1 at the first sample of a span, +1 at its last, else 0, shape (n,).
        quintic: coefficients to the next sample in powers 0 to 5 of the fraction travelled, shape (6, n).
        corner: whether the direction of travel jumps at the sample, shape (n,).
        error: largest distance of the quintics from the exact curve, measured half way between samples [mm].
        rough_error: largest distance of the osculating circles from the exact curve there [mm].
    """

    piece: Integers
    point: Points
    tangent: Points
    curvature: Reals
    hand: Points
    edge: Integers
    quintic: Points
    corner: NDArray[np.bool_]
    error: float
    rough_error: float


@dataclass(frozen=True)
class Near:
    """The nearest boundary points of a set of query points, all of the query's shape.

    Args:
        distance: signed [mm], positive outside the material.
        piece: piece index.
        foot: nearest boundary point, in the outline's frame [mm].
        outward: unit direction of growing distance.
    """

    distance: Reals
    piece: Integers
    foot: Points
    outward: Points


class Field:
    """Distance queries on one outline. Places on the boundary are told by a real number: sample index + fraction."""

    def __init__(self, outline: Outline) -> None:
        self.outline = outline

    @cached_property
    def cloud(self) -> Cloud:
        """Samples of one pitch, denser where the pieces' own parameters are slow (cusps).

        Raises:
            ToleranceError: the outline is too rugged for the stand-in.
        """
        size, count = self.outline.r_max, _SAMPLES_PER_PITCH
        pitch = self.outline.pitch_angle * size
        while True:
            cloud = _sampled(self.outline, count)
            if cloud.error <= _STAND_IN * size and cloud.rough_error <= _ROUGH * pitch:
                return cloud
            count *= 2
            if count > _MOST_SAMPLES_PER_PITCH:
                raise ToleranceError(
                    f"{_MOST_SAMPLES_PER_PITCH} samples a pitch leave an error of {cloud.error:.3g} mm; "
                    f"{_STAND_IN * size:.3g} mm is allowed: split the outline where its curvature is extreme"
                )

    @cached_property
    def _turns(self) -> Points:
        """The pitch itself and its two neighbours, as factors."""
        shifts = np.arange(-1, 2) if self.outline.order > 2 else np.arange(self.outline.order)
        return np.exp(1j * self.outline.pitch_angle * shifts)

    @cached_property
    def _tree(self) -> cKDTree:
        z = np.multiply.outer(self._turns, self.cloud.point).ravel()
        return cKDTree(np.column_stack([z.real, z.imag]))

    @cached_property
    def _middle(self) -> float:
        """Polar angle of the middle of the pitch [rad]."""
        z = self.cloud.point
        swept = np.concatenate([[0.0], np.cumsum(np.angle(z[1:] * np.conj(z[:-1])))])
        return float(np.angle(z[0]) + (swept.min() + swept.max()) / 2)

    @cached_property
    def spans(self) -> Integers:
        """First and last sample of the smooth span each sample belongs to, shape (n, 2)."""
        edge = self.cloud.edge
        first, last = np.flatnonzero(edge == -1), np.flatnonzero(edge == 1)
        which = np.cumsum(edge == -1) - 1
        return np.column_stack([first[which], last[which]])

    def fold(self, z: Points) -> Points:
        """Factor that turns each z out of the first pitch to where it stands: z = factor x folded."""
        pitch = self.outline.pitch_angle
        return np.exp(1j * pitch * np.round((np.angle(z) - self._middle) / pitch))

    def _candidates(self, z: Points) -> tuple[Integers, Points, Points]:
        """The two nearest samples, the query points in the frame of those samples, and the factors back."""
        turned = self.fold(z)
        folded = z / turned
        _, index = self._tree.query(np.column_stack([folded.real, folded.imag]), k=2)
        factor = self._turns[index // self.cloud.point.size]
        return index % self.cloud.point.size, folded[:, None] / factor, turned[:, None] * factor

    def rough(self, z: Points) -> tuple[Reals, Points]:
        """Signed distance and outward direction from the osculating circles of the nearest samples.

        Args:
            z: query points [mm], shape (n,).

        Returns:
            Signed distances [mm] and unit directions, shape (n,). Close to the boundary the error of the distance is of
            third order in the sample spacing.
        """
        distance, index, _, back = self._nearest_sample(z)
        return distance, -1j * self.cloud.tangent[index] * back

    def _nearest_sample(self, z: Points) -> tuple[Reals, Integers, Points, Points]:
        """Rough signed distances, the samples they are from, z in the frame of those samples, and the factors back."""
        if z.size == 0:
            return np.empty(0), np.empty(0, dtype=np.int64), z, z
        index, local, back = self._candidates(z)
        distance = _osculating_distance(self.cloud, index, local)
        best = np.arange(z.size), np.argmin(np.abs(distance), axis=1)
        return distance[best], index[best], local[best], back[best]

    def near(self, z: Points) -> Near:
        """Nearest boundary points.

        Args:
            z: query points [mm], shape (n,).
        """
        _, index, local, back = self._nearest_sample(z)
        cloud = self.cloud
        start, fraction = self._foot(local, index)
        foot, slope, _ = self._along(start, fraction)
        gap = np.abs(local - foot)
        hand = self._hand(start, fraction, slope)
        normal = -1j * hand / np.abs(hand)
        sign = np.where(np.real((local - foot) * np.conj(normal)) < 0, -1.0, 1.0)
        # So near the boundary the difference of two points has lost its direction; the boundary's own normal has not.
        far = gap > 1e-6
        outward = np.where(far, sign * (local - foot) / np.where(far, gap, 1.0), normal)
        return Near(sign * gap, cloud.piece[start], foot * back, outward * back)

    def evaluate(self, place: Reals) -> tuple[Points, Points]:
        """Boundary point of the first pitch and its derivative by the place (sample index + fraction), any shape."""
        start = np.minimum(np.floor(place).astype(np.int64), self.cloud.point.size - 1)
        start = np.where(self.cloud.edge[start] == 1, start - 1, start)
        z, dz, _ = self._along(start, place - start)
        return z, dz

    def piece_at(self, place: Reals) -> Integers:
        """Piece index at a place."""
        return self.cloud.piece[np.floor(place).astype(np.int64)]

    def _along(self, start: Integers, u: Reals) -> tuple[Points, Points, Points]:
        """Point and two derivatives by the fraction on the given quintics."""
        c0, c1, c2, c3, c4, c5 = self.cloud.quintic[:, start]
        z = c0 + u * (c1 + u * (c2 + u * (c3 + u * (c4 + u * c5))))
        dz = c1 + u * (2 * c2 + u * (3 * c3 + u * (4 * c4 + u * (5 * c5))))
        ddz = 2 * c2 + u * (6 * c3 + u * (12 * c4 + u * (20 * c5)))
        return z, dz, ddz

    def _foot(self, local: Points, index: Integers) -> tuple[Integers, Reals]:
        """Start samples and fractions of the feet near given samples, by Newton steps within their smooth spans."""
        first, last = self.spans[index].T
        place = np.clip(index + self._first_guess(local, index), first, last)
        for _ in range(_NEWTON_STEPS):
            start = np.clip(np.floor(place).astype(np.int64), first, last - 1)
            z, dz, ddz = self._along(start, place - start)
            away = z - local
            miss = np.real(away * np.conj(dz))
            square = np.abs(dz) ** 2
            slope = square + np.real(away * np.conj(ddz))
            # Beyond the centre of curvature Newton would climb; a plain step along the tangent keeps going downhill.
            slope = np.where(slope > 0.1 * square, slope, square)
            step = np.clip(-miss / np.where(slope > 0, slope, 1.0), -1.0, 1.0)
            place = np.clip(place + step, first, last)
        start = np.clip(np.floor(place).astype(np.int64), first, last - 1)
        return start, place - start

    def _first_guess(self, local: Points, index: Integers) -> Reals:
        """How far the feet lie from given samples, in samples, going by the tangents there.

        At a cusp the way walked grows with the square of the parameter, and Newton started on it would never leave.
        """
        cloud, stop = self.cloud, self.cloud.point.size - 1
        along = np.real((local - cloud.point[index]) * np.conj(cloud.tangent[index]))
        side = np.where(along < 0, -1, 1)
        run = np.abs(cloud.point[np.clip(index + side, 0, stop)] - cloud.point[index])
        share = np.minimum(np.abs(along) / np.where(run > 0, run, 1.0), 1.0)
        start = np.minimum(index, stop - 1)
        still = np.abs(self._along(start, (index - start).astype(np.float64))[1]) < 1e-6 * run
        return side * np.where(still, np.sqrt(share), share)

    def _hand(self, start: Integers, fraction: Reals, slope: Points) -> Points:
        cloud = self.cloud
        still = np.abs(slope) < 1e-9 * self.outline.r_max
        hand = np.where(still, cloud.tangent[start], slope)
        hand = np.where((fraction == 0) & (cloud.edge[start] == -1), cloud.hand[start], hand)
        return np.where((fraction == 1) & (cloud.edge[start + 1] == 1), cloud.hand[start + 1], hand)


def _sampled(outline: Outline, per_pitch: int) -> Cloud:
    spans = [(k, s) for k, p in enumerate(outline.pieces) for s in smooth_spans(p.curve)]
    lengths = np.array([_chord_length(outline, k, s) for k, s in spans])
    counts = np.maximum(_FEWEST_PER_SPAN, np.ceil(per_pitch * lengths / lengths.sum()).astype(int) + 1)
    sharp = _sharp_ends(outline, spans)
    columns = [
        _sampled_span(outline, k, _graded(s, n, ends)) for (k, s), n, ends in zip(spans, counts, sharp, strict=True)
    ]
    piece, point, tangent, curvature, edge, quintic, error, rough = (
        np.concatenate([c[i] for c in columns], axis=-1) for i in range(len(columns[0]))
    )
    hand = tangent.copy()
    first, last = np.flatnonzero(edge == -1), np.flatnonzero(edge == 1)
    meets = np.roll(last, 1)
    turn = np.ones(first.size, dtype=complex)
    turn[0] = 1 / outline.step if outline.is_chain else 1.0
    hand[first] = tangent[first] + tangent[meets] * turn
    hand[meets] = tangent[meets] + tangent[first] / turn
    corner = np.abs(hand) < (2 - 1e-9) * (edge != 0)
    # Where two spans form a cusp their tangents cancel; either one then decides the side.
    hand = np.where(np.abs(hand) < 1e-6, tangent, hand)
    return Cloud(piece, point, tangent, curvature, hand, edge, quintic, corner, float(error.max()), float(rough.max()))


def _sharp_ends(outline: Outline, spans: list[tuple[int, tuple[float, float]]]) -> list[tuple[bool, bool]]:
    """Whether each span starts and whether it ends in a corner."""
    ends = np.array([outline.pieces[k].curve.tangent(np.array(s)) for k, s in spans])
    step = outline.step if outline.is_chain else 1.0
    before = np.append(ends[-1:, 1] / step, ends[:-1, 1])
    start = np.abs(ends[:, 0] - before) > 1e-6
    return list(zip(start.tolist(), np.roll(start, -1).tolist(), strict=True))


def _graded(span: tuple[float, float], count: int, sharp: tuple[bool, bool]) -> Reals:
    """Parameters spread evenly, and drawn together towards corners.

    Beside a corner the nearest sample would else often lie on the wrong one of the two stretches that meet there.
    """
    t0, t1 = span
    towards = (t1 - t0) / (count - 1) * 0.5 ** np.arange(1, 1 + _HALVINGS)
    none = np.empty(0)
    extra = [t0 + towards if sharp[0] else none, t1 - towards if sharp[1] else none]
    return np.unique(np.concatenate([np.linspace(t0, t1, count), *extra]))


def _sampled_span(outline: Outline, piece: int, t: Reals) -> tuple[np.ndarray, ...]:
    curve = outline.pieces[piece].curve
    step, reach = np.diff(t), 1e-9 * (t[-1] - t[0])
    inside = np.clip(t, t[0] + reach, t[-1] - reach)
    point, slope, tangent = curve.point(t), curve.derivative(inside), curve.tangent(inside)
    chord = np.diff(point)
    gaps = np.abs(chord)
    limit = 0.5 / np.maximum(np.append(gaps, gaps[-1]), np.append(gaps[0], gaps))
    curvature = np.clip(curve.curvature(inside), -limit, limit)
    quintic = np.zeros((6, t.size), dtype=complex)
    bend = curve.second(inside)
    m0, m1 = slope[:-1] * step, slope[1:] * step
    a0, a1 = bend[:-1] * step**2, bend[1:] * step**2
    quintic[0] = point
    quintic[1, :-1] = m0
    quintic[2, :-1] = a0 / 2
    quintic[3, :-1] = 10 * chord - 6 * m0 - 4 * m1 - 1.5 * a0 + a1 / 2
    quintic[4, :-1] = -15 * chord + 8 * m0 + 7 * m1 + 1.5 * a0 - a1
    quintic[5, :-1] = 6 * chord - 3 * (m0 + m1) - (a0 - a1) / 2
    middle = 0.5 ** np.arange(6) @ quintic[:, :-1]
    exact, direction = curve.point(t[:-1] + step / 2), curve.tangent(t[:-1] + step / 2)
    error = np.append(np.abs(np.imag((middle - exact) * np.conj(direction))), 0.0)
    ahead = (exact - point[:-1]) * np.conj(tangent[:-1])
    rough = np.append(np.abs(ahead.imag - curvature[:-1] * np.abs(ahead) ** 2 / 2), 0.0)
    edge = np.zeros(t.size, dtype=np.int64)
    edge[0], edge[-1] = -1, 1
    return np.full(t.size, piece), point, tangent, curvature, edge, quintic, error, rough


def _chord_length(outline: Outline, piece: int, span: tuple[float, float]) -> float:
    return float(np.sum(np.abs(np.diff(outline.pieces[piece].curve.point(np.linspace(*span, 17))))))


def _osculating_distance(cloud: Cloud, index: Integers, local: Points) -> Reals:
    """Signed distance to the osculating circle at each sample; at span ends, to the end point when beyond it."""
    tangent, curvature = cloud.tangent[index], cloud.curvature[index]
    offset = (local - cloud.point[index]) * np.conj(tangent)
    along, left = offset.real, offset.imag
    squared = along**2 + left**2
    # Left-hand distance to a circle of curvature k, written so that it stays exact as k tends to 0.
    inner = np.maximum(1 - 2 * curvature * left + curvature**2 * squared, 0.0)
    # Beyond the circle's centre its far side would come nearer: there the side of the tangent decides.
    to_circle = (2 * left - curvature * squared) / (1 + np.sqrt(inner))
    to_circle = np.where(curvature * left > 0.5, np.sign(left) * np.sqrt(squared), to_circle)
    beyond = cloud.edge[index] * along > 0
    side = np.real((local - cloud.point[index]) * np.conj(1j * cloud.hand[index]))
    to_end = np.where(side < 0, -1.0, 1.0) * np.sqrt(squared)
    return -np.where(beyond, to_end, to_circle)


def field_of(outline: Outline) -> Field:
    """The distance field of an outline, kept with it for repeated use."""
    kept = vars(outline)
    if "_field" not in kept:
        kept["_field"] = Field(outline)
    field: Field = kept["_field"]
    return field
