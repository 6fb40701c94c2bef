"""Path of contact and contact ratio: where the law of gearing is met by flanks that really are there."""

import numpy as np

from gearsolid.contact.clearance import Sweep, lowest_rows
from gearsolid.contact.closest import slide, spots_at
from gearsolid.curves.curve import Reals
from gearsolid.curves.field import field_of
from gearsolid.pairs.engagement import Engagement

# Flanks this close count as touching, as a share of the pitch length: the error of play found on sampled poses.
TOUCH = 1e-5

_HALVINGS = 24
_PER_SPAN = 65


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
    return sum(finder.share(branch) for branch in (1, -1))


def contact_ratio(e: Engagement, s: Sweep, driven: Reals, way: int, radius: float) -> float:
    """Mean number of places in contact when a drives b [-].

    Args:
        e: the engagement.
        s: its sweep.
        driven: turn of b at which it is stopped [rad], per pose.
        way: +1 or -1, the way b is turned against a.
        radius: of b's pitch circle [mm].
    """
    steady = np.ptp(driven) * radius <= TOUCH * s.pitch_length
    if steady and e.pitch_point is not None:
        return conjugate_ratio(e, s, driven, way)
    return mean_contacts(s, driven, way)


class _Finder:
    def __init__(self, e: Engagement, psi: Reals, turn: Reals, way: int, tol: float) -> None:
        self._e, self._way, self._tol = e, way, tol
        self._psi, self._turn = np.append(psi, e.period), np.append(turn, turn[0])
        self._arm = e.centre_a - (e.pitch_point or 0.0)
        self._a, self._b = field_of(e.a), field_of(e.b)

    def share(self, branch: int) -> float:
        """Angle of a during which its flank is in contact, in pitches of a."""
        cloud = self._a.cloud
        total = 0.0
        for first, last in zip(np.flatnonzero(cloud.edge == -1), np.flatnonzero(cloud.edge == 1), strict=True):
            place = np.linspace(float(first), float(last), max(_PER_SPAN, 2 * int(last - first) + 1))
            inside, angle = self._touching(place, branch)
            both = inside[:-1] & inside[1:]
            total += float(np.sum(np.abs(np.diff(np.unwrap(angle)))[both]))
            total += self._ends(place, inside, branch)
        return total / self._e.a.pitch_angle

    def _ends(self, place: Reals, inside: np.ndarray, branch: int) -> float:
        """Angle between the last touching sample and the true end of contact, by halving."""
        change = np.flatnonzero(inside[:-1] != inside[1:])
        if change.size == 0:
            return 0.0
        good = np.where(inside[change], place[change], place[change + 1])
        bad = np.where(inside[change], place[change + 1], place[change])
        start = self._touching(good, branch)[1]
        for _ in range(_HALVINGS):
            middle = (good + bad) / 2
            ok = self._touching(middle, branch)[0]
            good, bad = np.where(ok, middle, good), np.where(ok, bad, middle)
        end = self._touching(good, branch)[1]
        return float(np.sum(np.abs(np.angle(np.exp(1j * (end - start))))))

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
