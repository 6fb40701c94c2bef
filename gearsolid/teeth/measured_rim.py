"""One pitch of a rim through the points of all teeth: corners found and kept, smooth stretches between them."""

from typing import NamedTuple

import numpy as np
from scipy.interpolate import BSpline

from gearsolid.curves.curve import Curve, Points, Reals
from gearsolid.curves.fit import Spline
from gearsolid.curves.outline import Piece, Role
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.curves.smoothing import LEAST_POINTS, smoothed, smoothed_rim
from gearsolid.errors import DesignError

# A corner turns by this much [deg], and by so many times the turn that noise makes, between two stretches of this share
# of a pitch, and by nearly as much between two of half that length.
_TURN_DEG, _NOISE = 12.0, 8.0
_STRETCH = 0.02
_SHARP = 0.75
_PLACES = 1200
# Stretches looked at hold at least so many points, in all and of each row.
_HELD, _OF_EACH_ROW = 16, 5
# Points nearer to a corner than this share of a stretch may lie on either side of it.
_EITHER = 0.1
# Points lie on a circle about the axis when they do so as well as this many times their distance from a spline.
_AS_WELL = 1.3
_ROUND = 1e-9
# A stretch that climbs more than this share of the tooth height is a flank.
_FLANK = 0.3
_FEWEST = 3
_PARABOLA = np.array([0.0, 0.0, 0.0, 1.0, 1.0, 1.0])
# Search for a corner: steps, how close counts as met, as a share of the radius; the least sine between two stretches.
_STEPS = 30
_MET = 1e-12
_PARALLEL = 0.1
# What leads to a corner is continued by this share of its length at most.
_BEYOND = 0.6


def fitted_rim(points: Points, shares: Reals, rows: int, step: complex) -> tuple[Piece, ...]:
    """Pieces of one pitch, in travel order: true arcs about the axis where the points lie on one, else splines.

    Args:
        points: laid onto one pitch [mm], shape (n,).
        shares: how far along the pitch each lies, about, 0 to 1, shape (n,).
        rows: number of pitches laid over each other [-].
        step: turn from one pitch to the next, as a unit complex number.
    """
    order = np.argsort(shares)
    row = _Row(points[order], shares[order], rows, step)
    corners = _corners(row)
    while corners.size:
        ends = np.append(corners[1:], corners[0] + 1)
        stretches = [_Stretch.of(row, a, b) for a, b in zip(corners, ends, strict=True)]
        meets = [
            _meeting(a, b, step if b is stretches[0] else 1.0)
            for a, b in zip(stretches, [*stretches[1:], stretches[0]], strict=True)
        ]
        met = np.array([z is not None for z in meets])
        if met.all():
            return _pieces(row, stretches, np.array(meets))
        # Where the stretches miss each other there is a tight curve rather than a corner.
        corners = corners[np.roll(met, 1)]
    return (Piece(smoothed_rim(points, shares, rows, step).spline, "flank"),)


class _Row(NamedTuple):
    """Points of so many rows in order along one pitch, and how far along; beyond it they repeat turned by `step`."""

    points: Points
    along: Reals
    rows: int
    step: complex

    @property
    def stretch(self) -> float:
        """Stretches that corners are told by, as a share of the pitch; rows may repeat the same places."""
        return max(_STRETCH, _HELD / self.along.size, _OF_EACH_ROW * self.rows / self.along.size)

    def between(self, first: float, last: float) -> tuple[Points, Reals]:
        """Points from one place to another, at most a pitch either side."""
        z = np.concatenate([self.points * self.step**k for k in (-1, 0, 1)])
        s = np.concatenate([self.along + k for k in (-1, 0, 1)])
        inside = (s > first) & (s < last)
        return z[inside], s[inside]

    def clear_of(self, first: float, last: float) -> tuple[Points, Reals]:
        """Points between two corners, without those so near that they may lie beyond."""
        margin = _EITHER * self.stretch
        return self.between(first + margin, last - margin)


class _Lines(NamedTuple):
    """Straight lines through the points of many windows: mean point, mean place, slope by place, its mean error."""

    mean: Points
    place: Reals
    slope: Points
    error: Reals


def _lines(z: Points, s: Reals, first: Reals, last: Reals) -> _Lines:
    low, high = np.searchsorted(s, first), np.searchsorted(s, last)
    many = np.maximum(high - low, 1).astype(float)

    sums = np.zeros((4, s.size + 1), dtype=complex)
    sums[:, 1:] = np.cumsum([s, s**2, z, s * z], axis=1)
    along, square, points, product = sums[:, high] - sums[:, low]
    place, mean = along.real / many, points / many
    spread = np.maximum(square.real - many * place**2, np.finfo(float).tiny)
    slope = (product - many * place * mean) / spread
    return _Lines(mean, place, slope, 1 / np.sqrt(spread))


def _corners(row: _Row) -> Reals:
    """Places of corners along the pitch, in order."""
    z, s = row.between(-1.0, 2.0)
    places = np.linspace(0, 1, _PLACES, endpoint=False)
    stretch = row.stretch
    # Neighbours in the row come from different teeth: how far each lies beside the line of its two is the noise.
    beside = np.diff(z, 2) / np.where(z[2:] == z[:-2], 1, z[2:] - z[:-2]) * np.abs(z[2:] - z[:-2])
    noise = 1.4826 * float(np.median(np.abs(beside.imag))) / np.sqrt(6)

    def turns(width: float) -> tuple[Reals, Reals]:
        before, after = _lines(z, s, places - width, places), _lines(z, s, places, places + width)
        lean = np.angle(after.slope * np.conj(before.slope))
        unsure = np.hypot(before.error, after.error) * noise / np.maximum(np.abs(before.slope), np.abs(after.slope))
        return np.degrees(lean), np.degrees(unsure)

    (turn, _), (half, unsure) = turns(stretch), turns(stretch / 2)
    sharp = (np.abs(half) > _SHARP * np.abs(turn)) & (np.abs(half) > _NOISE * unsure)
    found: list[float] = []
    for k in np.argsort(-np.abs(turn)):
        if abs(turn[k]) < _TURN_DEG:
            break
        clear = all(abs((places[k] - f + 0.5) % 1 - 0.5) > 1.5 * stretch for f in found)
        if clear and sharp[k]:
            found.append(float(places[k]))
    at = np.sort(np.array(found))
    if at.size == 0:
        return at
    before, after = _lines(z, s, at - stretch, at), _lines(z, s, at, at + stretch)
    across = np.imag(np.conj(after.slope) * before.slope)
    moved = before.place + np.imag(np.conj(after.slope) * (after.mean - before.mean)) / across
    return np.sort(np.where(np.abs(moved - at) < stretch / 2, moved, at))


class _Stretch(NamedTuple):
    """The points between two corners.

    Args:
        first: place of the corner before.
        last: place of the corner behind.
        points: the points clear of both, in order.
        along: their places.
        radius: that of the circle about the axis they lie on [mm], or None.
        width: share of the pitch near its ends that shows the way on.
    """

    first: float
    last: float
    points: Points
    along: Reals
    radius: float | None
    width: float

    @classmethod
    def of(cls, row: _Row, first: float, last: float) -> "_Stretch":
        """The stretch between two corners.

        Raises:
            DesignError: fewer than 3 points lie on it.
        """
        z, s = row.clear_of(first, last)
        if z.size < _FEWEST:
            raise DesignError(
                f"{z.size} points lie on a stretch of {last - first:.3g} of a pitch between two corners; {_FEWEST} or "
                "more are needed: measure more densely"
            )
        radius = float(np.abs(z).mean())
        off = np.sqrt(np.mean((np.abs(z) - radius) ** 2))
        round_ = off <= _AS_WELL * _roughness(z, (s - s[0]) / (s[-1] - s[0]), row.rows) + _ROUND * radius
        return cls(first, last, z, s, radius if round_ else None, row.stretch)

    def way_out(self, at_end: bool) -> Curve:
        """The curve by which it leads to a corner: the circle, or a parabola through the points next to it."""
        if self.radius is not None:
            middle = float(np.angle(self.points[-1 if at_end else 0]))
            turn = float(np.angle(self.points[-1] / self.points[0]))
            return Arc(0, self.radius, middle - turn if at_end else middle, middle if at_end else middle + turn)
        width = min(self.width, self.last - self.first)
        low = self.last - width if at_end else self.first
        near = np.flatnonzero((self.along >= low) & (self.along <= low + width))
        if near.size < _FEWEST:
            near = np.argsort(np.abs(self.along - (self.last if at_end else self.first)))[:_FEWEST]
        basis = BSpline.design_matrix((self.along[near] - low) / width, _PARABOLA, 2, extrapolate=True).toarray()
        poles = np.linalg.lstsq(basis, self.points[near], rcond=None)[0]
        return Spline(2, tuple(_PARABOLA.tolist()), tuple(poles.tolist()))


def _roughness(z: Points, shares: Reals, rows: int) -> float:
    """Root mean square distance of points from the spline through them [mm]; none for a few points."""
    if z.size < LEAST_POINTS:
        return 0.0
    return float(np.sqrt(np.mean(smoothed(z, shares, rows).offsets ** 2)))


def _meeting(a: _Stretch, b: _Stretch, factor: complex) -> complex | None:
    """Where a stretch meets the next, turned by `factor`; None where they miss each other."""
    if a.radius is not None and b.radius is not None:
        return None
    out, into = a.way_out(True), b.way_out(False)
    ta, tb = 1.0, 0.0
    for _ in range(_STEPS):
        at, on = np.asarray(ta), np.asarray(tb)
        za, zb = complex(out.point(at)), complex(into.point(on)) * factor
        along_a, along_b = complex(out.derivative(at)), complex(into.derivative(on)) * factor
        miss, sine = za - zb, (along_a.conjugate() * along_b).imag
        if abs(miss) <= _MET * abs(za):
            return za
        if abs(sine) <= _PARALLEL * abs(along_a) * abs(along_b) or max(abs(ta - 1), abs(tb)) > _BEYOND:
            return None
        ta -= (miss.conjugate() * along_b).imag / sine
        tb -= (miss.conjugate() * along_a).imag / sine
    return None


def _pieces(row: _Row, stretches: list[_Stretch], meets: Points) -> tuple[Piece, ...]:
    """The stretches brought to meet."""
    starts = np.append(meets[-1] / row.step, meets[:-1])
    radii = np.abs(row.points)
    pieces = []
    for part, start, end in zip(stretches, starts, meets, strict=True):
        curve: Curve
        if part.radius is not None:
            angle = float(np.angle(start))
            curve = Arc(0, part.radius, angle, angle + float(np.angle(end / start)))
        elif part.points.size < LEAST_POINTS:
            curve = Segment(complex(start), complex(end))
        else:
            shares = (part.along - part.first) / (part.last - part.first)
            curve = smoothed(part.points, shares, row.rows, complex(start), complex(end)).spline
        pieces.append(Piece(curve, _role(curve, radii.min(), radii.max(), row.step)))
    return tuple(pieces)


def _role(curve: Curve, low: float, high: float, step: complex) -> Role:
    radii = np.abs(curve.point(curve.sample(33)))
    upper = (radii.mean() - (low + high) / 2) * step.imag > 0
    if np.ptp(radii) > _FLANK * (high - low):
        return "flank"
    if isinstance(curve, Arc):
        return "tip" if upper else "root"
    return "tip" if upper else "fillet"
