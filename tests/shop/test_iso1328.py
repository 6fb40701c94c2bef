import pytest

from gearsolid.errors import DesignError
from gearsolid.shop.iso1328 import flank_tolerances, rounded

GEAR = {"teeth": 50, "diameter": 100, "module": 2, "face_width": 20}


def test_two_classes_double_the_tolerance_before_rounding():
    fine, coarse = flank_tolerances(7, **GEAR), flank_tolerances(9, **GEAR)
    assert coarse.cumulative_pitch == pytest.approx(2 * fine.cumulative_pitch, abs=1)


def test_totals_hold_their_parts():
    found = flank_tolerances(6, **GEAR)
    assert max(found.profile_slope, found.profile_form) < found.profile < found.profile_slope + found.profile_form
    assert max(found.helix_slope, found.helix_form) < found.helix < found.helix_slope + found.helix_form
    assert found.runout < found.cumulative_pitch


@pytest.mark.parametrize(
    ("value", "printed"), [(10.4, 10), (10.5, 11), (7.3, 7.5), (5.2, 5.0), (4.96, 5.0), (0.949, 0.9)]
)
def test_rounding_steps(value, printed):
    assert rounded(value) == printed


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"tolerance_class": 12}, "tolerance class is 12; .* from 1 to 11"),
        ({"teeth": 4}, "number of teeth is 4"),
        ({"diameter": 4}, "reference diameter is 4 mm"),
        ({"module": 0.4}, "normal module is 0.4 mm"),
        ({"face_width": 3}, "face width is 3 mm"),
        ({"helix_angle_deg": -50}, "helix angle is 50 deg"),
    ],
    ids=lambda v: next(iter(v)) if isinstance(v, dict) else "",
)
def test_numbers_outside_the_standard_are_refused(change, words):
    with pytest.raises(DesignError, match=words):
        flank_tolerances(**({"tolerance_class": 7} | GEAR | change))
