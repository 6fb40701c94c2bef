"""Strands: the smooth stretches of the envelope of a carried boundary that can be an edge of what it leaves standing.

A point of an envelope is such an edge when the carried material presses on it from outside: seen from the carried body,
the point comes up to the boundary, touches and goes away again. Where it would pass through instead the envelope turns
back on itself (a cusp), and that part of the boundary has no mate.
"""

from collections.abc import Callable, Sequence
from itertools import pairwise
from typing import NamedTuple

import numpy as np
from scipy.optimize import minimize_scalar

from gearsolid.curves.curve import Curve, Points, Reals, Reversed, Section
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.outline import Piece, smooth_spans
from gearsolid.curves.rolling import Rolling
from gearsolid.curves.roulette import Trace
from gearsolid.curves.verge import Verge

_SAMPLES = 49
_SHARES = (1 - np.cos(np.linspace(0, np.pi, _SAMPLES))) / 2
# Places looked at together when the end of a strand is narrowed down, and how often for an end that must be exact.
_GRID = np.linspace(0, 1, 17)
_COARSE, _EXACT = 2, 13
# A normal this close to its furthest reach touches the pitch circle: both contacts are one, in a corner of the roll.
_GRAZES = 1e-9
# A turn of the direction smaller than this [rad] is no corner.
_STRAIGHT = 1e-12
# Places that show which way a run goes, as shares of it.
_MIDDLE = np.array([0.49, 0.51])
# A place this share of a stretch from its end stands for the end.
_NEARLY = 1e-6
# Spacing of the differences for curvatures, as a share of the span.
_DIFFERENCE = 1e-4


class Strand(NamedTuple):
    """One smooth stretch of a possible edge.

    Args:
        curve: travelled with the standing material on the left.
        piece: index of the carried piece; for a corner, of the piece that ends there.
        contact: the carried curve's contact, with its own parameter.
    """

    curve: Curve
    piece: int
    contact: Envelope | Verge | Trace

    @property
    def is_corner(self) -> bool:
        """Whether a corner of the carried boundary draws this edge."""
        return isinstance(self.contact, Trace)

    def carried_parameter(self, t: float) -> float:
        """Parameter on the carried piece of a parameter of `curve`."""
        u = -t if isinstance(self.curve, Reversed) else t
        return float(self.contact.parameter(np.asarray(u))) if isinstance(self.contact, Verge) else u


def presses(motion: Rolling, p: Points, tangent: Points, curvature: Reals, roll: Reals) -> Reals:
    """Whether a contact is an edge: second derivative by the roll of the distance from a swept point to the boundary.

    Args:
        motion: the rolling.
        p: carried points in contact [mm], material on the left of travel, any shape.
        tangent: unit tangents there.
        curvature: curvatures there [1/mm].
        roll: rolls at contact.

    Returns:
        Positive where the boundary touches from outside and goes away again, negative where it cuts through.
    """
    with np.errstate(invalid="ignore"):
        turn, drift = motion.turn(roll), motion.velocity(p, roll)
        spin = motion.velocity(p + 1, roll) - drift
        slide = np.real(drift * np.conj(turn * tangent))
        # Acceleration of the resting point as the carried body sees it.
        away = (2 * spin / turn * drift - motion.acceleration(p, roll)) / turn
        return curvature * slide**2 + np.real(away * np.conj(-1j * tangent))


class _Samples(NamedTuple):
    """A smooth span of the carried boundary at parameters that crowd towards its ends."""

    curve: Curve
    t: Reals
    p: Points
    tangent: Points
    curvature: Reals

    @classmethod
    def of(cls, curve: Curve, first: float, last: float) -> "_Samples":
        t = first + (last - first) * _SHARES
        return cls(Section(curve, first, last), t, *_bent(curve, t, (first, last)))


def _bent(curve: Curve, t: Reals, span: tuple[float, float]) -> tuple[Points, Points, Reals]:
    """Points, directions and curvatures, these by differences: near enough to tell a pressing contact."""
    step = _DIFFERENCE * (span[1] - span[0])
    beside = np.stack([t, np.maximum(t - step, span[0]), np.minimum(t + step, span[1])])
    p, tangent = curve.point(beside), curve.tangent(beside)
    curvature = np.angle(tangent[2] * np.conj(tangent[1])) / np.maximum(np.abs(p[2] - p[1]), np.finfo(float).tiny)
    return p[0], tangent[0], curvature


def strands(
    pieces: Sequence[Piece], wrap: complex, motion: Rolling, window: float, keep: Callable[[Points], np.ndarray]
) -> list[Strand]:
    """All strands of one pitch of a carried boundary.

    Args:
        pieces: the pitch in travel order, material on the left, in the carried frame.
        wrap: turn of the direction from one pitch to the next, as a unit complex number.
        motion: the rolling.
        window: rolls looked at lie from -window to window ([rad] for circles, [mm] for lines).
        keep: tells which points [mm] of the fixed frame matter; strands reach just over the edge of that.
    """
    spans = [
        (k, s) for k, p in enumerate(pieces) for a, b in smooth_spans(p.curve) for s in _sampled(p.curve, a, b, motion)
    ]
    found: list[Strand] = []
    for n, (k, span) in enumerate(spans):
        found += _touching(k, span, motion, keep)
        turn = wrap if n + 1 == len(spans) else 1.0
        ahead = complex(spans[(n + 1) % len(spans)][1].tangent[0]) * turn
        found += _corner(k, complex(span.p[-1]), complex(span.tangent[-1]), ahead, motion, window)
    return found


def _sampled(curve: Curve, first: float, last: float, motion: Rolling) -> list[_Samples]:
    """A smooth span, cut where its normal grazes the pitch circle: there the two contacts change places."""
    whole = _Samples.of(curve, first, last)
    share = _reach(motion, whole.p, whole.tangent)
    if np.all(share == 1):
        return [whole]
    high = share[1:-1] > 1 - 1 / _SAMPLES
    peaks = np.flatnonzero(high & (share[1:-1] >= share[:-2]) & (share[1:-1] > share[2:])) + 1
    cuts = [first]
    for k in peaks:

        def fall(u: float) -> float:
            at = np.asarray(u)
            return -float(_reach(motion, curve.point(at), curve.tangent(at)))

        top = minimize_scalar(fall, bounds=(whole.t[k - 1], whole.t[k + 1]), options={"xatol": 1e-13})
        if -top.fun > 1 - _GRAZES:
            cuts.append(float(top.x))
    if len(cuts) == 1:
        return [whole]
    return [_Samples.of(curve, a, b) for a, b in pairwise([*cuts, last])]


def _reach(motion: Rolling, p: Points, tangent: Points) -> Reals:
    """How near a normal comes to missing the pitch circle: 1 where it grazes it, nan where it misses; 1 for a line."""
    ahead, back = motion.meet(p, tangent, 1), motion.meet(p, tangent, -1)
    return np.abs(np.cos((ahead - back) / 2))


class _Run(NamedTuple):
    """A stretch of carried parameters that presses.

    Args:
        first: first parameter.
        last: last parameter.
        opens: power of the verge at the first, 0 where it is none.
        closes: power of the verge at the last, 0 where it is none.
        along: whether the envelope runs in the direction of the carried curve.
    """

    first: float
    last: float
    opens: int
    closes: int
    along: bool

    def parts(self) -> "list[_Run]":
        """The run cut in the middle if it has a verge at both ends."""
        if not (self.opens and self.closes):
            return [self]
        middle = (self.first + self.last) / 2
        return [self._replace(last=middle, closes=0), self._replace(first=middle, opens=0)]

    def strand(self, piece: int, curve: Curve, motion: Rolling, branch: int) -> Strand:
        """The run as an edge, against the travel of the carried boundary."""
        power, length = self.opens or self.closes, self.last - self.first
        if not power:
            plain = Envelope(Section(curve, self.first, self.last), motion, branch)
            return Strand(Reversed(plain) if self.along else plain, piece, plain)
        limit, side = (self.first, 1) if self.opens else (self.last, -1)
        verge = Verge(curve, motion, branch, limit, side, power, float(length ** (1 / power)))
        return Strand(Reversed(verge) if self.along == (side > 0) else verge, piece, verge)


class _Contacts(NamedTuple):
    """One of the contacts of a smooth span with its envelope.

    Args:
        span: the carried span.
        motion: the rolling.
        branch: +1 or -1.
        roll: rolls at contact, nan where there is none.
        of_two: whether there are two contacts, as with every circle; their rolls may leap by a whole turn.
    """

    span: _Samples
    motion: Rolling
    branch: int
    roll: Reals
    of_two: bool

    def runs(self, keep: Callable[[Points], np.ndarray]) -> list[_Run]:
        """Runs of samples that press, their ends narrowed to where touching or pressing stops."""
        span, roll, finite = self.span, self.roll, np.isfinite(self.roll)
        good = finite & (presses(self.motion, span.p, span.tangent, span.curvature, roll) > 0)
        # At the very ends curvature and roll may be at their limits: their neighbours speak for them.
        good[0], good[-1] = good[1] & finite[0], good[-2] & finite[-1]
        leaps = np.abs(np.diff(roll, prepend=roll[0])) > (np.pi if self.of_two else np.inf)
        with np.errstate(invalid="ignore"):
            kept = keep(self.motion.place(span.p, roll))
        found: list[_Run] = []
        for start in [k for k in range(roll.size) if good[k] and (k == 0 or not good[k - 1] or leaps[k])]:
            end = start
            while end + 1 < roll.size and good[end + 1] and not leaps[end + 1]:
                end += 1
            inside = np.flatnonzero(kept[start : end + 1]) + start
            if inside.size:
                low, high = max(int(inside[0]) - 1, start), min(int(inside[-1]) + 1, end)
                first, opens = self._end(low, -1 if low == start else 0)
                last, closes = self._end(high, 1 if high == end else 0)
                found += self._run(first, last, opens, closes).parts()
                continue
            # Even if no sample matters, what lies beyond the outermost ones may.
            for k, way in ((start, -1), (end, 1)):
                here, (t, power) = float(self.span.t[k]), self._end(k, way)
                # At a verge itself rounding decides whether there is a contact.
                if t != here and bool(keep(self._place(t + _NEARLY * (here - t)))):
                    found.append(self._run(t, here, power, 0) if way < 0 else self._run(here, t, 0, power))
        return found + self._hidden(finite, good, keep)

    def _hidden(self, finite: np.ndarray, good: np.ndarray, keep: Callable[[Points], np.ndarray]) -> list[_Run]:
        """Runs so short that no sample shows them, between a verge and the place where pressing stops."""
        t, found = self.span.t, []
        for k in np.flatnonzero(finite[1:] != finite[:-1]):
            touching, beyond = (k, k + 1) if finite[k] else (k + 1, k)
            if good[touching]:
                continue
            verge, here = _edge(lambda u: np.isfinite(self._roll(u)), t[touching], t[beyond], _EXACT), t[touching]
            beside = verge + _NEARLY * (here - verge)
            if self._presses(np.array([beside]))[0] and bool(keep(self._place(beside))):
                end = _edge(self._presses, beside, here, _COARSE)
                found.append(self._run(end, verge, 0, 2) if finite[k] else self._run(verge, end, 2, 0))
        return found

    def _run(self, first: float, last: float, opens: int, closes: int) -> _Run:
        """The run between two parameters; which way it goes shows in its middle."""
        t = first + (last - first) * _MIDDLE
        p, tangent = self.span.curve.point(t), self.span.curve.tangent(t)
        roll = self.motion.meet(p, tangent, self.branch)
        z, side = self.motion.place(p, roll), self.motion.turn(roll) * tangent
        return _Run(first, last, opens, closes, bool(np.real((z[1] - z[0]) * np.conj(side[0] + side[1])) > 0))

    def _end(self, k: int, way: int) -> tuple[float, int]:
        """Where a run ends that goes on from sample k in direction `way` (0: no further), and its verge."""
        t, roll = self.span.t, self.roll
        if way == 0:
            return float(t[k]), 0
        beyond = k + way
        if not 0 <= beyond < t.size:
            return float(t[k]), self._power(k, -way) if self.of_two else 0
        if not np.isfinite(roll[beyond]):
            return _edge(lambda u: np.isfinite(self._roll(u)), t[k], t[beyond], _EXACT), 2
        if self.of_two and abs(roll[beyond] - roll[k]) > np.pi:
            return _edge(lambda u: np.abs(self._roll(u) - roll[k]) < np.pi, t[k], t[beyond], _EXACT), 0
        return _edge(self._presses, t[k], t[beyond], _COARSE), 0

    def _power(self, k: int, inwards: int) -> int:
        """Power of the verge at the end of the span, 0 where the normal is not at its furthest reach there."""
        near = np.array([k, k + inwards, k + 2 * inwards])
        reach = _reach(self.motion, self.span.p[near], self.span.tangent[near])
        if not reach[0] > 1 - _GRAZES:
            return 0
        lean, way = np.arccos(reach[1:]), np.abs(np.diff(self.span.t[near]).cumsum())
        return max(1, round(float(np.log(way[1] / way[0]) / np.log(lean[1] / lean[0]))))

    def _roll(self, t: Reals) -> Reals:
        return self.motion.meet(self.span.curve.point(t), self.span.curve.tangent(t), self.branch)

    def _place(self, t: float) -> Points:
        at = np.asarray(t)
        return self.motion.place(self.span.curve.point(at), self._roll(at))

    def _presses(self, t: Reals) -> np.ndarray:
        p, tangent, curvature = _bent(self.span.curve, t, self.span.curve.span)
        return presses(self.motion, p, tangent, curvature, self.motion.meet(p, tangent, self.branch)) > 0


def _touching(piece: int, span: _Samples, motion: Rolling, keep: Callable[[Points], np.ndarray]) -> list[Strand]:
    """Strands of one smooth span of the carried boundary."""
    ahead, back = (motion.meet(span.p, span.tangent, b) for b in (1, -1))
    of_two = not np.array_equal(ahead, back, equal_nan=True)
    contacts = [_Contacts(span, motion, 1, ahead, of_two)]
    if of_two:
        contacts.append(_Contacts(span, motion, -1, back, of_two))
    return [run.strand(piece, span.curve, motion, c.branch) for c in contacts for run in c.runs(keep)]


def _edge(good: Callable[[Reals], np.ndarray], inside: float, outside: float, rounds: int) -> float:
    """The last place where `good` holds on the way from `inside`, where it does, to `outside`, where it does not."""
    for _ in range(rounds):
        u = inside + (outside - inside) * _GRID
        k = int(np.argmin(np.append(good(u[1:]), False)))
        inside, outside = float(u[k]), float(u[min(k + 1, _GRID.size - 1)])
    return inside


def _corner(piece: int, p: complex, behind: complex, ahead: complex, motion: Rolling, window: float) -> list[Strand]:
    """Traces of the corner between two spans, while the common normal lies between those of its two sides."""
    opening = float(np.angle(ahead / behind))
    if opening <= _STRAIGHT:
        return []
    sides = np.array([behind, ahead])
    met = np.concatenate([motion.meet(np.full(2, p), sides, b) for b in (1, -1)])
    rests = motion.rests(p, -window, window)
    ends = np.unique([-window, window, *met[np.abs(met) < window], *rests])
    found = []
    for first, last in pairwise(ends):
        middle = np.asarray((first + last) / 2)
        along = motion.velocity(np.asarray(p), middle) / motion.turn(middle)
        lean = np.angle(np.array([along, -along]) / behind)
        between = (lean > 0) & (lean < opening)
        if last - first > _STRAIGHT * window and np.any(between):
            trace = Trace(motion, p, float(first), float(last))
            found.append(Strand(Reversed(trace) if between[0] else trace, piece, trace))
    return found
