"""Angular play: how far one part can turn either way while the other is held."""

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from gearsolid.contact.clearance import Sweep
from gearsolid.contact.closest import Spots, around, newton, spots_at
from gearsolid.contact.view import Touching, View
from gearsolid.curves.curve import Reals
from gearsolid.curves.field import Integers

# A contact whose normal passes this near to b's axis, as a share of b's radius, does not stop b from turning.
_LEVER = 0.02

# Overlapping parts have no position to turn from; their negative play is that of the contacts that resist best.
_STRONG_LEVER = 0.5

_ROUNDS = 10

# Longest Newton step, in pitches of b.
_STRIDE = 0.1

_WITNESSES = 3
_CHECKS = 4
_SETTLED = 1e-9


@dataclass(frozen=True)
class Window:
    """How far b may turn from its stated position at each input angle, a held.

    Args:
        back: least turn [rad], shape (m,).
        ahead: greatest turn [rad], shape (m,).
    """

    back: Reals
    ahead: Reals

    @property
    def width(self) -> Reals:
        """Angular play [rad]; negative where even the best position overlaps."""
        return self.ahead - self.back


def window(s: Sweep, radius: float, least: float) -> Window:
    """The freedom of b at the angles of a sweep; nan where nothing stops it.

    Args:
        s: sweep of the engagement.
        radius: radius of b's pitch circle, or of the circle its pins stand on [mm].
        least: least distance found [mm]; below zero the parts overlap.
    """
    lever = radius * (_LEVER if least >= 0 else _STRONG_LEVER)
    return Window(-_freedom(s, -1, lever), _freedom(s, +1, lever))


def _freedom(s: Sweep, way: int, lever: float) -> Reals:
    """Turn of b in one way until it is stopped [rad], per pose.

    The stop found from the nearest samples is checked by a new sweep with b turned there; a stop met earlier takes its
    place.
    """
    free = _stop(s.seen, s.psi, np.zeros_like(s.psi), way, lever)
    slack = 0.02 * s.pitch_length
    while np.isnan(free).any() and slack < s.pitch_length:
        seen = tuple((v, v.sweep(s.psi, np.zeros_like(s.psi), s.margin, slack)) for v, _ in s.seen)
        free = _stop(seen, s.psi, np.zeros_like(s.psi), way, lever)
        slack *= 4
    for _ in range(_CHECKS):
        extra = way * np.nan_to_num(free)
        seen = tuple((v, v.sweep(s.psi, extra, s.margin, 0.0)) for v, _ in s.seen)
        earlier = np.fmin(free, _stop(seen, s.psi, extra, way, lever))
        settled = not np.any(earlier < free - _SETTLED)
        free = earlier
        if settled:
            break
    return free


def _stop(seen: tuple[tuple[View, Touching], ...], psi: Reals, extra: Reals, way: int, lever: float) -> Reals:
    free = np.full(psi.size, np.nan)
    for view, touching in seen:
        closing = -way * touching.closing
        rows = np.flatnonzero(closing > lever)
        rows = _leaders(touching, rows, touching.distance[rows] / closing[rows])
        if rows.size:
            spots, stopped = _stopped(view, spots_at(view, touching, rows, psi, extra, 2), way, lever)
            np.fmin.at(free, touching.pose[rows[stopped]], way * spots.extra[stopped])
    return free


def _stopped(view: View, spots: Spots, way: int, lever: float) -> tuple[Spots, NDArray[np.bool_]]:
    """b turned until each spot just touches, the spot sliding along as it does (Newton on the gap).

    Returns:
        The spots with their turns, and which of them did come to touch.
    """
    start, pitch = spots.extra, (view.probe if view.probe_share else view.target).outline.pitch_angle
    for _ in range(_ROUNDS):
        spots, exact, fall = newton(view, spots)
        arm = np.maximum(-way * exact.closing, lever)
        touching = np.abs(exact.near.distance) + np.abs(fall) <= _SETTLED * arm
        if touching.all():
            break
        step = np.clip((exact.near.distance - fall) / arm, -_STRIDE * pitch, _STRIDE * pitch)
        spots = around(view, replace(spots, extra=spots.extra + way * step), 2)
    # A spot that has wandered beyond the next tooth says nothing about the first stop.
    return spots, touching & (np.abs(spots.extra - start) < pitch)


def _leaders(touching: Touching, rows: Integers, turn: Reals) -> Integers:
    """The few samples of each pose that would stop b first, no two of them side by side."""
    key = touching.pose[rows] << 40 | touching.pitch[rows] << 20 | touching.sample[rows]
    joined = np.diff(key) == 1
    before = np.where(np.append(False, joined), np.roll(turn, 1), np.inf)
    after = np.where(np.append(joined, False), np.roll(turn, -1), np.inf)
    keep = np.flatnonzero((turn <= before) & (turn <= after))
    keep = keep[np.lexsort((turn[keep], touching.pose[rows[keep]]))]
    pose = touching.pose[rows[keep]]
    rank = np.arange(keep.size) - np.searchsorted(pose, pose)
    return rows[keep[rank < _WITNESSES]]
