"""Path of contact and contact ratio: where the law of gearing is met by flanks that really are there."""

from collections.abc import Iterator

import numpy as np

from gearsolid.contact.clearance import Sweep, lowest_rows
from gearsolid.contact.closest import slide, spots_at
from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.field import field_of
from gearsolid.pairs.engagement import Engagement

# Flanks this close count as touching, as a share of the pitch length: the error of play found on sampled poses.
TOUCH = 1e-5

# A driven part that wavers by less than this share of the pitch length has conjugate flanks.
_STEADY = 2e-6

_HALVINGS = 24
_PER_SPAN = 97
_BRIEF = 0.25


def mean_contacts(s: Sweep, driven: Reals, way: int) -> float:
    """Mean number of places that touch at the sampled angles, b turned until it stops [-].

    For pairs whose ratio wavers: there the law of gearing is not met exactly and only counting is left.
    """
    tol = TOUCH * s.pitch_length
    count = 0
    for view, _ in s.seen:
        seen = view.sweep(s.psi, driven, s.margin, tol)
        rows = lowest_rows(seen, s.psi.size, s.pitch_length)
        _, exact = slide(view, spots_at(view, seen, rows, s.psi, driven, 2))
        touching = (exact.near.distance <= tol) & (way * exact.closing < 0)
        count += len({*zip(seen.pose[rows][touching], seen.pitch[rows][touching], strict=True)})
    return count / s.psi.size


def conjugate_ratio(e: Engagement, s: Sweep, driven: Reals, way: int) -> float:
    """Mean number of flank pairs in contact [-], each end of contact found exactly.

    A point of a's flank touches when its normal passes through the pitch point; it counts when b, turned until it
    stops, has its boundary there.
    """
    finder = _Finder(e, s.psi, driven, way, TOUCH * s.pitch_length)
    return finder.share()


def contact_ratio(e: Engagement, s: Sweep, driven: Reals, way: int, radius: float) -> float:
    """Mean number of places in contact when a drives b [-].

    Args:
        e: the engagement.
        s: its sweep.
        driven: turn of b at which it is stopped [rad], per pose.
        way: +1 or -1, the way b is turned against a.
        radius: of b's pitch circle [mm].
    """
    steady = np.ptp(driven) * radius <= _STEADY * s.pitch_length
    if steady and e.pitch_point is not None:
        return conjugate_ratio(e, s, driven, way)
    return mean_contacts(s, driven, way)


def conjugate_places(e: Engagement, s: Sweep, driven: Reals, way: int) -> tuple[Reals, Points]:
    """Places where flanks touch by the law of gearing, spread over the whole path of contact.

    Args:
        e: the engagement.
        s: its sweep.
        driven: turn of b at which it is stopped [rad], per pose.
        way: +1 or -1, the way b is turned against a.

    Returns:
        Input angles [rad] and the places in the common frame [mm], shape (n,) each.
    """
    return _Finder(e, s.psi, driven, way, TOUCH * s.pitch_length).places()


def touching_places(e: Engagement, s: Sweep, driven: Reals, way: int) -> tuple[Reals, Points]:
    """Places where the two touch at the sampled input angles, for pairs whose ratio wavers; as `conjugate_places`."""
    tol = TOUCH * s.pitch_length
    angles, places = [], []
    for view, _ in s.seen:
        seen = view.sweep(s.psi, driven, s.margin, tol)
        rows = lowest_rows(seen, s.psi.size, s.pitch_length)
        spots, exact = slide(view, spots_at(view, seen, rows, s.psi, driven, 2))
        touching = (exact.near.distance <= tol) & (way * exact.closing < 0)
        turn = view.target_angle + view.target_rate * spots.psi + (1 - view.probe_share) * spots.extra
        centre = e.centre_a if view.probe_share else e.centre_b
        angles.append(spots.psi[touching])
        places.append((centre + exact.near.foot * np.exp(1j * turn))[touching])
    return np.concatenate(angles), np.concatenate(places)


def _spread(first: int, last: int) -> Reals:
    """Places over a span, close together at its ends: contact before the line of centres may use a sliver there."""
    count = max(_PER_SPAN, 2 * (last - first) + 1)
    return first + (last - first) * (1 - np.cos(np.linspace(0, np.pi, count))) / 2


class _Finder:
    def __init__(self, e: Engagement, psi: Reals, turn: Reals, way: int, tol: float) -> None:
        self._e, self._way, self._tol = e, way, tol
        self._psi, self._turn = np.append(psi, e.period), np.append(turn, turn[0])
        self._arm = e.centre_a - (e.pitch_point or 0.0)
        self._a, self._b = field_of(e.a), field_of(e.b)

    def _runs(self) -> Iterator[tuple[int, Reals, np.ndarray, Reals]]:
        """For each smooth span of a and each branch that touches: branch, places, which of them touch, turns of a."""
        cloud = self._a.cloud
        for first, last in zip(np.flatnonzero(cloud.edge == -1), np.flatnonzero(cloud.edge == 1), strict=True):
            place = _spread(int(first), int(last))
            found = {branch: self._touching(place, branch) for branch in (1, -1)}
            more, less = sorted(found, key=lambda branch: -int(found[branch][0].sum()))
            yield more, place, *found[more]
            # Near the pitch point, a cusp of both flanks, the branch that does not touch comes within the tolerance
            # too; it is told by ending soon, where the true one goes on.
            both = found[less][0] & found[more][0]
            if not (both.any() and found[less][0].sum() < _BRIEF * found[more][0].sum()):
                yield less, place, *found[less]

    def share(self) -> float:
        """Angle of a during which its flanks are in contact, in pitches of a."""
        total = 0.0
        for branch, place, inside, angle in self._runs():
            both = inside[:-1] & inside[1:]
            total += float(np.sum(np.abs(np.diff(np.unwrap(angle)))[both]))
            total += self._ends(place, inside, branch)
        return total / self._e.a.pitch_angle

    def places(self) -> tuple[Reals, Points]:
        """Input angles [rad] and places in the common frame [mm] at which a's boundary touches b, ends included."""
        e = self._e
        angles, points = [np.empty(0)], [np.empty(0, dtype=complex)]
        for branch, place, inside, _ in self._runs():
            touching = np.append(place[inside], self._last(place, inside, branch))
            _, angle = self._touching(touching, branch)
            angles.append((angle - e.angle_a) / e.rate_a)
            points.append(e.centre_a + self._a.evaluate(touching)[0] * np.exp(1j * angle))
        return np.concatenate(angles), np.concatenate(points)

    def _ends(self, place: Reals, inside: np.ndarray, branch: int) -> float:
        """Angle between the last touching sample and the true end of contact."""
        change = np.flatnonzero(inside[:-1] != inside[1:])
        good = np.where(inside[change], place[change], place[change + 1])
        start = self._touching(good, branch)[1]
        end = self._touching(self._last(place, inside, branch), branch)[1]
        return float(np.sum(np.abs(np.angle(np.exp(1j * (end - start))))))

    def _last(self, place: Reals, inside: np.ndarray, branch: int) -> Reals:
        """The true ends of contact beyond the last samples that touch, by halving."""
        change = np.flatnonzero(inside[:-1] != inside[1:])
        good = np.where(inside[change], place[change], place[change + 1])
        bad = np.where(inside[change], place[change + 1], place[change])
        for _ in range(_HALVINGS if change.size else 0):
            middle = (good + bad) / 2
            ok = self._touching(middle, branch)[0]
            good, bad = np.where(ok, middle, good), np.where(ok, bad, middle)
        return good

    def _touching(self, place: Reals, branch: int) -> tuple[np.ndarray, Reals]:
        """Whether a's boundary touches b at these places, and the turn of a when it does [rad]."""
        e = self._e
        point, slope = self._a.evaluate(place)
        still = np.abs(slope) < 1e-12
        tangent = np.where(still, 1.0, slope) / np.where(still, 1.0, np.abs(slope))
        h = np.real(point * np.conj(tangent))
        reach = np.abs(self._arm)
        meets = (np.abs(h) < reach) & ~still
        lean = np.arccos(np.clip(-h / reach, -1, 1))
        angle = float(np.angle(self._arm)) - np.angle(tangent) + branch * lean
        psi = (angle - e.angle_a) / e.rate_a
        extra = np.interp(np.mod(psi, e.period), self._psi, self._turn)
        turn_b = e.angle_b + e.rate_b * psi + extra
        ray = np.exp(1j * angle)
        z = (e.centre_a - e.centre_b + point * ray) * np.exp(-1j * turn_b)
        near = self._b.near(z)
        # Contact on the right flank only: a further turn of b must close the gap.
        pushes = self._way * np.real(np.conj(near.outward) * -1j * z) < 0
        return meets & pushes & (np.abs(near.distance) <= self._tol), angle
