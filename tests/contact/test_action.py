"""Path of contact: pressure angle, sliding speed and sliding ratio against the closed forms of the involute."""

import numpy as np
import pytest

from gearsolid.contact.action import early_contact, path_of_contact
from gearsolid.errors import DesignError
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.involute_pair import InvolutePair
from tests.contact.machines import involute_pair, reducer, stage

Z1, Z2, MODULE, APART = 20, 40, 2.0, 60.3


@pytest.fixture(scope="module")
def path():
    return path_of_contact(involute_pair(Z1, Z2, MODULE, thinning=0.02, distance=APART))


@pytest.fixture(scope="module")
def pair():
    gears = (InvoluteGear(z, MODULE, tooth_thinning=0.02) for z in (Z1, Z2))
    return InvolutePair(*gears, APART)


def test_pressure_angle_is_the_working_angle_all_along(path, pair):
    assert path.pressure_angles_deg == pytest.approx(np.degrees(pair.working_angle), abs=1e-4)


def test_path_is_as_long_as_its_formula(path, pair):
    first, last = pair.contact_path
    assert abs(path.places[-1] - path.places[0]) == pytest.approx(last - first, abs=1e-5)


def test_sliding_is_the_distance_from_the_pitch_point_times_both_speeds(path, pair):
    pitch_point = pair.gear.base_radius * np.tan(pair.working_angle)
    first, last = pair.contact_path
    ends = np.array([first, last]) - pitch_point
    assert path.sliding[[0, -1]] == pytest.approx(ends * (1 + Z1 / Z2), abs=1e-5)
    assert np.all(np.diff(path.sliding) >= -1e-9)


def test_sliding_ratios_are_those_of_iso_21771(path, pair):
    """zeta1 = 1 - (z1 / z2) rho2 / rho1, zeta2 = 1 - (z2 / z1) rho1 / rho2."""
    first, last = pair.contact_path
    span = pair.centre_distance * np.sin(pair.working_angle)
    for index, rho in ((0, first), (-1, last)):
        assert path.sliding_ratio_a[index] == pytest.approx(1 - Z1 / Z2 * (span - rho) / rho, rel=1e-4)
        assert path.sliding_ratio_b[index] == pytest.approx(1 - Z2 / Z1 * rho / (span - rho), rel=1e-4)


def test_an_external_involute_pair_meets_before_the_line_of_centres(path, pair):
    before = pair.gear.base_radius * np.tan(pair.working_angle) - pair.contact_path[0]
    e = involute_pair(Z1, Z2, MODULE, thinning=0.02, distance=APART)
    assert early_contact(e) == pytest.approx(before * np.cos(pair.working_angle), abs=1e-5)


def test_pairs_without_a_path_are_refused():
    with pytest.raises(DesignError, match="overlap by"):
        path_of_contact(involute_pair(20, 30, distance=24.8))
    with pytest.raises(DesignError, match="same rate"):
        path_of_contact(next(e for e in reducer().engagements if e.name_b == "rollers"))
    with pytest.raises(DesignError, match="wavers"):
        path_of_contact(next(e for e in stage().engagements if e.name_b == "ring"))
