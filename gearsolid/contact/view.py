"""One outline seen from the other: the samples of a probe that come near a target while both turn."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.field import Field, Integers, field_of
from gearsolid.pairs.engagement import Engagement


@dataclass(frozen=True)
class Touching:
    """Probe points in the target's frame, one row each.

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
    """

    probe: Field
    target: Field
    offset: complex
    probe_angle: float
    probe_rate: float
    target_angle: float
    target_rate: float
    probe_share: int

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

    def sweep(self, psi: Reals, extra: Reals, margin: float) -> Touching:
        """Probe samples within `margin` [mm] of the target's radial range, with their distances.

        Args:
            psi: input angles [rad], shape (m,).
            extra: extra turn of b at each [rad], shape (m,).
            margin: [mm].
        """
        target, cloud = self.target.outline, self.probe.cloud
        turn, axis = self.frame(psi, extra)
        pitches = np.exp(1j * self.probe.outline.pitch_angle * np.arange(self.probe.outline.order))
        middle, reach = self._pitch_circle
        away = np.abs(axis[:, None] + turn[:, None] * pitches * middle)
        near = (away - reach < target.r_max + margin) & (away + reach > target.r_min - margin)
        pose, pitch = np.nonzero(near)
        z = axis[pose, None] + (turn[pose] * pitches[pitch])[:, None] * cloud.point
        r = np.abs(z)
        row, sample = np.nonzero((r < target.r_max + margin) & (r > target.r_min - margin))
        z, pose, pitch = z[row, sample], pose[row], pitch[row]
        distance, nearest = self.target.rough(z)
        normal = self._normal(z, nearest)
        closing = np.real(np.conj(normal) * self.turning(z, axis[pose]))
        return Touching(pose, pitch, sample, distance, closing)

    def _normal(self, z: Points, nearest: Integers) -> Points:
        """Outward normal of the target at the given samples, in the pitch where z stands."""
        factor = self.target.fold(z)
        return -1j * self.target.cloud.tangent[nearest] * factor

    def probe_point(self, piece: Integers, t: Reals, pitch: Integers) -> tuple[Points, Points]:
        """Probe point and derivative by t in the probe's own frame."""
        factor = np.exp(1j * self.probe.outline.pitch_angle * pitch)
        z, dz, _ = self.probe.evaluate(piece, t)
        return factor * z, factor * dz


def views(e: Engagement) -> tuple[View, View]:
    """a seen from b, and b seen from a."""
    a, b = field_of(e.a), field_of(e.b)
    offset = e.centre_a - e.centre_b
    return (
        View(a, b, offset, e.angle_a, e.rate_a, e.angle_b, e.rate_b, 0),
        View(b, a, -offset, e.angle_b, e.rate_b, e.angle_a, e.rate_a, 1),
    )
