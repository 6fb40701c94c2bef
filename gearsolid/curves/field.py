"""Signed distance from an outline: a cloud of samples finds the neighbourhood, the exact pieces give the number.

The distance is positive outside the material, negative inside. Queries are folded into one pitch, so the cost does not
depend on the order of the outline.
"""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy.spatial import cKDTree

from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.outline import Outline, smooth_spans

Integers = NDArray[np.int64]

_SAMPLES_PER_PITCH = 160
_FEWEST_PER_SPAN = 13


@dataclass(frozen=True)
class Cloud:
    """Samples of one pitch, in travel order.

    Args:
        piece: piece index of each sample, shape (n,).
        t: parameter in that piece [-], shape (n,).
        point: [mm], shape (n,).
        tangent: unit direction of travel, shape (n,).
        curvature: signed curvature [1/mm], limited by the sample spacing, shape (n,).
        hand: direction that decides the side at span ends: the mean of the two tangents that meet there, shape (n,).
        edge: -1 at the first sample of a span, +1 at its last, else 0, shape (n,).
        spacing: distance to the farther neighbour on the same span [mm], shape (n,).
    """

    piece: Integers
    t: Reals
    point: Points
    tangent: Points
    curvature: Reals
    hand: Points
    edge: Integers
    spacing: Reals


@dataclass(frozen=True)
class Near:
    """The nearest boundary points of a set of query points, all of the query's shape.

    Args:
        distance: signed [mm], positive outside the material.
        piece: piece index.
        t: parameter in the piece [-].
        foot: nearest boundary point, in the outline's frame [mm].
        outward: unit direction of growing distance.
    """

    distance: Reals
    piece: Integers
    t: Reals
    foot: Points
    outward: Points


class Field:
    """Distance queries on one outline."""

    def __init__(self, outline: Outline) -> None:
        self.outline = outline

    @cached_property
    def cloud(self) -> Cloud:
        """Samples of one pitch, denser where the pieces' own parameters are slow (cusps)."""
        spans = [(k, s) for k, p in enumerate(self.outline.pieces) for s in smooth_spans(p.curve)]
        lengths = [_chord_length(self.outline, k, s) for k, s in spans]
        columns: list[list[np.ndarray]] = [[] for _ in range(7)]
        for (k, (t0, t1)), length in zip(spans, lengths, strict=True):
            count = max(_FEWEST_PER_SPAN, int(np.ceil(_SAMPLES_PER_PITCH * length / sum(lengths))) + 1)
            curve = self.outline.pieces[k].curve
            t = np.linspace(t0, t1, count)
            inside = np.clip(t, t0 + 1e-9 * (t1 - t0), t1 - 1e-9 * (t1 - t0))
            point, tangent = curve.point(t), curve.tangent(inside)
            gaps = np.abs(np.diff(point))
            spacing = np.maximum(np.append(gaps, gaps[-1]), np.append(gaps[0], gaps))
            limit = 0.5 / spacing
            edge = np.zeros(count, dtype=np.int64)
            edge[0], edge[-1] = -1, 1
            values = (np.full(count, k), t, point, tangent, np.clip(curve.curvature(inside), -limit, limit), edge, spacing)
            for column, value in zip(columns, values, strict=True):
                column.append(value)
        piece, t, point, tangent, curvature, edge, spacing = map(np.concatenate, columns)
        hand = tangent.copy()
        first, last = np.flatnonzero(edge == -1), np.flatnonzero(edge == 1)
        meets = np.roll(last, 1)
        turn = np.ones(first.size, dtype=complex)
        if self.outline.is_chain:
            turn[0] = 1 / self.outline.step
        hand[first] = tangent[first] + tangent[meets] * turn
        hand[meets] = tangent[meets] + tangent[first] / turn
        return Cloud(piece, t, point, tangent, curvature, hand, edge, spacing)

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

    def fold(self, z: Points) -> Points:
        """Factor that turns each z out of the first pitch to where it stands: z = factor x folded."""
        pitch = self.outline.pitch_angle
        return np.exp(1j * pitch * np.round((np.angle(z) - self._middle) / pitch))

    def _candidates(self, folded: Points) -> tuple[Integers, Points]:
        """The two nearest samples of each folded point and the neighbour-pitch factor they stand at."""
        _, index = self._tree.query(np.column_stack([folded.real, folded.imag]), k=2)
        size = self.cloud.point.size
        return index % size, self._turns[index // size]

    def rough(self, z: Points) -> tuple[Reals, Integers]:
        """Signed distance from the osculating circles of the nearest samples.

        Args:
            z: query points [mm], any shape.

        Returns:
            Signed distances [mm], and the index of the sample used, both of the shape of z. Close to the boundary the
            error is of third order in the sample spacing.
        """
        z = np.asarray(z, dtype=complex)
        flat = z.ravel()
        folded = flat / self.fold(flat)
        index, factor = self._candidates(folded)
        local = folded[:, None] / factor
        distance = _osculating_distance(self.cloud, index, local)
        best = np.argmin(np.abs(distance), axis=1)[:, None]
        return (
            np.take_along_axis(distance, best, 1).reshape(z.shape),
            np.take_along_axis(index, best, 1).reshape(z.shape),
        )

    def near(self, z: Points) -> Near:
        """Nearest boundary points on the exact pieces.

        Args:
            z: query points [mm], any shape.
        """
        z = np.asarray(z, dtype=complex)
        flat = z.ravel()
        turned = self.fold(flat)
        index, factor = self._candidates(flat / turned)
        local = (flat / turned)[:, None] / factor
        piece, t = self.cloud.piece[index], self._foot(local, index)
        foot = self.evaluate(piece, t)[0]
        gap = np.abs(local - foot)
        best = np.argmin(gap, axis=1)[:, None]

        def pick(values: np.ndarray) -> np.ndarray:
            return np.take_along_axis(values, best, 1)[:, 0]

        local, foot, gap, piece, t, index, factor = map(pick, (local, foot, gap, piece, t, index, factor))
        hand = self._hand(piece, t, index)
        normal = -1j * hand / np.abs(hand)
        sign = np.where(np.real((local - foot) * np.conj(normal)) < 0, -1.0, 1.0)
        far = gap > 1e-9
        outward = np.where(far, sign * (local - foot) / np.where(far, gap, 1.0), normal)
        place = turned * factor
        return Near(
            (sign * gap).reshape(z.shape),
            piece.reshape(z.shape),
            t.reshape(z.shape),
            (foot * place).reshape(z.shape),
            (outward * place).reshape(z.shape),
        )

    def evaluate(self, piece: Integers, t: Reals) -> tuple[Points, Points, Points]:
        """Point, derivative and second derivative on pieces chosen element by element."""
        out = tuple(np.empty(np.shape(t), dtype=complex) for _ in range(3))
        for k, p in enumerate(self.outline.pieces):
            mine = piece == k
            if np.any(mine):
                values = (p.curve.point(t[mine]), p.curve.derivative(t[mine]), p.curve.second(t[mine]))
                for column, value in zip(out, values, strict=True):
                    column[mine] = value
        return out

    def tangent(self, piece: Integers, t: Reals) -> Points:
        """Unit direction of travel on pieces chosen element by element."""
        out = np.empty(np.shape(t), dtype=complex)
        for k, p in enumerate(self.outline.pieces):
            mine = piece == k
            if np.any(mine):
                out[mine] = p.curve.tangent(t[mine])
        return out

    def _foot(self, local: Points, index: Integers) -> Reals:
        """Parameters of the feet near the given samples, by Newton steps kept between the neighbouring samples."""
        cloud = self.cloud
        t = cloud.t[index]
        low = np.where(cloud.edge[index] == -1, t, cloud.t[np.maximum(index - 1, 0)])
        high = np.where(cloud.edge[index] == 1, t, cloud.t[np.minimum(index + 1, cloud.t.size - 1)])
        piece = cloud.piece[index]
        for _ in range(6):
            z, dz, ddz = self.evaluate(piece, t)
            miss = np.real((z - local) * np.conj(dz))
            slope = np.abs(dz) ** 2 + np.real((z - local) * np.conj(ddz))
            bad = slope <= 1e-12 * np.abs(dz) ** 2
            step = np.where(bad, 0.0, -miss / np.where(bad, 1.0, slope))
            t = np.clip(t + step, low, high)
        return t

    def _hand(self, piece: Integers, t: Reals, index: Integers) -> Points:
        at_edge = (self.cloud.edge[index] != 0) & (t == self.cloud.t[index])
        return np.where(at_edge, self.cloud.hand[index], self.tangent(piece, t))


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
    to_circle = (2 * left - curvature * squared) / (1 + np.sqrt(inner))
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
