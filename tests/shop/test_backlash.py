import pytest

from gearsolid.errors import DesignError
from gearsolid.shop.backlash import least_normal_play


def test_play_is_rounded_up_but_not_past_an_exact_value():
    assert least_normal_play(2.0, 30.0) == pytest.approx(0.09)
    assert least_normal_play(2.0, 30.1) == pytest.approx(0.10)


def test_lengths_must_be_positive():
    with pytest.raises(DesignError, match="module 0 mm"):
        least_normal_play(0, 50)
