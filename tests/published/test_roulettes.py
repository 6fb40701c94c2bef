"""Numbered values of roulettes.

Origin of the figures: `closed form` ones were worked out from the formula named, in another program, to 25 digits with
mpmath, and rounded as printed here; they are not quoted from a publication. `published` names the publication of the
formula, `from memory` a statement recalled without it.
"""

from math import pi

import numpy as np
import pytest
from scipy.integrate import quad

from gearsolid.curves.length import ArcLength
from gearsolid.curves.primitives import Ellipse, Formula, Segment
from gearsolid.curves.rolling import CircleOnCircle, CircleOnLine, LineOnCircle
from gearsolid.curves.roulette import Roulette, Trace

# Roll [deg], x, y, arc from the cusp, curvature radius [modules]. Coordinates and arcs: closed form. Curvature radius:
# published formula, Encyclopaedia Britannica, 11th ed. (1911), "Mechanics" (Rankine), art. 50, eq. 28, evaluated.
EPICYCLOID_32_2 = [
    (15, 32.0723250936, 0.00712163893069, 0.072718678323, 0.98619789677),
    (30, 32.2833916111, 0.0563131146397, 0.28963047654, 1.9555216741),
    (45, 32.6159276013, 0.186398676422, 0.64702397365, 2.8913859334),
    (60, 33.0426260097, 0.429960910759, 1.1387840678, 3.7777777778),
    (75, 33.5282444140, 0.810824508691, 1.7564966075, 4.5995307970),
    (90, 34.0323149875, 1.34221331786, 2.4895923599, 5.3425845690),
]
HYPOCYCLOID_20_6 = [
    (15, 19.8563721176, 0.00501418723694, 0.14372632892, 5.4821000732),
    (30, 19.4291193273, 0.0398748132914, 0.57244611834, 10.870399894),
    (45, 18.7290198717, 0.133243705687, 1.2788238538, 16.072704159),
    (60, 17.7736601810, 0.311454283096, 2.2507732164, 21.000000000),
]
# Cycloid of a circle of radius 3 on a straight rack, along and across the rack (closed form).
CYCLOID_3 = [
    (30, 0.070796326795, 0.40192378865, 0.40889008453, 3.1058285412),
    (60, 0.54351644224, 1.5, 1.6076951546, 6.0),
]
# Involute of a circle of radius 10: unwound angle [rad], x, y, arc (closed form).
INVOLUTE_10 = [
    (0.5, 11.1729533119, 0.40634257659, 1.25),
    (1.0, 13.8177329068, 3.0116867894, 5.0),
    (1.5, 15.6697968157, 8.91389184103, 11.25),
]
# Focus of the parabola y^2 = 6 x on a line: parameter u of the point (1.5 u^2, 3 u), x, height (closed form).
CATENARY = [
    (0.5, 0.721817737589, 1.67705098312),
    (1.0, 1.32206038053, 2.12132034356),
    (2.0, 2.16545321277, 3.35410196625),
]
# Focus of the ellipse 2, 1.2 on a line: eccentric anomaly, x, y (closed form).
UNDULARY = [
    (0.5, 0.319036626441, 0.502057014391),
    (1.0, 0.601734475203, 0.755535295534),
    (pi / 2, 0.95269988634, 1.2),
    (2.0, 1.33802274007, 1.69626262136),
    (pi, 5.10539977268, 3.6),
]
# Focus of the hyperbola 2, 1.2 on a line: argument of the elliptic functions, x, y. Published parametrisation: Oprea,
# Differential Geometry and its Applications, 2007, pp. 147-148 (as given by an encyclopaedia), evaluated.
NODARY = [
    (0.4, 0.113560448374, 0.355437284758),
    (0.9, 0.250851301761, 0.454445988296),
]


@pytest.mark.parametrize("row", EPICYCLOID_32_2, ids=lambda r: f"{r[0]} deg")
def test_epicycloid_of_a_64_tooth_wheel_for_an_8_leaf_pinion(row):
    check(Trace(CircleOnCircle(32, 2), -2, 0, pi), np.radians(row[0]), complex(row[1], row[2]), *row[3:])


@pytest.mark.parametrize("row", HYPOCYCLOID_20_6, ids=lambda r: f"{r[0]} deg")
def test_hypocycloid(row):
    curve = Trace(CircleOnCircle(20, -6), 6, -pi, 0)
    check(curve, -np.radians(row[0]), complex(row[1], row[2]), *row[3:])


@pytest.mark.parametrize("row", CYCLOID_3, ids=lambda r: f"{r[0]} deg")
def test_rack_cycloid(row):
    check(Trace(CircleOnLine(3), -3, 0, pi), np.radians(row[0]), complex(row[2], row[1]), *row[3:])


@pytest.mark.parametrize("row", INVOLUTE_10, ids=lambda r: f"{r[0]} rad")
def test_involute(row):
    curve = Trace(LineOnCircle(10), 0, -20, 0)
    check(curve, -10 * row[0], complex(row[1], row[2]), row[3], 10 * row[0])


def check(curve, roll, point, arc, radius):
    """Coordinates, arc from the cusp at roll 0, and curvature radius, to the digits given."""
    roll = np.asarray(roll)
    assert complex(curve.point(roll)) == pytest.approx(point, abs=6e-11)
    lengths = ArcLength(curve)
    assert abs(float(lengths.at(roll) - lengths.at(np.asarray(0.0)))) == pytest.approx(arc, rel=1e-10)
    assert abs(float(curve.curvature(roll))) == pytest.approx(1 / radius, rel=1e-10)


def test_whole_arches():
    """Arch 8 a (R +- a) / R, area pi a^2 (3 R +- 2 a) / R (closed form)."""
    epi, hypo = Trace(CircleOnCircle(32, 2), -2, 0, 2 * pi), Trace(CircleOnCircle(20, -6), 6, -2 * pi, 0)
    assert ArcLength(epi).total == pytest.approx(17, abs=1e-10)
    assert ArcLength(hypo).total == pytest.approx(33.6, abs=1e-10)
    assert swept(epi) - pi * 2 * 32 == pytest.approx(39.269908169872, abs=1e-10)
    assert pi * 6 * 20 - abs(swept(hypo)) == pytest.approx(271.43360527016, abs=1e-10)


def swept(curve):
    def wedge(t):
        return float(np.imag(np.conj(curve.point(np.asarray(t))) * curve.derivative(np.asarray(t)))) / 2

    return quad(wedge, *curve.span, epsabs=1e-12, epsrel=1e-13)[0]


def test_radial_flank():
    """A describing circle of half the pitch circle draws a diameter: R 4, a 2, roll 50 deg (closed form)."""
    point = complex(Trace(CircleOnCircle(4, -2), 2, -1, 0).point(np.asarray(-np.radians(50))))
    assert point == pytest.approx(3.6252311481, abs=6e-11)


@pytest.mark.parametrize("row", CATENARY, ids=lambda r: f"u {r[0]}")
def test_focus_of_a_parabola(row):
    u, x, height = row
    rolling = Formula(lambda u: 1.5 * u**2 + 3j * u, lambda u: 3 * u + 3j, lambda u: np.full(np.shape(u), 3.0), 0, 2.5)
    lengths = ArcLength(rolling)
    curve = Roulette(Segment(0, lengths.total), rolling, 1.5)
    point = complex(curve.point(lengths.at(np.asarray(u)) / lengths.total))
    assert point.real == pytest.approx(x, abs=1e-10)
    assert abs(point.imag) == pytest.approx(height, abs=1e-10)


@pytest.mark.parametrize("row", UNDULARY, ids=lambda r: f"t {r[0]:.3g}")
def test_focus_of_an_ellipse(row):
    t, x, y = row
    rolling = Ellipse(2, 1.2)
    lengths = ArcLength(rolling)
    curve = Roulette(Segment(0, lengths.total), rolling, 1.6)
    point = complex(curve.point(lengths.at(np.asarray(t)) / lengths.total))
    assert point == pytest.approx(complex(x, y), abs=2e-10)


def test_undulary_over_one_period():
    """Period 4 a E(e), arc 2 pi a, area 2 pi a^2 (closed form)."""
    lengths = ArcLength(Ellipse(2, 1.2))
    assert lengths.total == pytest.approx(10.2107995454, abs=6e-11)
    curve = Roulette(Segment(0, lengths.total), Ellipse(2, 1.2), 1.6)
    assert ArcLength(curve, 1e-10).total == pytest.approx(12.5663706144, abs=2e-10)
    area = quad(
        lambda t: float(np.imag(curve.point(np.asarray(t))) * np.real(curve.derivative(np.asarray(t)))),
        0,
        1,
        epsabs=1e-10,
    )[0]
    assert area == pytest.approx(25.1327412287, abs=2e-9)


@pytest.mark.parametrize("row", NODARY, ids=lambda r: f"u {r[0]}")
def test_focus_of_a_hyperbola(row):
    _, x, y = row
    rolling = Formula(
        lambda v: 2 * np.cosh(v) - 1.2j * np.sinh(v),
        lambda v: 2 * np.sinh(v) - 1.2j * np.cosh(v),
        lambda v: 2 * np.cosh(v) - 1.2j * np.sinh(v),
        0,
        1,
    )
    curve = Roulette(Segment(0, ArcLength(rolling).total), rolling, np.hypot(2, 1.2))
    t = curve.sample(20001)
    z = curve.point(t)
    order = np.argsort(np.abs(z.imag))
    assert np.interp(y, np.abs(z.imag)[order], np.abs(z.real)[order]) == pytest.approx(x, abs=2e-8)
    residual = z.imag**2 + 4 * np.abs(z.imag) * np.abs(curve.tangent(t).real) - 1.44
    assert np.abs(residual[1:]).max() < 1e-9


def test_descent_along_a_cycloid():
    """Time to the lowest point pi sqrt(A / g) from any release: A 1 m, g 9.80665 m/s^2 gives 1.00320464629 s."""
    curve = Trace(CircleOnLine(1), -1, 0, pi)

    def time(release):
        # With roll = release + u^2 the standing start is no longer singular.
        def moment(u):
            roll = np.asarray(release + u * u)
            drop = float(curve.point(roll).real - curve.point(np.asarray(release)).real)
            speed = np.sqrt(2 * 9.80665 * drop)
            return abs(complex(curve.derivative(roll))) / speed * 2 * u

        return quad(moment, 1e-8, np.sqrt(pi - release), epsabs=1e-12)[0]

    assert time(0.0) == pytest.approx(1.00320464629, abs=1e-7)
    assert time(1.0) == pytest.approx(1.00320464629, abs=1e-7)
    assert time(2.5) == pytest.approx(1.00320464629, abs=1e-7)
