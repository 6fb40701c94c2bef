import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from gearsolid.curves.rotation import rotation
from gearsolid.errors import ToleranceError


@given(angle=st.floats(-np.pi / 2, np.pi / 2), tol=st.sampled_from([1e-4, 1e-7, 1e-10]))
def test_turns_steadily_within_the_tolerance(angle, tol):
    spline = rotation(angle, tol)
    v = np.linspace(0, 1, 3001)
    gaps = np.abs(spline.point(v) - np.exp(1j * angle * v))
    assert gaps.max() <= 1.02 * tol
    assert spline.poles[0] == 1
    assert abs(spline.poles[-1] - np.exp(1j * angle)) < 1e-15


def test_says_the_error_it_found():
    spline = rotation(1.0, 1e-6)
    v = np.linspace(0, 1, 20001)
    assert spline.error == pytest.approx(np.max(np.abs(spline.point(v) - np.exp(1j * v))), rel=0.02)


def test_tighter_takes_more_poles_and_a_turn_of_nothing_two():
    counts = [len(rotation(1.0, tol).poles) for tol in (1e-3, 1e-6, 1e-9, 1e-12)]
    assert counts == sorted(set(counts))
    assert len(rotation(0.0, 1e-12).poles) == 2


def test_many_turns_are_refused():
    with pytest.raises(ToleranceError, match="turn through a smaller angle"):
        rotation(60.0, 1e-10)
