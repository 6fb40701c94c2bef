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

_ROUNDS = 40
_PATIENCE = 8

# How far a contact may wander along the probe in one step, in samples.
_FREEDOM = 6

# Longest Newton step, in pitches of b.
_STRIDE = 0.1

_WITNESSES = 24
_CHECKS = 4
_SETTLED = 1e-11

# An overlap this small [mm] is the rounding of a contact, and a turn this small [rad] is none.
_ROUNDING = 1e-7
_NO_TURN = 1e-6

# Stops this close are the same [rad].
_SAME = 1e-9


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
    poses = s.psi.size
    # Parts that are clear as they stand are stopped at no turn against the way asked for.
    floor = -_NO_TURN if least >= -_ROUNDING else -np.inf
    free = _freedom(s, np.tile(s.psi, 2), np.repeat([-1.0, 1.0], poses), lever, floor)
    return Window(-free[:poses], free[poses:])


def _freedom(s: Sweep, psi: Reals, way: Reals, lever: float, floor: float) -> Reals:
    """Turn of b until it is stopped [rad], at each input angle in the way asked for.

    The stop found from the nearest samples is checked by a new sweep with b turned there; a stop met earlier takes its
    place.
    """
    still = np.zeros_like(psi)
    free = _stop(tuple((v, t.repeated(s.psi.size)) for v, t in s.seen), psi, still, way, lever, floor)
    slack = 0.02 * s.pitch_length
    while np.isnan(free).any() and slack < s.pitch_length:
        seen = tuple((v, v.sweep(psi, still, s.margin, slack)) for v, _ in s.seen)
        free = _stop(seen, psi, still, way, lever, floor)
        slack *= 4
    for _ in range(_CHECKS):
        extra = way * np.nan_to_num(free)
        seen = tuple((v, v.sweep(psi, extra, s.margin, 0.0)) for v, _ in s.seen)
        earlier = np.fmin(free, _stop(seen, psi, extra, way, lever, floor))
        settled = not np.any(earlier < free - _SAME)
        free = earlier
        if settled:
            break
    return free


def _stop(
    seen: tuple[tuple[View, Touching], ...], psi: Reals, extra: Reals, way: Reals, lever: float, floor: float
) -> Reals:
    free = np.full(psi.size, np.nan)
    for view, touching in seen:
        closing = -way[touching.pose] * touching.closing
        rows = np.flatnonzero(closing > lever)
        rows = _leaders(touching, rows, touching.distance[rows] / closing[rows])
        if rows.size:
            pose = touching.pose[rows]
            turn, stopped = _stopped(view, spots_at(view, touching, rows, psi, extra, _FREEDOM), way[pose], lever)
            stopped &= turn >= floor
            np.fmin.at(free, pose[stopped], turn[stopped])
    return free


def _stopped(view: View, spots: Spots, way: Reals, lever: float) -> tuple[Reals, NDArray[np.bool_]]:
    """b turned until each spot just touches, the spot sliding along as it does (Newton on the gap).

    Returns:
        The extra turns of b in its way [rad], and for which spots b did come to touch.
    """
    start, pitch = way * spots.extra, (view.probe if view.probe_share else view.target).outline.pitch_angle
    turn, stopped, before = start.copy(), np.zeros(start.size, dtype=bool), np.full(start.size, np.inf)
    free, blocked = np.full(start.size, -np.inf), np.full(start.size, np.inf)
    at = np.arange(start.size)
    for round_ in range(_ROUNDS):
        spots, exact, fall = newton(view, spots)
        gap, u = exact.near.distance, turn[at]
        arm = np.maximum(-way[at] * exact.closing, lever)
        # A gap still falling along the probe shows nothing; an overlap anywhere does.
        free[at] = np.where(gap - fall > 0, np.maximum(free[at], u), free[at])
        blocked[at] = np.where(gap < 0, np.minimum(blocked[at], u), blocked[at])
        between = blocked[at] - free[at]
        stopped[at] = (np.abs(gap) + np.abs(fall) <= _SETTLED * arm) | (np.abs(between) <= _SETTLED)
        # Spots that touch are done; of the others those that no longer come nearer lead nowhere.
        nearer = (round_ < _PATIENCE) | (np.abs(gap) < before[at] / 2) | np.isfinite(between)
        going = ~stopped[at] & nearer
        before[at] = np.abs(gap)
        step = u + np.clip((gap - fall) / arm, -_STRIDE * pitch, _STRIDE * pitch)
        # Where two corners meet the gap has a kink and Newton hops over it; then the middle of the bracket is taken.
        bracketed = np.isfinite(between)
        astray = bracketed & ((step <= free[at]) | (step >= blocked[at]))
        step = np.where(astray, free[at] + np.where(bracketed, between, 0.0) / 2, step)
        at, step = at[going], step[going]
        if at.size == 0:
            break
        turn[at] = step
        spots = around(view, replace(spots.take(going), extra=way[at] * step), _FREEDOM)
    # A spot that has wandered beyond the next tooth says nothing about the first stop.
    return turn, stopped & (np.abs(turn - start) < pitch)


def _leaders(touching: Touching, rows: Integers, turn: Reals) -> Integers:
    """The few samples of each pose that would stop b first, no two of them side by side."""
    key = touching.pose[rows] << 40 | touching.pitch[rows] << 20 | touching.sample[rows]
    joined = np.diff(key) == 1
    before = np.where(np.append(False, joined), np.roll(turn, 1), np.inf)
    after = np.where(np.append(joined, False), np.roll(turn, -1), np.inf)
    # Where two pieces join the boundary has two samples in one place; rounding must not decide between them.
    keep = np.flatnonzero((turn <= before + _SAME) & (turn <= after + _SAME))
    keep = keep[np.lexsort((turn[keep], touching.pose[rows[keep]]))]
    pose = touching.pose[rows[keep]]
    rank = np.arange(keep.size) - np.searchsorted(pose, pose)
    return rows[keep[rank < _WITNESSES]]
