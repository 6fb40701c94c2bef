"""The roll test and solid Booleans must say the same of a spread of poses, clear and overlapping."""

from dataclasses import replace
from math import degrees

import cadquery as cq
import numpy as np
import pytest

from gearsolid.contact.roll import roll_engagements
from gearsolid.pairs.blank import Blank, body_of
from gearsolid.pairs.engagement import Engagement
from gearsolid.solids.body import body_solid
from tests.contact.machines import involute_pair, stage
from tests.contact.slow import SlowPair

pytestmark = pytest.mark.cad

WIDTH = 5.0


class SolidPair:
    """Two prisms placed as an engagement says."""

    def __init__(self, e: Engagement) -> None:
        self.e = e
        self.solids = [body_solid(body_of(o, Blank(WIDTH))) for o in (e.a, e.b)]

    def overlap(self, psi: float) -> float:
        """Common area of the two sections [mm2]."""
        e = self.e
        turns = (e.angle_a + e.rate_a * psi, e.angle_b + e.rate_b * psi)
        placed = [
            solid.moved(cq.Location(cq.Vector(c.real, c.imag), cq.Vector(0, 0, 1), degrees(t)))
            for solid, c, t in zip(self.solids, (e.centre_a, e.centre_b), turns, strict=True)
        ]
        return placed[0].intersect(placed[1]).Volume() / WIDTH


@pytest.mark.parametrize("closed_by", [-0.06, -0.03, 0.0, 0.03, 0.06], ids=lambda v: f"closed {v} mm")
def test_external_pair(closed_by):
    e = involute_pair(20, 30, 1.5, thinning=0.03, distance=37.5 - closed_by)
    found = roll_engagements([e]).contacts[0]
    solids = SolidPair(e)
    areas = [solids.overlap(share * e.period) for share in np.arange(3) / 3]
    if found.clearance > 0:
        assert max(areas) < 1e-9
    else:
        assert min(areas) > 1e-6


@pytest.mark.parametrize("turned", [0.0, 0.3, 0.6, 1.5, 1.9], ids=lambda v: f"turned {v} half plays")
def test_wheel_turned_within_and_beyond_its_play(turned):
    e = involute_pair(20, 30, 1.5, thinning=0.05)
    half = np.radians(roll_engagements([e]).contacts[0].play_angle / 2)
    e = replace(e, angle_b=e.angle_b + turned * half)
    found = roll_engagements([e]).contacts[0]
    assert (found.clearance > 0) == (turned < 1)
    assert (SolidPair(e).overlap(np.radians(found.input_angle)) < 1e-9) == (turned < 1)


def test_planet_and_ring_with_and_without_fault():
    for machine, binds in ((stage(), False), (stage(turns=(0.0, 180 / 27, 0.0)), True)):
        e = next(e for e in machine.engagements if (e.name_a, e.name_b) == ("planet 2", "ring"))
        found = roll_engagements([e]).contacts[0]
        assert (found.clearance < 0) == binds
        assert (SolidPair(e).overlap(np.radians(found.input_angle)) > 1e-6) == binds


def test_the_checker_sees_a_wheel_put_in_the_wrong_place():
    e = involute_pair(20, 30, 1.5, thinning=0.05)
    assert SolidPair(e).overlap(0.0) < 1e-9
    shifted = replace(e, centre_b=e.centre_b - 0.5)
    assert SolidPair(shifted).overlap(0.0) > 0.01
    assert SlowPair(shifted).least(0.0) < -0.01
