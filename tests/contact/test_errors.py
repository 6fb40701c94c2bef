"""Single-flank roll test of misplaced members: each error alone, and the record against distances at single angles."""

from dataclasses import replace
from math import cos, pi, sin

import numpy as np
import pytest

from gearsolid.contact.clearance import distances_at
from gearsolid.contact.errors import Misplaced, single_flank, turned
from gearsolid.errors import DesignError
from tests.contact.machines import involute_pair


@pytest.fixture(scope="module")
def pair():
    return involute_pair(20, 30, 1.5, thinning=0.06)


def test_a_wrong_centre_distance_costs_an_involute_pair_nothing(pair):
    assert single_flank(pair, Misplaced(distance=0.05)).total < 1e-6


@pytest.mark.parametrize(("side", "teeth"), [("runout_a", 20), ("runout_b", 30)])
def test_runout_shows_along_the_line_of_action(pair, side, teeth):
    """A centre that circles moves the line of action by its runout; on the pitch circle by that over cos 20 deg."""
    found = single_flank(pair, Misplaced(**{side: 0.04}))
    assert found.total == pytest.approx(0.04 / cos(pi / 9), rel=1e-2)
    assert found.one_pitch == pytest.approx(found.total * sin(pi / teeth), rel=3e-2)


def test_where_the_record_says_the_flanks_touch_they_touch(pair):
    wrong = Misplaced(0.05, 0.03, 0.04, 70.0)
    psi, extra = turned(pair, wrong)
    for k in (0, 137, 401, 777):
        off_a = wrong.runout_a / 2 * np.exp(1j * pair.rate_a * psi[k])
        off_b = wrong.runout_b / 2 * np.exp(1j * (pair.rate_b * psi[k] + extra[k] + np.radians(wrong.phase_deg)))
        placed = replace(
            pair,
            centre_a=pair.centre_a + off_a,
            centre_b=pair.centre_b + wrong.distance + off_b,
            angle_b=pair.angle_b + extra[k],
        )
        assert distances_at(placed, psi[[k]])[0] == pytest.approx(0, abs=1e-6)
        ahead = replace(placed, angle_b=placed.angle_b + 1e-4)
        assert distances_at(ahead, psi[[k]])[0] < -1e-4


def test_members_that_bind_or_make_no_sense_are_refused(pair):
    with pytest.raises(DesignError, match="overlap by"):
        single_flank(pair, Misplaced(0.3, 0.3))
    with pytest.raises(DesignError, match="0 or more"):
        Misplaced(runout_a=-0.1)
