"""An independent, slow distance check: dense polygons and a general polygon library, nothing of the roll test."""

from functools import cached_property
from importlib import import_module
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.spatial import cKDTree

from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.outline import Outline
from gearsolid.errors import MissingLibraryError
from gearsolid.pairs.engagement import Engagement

# Fewest sides a piece is drawn with.
_FEWEST = 8


def _shapely() -> Any:
    try:
        return import_module("shapely")
    except ImportError as error:
        raise MissingLibraryError(
            f"the polygon check needs shapely, which does not load ({error}): install gearsolid with its dev extra, or "
            "shapely itself"
        ) from error


class DenseOutline:
    """An outline as closed polygons in its own frame.

    Args:
        outline: the outline.
        per_pitch: about how many sides a pitch gets [-].

    Raises:
        MissingLibraryError: shapely is not installed.
    """

    def __init__(self, outline: Outline, per_pitch: int) -> None:
        self._shapely = _shapely()
        each = max(_FEWEST, per_pitch // len(outline.pieces))
        spans = [(p.curve, p.curve.span) for p in outline.pieces]
        pitch = np.concatenate([c.point(np.linspace(*s, each, endpoint=False)) for c, s in spans])
        turns = outline.step ** np.arange(outline.order)
        copies = [pitch * f for f in turns]
        self.loops = [np.concatenate(copies)] if outline.is_chain else copies
        self.material_outside = outline.area < 0
        drawn = [c.point(np.linspace(*s, 2 * each + 1)) for c, s in spans]
        self.sag = max(float(np.max(_to_side(z[1::2], z[:-2:2], z[2::2]))) for z in drawn)
        """How far the sides leave the outline [mm]."""

    @cached_property
    def points(self) -> Points:
        """All vertices [mm]."""
        return np.concatenate(self.loops)

    @cached_property
    def neighbours(self) -> tuple[Points, Points]:
        """The vertex before and the vertex after each, along its loop [mm]."""
        before, after = (np.concatenate([np.roll(z, k) for z in self.loops]) for k in (1, -1))
        return before, after

    @cached_property
    def tree(self) -> cKDTree:
        """The vertices, for finding near ones."""
        return cKDTree(np.column_stack([self.points.real, self.points.imag]))

    @cached_property
    def area(self) -> Any:
        """The polygons as one shape."""
        polygons = [self._shapely.Polygon(np.column_stack([z.real, z.imag])) for z in self.loops]
        solid = self._shapely.MultiPolygon(polygons)
        self._shapely.prepare(solid)
        return solid

    def inside(self, z: Points) -> NDArray[np.bool_]:
        """Whether points [mm] lie in the material."""
        return self._shapely.contains_xy(self.area, z.real, z.imag) ^ self.material_outside

    def distance(self, z: Points) -> Reals:
        """Distance [mm] to the polygon sides that meet at the nearest vertices.

        Several of them, since a nearby side with far vertices may be nearer than a vertex of another side.
        """
        _, k = self.tree.query(np.column_stack([z.real, z.imag]), k=8)
        start = self.points[k]
        sides = [_to_side(z[:, None], start, other[k]) for other in self.neighbours]
        return np.minimum(*sides).min(axis=1)


def _to_side(z: Points, start: Points, end: Points) -> Reals:
    side = end - start
    share = np.clip(np.real((z - start) * np.conj(side)) / np.abs(side) ** 2, 0, 1)
    return np.abs(z - start - share * side)


class PolygonPair:
    """Two outlines as polygons; least distances at single input angles.

    Args:
        e: the engagement.
        per_pitch: about how many sides a pitch gets [-].

    Raises:
        MissingLibraryError: shapely is not installed.
    """

    def __init__(self, e: Engagement, per_pitch: int = 1500) -> None:
        self.e = e
        self.a, self.b = DenseOutline(e.a, per_pitch), DenseOutline(e.b, per_pitch)

    @property
    def error(self) -> float:
        """How far a distance may be off [mm]: the polygons' sides leave the outlines by no more."""
        return self.a.sag + self.b.sag

    def least(self, psi: float, extra: float = 0.0) -> float:
        """Least signed distance [mm]: a gap, or minus the greatest depth of either boundary inside the other.

        Args:
            psi: input angle [rad].
            extra: extra turn of b [rad].
        """
        e = self.e
        turn_a, turn_b = np.exp(1j * (e.angle_a + e.rate_a * psi)), np.exp(1j * (e.angle_b + e.rate_b * psi + extra))
        a_in_b = (e.centre_a - e.centre_b + self.a.points * turn_a) / turn_b
        b_in_a = (e.centre_b - e.centre_a + self.b.points * turn_b) / turn_a
        return min(_least(a_in_b, self.b), _least(b_in_a, self.a))


def _least(z: Points, target: DenseOutline) -> float:
    """Least signed distance of the points; those too far inward or outward to matter are not asked."""
    r, ends = np.abs(z), np.abs(target.points)
    beyond = np.maximum(r - ends.max(), ends.min() - r)
    first = np.argsort(beyond)[:: max(1, z.size // 100)]
    z = z[beyond <= np.min(target.distance(z[first]))]
    distance = target.distance(z)
    return float(np.min(np.where(target.inside(z), -distance, distance)))
