"""Why parts bind, or run badly: the roll test's findings called by the names the trade has for them.

What the roll test found says where parts meet and how deep; the members' own numbers, where they have such, say why and
how much to change.
"""

from collections.abc import Iterator
from dataclasses import fields, is_dataclass, replace

import numpy as np

from gearsolid.contact.action import early_contact
from gearsolid.contact.clearance import distances_at, sweep
from gearsolid.contact.finding import Cause, Finding, Suspects, late
from gearsolid.contact.involute_causes import interference, involute_of, shape, too_thick
from gearsolid.contact.play import window
from gearsolid.contact.result import RollResult
from gearsolid.errors import DesignError
from gearsolid.pairs.engagement import Engagement
from gearsolid.pairs.machine import Machine
from gearsolid.teeth.clock_gear import ClockGear
from gearsolid.teeth.cycloidal_member import CycloidalMember
from gearsolid.teeth.cycloidal_relations import contact_ratio as cycloidal_ratio
from gearsolid.teeth.involute_pair import InvolutePair
from gearsolid.teeth.member import Member

# Shares of a pitch by which b is turned to see whether it would be free there.
_TURNS = 12

# From this many leaves a wheel of usual size can drive wholly after the line of centres (computed: 11 leaves with 55
# teeth or more of half a pitch, 10 leaves only with 382).
_MANY_LEAVES = 11

# Lengths this small [mm] are nothing.
_NOTHING = 1e-6


def causes(machine: Machine, result: RollResult) -> tuple[Finding, ...]:
    """Named causes of what the roll test of a machine found, those that make it bind first.

    Args:
        machine: the machine.
        result: its roll test.

    Returns:
        Findings; empty when there is nothing to say. Pairs alike share one finding.
    """
    members = _members(machine)
    merged: dict[tuple[object, ...], Finding] = {}
    seen: dict[tuple[object, ...], list[Finding]] = {}
    for e, c in zip(machine.engagements, result.contacts, strict=True):
        alike = (id(e.a), id(e.b), e.must_touch, c.verdict, c.roles, round(c.clearance, 7))
        if alike not in seen:
            pair = Suspects(e, c, (members.get(id(e.a)), members.get(id(e.b))))
            seen[alike] = list(_causes(pair))
        for index, finding in enumerate(seen[alike]):
            key = (*alike, index)
            known = merged.get(key)
            names = (c.name_a, c.name_b)
            merged[key] = replace(known, pairs=(*known.pairs, names)) if known else finding
    return tuple(sorted(merged.values(), key=lambda f: not f.binds))


def _members(machine: Machine) -> dict[int, Member]:
    """The members a machine is made of, by the identity of their outlines."""
    if not is_dataclass(machine):
        return {}
    parts = (getattr(machine, f.name) for f in fields(machine))
    return {id(m.outline): m for m in parts if hasattr(m, "outline") and hasattr(m, "teeth")}


def _causes(pair: Suspects) -> Iterator[Finding]:
    if not pair.e.must_touch:
        if pair.binds:
            yield _neighbours(pair)
        return
    known = involute_of(pair)
    explained = False
    if pair.binds:
        for finding in _binding(pair, known):
            explained |= finding.binds
            yield finding
        if not explained:
            yield _by_roles(pair)
    elif known:
        yield from interference(pair, *known)
    if known:
        yield from shape(pair, *known)
    else:
        yield from _cycloidal(pair)


def _neighbours(pair: Suspects) -> Finding:
    c, depth = pair.c, -pair.c.clearance
    alike = pair.e.a is pair.e.b
    remedy = (
        f"shorten the tips by {depth / 2:.4f} mm on each, place fewer of these parts, or move their axes "
        f"{depth:.4f} mm apart"
        if alike
        else f"take {depth:.4f} mm off either part there, or move them apart"
    )
    sentence = f"{c.name_a} and {c.name_b} never work together, yet collide by {depth:.4f} mm"
    return pair.found(Cause.NEIGHBOURS, depth, sentence, remedy, binds=True)


def _binding(pair: Suspects, known: tuple[InvolutePair, str, str] | None) -> Iterator[Finding]:
    if pair.c.play is None or pair.c.play > 0:
        turn = _freeing_turn(pair.e)
        if turn is not None:
            arc = abs(turn) * (pair.e.b.r_min + pair.e.b.r_max) / 2
            sentence = (
                f"{pair.c.name_b} stands turned out of step with {pair.c.name_a}, by {arc:.4f} mm at its rim; it is "
                "free elsewhere"
            )
            instead = -turn * pair.e.rate_a / pair.e.rate_b
            remedy = (
                f"turn {pair.c.name_b} by {np.degrees(turn):+.4f} deg about its own axis, or {pair.c.name_a} by "
                f"{np.degrees(instead):+.4f} deg about its own"
            )
            yield pair.found(Cause.OUT_OF_STEP, arc, sentence, remedy, binds=True)
            return
    if known:
        yield from too_thick(pair, known[0])
        yield from interference(pair, *known)
    yield from _bottom(pair)


def _freeing_turn(e: Engagement) -> float | None:
    """Turn of b [rad] to the middle of its play, if there is a place where it is free at every input angle."""
    turns = (np.arange(_TURNS) - _TURNS // 2) / _TURNS * e.b.pitch_angle
    here = [float(distances_at(replace(e, angle_b=e.angle_b + t), np.zeros(1))[0]) for t in turns]
    best = float(turns[int(np.argmax(here))])
    moved = replace(e, angle_b=e.angle_b + best)
    s = sweep(moved)
    least = float(distances_at(moved, s.psi).min())
    freedom = window(s, (e.b.r_min + e.b.r_max) / 2, least)
    low, high = float(freedom.back.max()), float(freedom.ahead.min())
    return best + (low + high) / 2 if low < high else None


def _bottom(pair: Suspects) -> Iterator[Finding]:
    """A tip that reaches its mate's root circle."""
    a, b = pair.members
    if a is None or b is None:
        return
    for own, other, name, mate in ((a, b, pair.c.name_a, pair.c.name_b), (b, a, pair.c.name_b, pair.c.name_a)):
        own_ring, other_ring = own.tip_radius < own.root_radius, other.tip_radius < other.root_radius
        if other_ring:
            room = other.root_radius - pair.distance - own.tip_radius
        elif own_ring:
            room = own.tip_radius - pair.distance - other.root_radius
        else:
            room = pair.distance - own.tip_radius - other.root_radius
        if room < -_NOTHING:
            sentence = f"the tip of {name} runs {-room:.4f} mm below the root circle of {mate}"
            remedy = f"shorten the tip of {name} or deepen the root of {mate} by {-room:.4f} mm"
            yield pair.found(Cause.ROOT, -room, sentence, remedy, binds=True)


def _by_roles(pair: Suspects) -> Finding:
    """What the deepest overlap says when the members' numbers say nothing."""
    c, depth = pair.c, -pair.c.clearance
    own, other = (c.name_a, c.name_b) if c.roles[0] == "tip" else (c.name_b, c.name_a)
    if set(c.roles) & {"fillet", "root"}:
        what = "tip" if "tip" in c.roles else "flank"
        sentence = f"the {what} of one runs {depth:.4f} mm into the {_first(c.roles)} of the other"
        remedy = f"deepen the root or shorten the tips by {depth:.4f} mm or more; thinner teeth help too"
        return pair.found(Cause.ROOT, depth, sentence, remedy, binds=True)
    if "tip" in c.roles:
        what = "tip" if c.roles == ("tip", "tip") else "flank"
        sentence = f"the tip of {own} strikes the {what} of {other}, {depth:.4f} mm deep"
        remedy = f"shorten the tip of {own} by {depth:.4f} mm or more, or round it"
        return pair.found(Cause.TIP, depth, sentence, remedy, binds=True)
    lack = depth if c.play is None else max(-c.play, depth)
    sentence = (
        f"there is no play: {c.roles[0]} and {c.roles[1]} overlap by {depth:.4f} mm wherever {c.name_b} is turned"
    )
    remedy = f"take {depth:.4f} mm or more off the working faces, or change the centre distance"
    return pair.found(Cause.NEGATIVE_PLAY, lack, sentence, remedy, binds=True)


def _first(roles: tuple[str, str]) -> str:
    return next(r for r in roles if r in ("fillet", "root"))


def _cycloidal(pair: Suspects) -> Iterator[Finding]:
    driver, driven = pair.members
    if isinstance(driver, CycloidalMember) and isinstance(driven, CycloidalMember):
        try:
            ratio = cycloidal_ratio(driver, driven).total
        except DesignError:
            ratio = 1.0
        if ratio < 1 - _NOTHING:
            yield late(pair, ratio, driver.pitch, "of the pitch circle")
    clockwork = isinstance(driven, CycloidalMember | ClockGear) and isinstance(driver, CycloidalMember | ClockGear)
    if not clockwork or driven is None or driven.teeth >= _MANY_LEAVES or pair.binds:
        return
    try:
        early = early_contact(pair.e)
    except DesignError:
        return
    if early > 0:
        sentence = (
            f"{pair.c.name_a} begins to drive the {driven.teeth} leaves of {pair.c.name_b} {early:.4f} mm before the "
            "line of centres, where friction bites"
        )
        remedy = (
            f"nothing binds; for less friction take {_MANY_LEAVES} leaves or more, or lower the addendum of "
            f"{pair.c.name_b} as far as the contact ratio allows"
        )
        yield pair.found(Cause.EARLY, early, sentence, remedy, binds=False)
