"""The edge a carried boundary leaves standing when it rolls: strands cut where they cross, walked round one pitch.

The walk sets out from the deepest place the carried body reaches, which is certainly an edge, keeps the standing
material on its left, and turns off wherever another strand comes in from that side. What it never meets is cut away.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import NamedTuple

import numpy as np
from scipy.optimize import brentq, minimize_scalar

from gearsolid.curves.crossing import chord_crossings
from gearsolid.curves.curve import Curve, Points, Reals, Section, Turned
from gearsolid.curves.outline import Piece
from gearsolid.curves.primitives import Arc
from gearsolid.curves.rolling import Rolling
from gearsolid.curves.strand import Strand, strands
from gearsolid.errors import DesignError, ToleranceError

_SHARES = (1 - np.cos(np.linspace(0, np.pi, 41))) / 2
# Ends closer than this share of the size are one place; nearer to it than this share of their own size lines join there
# rather than cross.
_JOIN = 1e-7
_AT_JOINT = 1e-3
# Steps of the search for a crossing; how close counts as met, as a share of the size; the finest differences, as a
# share of a line's range; and the least angle [rad] between lines that cross.
_STEPS = 14
_MET = 1e-13
_FINEST = 1e-6
_OFFSETS = np.array([-1.0, 0.0, 1.0])
_LEAST_ANGLE = 1e-6
# A place this share of a line's parameter range ahead is the place itself.
_HERE = 1e-9
# Radii that differ less than this share along a stretch make it a true arc about the axis.
_ROUND = 1e-10
_MOST_STRETCHES = 400


class Stretch(NamedTuple):
    """A part of the edge, in travel order with the standing material on the left.

    Args:
        curve: the curve it runs on, before `turn`.
        first: first parameter.
        last: last parameter.
        turn: pitches by which the curve is turned about the axis.
        strand: where it comes from; None for the tip circle.
    """

    curve: Curve
    first: float
    last: float
    turn: int
    strand: Strand | None

    def placed(self, pitch: float) -> Curve:
        """The stretch where it stands; a true arc where it is one about the axis."""
        factor = complex(np.exp(1j * pitch * self.turn))
        t = self.first + (self.last - self.first) * np.linspace(0, 1, 9)
        z = self.curve.point(t) * factor
        radius = np.abs(z)
        if np.ptp(radius) <= _ROUND * radius[0]:
            start = float(np.angle(z[0]))
            return Arc(0, float(radius.mean()), start, start + float(np.sum(np.angle(z[1:] / z[:-1]))))
        return Turned(Section(self.curve, self.first, self.last), factor)


class _Line(NamedTuple):
    """A strand's part within the tip circle, sampled, with its box in radius and polar angle."""

    strand: Strand
    t: Reals
    z: Points
    radii: tuple[float, float]
    angles: tuple[float, float]

    @property
    def last(self) -> float:
        return float(self.t[-1])

    @property
    def here(self) -> float:
        """Parameters closer than this are one."""
        return _HERE * float(self.t[-1] - self.t[0])

    def direction(self, at_end: bool) -> complex:
        """Direction of travel at one end."""
        a, b = (self.z[-2], self.z[-1]) if at_end else (self.z[0], self.z[1])
        return complex(b - a)


class _Turnoff(NamedTuple):
    """Where the edge leaves a line: parameter there, the line it takes, the parameter on that one, pitches between."""

    at: float
    line: int
    onto: float
    turn: int


@dataclass(frozen=True)
class Sweep:
    """A carried boundary and the body it leaves standing.

    Args:
        pieces: one pitch of the carried boundary in the carried frame, in travel order, material on the left.
        wrap: turn of the direction from one carried pitch to the next, as a unit complex number.
        motion: the rolling that carries it round the body.
        window: rolls looked at lie from -window to window ([rad] for circles, [mm] for lines).
        order: pitches of the body.
        hand: +1 where the body lies inside its boundary, -1 where it is a ring around the carried one.
        tip: radius of the body's tip circle [mm]; the sweep alone bounds the body where it does not reach that far.
    """

    pieces: Sequence[Piece]
    wrap: complex
    motion: Rolling
    window: float
    order: int
    hand: int
    tip: float

    @property
    def pitch(self) -> float:
        """Angle of a pitch of the body [rad]."""
        return 2 * math.pi / self.order

    def within(self, z: Points) -> np.ndarray:
        """Whether points of the fixed frame lie on the body's side of its tip circle."""
        return self.hand * (self.tip - np.abs(z)) >= 0

    @cached_property
    def _lines(self) -> list[_Line]:
        found = strands(self.pieces, self.wrap, self.motion, self.window, self.within)
        return [line for s in found for line in self._parts(s)]

    def _parts(self, strand: Strand) -> list[_Line]:
        """The parts of a strand within the tip circle, each reaching just over it."""
        curve, t = strand.curve, strand.curve.span[0] + np.ptp(strand.curve.span) * _SHARES
        starts, stops = np.array([0]), np.array([t.size - 1])
        if strand.is_corner:
            kept = np.concatenate([[False], self.within(curve.point(t)), [False]])
            starts = np.maximum(np.flatnonzero(kept[1:] & ~kept[:-1]) - 1, 0)
            stops = np.minimum(np.flatnonzero(kept[:-1] & ~kept[1:]), t.size - 1)
        lines = []
        for low, high in zip(starts, stops, strict=True):
            if high > low:
                u = t[low] + (t[high] - t[low]) * _SHARES
                z = curve.point(u)
                angles, radii = np.unwrap(np.angle(z)), np.abs(z)
                box = (float(radii.min()), float(radii.max())), (float(angles.min()), float(angles.max()))
                lines.append(_Line(strand, u, z, *box))
        return lines

    @cached_property
    def _size(self) -> float:
        return float(max(np.abs(line.z).max() for line in self._lines))

    @cached_property
    def _approaches(self) -> dict[int, list["_Approach"]]:
        """Known approaches of other lines to a line, in its travel order."""
        return {}

    def _approaching(self, i: int) -> list["_Approach"]:
        if i not in self._approaches:
            pairs = [(j, turn) for j in range(len(self._lines)) for turn in self._overlapping(i, j)]
            self._approaches[i] = sorted(a for j, turn in pairs for a in self._chords(i, j, turn))
        return self._approaches[i]

    def _overlapping(self, i: int, j: int) -> range:
        """Turns in pitches that bring line j over line i."""
        a, b = self._lines[i], self._lines[j]
        if a.radii[1] < b.radii[0] or b.radii[1] < a.radii[0]:
            return range(0)
        first = math.ceil((a.angles[0] - b.angles[1]) / self.pitch - _JOIN)
        last = math.floor((a.angles[1] - b.angles[0]) / self.pitch + _JOIN)
        return range(first, last + 1)

    def _chords(self, i: int, j: int, turn: int) -> list["_Approach"]:
        """Where chords of line i cross chords of line j turned."""
        a, b, factor = self._lines[i], self._lines[j], complex(np.exp(1j * self.pitch * turn))
        guesses, chords = chord_crossings(a.t, a.z, b.t, b.z * factor)
        away = ~self._at_joint(a, b, factor, np.interp(guesses[:, 0], a.t, a.z))
        if i == j and turn == 0:
            away &= np.abs(chords[:, 1] - chords[:, 0]) > 1
        return [
            _Approach(float(at), j, turn, float(onto), float(a.t[k + 1] - a.t[k]), float(b.t[m + 1] - b.t[m]))
            for (at, onto), (k, m) in zip(guesses[away], chords[away], strict=True)
        ]

    def _turnoff(self, line: int, after: float) -> _Turnoff | None:
        """The first place on a line where another comes in from its left."""
        on, best = self._lines[line], None
        for way in self._approaching(line):
            if best and way.at > best.at + way.chord:
                break
            if way.at < after - way.chord:
                continue
            met = _met(on, self._lines[way.line], complex(np.exp(1j * self.pitch * way.turn)), way, self._size)
            if met and met.sine < 0 and met.at > after and (best is None or met.at < best.at):
                best = _Turnoff(met.at, way.line, met.onto, way.turn)
        return best

    def _at_joint(self, a: _Line, b: _Line, factor: complex, z: Points) -> np.ndarray:
        """Whether points lie where ends of both lines meet: there lines join, and cross only by rounding."""
        ends_a, ends_b = a.z[[0, -1]], b.z[[0, -1]] * factor
        i, _ = np.nonzero(np.abs(ends_a[:, None] - ends_b) <= _JOIN * self._size)
        close = _AT_JOINT * min(np.ptp(a.z.real) + np.ptp(a.z.imag), np.ptp(b.z.real) + np.ptp(b.z.imag))
        near: np.ndarray = np.any(np.abs(z[:, None] - ends_a[i]) <= close, axis=1)
        return near

    def _gates(self, line: int, way: int) -> list[tuple[float, int]]:
        """Where a line passes the tip circle inwards (+1) or outwards (-1): parameter, about, and chord."""
        on = self._lines[line]
        over = np.abs(on.z) - self.tip
        chords = np.flatnonzero(np.diff(self.within(on.z).astype(int)) == way)
        at = on.t[chords] + (on.t[chords + 1] - on.t[chords]) * over[chords] / (over[chords] - over[chords + 1])
        return [(float(t), int(k)) for t, k in zip(at, chords, strict=True)]

    def _passage(self, line: int, at: float, chord: int) -> float:
        """The exact parameter at which a line passes the tip circle on a chord."""
        on = self._lines[line]
        curve, low, high = on.strand.curve, float(on.t[chord]), float(on.t[chord + 1])
        step = (high - low) / 4
        for _ in range(_STEPS):
            u = np.clip(at + step * _OFFSETS, low, high)
            radii = np.abs(curve.point(u))
            miss = float(radii[1]) - self.tip
            if abs(miss) <= _MET * self._size:
                return at
            move = -miss * float(u[2] - u[0]) / float(radii[2] - radii[0])
            at = min(max(at + move, low), high)
            step = min(step, max(abs(move), _FINEST * (high - low)))
        return float(brentq(lambda t: abs(complex(curve.point(np.asarray(t)))) - self.tip, low, high, xtol=1e-15))

    def _deepest(self) -> tuple[int, float]:
        """Line and parameter where the carried body reaches deepest."""
        ends = [self.hand * np.abs(line.z) for line in self._lines]
        i = int(np.argmin([e.min() for e in ends]))
        line, depth = self._lines[i], ends[i]
        if np.ptp(depth) <= _ROUND * self._size:
            return i, float((line.t[0] + line.last) / 2)
        k = int(np.argmin(depth))
        if k in (0, depth.size - 1):
            return i, float(line.t[k])
        curve, bounds = line.strand.curve, (line.t[k - 1], line.t[k + 1])
        lowest = minimize_scalar(
            lambda t: self.hand * abs(curve.point(np.asarray(t))), bounds=bounds, options={"xatol": 1e-12}
        )
        return i, float(lowest.x)

    def edge(self) -> list[Stretch]:
        """One pitch of the edge, from the deepest place to the same one pitch on.

        Raises:
            DesignError: nothing touches, or the teeth that would stand between two pitches are cut off.
            ToleranceError: an edge could not be followed.
        """
        if not self._lines:
            raise DesignError("nothing of the given outline touches a mate: take a pitch radius that it crosses")
        begin, here = home = self._deepest()
        line, turn, path = begin, 0, list[Stretch]()
        while len(path) < _MOST_STRETCHES:
            on = self._lines[line]
            leave = self._next(line, here)
            back = line == begin and len(path) > 0 and home[1] > here - on.here and home[1] <= leave.at
            path.append(Stretch(on.strand.curve, here, home[1] if back else leave.at, turn, on.strand))
            if back:
                return self._checked(path, turn)
            if leave.line < 0:
                tip, leave = self._along_tip(path[-1])
                path.append(tip)
            line, here, turn = leave.line, leave.onto, turn + leave.turn
        raise ToleranceError(f"the edge of the sweep does not close after {_MOST_STRETCHES} stretches")

    def _next(self, line: int, here: float) -> _Turnoff:
        """Where the edge goes on from a place on a line; line -1 stands for the tip circle."""
        after = here + self._lines[line].here
        off = self._turnoff(line, after)
        exits = [gate for gate in self._gates(line, -1) if gate[0] > after and (off is None or gate[0] < off.at)]
        if exits:
            passed = self._passage(line, *min(exits))
            if passed > after and (off is None or passed < off.at):
                return _Turnoff(passed, -1, 0.0, 0)
        return off or self._joint(line)

    def _joint(self, line: int) -> _Turnoff:
        """The line that goes on where one ends; of several, the one with the rest of them on its right."""
        on = self._lines[line]
        ways = []
        for j, other in enumerate(self._lines):
            turn = round(float(np.angle(on.z[-1] / other.z[0])) / self.pitch)
            factor = complex(np.exp(1j * self.pitch * turn))
            if abs(other.z[0] * factor - on.z[-1]) <= _JOIN * self._size:
                lean = float(np.angle(other.direction(False) * factor / on.direction(True)))
                ways.append((-lean, j, turn))
        ways = [w for w in ways if abs(w[0]) < math.pi / 2] or ways
        if not ways:
            raise ToleranceError(
                f"the edge of the sweep is lost at radius {abs(on.z[-1]):.6g} mm, where piece {on.strand.piece} of the "
                "given outline stops touching and nothing crosses: check the outline there for hidden corners"
            )
        _, j, turn = min(ways)
        return _Turnoff(on.last, j, float(self._lines[j].t[0]), turn)

    def _along_tip(self, before: Stretch) -> tuple[Stretch, _Turnoff]:
        """The tip arc from where a stretch ends to the next line that comes in."""
        start = float(np.angle(before.curve.point(np.asarray(before.last))))

        def ahead(line: int, t: float) -> tuple[float, int]:
            angle = float(np.angle(self._lines[line].strand.curve.point(np.asarray(t))))
            share = (self.hand * (angle - start)) % self.pitch
            return share, round((start + self.hand * share - angle) / self.pitch)

        ways = sorted((ahead(j, t)[0], j, t, k) for j in range(len(self._lines)) for t, k in self._gates(j, 1))
        if not ways:
            raise ToleranceError(f"nothing comes in again from the tip circle of {self.tip:.6g} mm radius")
        # Two that come in close together are told apart by their exact places.
        exact = [(j, self._passage(j, t, k)) for _, j, t, k in ways[:2]]
        (share, turn), j, t = min((ahead(j, t), j, t) for j, t in exact)
        arc = Arc(0, self.tip, start, start + self.hand * share)
        return Stretch(arc, 0.0, 1.0, before.turn, None), _Turnoff(0.0, j, t, turn)

    def _checked(self, path: list[Stretch], turn: int) -> list[Stretch]:
        heights = [self.hand * np.abs(s.curve.point(np.linspace(s.first, s.last, 17))) for s in path]
        top = abs(max(float(h.max()) for h in heights))
        if (turn - self.hand) % self.order:
            raise DesignError(
                f"the sweep cuts the teeth off at radius {top:.5g} mm: take fewer teeth on the given outline, a lower "
                "tip on it, or more teeth on the mate"
            )
        return path


class _Approach(NamedTuple):
    """Where chords of two lines cross: parameter, about, other line, its turn and parameter, lengths of the chords."""

    at: float
    line: int
    turn: int
    onto: float
    chord: float
    other_chord: float


class _Crossing(NamedTuple):
    """A crossing of two lines: both parameters, and the sine of the angle from the second to the first."""

    at: float
    onto: float
    sine: float


def _met(a: _Line, b: _Line, factor: complex, way: _Approach, size: float) -> _Crossing | None:
    """A crossing from its chords by Newton's method on differences that shrink with the steps; None where they miss."""
    ta, tb = way.at, way.onto
    ha, hb = way.chord / 4, way.other_chord / 4
    for _ in range(_STEPS):
        ta, tb = min(max(ta, float(a.t[0])), a.last), min(max(tb, float(b.t[0])), b.last)
        ua, ub = np.clip(ta + ha * _OFFSETS, a.t[0], a.last), np.clip(tb + hb * _OFFSETS, b.t[0], b.last)
        za, zb = a.strand.curve.point(ua), b.strand.curve.point(ub) * factor
        along_a, along_b = (za[2] - za[0]) / (ua[2] - ua[0]), (zb[2] - zb[0]) / (ub[2] - ub[0])
        miss = za[1] - zb[1]
        sine = float(np.imag(np.conj(along_b) * along_a))
        scale = abs(along_a) * abs(along_b)
        if not abs(sine) > _LEAST_ANGLE * scale:
            return None
        if abs(miss) <= _MET * size:
            return _Crossing(ta, tb, sine / scale)
        step_a = float(np.imag(np.conj(miss) * along_b)) / sine
        step_b = float(np.imag(np.conj(miss) * along_a)) / sine
        ta, tb = ta + step_a, tb + step_b
        ha = min(ha, max(abs(step_a), _FINEST * (a.last - float(a.t[0]))))
        hb = min(hb, max(abs(step_b), _FINEST * (b.last - float(b.t[0]))))
    return None
