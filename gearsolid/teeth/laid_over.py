"""All teeth of a measured wheel laid over each other: counted, told apart, turned back onto one pitch."""

import math
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.smoothing import LEAST_POINTS
from gearsolid.errors import DesignError

# The radius must swing this share of half the tooth height to both sides of its middle to pass a tooth.
_SWING = 0.3
# A tooth further off its place than this share of a pitch belongs to no even wheel.
_MOST_PITCH_ERROR = 0.1
_FEWEST_TEETH = 3


class LaidOver(NamedTuple):
    """The points of all teeth on one pitch.

    Args:
        points: turned back onto the pitch whose tooth is centred on the +x axis, about [mm], shape (n,).
        shares: how far along the pitch each lies, 0 to 1, shape (n,).
        tooth: number of each point's tooth, from 0 in travel order, shape (n,).
        teeth: number of teeth.
        step: turn from one pitch to the next, as a unit complex number.
        first: direction of tooth 0 [rad], were the teeth evenly spaced.
        pitch_error: largest angle of a tooth from its even place [rad].
        half_height: radius half way up the teeth [mm].
    """

    points: Points
    shares: Reals
    tooth: NDArray[np.int64]
    teeth: int
    step: complex
    first: float
    pitch_error: float
    half_height: float


def laid_over(z: Points, hand: int, teeth: int | None) -> LaidOver:
    """The points of a closed outline about its axis, laid onto one pitch.

    Args:
        z: points once round in travel order, material on the left [mm], shape (n,).
        hand: +1 for a wheel, -1 for a ring.
        teeth: tooth count stated, or None.

    Raises:
        DesignError: another count than stated, fewer than 3 teeth, uneven teeth, or too few points on one.
    """
    radii = np.abs(z)
    low, high = np.percentile(radii, [2, 98])
    half_height, swing = float(low + high) / 2, _SWING * float(high - low) / 2
    # The start lies in a space, as deep as can be.
    start = int(np.argmin(hand * radii))
    z = np.roll(z, -start)
    rise = hand * (np.abs(z) - half_height)
    angle = np.unwrap(np.angle(np.append(z, z[0])))
    ups, downs = _passages(rise, swing)
    count = len(ups)
    if count < _FEWEST_TEETH or teeth not in (None, count):
        stated = f"{teeth} were stated" if teeth else f"{_FEWEST_TEETH} or more are needed"
        raise DesignError(
            f"{count} teeth were counted where the radius swings through {half_height:.4g} mm, but {stated}: check the "
            "centre, the order of the points and whether all teeth were measured"
        )
    middles = (_at(angle, ups) + _at(angle, downs)) / 2
    off = middles - hand * 2 * math.pi * np.arange(count) / count
    first, pitch = float(off.mean()), 2 * math.pi / count
    off -= first
    worst = int(np.argmax(np.abs(off)))
    if abs(off[worst]) > _MOST_PITCH_ERROR * pitch:
        raise DesignError(
            f"tooth {worst + 1} of {count} stands {math.degrees(abs(off[worst])):.4g} deg off even pitch, "
            f"{abs(off[worst]) / pitch:.0%} of it; up to {_MOST_PITCH_ERROR:.0%} is allowed: check the centre, and "
            "whether a tooth is broken or missing"
        )
    bounds = first + hand * pitch * (np.arange(count) + 0.5)
    next_ups = np.append(ups[1:], ups[0] + z.size)
    cuts = _cuts(hand * angle, downs, next_ups, np.asarray(hand * bounds, dtype=float))
    index = np.arange(z.size, dtype=float)
    index = np.where(index >= cuts[-1], index - z.size, index)
    tooth = np.searchsorted(cuts[1:], index, side="right")
    points = np.bincount(tooth, minlength=count)
    if points.min() < LEAST_POINTS:
        raise DesignError(
            f"tooth {int(np.argmin(points)) + 1} of {count} has {points.min()} points; at least {LEAST_POINTS} on each "
            "tooth are needed: measure more densely"
        )
    way = _round(np.concatenate(([0.0], np.cumsum(np.abs(np.diff(np.append(z, z[0])))))))
    begins, here = _at(way, cuts + z.size), _at(way, index + z.size)
    step = complex(np.exp(2j * math.pi * hand / count))
    return LaidOver(
        z * np.exp(-1j * first) * step ** -tooth.astype(float),
        (here - begins[tooth]) / np.diff(begins)[tooth],
        tooth,
        count,
        step,
        first,
        float(np.abs(off).max()),
        half_height,
    )


def _round(values: Reals) -> Reals:
    """Values that grow along the outline, given once round with the first repeated, over three rounds."""
    whole = values[-1] - values[0]
    return np.concatenate((values[:-1] - whole, values[:-1], values + whole))


def _cuts(angle: Reals, downs: Reals, ups: Reals, bounds: Reals) -> Reals:
    """Where the outline passes the middles of the spaces, as index + fraction, the one before the start first."""
    around, size = _round(angle), angle.size - 1
    places = []
    for down, up, bound in zip(downs, ups, bounds, strict=True):
        space = np.arange(math.floor(down), math.ceil(up) + 1)
        places.append(float(np.interp(bound, around[space + size], space)))
    return np.array([places[-1] - size, *places])


def _passages(rise: Reals, swing: float) -> tuple[Reals, Reals]:
    """Places, as index + fraction, where the radius passes half height for good: upwards and downwards."""
    clear = np.flatnonzero(np.abs(rise) > swing)
    clear = np.append(clear, rise.size + clear[0])
    looped = np.append(rise, rise)
    side = np.sign(looped[clear])
    ups: list[float] = []
    downs: list[float] = []
    for k in np.flatnonzero(np.diff(side)):
        part = looped[clear[k] : clear[k + 1] + 1]
        at = int(np.flatnonzero(np.sign(part) == side[k + 1])[0])
        place = clear[k] + at - part[at] / (part[at] - part[at - 1])
        (ups if side[k + 1] > 0 else downs).append(float(place))
    return np.array(ups), np.array(downs)


def _at(values: Reals, places: Reals) -> Reals:
    return np.asarray(np.interp(places, np.arange(values.size), values), dtype=float)
