"""Where curves cross, what is left when they are cut there, and the arc that rounds a flank into a circle."""

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq

from gearsolid.curves.curve import Curve, Points, Reals, Section
from gearsolid.curves.outline import smooth_spans
from gearsolid.curves.parallel import Parallel
from gearsolid.curves.primitives import Arc
from gearsolid.errors import DesignError

_NEWTON_STEPS = 30
# Chords may miss a crossing of their arcs near their ends: they are tried longer by this share on each side.
_REACH = 0.25
# Two parameters closer than this share of the span are one place of the curve.
_APART = 1e-7
# A shorter loop than this share of the span is no loop: the depth of a swallowtail grows as the fourth power of its
# parameter range and is lost in rounding here, and the two sides of a lone cusp are as close as that.
_LEAST_LOOP = 1e-4
# Curves that meet at a smaller angle [rad] run together rather than cross.
_LEAST_ANGLE = 1e-7
# Points closer than this share of the curves' size are the same point.
_SAME = 1e-11


def crossings(a: Curve, b: Curve, samples: int = 257) -> Reals:
    """Parameters at which two curves cross, or one ends on the other.

    Curves that touch sideways or run together do not cross. Crossings closer together than the chords between samples
    may be missed; samples crowd towards corners and cusps.

    Args:
        a: first curve; where it has no point (nan) it crosses nothing.
        b: second curve.
        samples: samples on each smooth span [-].

    Returns:
        Rows (parameter on a, parameter on b) [-], in travel order of a, shape (n, 2).
    """
    ta, tb = _samples(a, samples), _samples(b, samples)
    za, zb = a.point(ta), b.point(tb)
    guesses, _ = chord_crossings(ta, za, tb, zb)
    return _refined(a, b, guesses, _size(za, zb))


def self_crossings(curve: Curve, samples: int = 257) -> Reals:
    """Pairs of parameters at which a curve meets itself; the closing point of a closed curve is none.

    Args:
        curve: curve to test.
        samples: samples on each smooth span [-].

    Returns:
        Rows (earlier parameter, later parameter) [-], by the earlier one, shape (n, 2).
    """
    t = _samples(curve, samples)
    z = curve.point(t)
    guesses, chords = chord_crossings(t, z, t, z)
    found = _refined(curve, curve, guesses[chords[:, 1] > chords[:, 0] + 1], _size(z))
    t0, t1 = curve.span
    gap = found[:, 1] - found[:, 0]
    return found[(gap > _LEAST_LOOP * (t1 - t0)) & (gap < (1 - _LEAST_LOOP) * (t1 - t0))]


def cut_at_crossing(a: Curve, b: Curve) -> tuple[Section, Section]:
    """Two neighbours of a chain cut where they first cross: the part of `a` before, the part of `b` after.

    A root fillet that undercuts its flank is joined to it this way.

    Raises:
        DesignError: the curves do not cross.
    """
    found = crossings(a, b)
    if len(found) == 0:
        near = np.abs(a.point(a.sample(257))[:, None] - b.point(b.sample(257))[None, :])
        raise DesignError(
            f"two branches of a tooth do not cross: the nearest they come is {np.nanmin(near):.4g} mm; extend one of "
            "them, or change the sizes that part them"
        )
    ta, tb = found[0]
    return Section(a, a.span[0], float(ta)), Section(b, float(tb), b.span[1])


def without_loops(curve: Curve) -> tuple[Section, ...]:
    """The curve without the loops between its self crossings, such as the swallowtail of a parallel curve or envelope.

    Returns:
        The remaining parts in travel order; they join, with a corner at each dropped loop.
    """
    kept = []
    at, last = curve.span
    for leave, back in self_crossings(curve):
        if leave >= at:
            kept.append(Section(curve, at, float(leave)))
            at = float(back)
    return (*kept, Section(curve, at, last))


class Fillet(NamedTuple):
    """Where a fillet touches its flank (parameter [-]), and its arc in travel order, material on the left."""

    touch: float
    arc: Arc


def fillet(flank: Curve, circle_radius: float, radius: float, samples: int = 257) -> Fillet:
    """The arc that leads from a circle about the origin into a flank, or from the flank into the circle.

    The arc lies on the right of the flank, where there is no material, and on the flank's side of the circle: outside
    the root circle of a wheel, inside that of an annulus.

    Args:
        flank: travelled with material on its left, either away from the circle or towards it.
        circle_radius: radius of the root circle [mm].
        radius: radius of the fillet [mm].
        samples: places on the flank searched for the touching point [-].

    Raises:
        DesignError: no arc of this radius touches both.
    """
    if not (radius > 0 and circle_radius > 0):
        raise DesignError(f"fillet radius {radius:g} mm and circle radius {circle_radius:g} mm must both be above 0")
    t = flank.sample(samples)
    heights = np.abs(flank.point(t)) - circle_radius
    side = float(np.sign(heights[np.nanargmax(np.abs(heights))]))
    centres = Parallel(flank, -radius)
    target = circle_radius + side * radius
    found = _reaching(centres, target, t)
    if not found:
        reached = np.abs(centres.point(t))
        raise DesignError(
            f"a fillet of {radius:.4g} mm does not fit between the flank and the circle of {circle_radius:.4g} mm "
            f"radius: its centre would lie {np.nanmin(reached):.4g} to {np.nanmax(reached):.4g} mm from the axis, not "
            f"at {target:.4g} mm; take another radius, or let the flank reach nearer to the circle"
        )
    touch = min(found, key=lambda u: abs(abs(complex(flank.point(np.asarray(u)))) - circle_radius))
    centre = complex(centres.point(np.asarray(touch)))
    point, tangent = complex(flank.point(np.asarray(touch))), complex(flank.tangent(np.asarray(touch)))
    on_flank, on_circle = point - centre, -side * centre
    leaves_circle = side * (tangent * point.conjugate()).real > 0
    first, last = (on_circle, on_flank) if leaves_circle else (on_flank, on_circle)
    start = float(np.angle(first))
    return Fillet(touch, Arc(centre, radius, start, start - float(np.angle(first / last)) % (2 * np.pi)))


def _reaching(centres: Parallel, target: float, t: Reals) -> list[float]:
    """Parameters at which a parallel curve, running forwards, stands `target` mm from the origin."""

    def miss(u: float) -> float:
        return float(np.abs(centres.point(np.asarray(u)))) - target

    sign = np.sign(np.abs(centres.point(t)) - target)
    found = [float(brentq(miss, t[k], t[k + 1], xtol=1e-15)) for k in np.flatnonzero(sign[:-1] * sign[1:] < 0)]
    found += [float(u) for u in t[sign == 0]]
    return [u for u in found if float(centres.pace(np.asarray(u))) > 0]


def _samples(curve: Curve, samples: int) -> Reals:
    """Parameters on each smooth span, crowded towards its ends."""
    shares = (1 - np.cos(np.linspace(0, np.pi, samples))) / 2
    return np.unique([t0 + (t1 - t0) * shares for t0, t1 in smooth_spans(curve)])


def chord_crossings(ta: Reals, za: Points, tb: Reals, zb: Points) -> tuple[Reals, NDArray[np.intp]]:
    """Where the chords of two sampled curves cross: parameters by linear interpolation, and chord numbers."""
    p, along_a = za[:-1, None], np.diff(za)[:, None]
    q, along_b = zb[None, :-1], np.diff(zb)[None, :]
    with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
        sine = _cross(along_a, along_b)
        share_a, share_b = _cross(q - p, along_b) / sine, _cross(q - p, along_a) / sine
        hit = (np.abs(share_a - 0.5) <= 0.5 + _REACH) & (np.abs(share_b - 0.5) <= 0.5 + _REACH)
    i, j = np.nonzero(hit)
    guesses = np.stack((ta[i] + share_a[i, j] * np.diff(ta)[i], tb[j] + share_b[i, j] * np.diff(tb)[j]), axis=-1)
    return guesses, np.stack((i, j), axis=-1)


def _cross(a: Points, b: Points) -> Reals:
    product: Reals = np.imag(np.conj(a) * b)
    return product


def _size(*points: Points) -> float:
    """Largest coordinate [mm] met on a curve: the measure for rounding."""
    return float(np.fmax.reduce(np.abs(np.concatenate(points)), initial=0.0))


def _refined(a: Curve, b: Curve, guesses: Reals, size: float) -> Reals:
    """Crossings found from guesses by Newton's method within the spans: sorted, each once."""
    ta, tb = guesses.T
    apart = _APART * np.array([a.span[1] - a.span[0], b.span[1] - b.span[0]])
    with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
        for _ in range(_NEWTON_STEPS):
            along_a, along_b, miss = a.derivative(ta), b.derivative(tb), a.point(ta) - b.point(tb)
            sine = _cross(along_a, along_b)
            last = ta, tb
            ta = np.clip(ta - _cross(miss, along_b) / sine, *a.span)
            tb = np.clip(tb - _cross(miss, along_a) / sine, *b.span)
        met = np.abs(a.point(ta) - b.point(tb)) <= _SAME * size
        # Where two sides come close without crossing the steps stay long.
        met &= (np.abs(ta - last[0]) < apart[0]) & (np.abs(tb - last[1]) < apart[1])
        met &= np.abs(sine) > _LEAST_ANGLE * np.abs(along_a) * np.abs(along_b)
    pairs = np.stack((ta, tb), axis=-1)[met]
    pairs = pairs[np.lexsort((pairs[:, 1], pairs[:, 0]))]
    new = [not np.any(np.all(np.abs(pairs[:k] - pairs[k]) < apart, axis=-1)) for k in range(len(pairs))]
    found: Reals = pairs[np.array(new, dtype=bool)]
    return found
