"""From samples to exact places: slide a probe point along its boundary until the distance to the target is least."""

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from gearsolid.contact.view import Touching, View
from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.field import Integers, Near

# Places looked at together when a bracket is narrowed, as shares of it, and how often it is narrowed.
_GRID = np.linspace(0, 1, 9)[:, None]
_NARROWINGS = 2

# Most Newton steps of a slide; a slide ends when no spot moves by more than this share of a sample.
_SLIDES = 6
_STILL = 1e-5

# Longest Newton step, in samples.
_STRIDE = 3.0

# Step for the second derivative of the distance along the probe, in samples.
_PROBE = 1e-4


@dataclass(frozen=True)
class Spots:
    """Places on a probe, each free to slide between two places of its boundary, all arrays of shape (n,).

    Args:
        psi: input angle [rad].
        extra: extra turn of b [rad].
        pitch: pitch of the probe.
        place: sample index + fraction.
        low: least place allowed.
        high: greatest place allowed.
    """

    psi: Reals
    extra: Reals
    pitch: Integers
    place: Reals
    low: Reals
    high: Reals

    def take(self, index: np.ndarray) -> "Spots":
        """The chosen rows."""
        return Spots(*(getattr(self, name)[index] for name in self.__dataclass_fields__))

    def repeated(self, times: int) -> "Spots":
        """All rows, `times` over."""
        return Spots(*(np.tile(getattr(self, name), times) for name in self.__dataclass_fields__))


def around(view: View, spots: Spots, freedom: int) -> Spots:
    """The spots free to slide `freedom` samples either way from where they are, within their smooth span."""
    span = view.probe.spans[np.floor(spots.place).astype(np.int64)]
    low, high = np.maximum(spots.place - freedom, span[:, 0]), np.minimum(spots.place + freedom, span[:, 1])
    return replace(spots, low=low, high=high)


def spots_at(view: View, touching: Touching, rows: Integers, psi: Reals, extra: Reals, freedom: int) -> Spots:
    """The sampled rows as spots that may slide `freedom` samples either way."""
    place, pose = touching.sample[rows].astype(np.float64), touching.pose[rows]
    return around(view, Spots(psi[pose], extra[pose], touching.pitch[rows], place, place, place), freedom)


@dataclass(frozen=True)
class Measure:
    """Exact distances at a set of spots.

    Args:
        near: nearest target points, in the target's frame.
        along: derivative of the distance by the probe's place.
        closing: derivative of the distance by an extra turn of b [mm/rad].
        advancing: derivative of the distance by the input angle [mm/rad].
    """

    near: Near
    along: Reals
    closing: Reals
    advancing: Reals

    def first(self, n: int) -> "Measure":
        """The first n rows."""
        near = Near(self.near.distance[:n], self.near.piece[:n], self.near.foot[:n], self.near.outward[:n])
        return Measure(near, self.along[:n], self.closing[:n], self.advancing[:n])


def measure(view: View, spots: Spots) -> Measure:
    """Exact distances and their derivatives at the spots."""
    turn, axis = view.frame(spots.psi, spots.extra)
    own, slope = view.probe.evaluate(spots.place)
    turn = turn * np.exp(1j * view.probe.outline.pitch_angle * spots.pitch)
    z = axis + turn * own
    near = view.target.near(z)

    def rate(velocity: Points) -> Reals:
        return np.real(np.conj(near.outward) * velocity)

    return Measure(near, rate(turn * slope), rate(view.turning(z, axis)), rate(view.advancing(z, axis)))


def settle(slope: Callable[[Reals], Reals], low: Reals, high: Reals) -> Reals:
    """Where functions have their minimum between two bounds, element by element, from their derivatives.

    The bounds are narrowed by looking at several places at once, then by the secant; a derivative that does not rise
    through zero sends the answer to the lower end.

    Args:
        slope: derivative as a function of the parameter; takes and gives arrays of shape (k, n).
        low: lower bounds, shape (n,).
        high: upper bounds, shape (n,).
    """
    column = np.arange(low.size)
    for _ in range(_NARROWINGS):
        t = low + (high - low) * _GRID
        along = slope(t)
        rising = (along[:-1] < 0) & (along[1:] >= 0)
        k = np.argmax(rising, axis=0)
        bracketed = rising[k, column]
        k = np.where(bracketed, k, np.where(along[0] >= 0, 0, _GRID.size - 2))
        low, high = t[k, column], t[k + 1, column]
        at_low, at_high = along[k, column], along[k + 1, column]
    secant = low - at_low * (high - low) / np.where(bracketed, at_high - at_low, 1.0)
    return np.where(bracketed, secant, np.where(at_low >= 0, low, high))


def slide_to_ridge(view: View, spots: Spots) -> tuple[Spots, Measure]:
    """As `slide`, but for deep overlaps: there the distance is least on a ridge between flanks, not at a smooth dip."""

    def along(place: Reals) -> Reals:
        many = replace(spots.repeated(_GRID.size), place=place.ravel())
        return measure(view, many).along.reshape(place.shape)

    spots = replace(spots, place=settle(along, spots.low, spots.high))
    return spots, measure(view, spots)


def newton(view: View, spots: Spots) -> tuple[Spots, Measure, Reals]:
    """One Newton step of each spot towards its least distance, within its limits and by a few samples at most.

    Returns:
        The moved spots, the measure before the step, and the fall of the distance the step should bring [mm].
    """
    ahead = np.where(spots.place + _PROBE <= spots.high, _PROBE, -_PROBE)
    pair = replace(spots.repeated(2), place=np.append(spots.place, spots.place + ahead))
    both = measure(view, pair)
    n = spots.place.size
    here, there = both.along[:n], both.along[n:]
    bend = (there - here) / ahead
    curved = bend > 0
    step = np.where(curved, -here / np.where(curved, bend, 1.0), -np.sign(here))
    place = np.clip(spots.place + np.clip(step, -_STRIDE, _STRIDE), spots.low, spots.high)
    moved = place - spots.place
    fall = -(here + bend * moved / 2) * moved
    return replace(spots, place=place), both.first(n), fall


def slide(view: View, spots: Spots) -> tuple[Spots, Measure]:
    """Each spot moved to where its distance is least between its limits."""
    for _ in range(_SLIDES):
        before = spots.place
        spots, _, _ = newton(view, spots)
        if np.all(np.abs(spots.place - before) < _STILL):
            break
    return spots, measure(view, spots)
