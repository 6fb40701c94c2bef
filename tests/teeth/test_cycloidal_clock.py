"""Clock gears and clock pairs: radial flanks, arc tops, and no more early contact than needed."""

from dataclasses import replace
from math import cos, degrees, inf, pi, radians, sin, tan

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gearsolid.curves.primitives import Arc, Segment
from gearsolid.errors import DesignError
from gearsolid.teeth.clock import (
    LeafTop,
    cycloidal_pair,
    leaf_thickness,
    ogival_pair,
    practical_addendum_factor,
    theoretical_addendum_factor,
    usual_top,
)
from gearsolid.teeth.clock_gear import ClockGear
from gearsolid.teeth.clock_pair import Drives
from gearsolid.teeth.cycloidal import CycloidalGear
from gearsolid.teeth.cycloidal_relations import contact_ratio
from gearsolid.teeth.leaf_tip import Ogive, RoundTip

OGIVAL = ClockGear(64, 1, pi / 2, Ogive(1.47, 2.06), pi / 2, 0.2)
ROUND = ClockGear(8, 1, 1.05, RoundTip(), 1.8, inf)


def curves(gear, role):
    return [p.curve for p in gear.outline.pieces if p.role == role]


def drawn_from(curve):
    """The curve under its turns, mirrors and sections."""
    return drawn_from(curve.base) if hasattr(curve, "base") else curve


@pytest.mark.parametrize("gear", [OGIVAL, ROUND], ids=["ogival wheel", "round leaves"])
def test_every_piece_is_an_arc_or_a_line(gear):
    assert all(isinstance(drawn_from(p.curve), Arc | Segment) for p in gear.outline.pieces)


@pytest.mark.parametrize("gear", [OGIVAL, ROUND], ids=["ogival wheel", "round leaves"])
def test_flanks_are_radial_and_as_far_apart_as_the_thickness(gear):
    flank = curves(gear, "flank")[0]
    z = flank.point(flank.sample(9))
    assert np.ptp(np.angle(z)) < 1e-12
    assert -2 * np.angle(z[0]) * gear.reference_radius == pytest.approx(gear.thickness, rel=1e-12)


def test_ogive_has_the_arcs_it_was_given_and_meets_in_a_point():
    lower, upper = curves(OGIVAL, "flank")[1:3]
    assert isinstance(lower, Arc)
    assert lower.radius == 2.06
    assert lower.end == pytest.approx(32 + 1.47, abs=1e-12)
    assert upper.start == pytest.approx(lower.end, abs=1e-12)
    assert curves(OGIVAL, "tip") == []
    assert OGIVAL.tip_radius == pytest.approx(33.47)


def test_kink_is_the_angle_drawn_and_is_not_forced_to_nothing():
    flank, arc = curves(OGIVAL, "flank")[:2]
    drawn = degrees(np.angle(arc.tangent(np.asarray(0.0)) / flank.tangent(np.asarray(flank.span[1]))))
    assert drawn == pytest.approx(OGIVAL.tip.kink_deg(32, pi / 4), abs=1e-9)
    assert drawn > 4


def test_cut_ogive_has_a_land_on_the_tip_circle():
    cut = replace(OGIVAL, tip=Ogive(1.47, 2.06, 0.08))
    (land,) = curves(cut, "tip")
    assert abs(land.start) == pytest.approx(33.39, rel=1e-12)
    assert cut.addendum == pytest.approx(1.39)
    whole = curves(OGIVAL, "flank")[1]
    assert abs(land.start - whole.centre) == pytest.approx(whole.radius, rel=1e-12), "the arcs are the same"
    assert cut.outline.r_max == pytest.approx(33.39, rel=1e-12)


def test_arcs_of_a_high_ogive_bulge_over_the_flanks():
    """With many leaves the recalled standard's arcs of 1.40 fa lean outwards; they are drawn so."""
    wheel = ogival_pair(160, 20, 1).wheel
    assert wheel.tip.kink_deg(80, pi / 4) < 0
    arc = curves(wheel, "flank")[1]
    widest = wheel.tip.widest(80, pi / 320)
    assert np.max(-np.angle(arc.point(arc.sample(2001)))) == pytest.approx(widest, abs=1e-8)
    assert widest > pi / 320


def test_round_tip_is_one_arc_that_leaves_no_kink():
    flank, arc = curves(ROUND, "flank")[:2]
    half = 1.05 / 8
    assert isinstance(arc, Arc)
    assert arc.radius == pytest.approx(4 * tan(half))
    assert abs(np.angle(arc.tangent(np.asarray(0.0)) / flank.tangent(np.asarray(flank.span[1])))) < 1e-9
    assert ROUND.outline.r_max == pytest.approx(4 / cos(half) + arc.radius, rel=1e-12)
    assert ROUND.tip_radius == pytest.approx(ROUND.outline.r_max, rel=1e-12)


def test_full_round_root_touches_both_leaves():
    fillet = curves(ROUND, "fillet")[0]
    gap = pi / 8 - 1.05 / 8
    centre = ROUND.root_radius / (1 - sin(gap))
    assert fillet.radius == pytest.approx(centre * sin(gap), rel=1e-9)
    assert curves(ROUND, "root") == []
    assert ROUND.form_radius == pytest.approx(centre * cos(gap), rel=1e-9)


@pytest.mark.parametrize(
    ("build", "words"),
    [
        (lambda: replace(ROUND, teeth=4), "4 teeth"),
        (lambda: replace(ROUND, module=-1.0), "module is -1 mm"),
        (lambda: replace(ROUND, thickness=3.2), "pitch, 3.142 mm"),
        (lambda: replace(ROUND, dedendum=4.0), "reference radius, 4 mm"),
        (lambda: replace(ROUND, root_fillet=2.0), "largest is 0.76"),
        (lambda: Ogive(0, 1), "height of the point"),
        (lambda: Ogive(1, inf), "arc radius of an ogive is inf"),
        (lambda: Ogive(1, 1, 1), "below its height, 1 mm"),
        (lambda: replace(OGIVAL, tip=Ogive(1.47, 0.5)), "below 0.94[0-9]* mm they dip"),
        (lambda: replace(OGIVAL, thickness=3.0, tip=Ogive(3.0, 2.0), root_fillet=0.0), "leave it 2.81[0-9]* deg"),
        (lambda: ogival_pair(60, 5, 1), "5 leaves"),
        (lambda: ogival_pair(8, 8, 1), "the wheel must have more teeth"),
        (lambda: ogival_pair(60, 8, 0), "module is 0 mm"),
        (lambda: cycloidal_pair(60, 8, 1, play=0.6), "play is 0.6"),
        (lambda: cycloidal_pair(60, 8, 1, early=0), "early contact is 0 "),
        (lambda: cycloidal_pair(60, 6, 1, play=0.35, early=0.3), "pointed they reach 0.[0-9]+"),
    ],
    ids=range(16),
)
def test_refusals_name_the_number_and_the_limit(build, words):
    with pytest.raises(DesignError, match=words):
        build()


def test_least_arc_radius_named_in_the_refusal_is_enough():
    with pytest.raises(DesignError) as refusal:
        replace(OGIVAL, tip=Ogive(1.47, 0.5))
    least = float(str(refusal.value).split("below ")[1].split()[0])
    gear = replace(OGIVAL, tip=Ogive(1.47, least + 1e-5))
    assert gear.outline.r_max == pytest.approx(gear.tip_radius, rel=1e-6)


@pytest.mark.parametrize(("leaves", "top"), [(6, "C"), (7, "C"), (8, "B"), (9, "B"), (10, "A"), (16, "A")])
def test_usual_tops(leaves, top):
    """From memory."""
    assert usual_top(leaves) is LeafTop(top)


def test_ogival_pair_follows_the_standard():
    """BS 978-2:1952, from memory: arcs of 1.40 fa, wheel dedendum pi/2, pinion dedendum fa + 0.4, in modules."""
    pair = ogival_pair(64, 8, 0.5)
    fa = practical_addendum_factor(8, 8)
    assert fa == pytest.approx(0.95 * theoretical_addendum_factor(8, 8))
    wheel, pinion = pair.wheel, pair.pinion
    assert pair.centre_distance == 18
    assert wheel.tip == Ogive(fa * 0.5, 1.40 * fa * 0.5)
    assert (wheel.thickness, wheel.dedendum) == pytest.approx((pi / 4, pi / 4))
    assert (pinion.thickness, pinion.dedendum) == pytest.approx((0.525, (fa + 0.4) * 0.5))
    assert pinion.tip == Ogive(0.335, 0.35)
    assert (pair.driver, pair.driven) == (wheel, pinion)


@settings(max_examples=60, deadline=None)
@given(leaves=st.integers(6, 40), ratio=st.floats(1.5, 12), module=st.floats(0.07, 4), top=st.sampled_from(LeafTop))
def test_ogival_pairs_of_any_count_can_be_made(leaves, ratio, module, top):
    pair = ogival_pair(round(leaves * ratio) + 1, leaves, module, top=top)
    wheel, pinion = pair.wheel, pair.pinion
    assert wheel.tip_radius + pinion.root_radius < pair.centre_distance
    assert pinion.tip_radius + wheel.root_radius < pair.centre_distance
    assert wheel.thickness + pinion.thickness < pi * module
    assert leaf_thickness(leaves) * module == pinion.thickness


@pytest.mark.parametrize("drives", Drives)
@pytest.mark.parametrize(("teeth", "leaves"), [(60, 6), (64, 8), (80, 10), (96, 12), (30, 12)])
def test_exact_pair_starts_contact_no_earlier_than_needed(teeth, leaves, drives):
    pair = cycloidal_pair(teeth, leaves, 0.8, drives=drives, early=0.04)
    eps = contact_ratio(pair.driver, pair.driven)
    assert eps.total == pytest.approx(1.04, abs=1e-9)
    assert eps.recess <= 1 + 1e-12
    assert pair.wheel.addendum_circle == pytest.approx(pair.pinion.reference_radius / 2)
    assert pair.pinion.addendum_circle == pytest.approx(pair.wheel.reference_radius / 2)
    if eps.recess < 1 - 1e-9:
        assert pair.driver.addendum == pytest.approx(0.95 * pair.driver.pointed_addendum)


def test_exact_pair_thins_the_leaves_by_its_play():
    pair = cycloidal_pair(64, 8, 1, play=0.1)
    assert pair.wheel.thickness == pytest.approx(pi / 2)
    assert pair.pinion.thickness == pytest.approx(pi / 2 - 0.1 * pi)


@settings(max_examples=60, deadline=None)
@given(
    leaves=st.integers(6, 30),
    more=st.integers(1, 150),
    play=st.floats(0, 0.3),
    early=st.floats(0.01, 0.2),
    drives=st.sampled_from(Drives),
)
def test_exact_pairs_can_be_made_or_say_why_not(leaves, more, play, early, drives):
    try:
        pair = cycloidal_pair(leaves + more, leaves, 1, drives=drives, play=play, early=early)
    except DesignError as refusal:
        assert any(c.isdigit() for c in str(refusal))
        return
    assert isinstance(pair.wheel, CycloidalGear)
    assert contact_ratio(pair.driver, pair.driven).total >= 1 + early - 1e-9
    assert pair.wheel.outline
    assert pair.pinion.outline


def test_leaf_angle_and_thickness_are_one():
    leaf = ClockGear(10, 1, radians(11) * 5, RoundTip(), 1.5)
    first = curves(leaf, "flank")[0]
    assert isinstance(first, Segment)
    assert degrees(-2 * np.angle(first.last)) == pytest.approx(11)
