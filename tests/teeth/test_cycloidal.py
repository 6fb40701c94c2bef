"""Cycloidal members against closed forms, against envelopes of their mates, and against the rules of sets."""

from dataclasses import replace
from math import acos, atan2, cos, inf, pi, sin, sqrt

import numpy as np
import pytest

from gearsolid.curves.curve import Section, Turned
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.length import ArcLength
from gearsolid.curves.primitives import Segment
from gearsolid.curves.rolling import CircleOnCircle, CircleOnLine, LineOnCircle
from gearsolid.errors import DesignError
from gearsolid.teeth.cycloid import Cycloid
from gearsolid.teeth.cycloidal import CycloidalGear
from gearsolid.teeth.cycloidal_rack import CycloidalRack
from gearsolid.teeth.cycloidal_relations import check_mates, contact_ratio
from gearsolid.teeth.cycloidal_ring import CycloidalRing
from gearsolid.teeth.interchangeable import InterchangeableSet

CYCLOIDS = {
    "epicycloid": Cycloid(30, 3),
    "hypocycloid": Cycloid(20, -6),
    "undercut hypocycloid": Cycloid(8, -5),
    "plain cycloid": Cycloid(inf, 3),
    "plain cycloid, root side": Cycloid(inf, -2),
}
WHEEL = CycloidalGear(30, 1, 3, 3.5, 1, 1.3)
RACK_WHEEL, RACK = CycloidalGear(20, 1, 3, 4, 1, 1.3), CycloidalRack(3, 1, 4, 3, 1, 1.3)
SPECIMENS = {
    "radial 12": CycloidalGear(12, 1, 3, 3, 1, 1.25),
    "wheel 60": CycloidalGear(60, 0.5, 1, 7.5, 0.6, 0.8, 0.02, 0.1),
    "undercut 8": CycloidalGear(8, 1, 3, 3, 1, 1.2, 0.1, 0.2),
    "full round 20": CycloidalGear(20, 2, 6, 6, 2, 2.6, 0, inf),
    "ring 60": CycloidalRing(60, 1, 3, 3, 1, 1.3, 0.05, 0.2),
    "full round ring 36": CycloidalRing(36, 1, 3, 3, 1, 1.3, 0, inf),
}


@pytest.fixture(params=SPECIMENS.values(), ids=SPECIMENS)
def member(request):
    return request.param


@pytest.fixture(params=CYCLOIDS.values(), ids=CYCLOIDS)
def cycloid(request):
    return request.param


def pieces(member, role):
    return [p.curve for p in member.outline.pieces if p.role == role]


@pytest.mark.parametrize(("radius", "a"), [(30, 3), (20, -6), (8, -5)], ids=["epi", "hypo", "undercut hypo"])
def test_trace_is_the_curve_of_the_books(radius, a):
    """x = (R+a) cos t - a cos((R+a)/a t) outside, x = (R-a) cos t + a cos((R-a)/a t) inside; y with sines."""
    roll = np.linspace(0, 3, 50)
    z = Cycloid(radius, a).trace(3.0).point(roll)
    t, big, size = abs(a) * roll / radius, radius + a, abs(a)
    inner = big / size * t
    if a > 0:
        x, y = big * np.cos(t) - size * np.cos(inner), big * np.sin(t) - size * np.sin(inner)
    else:
        x, y = big * np.cos(t) + size * np.cos(inner), -(big * np.sin(t) - size * np.sin(inner))
    assert np.max(np.abs(z - (x + 1j * y))) < 1e-12


def test_height_and_lean_are_those_of_the_curve(cycloid):
    for roll in (0.3, 1.5, 3.0):
        z = complex(cycloid.trace(pi).point(np.asarray(roll)))
        if cycloid.pitch_radius == inf:
            height, lean = z.real, z.imag
        else:
            height, lean = abs(z) - cycloid.pitch_radius, cycloid.pitch_radius * atan2(z.imag, z.real)
        assert cycloid.height(roll) == pytest.approx(height, abs=1e-12)
        assert cycloid.lean(roll) == pytest.approx(lean, abs=1e-12)
        assert cycloid.roll(cycloid.height(roll)) == pytest.approx(roll, abs=1e-9)
        assert cycloid.roll_at_lean(cycloid.lean(roll)) == pytest.approx(roll, abs=1e-9)


def test_arc_and_curvature_of_the_trade_formulas(cycloid):
    """Arc from the cusp and radius of curvature; EB 1911, "Mechanics", article 50, equation 28."""
    radius, a = cycloid.pitch_radius, abs(cycloid.describing)
    side = np.sign(cycloid.describing)
    ratio = 1.0 if radius == inf else (radius + side * a) / radius
    bend = 1.0 if radius == inf else (radius + side * a) / (radius + 2 * side * a)
    curve = cycloid.trace(2 * pi)
    assert ArcLength(curve, 1e-10).total == pytest.approx(8 * a * ratio, rel=1e-9), "whole arch"
    for roll in (0.5, 1.5, 3.0):
        part = Section(curve, 0, roll)
        assert ArcLength(part, 1e-10).total == pytest.approx(4 * a * ratio * (1 - cos(roll / 2)), rel=1e-9)
        expected = 4 * a * abs(sin(roll / 2) * bend)
        assert abs(1 / curve.curvature(np.asarray(roll))) == pytest.approx(expected, rel=1e-9)


@pytest.mark.parametrize(("radius", "a"), [(30, 3), (20, -6), (8, -5)], ids=["epi", "hypo", "undercut hypo"])
def test_area_under_an_arch(radius, a):
    """pi a^2 (3R + 2a) / R outside, pi a^2 (3R - 2a) / R inside."""
    curve = Cycloid(radius, a).trace(2 * pi)
    nodes, weights = np.polynomial.legendre.leggauss(60)
    t = pi * (1 + nodes)
    swept = pi * float(np.sum(weights * np.imag(np.conj(curve.point(t)) * curve.derivative(t)))) / 2
    sector = radius**2 * (2 * pi * a / radius) / 2
    assert abs(swept - sector) == pytest.approx(pi * a**2 * (3 * radius + 2 * a) / radius, rel=1e-12)


def test_half_the_pitch_radius_makes_a_straight_radial_flank():
    flank = pieces(CycloidalGear(12, 1, 5, 3, 1, 1.2), "flank")[0]
    assert isinstance(flank, Segment)
    assert abs((flank.last * flank.first.conjugate()).imag) < 1e-12
    nearly = pieces(CycloidalGear(12, 1, 5, 3 + 1e-9, 1, 1.2), "flank")[0]
    assert not isinstance(nearly, Segment)
    assert np.max(np.abs(np.imag(nearly.point(nearly.sample(9)) / (flank.last / abs(flank.last))))) < 1e-8


def test_thickness_and_circles(member):
    corner = pieces(member, "flank")[0].end
    assert abs(corner) == pytest.approx(member.reference_radius, rel=1e-12)
    assert 2 * abs(np.angle(corner)) * abs(corner) == pytest.approx(member.thickness, rel=1e-12)
    radii = sorted((member.tip_radius, member.root_radius))
    assert [member.outline.r_min, member.outline.r_max] == pytest.approx(radii, rel=1e-9)
    assert (member.outline.area < 0) == (member.hand < 0)


def test_fillet_is_smooth_at_both_ends(member):
    if member.root_fillet == 0:
        return
    arc, flank = pieces(member, "fillet")[0], pieces(member, "flank")[0]
    along = arc.tangent(np.asarray(1.0)) / flank.tangent(np.asarray(flank.span[0]))
    assert abs(np.angle(along)) < 1e-9
    root = member.hand * 1j * arc.start / abs(arc.start)
    assert abs(np.angle(arc.tangent(np.asarray(0.0)) / root)) < 1e-9
    assert abs(arc.start) == pytest.approx(member.root_radius, rel=1e-12)
    assert member.form_radius == pytest.approx(abs(flank.start), rel=1e-12)


@pytest.mark.parametrize("name", ["full round 20", "full round ring 36"])
def test_full_round_leaves_no_flat_and_is_the_largest(name):
    member = SPECIMENS[name]
    assert [p.role for p in member.outline.pieces] == ["fillet", "flank", "flank", "tip", "flank", "flank", "fillet"]
    arc = pieces(member, "fillet")[0]
    assert arc.radius == pytest.approx(member.largest_root_fillet, rel=1e-12)
    assert abs(np.imag(arc.centre * np.exp(1j * member.hand * pi / member.teeth))) < 1e-9
    replace(member, root_fillet=0.999 * arc.radius)
    with pytest.raises(DesignError, match=f"largest is {arc.radius:.6g} mm"):
        replace(member, root_fillet=1.001 * arc.radius)


def test_flank_hollower_than_the_full_round_takes_a_smaller_fillet():
    """Where the hypocycloid bends more sharply than the round, the largest fillet leaves a flat."""
    gear = CycloidalGear(40, 1, 3, 0.8, 0.5, 0.8, 0.6, inf)
    arc, flank = pieces(gear, "fillet")[0], pieces(gear, "flank")[0]
    bend = -1 / flank.curvature(np.asarray(flank.span[0]))
    assert bend == pytest.approx(arc.radius, rel=1e-9)
    assert "root" in [p.role for p in gear.outline.pieces]


def test_pointed_tooth_is_drawn_without_a_land():
    point = WHEEL.pointed_addendum
    pointed = replace(WHEEL, addendum=point)
    assert "tip" not in [p.role for p in pointed.outline.pieces]
    assert pieces(pointed, "flank")[1].end == pytest.approx(pointed.tip_radius, abs=1e-9)
    blunt = replace(WHEEL, addendum=point - 1e-3)
    assert "tip" in [p.role for p in blunt.outline.pieces]
    with pytest.raises(DesignError, match=f"pointed at {point:.6g} mm"):
        replace(WHEEL, addendum=point + 1e-3)


@pytest.mark.parametrize(
    ("numbers", "words"),
    [
        ({"teeth": 4}, "4 teeth"),
        ({"teeth": 30.5}, "30.5 teeth"),
        ({"module": 0.0}, "module is 0 mm"),
        ({"addendum": float("nan")}, "addendum is nan"),
        ({"dedendum_circle": 15.0}, "does not fit inside"),
        ({"dedendum_circle": 0.6}, "reaches 1.2 mm"),
        ({"dedendum_circle": 0.8}, "meet 1."),
        ({"addendum_circle": 0.2}, "circle ends at 0.4"),
        ({"tooth_thinning": 1.6}, "1.571 mm"),
        ({"tooth_thinning": -0.1}, "-0.1 mm"),
        ({"root_fillet": -1.0}, "root_fillet is -1 mm"),
        ({"root_fillet": 2.0}, "largest is 0."),
        ({"teeth": 8, "dedendum_circle": 3.3, "tooth_thinning": 0.6}, "narrows to nothing"),
    ],
    ids=lambda v: v if isinstance(v, str) else "",
)
def test_refusals_name_the_number_and_the_limit(numbers, words):
    with pytest.raises(DesignError, match=words):
        replace(WHEEL, **numbers)


def test_ring_teeth_that_widen_too_much_are_refused():
    with pytest.raises(DesignError, match="widen towards their tips"):
        CycloidalRing(12, 1, 5.5, 3, 1.0, 1.2)


PAIRS = {
    "12 and 12": (CycloidalGear(12, 1, 3, 3, 1, 1.25), CycloidalGear(12, 1, 3, 3, 1, 1.25)),
    "20 and 30": (CycloidalGear(20, 1, 3, 3.75, 1, 1.25), CycloidalGear(30, 1, 3.75, 3, 1, 1.25)),
    "8 and 64": (CycloidalGear(8, 1, 16, 2, 0.5, 1.7), CycloidalGear(64, 1, 2, 16, 1.4, 1)),
    "12 in 60": (CycloidalGear(12, 1, 3, 3, 1, 1.25), CycloidalRing(60, 1, 3, 3, 1, 1.25)),
}


@pytest.mark.parametrize("pair", PAIRS.values(), ids=PAIRS)
@pytest.mark.parametrize("way", [0, 1], ids=["first's face", "second's face"])
def test_face_envelopes_the_flank_of_its_mate(pair, way):
    """The mate's flank, found from the face by the law of gearing, is the curve the mate is drawn with."""
    member, mate = pair[way], pair[1 - way]
    inside = member.hand != mate.hand
    carried = member.reference_radius * (-1 if inside else 1)
    # At roll zero an outside mate touches the pitch point with its own far side.
    face = Turned(member.face.trace(member.face.roll(member.hand * member.addendum)), 1.0 if inside else -1.0)
    motion = CircleOnCircle(mate.reference_radius, carried)
    assert min(miss(mate.flank, Envelope(face, motion, branch)) for branch in (1, -1)) < 1e-9


def test_rack_face_envelopes_the_flank_of_a_wheel():
    face = Turned(RACK.face.trace(RACK.face.roll(1.0)), -1.0)
    assert miss(RACK_WHEEL.flank, Envelope(face, LineOnCircle(10))) < 1e-9


def test_wheel_face_envelopes_the_flank_of_a_rack():
    face = Turned(RACK_WHEEL.face.trace(RACK_WHEEL.face.roll(1.0)), -1.0)
    envelopes = (Envelope(face, CircleOnLine(10), branch) for branch in (1, -1))
    assert min(miss(RACK.flank, e) for e in envelopes) < 1e-9


def test_envelope_check_sees_another_describing_circle():
    face = Turned(RACK.face.trace(RACK.face.roll(1.0)), -1.0)
    assert miss(Cycloid(10, -4.01), Envelope(face, LineOnCircle(10))) > 1e-5


def miss(flank, envelope):
    """How far an envelope lies from a cycloid at the same heights [mm]; infinite on the wrong side of the pitch circle.

    The pitch point itself is left out: there a face has no direction of its own.
    """
    a, b = envelope.span
    z = envelope.point(np.linspace(a + 0.02 * (b - a), b, 60))
    heights = z.real if flank.pitch_radius == inf else np.abs(z) - flank.pitch_radius
    if np.max(heights * np.sign(flank.describing)) <= 0 or np.isnan(heights).any():
        return inf
    curve = flank.trace(pi)
    exact = np.array([complex(curve.point(np.asarray(flank.roll(float(h))))) for h in heights])
    return min(np.max(np.abs(z - exact)), np.max(np.abs(z.conj() - exact)))


def members_of(family):
    return {
        "smallest": family.wheel(family.base_teeth),
        "wheel": family.wheel(45),
        "ring": family.ring(90),
        "rack": family.rack(4),
    }


@pytest.mark.parametrize("base", [12, 15])
def test_every_member_of_a_set_works_with_every_other(base):
    family = InterchangeableSet(0.8, base)
    members = members_of(family)
    for name, member in members.items():
        for other in ("smallest", "wheel"):
            eps = contact_ratio(member, members[other])
            assert eps.total > 1.3, (name, other)
            assert eps.total == pytest.approx(sum(contact_ratio(members[other], member)))


def test_members_of_different_sets_are_refused():
    with pytest.raises(DesignError, match=r"3 mm .* 3.75 mm; they must be the same"):
        check_mates(InterchangeableSet(1, 12).wheel(20), InterchangeableSet(1, 15).wheel(30))
    with pytest.raises(DesignError, match="modules 1 and 2 mm"):
        check_mates(InterchangeableSet(1).wheel(20), InterchangeableSet(2).wheel(30))
    with pytest.raises(DesignError, match="both members are internal"):
        check_mates(InterchangeableSet(1).ring(60), InterchangeableSet(1).ring(80))


@pytest.mark.parametrize("base", [12, 15])
def test_a_ring_needs_as_many_more_teeth_as_the_set_is_based_on(base):
    family = InterchangeableSet(1.0, base)
    check_mates(family.ring(20 + base), family.wheel(20))
    with pytest.raises(DesignError, match=f"measure {base / 2:g} mm together"):
        check_mates(family.ring(19 + base), family.wheel(20))


def test_a_mate_with_too_short_a_flank_is_refused():
    tall = CycloidalGear(64, 1, 2, 16, 1.5, 1.0)
    shallow = CycloidalGear(8, 1, 16, 2, 0.5, 0.7)
    with pytest.raises(DesignError, match=r"flank down to 0\.803 mm"):
        check_mates(tall, shallow)


def test_contact_ratio_is_the_length_of_the_describing_arcs_in_pitches():
    """The contact point runs along each describing circle from the pitch point to the tip circle of its addendum."""
    first, second = PAIRS["20 and 30"]
    total = 0.0
    for member in (first, second):
        a, r = member.addendum_circle, member.reference_radius
        # Circle of radius a about (r + a, 0) cut with the tip circle about the origin.
        x = (member.tip_radius**2 - a**2 + (r + a) ** 2) / (2 * (r + a))
        arc = a * acos(((r + a) - x) / a)
        assert sqrt(x**2 + a**2 - (r + a - x) ** 2) == pytest.approx(member.tip_radius)
        total += arc / pi
    assert contact_ratio(first, second).total == pytest.approx(total, rel=1e-12)


@pytest.mark.parametrize("teeth", [1, 5])
@pytest.mark.parametrize("fillet", [0, 0.2, inf], ids=["corner", "fillet", "full round"])
def test_rack_is_a_bar_of_equal_teeth(teeth, fillet):
    rack = CycloidalRack(teeth, 1, 4, 3, 1, 1.3, 0.1, fillet, back=2.0)
    tips = pieces(rack, "tip")
    assert [round((t.start + t.end).imag / 2 / pi, 12) for t in tips] == list(range(teeth))
    assert all(t.start.real == pytest.approx(1) for t in tips)
    one = CycloidalRack(1, 1, 4, 3, 1, 1.3, 0.1, fillet, back=2.0)
    assert rack.outline.area == pytest.approx(teeth * one.outline.area, rel=1e-12)
    with pytest.raises(DesignError, match="back of the rack is 0 mm"):
        replace(rack, back=0.0)
