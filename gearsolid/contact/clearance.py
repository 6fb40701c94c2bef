"""Least distance between two outlines while they turn through one pitch."""

from dataclasses import dataclass, replace

import numpy as np

from gearsolid.contact.closest import Measure, Spots, measure, settle, slide, slide_to_ridge, spots_at
from gearsolid.contact.view import Touching, View, clear_views, overlap_views
from gearsolid.curves.curve import Reals
from gearsolid.curves.field import Integers
from gearsolid.pairs.engagement import Engagement

POSES = 32

# Samples this much [pitch lengths] above the least distance of a pose are still refined: the sampled distance is off by
# the square of the sample spacing, which is about 1/160 of a pitch.
_SLACK = 2e-4

# Most samples of a pose and view that are refined to the exact distance: every pin of a ring may be as near.
_REFINED = 24

# Lowest spots followed between the sampled poses.
_FOLLOWED = 6

# Overlaps beyond this share of the pitch length reach the middle of a tooth, where distance has ridges.
_DEEP = 0.02
_RIDGE_GRID = 9
_RIDGE_ROUNDS = 9


@dataclass(frozen=True)
class Least:
    """The least distance and where it is.

    Args:
        distance: signed [mm]; negative is a depth of overlap.
        psi: input angle [rad].
        place: in the common frame [mm].
        roles: what touches on a and on b.
    """

    distance: float
    psi: float
    place: complex
    roles: tuple[str, str]


@dataclass(frozen=True)
class Sweep:
    """Both views of an engagement sampled over one pitch.

    Args:
        psi: input angles [rad], shape (m,).
        seen: for each view, its near samples.
        margin: how far from the target samples were looked for [mm].
        pitch_length: length of the pitch used to scale tolerances [mm].
    """

    psi: Reals
    seen: tuple[tuple[View, Touching], ...]
    margin: float
    pitch_length: float


def sweep(e: Engagement) -> Sweep:
    """Samples of both outlines near each other at evenly spread input angles of one pitch."""
    return sweep_at(e, e.period * np.arange(POSES) / POSES)


def sweep_at(e: Engagement, psi: Reals) -> Sweep:
    """Samples of both outlines near each other at the given input angles [rad], shape (m,).

    The search widens until it finds something, so parts that stay far apart get a distance too.
    """
    pitch = min(o.pitch_angle * o.r_max for o in (e.a, e.b))
    margin, slack = 0.05 * pitch, _SLACK * pitch
    views, overlapping = clear_views(e), False
    while True:
        seen = tuple((v, v.sweep(psi, np.zeros_like(psi), margin, slack)) for v in views)
        found = min((float(t.distance.min(initial=np.inf)) for _, t in seen), default=np.inf)
        if found < 0 and not overlapping:
            views, overlapping = overlap_views(e), True
        elif found <= margin or margin > 1e3 * pitch:
            return Sweep(psi, seen, margin, pitch)
        else:
            margin = 2 * min(found, 8 * margin)


def lowest_rows(t: Touching, poses: int, pitch_length: float) -> Integers:
    """Rows no farther than their neighbours and nearly as low as the least of their pose; the lowest few."""
    if t.pose.size == 0:
        return np.empty(0, dtype=np.int64)
    least = np.full(poses, np.inf)
    np.minimum.at(least, t.pose, t.distance)
    key = t.pose.astype(np.int64) << 40 | t.pitch.astype(np.int64) << 20 | t.sample
    before = np.where(np.append(False, np.diff(key) == 1), np.roll(t.distance, 1), np.inf)
    after = np.where(np.append(np.diff(key) == 1, False), np.roll(t.distance, -1), np.inf)
    # Where two pieces join the boundary has two samples in one place; rounding must not decide between them.
    slack, same = _SLACK * pitch_length, 1e-9 * pitch_length
    rows = np.flatnonzero(
        (t.distance <= before + same) & (t.distance <= after + same) & (t.distance <= least[t.pose] + slack)
    )
    rows = rows[np.lexsort((t.distance[rows], t.pose[rows]))]
    pose = t.pose[rows]
    rank = np.arange(rows.size) - np.searchsorted(pose, pose)
    return rows[rank < _REFINED]


def least_distance(e: Engagement, s: Sweep, step: float) -> tuple[Least, Reals]:
    """The least distance near the angles of a sweep, and the least distance at each of them.

    Args:
        e: the engagement.
        s: its sweep.
        step: how far from a sampled angle to look for less [rad].

    Returns:
        The exact minimum, refined between the sampled angles; and the curve of least distances [mm], shape (m,).
    """
    followed = _slid(s)
    per_pose = _per_pose(s, followed)
    results = [_between_poses(e, view, spots, exact, step, s.pitch_length) for view, spots, exact, _ in followed]
    return min(results, key=lambda r: r.distance), per_pose


def distances_at(e: Engagement, psi: Reals) -> Reals:
    """Least distance [mm] at each of the given input angles [rad], shape (m,)."""
    s = sweep_at(e, psi)
    return _per_pose(s, _slid(s))


def _slid(s: Sweep) -> list[tuple[View, Spots, Measure, Integers]]:
    """For each view its lowest samples slid to exact places, and the pose each belongs to."""
    found = []
    for view, touching in s.seen:
        rows = lowest_rows(touching, s.psi.size, s.pitch_length)
        if rows.size:
            spots = spots_at(view, touching, rows, s.psi, np.zeros_like(s.psi), 2)
            found.append((view, *slide(view, spots), touching.pose[rows]))
    return found


def _per_pose(s: Sweep, followed: list[tuple[View, Spots, Measure, Integers]]) -> Reals:
    least = np.full(s.psi.size, np.inf)
    for _, _, exact, pose in followed:
        np.minimum.at(least, pose, exact.near.distance)
    return least


def _between_poses(e: Engagement, view: View, spots: Spots, exact: Measure, step: float, pitch_length: float) -> Least:
    """Follow the lowest spots to the input angle where the distance is least."""
    # A spot can fall by about its approach speed times half the step between poses.
    floor = exact.near.distance - np.abs(exact.advancing) * step / 2
    chosen = np.argsort(floor, kind="stable")[:_FOLLOWED]
    spots = spots.take(chosen)
    deep = float(exact.near.distance.min()) < -_DEEP * pitch_length
    found = _on_ridge(view, spots, step) if deep else _in_dip(view, spots, step)
    return _report(e, view, found)


def _in_dip(view: View, spots: Spots, step: float) -> Spots:
    """The lowest of the spots after each has followed the slope of its distance to another input angle."""

    def settled(psi: Reals) -> tuple[Spots, Measure]:
        return slide(view, replace(spots.repeated(psi.size // spots.psi.size), psi=psi.ravel()))

    def advancing(psi: Reals) -> Reals:
        return settled(psi)[1].advancing.reshape(psi.shape)

    start, end = (spots, measure(view, spots)), settled(settle(advancing, spots.psi - step, spots.psi + step))
    found, at = min((start, end), key=lambda pair: float(pair[1].near.distance.min()))
    return found.take(np.array([int(np.argmin(at.near.distance))]))


def _on_ridge(view: View, spots: Spots, step: float) -> Spots:
    """The lowest spot by looking at values only, for on a ridge the slopes of its two sides do not tell the way."""
    low, high = spots.psi - step, spots.psi + step
    column = np.arange(spots.psi.size)
    for _ in range(_RIDGE_ROUNDS):
        psi = np.linspace(low, high, _RIDGE_GRID)
        many, at = slide_to_ridge(view, replace(spots.repeated(_RIDGE_GRID), psi=psi.ravel()))
        k = np.argmin(at.near.distance.reshape(psi.shape), axis=0)
        low, high = psi[np.maximum(k - 1, 0), column], psi[np.minimum(k + 1, _RIDGE_GRID - 1), column]
    return many.take(np.array([int(np.argmin(at.near.distance))]))


def _report(e: Engagement, view: View, spot: Spots) -> Least:
    m = measure(view, spot)
    probe = view.probe.outline.pieces[int(view.probe.piece_at(spot.place)[0])].role
    target = view.target.outline.pieces[int(m.near.piece[0])].role
    psi = float(spot.psi[0])
    target_turn = view.target_angle + view.target_rate * psi
    centre = e.centre_a if view.probe_share else e.centre_b
    place = centre + complex(m.near.foot[0]) * complex(np.exp(1j * target_turn))
    return Least(float(m.near.distance[0]), psi, place, (target, probe) if view.probe_share else (probe, target))
