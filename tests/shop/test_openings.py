from math import cos, pi, sin

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from shapely.affinity import rotate
from shapely.geometry import Point, Polygon
from shapely.ops import unary_union

from gearsolid.errors import DesignError
from gearsolid.shop.openings import Crossings, hole_circle


@st.composite
def crossings(draw):
    """Crossings over the whole range that leaves openings."""
    arms = draw(st.integers(3, 12))
    hub = draw(st.floats(2, 40))
    rim = hub + 2 * draw(st.floats(1, 40))
    width = draw(st.floats(0.05, 0.9)) * hub * sin(pi / arms)
    at_rim = draw(st.none() | st.floats(0.3, 1.5).map(lambda k: k * width))
    fillet = draw(st.floats(0.02, 0.45)) * (rim - hub) / 2
    try:
        return Crossings(arms, hub, rim, width, fillet, at_rim)
    except DesignError:
        assume(False)


def _by_shapely(c: Crossings):
    """Ring less arms, corners sharp."""
    ring = Point(0, 0).buffer(c.rim_diameter / 2, quad_segs=512) - Point(0, 0).buffer(c.hub_diameter / 2, quad_segs=512)
    hub, rim = c.hub_diameter / 2, c.rim_diameter / 2
    inner, outer = c.arm_width / 2, (c.arm_width if c.arm_width_at_rim is None else c.arm_width_at_rim) / 2
    slope = (outer - inner) / (rim - hub)
    ends = [(x, inner + slope * (x - hub)) for x in (hub / 2 if slope <= 0 else hub * 0.99, rim * 1.01)]
    arm = Polygon([*ends, *((x, -y) for x, y in reversed(ends))])
    return ring - unary_union([rotate(arm, 360 / c.arms * k, origin=(0, 0)) for k in range(c.arms)])


@pytest.mark.parametrize(
    "given_crossings",
    [
        Crossings(5, 8, 24, 1.6, 0.6),
        Crossings(3, 6, 24, 2.4, 1.0, 1.2),
        Crossings(6, 20, 60, 5, 2, 3),
        Crossings(4, 12, 40, 2, 1.5, 3),
    ],
    ids=["straight", "narrowing", "six arms", "widening"],
)
def test_openings_are_a_ring_less_arms_but_for_the_four_corners(given_crossings):
    region, outline = _by_shapely(given_crossings), given_crossings.outline
    opening = Polygon([(p.real, p.imag) for p in outline.points(257)])
    assert len(region.geoms) == given_crossings.arms
    sharp = min(region.geoms, key=opening.centroid.distance)
    assert (opening - sharp).area < 1e-4 * sharp.area
    corners = [g.area for g in (sharp - opening).geoms if g.area > 1e-3]
    assert len(corners) == 4
    # A corner of angle g loses f^2 (cot(g/2) - (pi - g)/2): 0.215 f^2 where it is square.
    assert all(0.02 < area / given_crossings.fillet**2 < 0.5 for area in corners)
    assert outline.area == pytest.approx(-given_crossings.arms * (sharp.area - sum(corners)), rel=1e-4)


@given(c=crossings())
def test_an_opening_is_smooth_clockwise_and_between_its_circles(c):
    outline = c.outline
    assert not outline.is_chain
    assert outline.order == c.arms
    assert outline.area < 0
    assert outline.r_min == pytest.approx(c.hub_diameter / 2, rel=1e-9)
    assert outline.r_max == pytest.approx(c.rim_diameter / 2, rel=1e-9)
    ends = np.array([p.curve.tangent(np.array(p.curve.span)) for p in outline.pieces])
    assert np.allclose(ends[:, 1], np.roll(ends[:, 0], -1), atol=1e-7)


@given(c=crossings())
def test_arms_have_the_width_asked_for_on_both_circles(c):
    """The side of the arm on the +x axis, drawn on to the circles' ends of the arm."""
    side = c.outline.pieces[2].curve
    run = (side.end - side.start) / abs(side.end - side.start)
    at_rim = c.arm_width if c.arm_width_at_rim is None else c.arm_width_at_rim
    for circle, width in ((c.hub_diameter, c.arm_width), (c.rim_diameter, at_rim)):
        along = (circle / 2 - side.start.real) / run.real
        assert 2 * (side.start + along * run).imag == pytest.approx(width, rel=1e-7)


@given(c=crossings(), share=st.floats(1e-6, 1 - 1e-6))
def test_openings_lie_in_their_own_sector(c, share):
    angles = np.concatenate([np.angle(p.curve.point(np.array([share]))) for p in c.outline.pieces])
    assert np.all(np.mod(angles, 2 * pi) < 2 * pi / c.arms)


@pytest.mark.parametrize(
    ("arms", "hub", "rim", "width", "fillet", "at_rim", "message"),
    [
        (2, 8, 24, 2, 0.5, None, "cannot have 2 arms"),
        (13, 8, 24, 0.2, 0.1, None, "3 to 12"),
        (5, 0, 24, 2, 0.5, None, "hub diameter is 0 mm"),
        (5, 8, 24, -1, 0.5, None, "arm width is -1 mm"),
        (5, 8, 24, 2, 0, None, "fillet is 0 mm"),
        (5, 8, 24, 2, 0.5, 0, "width at the rim is 0 mm"),
        (5, 8, 24, 2, 4, None, "fillet must be below 4 mm"),
        (5, 24, 8, 2, 0.5, None, "circles further apart"),
        (5, 8, float("nan"), 2, 0.5, None, "nan mm"),
        (6, 8, 24, 4, 0.5, None, "no opening at the hub circle of 8 mm; it must be above about 9 mm"),
        (3, 8, 24, 1, 0.5, 40, "no opening at the"),
    ],
)
def test_impossible_crossings_are_refused(arms, hub, rim, width, fillet, at_rim, message):
    with pytest.raises(DesignError, match=message):
        Crossings(arms, hub, rim, width, fillet, at_rim)


def test_the_limit_named_is_the_limit():
    """Six straight arms: fillet centres meet where (4/2 + 0.5) / sin 30 = hub / 2 + 0.5."""
    assert Crossings(6, 9.0001, 24, 4, 0.5).outline.area < 0
    with pytest.raises(DesignError, match="above about 9 mm"):
        Crossings(6, 8.9999, 24, 4, 0.5)


def test_holes_on_a_circle():
    outline = hole_circle(6, 40, 5, 30)
    assert -outline.area == pytest.approx(6 * pi * 2.5**2)
    assert outline.pieces[0].curve.centre == pytest.approx(20 * complex(cos(pi / 6), 0.5))


@pytest.mark.parametrize(
    ("count", "circle", "diameter", "message"),
    [(0, 40, 5, "0 holes"), (6, 40, 20, "below 20 mm"), (1, 40, 40, "below 40 mm"), (4, 40, 0, "above 0")],
)
def test_holes_that_meet_are_refused(count, circle, diameter, message):
    with pytest.raises(DesignError, match=message):
        hole_circle(count, circle, diameter)
