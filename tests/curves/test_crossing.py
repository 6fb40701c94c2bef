from math import pi

import numpy as np
import pytest
from curve_specimens import epicycloid, hypocycloid
from hypothesis import assume, given
from hypothesis import strategies as st

from gearsolid.curves.crossing import crossings, cut_at_crossing, fillet, self_crossings, without_loops
from gearsolid.curves.curve import Curve, Mirrored, Reversed, Section, Turned
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.parallel import Parallel
from gearsolid.curves.primitives import Arc, Ellipse, Formula, Segment
from gearsolid.curves.rolling import CircleOnCircle, CircleOnLine, LineOnCircle
from gearsolid.curves.roulette import Trace
from gearsolid.errors import DesignError


def lissajous(a: int, b: int, first: float) -> Formula:
    return Formula(
        lambda t: np.sin(a * t) + 1j * np.sin(b * t),
        lambda t: a * np.cos(a * t) + 1j * b * np.cos(b * t),
        lambda t: -(a**2) * np.sin(a * t) - 1j * b**2 * np.sin(b * t),
        first,
        first + 2 * pi,
    )


def test_ellipse_and_circle():
    ellipse, circle = Ellipse(3, 1), Arc(0, 2, 0, 2 * pi)
    found = crossings(ellipse, circle)
    # x^2 / 9 + y^2 = 1 and x^2 + y^2 = 4.
    x, y = np.sqrt(27 / 8), np.sqrt(5 / 8)
    assert ellipse.point(found[:, 0]) == pytest.approx([x + 1j * y, -x + 1j * y, -x - 1j * y, x - 1j * y], abs=1e-13)
    assert np.abs(ellipse.point(found[:, 0]) - circle.point(found[:, 1])).max() < 1e-13
    assert crossings(circle, ellipse)[:, ::-1] == pytest.approx(found[np.argsort(found[:, 1])], abs=1e-13)


@given(st.floats(-3, 3), st.floats(-3, 3), st.floats(-3, 3), st.floats(-3, 3))
def test_two_segments(x, y, u, v):
    first, second = Segment(complex(x, y), complex(u, v)), Segment(complex(v, x), complex(y, u))
    d, e, gap = first.last - first.first, second.last - second.first, second.first - first.first
    sine = (d.conjugate() * e).imag
    assume(abs(sine) > 1e-3 * abs(d) * abs(e) > 0)
    at = np.array([(gap.conjugate() * e).imag, (gap.conjugate() * d).imag]) / sine
    assume(np.abs(at).min() > 1e-6 and np.abs(1 - at).min() > 1e-6)
    found = crossings(first, second)
    if (at > 0).all() and (at < 1).all():
        assert found == pytest.approx(at[None, :], abs=1e-9)
    else:
        assert len(found) == 0


def test_ends_on_another_curve_count():
    assert crossings(Segment(0, 1), Segment(1, 1 + 1j)) == pytest.approx(np.array([[1, 0]]))
    assert crossings(Segment(0, 1), Segment(0.5, 0.5 + 1j)) == pytest.approx(np.array([[0.5, 0]]))


@pytest.mark.parametrize(
    "other",
    [Segment(2 - 1j, 2 + 1j), Segment(1j, 1 + 1j), Segment(0, 1), Arc(0.5 + 1j, 1, -2.5, -0.5)],
    ids=["apart", "parallel", "the same", "touching sideways"],
)
def test_no_crossing(other):
    assert crossings(Segment(0, 1), other).shape == (0, 2)


def test_parts_that_do_not_exist_cross_nothing():
    never = Envelope(Segment(-9j, 9j), CircleOnCircle(8, 3), -1)
    ring = Arc(0, abs(complex(never.point(np.asarray(0.45)))), 0, 2 * pi)
    found = crossings(never, ring)
    assert len(found) > 0
    assert never.touches(found[:, 0]).all()


@pytest.mark.parametrize(("a", "b", "count"), [(1, 2, 1), (2, 3, 7), (3, 4, 17)])
def test_double_points_of_a_lissajous_curve(a, b, count):
    curve = lissajous(a, b, 0.1)
    found = self_crossings(curve)
    assert len(found) == count == 2 * a * b - a - b
    assert np.abs(curve.point(found[:, 0]) - curve.point(found[:, 1])).max() < 1e-13
    assert (found[:, 0] < found[:, 1]).all()
    assert (np.diff(found[:, 0]) > 0).all()


@pytest.mark.parametrize(
    "curve",
    [
        Ellipse(3, 1),
        Trace(CircleOnLine(3), -3, 0, 4 * pi),
        hypocycloid(6, 2, 6 * pi),
        epicycloid(5, 1, 2 * pi),
        Segment(0, 1),
    ],
    ids=["closed", "cusp between", "closed with cusps", "cusps at the ends", "straight"],
)
def test_no_self_crossing(curve):
    assert self_crossings(curve).shape == (0, 2)
    (whole,) = without_loops(curve)
    assert whole.span == curve.span


@pytest.mark.parametrize("pin", [1.2, 1.5, 2.5])
def test_loops_of_a_prolate_cycloid(pin):
    """Two neighbouring turns cross on the line midway: x = a roll - pin sin roll there (closed form by symmetry)."""
    curve = Trace(CircleOnLine(1), -pin, -2.5, 2.5)
    (pair,) = self_crossings(curve)
    assert pair[0] == pytest.approx(-pair[1], abs=1e-12)
    assert pair[1] == pytest.approx(pin * np.sin(pair[1]), abs=1e-12)
    first, last = without_loops(curve)
    assert (first.span[1], last.span[0]) == tuple(pair)


@pytest.mark.parametrize("distance", [0.5, 0.335, 0.3334])
def test_swallowtail_of_a_parallel(distance):
    """What is left of the parallel stands off everywhere by the full distance; what was dropped does not."""
    base = Ellipse(3, 1, -1.5, 1.5)
    curve = Parallel(base, distance)
    first, last = without_loops(curve)
    assert abs(first.end - last.start) < 1e-12
    assert first.span[1] == pytest.approx(-last.span[0], abs=1e-9)
    assert abs(first.end.imag) < 1e-12
    outline = base.point(base.sample(20001))

    def stands_off(part: Curve, count: int) -> np.ndarray:
        return np.abs(part.point(part.sample(count))[:, None] - outline).min(axis=1) - distance

    assert min(stands_off(first, 60).min(), stands_off(last, 60).min()) > -1e-7
    dropped = Section(curve, first.span[1], last.span[0])
    assert stands_off(dropped, 61).max() < 1e-7
    if distance > 0.4:
        assert stands_off(dropped, 61).min() < -1e-3


def test_swallowtail_of_an_envelope():
    """Too large a pin undercuts: its envelope has two cusps and the parts before and after cross."""
    path = Trace(CircleOnCircle(9, -10), 12, -2, 2)
    curves = [Parallel(path, sign * 6.0) for sign in (1, -1)]
    found = [c for c in curves if len(c.regressions()) == 2 and len(self_crossings(c)) == 1]
    assert found
    for curve in found:
        (pair,) = self_crossings(curve)
        assert pair[0] < min(curve.regressions()) < max(curve.regressions()) < pair[1]
        for part in without_loops(curve):
            assert (curve.pace(part.sample(50)) > 0).all()


def test_cut_keeps_before_and_after():
    before, after = cut_at_crossing(Segment(0, 2), Arc(0, 1, -1, 1))
    assert before.span == pytest.approx((0, 0.5))
    assert after.span == pytest.approx((0.5, 1))
    assert before.end == pytest.approx(after.start, abs=1e-14)


def test_cut_is_made_at_the_first_crossing():
    before, after = cut_at_crossing(Segment(-2, 2), Arc(0, 1, 0, 2 * pi - 0.1))
    assert before.end == pytest.approx(-1)
    assert after.start == pytest.approx(-1)


def test_undercut_fillet_meets_its_involute():
    """Rack with a sharp corner on a wheel of 10 teeth: corner path and involute cross above the base circle."""
    pressure, radius = np.radians(20), 5.0
    corner = -1.25 - 1.25j * np.tan(pressure)
    motion = LineOnCircle(radius)
    path = Trace(motion, corner, -corner.imag, 4)
    # The rack point that touches where the line of action leaves the base circle.
    lowest = -radius * np.sin(pressure) ** 2 * (1 + 1j * np.tan(pressure))
    flank = Envelope(Segment(lowest, 1 + 1j * np.tan(pressure)), motion)
    assert abs(flank.start) == pytest.approx(radius * np.cos(pressure), abs=1e-12)
    before, after = cut_at_crossing(path, flank)
    assert abs(before.end - after.start) < 1e-12
    assert radius * np.cos(pressure) < abs(after.start) < radius
    assert abs(before.start) == pytest.approx(radius - 1.25, abs=1e-12)


def test_curves_that_do_not_cross_cannot_be_cut():
    with pytest.raises(DesignError, match=r"do not cross: the nearest they come is 1 mm"):
        cut_at_crossing(Segment(0, 1), Segment(1j, 1 + 1j))


FILLETS = {
    "radial flank": (Segment(10, 14), 10, 0.5),
    "radial flank, root below it": (Segment(10.2, 14), 10, 0.5),
    "flank through the root circle": (Segment(9.9, 14), 10, 0.5),
    "annulus": (Segment(10, 6), 10, 0.5),
    "epicycloid": (Turned(epicycloid(32, 2, 2, 0.2), 1j), 32.05, 0.2),
    "hypocycloid": (Reversed(hypocycloid(20, 6, 1.2)), 18.3, 0.4),
    "tight": (Segment(10, 14), 10, 3.9),
}


@pytest.mark.parametrize("way", [lambda c: c, Reversed, Mirrored], ids=["out", "the other side", "in"])
@pytest.mark.parametrize(("flank", "circle", "radius"), FILLETS.values(), ids=FILLETS)
def test_fillet_touches_flank_and_circle(flank, circle, radius, way):
    flank = way(flank)
    touch, arc = fillet(flank, circle, radius)
    on_flank = complex(flank.point(np.asarray(touch)))
    inward = abs(flank.start) > abs(flank.end)
    inside = max(abs(flank.start), abs(flank.end)) - circle < circle - min(abs(flank.start), abs(flank.end))
    towards = inward != inside
    joint, foot = (arc.start, arc.end) if towards else (arc.end, arc.start)
    at_joint, at_foot = (0.0, 1.0) if towards else (1.0, 0.0)
    assert joint == pytest.approx(on_flank, abs=1e-12)
    assert abs(foot) == pytest.approx(circle, abs=1e-11)
    # Smooth on both sides, and concave seen from the material on the left.
    assert complex(arc.tangent(np.asarray(at_joint))) == pytest.approx(
        complex(flank.tangent(np.asarray(touch))), abs=1e-12
    )
    around = (-1j if inside else 1j) * foot / abs(foot)
    assert complex(arc.tangent(np.asarray(at_foot))) == pytest.approx(around, abs=1e-11)
    assert -pi < arc.sweep < 0
    assert arc.radius == radius


@given(st.floats(0.01, 3), st.floats(0.3, 1.2))
def test_fillet_of_a_radial_flank_has_a_closed_form(radius, lean):
    flank = Turned(Segment(10, 16), complex(np.exp(1j * lean)))
    touch, arc = fillet(flank, 10, radius)
    assert 10 + 6 * touch == pytest.approx(np.sqrt((10 + radius) ** 2 - radius**2), abs=1e-11)
    assert abs(arc.centre) == pytest.approx(10 + radius, abs=1e-11)


def test_a_fillet_that_does_not_fit_says_by_how_much():
    with pytest.raises(
        DesignError, match=r"fillet of 50 mm .* would lie 50.99 to 51.92 mm from the axis, not at 60 mm"
    ):
        fillet(Segment(10, 14), 10, 50)
    with pytest.raises(DesignError, match="does not fit"):
        fillet(Segment(11, 14), 10, 0.2)


@pytest.mark.parametrize(("circle", "radius"), [(10, 0), (10, -1), (0, 1), (10, float("nan"))])
def test_impossible_fillets(circle, radius):
    with pytest.raises(DesignError, match="must both be above 0"):
        fillet(Segment(10, 14), circle, radius)
