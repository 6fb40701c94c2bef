"""Reducers as machines: parts in their places, ratios by the motions, refusals, and that they roll."""

import re
from dataclasses import replace

import numpy as np
import pytest

from gearsolid.contact.result import Verdict
from gearsolid.contact.roll import roll_engagements, roll_test
from gearsolid.errors import DesignError
from gearsolid.pairs.crank_discs import OutputRollers, Stack
from gearsolid.pairs.eccentric_shaft import EccentricShaft
from gearsolid.pairs.inside_out_reducer import InsideOutReducer
from gearsolid.pairs.reducer import PinWheelReducer
from gearsolid.pairs.reducer_ratios import disc_held, ring_held, two_stage_ring_held
from gearsolid.shop.bore import Bore
from gearsolid.teeth.lobed_ring import LobedRing, PinDisc
from gearsolid.teeth.pinwheel import CycloidDisc, PinRing

PLAIN = PinWheelReducer(
    CycloidDisc(29, 0.8, 30.0, 1.5, equidistant=0.05),
    PinRing(30, 30.0, 1.5, 30.4),
    OutputRollers(8, 19.5, 3.5, 0.2),
    Stack(6.0, 0.5, 5.0),
    Bore(22.0),
    Bore(8.0),
    72.0,
    shaft=EccentricShaft(6.0, 14.0, 10.0),
)
TWO_TEETH = PinWheelReducer(
    CycloidDisc(24, 1.2, 60.0, 4.0, equidistant=0.02, difference=2),
    PinRing(26, 60.0, 4.0, 60.4),
    OutputRollers(8, 40.0, 6.0, 0.1),
    Stack(8.0, 0.5, 6.0),
    Bore(40.0),
    Bore(14.0),
    140.0,
)
INSIDE_OUT = InsideOutReducer(
    PinDisc(20, 40.0, 4.0, 37.5),
    LobedRing(21, 1.6, 40.0, 4.0, equidistant=0.05),
    OutputRollers(8, 26.0, 4.0, 0.1),
    Stack(8.0, 0.5, 6.0),
    Bore(26.0),
    Bore(12.0),
    100.0,
    shaft=EccentricShaft(10.0, 18.0, 15.0),
)
REDUCERS = {"plain": PLAIN, "two teeth": TWO_TEETH, "inside out": INSIDE_OUT, "three discs": replace(PLAIN, discs=3)}
machine = pytest.mark.parametrize("machine", REDUCERS.values(), ids=REDUCERS)


def motion(machine, name):
    return next(p.motion for p in machine.parts if p.name == name)


@machine
def test_reducer_rolls_with_the_clearance_of_its_profile(machine):
    result = roll_test(machine)
    assert result.verdict is Verdict.ROLLS
    lobed = machine.disc if isinstance(machine, PinWheelReducer) else machine.ring
    rim = next(c for c in result.contacts if c.play_angle is not None)
    assert rim.clearance == pytest.approx(lobed.equidistant, rel=1e-4)
    assert lobed.play_deg * (1 - 1e-4) < rim.play_angle < 1.05 * lobed.play_deg


@pytest.mark.parametrize("machine", [TWO_TEETH, INSIDE_OUT], ids=["two teeth", "inside out"])
def test_something_always_touches_when_driven(machine):
    rim = next(c for c in roll_test(machine).contacts if c.contact_ratio is not None)
    assert rim.contact_ratio >= 1


@machine
def test_output_turns_by_the_ratio_and_discs_turn_with_it(machine):
    output = motion(machine, "output")
    assert 1 / output.rate == pytest.approx(machine.ratio)
    for k in range(machine.discs):
        disc = motion(machine, f"disc {k + 1}")
        assert disc.rate == output.rate
        assert abs(disc.centre(0.7)) == pytest.approx(machine.centre_distance)


@machine
def test_discs_stand_evenly_round_the_shaft_and_apart_along_it(machine):
    discs = [p for p in machine.parts if p.name.startswith("disc")]
    assert abs(sum(p.motion.centre(0.3) for p in discs)) < 1e-12
    tops = [p.body.z + p.body.width for p in discs]
    assert all(after.body.z > top for top, after in zip(tops, discs[1:], strict=False))


@pytest.mark.parametrize("machine", [PLAIN, INSIDE_OUT], ids=["plain", "inside out"])
def test_eccentrics_stay_in_the_bores_of_their_discs(machine):
    """Each eccentric is concentric with its disc at every input angle, and leaves room for a bearing."""
    eccentrics = [p for p in machine.parts if p.name.startswith("eccentric")]
    discs = [p for p in machine.parts if p.name.startswith("disc")]
    assert len(eccentrics) == len(discs) == 2
    for eccentric, disc in zip(eccentrics, discs, strict=True):
        curve = eccentric.body.outer.pieces[0].curve
        for psi in (0.0, 1.0, 4.0):
            centre = curve.centre * np.exp(1j * eccentric.motion.turn(psi))
            assert centre == pytest.approx(disc.motion.centre(psi), abs=1e-12)
        assert curve.radius < disc.body.bore.radius
        assert (eccentric.body.z, eccentric.body.width) == (disc.body.z, disc.body.width)
        assert eccentric.body.bore.diameter == machine.shaft.diameter
        assert eccentric.body.volume == pytest.approx(
            np.pi * (curve.radius**2 - eccentric.body.bore.radius**2) * eccentric.body.width
        )
    shaft = next(p for p in machine.parts if p.name == "input shaft").body
    flange = next(p for p in machine.parts if p.name == "output").body
    assert shaft.z == flange.z - machine.shaft.overhang
    assert shaft.z + shaft.width == machine.stack.height(2) + machine.shaft.overhang


def test_hole_pattern_drilled_wrong_binds():
    """Discs of 12 lobes for 6 rollers cannot be alike; the second drilled as the first leaves its rollers no room."""
    machine = PinWheelReducer(
        CycloidDisc(12, 0.8, 30.0, 1.5, equidistant=0.05),
        PinRing(13, 30.0, 1.5, 30.4),
        OutputRollers(6, 19.5, 3.5, 0.2),
        Stack(6.0, 0.5, 5.0),
        Bore(22.0),
        Bore(8.0),
        72.0,
    )
    assert not machine.identical_discs
    assert roll_test(machine).verdict is Verdict.ROLLS
    (first,) = (e.a for e in machine.engagements if (e.name_a, e.name_b) == ("disc 1", "rollers"))
    (second,) = (e for e in machine.engagements if (e.name_a, e.name_b) == ("disc 2", "rollers"))
    assert roll_engagements([replace(second, a=first)]).verdict is Verdict.BINDS


def test_ratios_of_the_machines_are_those_of_the_formulas():
    assert PLAIN.ratio == ring_held(29)
    assert TWO_TEETH.ratio == ring_held(24, 2) == -12
    assert INSIDE_OUT.ratio == ring_held(20)
    assert two_stage_ring_held(10, 38, 40) == 1 + 3.8 * disc_held(40)
    with pytest.raises(DesignError, match="whole number"):
        ring_held(0)


REFUSALS = {
    "pins do not match lobes": (lambda: replace(PLAIN, ring=PinRing(31, 30.0, 1.5, 30.4)), "must have 30 pins"),
    "pins do not match the difference": (
        lambda: replace(TWO_TEETH, ring=PinRing(25, 60.0, 4.0, 60.4)),
        "must have 26 pins",
    ),
    "another pin circle": (lambda: replace(PLAIN, ring=PinRing(30, 31.0, 1.5, 31.0)), "31 mm"),
    "thin rim": (lambda: replace(PLAIN, rim_diameter=63.0), "63 mm"),
    "five discs": (lambda: replace(PLAIN, discs=5), "5 discs"),
    "rollers too many": (lambda: replace(PLAIN, rollers=OutputRollers(16, 19.5, 3.5)), "run into each other"),
    "rollers outside the valleys": (lambda: replace(PLAIN, rollers=OutputRollers(8, 24.0, 3.5)), "27.65 mm"),
    "wide output bore": (lambda: replace(PLAIN, output_bore=Bore(33.0)), "16.5 mm"),
    "eccentric too small": (lambda: replace(PLAIN, shaft=EccentricShaft(12.5, 14.0, 5.0)), "above 14.1 mm"),
    "eccentric larger than the bore": (lambda: replace(PLAIN, shaft=EccentricShaft(6.0, 22.5, 5.0)), "at most"),
    "shaft fills the output bore": (lambda: replace(PLAIN, shaft=EccentricShaft(8.0, 14.0, 5.0)), "room to turn"),
    "no overhang": (lambda: EccentricShaft(8.0, 14.0, 0.0), "above 0"),
    "lobes do not match pins": (lambda: replace(INSIDE_OUT, disc=PinDisc(19, 40.0, 4.0, 37.5)), "must have 20 pins"),
    "ring for another circle": (lambda: replace(INSIDE_OUT, disc=PinDisc(20, 42.0, 4.0, 39.5)), "42 mm"),
    "ring with a thin rim": (lambda: replace(INSIDE_OUT, rim_diameter=91.0), "91.3 mm"),
}


@pytest.mark.parametrize(("make", "words"), REFUSALS.values(), ids=REFUSALS)
def test_refusal(make, words):
    with pytest.raises(DesignError, match=re.escape(words)):
        make()
