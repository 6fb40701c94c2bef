"""Double-flank roll test: two members pressed together without play, and the centre distance they take.

Each member may sit off its axis of turning; then the centres of the teeth circle, and what stays as it was is the
distance of the tooth centres in tight contact.
"""

from dataclasses import dataclass, replace
from math import gcd

import numpy as np

from gearsolid.contact.clearance import sweep
from gearsolid.contact.play import window
from gearsolid.curves.curve import Reals
from gearsolid.errors import DesignError, ToleranceError
from gearsolid.pairs.engagement import Engagement

# The play is measured at these openings beyond tight contact, as shares of the pitch length, and followed to zero.
_OPENINGS = np.array([2e-4, 6e-4, 1e-3])
_SEARCHES = 30
_SETTLED = 1e-5

# Input angles looked at in each pitch over the whole period.
_PER_PITCH = 16

# Most pitches of a period that are followed.
_MOST_PITCHES = 20000


@dataclass(frozen=True)
class Composite:
    """A deviation recorded over a whole period, in the words of ISO 1328-2.

    Args:
        angles_deg: turn of a [deg], shape (n,).
        record: the deviation at each [mm], shape (n,).
        total: largest less smallest value of the period [mm]: Fi'' of a record of centre distances.
        one_pitch: largest such difference within any one pitch [mm]: fi''.
    """

    angles_deg: Reals
    record: Reals
    total: float
    one_pitch: float

    @classmethod
    def of(cls, angles_deg: Reals, record: Reals, per_pitch: int) -> "Composite":
        """The deviations of a record that closes on itself, with so many samples a pitch."""
        ring = np.append(record, record[:per_pitch])
        windows = np.lib.stride_tricks.sliding_window_view(ring, per_pitch + 1)
        return cls(angles_deg, record, float(np.ptp(record)), float(np.max(np.ptp(windows, axis=1))))


def tight_distance(e: Engagement) -> tuple[Reals, Reals]:
    """Centre distance at which both flanks touch, through one pitch.

    Args:
        e: two members on fixed axes.

    Returns:
        Input angles [rad], and the centre distance at each [mm], shape (m,).

    Raises:
        DesignError: no centre distance near the stated one makes both flanks touch.
    """
    apart = abs(e.centre_b - e.centre_a)
    pitch = min(o.pitch_angle * o.r_max for o in (e.a, e.b))
    ring = (e.a.area < 0) != (e.b.area < 0)
    out = -1.0 if ring else 1.0
    psi, first = _plays(e, apart)
    opening = pitch * _OPENINGS
    # Towards a little play at the tightest angle, by the secant: play grows with the centre distance nearly in
    # proportion.
    here, play, slope = apart, float(first.min()), out
    for _ in range(_SEARCHES):
        step = (opening[1] - play) / slope
        there = here + float(np.clip(step, -0.1 * pitch, 0.1 * pitch))
        found = float(_plays(e, there)[1].min())
        if not np.isfinite(found):
            break
        if there != here and found != play:
            slope = (found - play) / (there - here)
        here, play = there, found
        if abs(play - opening[1]) <= _SETTLED * pitch:
            distances = here + (opening - opening[1]) / slope
            plays = np.array([_plays(e, float(d))[1] for d in distances])
            return psi, _at_zero(distances, plays)
    raise DesignError(
        f"{e.name_a} and {e.name_b} find no tight contact near a centre distance of {apart:.4g} mm: state one at which "
        "their teeth reach each other"
    )


def _plays(e: Engagement, apart: float) -> tuple[Reals, Reals]:
    """Play at the pitch circle of b [mm] at the sampled input angles [rad], at a centre distance [mm]."""
    line = (e.centre_b - e.centre_a) / abs(e.centre_b - e.centre_a)
    moved = replace(e, centre_b=e.centre_a + apart * line)
    s = sweep(moved)
    least = min(float(t.distance.min(initial=np.inf)) for _, t in s.seen)
    radius = (e.b.r_min + e.b.r_max) / 2
    return s.psi, window(s, radius, least).width * radius


def _at_zero(distances: Reals, plays: Reals) -> Reals:
    """Distance [mm] at which each play is gone: the parabola through three of them, by inverse interpolation."""
    total = np.zeros(plays.shape[1])
    for k in range(distances.size):
        others = [j for j in range(distances.size) if j != k]
        total += distances[k] * np.prod([-plays[j] / (plays[k] - plays[j]) for j in others], axis=0)
    return total


def double_flank(e: Engagement, runout_a: float = 0.0, runout_b: float = 0.0) -> Composite:
    """Radial composite deviation of two members rolled together without play, over a whole period.

    Args:
        e: two members on fixed axes.
        runout_a: radial runout of a's teeth about its bore [mm]: twice the distance of the two centres.
        runout_b: the same of b [mm].

    Returns:
        The record of centre distances; its `total` is Fi'' and its `one_pitch` fi''. For perfect members both are 0.

    Raises:
        DesignError: no tight contact near the stated centre distance.
        ToleranceError: the period is too long to follow.

    Source: definitions of ISO 1328-2:1997, from memory.
    """
    pitches = e.a.order * e.b.order // gcd(e.a.order, e.b.order) if runout_b else e.a.order
    if pitches > _MOST_PITCHES:
        raise ToleranceError(
            f"{e.a.order} and {e.b.order} teeth meet again after {pitches} pitches; at most {_MOST_PITCHES} are "
            "followed: take counts with a common divisor"
        )
    psi, tight = tight_distance(e)
    turns = np.arange(pitches * _PER_PITCH) * (e.period / _PER_PITCH)
    apart = np.interp(np.mod(turns, e.period), np.append(psi, e.period), np.append(tight, tight[0]))
    off = runout_b / 2 * np.exp(1j * e.rate_b * turns) - runout_a / 2 * np.exp(1j * e.rate_a * turns)
    distance = np.sqrt(apart**2 - off.imag**2) - off.real
    return Composite.of(np.degrees(turns * e.rate_a), distance, _PER_PITCH)
