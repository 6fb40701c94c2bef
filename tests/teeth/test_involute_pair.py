from dataclasses import replace

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from involute_shapes import polygon
from shapely.affinity import rotate, translate

from gearsolid.errors import DesignError
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.involute_pair import InvolutePair
from gearsolid.teeth.involute_relations import centre_distance, inv, reach, shift_sum, working_angle, working_angle_at
from gearsolid.teeth.rack import ISO53_C
from gearsolid.teeth.rack_drive import RackDrive

PAIRS = {
    "external": InvolutePair(InvoluteGear(20, 2), InvoluteGear(37, 2)),
    "external shifted": InvolutePair(InvoluteGear(12, 3, profile_shift=0.6), InvoluteGear(24, 3, profile_shift=0.36)),
    "helical": InvolutePair(InvoluteGear(19, 2, helix_angle_deg=20), InvoluteGear(31, 2, helix_angle_deg=-20)),
    "ring": InvolutePair(InvoluteGear(24, 2), InternalGear(72, 2)),
    "ring shifted": InvolutePair(InvoluteGear(21, 2, profile_shift=0.2), InternalGear(60, 2, profile_shift=-0.3)),
    "helical ring": InvolutePair(InvoluteGear(25, 2, helix_angle_deg=15), InternalGear(70, 2, helix_angle_deg=15)),
}


@pytest.fixture(params=PAIRS.values(), ids=PAIRS)
def pair(request):
    return request.param


def test_full_teeth_leave_no_play_at_their_own_distance(pair):
    """Play counts thicknesses at the working circles, the distance comes from the shifts: two ways to zero."""
    assert pair.play == pytest.approx(0, abs=1e-12)
    assert pair.normal_play == pytest.approx(0, abs=1e-12)


def test_play_of_another_distance_is_that_of_the_involute_function(pair):
    step = 0.05 if pair.mate.hand > 0 else -0.05
    wider = InvolutePair(pair.gear, pair.mate, pair.centre_distance + step)
    gain = inv(wider.working_angle) - inv(pair.working_angle)
    assert wider.play == pytest.approx(abs(2 * wider.centre_distance * gain), rel=1e-9)
    assert wider.play > 0
    assert wider.radial_play == pytest.approx(0.05, rel=0.02)


def test_shift_sum_returns_the_shifts(pair):
    assert pair.shift_sum == pytest.approx(pair.gear.profile_shift + pair.mate.profile_shift, abs=1e-12)


def test_working_circles_roll_at_the_ratio_of_teeth(pair):
    ours, theirs = pair.working_radii
    assert theirs / ours == pytest.approx(pair.mate.teeth / pair.gear.teeth)
    assert theirs + pair.mate.hand * ours == pytest.approx(pair.centre_distance)


def test_drawn_flanks_cover_the_contact_path(pair):
    """Lengths along the base tangents: the path lies on both drawn flanks and reaches an end of each limit."""
    offset = pair.mate.hand * pair.centre_distance * np.sin(pair.working_angle)
    ends = np.array(pair.contact_path)
    for member, lengths in ((pair.gear, ends), (pair.mate, np.sort(pair.mate.hand * (offset - ends)))):
        flank = next(p.curve for p in member.outline.pieces if p.role == "flank")
        drawn = np.sqrt(np.sort(np.abs([flank.start, flank.end])) ** 2 - member.base_radius**2)
        assert drawn[0] <= lengths[0] + 1e-9
        assert lengths[1] <= drawn[1] + 1e-9
    assert ends[0] < ends[1]


def overlap(pair, turn):
    """Area [mm2] that both drawn members claim; a gear tooth is turned from the line of centres, the mate too."""
    gear, mate = (polygon(m.outline, 200) for m in (pair.gear, pair.mate))
    step = np.pi / pair.mate.teeth
    follow = turn * pair.gear.teeth / pair.mate.teeth
    if pair.mate.hand > 0:
        placed = rotate(gear, turn, (0, 0), use_radians=True)
        other = rotate(mate, np.pi + step - follow, (0, 0), use_radians=True)
        return placed.intersection(translate(other, pair.centre_distance)).area
    placed = translate(rotate(gear, turn, (0, 0), use_radians=True), pair.centre_distance)
    return placed.difference(rotate(mate, step + follow, (0, 0), use_radians=True)).area


def test_drawn_members_roll_in_each_other_without_overlap(pair):
    """With tips off the other's fillets, nothing overlaps at the distance without play, and everywhere 2 % closer."""
    ours, theirs = pair.needed_shortening
    free = InvolutePair(replace(pair.gear, tip_shortening=ours), replace(pair.mate, tip_shortening=theirs))
    assert free.needed_shortening == pytest.approx((0, 0), abs=1e-12)
    turns = np.linspace(0, 2 * np.pi / pair.gear.teeth, 5)
    assert max(overlap(free, turn) for turn in turns) < 1e-4 * pair.gear.module**2
    closer = replace(free, distance=pair.centre_distance - pair.mate.hand * 0.02 * pair.gear.module)
    assert min(overlap(closer, turn) for turn in turns) > 3e-3 * pair.gear.module**2


def test_full_depth_ring_runs_into_the_fillet_of_its_planet():
    """The overlap the shortening takes away is really there without it."""
    pair = PAIRS["ring"]
    assert pair.needed_shortening[0] == 0
    assert pair.needed_shortening[1] > 0.1
    assert max(overlap(pair, turn) for turn in np.linspace(0, 0.2, 5)) > 1e-3


def test_undercut_limits_no_mate():
    pair = InvolutePair(InvoluteGear(9, 2), InvoluteGear(40, 2))
    assert pair.needed_shortening == (0, 0)
    assert max(overlap(pair, turn) for turn in np.linspace(0, 0.7, 9)) < 4e-4


def test_contact_ratio_counts_only_flanks_that_exist():
    whole = InvolutePair(InvoluteGear(25, 2, rack=ISO53_C), InvoluteGear(40, 2, rack=ISO53_C))
    assert whole.contact_ratio == pytest.approx(whole.nominal_contact_ratio, abs=1e-12)
    undercut = InvolutePair(InvoluteGear(9, 2), InvoluteGear(40, 2))
    assert undercut.contact_ratio < undercut.nominal_contact_ratio - 0.1
    assert undercut.contact_path[0] == pytest.approx(reach(undercut.gear.form_radius, undercut.gear.base_radius))


def test_flanks_that_do_not_meet_have_no_contact_ratio():
    apart = InvolutePair(InvoluteGear(20, 2), InvoluteGear(20, 2), 44.5)
    assert apart.contact_ratio == 0
    assert apart.nominal_contact_ratio < 0


def test_shortening_restores_the_bottom_clearance():
    plain = PAIRS["external shifted"]
    cut = plain.clearance_shortening
    assert cut == pytest.approx(3 * 0.96 - (plain.centre_distance - 54), abs=1e-12)
    tip = plain.gear.tip_radius - cut
    assert plain.centre_distance - tip - plain.mate.root_radius == pytest.approx(0.25 * 3, abs=1e-12)


@pytest.mark.parametrize(
    ("gear", "mate", "distance", "words"),
    [
        (InvoluteGear(20, 2), InvoluteGear(20, 3), None, "module of the two members is 2 and 3 mm"),
        (InvoluteGear(20, 2), InvoluteGear(20, 2, 15.0), None, "pressure angle of the two members is 20 and 15 deg"),
        (InvoluteGear(20, 2, helix_angle_deg=9), InvoluteGear(20, 2, helix_angle_deg=9), None, "must be opposite"),
        (InvoluteGear(20, 2, helix_angle_deg=9), InternalGear(60, 2, helix_angle_deg=-9), None, "must be equal"),
        (InvoluteGear(20, 2), InvoluteGear(20, 2), 37.0, "beyond 37.5877 mm"),
        (InvoluteGear(20, 2), InvoluteGear(20, 2), float("nan"), "centre distance"),
        (InvoluteGear(20, 2, profile_shift=-0.5), InvoluteGear(20, 2, profile_shift=-0.6), None, "must reach -0.8"),
        (InvoluteGear(60, 2), InternalGear(60, 2), None, "ring needs more teeth"),
    ],
    ids=["module", "angle", "hand", "hand in a ring", "too close", "no number", "shifts", "as many teeth"],
)
def test_members_that_cannot_work_together_are_refused(gear, mate, distance, words):
    with pytest.raises(DesignError, match=words):
        InvolutePair(gear, mate, distance)


def test_margins_belong_to_rings():
    assert PAIRS["ring"].margins.involute > 0
    with pytest.raises(DesignError, match="external gear"):
        _ = PAIRS["external"].margins


@settings(max_examples=100, deadline=None)
@given(st.integers(5, 80), st.integers(-200, 200), st.floats(-1, 1.5), st.floats(0.3, 0.5), st.floats(0, 0.6))
def test_shifts_and_distance_are_each_others_inverse(z1, z2, total, angle, helix):
    assume(abs(z2) > 4 and abs(z1 + z2) > 2)
    try:
        distance = centre_distance(z1, z2, total, angle, helix, module=2)
    except DesignError as refusal:
        assert any(c.isdigit() for c in str(refusal))
        return
    assert np.sign(distance) == np.sign(z1 + z2)
    assert shift_sum(z1, z2, distance, angle, helix, module=2) == pytest.approx(total, abs=1e-6)
    assert working_angle_at(z1, z2, distance, angle, helix, module=2) == pytest.approx(
        working_angle(z1, z2, total, angle, helix), abs=1e-6
    )


def test_no_involute_inside_the_base_circle():
    with pytest.raises(DesignError, match="inside the base circle of 10 mm"):
        reach(9.0, 10.0)
    with pytest.raises(DesignError, match="starts at the base circle"):
        InvoluteGear(20, 1).thickness_at(9.0)


def test_rack_drive_is_the_limit_of_a_large_wheel():
    pinion = InvoluteGear(18, 2, profile_shift=0.2)
    wheel = InvolutePair(pinion, InvoluteGear(200000, 2))
    assert RackDrive(pinion, 30).contact_ratio == pytest.approx(wheel.nominal_contact_ratio, abs=1e-3)
    assert RackDrive(pinion, 30).axis_height == pytest.approx(30 + 18 + 0.4)
    with pytest.raises(DesignError, match="must be above 0"):
        RackDrive(pinion, 0)
