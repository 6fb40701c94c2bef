"""Double-flank roll test against the closed form of the involute and the runout put in."""

from math import cos, pi, tan

import numpy as np
import pytest
from scipy.optimize import brentq

from gearsolid.contact.double_flank import Composite, double_flank, tight_distance
from gearsolid.errors import DesignError
from tests.contact.machines import involute_pair, stage


def inv(a):
    return tan(a) - a


def tight(z1, z2, module, thinning):
    """ISO 21771: at the working circles the two thicknesses fill the pitch."""
    nominal = module * (z1 + z2) / 2

    def play(distance):
        return nominal * (inv(np.arccos(nominal * cos(pi / 9) / distance)) - inv(pi / 9)) + thinning

    return brentq(play, nominal * (1 - 0.02), nominal + 0.1)


@pytest.mark.parametrize(("thinning", "distance"), [(0.03, 37.5), (0.03, 37.4), (0.05, 37.6)])
def test_perfect_members_take_one_centre_distance_whatever_was_stated(thinning, distance):
    e = involute_pair(20, 30, 1.5, thinning=thinning, distance=distance)
    _, found = tight_distance(e)
    assert found == pytest.approx(tight(20, 30, 1.5, thinning), abs=1e-6)
    rolled = double_flank(e)
    assert rolled.total < 1e-6
    assert rolled.one_pitch <= rolled.total


def test_a_planet_in_its_ring_is_tight_farther_out():
    e = next(e for e in stage(ring_tip_shortening=0.35).engagements if e.name_b == "ring")
    _, found = tight_distance(e)
    assert np.ptp(found) < 1e-6
    assert found[0] > abs(e.centre_b - e.centre_a) + 0.01


@pytest.mark.parametrize("side", ["a", "b"])
def test_runout_is_what_the_record_shows(side):
    """Fi'' of one runout is that runout; within a pitch it changes by at most 2 e sin(pi / z), e its half."""
    e = involute_pair(20, 30, 1.5, thinning=0.05)
    runout, teeth = 0.06, 20 if side == "a" else 30
    found = double_flank(e, **{f"runout_{side}": runout})
    assert found.total == pytest.approx(runout, abs=1e-5)
    assert found.one_pitch == pytest.approx(runout * np.sin(pi / teeth), rel=2e-2)


def test_two_runouts_add_when_every_tooth_meets_every_other():
    hunting, repeating = (involute_pair(20, z, 1.5, thinning=0.05) for z in (31, 30))
    assert double_flank(hunting, 0.06, 0.04).total == pytest.approx(0.1, abs=2e-4)
    assert double_flank(repeating, 0.06, 0.04).total < 0.095


def test_a_record_is_taken_round_its_end():
    found = Composite.of(np.arange(8.0), np.array([0, 0, 0, 0, 0, 0, 0, 1.0]), 2)
    assert (found.total, found.one_pitch) == (1.0, 1.0)


def test_members_out_of_reach_are_refused():
    with pytest.raises(DesignError, match="no tight contact"):
        tight_distance(involute_pair(20, 30, distance=60.0))
