"""A body as triangles: its end faces cut into triangles, its walls into strips between the same corners.

No point is added inside a face but the levels that twisted teeth need, so the triangles are as few as the chord
tolerance allows, and every corner lies on the exact boundary.
"""

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise

import numpy as np
from ezdxf.math import Vec2
from ezdxf.math.triangulation import mapbox_earcut_2d
from numpy.typing import NDArray

from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.outline import Outline
from gearsolid.curves.primitives import Arc
from gearsolid.output.polygon import chord_parameters, polygons
from gearsolid.pairs.part import Body, is_toothed
from gearsolid.shop.bore import Bore
from gearsolid.shop.shaft_hole import ShaftHole

Corners = NDArray[np.int64]


@dataclass(frozen=True)
class Triangles:
    """A closed surface of triangles, each counter-clockwise seen from outside.

    Args:
        points: [mm], shape (n, 3).
        corners: point indices, shape (m, 3).
    """

    points: Reals
    corners: Corners

    @cached_property
    def volume(self) -> float:
        """Enclosed volume [mm3]."""
        a, b, c = (self.points[self.corners[:, k]] for k in range(3))
        return float(np.sum(a * np.cross(b, c)) / 6)

    @cached_property
    def _areas(self) -> Reals:
        a, b, c = (self.points[self.corners[:, k]] for k in range(3))
        return np.asarray(np.linalg.norm(np.cross(b - a, c - a), axis=1) / 2)

    @property
    def area(self) -> float:
        """Surface [mm2]."""
        return float(np.sum(self._areas))

    @property
    def side_area(self) -> float:
        """Surface of everything but level faces [mm2]."""
        return float(np.sum(self._areas[np.ptp(self.points[self.corners, 2], axis=1) > 0]))

    @property
    def is_watertight(self) -> bool:
        """Whether every edge is shared by exactly two triangles that run along it in opposite directions."""
        edges = np.concatenate([self.corners[:, [k, (k + 1) % 3]] for k in range(3)])
        code, back = (e[:, 0] * len(self.points) + e[:, 1] for e in (edges, edges[:, ::-1]))
        code.sort()
        back.sort()
        return bool(np.all(np.diff(code) > 0) and np.array_equal(code, back) and np.all(edges[:, 0] != edges[:, 1]))


@dataclass(frozen=True)
class _Ring:
    """A closed polygon on one level: its points in the plane and the index of the first of them."""

    flat: Points
    first: int

    @property
    def indices(self) -> Corners:
        return np.arange(self.first, self.first + self.flat.size)


class _Surface:
    """Points and triangles gathered so far."""

    def __init__(self) -> None:
        self._points: list[Reals] = []
        self._corners: list[Corners] = []
        self._count = 0

    def ring(self, flat: Points, z: float) -> _Ring:
        """New points on level z [mm]."""
        self._points.append(np.column_stack([flat.real, flat.imag, np.full(flat.size, z)]))
        self._count += flat.size
        return _Ring(flat, self._count - flat.size)

    def wall(self, lower: _Ring, upper: _Ring) -> None:
        """Strips between two rings of equally many points, material on their left."""
        a, b = lower.indices, upper.indices
        a1, b1 = np.roll(a, -1), np.roll(b, -1)
        self._corners += [np.column_stack([a, a1, b1]), np.column_stack([a, b1, b])]

    def face(self, outer: _Ring, inner: Iterable[_Ring], *, up: bool = True) -> None:
        """Plane face with holes, looking up or down."""
        rings = [outer, *inner]
        index = {(p.real, p.imag): k for r in rings for p, k in zip(r.flat.tolist(), r.indices.tolist(), strict=True)}
        outside, *holes = ([Vec2(p.real, p.imag) for p in r.flat.tolist()] for r in rings)
        found = [[index[p.x, p.y] for p in triangle] for triangle in mapbox_earcut_2d(outside, holes)]
        corners = np.array(found, dtype=np.int64).reshape(-1, 3)
        self._corners.append(corners if up else corners[:, ::-1])

    def done(self) -> Triangles:
        return Triangles(np.concatenate(self._points), np.concatenate(self._corners))


def body_triangles(body: Body, tol: float = 0.01) -> Triangles:
    """The surface of a body.

    Args:
        body: what is made.
        tol: largest distance of a triangle's edge from the exact boundary [mm].

    Returns:
        A surface whose volume is off by at most the tolerance times the area of its sides.

    Raises:
        DesignError: the tolerance is not above 0.
        ToleranceError: a boundary cannot be followed that closely.
    """
    surface = _Surface()
    top = body.z + body.width
    sides = [side for o in (body.outer, *body.holes) for side in _sides(surface, body, o, tol)]
    raised = [
        (boss, surface.ring(flat, top), surface.ring(flat, top + boss.height))
        for boss in body.bosses
        for flat in polygons(boss.outline, tol)
    ]
    bore = [surface.ring(flat, body.z + z) for flat, z in _bore_levels(body.bore, body.bore_length, tol)]
    for lower, upper in (*(r[1:] for r in raised), *pairwise(bore)):
        surface.wall(lower, upper)
    outer, *holes = sides
    surface.face(outer[0], [*(h[0] for h in holes), *bore[:1]], up=False)
    surface.face(outer[1], [*(h[1] for h in holes), *(r[1] for r in raised), *([] if body.hub else bore[-1:])])
    for boss, _, upper in raised:
        surface.face(upper, bore[-1:] if boss is body.hub else [])
    return surface.done()


def _sides(surface: _Surface, body: Body, outline: Outline, tol: float) -> Iterator[tuple[_Ring, _Ring]]:
    """Walls on the loops of an outline; the lowest and highest ring of each."""
    if body.twists and is_toothed(outline):
        yield _toothed_side(surface, body, outline, tol)
        return
    for flat in polygons(outline, tol):
        lower, upper = surface.ring(flat, body.z), surface.ring(flat, body.z + body.width)
        surface.wall(lower, upper)
        yield lower, upper


def _toothed_side(surface: _Surface, body: Body, outline: Outline, tol: float) -> tuple[_Ring, _Ring]:
    # Half the tolerance goes to the chords of the section, half to the turn between two levels.
    (flat,) = polygons(outline, tol / 2)
    step = _turn_step(float(np.max(np.abs(np.roll(flat, -1) - flat))), outline.r_max, tol / 2)
    courses = [
        [surface.ring(flat * np.exp(1j * turn), body.z + height) for height, turn in _stepped(levels, step)]
        for levels in body.courses
    ]
    for course in courses:
        for lower, upper in pairwise(course):
            surface.wall(lower, upper)
    if body.groove:
        (_, (low, _)), ((high, _), _) = body.courses
        (round_flat,) = polygons(body.groove.floor(outline), tol)
        floor = surface.ring(round_flat, body.z + low), surface.ring(round_flat, body.z + high)
        surface.wall(*floor)
        for (first, second), up in (((courses[0][-1], floor[0]), True), ((courses[1][0], floor[1]), False)):
            outer, inner = (first, second) if outline.area > 0 else (second, first)
            surface.face(outer, [inner], up=up)
    return courses[0][0], courses[-1][-1]


def _turn_step(chord: float, radius: float, tol: float) -> float:
    """Turn between levels [rad] that keeps a strip's sides and diagonals within `tol` of the twisted wall [mm].

    With a turn d a helix stands off its chord by r d^2 / 8, and a diagonal by l d / 4 more over a section's chord l.
    """
    return (float(np.sqrt(chord**2 + 8 * radius * tol)) - chord) / radius


def _stepped(levels: Sequence[tuple[float, float]], step: float) -> Iterator[tuple[float, float]]:
    """The levels, with more put in so that the section turns at most a step between two."""
    yield levels[0]
    for (h0, t0), (h1, t1) in pairwise(levels):
        shares = np.linspace(0, 1, int(np.ceil(abs(t1 - t0) / step)) + 1 if t1 != t0 else 2)[1:]
        yield from zip((h0 + (h1 - h0) * shares).tolist(), (t0 + (t1 - t0) * shares).tolist(), strict=True)


def _bore_levels(bore: ShaftHole | None, length: float, tol: float) -> list[tuple[Points, float]]:
    """Polygons of a shaft hole and their heights above its lower end [mm], all of equally many points."""
    if bore is None:
        return []
    if not isinstance(bore, Bore):
        (flat,) = polygons(bore.outline, tol)
        return [(flat, 0.0), (flat, length)]
    arcs = [p.curve for p in bore.mouth.pieces if isinstance(p.curve, Arc)]
    shares = np.linspace(0, 1, max(len(chord_parameters(arc, *arc.span, tol)) for arc in arcs))
    depths = np.linspace(0, bore.chamfer, _cone_levels(bore, tol) + 1) if bore.chamfer else np.zeros(1)
    sections = [_bore_polygon(bore, bore.radius + bore.chamfer - d, shares) for d in depths]
    lower = list(zip(sections, depths.tolist(), strict=True))
    return [*lower, *((flat, length - d) for flat, d in reversed(lower))]


def _cone_levels(bore: Bore, tol: float) -> int:
    """Steps of depth in which the edge between chamfer and keyway, a hyperbola, is followed."""
    if bore.key is None:
        return 1
    side, r = bore.key.width / 2, bore.radius
    bend = side**2 / (r**2 - side**2) ** 1.5
    return int(np.ceil(bore.chamfer * np.sqrt(bend / (8 * tol)))) or 1


def _bore_polygon(bore: Bore, radius: float, shares: Reals) -> Points:
    curves = [p.curve for p in bore.section(radius).pieces]
    return np.concatenate([c.point(shares)[:-1] if isinstance(c, Arc) else [c.start] for c in curves])
