"""The mate of any given outline: what its teeth leave standing when its pitch circle rolls on another."""

import math
from collections.abc import Sequence
from dataclasses import dataclass, field
from enum import StrEnum
from functools import cached_property
from itertools import groupby

import numpy as np

from gearsolid.curves.curve import Curve, Turned
from gearsolid.curves.drawn import Drawn
from gearsolid.curves.outline import Outline, Piece, Role
from gearsolid.curves.primitives import Arc
from gearsolid.curves.rolling import CircleOnCircle, LineOnCircle
from gearsolid.curves.strand import presses
from gearsolid.curves.swept import Stretch, Sweep
from gearsolid.errors import DesignError

# Shorter ranges than this share of a curve's span are none; so many places of a range are asked for their reason.
_NONE = 1e-6
_PLACES = 33
# A blank this share larger than the sweep can leave bounds nothing.
_BEYOND = 1e-3
# Radii that differ less than this share belong to a circle about the axis.
_ROUND = 1e-9
# Ends further apart than this share of the size are drawn together; a piece not longer than it is none.
_APART = 1e-10
_WORKING = ("flank", "pin", "hole")
_ROLES: dict[Role, Role] = {"flank": "flank", "pin": "flank", "hole": "flank", "fillet": "flank", "root": "tip"}


class Reason(StrEnum):
    """Why a part of a flank has no place on the mate."""

    MISSES = "its normal misses the pitch circle"
    TURNS_BACK = "the mate's flank would turn back there"
    CUT_AWAY = "the rest of the sweep cuts its mate away"
    BEYOND_TIP = "it would touch beyond the mate's tip circle"


@dataclass(frozen=True)
class FlankRange:
    """A part of a given flank.

    Args:
        piece: index of the piece in the given outline.
        first: first parameter of the part [-].
        last: last parameter [-].
        radius_first: distance from the given member's axis at `first` [mm]; for a rack, height over its pitch line,
            positive towards its root.
        radius_last: the same at `last` [mm].
        reason: why it never touches the mate; None where it does.
    """

    piece: int
    first: float
    last: float
    radius_first: float
    radius_last: float
    reason: Reason | None

    def __str__(self) -> str:
        says = self.reason or "touches"
        return f"piece {self.piece}, {self.radius_first:.4f} to {self.radius_last:.4f} mm: {says}"


@dataclass(frozen=True)
class Mate:
    """The mate of a given outline, itself a member, and what became of the given flanks.

    Args:
        teeth: tooth count [-].
        outline: one pitch; a tooth is centred on the +x axis if one of the given outline is.
        reference_radius: pitch radius of the mate [mm].
        centre_distance: distance of the two axes [mm]; infinite for the mate of a rack.
        sweep: the given pitch, carried round the mate.
        path: the edge it leaves, before any thinning.
    """

    teeth: int
    outline: Outline
    reference_radius: float
    centre_distance: float
    sweep: Sweep = field(repr=False)
    path: tuple[Stretch, ...] = field(repr=False)

    @cached_property
    def ranges(self) -> tuple[FlankRange, ...]:
        """All parts of the given flanks, those that touch the mate and those that never do, in travel order."""
        return tuple(r for k, p in enumerate(self.sweep.pieces) if p.role in _WORKING for r in self._of_piece(k))

    @property
    def touching(self) -> tuple[FlankRange, ...]:
        """Parts of the given flanks that touch the mate."""
        return tuple(r for r in self.ranges if r.reason is None)

    @property
    def idle(self) -> tuple[FlankRange, ...]:
        """Parts of the given flanks that never touch the mate, with their reasons."""
        return tuple(r for r in self.ranges if r.reason is not None)

    def _of_piece(self, k: int) -> list[FlankRange]:
        curve = self.sweep.pieces[k].curve
        first, last = curve.span
        least = _NONE * (last - first)
        stretches = [(s, s.strand) for s in self.path if s.strand and s.strand.piece == k and not s.strand.is_corner]
        used = sorted(sorted((d.carried_parameter(s.first), d.carried_parameter(s.last))) for s, d in stretches)
        parts: list[tuple[float, float, Reason | None]] = []
        at = first
        for low, high in used:
            if low - at > least:
                parts += _idle(curve, self.sweep, at, low)
            if parts and parts[-1][2] is None:
                parts[-1] = (parts[-1][0], high, None)
            elif high - low > least:
                parts.append((low, high, None))
            at = max(at, high)
        if last - at > least:
            parts += _idle(curve, self.sweep, at, last)
        return [FlankRange(k, a, b, self._height(curve, a), self._height(curve, b), why) for a, b, why in parts]

    def _height(self, curve: Curve, t: float) -> float:
        z = complex(curve.point(np.asarray(t)))
        return z.real if isinstance(self.sweep.motion, LineOnCircle) else abs(z)

    @property
    def tip_radius(self) -> float:
        """[mm]."""
        return self.outline.r_min if self.outline.area < 0 else self.outline.r_max

    @property
    def root_radius(self) -> float:
        """[mm]."""
        return self.outline.r_max if self.outline.area < 0 else self.outline.r_min


def external_mate(
    outline: Outline, pitch_radius: float, teeth: int, tip_radius: float | None = None, *, tooth_thinning: float = 0.0
) -> Mate:
    """The external mate of an external outline, such as the pinion for an old wheel or the wheel for a lantern pinion.

    Its root is where the given tips reach; give `domed_tips` to leave clearance.

    Args:
        outline: given member with a tooth on its +x axis; separate pins will do.
        pitch_radius: pitch radius of the given member [mm]; the mate's is this times teeth / outline.order.
        teeth: tooth count of the mate [-].
        tip_radius: tip radius of the mate [mm]; None lets the given member's root alone bound it.
        tooth_thinning: circumferential reduction of the mate's tooth thickness at its pitch circle [mm].

    Raises:
        DesignError: a number out of its range, a ring given, teeth pointed below their tip, or cut off; with the limit.
        ToleranceError: the edge of the sweep could not be followed.
    """
    _check(outline, pitch_radius, teeth)
    _check_kind(outline, ring=False)
    radius = pitch_radius * teeth / outline.order
    motion = CircleOnCircle(radius, pitch_radius)
    if outline.r_max >= motion.centre_distance:
        raise DesignError(
            f"the given outline reaches {outline.r_max:.5g} mm from its axis, beyond the axis of a mate of {teeth} "
            f"teeth at {motion.centre_distance:.5g} mm: take more teeth or a lower tip"
        )
    tip = _tip(tip_radius, motion.centre_distance - outline.r_max, motion.centre_distance - _core(outline))
    facing = tuple(Piece(Turned(p.curve, -1), p.role) for p in outline.pieces)
    sweep = Sweep(facing, _wrap(outline), motion, math.pi, teeth, 1, tip)
    return _mate(sweep, radius, motion.centre_distance, tip_radius, tooth_thinning)


def ring_mate(
    outline: Outline, pitch_radius: float, teeth: int, tip_radius: float | None = None, *, tooth_thinning: float = 0.0
) -> Mate:
    """The ring around a given external outline; the rest as in `external_mate`.

    Args:
        outline: given member with a tooth on its +x axis.
        pitch_radius: pitch radius of the given member [mm].
        teeth: tooth count of the ring [-], more than the given member has.
        tip_radius: tip radius of the ring [mm]; None lets the given member's root alone bound it.
        tooth_thinning: circumferential reduction of the ring's tooth thickness at its pitch circle [mm].
    """
    _check(outline, pitch_radius, teeth)
    _check_kind(outline, ring=False)
    if teeth <= outline.order:
        raise DesignError(f"a ring of {teeth} teeth has no room for {outline.order}; take {outline.order + 1} or more")
    radius = pitch_radius * teeth / outline.order
    motion = CircleOnCircle(radius, -pitch_radius)
    tip = _tip(tip_radius, motion.centre_distance + outline.r_max, motion.centre_distance + _core(outline))
    sweep = Sweep(outline.pieces, _wrap(outline), motion, math.pi, teeth, -1, tip)
    return _mate(sweep, radius, motion.centre_distance, tip_radius, tooth_thinning)


def inner_mate(
    outline: Outline, pitch_radius: float, teeth: int, tip_radius: float | None = None, *, tooth_thinning: float = 0.0
) -> Mate:
    """The pinion inside a given ring, or the disc inside a circle of pins; the rest as in `external_mate`.

    Args:
        outline: given ring with a tooth or pin on its +x axis.
        pitch_radius: pitch radius of the ring [mm].
        teeth: tooth count of the mate [-], fewer than the ring has.
        tip_radius: tip radius of the mate [mm]; None lets the ring alone bound it.
        tooth_thinning: circumferential reduction of the mate's tooth thickness at its pitch circle [mm].
    """
    _check(outline, pitch_radius, teeth)
    _check_kind(outline, ring=outline.is_chain)
    if teeth >= outline.order:
        raise DesignError(
            f"a mate of {teeth} teeth has no room inside {outline.order}; take {outline.order - 1} or less"
        )
    radius = pitch_radius * teeth / outline.order
    motion = CircleOnCircle(radius, -pitch_radius)
    tip = _tip(tip_radius, outline.r_min + motion.centre_distance, outline.r_max + motion.centre_distance)
    sweep = Sweep(outline.pieces, _wrap(outline), motion, math.pi, teeth, 1, tip)
    return _mate(sweep, radius, -motion.centre_distance, tip_radius, tooth_thinning)


def rack_mate(
    rack: Sequence[Piece], teeth: int, tip_radius: float | None = None, *, tooth_thinning: float = 0.0
) -> Mate:
    """The wheel for a given rack.

    Args:
        rack: one pitch in travel order with material on the left, which is x > 0: it runs towards -y, teeth pointing to
            -x, a tooth centred on the x axis, the pitch line on the y axis.
        teeth: tooth count of the wheel [-]; its pitch radius is the rack's pitch times teeth / 2 pi.
        tip_radius: tip radius of the wheel [mm]; None lets the rack's root alone bound it.
        tooth_thinning: circumferential reduction of the wheel's tooth thickness at its pitch circle [mm].

    Raises:
        DesignError: as in `external_mate`, or the pieces do not lead one pitch along -y.
    """
    along = rack[-1].curve.end - rack[0].curve.start
    pitch = -along.imag
    if not (pitch > 0 and abs(along.real) <= _ROUND * pitch):
        raise DesignError(
            f"the rack leads from its first to its last point by x {along.real:.6g} mm, y {along.imag:.6g} mm; "
            "one pitch must lead along -y, with material on the left"
        )
    radius = pitch * teeth / (2 * math.pi)
    _check_teeth(teeth)
    heights = np.concatenate([p.curve.point(p.curve.sample(_PLACES)).real for p in rack])
    tip = _tip(tip_radius, radius + float(heights.min()), radius + float(heights.max()))
    sweep = Sweep(tuple(rack), 1, LineOnCircle(radius), 2 * math.pi * radius, teeth, 1, tip)
    return _mate(sweep, radius, math.inf, tip_radius, tooth_thinning)


def domed_tips(outline: Outline, height: float) -> Outline:
    """An outline with a dome on every tip land, as a tool that leaves clearance in the root of its mate.

    Args:
        outline: given member; its tips are arcs about its axis.
        height: of the dome's middle over the tip circle [mm].

    Raises:
        DesignError: no tip is an arc about the axis, or the height does not lie between 0 and half the land.
    """
    pieces = [
        Piece(_dome(p.curve, math.copysign(height, outline.area)), p.role) if _is_land(p) else p for p in outline.pieces
    ]
    lands = [abs(p.curve.end - p.curve.start) for p in outline.pieces if _is_land(p)]
    if not lands:
        raise DesignError("no tip of the outline is an arc about its axis: draw the higher tip yourself")
    if not 0 < height < min(lands) / 2:
        raise DesignError(
            f"the domes are {height:.4g} mm high; their height must be above 0 and below half the tip land, "
            f"{min(lands) / 2:.4g} mm"
        )
    return Outline(tuple(pieces), outline.order)


def _is_land(piece: Piece) -> bool:
    radii = np.abs(piece.curve.point(piece.curve.sample(9)))
    return piece.role == "tip" and bool(np.ptp(radii) <= _ROUND * radii[0])


def _dome(land: Curve, height: float) -> Arc:
    """The arc between the ends of a land, its middle `height` further from the axis."""
    middle = complex(land.point(np.asarray(sum(land.span) / 2)))
    top, half = middle * (1 + height / abs(middle)), (land.end - land.start) / 2
    rise = abs(top - (land.start + half))
    radius = (abs(half) ** 2 + rise**2) / (2 * rise)
    centre = top - math.copysign(radius, height) * middle / abs(middle)
    start = float(np.angle(land.start - centre))
    return Arc(centre, radius, start, start + float(np.angle((land.end - centre) / (land.start - centre))))


def _check_teeth(teeth: int) -> None:
    if teeth < 2:
        raise DesignError(f"the mate has {teeth} teeth; it must have 2 or more")


def _check(outline: Outline, pitch_radius: float, teeth: int) -> None:
    if not pitch_radius > 0:
        raise DesignError(f"the pitch radius is {pitch_radius:g} mm; it must be above 0")
    _check_teeth(teeth)


def _check_kind(outline: Outline, *, ring: bool) -> None:
    if (outline.area < 0) != ring:
        found, wanted = ("a wheel", "a ring") if ring else ("a ring", "a wheel")
        raise DesignError(f"the given outline is {found}, its area {outline.area:.4g} mm2; this mate is for {wanted}")


def _wrap(outline: Outline) -> complex:
    """Turn of the direction from the last piece of a pitch to the piece that follows it."""
    return outline.step if outline.is_chain else 1.0


def _core(outline: Outline) -> float:
    """Radius of the full disc inside the given teeth [mm]; separate pins have none."""
    return outline.r_min if outline.is_chain else 0.0


def _tip(tip_radius: float | None, root: float, limit: float) -> float:
    """Tip radius of the sweep, between where the given tips reach and where its root would touch; or just beyond."""
    if tip_radius is None:
        return limit + math.copysign(_BEYOND * limit, limit - root)
    low, high = sorted((root, limit))
    if not low + _ROUND * high < tip_radius < high - _ROUND * high:
        raise DesignError(
            f"the mate's tip radius is {tip_radius:.6g} mm; it must lie above {low:.6g} and below {high:.6g} mm, "
            "between where tip and root of the given outline would touch it: or leave it out"
        )
    return tip_radius


def _mate(sweep: Sweep, radius: float, distance: float, tip_radius: float | None, thinning: float) -> Mate:
    path = sweep.edge()
    pieces = _thinned(path, sweep, thinning / radius) if thinning else _closed(path, sweep)
    centred = complex(np.exp(-0.5j * sweep.hand * sweep.pitch))
    outline = Outline(_joined([Piece(_turned(p.curve, centred), p.role) for p in pieces], sweep), sweep.order)
    mate = Mate(sweep.order, outline, radius, distance, sweep, tuple(path))
    if not any(s.strand and not s.strand.is_corner and sweep.pieces[s.strand.piece].role in _WORKING for s in path):
        raise DesignError(
            f"the tips of the given outline cut the mate's teeth off at radius {mate.tip_radius:.5g} mm, before any "
            "flank touches: take fewer or lower teeth on the given outline, or more teeth on the mate"
        )
    if tip_radius is not None and all(s.strand for s in path):
        raise DesignError(
            f"the tip radius is {tip_radius:.5g} mm, but the teeth are pointed at {mate.tip_radius:.5g} mm: state a "
            f"tip radius {'below' if sweep.hand > 0 else 'above'} that, or none"
        )
    return mate


def _joined(pieces: list[Piece], sweep: Sweep) -> tuple[Piece, ...]:
    """The pieces without those of no length, ends moved onto their neighbours' where rounding parts them.

    Where a normal grazes the pitch circle the roll is known to half the digits only, and so is how far along its edge a
    strand ends.
    """
    corners = np.array([p.curve.point(np.array(p.curve.span)) for p in pieces])
    long = np.abs(corners[:, 1] - corners[:, 0]) > _APART * np.abs(corners[:, 0])
    pieces = [p for p, kept in zip(pieces, long, strict=True) if kept]
    starts, ends = corners[long].T
    gaps = np.roll(starts, -1) - ends
    gaps[-1] = starts[0] * np.exp(1j * sweep.hand * sweep.pitch) - ends[-1]
    parted = np.abs(gaps) > _APART * np.max(np.abs(ends))
    return tuple(
        Piece(Drawn(p.curve, complex(g)), p.role) if far else p for p, g, far in zip(pieces, gaps, parted, strict=True)
    )


def _piece(s: Stretch, sweep: Sweep) -> Piece:
    """A stretch where it stands, and what it is on the mate."""
    curve = s.placed(sweep.pitch)
    if s.strand is None:
        return Piece(curve, "tip")
    given = sweep.pieces[s.strand.piece].role
    if s.strand.is_corner:
        return Piece(curve, "fillet")
    if given == "tip":
        return Piece(curve, "root" if isinstance(curve, Arc) else "fillet")
    return Piece(curve, _ROLES[given])


def _turned(curve: Curve, factor: complex) -> Curve:
    if isinstance(curve, Arc):
        turn = float(np.angle(factor))
        return Arc(0, curve.radius, curve.angle_from + turn, curve.angle_to + turn)
    if isinstance(curve, Turned):
        return Turned(curve.base, curve.factor * factor)
    return Turned(curve, factor)


def _closed(path: list[Stretch], sweep: Sweep) -> list[Piece]:
    """The edge from where its first stretch ends; first and last are two halves of one."""
    whole = path[-1]._replace(last=path[0].last)
    return [_piece(s, sweep) for s in [*path[1:-1], whole]]


def _thinned(path: list[Stretch], sweep: Sweep, angle: float) -> list[Piece]:
    """The edge with both sides of the tooth turned inwards by half an angle [rad] and the root widened by it."""
    tips = [k for k, s in enumerate(path) if s.strand is None]
    if len(tips) != 1:
        raise DesignError(f"a tooth with {len(tips)} tip arcs cannot be thinned; state a tip radius that it reaches")
    pieces = [_piece(s, sweep) for s in path]
    tip = pieces[tips[0]].curve
    assert isinstance(tip, Arc)
    if not 0 < angle < abs(tip.sweep):
        raise DesignError(
            f"tooth thinning is {math.degrees(angle):.4g} deg at the axis; it must be above 0 and below the "
            f"tip land, {math.degrees(abs(tip.sweep)):.4g} deg: take less, or a lower tip"
        )
    lean = sweep.hand * angle / 2
    ahead, back = complex(np.exp(1j * lean)), complex(np.exp(-1j * lean))
    before = [Piece(_turned(p.curve, ahead), p.role) for p in pieces[: tips[0]]]
    after = [Piece(_turned(p.curve, back), p.role) for p in pieces[tips[0] + 1 :]]
    land = Arc(0, tip.radius, tip.angle_from + lean, tip.angle_to - lean)
    deepest = after[-1].curve.end
    start = float(np.angle(deepest))
    root = Arc(0, abs(deepest), start, start + 2 * lean)
    return [*before, Piece(land, "tip"), *after, Piece(root, "root")]


def _idle(carried: Curve, sweep: Sweep, first: float, last: float) -> list[tuple[float, float, Reason | None]]:
    """A part that does not touch, cut where the reason changes."""
    t = np.linspace(first, last, _PLACES + 1)
    middle = (t[:-1] + t[1:]) / 2
    p, tangent, curvature = carried.point(middle), carried.tangent(middle), carried.curvature(middle)
    rolls = np.stack([sweep.motion.meet(p, tangent, b) for b in (1, -1)])
    with np.errstate(invalid="ignore"):
        press = presses(sweep.motion, p, tangent, curvature, rolls) > 0
        inside = sweep.within(sweep.motion.place(p, rolls))
    near = np.argmin(np.where(np.isnan(rolls), np.inf, np.abs(rolls)), axis=0)
    columns = np.arange(middle.size)
    why = np.where(inside[near, columns], Reason.CUT_AWAY, Reason.BEYOND_TIP)
    why = np.where(press[near, columns], why, Reason.TURNS_BACK)
    why = np.where(np.any(press & inside, axis=0), Reason.CUT_AWAY, why)
    why = np.where(np.all(np.isnan(rolls), axis=0), Reason.MISSES, why)
    parts: list[tuple[float, float, Reason | None]] = []
    for reason, group in groupby(range(middle.size), key=lambda n: why[n]):
        cells = list(group)
        parts.append((float(t[cells[0]]), float(t[cells[-1] + 1]), Reason(reason)))
    return parts
