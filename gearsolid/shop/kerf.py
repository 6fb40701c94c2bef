"""The path of a cutter's centre beside an outline: half a kerf away from the material, wherever the cutter fits."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray
from scipy.spatial import cKDTree

from gearsolid.curves.crossing import crossings, self_crossings
from gearsolid.curves.curve import Curve, Points, Reals, Section, Turned
from gearsolid.curves.drawn import Drawn
from gearsolid.curves.field import field_of
from gearsolid.curves.outline import Outline, Piece, Role, smooth_spans
from gearsolid.curves.parallel import Parallel
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.errors import DesignError

# Samples of a line, crowded towards its ends, where the loops of narrow corners are.
_SHARES = (1 - np.cos(np.linspace(0, np.pi, 129))) / 2
# A place nearer to the material than the cutter's radius by more than this [mm] would be cut into.
_CUTS = 1e-7
# Points of the outline for each length of the cutter's radius.
_POINTS = 8
# A turn below this [rad] is no corner: the gap it leaves beside it is drawn shut.
_SMOOTH = 1e-4
# A crossing is looked for this many samples round the place where the path turns bad.
_NEAR = 3
# Halvings of the interval in which the largest kerf that fits is sought.
_HALVINGS = 20


@dataclass(frozen=True)
class _Line:
    """A stretch of the parallel of one pitch.

    Args:
        curve: what the cutter's centre would follow.
        role: of the piece it runs beside, or comes from.
        piece: index of that piece.
        round_corner: whether it is the arc round the corner after that piece.
        after_corner: whether the outline turns away from the cutter before it, so that its first place is cut off.
    """

    curve: Curve
    role: Role
    piece: int
    round_corner: bool = False
    after_corner: bool = False


def compensated(outline: Outline, kerf: float) -> Outline:
    """The path of the centre of a cutter that leaves an outline standing: its parallel at half the kerf, outside.

    Round outward corners the path is an arc. In inward corners the cutter leaves a fillet of half the kerf, as any
    round cutter does: there the two sides of the path are cut where they cross.

    Args:
        outline: finished boundary, material on its left.
        kerf: width of the cut [mm].

    Returns:
        The path, travelled like the outline.

    Raises:
        DesignError: the kerf is not above 0, or the cutter does not reach a piece of the outline; the message gives the
            largest kerf that does.
    """
    if not kerf > 0:
        raise DesignError(f"the kerf is {kerf:g} mm; it must be above 0, 0.2 mm is usual for a laser")
    try:
        return _route(outline, kerf / 2)
    except _NoRoomError as missed:
        valley = f"the valley at piece {missed.piece} of the pitch, a {outline.pieces[missed.piece].role}"
        raise DesignError(
            f"a cutter with a kerf of {kerf:g} mm does not fit {valley}; up to {_widest(outline, kerf):.4g} mm fits: "
            "take a thinner beam, wire or mill, or widen the valley"
        ) from None


class _NoRoomError(Exception):
    """A piece of the outline, by its index, that the cutter does not reach."""

    def __init__(self, piece: int) -> None:
        super().__init__(piece)
        self.piece = piece


def _widest(outline: Outline, kerf: float) -> float:
    """The largest kerf [mm] below one that does not fit."""
    fits, too_wide = 0.0, kerf
    for _ in range(_HALVINGS):
        middle = (fits + too_wide) / 2
        try:
            _route(outline, middle / 2)
            fits = middle
        except _NoRoomError:
            too_wide = middle
    return fits


def _route(outline: Outline, distance: float) -> Outline:
    lines = _beside(outline, distance)
    free = _free(outline, lines, distance)
    reached = {line.piece for line, row in zip(lines, free, strict=True) if np.any(row) and not line.round_corner}
    for piece in range(len(outline.pieces)):
        if piece not in reached:
            raise _NoRoomError(piece)
    pitch = outline.step if outline.is_chain else 1.0 + 0j
    return Outline(tuple(_path(lines, free, pitch)), outline.order)


def _beside(outline: Outline, distance: float) -> list[_Line]:
    """Parallels of all smooth stretches of a pitch, with arcs round outward corners."""
    stretches = [
        (Section(p.curve, t0, t1) if (t0, t1) != p.curve.span else p.curve, p.role, k)
        for k, p in enumerate(outline.pieces)
        for t0, t1 in smooth_spans(p.curve)
    ]
    following = [*(c for c, _, _ in stretches[1:]), Turned(stretches[0][0], outline.step if outline.is_chain else 1)]
    lines: list[_Line] = []
    turns_away = []
    for (curve, role, k), ahead in zip(stretches, following, strict=True):
        line = _parallel(curve, distance)
        leaving = complex(curve.tangent(np.asarray(curve.span[1])))
        turn = float(np.angle(complex(ahead.tangent(np.asarray(ahead.span[0]))) / leaving))
        gap = complex(_parallel(ahead, distance).start) - line.end
        closed = abs(gap) <= 1e-12 * abs(line.end)
        lines.append(_Line(Drawn(line, gap) if abs(turn) < _SMOOTH and not closed else line, role, k))
        turns_away.append(turn <= -_SMOOTH)
        if turn >= _SMOOTH:
            start = float(np.angle(-1j * leaving))
            lines.append(_Line(Arc(curve.end, distance, start, start + turn), role, k, round_corner=True))
            turns_away.append(False)
    return [replace(line, after_corner=turns_away[k - 1]) for k, line in enumerate(lines)]


def _parallel(curve: Curve, distance: float) -> Curve:
    """The parallel to the right, a true arc or segment where the curve is one."""
    match curve:
        case Arc(centre, radius, first, last) if radius + np.sign(last - first) * distance > 0:
            return Arc(centre, radius + float(np.sign(last - first)) * distance, first, last)
        case Segment(first, last):
            shift = -1j * distance * (last - first) / abs(last - first)
            return Segment(first + shift, last + shift)
    return Parallel(curve, -distance)


def _free(outline: Outline, lines: Sequence[_Line], distance: float) -> NDArray[np.bool_]:
    """Whether the cutter may stand at the samples of each line without cutting into material: one row a line."""
    z = np.array([line.curve.point(_samples(line)) for line in lines])
    # The field is exact but may follow a branch that is not the nearest; points say when another one is nearer.
    exact = np.abs(field_of(outline).near(z.ravel()).distance)
    rough, _ = cKDTree(_xy(_points(outline, distance))).query(_xy(z.ravel()))
    free = (np.minimum(exact, rough) >= distance - _CUTS).reshape(z.shape)
    after = np.array([line.after_corner for line in lines])
    free[after, 0] = False
    free[np.roll(after, -1), -1] = False
    return free


def _points(outline: Outline, distance: float) -> Points:
    """Points of a pitch and its neighbours, a small share of `distance` [mm] apart."""
    pitch = []
    for curve in (p.curve for p in outline.pieces):
        length = float(np.sum(np.abs(np.diff(curve.point(curve.sample(65))))))
        pitch.append(curve.point(curve.sample(int(np.ceil(_POINTS * length / distance)) + 65)))
    return (np.concatenate(pitch) * (outline.step ** np.arange(-1, 2))[:, None]).ravel()


def _xy(z: Points) -> Reals:
    return np.column_stack([z.real, z.imag])


def _samples(line: _Line) -> Reals:
    first, last = line.curve.span
    return first + (last - first) * _SHARES


def _path(lines: Sequence[_Line], free: NDArray[np.bool_], pitch: complex) -> list[Piece]:
    """One pitch of the path: the free stretches of the lines, cut where they cross."""
    width, flat = free.shape[1], free.ravel()
    begins = np.flatnonzero(flat & ~np.roll(flat, 1)).tolist()
    if not begins:
        return [Piece(line.curve, line.role) for line in lines]
    last = np.flatnonzero(flat & ~np.roll(flat, -1))
    # Each free stretch lasts to the next end, the last one perhaps to an end in the next pitch.
    ends = np.sort(np.where(last < begins[0], last + flat.size, last)).tolist()
    enters = [*begins[1:], begins[0] + flat.size]
    cuts = [_cut(lines, leave, enter, width, pitch) for leave, enter in zip(ends, enters, strict=True)]
    pieces = []
    for k, (begin, end) in enumerate(zip(begins, ends, strict=True)):
        for number in range(begin // width, end // width + 1):
            lap, index = divmod(number, len(lines))
            curve, role = lines[index].curve, lines[index].role
            first = cuts[k - 1][1] if number == begin // width else curve.span[0]
            stop = cuts[k][0] if number == end // width else curve.span[1]
            part = curve if (first, stop) == curve.span else Section(curve, first, stop)
            pieces.append(Piece(Turned(part, pitch) if lap else part, role))
    return pieces


def _cut(lines: Sequence[_Line], leave: int, enter: int, width: int, pitch: complex) -> tuple[float, float]:
    """Parameters at which the path leaves one line and enters another, near the samples of these numbers."""
    (lap_a, a), (lap_b, b) = (divmod(number // width, len(lines)) for number in (leave, enter))
    curve, other = lines[a].curve, lines[b].curve
    if lap_a == lap_b and a == b:
        found = self_crossings(curve)
    else:
        found = crossings(curve, Turned(other, pitch) if lap_b > lap_a else other)
    samples = np.array([leave % width, enter % width])
    off = np.abs(np.stack([_number(curve, found[:, 0]), _number(other, found[:, 1])], axis=-1) - samples)
    near = np.flatnonzero(np.all(off <= _NEAR, axis=1))
    if near.size == 0:
        raise _NoRoomError(lines[b].piece)
    row = found[near[int(np.argmin(np.sum(off[near], axis=1)))]]
    return float(row[0]), float(row[1])


def _number(curve: Curve, t: Reals) -> Reals:
    """Where parameters lie among the samples of a line, as a fractional number of a sample."""
    first, last = curve.span
    number: Reals = np.arccos(np.clip(1 - 2 * (t - first) / (last - first), -1, 1)) / np.pi * (_SHARES.size - 1)
    return number
