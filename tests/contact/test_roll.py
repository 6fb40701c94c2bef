"""The roll test against closed forms of the involute, published contact ratios and an independent polygon check."""

from dataclasses import replace
from math import cos, pi, radians, tan

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from gearsolid.contact.clearance import distances_at, least_distance, sweep
from gearsolid.contact.proof import prove
from gearsolid.contact.result import Verdict
from gearsolid.contact.roll import roll_engagements, roll_test
from gearsolid.curves.loops import pins
from gearsolid.errors import DesignError
from gearsolid.pairs.engagement import Engagement
from tests.contact.machines import involute_pair, reducer, stage
from tests.contact.slow import SlowPair


def only(e):
    return roll_engagements([e]).contacts[0]


def inv(a: float) -> float:
    return tan(a) - a


@pytest.mark.parametrize(
    ("counts", "printed"),
    [((17, 17), 1.515), ((20, 20), 1.557), ((25, 25), 1.612), ((20, 40), 1.635), ((50, 50), 1.755), ((17, 100), 1.684)],
    ids=str,
)
def test_contact_ratio_counted_on_the_flanks_is_the_charted_one(counts, printed):
    """Chart of Elements of Metric Gear Technology for 20 deg, no shift (17/17, 20/20 from memory; others computed)."""
    assert only(involute_pair(*counts)).contact_ratio == pytest.approx(printed, abs=6e-4)


def test_shifted_pair_has_its_published_contact_ratio():
    """Elements of Metric Gear Technology, table 4-4: m 3, 12/24, x 0.6/0.36, a 56.4999, ratio 1.202, tips shortened."""
    from gearsolid.pairs.engagement import engage
    from gearsolid.pairs.motion import Motion
    from gearsolid.teeth.involute import InvoluteGear

    a = InvoluteGear(12, 3.0, profile_shift=0.6, tip_shortening=3 * 1.6 - 4.420)
    b = InvoluteGear(24, 3.0, profile_shift=0.36, tip_shortening=3 * 1.36 - 3.700)
    wheel = Motion(centre_radius=56.4999, angle=pi + pi / 24, rate=-0.5)
    found = only(engage("pinion", a.outline, Motion(rate=1.0), "wheel", b.outline, wheel))
    assert found.contact_ratio == pytest.approx(1.202, abs=1e-3)
    assert abs(found.clearance) < 1e-4
    assert found.transmission_error < 1e-9


@pytest.mark.parametrize(
    ("module", "z1", "z2", "distance"), [(3.0, 20, 24, 66.1), (2.0, 20, 40, 60.05), (1.5, 25, 30, 41.5)]
)
def test_opened_centre_distance_gives_the_closed_form_play_and_gap(module, z1, z2, distance):
    """ISO 21771: jwt = 2 a' (inv awt' - inv awt), normal gap of a centred tooth half of jwt cos awt'."""
    nominal = module * (z1 + z2) / 2
    working = np.arccos(nominal * cos(pi / 9) / distance)
    play = 2 * distance * (inv(working) - inv(pi / 9))
    found = only(involute_pair(z1, z2, module, distance=distance))
    assert found.verdict is Verdict.ROLLS
    assert found.play == pytest.approx(play, abs=1e-8)
    assert found.clearance == pytest.approx(play * cos(working) / 2, abs=1e-8)
    assert found.transmission_error < 1e-9


def test_closing_beyond_the_play_binds_with_the_closed_form_depth():
    module, z1, z2, thinning = 1.5, 20, 30, 0.05
    nominal = module * (z1 + z2) / 2

    def gap(distance: float) -> float:
        working = np.arccos(nominal * cos(pi / 9) / distance)
        return (distance * (inv(working) - inv(pi / 9)) + thinning * distance / nominal) * cos(working)

    tight = brentq(gap, nominal - 0.3, nominal)
    touching = only(involute_pair(z1, z2, module, thinning=thinning, distance=tight))
    assert touching.verdict is Verdict.TOUCHES
    closed = tight - 0.02
    found = only(involute_pair(z1, z2, module, thinning=thinning, distance=closed))
    assert found.verdict is Verdict.BINDS
    assert found.clearance == pytest.approx(gap(closed), abs=1e-6)
    assert gap(closed) < -0.006
    assert only(involute_pair(z1, z2, module, thinning=thinning, distance=tight + 0.02)).verdict is Verdict.ROLLS


def test_planet_half_a_pitch_out_binds_with_the_depth_of_the_polygon_check():
    right = roll_test(stage())
    assert right.verdict is Verdict.ROLLS
    machine = stage(turns=(0.0, 180 / 27, 0.0))
    wrong = roll_test(machine)
    assert wrong.verdict is Verdict.BINDS
    bad = [c for c in wrong.contacts if c.verdict is Verdict.BINDS]
    assert {(c.name_a, c.name_b) for c in bad} == {("sun", "planet 2"), ("planet 2", "ring")}
    for c in bad:
        e = next(e for e in machine.engagements if (e.name_a, e.name_b) == (c.name_a, c.name_b))
        slow = SlowPair(e, 3000)
        at = radians(c.input_angle)
        assert slow.least(at) == pytest.approx(c.clearance, abs=1e-3)
        # The angle named is where the depth is greatest: a little to either side it is less.
        step = e.period / 200
        assert max(-slow.least(at - step), -slow.least(at + step)) < -c.clearance + 1e-4


@pytest.mark.parametrize("growth", [0.05, 0.12, 0.15])
def test_grown_ring_pins_change_the_gap_by_their_growth(growth):
    """A disc made `equidistant` inside the exact one leaves that gap at every pin; a larger pin radius eats it."""
    found = roll_test(reducer(equidistant=0.1, pin_growth=growth))
    at_pins = next(c for c in found.contacts if c.name_a == "ring pins")
    assert at_pins.clearance == pytest.approx(0.1 - growth, abs=1e-7)
    assert at_pins.verdict is (Verdict.BINDS if growth > 0.1 else Verdict.ROLLS)
    assert (found.verdict is Verdict.BINDS) == (growth > 0.1)


def test_output_rollers_have_the_stated_clearance():
    found = next(c for c in roll_test(reducer()).contacts if c.name_b == "rollers")
    assert found.clearance == pytest.approx(0.1, abs=1e-7)
    assert found.play == pytest.approx(0.2, abs=2e-3)


def test_the_textbook_planetary_set_of_full_addenda_is_caught():
    """16/16/48 with full addenda fails planet-ring involute interference (common textbook example, 20 deg)."""
    found = roll_test(stage(16, 16, 48, 4, thinning=0.0))
    at_ring = next(c for c in found.contacts if c.name_b == "ring")
    assert at_ring.verdict is Verdict.BINDS
    assert 0.001 < -at_ring.clearance < 0.1


def random_pairs():
    return st.builds(
        lambda z1, z2, module, thin, open_by: involute_pair(
            z1, z2, module, thinning=thin * module, distance=module * ((z1 + z2) / 2 + open_by)
        ),
        st.integers(17, 40),
        st.integers(17, 60),
        st.sampled_from([0.5, 1.0, 2.5]),
        st.floats(0.0, 0.1),
        st.floats(-0.08, 0.1),
    )


@settings(max_examples=8, deadline=None)
@given(random_pairs())
def test_least_distance_agrees_with_the_polygon_check_where_it_is_named(e):
    found = only(e)
    assert SlowPair(e, 2000).least(radians(found.input_angle)) == pytest.approx(found.clearance, abs=2e-5)


@settings(max_examples=6, deadline=None)
@given(random_pairs(), st.floats(0, 1))
@example(involute_pair(20, 30, thinning=0.05), 0.37)
def test_no_angle_is_nearer_than_the_named_one(e, share):
    assert SlowPair(e, 800).least(share * e.period) > only(e).clearance - 5e-5


@settings(max_examples=6, deadline=None)
@given(random_pairs(), st.integers(-5, 5), st.integers(-5, 5))
def test_whole_pitches_change_nothing(e, steps_a, steps_b):
    turned = replace(e, angle_a=e.angle_a + steps_a * e.a.pitch_angle, angle_b=e.angle_b + steps_b * e.b.pitch_angle)
    one, two = only(e), only(turned)
    assert two.clearance == pytest.approx(one.clearance, abs=1e-8)
    assert two.play == pytest.approx(one.play, abs=1e-8)
    assert two.contact_ratio == pytest.approx(one.contact_ratio, abs=1e-4)


def swapped(e):
    names = ("name", "centre", "angle", "rate")
    return replace(
        e,
        a=e.b,
        b=e.a,
        **{f"{n}_{x}": getattr(e, f"{n}_{y}") for n in names for x, y in (("a", "b"), ("b", "a"))},
    )


@settings(max_examples=6, deadline=None)
@given(random_pairs())
def test_swapping_the_partners_swaps_the_report(e):
    one, two = only(e), only(swapped(e))
    assert two.verdict is one.verdict
    assert two.clearance == pytest.approx(one.clearance, abs=2e-6)
    assert two.play == pytest.approx(one.play, abs=1e-6)
    assert (two.name_a, two.name_b) == (one.name_b, one.name_a)


def test_a_turned_wheel_meets_the_flank_it_was_turned_towards():
    e = involute_pair(20, 30, thinning=0.05)
    half = only(e).play_angle / 2
    assert only(replace(e, angle_b=e.angle_b + radians(0.9 * half))).verdict is Verdict.ROLLS
    assert only(replace(e, angle_b=e.angle_b + radians(half))).verdict is Verdict.TOUCHES
    assert only(replace(e, angle_b=e.angle_b + radians(1.01 * half))).verdict is Verdict.BINDS
    assert only(replace(e, angle_b=e.angle_b - radians(1.01 * half))).verdict is Verdict.BINDS


def test_parts_far_apart_get_their_distance():
    e = replace(involute_pair(20, 20, distance=30.0), must_touch=False)
    found = only(e)
    assert found.clearance == pytest.approx(SlowPair(e).least(radians(found.input_angle)), abs=1e-5)
    assert found.clearance > 30 - 2 * 11
    assert found.play is None


def test_pitches_that_do_not_pass_in_step_are_refused():
    with pytest.raises(DesignError, match=r"passes 20 pitches.*10"):
        replace(involute_pair(20, 30), rate_b=-1 / 3)


def test_sentence_names_verdict_parts_amount_angle_and_place():
    sentence = roll_engagements([involute_pair(20, 30, distance=24.9)]).sentence
    assert sentence.startswith("binds: pinion with wheel, depth 0.0")
    assert "input angle" in sentence
    assert " mm (" in sentence


def test_proof_is_a_lower_bound_that_more_poses_confirm():
    e = involute_pair(20, 30, thinning=0.05)
    found = only(e)
    assert 0 < found.proven < found.clearance
    psi = np.linspace(0, e.period, 4001)
    assert distances_at(e, psi).min() >= found.clearance - 1e-9


def test_proof_gives_up_within_its_budget_and_says_so():
    e = involute_pair(20, 30, thinning=0.05)
    s = sweep(e)
    least, distances = least_distance(e, s, e.period / s.psi.size)
    enough = prove(e, s.psi, distances, least.distance)
    scant = prove(e, s.psi, distances, least.distance, budget=s.psi.size)
    assert scant.bound < least.distance / 2 <= enough.bound


@pytest.mark.parametrize("seed", range(4))
def test_a_bump_seen_within_a_hundredth_of_a_degree_is_found(seed):
    """A pimple on one wheel's tip circle grazes a pimple of the other at a random angle, for 0.01 degree of input."""
    rng = np.random.default_rng(seed)
    at, radius, apart = rng.uniform(0, 2 * pi), 0.002, 40.0
    # Two pins that pass each other on the line of centres, overlapping just there; 0.01 degree wide.
    half_width = radians(0.005)
    reach_a = reach_b = apart / 2
    slip = (reach_a + reach_b) * half_width
    depth = slip**2 / (2 * 2 * radius) if slip < radius else radius
    e = Engagement(
        "a",
        "b",
        pins(1, reach_a, radius),
        pins(1, reach_b - 2 * radius + depth, radius),
        0j,
        complex(apart),
        -at,
        pi + at,
        1.0,
        -1.0,
        must_touch=False,
    )
    found = only(e)
    assert found.verdict is Verdict.BINDS
    assert found.input_angle == pytest.approx(np.degrees(at), abs=0.02)
    assert found.clearance == pytest.approx(-depth, rel=1e-3)
