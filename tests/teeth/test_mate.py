"""Mates of known members are the known mates, and they roll with what they were made for."""

import numpy as np
import pytest
from mate_shapes import cycloidal, cycloidal_side, ogival, rack, rolled, straight

from gearsolid.curves.curve import Turned
from gearsolid.curves.loops import pins
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.rolling import CircleOnCircle
from gearsolid.curves.roulette import Trace
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.mate import domed_tips, external_mate, inner_mate, rack_mate, ring_mate


def points(mate, role="flank", count=60):
    return [p.curve.point(p.curve.sample(count)) for p in mate.outline.pieces if p.role == role]


def off_involute(mate, gear):
    """Largest distance of the mate's flanks from a gear's involutes, by the closed form [mm]."""
    worst = 0.0
    for flank in points(mate):
        z = flank[np.abs(flank) > gear.base_radius]
        half = np.array([gear.half_angle_at(float(r)) for r in np.abs(z)])
        worst = max(worst, float(np.max(np.abs(z) * np.abs(np.abs(np.angle(z)) - half))))
    return worst


@pytest.mark.parametrize(
    ("given", "wanted"),
    [
        (InvoluteGear(20, 1), InvoluteGear(30, 1)),
        (InvoluteGear(7, 2, profile_shift=0.3), InvoluteGear(41, 2, profile_shift=-0.3)),
        (InvoluteGear(17, 1.5, helix_angle_deg=20), InvoluteGear(23, 1.5, helix_angle_deg=20)),
    ],
    ids=["20 and 30", "shifted 7 and 41", "helical 17 and 23"],
)
def test_mate_of_an_involute_gear_is_the_involute_gear(given, wanted):
    mate = external_mate(given.outline, given.reference_radius, wanted.teeth, wanted.tip_radius)
    assert mate.centre_distance == pytest.approx(given.reference_radius + wanted.reference_radius)
    assert np.ptp(np.abs(np.concatenate(points(mate)))) > 0.9 * given.module
    assert off_involute(mate, wanted) < 1e-9
    assert mate.tip_radius == pytest.approx(wanted.tip_radius, rel=1e-12)
    assert mate.root_radius == pytest.approx(mate.centre_distance - given.tip_radius, rel=1e-12)


def test_mates_of_ring_and_pinion_are_each_other():
    pinion, ring = InvoluteGear(20, 1), InternalGear(60, 1)
    around = ring_mate(pinion.outline, 10, 60, 29.2)
    assert around.outline.area < 0
    assert off_involute(around, ring) < 1e-9
    inside = inner_mate(ring.outline, 30, 20, 11)
    assert inside.centre_distance == around.centre_distance == 20
    assert off_involute(inside, pinion) < 1e-9


@pytest.mark.parametrize("teeth", [8, 20, 90])
def test_mate_of_a_straight_rack_is_an_involute_gear(teeth):
    mate = rack_mate(rack(20, 1, 1.25), teeth, teeth / 2 + 1)
    assert off_involute(mate, InvoluteGear(teeth, 1, tooth_thinning=0)) < 1e-9
    assert mate.root_radius == pytest.approx(teeth / 2 - 1)


def test_mate_of_a_mate_is_the_given_flank():
    given = InvoluteGear(20, 1)
    back = external_mate(external_mate(given.outline, 10, 30, 16).outline, 15, 20, 10.99)
    assert off_involute(back, given) < 1e-8


@pytest.mark.parametrize(("wheel", "pinion"), [(40, 12), (30, 30), (12, 40)])
def test_mate_of_a_cycloidal_wheel_is_the_cycloidal_pinion(wheel, pinion):
    outside, inside = 2.5, 2.0
    mate = external_mate(cycloidal(wheel, outside, inside), wheel / 2, pinion, pinion / 2 + 0.9)
    below, above = cycloidal_side(pinion, inside, outside, 0.9, 1.0)
    lower = [c for c, p in ((p.curve, p) for p in mate.outline.pieces) if p.role == "flank" and c.start.imag < 0]
    assert len(lower) == 2
    for curve, exact in zip(lower, (below, above), strict=True):
        z = curve.point(curve.sample(40))
        t = exact.sample(4001)
        radius, angle = np.abs(exact.point(t)), np.angle(exact.point(t))
        # The cycloids are told by their polar angle over the radius; between samples to the fourth order.
        known = np.interp(np.abs(z), radius, t)
        for _ in range(6):
            w, dw = exact.point(known), exact.derivative(known)
            rate = np.real(dw * np.conj(w)) / np.abs(w)
            step = np.where(np.abs(rate) > 1e-9, (np.abs(z) - np.abs(w)) / np.where(rate == 0, 1, rate), 0)
            known = np.clip(known + step, *exact.span)
        assert np.max(np.abs(z - exact.point(known))) < 1e-9
        assert np.ptp(angle) > 0


def off_parallel(z, path, distance):
    """Largest error of the distance of points from a smooth path [mm]."""
    t = path.sample(20001)
    known = t[np.argmin(np.abs(z[:, None] - path.point(t)[None, ::10]), axis=1) * 10]
    for _ in range(8):
        gap, slope = path.point(known) - z, path.derivative(known)
        bend = np.abs(slope) ** 2 + np.real(gap * np.conj(path.second(known)))
        known = np.clip(known - np.real(gap * np.conj(slope)) / bend, *path.span)
    return float(np.max(np.abs(np.abs(path.point(known) - z) - distance)))


def test_mate_of_a_lantern_pinion_is_parallel_to_an_epicycloid():
    mate = external_mate(pins(10, 5, 0.6), 5, 40, 20.5)
    # A pin's centre, seen from the wheel whose tooth lies on the x axis.
    centre = Turned(Trace(CircleOnCircle(20, 5), -5, 0, 1.5), complex(np.exp(-1j * np.pi / 40)))
    flanks = [z for z in points(mate) if np.ptp(np.abs(z)) > 0.5 and z.imag.mean() < 0]
    assert off_parallel(np.concatenate(flanks), centre, 0.6) < 1e-9
    assert mate.root_radius == pytest.approx(19.4)


def test_mate_inside_a_ring_of_pins_is_the_cycloid_disc():
    lobes, eccentricity, ring, pin = 10, 1.5, 40, 5
    mate = inner_mate(pins(lobes + 1, ring, pin), eccentricity * (lobes + 1), lobes)
    assert mate.centre_distance == pytest.approx(eccentricity)
    centre = Trace(CircleOnCircle(eccentricity * lobes, -eccentricity * (lobes + 1)), ring, -14, 14)
    turned = Turned(centre, complex(np.exp(-1j * np.pi / lobes)))
    assert off_parallel(np.concatenate(points(mate)), turned, pin) < 1e-8
    assert (mate.root_radius, mate.tip_radius) == pytest.approx((ring - eccentricity - pin, ring + eccentricity - pin))


PAIRS = {
    "involute 20 and 30": (InvoluteGear(20, 1).outline, lambda g: external_mate(g, 10, 30, 16)),
    "ring around 20": (InvoluteGear(20, 1).outline, lambda g: ring_mate(g, 10, 60, 29.2)),
    "pinion in a ring": (InternalGear(60, 1).outline, lambda g: inner_mate(g, 30, 20, 11)),
    "disc in a ring of pins": (pins(11, 40, 5), lambda g: inner_mate(g, 16.5, 10)),
    "lantern": (pins(10, 5, 0.6), lambda g: external_mate(g, 5, 40)),
    "ogival wheel": (ogival(60, 30, 1.4, 28), lambda g: external_mate(g, 30, 10)),
    "straight teeth": (straight(24, 13.1, 11, 0.35, 0.9), lambda g: external_mate(g, 12, 30)),
}


@pytest.mark.parametrize(("given", "make"), PAIRS.values(), ids=PAIRS)
def test_a_member_rolls_with_its_mate(given, make):
    """They touch and nowhere overlap; play has no meaning here, as the given tips touch the root all the way."""
    contact = rolled(given, make(given))
    assert contact.verdict == "touches"
    assert contact.clearance == pytest.approx(0, abs=1e-6)


THINNED = {
    "involute": (InvoluteGear(20, 1).outline, lambda g: external_mate(g, 10, 30, 15.9, tooth_thinning=0.02)),
    "ring": (InvoluteGear(20, 1).outline, lambda g: ring_mate(g, 10, 60, 29.3, tooth_thinning=0.02)),
    "pinion": (InternalGear(60, 1).outline, lambda g: inner_mate(g, 30, 20, 10.9, tooth_thinning=0.02)),
    "straight teeth": (straight(24, 13, 11, 0.35, 0.9), lambda g: external_mate(g, 12, 30, 15.7, tooth_thinning=0.02)),
}


@pytest.mark.parametrize(("given", "make"), THINNED.values(), ids=THINNED)
def test_play_is_what_the_mate_was_thinned_by(given, make):
    contact = rolled(given, make(domed_tips(given, 0.1)))
    assert contact.verdict == "rolls"
    assert contact.play == pytest.approx(0.02, abs=1e-6)


@pytest.mark.parametrize("name", ["involute 20 and 30", "ring around 20", "pinion in a ring", "disc in a ring of pins"])
def test_transmission_error_is_below_a_twentieth_of_a_micrometre(name):
    given, make = PAIRS[name]
    mate = make(given)
    contact = rolled(given, mate)
    assert contact.contact_ratio > 1
    assert np.radians(contact.transmission_error) * mate.reference_radius < 0.05e-3


def test_the_roll_test_sees_a_mate_that_is_wrong():
    """The checks above are themselves checked: the mate for another pitch radius binds."""
    given = InvoluteGear(20, 1).outline
    wrong = external_mate(given, 10.05, 30, 16)
    right = external_mate(given, 10, 30, 16)
    mixed = type(right)(30, wrong.outline, 15, 25, right.sweep, right.path)
    assert rolled(given, mixed).clearance < -0.01


def test_thinning_is_play_and_keeps_the_flanks_exact():
    given = InvoluteGear(20, 1)
    mate = external_mate(domed_tips(given.outline, 0.2), 10, 30, 16, tooth_thinning=0.05)
    assert off_involute(mate, InvoluteGear(30, 1, tooth_thinning=0.05)) < 1e-9
    contact = rolled(given.outline, mate)
    assert contact.verdict == "rolls"
    assert contact.play == pytest.approx(0.05, abs=1e-6)
    assert mate.root_radius == pytest.approx(25 - 11 - 0.2)


def test_a_turned_given_outline_turns_its_mate():
    """A flank that is not symmetric keeps its own two sides: the mate of a turned outline is turned with it."""
    given, turn = InvoluteGear(20, 1).outline, 0.02
    turned = Outline(tuple(Piece(Turned(p.curve, complex(np.exp(1j * turn))), p.role) for p in given.pieces), 20)
    plain, moved = (external_mate(g, 10, 30, 16).outline for g in (given, turned))
    z = [
        np.concatenate([p.curve.point(p.curve.sample(9)) for p in o.pieces if p.role == "flank"])
        for o in (plain, moved)
    ]
    assert z[1] == pytest.approx(z[0] * np.exp(-1j * turn * 20 / 30), abs=1e-9)
