"""An independent, slow distance check: dense polygons and a general polygon library, nothing of gearsolid.contact."""

from functools import cached_property

import numpy as np
import shapely
from scipy.spatial import cKDTree
from shapely.geometry import Polygon

from gearsolid.curves.outline import Outline
from gearsolid.pairs.engagement import Engagement


class DenseOutline:
    """An outline as closed polygons in its own frame."""

    def __init__(self, outline: Outline, per_pitch: int) -> None:
        each = max(8, per_pitch // len(outline.pieces))
        spans = [(p.curve, p.curve.span) for p in outline.pieces]
        pitch = np.concatenate([c.point(np.linspace(*s, each, endpoint=False)) for c, s in spans])
        turns = outline.step ** np.arange(outline.order)
        copies = [pitch * f for f in turns]
        self.loops = [np.concatenate(copies)] if outline.is_chain else copies
        self.material_outside = outline.area < 0

    @cached_property
    def points(self) -> np.ndarray:
        return np.concatenate(self.loops)

    @cached_property
    def neighbours(self) -> tuple[np.ndarray, np.ndarray]:
        """The vertex before and the vertex after each, along its loop."""
        return tuple(np.concatenate([np.roll(z, k) for z in self.loops]) for k in (1, -1))

    @cached_property
    def tree(self) -> cKDTree:
        return cKDTree(np.column_stack([self.points.real, self.points.imag]))

    @cached_property
    def area(self):
        solid = shapely.MultiPolygon([Polygon(np.column_stack([z.real, z.imag])) for z in self.loops])
        shapely.prepare(solid)
        return solid

    def inside(self, z: np.ndarray) -> np.ndarray:
        """Whether points lie in the material."""
        return shapely.contains_xy(self.area, z.real, z.imag) ^ self.material_outside

    def distance(self, z: np.ndarray) -> np.ndarray:
        """Distance to the polygon sides that meet at the nearest vertices.

        Several of them, since a nearby side with far vertices may be nearer than a vertex of another side.
        """
        _, k = self.tree.query(np.column_stack([z.real, z.imag]), k=8)
        start = self.points[k]
        sides = [_to_side(z[:, None], start, other[k]) for other in self.neighbours]
        return np.minimum(*sides).min(axis=1)


def _to_side(z: np.ndarray, start: np.ndarray, end: np.ndarray) -> np.ndarray:
    side = end - start
    share = np.clip(np.real((z - start) * np.conj(side)) / np.abs(side) ** 2, 0, 1)
    return np.abs(z - start - share * side)


class SlowPair:
    """Two outlines as polygons; least distances at single input angles."""

    def __init__(self, e: Engagement, per_pitch: int = 1500) -> None:
        self.e = e
        self.a, self.b = DenseOutline(e.a, per_pitch), DenseOutline(e.b, per_pitch)

    def least(self, psi: float, extra: float = 0.0) -> float:
        """Least signed distance [mm]: a gap, or minus the greatest depth of either boundary inside the other."""
        e = self.e
        turn_a, turn_b = np.exp(1j * (e.angle_a + e.rate_a * psi)), np.exp(1j * (e.angle_b + e.rate_b * psi + extra))
        a_in_b = (e.centre_a - e.centre_b + self.a.points * turn_a) / turn_b
        b_in_a = (e.centre_b - e.centre_a + self.b.points * turn_b) / turn_a
        return min(_least(a_in_b, self.b), _least(b_in_a, self.a))


def _least(z: np.ndarray, target: DenseOutline) -> float:
    """Least signed distance of the points; those too far inward or outward to matter are not asked."""
    r, ends = np.abs(z), np.abs(target.points)
    beyond = np.maximum(r - ends.max(), ends.min() - r)
    first = np.argsort(beyond)[:: max(1, z.size // 100)]
    z = z[beyond <= np.min(target.distance(z[first]))]
    distance = target.distance(z)
    return float(np.min(np.where(target.inside(z), -distance, distance)))
