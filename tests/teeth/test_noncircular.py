"""Non-circular wheels against closed forms, and pairs against polygons that know nothing of the law of gearing."""

import re
from functools import lru_cache
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from shapely.affinity import rotate, translate
from shapely.geometry import Polygon

from gearsolid.curves.curve import Reversed, Turned
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.field import field_of
from gearsolid.curves.length import ArcLength
from gearsolid.curves.line_on_curve import LineOnCurve
from gearsolid.curves.pitch_curve import PitchCurve, Polar
from gearsolid.curves.primitives import Arc, Ellipse, Segment
from gearsolid.curves.rolling import LineOnCircle
from gearsolid.errors import DesignError, ToleranceError
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.noncircular import NoncircularWheel
from gearsolid.teeth.noncircular_pair import elliptic_pair, noncircular_pair, ratio_pair
from gearsolid.teeth.rack import ISO53_D, BasicRack


def ellipse(a, e):
    return PitchCurve(Ellipse(a, a * np.sqrt(1 - e**2), centre=-a * e))


def eccentric_circle(radius, off):
    return PitchCurve(Arc(off, radius, 0, 2 * np.pi))


@pytest.mark.parametrize(("teeth", "rack"), [(30, BasicRack()), (45, ISO53_D)])
@pytest.mark.parametrize("order", [1, 5])
def test_a_circle_gives_the_ordinary_involute_gear(teeth, rack, order):
    circle = PitchCurve(Arc(0, teeth / 2, 0, 2 * np.pi / order), order)
    wheel, gear = NoncircularWheel(circle, teeth, rack=rack), InvoluteGear(teeth, 1, rack=rack)
    assert wheel.outline.order == order
    assert wheel.module == pytest.approx(1)
    field = field_of(gear.outline)
    for piece in wheel.outline.pieces[: 2 * 6]:
        assert np.max(np.abs(field.near(piece.curve.point(piece.curve.sample(15))).distance)) < 1e-8
    for piece in (p for p in wheel.outline.pieces if p.role == "flank"):
        z = piece.curve.point(piece.curve.sample(9))
        z = z[np.abs(z) > gear.base_radius]
        place = np.angle(z) * teeth / (2 * np.pi)
        half = np.array([gear.half_angle_at(float(r)) for r in np.abs(z)])
        assert np.abs(np.abs(place - np.round(place)) * 2 * np.pi / teeth - half) == pytest.approx(0, abs=1e-10)
    assert (wheel.tip_radius, wheel.root_radius) == pytest.approx((gear.tip_radius, gear.root_radius))


@pytest.mark.parametrize("e", [0.0, 0.2, 0.5, 0.8])
def test_the_mate_of_an_ellipse_about_its_focus_is_the_same_ellipse(e):
    curve = ellipse(20, e)
    distance = curve.closing_distance(1)
    assert distance == pytest.approx(40, abs=1e-9)
    mate = curve.mate(distance)
    z = mate.point(mate.sample(200))
    # About one focus at the origin; the contact starts on its far end, so the other focus lies on +x.
    assert np.abs(z) + np.abs(z - 2 * 20 * e) == pytest.approx(40, abs=1e-8)
    assert mate.closed(1).length == pytest.approx(curve.length, abs=1e-9)


@pytest.mark.parametrize("e", [0.1, 0.4])
def test_turns_of_elliptic_wheels_follow_the_closed_form(e):
    pair = elliptic_pair(20, e, 60)
    driver = np.linspace(-720, 720, 97)
    # r1 / (2a - r1) about foci integrates to tan(turn2 / 2) = (1 - e) / (1 + e) tan(turn1 / 2).
    half = np.radians(driver) / 2
    exact = -2 * (np.arctan((1 - e) / (1 + e) * np.tan(half)) + np.pi * np.round(half / np.pi))
    turned = np.radians(pair.driven_angle(driver))
    assert np.angle(np.exp(1j * (turned - exact))) == pytest.approx(0, abs=1e-9)
    assert pair.driven_angle(360.0) == pytest.approx(-360)
    assert pair.ratio(0.0) == pytest.approx(-(1 - e) / (1 + e))
    assert pair.ratio(180.0) == pytest.approx(-(1 + e) / (1 - e))


PAIRS = {
    "ellipses": lambda: elliptic_pair(20, 0.4, 40),
    "slender ellipses": lambda: elliptic_pair(20, 0.6, 61),
    "ellipse and mate of two lobes": lambda: elliptic_pair(20, 0.2, 41, 2),
    "ellipse and mate of three lobes": lambda: elliptic_pair(
        20, 0.1, 31, 3, pressure_angle_deg=25, rack=BasicRack(1, 1.25, 0.2)
    ),
    "eccentric circle": lambda: noncircular_pair(eccentric_circle(15, 4), 36),
    "two lobes on one": lambda: noncircular_pair(
        PitchCurve(Polar.of(lambda t: 20 / (1 - 0.2 * np.cos(2 * t)), 2), 2), 44, 1
    ),
    "two lobes on two": lambda: noncircular_pair(PitchCurve(Ellipse(20, 17, 0, np.pi), 2), 40, 2),
    "stated ratio": lambda: ratio_pair(lambda t: 1 + 0.3 * np.cos(t) + 0.05 * np.sin(2 * t), 50, 50),
    "stated ratio 1 to 2": lambda: ratio_pair(lambda t: 0.5 + 0.08 * np.sin(t), 60, 40, 1, 2),
}


RARELY = {"ellipses", "two lobes on two", "ellipse and mate of two lobes"}


@pytest.fixture(
    params=[
        pytest.param(make, id=name, marks=pytest.mark.slow if name in RARELY else ()) for name, make in PAIRS.items()
    ],
    scope="module",
)
def pair(request):
    return request.param()


def test_equal_lengths_pass_the_line_of_centres(pair):
    given, mate = pair.mating.given.curve, pair.mating
    t = given.sample(9)
    for a, b in pairwise(t):
        # Plain sums over dense chords of both, without the library's own lengths.
        u = np.linspace(a, b, 4001)
        own, other = (np.sum(np.abs(np.diff(c.point(u)))) for c in (given, mate))
        assert own == pytest.approx(other, rel=1e-6)
    assert np.abs(given.point(t)) + np.abs(mate.point(t)) == pytest.approx(pair.centre_distance)
    assert pair.driver.pitch == pytest.approx(pair.driven.pitch, rel=1e-10)


def test_ratio_is_the_slope_of_the_turn(pair):
    driver, step = np.linspace(0, 360, 41), 1e-3
    slope = (pair.driven_angle(driver + step) - pair.driven_angle(driver - step)) / (2 * step)
    assert pair.ratio(driver) == pytest.approx(slope, rel=1e-7)


def test_turns_go_on_after_whole_rounds(pair):
    whole = 360 * pair.driver.pitch_curve.order / pair.driven.pitch_curve.order
    assert pair.driven_angle(370.0) - pair.driven_angle(10.0) == pytest.approx(-whole, abs=1e-9)


def polygon(outline, per_piece=24):
    z = np.concatenate([p.curve.point(p.curve.sample(per_piece))[:-1] for p in outline.pieces])
    z = np.concatenate([z * outline.step**k for k in range(outline.order)])
    return Polygon(np.column_stack([z.real, z.imag]))


@lru_cache(maxsize=2)
def polygons(pair):
    return polygon(pair.driver.outline), polygon(pair.driven.outline)


def placed(pair, driver_deg, late_deg=0.0):
    driver, driven = polygons(pair)
    for angle in driver_deg:
        turn = float(pair.driven_angle(angle)) + 180 + late_deg
        a = rotate(driver, angle, (0, 0))
        yield a, translate(rotate(driven, turn, (0, 0)), pair.centre_distance, 0)


def test_outlines_are_simple_and_hold_the_area_they_say(pair):
    for wheel in (pair.driver, pair.driven):
        shape = polygon(wheel.outline, 50)
        assert shape.is_valid
        assert shape.exterior.is_ccw
        assert shape.area == pytest.approx(wheel.outline.area, rel=1e-5)
        assert len([p for p in wheel.outline.pieces if p.role == "tip"]) * wheel.outline.order == wheel.teeth


def test_wheels_touch_and_never_overlap(pair):
    module = pair.driver.module
    # Steps that share nothing with the teeth, so that each pose looks at another phase of contact.
    for a, b in placed(pair, np.arange(24) * 137.5077 % 360):
        # Chords of the polygons lie a little inside convex flanks.
        assert a.intersection(b).area < 2e-6 * module**2
        assert a.distance(b) < 5e-4 * module


@pytest.mark.parametrize("late", [-0.05, 0.05])
def test_both_flanks_of_a_tooth_are_in_contact(pair, late):
    """Turned by a little either way, the driven wheel overlaps everywhere: there is no play to hide an error in."""
    for a, b in placed(pair, np.linspace(3, 363, 7), late):
        assert a.intersection(b).area > 1e-3 * pair.driver.module**2


def test_a_stated_ratio_comes_back():
    pair = ratio_pair(lambda t: 1 + 0.3 * np.cos(t), 50, 50)
    driver = np.linspace(0, 720, 50)
    assert pair.ratio(driver) == pytest.approx(-(1 + 0.3 * np.cos(np.radians(driver))))
    assert pair.centre_distance == 50


def test_the_ratio_of_ellipses_gives_ellipses():
    e = 0.3

    def ratio(t):
        r = 20 * (1 - e**2) / (1 + e * np.cos(t))
        return r / (40 - r)

    z = ratio_pair(ratio, 40, 50).driver.pitch_curve.curve.point(np.linspace(0, 2 * np.pi, 60))
    assert np.abs(z) + np.abs(z + 2 * 20 * e) == pytest.approx(40, abs=1e-9)


@settings(max_examples=15, deadline=None)
@given(
    second=st.floats(-0.03, 0.03),
    third=st.floats(-0.015, 0.015),
    phase=st.floats(0, 6.3),
    off=st.floats(0, 0.15),
    order=st.integers(1, 3),
)
def test_any_gentle_curve_closes_with_its_mate(second, third, phase, off, order):
    def radius(t):
        return 20 * (1 + off * np.cos(t) + second * np.cos(2 * t + phase) + third * np.cos(3 * t))

    curve = PitchCurve(Polar.of(radius))
    distance = curve.closing_distance(order)
    mate = curve.mate(distance).closed(order)
    assert mate.length == pytest.approx(order * curve.length, rel=1e-9)
    # Rolled back on the mate, the given curve closes at the same distance.
    assert mate.closing_distance(1) == pytest.approx(distance, rel=1e-9)


def test_walking_by_length_is_walking_at_unit_speed():
    walk = ellipse(20, 0.5).by_length
    s = np.linspace(-30, 400, 301)
    step = 1e-4
    slope = (walk.point(s + step) - walk.point(s - step)) / (2 * step)
    assert np.abs(slope) == pytest.approx(1, abs=1e-7)
    assert walk.derivative(s) == pytest.approx(slope, abs=1e-7)
    bend = (walk.derivative(s + step) - walk.derivative(s - step)) / (2 * step)
    assert walk.second(s) == pytest.approx(bend, abs=1e-6)
    assert walk.turning(s) == pytest.approx(np.imag(np.conj(walk.derivative(s)) * bend), abs=1e-6)
    length = ArcLength(Ellipse(20, 20 * np.sqrt(0.75)), 1e-10).total
    assert walk.point(s + length) == pytest.approx(walk.point(s), abs=1e-8)


def test_a_line_on_a_circle_by_length_is_a_line_on_a_circle():
    """The two motions count lengths in opposite directions."""
    curve, circle = LineOnCurve(PitchCurve(Arc(0, 7, 0, 2 * np.pi)).by_length), LineOnCircle(7)
    flank = Segment(-0.5 + 0.2j, 1.0 + 0.7j)
    ours, known = Envelope(flank, curve), Envelope(flank, circle)
    t = flank.sample(20)
    assert ours.roll(t) == pytest.approx(-known.roll(t))
    assert ours.point(t) == pytest.approx(known.point(t), abs=1e-10)
    assert ours.derivative(t) == pytest.approx(known.derivative(t), abs=1e-8)
    p, roll = flank.point(t), ours.roll(t)
    assert curve.acceleration(p, roll) == pytest.approx(circle.acceleration(p, -roll), abs=1e-6)
    assert curve.rests(0.3j, 0, 1) == (0.3,)
    assert curve.rests(0.1 + 0.3j, 0, 1) == curve.rests(2j, 0, 1) == ()


@pytest.mark.parametrize(("lobes", "limit"), [(2, 1 / 3), (3, 1 / 8)])
def test_lobed_curves_turn_hollow_where_the_closed_form_says(lobes, limit):
    """1 / r plus its second derivative changes sign at eccentricity 1 / (lobes^2 - 1)."""

    def curve(e):
        return PitchCurve(Polar.of(lambda t: 20 / (1 - e * np.cos(lobes * t)), lobes), lobes)

    assert curve(limit - 1e-3).flattest[0] > 0
    assert curve(limit + 1e-3).flattest[0] < 0
    with pytest.raises(DesignError, match=r"hollow near x .* curvature there is -0\.0"):
        NoncircularWheel(curve(limit + 0.02), 60 * lobes)


def test_the_undercut_message_names_a_number_of_teeth_that_works():
    with pytest.raises(DesignError, match="take about") as caught:
        elliptic_pair(20, 0.6, 20)
    least = int(re.search(r"take about (\d+) teeth", str(caught.value))[1])
    assert elliptic_pair(20, 0.6, least).driver.teeth == least
    with pytest.raises(DesignError, match="undercuts near x"):
        elliptic_pair(20, 0.6, int(0.9 * least))


REFUSALS = {
    "not an ellipse": (lambda: elliptic_pair(20, 1.0, 40), "eccentricity 1"),
    "few teeth": (lambda: elliptic_pair(20, 0.1, 3), "3 teeth; it must have 4 or more"),
    "pressure angle": (lambda: elliptic_pair(20, 0.1, 40, pressure_angle_deg=50), "between 0 and 45"),
    "pointed": (
        lambda: elliptic_pair(20, 0.3, 30, pressure_angle_deg=29, rack=BasicRack(1.3, 1.3, 0.02)),
        r"pointed below its tip, its land would be -\d",
    ),
    "no mate": (lambda: noncircular_pair(ellipse(20, 0.3), 40, 0), "0 periods; it must have 1 or more"),
    "odd teeth": (
        lambda: noncircular_pair(PitchCurve(Ellipse(20, 18, 0, np.pi), 2), 41, 1),
        r"give 20\.5 on one of 1; both must be whole: take 40 or 42",
    ),
    "no period": (lambda: PitchCurve(Arc(0, 5, 0, 2 * np.pi), 0), "0 periods"),
    "not closed": (lambda: PitchCurve(Arc(0, 5, 0, 6)), "misses its own beginning by 1.4"),
    "wrong way round": (lambda: PitchCurve(Reversed(Arc(0, 5, 0, 2 * np.pi))), "counter-clockwise"),
    "axis outside": (lambda: PitchCurve(Arc(9, 5, 0, 2 * np.pi)), "move the axis inside it"),
    "too many turns": (lambda: PitchCurve(Arc(0, 5, 0, 4 * np.pi)), "winds 720 deg"),
    "axes too near": (lambda: ellipse(20, 0.3).mate(25), "above the greatest radius of the pitch curve, 26 mm"),
    "ratio stops": (lambda: ratio_pair(lambda t: 1 + np.cos(t), 50, 40), "neither wheel may stop"),
    "ratio does not close": (lambda: ratio_pair(lambda t: 1.1 + 0.1 * np.cos(t), 50, 40), "multiply it by 0.909"),
    "ratio with corners": (
        lambda: ratio_pair(lambda t: 1 + 0.2 * np.sign(np.sin(t + 1e-3)), 50, 40),
        "not smooth enough",
    ),
    "no distance": (lambda: ratio_pair(lambda t: 1 + 0 * t, 0, 40), "centre distance is 0 mm"),
    "radius not above 0": (lambda: Polar.of(np.cos), "must stay above 0"),
    "radius does not repeat": (lambda: Polar.of(lambda t: 5 + 0.1 * np.cos(t), 2), "must repeat 2 times"),
}


@pytest.mark.parametrize(("make", "says"), REFUSALS.values(), ids=REFUSALS)
def test_refusals_name_the_limit(make, says):
    with pytest.raises(DesignError, match=says):
        make()


def test_a_curve_with_undeclared_corners_cannot_be_tabled():
    class Kinked(Polar):
        """A speed that leaps without saying so."""

        def point(self, t):
            return super().point(self._late(t))

        def derivative(self, t):
            return super().derivative(self._late(t)) * np.where(np.asarray(t) < 2.1, 1.2, self._slope)

        _slope = (2 * np.pi - 1.2 * 2.1) / (2 * np.pi - 2.1)

        def _late(self, t):
            t = np.asarray(t)
            return np.where(t < 2.1, 1.2 * t, 1.2 * 2.1 + (t - 2.1) * self._slope)

    with pytest.raises(ToleranceError):
        PitchCurve(Kinked((20.0, 1.0), 1)).by_length.point(np.asarray(1.0))


def test_a_turned_pitch_curve_turns_its_wheel():
    turn = complex(np.exp(0.3j))
    plain = NoncircularWheel(ellipse(20, 0.3), 40).outline
    turned = NoncircularWheel(PitchCurve(Turned(ellipse(20, 0.3).curve, turn)), 40).outline
    for a, b in zip(plain.pieces[::7], turned.pieces[::7], strict=True):
        assert b.curve.start == pytest.approx(a.curve.start * turn, abs=1e-9)
