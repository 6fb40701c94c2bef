"""Derivative, direction and turning of every curve, against differences of its points."""

from math import pi

import numpy as np
import pytest
from curve_specimens import SPECIMENS, epicycloid, hypocycloid, parabola
from hypothesis import given
from hypothesis import strategies as st

from gearsolid.curves import curve as curve_module
from gearsolid.curves.curve import Curve, Mirrored, Reversed, Section, Turned
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.outline import smooth_spans
from gearsolid.curves.primitives import Arc, Ellipse, Formula
from gearsolid.curves.rolling import CircleOnCircle, CircleOnLine
from gearsolid.curves.roulette import Trace
from gearsolid.errors import DesignError


@pytest.fixture(params=SPECIMENS.values(), ids=SPECIMENS)
def specimen(request) -> Curve:
    return request.param


def inner(curve: Curve, count: int = 23) -> np.ndarray:
    """Parameters well inside each smooth span."""
    shares = np.linspace(0.05, 0.95, count)
    return np.concatenate([t0 + (t1 - t0) * shares for t0, t1 in smooth_spans(curve)])


def slope(function, t: np.ndarray, step: float) -> np.ndarray:
    return (function(t - 2 * step) - 8 * function(t - step) + 8 * function(t + step) - function(t + 2 * step)) / (
        12 * step
    )


def derivative_error(curve: Curve) -> float:
    t = inner(curve)
    expected = slope(curve.point, t, 3e-4 * (curve.span[1] - curve.span[0]))
    return float(np.max(np.abs(curve.derivative(t) - expected)) / np.max(np.abs(expected)))


def test_derivative_is_the_slope_of_the_points(specimen):
    assert derivative_error(specimen) < 2e-8


def test_derivative_check_sees_a_wrong_slope():
    wrong = Formula(lambda t: np.exp(1j * t), lambda t: 1.0001j * np.exp(1j * t), lambda t: -np.exp(1j * t), 0, 1)
    assert derivative_error(wrong) > 5e-5


def test_second_is_the_slope_of_the_derivative(specimen):
    t = inner(specimen)
    expected = slope(specimen.derivative, t, 3e-4 * (specimen.span[1] - specimen.span[0]))
    size = max(np.max(np.abs(expected)), np.max(np.abs(specimen.derivative(t))))
    assert np.max(np.abs(specimen.second(t) - expected)) < 1e-7 * size


def test_turning_is_the_slope_of_the_direction(specimen):
    t = inner(specimen)
    step = 1e-4 * (specimen.span[1] - specimen.span[0])
    turned = np.angle(specimen.tangent(t + step) / specimen.tangent(t - step)) / (2 * step)
    assert specimen.turning(t) == pytest.approx(turned, rel=1e-5, abs=1e-6 * (1 + np.max(np.abs(turned))))


def test_curvature_is_turning_over_speed(specimen):
    t = inner(specimen)
    assert specimen.curvature(t) * np.abs(specimen.derivative(t)) == pytest.approx(
        specimen.turning(t), rel=1e-12, abs=1e-12
    )


def test_direction_stands_for_every_place_alone_as_in_company(specimen):
    t = np.concatenate([np.linspace(*span, 7) for span in smooth_spans(specimen)])
    alone = np.array([complex(specimen.tangent(np.asarray(u))) for u in t])
    assert np.allclose(alone, specimen.tangent(t), rtol=0, atol=1e-11)
    assert np.abs(alone) == pytest.approx(1, abs=1e-12)


def test_shapes_are_kept(specimen):
    t = inner(specimen, 6)[:6].reshape(2, 3)
    for method in (specimen.point, specimen.derivative, specimen.second, specimen.tangent, specimen.turning):
        assert method(t).shape == (2, 3)
        assert method(t)[1, 2] == pytest.approx(complex(method(t[1, 2])), rel=1e-10)


@pytest.mark.parametrize(
    ("curve", "leaving"),
    [
        (Trace(CircleOnLine(3), -3, 0, pi), 1),
        (Trace(CircleOnLine(3), -3, 0, 2 * pi), 1),
        (Section(Trace(CircleOnLine(3), -3, -1, 1), 0, 1), 1),
        (Section(Trace(CircleOnLine(3), -3, -5, 2 * pi), 0, 1), 1),
        (hypocycloid(6, 2, 6 * pi), -1),
        (epicycloid(32, 2, 1), 1),
        (Turned(epicycloid(32, 2, 1), 2j), 1j),
        (Mirrored(Reversed(epicycloid(32, 2, 1))), 1),
        (Reversed(Mirrored(epicycloid(32, 2, 1))), 1),
        (Envelope(Turned(epicycloid(32, 2, 1.5), -1), CircleOnCircle(8, 32), -1), -1),
        (Envelope(Turned(hypocycloid(32, 2, 1.5), -1), CircleOnCircle(8, 32), 1), 1),
    ],
    ids=str,
)
def test_direction_out_of_a_cusp(curve, leaving):
    t0, t1 = curve.span
    assert complex(curve.tangent(np.asarray(t0))) == pytest.approx(leaving, abs=1e-9)
    near = t0 + (t1 - t0) * np.logspace(-12, -6, 40)
    assert np.max(np.abs(curve.tangent(near) - leaving)) < 3e-5
    back = Reversed(curve)
    assert complex(back.tangent(np.asarray(back.span[1]))) == pytest.approx(-leaving, abs=1e-9)


def test_turning_stays_finite_and_true_through_a_cusp():
    # The direction of a cycloid leans by half its roll.
    cycloid = Trace(CircleOnLine(3), -3, 0, 2 * pi)
    t = np.concatenate(([0], np.logspace(-14, 0, 300)))
    assert cycloid.turning(t) == pytest.approx(0.5, abs=1e-8)
    assert cycloid.turning(2 * pi - t) == pytest.approx(0.5, abs=1e-8)


def test_cusps_of_a_trace_are_breaks():
    assert Trace(CircleOnLine(3), -3, -1, 4 * pi + 1).breaks() == pytest.approx((0, 2 * pi, 4 * pi))
    assert Trace(CircleOnLine(3), 3j, 0, 4 * pi).breaks() == pytest.approx((pi / 2, 5 * pi / 2))
    assert Trace(CircleOnLine(3), -2.9, 0, 4 * pi).breaks() == ()
    for curve in (hypocycloid(6, 2, 6 * pi), epicycloid(8, 2, 8 * pi, -0.3)):
        cusps = np.array(curve.breaks())
        assert len(cusps) >= 2
        assert np.max(np.abs(curve.derivative(cusps))) < 1e-13
        assert np.abs(curve.point(cusps)) == pytest.approx(curve.motion.fixed, rel=1e-14)


def test_breaks_at_the_ends_and_doubled_breaks_make_no_span():
    doubled = Formula(np.exp, np.exp, np.exp, 0, 1, (0.0, 0.25, 0.25 + 1e-15, 0.5, 1.0))
    assert smooth_spans(doubled) == [(0, 0.25), (0.25, 0.5), (0.5, 1)]
    assert len(smooth_spans(Trace(CircleOnLine(3), -3, 0, 4 * pi))) == 2


def test_stand_in_second_derivative_is_of_fourth_order(monkeypatch):
    class Spiral(Formula):
        second = Curve.second

    curve = Spiral(lambda t: np.exp((1 + 2j) * t), lambda t: (1 + 2j) * np.exp((1 + 2j) * t), np.exp, 0, 2)
    t = curve.sample(11)
    errors = []
    for spacing in (0.02, 0.01, 0.005):
        monkeypatch.setattr(curve_module, "_DIFFERENCE", spacing)
        errors.append(np.max(np.abs(curve.second(t) - (1 + 2j) ** 2 * np.exp((1 + 2j) * t))))
    assert np.log2(np.array(errors[:-1]) / errors[1:]) == pytest.approx(4, abs=0.2)
    monkeypatch.undo()
    assert np.max(np.abs(curve.second(t) - (1 + 2j) ** 2 * np.exp((1 + 2j) * t))) < 1e-9


share = st.floats(0, 1)
shares = st.lists(share, min_size=1, max_size=5).map(np.array)
names = st.sampled_from(sorted(SPECIMENS))
factors = st.builds(lambda size, turn: size * np.exp(1j * turn), st.floats(0.1, 10), st.floats(-pi, pi))


@given(names, shares, factors)
def test_turned_multiplies_points_and_directions(name, at, factor):
    base = SPECIMENS[name]
    curve = Turned(base, factor, 1 - 2j)
    t = base.span[0] + (base.span[1] - base.span[0]) * at
    assert np.allclose(curve.point(t), factor * base.point(t) + 1 - 2j, rtol=1e-13, atol=1e-13)
    assert np.allclose(curve.tangent(t), factor / abs(factor) * base.tangent(t), atol=1e-12)
    assert np.allclose(curve.turning(t), base.turning(t), rtol=1e-5, atol=1e-5)
    assert curve.breaks() == base.breaks()


@given(names, shares)
def test_mirrored_runs_back_through_the_mirror_image(name, at):
    base = SPECIMENS[name]
    curve = Mirrored(base)
    t = curve.span[0] + (curve.span[1] - curve.span[0]) * at
    assert np.array_equal(curve.point(t), np.conj(base.point(-t)))
    assert np.allclose(curve.tangent(t), -np.conj(base.tangent(-t)), atol=1e-12)
    assert np.allclose(curve.turning(t), base.turning(-t), rtol=1e-9, atol=1e-9)
    again = Mirrored(curve)
    assert again.span == base.span
    assert np.array_equal(again.point(-t), base.point(-t))
    assert np.array_equal(again.derivative(-t), base.derivative(-t))


@given(names, shares)
def test_reversed_runs_back_through_the_same_points(name, at):
    base = SPECIMENS[name]
    curve = Reversed(base)
    t = curve.span[0] + (curve.span[1] - curve.span[0]) * at
    assert np.array_equal(curve.point(t), base.point(-t))
    assert np.allclose(curve.tangent(t), -base.tangent(-t), atol=1e-12)
    assert (curve.start, curve.end) == (base.end, base.start)
    assert curve.breaks() == tuple(-b for b in reversed(base.breaks()))
    assert np.array_equal(Reversed(curve).point(-t), base.point(-t))


@given(names, share, share, shares)
def test_section_keeps_parameter_and_direction(name, first, last, at):
    base = SPECIMENS[name]
    t0, t1 = base.span
    first, last = sorted((first, last))
    curve = Section(base, t0 + (t1 - t0) * first, t0 + (t1 - t0) * (last + 0.01))
    t = curve.span[0] + (curve.span[1] - curve.span[0]) * (0.01 + 0.98 * at)
    assert np.array_equal(curve.point(t), base.point(t))
    away_from_cusps = np.abs(base.derivative(t)) > 1e-6 * abs(base.derivative(np.asarray(t0 + 0.3 * (t1 - t0))))
    assert np.allclose(curve.tangent(t)[away_from_cusps], base.tangent(t)[away_from_cusps], atol=1e-9)
    assert all(curve.span[0] < b < curve.span[1] for b in curve.breaks())


def test_curvature_of_circle_and_parabola():
    assert Arc(2, 5, 0, 1).curvature(np.linspace(0, 1, 5)) == pytest.approx(0.2, rel=1e-13)
    assert Arc(2, 5, 1, 0).curvature(np.linspace(0, 1, 5)) == pytest.approx(-0.2, rel=1e-13)
    u = np.linspace(-1, 2, 7)
    assert parabola(1.5, -1, 2).curvature(u) == pytest.approx(-1 / (3 * (1 + u**2) ** 1.5), rel=1e-12)


@pytest.mark.parametrize(
    ("make", "says"),
    [
        (lambda: Arc(0, 0, 0, 1), "arc radius is 0 mm"),
        (lambda: Arc(0, float("nan"), 0, 1), "arc radius is nan mm"),
        (lambda: Ellipse(1, -1), "half axes are 1 and -1 mm"),
    ],
    ids=["arc of no radius", "arc of unknown radius", "ellipse of negative axis"],
)
def test_impossible_primitives_are_refused(make, says):
    with pytest.raises(DesignError, match=says):
        make()
