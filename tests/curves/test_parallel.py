from math import pi

import numpy as np
import pytest
from curve_specimens import epicycloid, involute, parabola
from hypothesis import given
from hypothesis import strategies as st

from gearsolid.curves.length import ArcLength
from gearsolid.curves.parallel import Parallel
from gearsolid.curves.primitives import Arc, Ellipse, Segment
from gearsolid.curves.rolling import CircleOnCircle
from gearsolid.curves.roulette import Trace

distances = st.floats(-5, 5)


@given(distances)
def test_parallel_of_a_circle_is_a_circle(distance):
    curve = Parallel(Arc(1 + 2j, 6, 0, 3), distance)
    t = curve.sample(9)
    assert np.abs(curve.point(t) - (1 + 2j)) == pytest.approx(6 - distance, abs=1e-12)
    assert curve.pace(t) == pytest.approx(3 * (6 - distance), abs=1e-12)


def test_parallel_lies_on_the_left():
    assert Parallel(Segment(0, 1), 2).start == pytest.approx(2j)
    assert Parallel(Segment(0, 1), -2).end == pytest.approx(1 - 2j)


@given(st.floats(-3, 3))
def test_parallel_of_an_involute_is_the_involute_begun_elsewhere(distance):
    base = involute(10, 0.5, 1.5)
    curve = Parallel(base, distance)
    t = base.sample(20)
    # The normal is tangent to the base circle, so the free length of string changes by the distance.
    begun = -distance / 10
    shifted = 10 * np.exp(1j * t) * (1 - 1j * (t + begun))
    assert np.abs(curve.point(t) - shifted).max() < 1e-12


@given(st.floats(-0.3, 0.3))
def test_parallel_of_a_parallel_comes_back(distance):
    base = Ellipse(3, 1, 0.2, 2)
    there = Parallel(base, distance)
    t = base.sample(15)
    assert np.abs(Parallel(there, -distance).point(t) - base.point(t)).max() < 1e-12


@given(st.floats(-2, 0.3))
def test_length_of_a_closed_parallel(distance):
    """Perimeter changes by 2 pi times the distance (Steiner's formula for convex curves)."""
    ellipse = Ellipse(3, 1)
    expected = ArcLength(ellipse).total - 2 * pi * distance
    assert ArcLength(Parallel(ellipse, distance), 1e-9).total == pytest.approx(expected, abs=3e-9)


@pytest.mark.parametrize("distance", [0.34, 0.5, 1, 4, 8.9])
def test_regressions_are_where_the_curvature_radius_is_the_distance(distance):
    curve = Parallel(Ellipse(3, 1, -1.4, 5), distance)
    cusps = np.array(curve.regressions())
    # Closed form: the radius of curvature of an ellipse is (a^2 sin^2 + b^2 cos^2)^(3/2) / (a b).
    wanted = (3 * distance) ** (2 / 3)
    sine = np.sqrt((wanted - 1) / 8)
    every = np.sort([s * np.arcsin(sine) + k * pi for s in (1, -1) for k in (-1, 0, 1, 2)])
    expected = every[(every > -1.4) & (every < 5)]
    assert cusps == pytest.approx(expected, abs=1e-11)
    assert np.abs(curve.derivative(cusps)).max() < 1e-10
    assert curve.breaks() == curve.regressions()


@pytest.mark.parametrize("distance", [-3, 0.33, 9.01], ids=["outside", "above the smallest", "beyond the largest"])
def test_no_regression_out_of_the_range_of_curvature_radii(distance):
    assert Parallel(Ellipse(3, 1, -1.4, 5), distance).regressions() == ()


def test_parallel_of_a_parabola_turns_back_twice():
    # Radius of curvature 2 c (1 + u^2)^(3/2) on the right of travel.
    curve = Parallel(parabola(1, -2, 2), -16)
    u = np.sqrt(8 ** (2 / 3) - 1)
    assert curve.regressions() == pytest.approx((-u, u), abs=1e-12)


def test_direction_turns_back_at_a_regression_but_the_side_does_not():
    curve = Parallel(Ellipse(3, 1, -1, 1), 0.5)
    cusp = curve.regressions()[0]
    t = cusp + np.array([-1e-4, 1e-4])
    before, after = curve.tangent(t)
    assert abs(before + after) < 1e-3
    assert np.sign(curve.pace(t)).tolist() == [1, -1]


def test_parallel_from_a_cusp_has_its_true_speed():
    """At the cusp of an epicycloid the radius of curvature vanishes, so the parallel turns about the cusp."""
    base = epicycloid(32, 2, 1.5)
    curve = Parallel(base, -0.4)
    # Direction of an epicycloid turns at (R + 2 a) / (2 R) of the roll.
    rate = 0.4 * (32 + 4) / 64
    assert np.abs(curve.derivative(np.array([0.0, 1e-12, 1e-9, 1e-7]))) == pytest.approx(rate, rel=1e-6)
    assert complex(curve.tangent(np.asarray(0.0))) == pytest.approx(1, abs=1e-9)
    assert curve.breaks() == ()


def test_cusps_of_the_base_lie_at_ends_of_smooth_spans():
    base = Trace(CircleOnCircle(32, 2), -2, -1, 1)
    assert 0.0 in Parallel(base, -0.4).breaks()
