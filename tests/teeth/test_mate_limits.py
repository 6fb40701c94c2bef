"""What a mate says about the flanks it was made from, and what it refuses."""

import numpy as np
import pytest
from mate_shapes import ogival, rack, straight

from gearsolid.curves.curve import Turned
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.loops import pins
from gearsolid.curves.primitives import Arc
from gearsolid.curves.rolling import CircleOnCircle
from gearsolid.curves.verge import Verge
from gearsolid.errors import DesignError
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.mate import Reason, domed_tips, external_mate, inner_mate, rack_mate, ring_mate

WHEEL = InvoluteGear(60, 1)


def radii(ranges):
    return sorted(
        (round(min(r.radius_first, r.radius_last), 9), round(max(r.radius_first, r.radius_last), 9)) for r in ranges
    )


def test_every_part_of_a_flank_is_told_once():
    mate = external_mate(WHEEL.outline, 30, 8, 5)
    for piece in (1, 3):
        parts = [r for r in mate.ranges if r.piece == piece]
        assert (parts[0].first, parts[-1].last) == WHEEL.outline.pieces[piece].curve.span
        assert [a.last for a in parts[:-1]] == pytest.approx([b.first for b in parts[1:]], abs=1e-6)
    assert {r.piece for r in mate.ranges} == {1, 3}
    assert set(mate.ranges) == {*mate.touching, *mate.idle}


def test_ranges_end_where_the_closed_forms_say():
    """Involutes: the mate's tip stops contact at a known radius, interference at another."""
    mate = external_mate(WHEEL.outline, 30, 8, 5)
    base, own = WHEEL.base_radius, 4 * np.cos(WHEEL.transverse_angle)
    line = 34 * np.sin(WHEEL.transverse_angle)
    lowest = np.hypot(line - np.sqrt(5**2 - own**2), base)
    interference = np.hypot(line, base)
    by_reason = {r.reason: r for r in mate.ranges if r.piece == 1}
    assert by_reason[Reason.BEYOND_TIP].radius_last == pytest.approx(lowest, abs=1e-9)
    assert by_reason[None].radius_first == pytest.approx(lowest, abs=1e-9)
    assert by_reason[Reason.TURNS_BACK].radius_first == pytest.approx(interference, abs=0.02)
    assert by_reason[None].radius_last == by_reason[Reason.CUT_AWAY].radius_first < interference
    assert by_reason[Reason.TURNS_BACK].radius_last == pytest.approx(31)


def test_a_mate_without_interference_uses_the_whole_upper_flank():
    mate = external_mate(InvoluteGear(30, 1).outline, 15, 30, 16)
    assert {r.reason for r in mate.idle} == {Reason.BEYOND_TIP}
    assert max(r.radius_last for r in mate.touching) == pytest.approx(16)


def test_a_flank_whose_normals_miss_the_pitch_circle_is_named():
    mate = external_mate(straight(24, 13.5, 11, 0.4, 0.4), 12, 30)
    missed = [r for r in mate.idle if r.reason is Reason.MISSES]
    # The normal of a flank parallel to the tooth's middle misses beyond this radius.
    limit = np.hypot(12, 0.4)
    assert missed
    for r in missed:
        assert min(r.radius_first, r.radius_last) == pytest.approx(limit, abs=0.06)
        assert max(r.radius_first, r.radius_last) == pytest.approx(13.5)
    assert "misses the pitch circle" in str(missed[0])
    assert "13.5" in str(missed[0])


def test_the_back_of_a_pin_never_touches():
    mate = external_mate(pins(10, 5, 0.6), 5, 40, 20.5)
    assert Reason.TURNS_BACK in {r.reason for r in mate.idle}


def test_a_rack_tells_heights():
    mate = rack_mate(rack(20, 1, 1.25), 8, 5)
    cut = next(r for r in mate.idle if r.reason is Reason.TURNS_BACK)
    # Undercut sets in where the rack reaches below the base tangent point.
    assert max(cut.radius_first, cut.radius_last) == pytest.approx(-4 * np.sin(np.radians(20)) ** 2, abs=0.05)


REFUSALS = {
    "no pitch radius": (lambda: external_mate(WHEEL.outline, 0, 8), "pitch radius is 0 mm"),
    "one tooth": (lambda: external_mate(WHEEL.outline, 30, 1), "1 teeth; it must have 2 or more"),
    "a ring for a wheel": (lambda: external_mate(InternalGear(60, 1).outline, 30, 20), "is a ring"),
    "a wheel for a ring": (lambda: inner_mate(WHEEL.outline, 30, 20), "is a wheel"),
    "ring too small": (lambda: ring_mate(WHEEL.outline, 30, 60), "take 61 or more"),
    "pinion too large": (lambda: inner_mate(InternalGear(60, 1).outline, 30, 60), "take 59 or less"),
    "tip into the root": (lambda: external_mate(WHEEL.outline, 30, 8, 6), "above 3 and below 5.25 mm"),
    "tip below the root": (lambda: external_mate(WHEEL.outline, 30, 8, 2.9), "above 3 and below 5.25 mm"),
    "rack's wheel too small": (lambda: rack_mate(rack(20, 1, 1.25), 20, 8), "above 9 and below 11.25 mm"),
    "ring tip into the root": (lambda: ring_mate(WHEEL.outline, 30, 90, 43), "above 43.75 and below 46 mm"),
    "pointed": (lambda: external_mate(InvoluteGear(20, 1, profile_shift=-0.5).outline, 10, 8, 5.7), "pointed at 5.53"),
    "pointed ring": (lambda: ring_mate(straight(12, 7, 4, 0.9, 0.9), 6, 30, 13.2), "pointed at 13.[0-9]* mm"),
    "teeth cut off": (
        lambda: external_mate(straight(8, 12, 5, 0.5, 0.5), 8, 6),
        "teeth off at radius 2.632 mm",
    ),
    "teeth over the axis": (
        lambda: external_mate(straight(6, 9, 3.5, 1.2, 1.0), 4, 5),
        "axis of a mate of 5 teeth at 7.33",
    ),
    "too much thinning": (lambda: external_mate(WHEEL.outline, 30, 8, 5, tooth_thinning=0.6), "below the tip land"),
    "thinning without a tip": (lambda: external_mate(WHEEL.outline, 30, 30, tooth_thinning=0.1), "tip radius"),
    "negative thinning": (lambda: external_mate(WHEEL.outline, 30, 8, 5, tooth_thinning=-0.1), "must be above 0"),
    "backward rack": (lambda: rack_mate(rack(20, 1, 1.25)[::-1], 20), "lead along -y"),
    "dome too high": (lambda: domed_tips(WHEEL.outline, 1), "half the tip land, 0.39"),
    "no land for a dome": (lambda: domed_tips(pins(10, 5, 0.6), 0.1), "no tip of the outline"),
}


@pytest.mark.parametrize(("make", "says"), REFUSALS.values(), ids=REFUSALS)
def test_refusals_name_the_limit(make, says):
    with pytest.raises(DesignError, match=says):
        make()


def test_the_tip_limit_is_where_it_starts_to_work():
    assert external_mate(WHEEL.outline, 30, 12, 7.2).tip_radius == pytest.approx(7.2)
    with pytest.raises(DesignError, match=r"below 7\.25 mm"):
        external_mate(WHEEL.outline, 30, 12, 7.25)


def test_domes_rise_by_what_is_asked_on_wheel_and_ring():
    assert domed_tips(WHEEL.outline, 0.2).r_max == pytest.approx(31.2, rel=1e-9)
    ring = InternalGear(60, 1)
    assert domed_tips(ring.outline, 0.2).r_min == pytest.approx(ring.tip_radius - 0.2, rel=1e-9)


@pytest.mark.parametrize("power", [1, 2])
def test_an_envelope_sets_out_as_it_goes_on(power):
    """Continued towards its verge, the curve keeps its direction, and meets the plain envelope everywhere else."""
    # A round pin off its pitch circle misses it on one side; on it, it only grazes.
    centre = 5.0 if power == 1 else 5.2
    pin, motion = Turned(Arc(centre, 0.6, 0.0, 2 * np.pi), -1), CircleOnCircle(20, 5)
    limit = (np.arccos(-0.6 * 0 / 5) if power == 1 else np.pi / 2 - np.arccos(5 / 5.2)) / (2 * np.pi)
    side = 1 if power == 1 else -1
    verge = Verge(pin, motion, -1, limit, side, power, 0.2)
    t = np.linspace(0.004, 0.2, 60)
    plain = Envelope(pin, motion, -1).point(verge.parameter(t))
    assert np.all(np.isfinite(plain))
    assert verge.point(t) == pytest.approx(plain, abs=1e-9)
    step = 1e-5
    middle = np.linspace(0.001, 0.19, 40)
    slope = (verge.point(middle + step) - verge.point(middle - step)) / (2 * step)
    assert verge.derivative(middle) == pytest.approx(slope, abs=1e-6)
    bend = (verge.derivative(middle + step) - verge.derivative(middle - step)) / (2 * step)
    assert verge.second(middle) == pytest.approx(bend, abs=1e-3)


def test_ogival_teeth_touch_on_radial_flank_and_arc():
    mate = external_mate(ogival(60, 30, 1.4, 28), 30, 10)
    assert {r.piece for r in mate.touching} == {0, 1, 2, 3}
