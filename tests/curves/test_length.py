from math import pi

import numpy as np
import pytest
from curve_specimens import SPECIMENS, epicycloid, hypocycloid, involute, parabola
from hypothesis import given
from hypothesis import strategies as st
from scipy.special import ellipe

from gearsolid.curves.curve import Curve, Reversed, Section, Turned
from gearsolid.curves.length import ArcLength
from gearsolid.curves.primitives import Arc, Ellipse, Formula, Segment
from gearsolid.curves.rolling import CircleOnLine
from gearsolid.curves.roulette import Trace
from gearsolid.errors import ToleranceError

TOLERANCES = [10.0**-k for k in range(2, 12)]
LENGTHS = ArcLength(Ellipse(3, 1, 0.1, 6, 1j))

# Length of curves with a closed form.
CLOSED_FORMS: dict[str, tuple[Curve, float]] = {
    "segment": (Segment(1, 4 + 4j), 5),
    "arc": (Arc(3, 2, 1, -2), 6),
    "ellipse": (Ellipse(5, 1), 20 * ellipe(1 - 1 / 25)),
    "flat ellipse": (Ellipse(50, 0.5), 200 * ellipe(1 - 1e-4)),
    "cycloid arch": (Trace(CircleOnLine(3), -3, 0, 2 * pi), 24),
    "three cycloid arches": (Trace(CircleOnLine(3), -3, 0, 6 * pi), 72),
    "epicycloid arch": (epicycloid(32, 2, 2 * pi), 8 * 2 * 34 / 32),
    "hypocycloid arch": (hypocycloid(20, 6, 2 * pi), 8 * 6 * 14 / 20),
    "involute": (involute(10, 0, 1.5), 11.25),
    "parabola": (parabola(1.5, 0, 2), 1.5 * (2 * np.sqrt(5) + np.arcsinh(2))),
    "hidden cusp": (Formula(lambda t: t**3, lambda t: 3 * t * np.abs(t), lambda t: 6 * np.abs(t), -1, 1.3), 1 + 1.3**3),
    "jump of speed": (
        Formula(lambda t: t * np.where(t < 0, 1, 2), lambda t: np.where(t < 0, 1, 2), np.zeros_like, -1, 1.3, (0.0,)),
        1 + 2 * 1.3,
    ),
}


@pytest.fixture(params=CLOSED_FORMS.values(), ids=CLOSED_FORMS)
def closed_form(request) -> tuple[Curve, float]:
    return request.param


@pytest.mark.parametrize("tol", TOLERANCES)
def test_error_is_below_what_was_asked(closed_form, tol):
    curve, exact = closed_form
    lengths = ArcLength(curve, tol)
    assert abs(lengths.total - exact) <= tol
    assert lengths.error <= tol


def test_looser_tolerance_walks_fewer_panels():
    panels = [len(ArcLength(Ellipse(50, 0.5), tol)._panels.edges) for tol in (1e-2, 1e-6, 1e-11)]
    assert panels[0] < panels[1] < panels[2] < 200


@pytest.mark.parametrize("name", ["ellipse", "cycloid arch", "segment"])
def test_error_never_claims_less_than_rounding(name):
    curve, exact = CLOSED_FORMS[name]
    assert ArcLength(curve).error >= 4 * np.finfo(float).eps * exact * 0.99


def test_wrong_speed_gives_a_wrong_length():
    wrong = Formula(lambda t: np.exp(1j * t), lambda t: 1.001j * np.exp(1j * t), lambda t: -np.exp(1j * t), 0, 1)
    assert ArcLength(wrong).total == pytest.approx(1.001, rel=1e-12)


@pytest.mark.parametrize("name", SPECIMENS)
def test_length_is_the_limit_of_inscribed_polygons(name):
    curve = SPECIMENS[name]
    length = ArcLength(curve, 1e-9).total
    miss = [length - np.sum(np.abs(np.diff(curve.point(curve.sample(n))))) for n in (2001, 4001)]
    extrapolated = miss[1] - (miss[0] - miss[1]) / 3
    assert -1e-9 < miss[1] <= 2e-4 * length
    # Chords that cut a corner or cusp spoil the order there.
    assert abs(extrapolated) < (1e-8 if not curve.breaks() else 1e-3) * length


def test_length_along_a_cycloid():
    # s = 8 a sin^2(roll / 4), common to all textbooks of the cycloid.
    lengths = ArcLength(Trace(CircleOnLine(3), -3, 0, 2 * pi))
    roll = np.linspace(0, 2 * pi, 40).reshape(5, 8)
    assert lengths.at(roll) == pytest.approx(24 * np.sin(roll / 4) ** 2, abs=1e-12)
    assert lengths.parameter(24 * np.sin(roll / 4) ** 2) == pytest.approx(roll, abs=1e-7)


def test_parameters_beside_a_cusp_are_sharp():
    # Near the cusp s = 3 roll^2 / 2, so that roll must come out to full digits from tiny lengths.
    lengths = ArcLength(Trace(CircleOnLine(3), -3, 0, 2 * pi))
    s = np.logspace(-20, -6, 60)
    assert lengths.parameter(s) == pytest.approx(4 * np.arcsin(np.sqrt(s / 24)), rel=1e-9)
    assert float(lengths.parameter(np.asarray(0.0))) == 0
    assert float(lengths.parameter(np.asarray(24.0))) == pytest.approx(2 * pi, abs=1e-7)


def test_lengths_beyond_the_ends():
    lengths = ArcLength(Segment(0, 2))
    assert lengths.parameter(np.array([-1.0, 0, 1, 2, 5])) == pytest.approx([0, 0, 0.5, 1, 1], abs=1e-15)
    assert lengths.at(np.array([-0.5, 1.5])) == pytest.approx([-1, 3])


def test_empty_arrays_stay_empty():
    assert LENGTHS.at(np.array([])).shape == LENGTHS.parameter(np.array([])).shape == (0,)


def test_a_tolerance_below_rounding_is_an_error():
    with pytest.raises(
        ToleranceError, match=r"arc length of a Ellipse is known to .* mm after \d+ panels, not to the 1e-18 mm"
    ):
        _ = ArcLength(Ellipse(5, 1), 1e-18).total


def test_a_curve_without_points_is_an_error():
    with pytest.raises(ToleranceError, match="nan mm"):
        _ = ArcLength(Formula(lambda t: t * np.nan, lambda t: t * np.nan, lambda t: t, 0, 1)).total


@given(st.sampled_from(sorted(SPECIMENS)), st.lists(st.floats(0, 1), min_size=1, max_size=4).map(np.array))
def test_parameter_undoes_length(name, share):
    lengths = ArcLength(SPECIMENS[name])
    s = share * lengths.total
    assert np.allclose(lengths.at(lengths.parameter(s)), s, rtol=0, atol=1e-12 * (1 + lengths.total))


@given(st.floats(0, 1), st.floats(0.1, 10))
def test_lengths_add_reverse_and_scale(share, factor):
    base = LENGTHS.curve
    t0, t1 = base.span
    cut = t0 + share * (t1 - t0)
    parts = ArcLength(Section(base, t0, cut)).total + ArcLength(Section(base, cut, t1)).total
    assert parts == pytest.approx(LENGTHS.total, abs=3e-10)
    assert ArcLength(Reversed(base)).total == pytest.approx(LENGTHS.total, abs=2e-10)
    assert ArcLength(Turned(base, factor * 1j, 7)).total == pytest.approx(factor * LENGTHS.total, abs=2e-9)
