"""From samples to exact places: slide a probe point along its piece until the distance to the target is least."""

from dataclasses import dataclass, replace

import numpy as np

from gearsolid.contact.view import Touching, View
from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.field import Integers, Near

_SLIDES = 7


@dataclass(frozen=True)
class Spots:
    """Places on a probe, each free to slide between two parameters of its piece, all arrays of shape (n,).

    Args:
        psi: input angle [rad].
        extra: extra turn of b [rad].
        pitch: pitch of the probe.
        piece: piece of the probe.
        t: parameter there [-].
        low: least parameter allowed [-].
        high: greatest parameter allowed [-].
    """

    psi: Reals
    extra: Reals
    pitch: Integers
    piece: Integers
    t: Reals
    low: Reals
    high: Reals

    def take(self, index: np.ndarray) -> "Spots":
        """The chosen rows."""
        return Spots(*(getattr(self, name)[index] for name in self.__dataclass_fields__))


def spots_at(view: View, touching: Touching, rows: Integers, psi: Reals, extra: Reals) -> Spots:
    """The sampled rows as spots that may slide to the neighbouring samples."""
    cloud = view.probe.cloud
    j = touching.sample[rows]
    t = cloud.t[j]
    low = np.where(cloud.edge[j] == -1, t, cloud.t[np.maximum(j - 1, 0)])
    high = np.where(cloud.edge[j] == 1, t, cloud.t[np.minimum(j + 1, cloud.t.size - 1)])
    pose = touching.pose[rows]
    return Spots(psi[pose], extra[pose], touching.pitch[rows], cloud.piece[j], t, low, high)


@dataclass(frozen=True)
class Measure:
    """Exact distances at a set of spots.

    Args:
        near: nearest target points, in the target's frame.
        along: derivative of the distance by the probe parameter.
        closing: derivative of the distance by an extra turn of b [mm/rad].
        advancing: derivative of the distance by the input angle [mm/rad].
    """

    near: Near
    along: Reals
    closing: Reals
    advancing: Reals


def measure(view: View, spots: Spots) -> Measure:
    """Exact distances and their derivatives at the spots."""
    turn, axis = view.frame(spots.psi, spots.extra)
    own, slope = view.probe_point(spots.piece, spots.t, spots.pitch)
    z = axis + turn * own
    near = view.target.near(z)

    def rate(velocity: Points) -> Reals:
        return np.real(np.conj(near.outward) * velocity)

    return Measure(near, rate(turn * slope), rate(view.turning(z, axis)), rate(view.advancing(z, axis)))


def slide(view: View, spots: Spots) -> tuple[Spots, Measure]:
    """Each spot moved to where its distance is least between its limits (bracketed secant on the derivative)."""
    low, high = spots.low, spots.high
    at_low = measure(view, replace(spots, t=low)).along
    at_high = measure(view, replace(spots, t=high)).along
    for _ in range(_SLIDES):
        inside = (at_low < 0) & (at_high > 0)
        span = np.where(inside, at_high - at_low, 1.0)
        t = np.where(inside, low - at_low * (high - low) / span, np.where(at_low >= 0, low, high))
        along = measure(view, replace(spots, t=t)).along
        falling = along < 0
        # Illinois rule: an end kept twice has its value halved, so that the secant cannot stall.
        at_low, at_high = (
            np.where(inside & falling, along, np.where(inside, at_low / 2, at_low)),
            np.where(inside & ~falling, along, np.where(inside, at_high / 2, at_high)),
        )
        low, high = np.where(inside & falling, t, low), np.where(inside & ~falling, t, high)
    spots = replace(spots, t=t)
    return spots, measure(view, spots)
