"""Traces and general roulettes: two ways to each curve, the instant centre, and lengths and areas with closed forms."""

from math import pi

import numpy as np
import pytest
from curve_specimens import epicycloid, hypocycloid, parabola
from hypothesis import assume, given
from hypothesis import strategies as st
from scipy.integrate import quad
from scipy.special import ellipe

from gearsolid.curves.curve import Curve, Reversed
from gearsolid.curves.length import ArcLength
from gearsolid.curves.primitives import Arc, Ellipse, Formula, Segment
from gearsolid.curves.rolling import CircleOnCircle, CircleOnLine, LineOnCircle
from gearsolid.curves.roulette import Roulette, Trace
from gearsolid.errors import DesignError

radii = st.floats(0.5, 20)
rolls = st.floats(-10, 10)


def area_under(curve: Curve) -> float:
    """Integral of y dx [mm2]."""

    def strip(t: float) -> float:
        return float(np.imag(curve.point(np.asarray(t))) * np.real(curve.derivative(np.asarray(t))))

    return quad(strip, *curve.span, epsabs=1e-9, epsrel=1e-11)[0]


def sector(curve: Curve) -> float:
    """Area swept by the ray from the origin [mm2]."""

    def wedge(t: float) -> float:
        return float(np.imag(np.conj(curve.point(np.asarray(t))) * curve.derivative(np.asarray(t)))) / 2

    return quad(wedge, *curve.span, epsabs=1e-10, epsrel=1e-12)[0]


@given(radii, radii, rolls)
def test_epicycloid_coordinates(fixed, a, roll):
    t = a * roll / fixed
    expected = (fixed + a) * np.exp(1j * t) - a * np.exp(1j * (t + roll))
    assert abs(complex(epicycloid(fixed, a, 99).point(np.asarray(roll))) - expected) < 1e-12 * (fixed + 2 * a)


@given(radii, radii, rolls)
def test_hypocycloid_coordinates(fixed, a, roll):
    assume(abs(fixed - a) > 1e-3)
    t = -a * roll / fixed
    expected = (fixed - a) * np.exp(1j * t) + a * np.exp(1j * (t + roll))
    assert abs(complex(hypocycloid(fixed, a, 99).point(np.asarray(roll))) - expected) < 1e-12 * (fixed + 2 * a)


@pytest.mark.parametrize(("fixed", "a"), [(32, 2), (4, 2), (10, 7), (3, 9)])
def test_arch_of_an_epicycloid(fixed, a):
    arch = epicycloid(fixed, a, 2 * pi)
    assert ArcLength(arch).total == pytest.approx(8 * a * (fixed + a) / fixed, abs=1e-10)
    above_the_circle = sector(arch) - pi * a * fixed
    assert above_the_circle == pytest.approx(pi * a**2 * (3 * fixed + 2 * a) / fixed, rel=1e-11)


@pytest.mark.parametrize(("fixed", "a"), [(20, 6), (4, 2), (10, 1), (10, 7)])
def test_arch_of_a_hypocycloid(fixed, a):
    arch = hypocycloid(fixed, a, 2 * pi)
    assert ArcLength(arch).total == pytest.approx(8 * a * (fixed - a) / fixed, abs=1e-10)
    below_the_circle = pi * a * fixed + sector(arch)  # swept clockwise
    assert below_the_circle == pytest.approx(pi * a**2 * (3 * fixed - 2 * a) / fixed, rel=1e-11)


@given(radii, rolls)
def test_hypocycloid_of_half_the_radius_is_a_diameter(a, roll):
    point = complex(hypocycloid(2 * a, a, 99).point(np.asarray(roll)))
    assert point == pytest.approx(2 * a * np.cos(roll / 2), abs=1e-12 * a)


@given(radii, rolls)
def test_involute_of_a_circle(base, roll):
    curve = Trace(LineOnCircle(base), 0, -100, 100)
    angle = -roll / base
    assert complex(curve.point(np.asarray(roll))) == pytest.approx(
        base * np.exp(1j * angle) * (1 - 1j * angle), abs=1e-11 * (1 + abs(roll))
    )


MOTIONS = {
    "circle outside": CircleOnCircle(7, 3),
    "circle inside": CircleOnCircle(7, -3),
    "ring around": CircleOnCircle(7, -12),
    "circle on line": CircleOnLine(3),
    "circle under line": CircleOnLine(-3),
    "line on circle": LineOnCircle(5),
}


@pytest.fixture(params=MOTIONS.values(), ids=MOTIONS)
def motion(request):
    return request.param


def test_normal_of_a_trace_passes_through_the_instant_centre(motion):
    # The pitch point is where a carried point on the pitch curve rests; every trace is normal to the line to it.
    for at in np.linspace(-2, 2, 9):
        pole = -1j * at if isinstance(motion, LineOnCircle) else -motion.carried * np.exp(-1j * at)
        assert abs(complex(motion.velocity(np.asarray(pole), np.asarray(at)))) < 1e-12
        centre = complex(motion.place(np.asarray(pole), np.asarray(at)))
        for p in (1 + 0.3j, -4j, 5.0):
            ray = complex(motion.place(np.asarray(p), np.asarray(at))) - centre
            velocity = complex(motion.velocity(np.asarray(p), np.asarray(at)))
            assert abs((ray * velocity.conjugate()).real) < 1e-12 * abs(ray) * abs(velocity)


def test_carried_lengths_are_kept(motion):
    roll = np.linspace(-3, 3, 7)
    gap = motion.place(np.asarray(2 + 1j), roll) - motion.place(np.asarray(-1 + 3j), roll)
    assert np.abs(gap) == pytest.approx(abs(3 - 2j), rel=1e-13)
    assert gap / (3 - 2j) == pytest.approx(motion.turn(roll), rel=1e-12)


def test_pitch_curves_meet_without_slip(motion):
    # The pole runs along the fixed pitch curve by as much as along the carried one.
    roll = np.linspace(0, 2, 2001)
    carried = -1j * roll if isinstance(motion, LineOnCircle) else -motion.carried * np.exp(-1j * roll)
    fixed = motion.place(carried, roll)
    assert np.abs(np.diff(fixed)) == pytest.approx(np.abs(np.diff(carried)), rel=1e-6)


@pytest.mark.parametrize("tracer", [3, 2.0, 4.5 + 1j], ids=["on", "inside", "outside"])
@pytest.mark.parametrize("inner", [False, True], ids=["outside", "inside"])
def test_circle_on_circle_two_ways(inner, tracer):
    """The general roulette against the closed form, in which the circles first touch at -carried."""
    a, fixed = 3.0, 8.0
    motion = CircleOnCircle(fixed, -a if inner else a)
    circle = Arc(0, a, 0, 8) if inner else Arc(0, a, pi, pi - 8)
    general = Roulette(Arc(0, fixed, 0, 2), circle, tracer)
    closed = Trace(motion, tracer, 0, 6)
    share = np.linspace(0, 1, 50)
    roll = 2 * fixed * share / motion.carried
    assert np.abs(general.point(share) - closed.point(roll)).max() < 1e-10


def faster(curve: Curve, power: float) -> Formula:
    """The same curve written with another speed."""
    t0, t1 = curve.span

    def inside(u):
        return t0 + (t1 - t0) * u * (1 + power * u) / (1 + power)

    def rate(u):
        return (t1 - t0) * (1 + 2 * power * u) / (1 + power)

    return Formula(
        lambda u: curve.point(inside(u)),
        lambda u: curve.derivative(inside(u)) * rate(u),
        lambda u: (
            curve.second(inside(u)) * rate(u) ** 2 + curve.derivative(inside(u)) * 2 * power * (t1 - t0) / (1 + power)
        ),
        0,
        1,
    )


@given(st.floats(0, 5), st.floats(-3, 3), st.floats(-3, 3))
def test_speed_of_the_rolling_curve_does_not_matter(power, x, y):
    fixed, rolling = Arc(0, 6, 0, 1), Ellipse(2, 1.2, 0, 7)
    tracer = complex(x, y)
    plain, other = Roulette(fixed, rolling, tracer), Roulette(fixed, faster(rolling, power), tracer)
    t = fixed.sample(9)
    assert np.abs(plain.point(t) - other.point(t)).max() < 2e-9
    assert np.abs(plain.derivative(t) - other.derivative(t)).max() < 1e-6


@pytest.mark.parametrize("power", [0.3, 4])
def test_speed_of_the_fixed_curve_does_not_matter(power):
    fixed, rolling = Ellipse(6, 5, 0, 1), Ellipse(2, 1.2, 0, 7)
    other = faster(fixed, power)
    u = np.linspace(0, 1, 20)
    t = u * (1 + power * u) / (1 + power)
    assert np.abs(Roulette(fixed, rolling, 1j).point(t) - Roulette(other, rolling, 1j).point(u)).max() < 1e-9


@pytest.mark.parametrize("tol", [1e-3, 1e-5, 1e-7, 1e-9, 1e-11])
def test_roulette_keeps_its_tolerance(tol):
    fixed, rolling = Segment(0, 24), Ellipse(4, 1, 0, 3 * pi)
    t = fixed.sample(40)
    exact = Roulette(fixed, rolling, 1, 1e-12).point(t)
    # An error of the length turns the carried body by at most its curvature times the error.
    sharpest = 1 + 4.0 * np.abs(1 - rolling.point(rolling.sample(99))).max()
    assert np.abs(Roulette(fixed, rolling, 1, tol).point(t) - exact).max() <= sharpest * tol


def test_focus_of_a_parabola_rolls_along_a_catenary():
    c = 1.5
    rolling = parabola(c, 0, 2)
    curve = Roulette(Segment(0, ArcLength(rolling).total), rolling, c)
    z = curve.point(curve.sample(60))
    assert -z.imag == pytest.approx(c * np.cosh(z.real / c), abs=1e-10)
    # Break it: another point than the focus leaves the catenary.
    off = Roulette(curve.fixed, rolling, c + 0.01).point(curve.sample(60))
    assert np.abs(-off.imag - c * np.cosh(off.real / c)).max() > 1e-3


@pytest.mark.parametrize(("a", "b"), [(2, 1.2), (3, 2.9), (1, 0.1)])
def test_focus_of_an_ellipse_rolls_along_an_undulary(a, b):
    e = np.sqrt(1 - (b / a) ** 2)
    period = 4 * a * ellipe(e**2)
    curve = Roulette(Segment(0, period * (1 - 1e-13)), Ellipse(a, b), a * e)
    assert complex(curve.end - curve.start) == pytest.approx(period, abs=1e-9)
    assert ArcLength(curve, 1e-9).total == pytest.approx(2 * pi * a, abs=1e-8)
    assert area_under(curve) == pytest.approx(2 * pi * a**2, rel=1e-8)
    t = curve.sample(50)
    y, rise = curve.point(t).imag, curve.derivative(t)
    residual = y**2 - 2 * a * y * np.abs(rise.real) / np.abs(rise) + b**2
    assert np.abs(residual).max() < 1e-8 * a**2
    # Mean curvature of the surface of revolution is constant: k1 + k2 = 1/a.
    bend = -curve.turning(t) / np.abs(rise) + np.abs(rise.real) / (np.abs(rise) * y)
    assert bend[2:-2] == pytest.approx(1 / a, rel=2e-4)


def test_roulette_of_a_closed_curve_encloses_twice_its_pedal():
    """Steiner: rolling once on a line, area is twice the pedal's and arc is the pedal's, for any point inside."""
    rolling, tracer = Ellipse(2, 1.2), 0.4 + 0.3j
    curve = Roulette(Segment(0, 8 * ellipe(1 - 0.36) * (1 - 1e-13)), rolling, tracer)

    def foot(t):
        away = tracer - rolling.point(t)
        tangent = rolling.tangent(t)
        return rolling.point(t) + tangent * np.real(away * np.conj(tangent)) - tracer

    def foot_rate(t):
        tangent, turning = rolling.tangent(t), rolling.turning(t)
        away = tracer - rolling.point(t)
        normal = 1j * tangent * turning
        along = np.real(away * np.conj(tangent))
        return tangent * np.real(away * np.conj(normal)) + normal * along

    pedal = Formula(foot, foot_rate, np.zeros_like, 0, 2 * pi)
    assert area_under(curve) == pytest.approx(2 * sector(pedal), rel=1e-8)
    assert ArcLength(curve, 1e-8).total == pytest.approx(ArcLength(pedal, 1e-8).total, abs=1e-7)


def test_line_on_a_catenary_gives_a_straight_line():
    """The road on which a square wheel rides level."""
    catenary = Formula(lambda t: t + 1j * np.cosh(t), lambda t: 1 + 1j * np.sinh(t), lambda t: 1j * np.cosh(t), 0, 1.5)
    curve = Roulette(catenary, Segment(0, np.sinh(1.5) + 0.01), -1j)
    z = curve.point(curve.sample(40))
    assert np.abs(z.imag).max() < 1e-10
    assert z.real == pytest.approx(curve.sample(40), abs=1e-10)


def test_corner_of_the_rolling_curve_is_a_break_of_the_roulette():
    polygon = Formula(
        lambda t: np.where(t < 1, t, 1) + 1j * np.where(t < 1, 0, t - 1),
        lambda t: np.where(t < 1, 1, 1j),
        np.zeros_like,
        0,
        2,
        (1.0,),
    )
    assert Roulette(Segment(0, 2), polygon, 0.5j).breaks() == pytest.approx((0.5,))
    assert Roulette(Segment(0, 0.9), polygon, 0.5j).breaks() == ()


def test_contact_point_is_the_instant_centre():
    curve = Roulette(Ellipse(6, 5, 0, 2), Reversed(Ellipse(2, 1.2, -14, 0)), 0.7)
    t = curve.sample(30)
    ray = curve.point(t) - curve.fixed.point(t)
    assert np.abs(np.real(ray * np.conj(curve.tangent(t)))).max() < 1e-9


def test_a_rolling_curve_too_short_is_refused():
    with pytest.raises(DesignError, match=r"rolling curve is 3 mm long and the fixed one 5 mm; .* extend its span"):
        Roulette(Segment(0, 5), Segment(0, 3), 1j)


@pytest.mark.parametrize(
    ("make", "says"),
    [
        (lambda: CircleOnCircle(0, 3), "radii 0 and 3 mm"),
        (lambda: CircleOnCircle(3, 0), "radii 3 and 0 mm"),
        (lambda: CircleOnCircle(3, -3), "radii 3 and -3 mm"),
        (lambda: CircleOnLine(0), "on a line is 0"),
        (lambda: LineOnCircle(-1), "is -1 mm"),
    ],
    ids=["no fixed circle", "no carried circle", "circles on each other", "no circle on a line", "negative circle"],
)
def test_impossible_rollings_are_refused(make, says):
    with pytest.raises(DesignError, match=says):
        make()
