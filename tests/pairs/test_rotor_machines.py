"""Rotor sets and lobe rotors as machines: conjugate, clearance as designed, volume two ways."""

import re
from dataclasses import replace

import numpy as np
import pytest

from gearsolid.contact.result import Verdict
from gearsolid.contact.roll import roll_engagements, roll_test
from gearsolid.curves.field import field_of
from gearsolid.errors import DesignError
from gearsolid.pairs.lobe_rotors import LobeRotors
from gearsolid.pairs.rotor_set import RotorSet
from gearsolid.shop.bore import Bore
from gearsolid.teeth.lobes import LobeRotor
from gearsolid.teeth.pinwheel import CycloidDisc
from gearsolid.teeth.rotors import OuterRotor


def rotor_set(lobes=6, eccentricity=3.56, circle=33.642, radius=14.062, clearance=0.0, fillet=1.0):
    inner = CycloidDisc(lobes - 1, eccentricity, circle, radius, equidistant=clearance)
    outer = OuterRotor(lobes, circle, radius, circle - radius + 2 * eccentricity + 0.2, fillet)
    return RotorSet(inner, outer, 16.46, Bore(10.0), 2 * (outer.root_radius + 5))


def lobe_rotors(lobes, inset=0.0):
    return LobeRotors(LobeRotor(lobes, 40.0, inset), 100.0, Bore(12.0))


@pytest.mark.parametrize(
    "machine",
    [rotor_set(), rotor_set(9, 1.5, 20.0, 4.0, fillet=0.0), rotor_set(4, 3.0, 20.0, 9.0, fillet=0.5)],
    ids=lambda m: m.title,
)
def test_rotor_set_is_conjugate(machine):
    (contact,) = roll_test(machine).contacts
    assert np.max(np.abs(contact.clearances)) < 1e-6
    assert abs(contact.clearance) < 1e-6
    assert contact.transmission_error < 1e-7
    assert abs(contact.play_angle) < 1e-6


def test_clearance_of_a_rotor_set_is_the_equidistant_amount():
    (contact,) = roll_test(rotor_set(clearance=0.05)).contacts
    assert contact.verdict is Verdict.ROLLS
    assert contact.clearance == pytest.approx(0.05, rel=1e-6)


def test_a_larger_eccentricity_binds():
    good = rotor_set(clearance=0.05)
    inner = replace(good.inner, eccentricity=3.7, equidistant=0.0)
    outer = replace(good.outer, root_radius=27.5)
    wide = replace(good, inner=inner, outer=outer)
    assert roll_test(wide).verdict is Verdict.TOUCHES
    spoiled = replace(good.inner, equidistant=-0.05)
    assert roll_test(replace(good, inner=spoiled)).verdict is Verdict.BINDS


@pytest.mark.parametrize("lobes", [2, 3, 4])
def test_lobe_rotors_touch_at_every_angle(lobes):
    (contact,) = roll_test(lobe_rotors(lobes)).contacts
    assert np.max(np.abs(contact.clearances)) < 1e-6
    assert abs(contact.clearance) < 1e-6


@pytest.mark.parametrize("lobes", [2, 3, 4])
def test_clearance_of_lobe_rotors_is_twice_the_inset(lobes):
    machine = lobe_rotors(lobes, 0.1)
    (contact,) = roll_test(machine).contacts
    assert contact.clearance == pytest.approx(machine.clearance, rel=1e-6)
    assert contact.clearances == pytest.approx(machine.clearance, rel=1e-6)


def test_lobe_rotors_out_of_phase_bind():
    machine = lobe_rotors(3, 0.1)
    (e,) = machine.engagements
    assert roll_engagements([e]).verdict is Verdict.ROLLS
    assert roll_engagements([replace(e, angle_b=e.angle_b + 0.05)]).verdict is Verdict.BINDS


def test_flow_of_a_rotor_set_adds_up_to_its_displacement():
    machine = rotor_set()
    turn = np.linspace(0, 60, 6001)
    mean = np.mean((machine.flow(turn)[1:] + machine.flow(turn)[:-1]) / 2)
    assert 2 * np.pi * mean == pytest.approx(machine.displacement, rel=1e-6)


def test_flow_does_not_depend_on_a_pitch():
    machine = rotor_set()
    turn = np.array([0.0, 7.0, 31.0])
    assert machine.flow(turn) == pytest.approx(machine.flow(turn + 60))


def test_contact_points_lie_on_both_rotors():
    machine = rotor_set()
    turn = 0.2
    lobes = turn + 2 * np.pi * np.arange(6) / 6
    contact = machine.contact(lobes)
    on_outer = field_of(machine.outer.outline).near(contact * np.exp(-1j * turn)).distance
    on_inner = (
        field_of(machine.inner.outline)
        .near((contact - machine.centre_distance) * np.exp(-1j * turn * machine.ratio))
        .distance
    )
    assert np.max(np.abs(on_outer)) < 1e-7
    assert np.max(np.abs(on_inner)) < 1e-7


def test_displacement_of_lobe_rotors_by_formula():
    for lobes in (2, 3, 5):
        machine = lobe_rotors(lobes)
        radius = machine.rotor.describing_radius
        assert machine.displacement == pytest.approx(2 * np.pi * 100 * radius**2 * (8 * lobes + 2), rel=1e-12)
        assert machine.rotor.outline.area == pytest.approx(np.pi * radius**2 * (4 * lobes**2 + 2), rel=1e-12)


def test_an_inset_costs_displacement():
    assert lobe_rotors(2, 0.1).displacement < lobe_rotors(2).displacement


REFUSALS = {
    "lobe counts": (lambda: replace(rotor_set(), inner=CycloidDisc(6, 3.0, 33.642, 9.0)), "one more"),
    "two-tooth inner": (lambda: replace(rotor_set(), inner=CycloidDisc(4, 3.0, 33.642, 9.0, difference=2)), "one more"),
    "another lobe": (lambda: replace(rotor_set(), inner=CycloidDisc(5, 3.56, 33.642, 14.0)), "14.062 mm"),
    "another circle": (lambda: replace(rotor_set(), inner=CycloidDisc(5, 3.56, 33.5, 14.062)), "33.642 mm"),
    "shallow root": (
        lambda: replace(rotor_set(), outer=OuterRotor(6, 33.642, 14.062, 26.5)),
        "26.7 mm from its axis",
    ),
    "thin rim": (lambda: replace(rotor_set(), rim_diameter=53.0).parts, "larger rim"),
}


@pytest.mark.parametrize(("make", "words"), REFUSALS.values(), ids=REFUSALS)
def test_refusal(make, words):
    with pytest.raises(DesignError, match=re.escape(words)):
        make()
