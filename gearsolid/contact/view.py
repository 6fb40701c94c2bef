"""One outline seen from the other: the samples of a probe that come near a target while both turn."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.field import Cloud, Field, Integers, field_of
from gearsolid.pairs.engagement import Engagement

# Every so-many-th sample is measured first; the samples between are measured only where they can matter.
_STRIDE = 6


@dataclass(frozen=True)
class Runs:
    """Runs of samples of a probe that are looked at together, all arrays of shape (n,).

    Args:
        middle: the sample measured first.
        first: first sample of the run.
        last: last sample of the run.
        reach: longest way along the boundary from the middle to an end [mm].
    """

    middle: Integers
    first: Integers
    last: Integers
    reach: Reals


def whole(cloud: Cloud) -> Runs:
    """Runs that cover the whole pitch."""
    z, stop = cloud.point, cloud.point.size - 1
    middle = np.arange(min(_STRIDE // 2, stop), stop + 1, _STRIDE)
    first = np.minimum(np.arange(middle.size) * _STRIDE, middle)
    last = np.append(first[1:] - 1, stop)
    walked = np.append(0.0, np.cumsum(np.abs(np.diff(z))))
    # Chords are shorter than the curve; a tenth more covers any arc of up to a right angle a chord.
    reach = 1.1 * np.maximum(walked[middle] - walked[first], walked[last] - walked[middle])
    return Runs(middle, first, last, reach)


def corners(cloud: Cloud) -> Runs:
    """Single samples where the boundary has a corner."""
    at = np.flatnonzero(cloud.corner)
    return Runs(at, at, at, np.zeros(at.size))


@dataclass(frozen=True)
class Touching:
    """Probe samples near the target, one row each, ordered by pose, pitch and sample.

    Args:
        pose: index into the poses asked for, shape (n,).
        pitch: which pitch of the probe, shape (n,).
        sample: index into the probe's cloud, shape (n,).
        distance: signed distance to the target [mm], shape (n,).
        closing: derivative of the distance by an extra turn of b [mm/rad], shape (n,).
    """

    pose: Integers
    pitch: Integers
    sample: Integers
    distance: Reals
    closing: Reals

    def repeated(self, poses: int) -> "Touching":
        """All rows, and all rows again for a second round of as many poses."""
        pose = np.append(self.pose, self.pose + poses)
        return Touching(
            pose, np.tile(self.pitch, 2), np.tile(self.sample, 2), np.tile(self.distance, 2), np.tile(self.closing, 2)
        )


@dataclass(frozen=True)
class View:
    """A probe outline in the frame of a target outline.

    Args:
        probe: outline whose points are followed.
        target: outline the distances are measured to.
        offset: probe axis less target axis in the common frame [mm].
        probe_angle: turn of the probe at psi = 0 [rad].
        probe_rate: its turns per input turn [-].
        target_angle: turn of the target at psi = 0 [rad].
        target_rate: its turns per input turn [-].
        probe_share: 1 where an extra turn of b turns the probe, else 0.
        runs: the samples of the probe that are looked at.
    """

    probe: Field
    target: Field
    offset: complex
    probe_angle: float
    probe_rate: float
    target_angle: float
    target_rate: float
    probe_share: int
    runs: Runs

    def frame(self, psi: Reals, extra: Reals) -> tuple[Points, Points]:
        """Turn of the probe in the target's frame, and the probe axis there [mm], at input psi and extra turn [rad]."""
        probe = self.probe_angle + self.probe_rate * psi + self.probe_share * extra
        target = self.target_angle + self.target_rate * psi + (1 - self.probe_share) * extra
        return np.exp(1j * (probe - target)), self.offset * np.exp(-1j * target)

    def turning(self, z: Points, axis: Points) -> Points:
        """Derivative of a probe point z in the target's frame by an extra turn of b [mm/rad]."""
        return 1j * (z - axis) if self.probe_share else -1j * z

    def advancing(self, z: Points, axis: Points) -> Points:
        """Derivative of a probe point z in the target's frame by the input angle [mm/rad]."""
        return 1j * self.probe_rate * (z - axis) - 1j * self.target_rate * z

    @cached_property
    def _pitch_circle(self) -> tuple[complex, float]:
        """Centre and radius of a circle round one pitch of the probe [mm]."""
        z = self.probe.cloud.point
        middle = complex((z.real.min() + z.real.max()) / 2, (z.imag.min() + z.imag.max()) / 2)
        return middle, float(np.max(np.abs(z - middle)))

    def sweep(self, psi: Reals, extra: Reals, margin: float, slack: float) -> Touching:
        """Probe samples that can be within `slack` of the least distance of their pose.

        The distance changes by no more than the way walked along the probe, so a run of samples is left out when even
        its nearest could not matter.

        Args:
            psi: input angles [rad], shape (m,).
            extra: extra turn of b at each [rad], shape (m,).
            margin: only samples this near to the target's radial range are looked at [mm].
            slack: how far above the least distance samples are still wanted [mm].
        """
        target, cloud = self.target.outline, self.probe.cloud
        turn, axis = self.frame(psi, extra)
        pitches = np.exp(1j * self.probe.outline.pitch_angle * np.arange(self.probe.outline.order))
        middle, reach = self._pitch_circle
        away = np.abs(axis[:, None] + turn[:, None] * pitches * middle)
        near = (away - reach < target.r_max + margin) & (away + reach > target.r_min - margin)
        pose, pitch = np.nonzero(near)
        centre, first, last, length = self.runs.middle, self.runs.first, self.runs.last, self.runs.reach
        placed = turn[pose] * pitches[pitch]
        z = axis[pose, None] + placed[:, None] * cloud.point[centre]
        r = np.abs(z)
        row, cell = np.nonzero((r - length < target.r_max + margin) & (r + length > target.r_min - margin))
        distance, _ = self.target.rough(z[row, cell])
        least = np.full(psi.size, np.inf)
        np.minimum.at(least, pose[row], distance)
        keep = distance - length[cell] <= least[pose[row]] + slack
        row, cell = row[keep], cell[keep]
        counts = last[cell] - first[cell] + 1
        row = np.repeat(row, counts)
        sample = np.repeat(first[cell] - np.append(0, np.cumsum(counts)[:-1]), counts) + np.arange(counts.sum())
        pose, pitch = pose[row], pitch[row]
        z = axis[pose] + placed[row] * cloud.point[sample]
        distance, normal = self.target.rough(z)
        closing = np.real(np.conj(normal) * self.turning(z, axis[pose]))
        return Touching(pose, pitch, sample, distance, closing)


def clear_views(e: Engagement) -> tuple[View, View]:
    """a seen from b, and the corners of b seen from a: enough for parts that do not overlap.

    Where two smooth stretches come closest each is the other's foot, so following a finds them all; only a corner of b
    has no tangent of its own to be found by.
    """
    return _view_of_a(e), _view_of_b(e, corners(field_of(e.b).cloud))


def overlap_views(e: Engagement) -> tuple[View, View]:
    """a seen from b, and b seen from a: where they overlap, either may lie deeper in the other."""
    return _view_of_a(e), _view_of_b(e, whole(field_of(e.b).cloud))


def _view_of_a(e: Engagement) -> View:
    a, b = field_of(e.a), field_of(e.b)
    return View(a, b, e.centre_a - e.centre_b, e.angle_a, e.rate_a, e.angle_b, e.rate_b, 0, whole(a.cloud))


def _view_of_b(e: Engagement, runs: Runs) -> View:
    a, b = field_of(e.a), field_of(e.b)
    return View(b, a, e.centre_b - e.centre_a, e.angle_b, e.rate_b, e.angle_a, e.rate_a, 1, runs)
