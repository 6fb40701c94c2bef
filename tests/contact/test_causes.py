"""Named causes: each is provoked, named and sized, and its remedy, applied, makes it go away."""

import re
from dataclasses import dataclass, replace
from math import sin

import pytest

from gearsolid.contact.causes import causes
from gearsolid.contact.finding import Cause
from gearsolid.contact.result import Verdict
from gearsolid.contact.roll import roll_test
from gearsolid.pairs.blank import Blank
from gearsolid.pairs.engagement import Engagement
from gearsolid.pairs.planetary import PlanetaryStage
from gearsolid.pairs.spur_pair import SpurPair
from gearsolid.teeth.clock import cycloidal_pair
from gearsolid.teeth.clock_pair import Drives
from gearsolid.teeth.cycloidal_relations import contact_ratio
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from tests.contact.machines import involute_pair, reducer, stage

BLANK = Blank(1.0)


def pair(a, b, distance):
    return SpurPair(a, b, distance, BLANK, BLANK)


def gears(z1, z2, distance, shift=0.0):
    return pair(InvoluteGear(z1, 1.0, profile_shift=shift), InvoluteGear(z2, 1.0), distance)


def found(machine):
    return causes(machine, roll_test(machine))


def named(machine, cause):
    (one,) = [f for f in found(machine) if f.cause is cause]
    return one


def figures(text):
    return [float(x) for x in re.findall(r"-?\+?\d+\.\d+", text)]


def textbook(shortening=0.0):
    return PlanetaryStage(
        InvoluteGear(16, 1.0),
        InvoluteGear(16, 1.0),
        InternalGear(48, 1.0, tip_shortening=shortening),
        4,
        16.0,
        BLANK,
        BLANK,
        BLANK,
    )


def test_the_textbook_set_of_full_addenda_is_caught_sized_and_cured():
    """16/16/48: the ring's tip may reach no lower than radius 23.2070 (involute condition, EMGT eq. 5-3, computed)."""
    f = named(textbook(), Cause.INVOLUTE)
    assert f.binds
    assert len(f.pairs) == 4
    assert f.pairs[0] == ("planet 1", "ring")
    assert f.size == pytest.approx(23.2070 - 23.0, abs=5e-5)
    assert "no lower than 23.2070 mm" in f.remedy
    assert roll_test(textbook(f.size + 1e-6)).verdict is Verdict.TOUCHES
    assert Cause.INVOLUTE not in {x.cause for x in found(textbook(f.size + 1e-6))}
    assert roll_test(textbook(f.size - 0.05)).verdict is Verdict.BINDS


def test_interference_that_play_makes_up_for_is_reported_and_does_not_bind():
    f = named(stage(16, 16, 48, 4, thinning=0.05), Cause.INVOLUTE)
    assert not f.binds
    assert "ratio wavers" in f.sentence


def test_a_ring_tip_in_the_fillet_of_its_planet_is_root_interference():
    machine = stage(thinning=0.0)
    f = named(machine, Cause.ROOT)
    cured = stage(thinning=0.0, ring_tip_shortening=f.size)
    assert f.pairs[0] == ("planet 1", "ring")
    assert f.binds == (roll_test(machine).verdict is Verdict.BINDS)
    assert Cause.ROOT not in {x.cause for x in found(cured)}
    at_ring = next(c for c in roll_test(cured).contacts if c.name_b == "ring")
    assert at_ring.verdict is Verdict.TOUCHES
    assert at_ring.transmission_error < 1e-6


@pytest.mark.parametrize("ring", [False, True], ids=["external", "ring"])
def test_negative_play_is_named_and_either_remedy_cures_it(ring):
    mate = InternalGear(60, 1.0, tip_shortening=0.4) if ring else InvoluteGear(30, 1.0)
    machine = pair(InvoluteGear(24, 1.0), mate, 18.08 if ring else 26.93)
    f = named(machine, Cause.NEGATIVE_PLAY)
    assert f.binds
    assert f.size == pytest.approx(-roll_test(machine).worst.play, abs=1e-6)
    distance, _, thinning = figures(f.remedy)
    assert roll_test(replace(machine, centre_distance=distance)).worst.play == pytest.approx(0, abs=1e-4)
    thinner = replace(machine, driver=replace(machine.driver, tooth_thinning=thinning))
    assert roll_test(thinner).worst.play == pytest.approx(0, abs=1e-4)


@pytest.mark.parametrize("turned", [0.3, 180 / 27], ids=["little", "half a pitch"])
def test_a_planet_out_of_step_is_told_how_to_turn(turned):
    wrong = [f for f in found(stage(turns=(0.0, turned, 0.0))) if f.cause is Cause.OUT_OF_STEP]
    assert {f.pairs[0] for f in wrong} == {("sun", "planet 2"), ("planet 2", "ring")}
    at_sun = next(f for f in wrong if f.pairs[0][0] == "sun")
    back = figures(at_sun.remedy)[0]
    assert roll_test(stage(turns=(0.0, turned + back, 0.0))).verdict is Verdict.ROLLS


def test_undercut_that_takes_active_flank_is_reported_with_the_shift_that_saves_it():
    """x 0.415 for 10 teeth of 20 deg: Elements of Metric Gear Technology, from memory."""
    f = named(gears(10, 30, 20.0), Cause.UNDERCUT)
    assert not f.binds
    assert f.remedy.endswith("to 0.415")
    assert Cause.UNDERCUT not in {x.cause for x in found(gears(10, 30, 20.42, shift=0.4152))}


def test_a_contact_ratio_under_one_is_sized_along_the_line_of_action():
    f = named(gears(20, 30, 26.3), Cause.CONTACT_RATIO)
    ratio = figures(f.sentence)[0]
    assert ratio < 1
    # The base pitch of module 1 at 20 deg is 2.9521 mm.
    assert f.size == pytest.approx((1 - ratio) * 2.9521, abs=2e-3)
    assert not found(gears(20, 30, 25.3))


def test_a_pinion_that_goes_in_along_the_axis_only():
    """24/36 fails the trimming condition and 30/48 keeps it: Elements of Metric Gear Technology, eq. 5-9, computed."""
    few = pair(InvoluteGear(24, 1.0), InternalGear(36, 1.0), 6.0)
    f = named(few, Cause.TRIMMING)
    assert not f.binds
    assert "along the axis" in f.remedy
    shorter = replace(few, driver=replace(few.driver, tip_shortening=figures(f.remedy)[0] + 1e-4))
    assert Cause.TRIMMING not in {x.cause for x in found(shorter)}
    many = pair(InvoluteGear(30, 1.0), InternalGear(48, 1.0), 9.0)
    assert Cause.TRIMMING not in {x.cause for x in found(many)}


def test_tips_that_cross_in_a_ring_of_few_more_teeth():
    machine = pair(InvoluteGear(34, 1.0), InternalGear(40, 1.0), 3.0)
    f = named(machine, Cause.TIP)
    assert f.binds
    assert roll_test(machine).verdict is Verdict.BINDS
    short, root = figures(f.remedy)[0], named(machine, Cause.ROOT).size
    cured = pair(InvoluteGear(34, 1.0, tip_shortening=short), InternalGear(40, 1.0, tip_shortening=root + 1e-4), 3.0)
    assert roll_test(cured).verdict is Verdict.TOUCHES
    still = pair(InvoluteGear(34, 1.0), InternalGear(40, 1.0, tip_shortening=root + 1e-4), 3.0)
    assert roll_test(still).verdict is Verdict.BINDS


@dataclass(frozen=True)
class Beside:
    """Two wheels that stand beside each other and never work together."""

    engagement: Engagement
    title = "beside"
    ratio = 1.0
    centre_distance = 1.0
    parts = ()

    @property
    def engagements(self):
        return (self.engagement,)


def test_neighbours_that_collide():
    e = involute_pair(20, 20, distance=21.9)
    e = replace(e, b=e.a, must_touch=False, angle_b=0.0)
    f = named(Beside(e), Cause.NEIGHBOURS)
    assert f.binds
    assert f.size == pytest.approx(0.1, abs=1e-3)
    apart = float(re.search(r"axes (\d+\.\d+) mm apart", f.remedy)[1])
    assert not found(Beside(replace(e, centre_b=e.centre_b + apart + 1e-3)))


def clock(leaves, **numbers):
    return cycloidal_pair(60, leaves, 0.5, drives=Drives.WHEEL, play=0.1, early=0.05, **numbers)


def clock_machine(members, distance=None):
    return pair(members.driver, members.driven, distance or members.centre_distance)


def test_early_contact_of_eight_leaves_is_reported_as_long_as_its_addendum_says():
    """The path of contact before the line of centres is an arc of the driven member's describing circle."""
    members = clock(8)
    f = named(clock_machine(members), Cause.EARLY)
    assert not f.binds
    approach = contact_ratio(members.driver, members.driven).approach
    radius = members.driven.addendum_circle
    turned = approach * members.driven.pitch / radius
    assert f.size == pytest.approx(radius * sin(turned), rel=1e-3)
    assert not found(clock_machine(clock(12)))


def test_a_deepened_clock_pair_that_binds_is_named_by_what_meets():
    members = clock(8)
    # A little too deep the faces meet, then the wheel's tip corner strikes the leaf, then the tips reach the roots.
    little = {f.cause for f in found(clock_machine(members, members.centre_distance - 0.15)) if f.binds}
    assert little == {Cause.NEGATIVE_PLAY}
    causes_found = {f.cause for f in found(clock_machine(members, members.centre_distance - 0.2)) if f.binds}
    assert causes_found == {Cause.TIP}
    deeper = {f.cause for f in found(clock_machine(members, members.centre_distance - 0.35)) if f.binds}
    assert deeper == {Cause.ROOT}


def test_grown_ring_pins_leave_no_play():
    f = named(reducer(equidistant=0.1, pin_growth=0.15), Cause.NEGATIVE_PLAY)
    assert f.pairs == (("ring pins", "disc 1"), ("ring pins", "disc 2"))
    assert "0.0500 mm" in f.sentence
    assert not found(reducer(equidistant=0.1, pin_growth=0.05))


def test_a_sound_pair_has_no_findings():
    assert found(gears(20, 30, 25.0)) == ()
