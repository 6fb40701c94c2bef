"""Proof between the poses: how near two parts can come at angles that were not looked at.

A point of one part moves past the other no faster than the relative turning rate times its distance from the pitch
point, and a distance changes no faster than the point moves. So the least distance found at one input angle bounds it
for a while before and after; intervals where the bound is too low are cut in three and looked at again.
"""

from dataclasses import dataclass

import numpy as np

from gearsolid.contact.clearance import distances_at
from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.outline import Outline
from gearsolid.pairs.engagement import Engagement

# The bound is driven up to this share of the least distance found; closer costs poses and says little more.
_WORTH = 0.5

# Most poses looked at before the proof is given up.
BUDGET = 6000


@dataclass(frozen=True)
class Proof:
    """What is known for every input angle.

    Args:
        bound: the parts are nowhere nearer than this [mm]; negative where even that much could not be shown.
        lowest: least distance met on the way [mm].
        lowest_psi: input angle where it was met [rad].
        step: width of the interval looked at there [rad].
    """

    bound: float
    lowest: float
    lowest_psi: float
    step: float


def prove(e: Engagement, psi: Reals, distances: Reals, least: float, budget: int = BUDGET) -> Proof:
    """Bound the distance of two outlines for every input angle of a pitch.

    Args:
        e: the engagement.
        psi: evenly spread input angles of one pitch [rad], shape (m,).
        distances: least distance at each [mm], shape (m,).
        least: least distance known [mm]; at or below zero there is nothing to prove.
        budget: most further poses to look at.
    """
    width = np.full(psi.size, e.period / psi.size)
    speeds = _Speeds(e)
    enough = _WORTH * least
    while True:
        bound = distances - speeds.most(width, max(enough, 0.0)) * width / 2
        k = int(np.argmin(distances))
        short = bound < enough
        if least <= 0 or not short.any() or psi.size + 2 * short.sum() > budget or distances[k] <= 0:
            return Proof(float(bound.min()), float(distances[k]), float(psi[k]), float(width[k]))
        third = width[short] / 3
        added = np.concatenate([psi[short] - third, psi[short] + third])
        width[short] = third
        psi = np.append(psi, added)
        width = np.append(width, np.tile(third, 2))
        distances = np.append(distances, distances_at(e, added))


class _Speeds:
    """Bounds on how fast points of a pass b while the two are near each other."""

    def __init__(self, e: Engagement) -> None:
        self._e = e
        self._swing = abs(e.rate_a) * e.a.r_max

    def most(self, width: Reals, gap: float) -> Reals:
        """Greatest speed [mm/rad] of a point of a that comes within `gap` [mm] of b during intervals of input angle."""
        e = self._e
        pitch_point = e.pitch_point
        if pitch_point is None:
            return np.full(width.shape, abs(e.rate_a) * abs(e.centre_a - e.centre_b))
        rate = abs(e.rate_a - e.rate_b)
        return rate * (_farthest(e, pitch_point, gap) + gap + self._swing * width / 2)


def _farthest(e: Engagement, pitch_point: complex, gap: float) -> float:
    """Greatest distance from the pitch point at which the two can meet [mm]: within both rings their boundaries sweep.

    It lies where two circles that bound the rings cross, or where one of them is farthest from the pitch point.
    """
    rings = [_Ring(c, o, gap) for c, o in ((e.centre_a, e.a), (e.centre_b, e.b))]
    places = [_crossings(rings[0].centre, p, rings[1].centre, q) for p in rings[0].radii for q in rings[1].radii]
    places += [ring.centre + r * _away(ring.centre, pitch_point) for ring in rings for r in ring.radii]
    z = np.concatenate(places)
    inside = np.logical_and(*(ring.holds(z) for ring in rings))
    return float(np.max(np.abs(z[inside] - pitch_point), initial=0.0))


class _Ring:
    def __init__(self, centre: complex, outline: Outline, gap: float) -> None:
        self.centre = centre
        self.radii = (max(outline.r_min - gap, 0.0), outline.r_max + gap)

    def holds(self, z: Points) -> np.ndarray:
        r, slack = np.abs(z - self.centre), 1e-9 * self.radii[1]
        return (r >= self.radii[0] - slack) & (r <= self.radii[1] + slack)


def _away(centre: complex, pitch_point: complex) -> Points:
    """Unit direction from the pitch point through a centre; any direction where they coincide."""
    line = centre - pitch_point
    return np.array([line / abs(line) if line else 1.0 + 0j])


def _crossings(c1: complex, r1: float, c2: complex, r2: float) -> Points:
    line = c2 - c1
    apart = abs(line)
    if not abs(r1 - r2) <= apart <= r1 + r2 or apart == 0:
        return np.empty(0, dtype=complex)
    along = (apart**2 + r1**2 - r2**2) / (2 * apart)
    across = np.sqrt(max(r1**2 - along**2, 0.0))
    return c1 + line / apart * (along + 1j * np.array([across, -across]))
