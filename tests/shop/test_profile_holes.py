import csv
from importlib.resources import files
from math import acos, cos, pi, sqrt, tan

import pytest
from hypothesis import given
from hypothesis import strategies as st
from shapely.geometry import Point, box

from gearsolid.errors import DesignError
from gearsolid.shop.profile_hole import d_hole, double_d_hole, hexagon_hole, square_hole, usual_flat

ROWS = list(csv.DictReader(files("gearsolid.shop").joinpath("data/d-shafts.csv").open(encoding="ascii")))


@pytest.mark.parametrize("row", ROWS, ids=lambda r: r["shaft_d_mm"])
def test_usual_flats_have_the_width_and_area_of_their_row(row):
    hole = d_hole(float(row["shaft_d_mm"]))
    flat = hole.outline.pieces[1].curve
    assert flat.start.real == flat.end.real == pytest.approx(float(row["flat_offset_from_axis_mm"]))
    assert abs(flat.end - flat.start) == pytest.approx(float(row["flat_width_mm"]), abs=5e-4)
    assert -hole.outline.area == pytest.approx(float(row["section_area_mm2"]), abs=5e-4)
    assert f"{float(row['across_flat_mm']):g} across the flat" in hole.callout


def _segment(r: float, x: float) -> float:
    """Area of a disc of radius r beyond the line at distance x [mm2]."""
    return r**2 * acos(x / r) - x * sqrt(r**2 - x**2)


@given(d=st.floats(0.5, 100), share=st.floats(0.01, 0.99))
def test_area_of_flattened_holes(d, share):
    r, x = d / 2, share * d / 2
    one, two = d_hole(d, r + x).outline, double_d_hole(d, 2 * x).outline
    assert -one.area == pytest.approx(pi * r**2 - _segment(r, x), rel=1e-9)
    assert -two.area == pytest.approx(pi * r**2 - 2 * _segment(r, x), rel=1e-9, abs=1e-9 * r**2)
    assert one.is_chain
    assert two.is_chain


@pytest.mark.parametrize(
    ("hole", "keep"), [(d_hole(6, 5), box(-9, -9, 2, 9)), (double_d_hole(6, 4), box(-2, -9, 2, 9))], ids=["D", "DD"]
)
def test_flattened_holes_are_a_disc_cut_by_lines(hole, keep):
    """Against shapely's own intersection of a fine polygon and a box."""
    assert -hole.outline.area == pytest.approx(Point(0, 0).buffer(3, quad_segs=4096).intersection(keep).area, rel=1e-6)


@given(make=st.sampled_from([(square_hole, 4), (hexagon_hole, 6)]), s=st.floats(0.5, 100), share=st.floats(0, 0.99))
def test_area_and_reach_of_polygons_with_drilled_corners(make, s, share):
    hole_of, n = make
    half = s / 2 * tan(pi / n)
    relief = share * half
    hole = hole_of(s, relief)
    drilled = relief**2 / 2 * (pi + 2 * pi / n)
    assert -hole.outline.area == pytest.approx(n * (s / 2 * half + drilled), rel=1e-9)
    assert hole.reach == pytest.approx(s / 2 / cos(pi / n) + relief, rel=1e-9)
    assert hole.outline.r_min == pytest.approx(s / 2, rel=1e-9)
    assert hole.volume(3) == pytest.approx(-3 * hole.outline.area)


def test_across_corners_of_a_hexagon():
    """s / cos 30: 11.547 mm for 10 mm across flats."""
    assert 2 * hexagon_hole(10).reach == pytest.approx(11.547, abs=5e-4)


@pytest.mark.parametrize(
    ("hole", "callout"),
    [
        (d_hole(6), "⌀ 6, 5.5 across the flat"),
        (double_d_hole(6, 4), "⌀ 6, 4 across flats"),
        (square_hole(5), "□ 5"),
        (hexagon_hole(8, 0.5), "hexagon 8, corners drilled R 0.5"),
    ],
    ids=str,
)
def test_callouts(hole, callout):
    assert hole.callout == callout


@pytest.mark.parametrize(
    ("make", "message"),
    [
        (lambda: d_hole(7), "no flat is usual on a shaft of 7 mm; known are 2, 3"),
        (lambda: d_hole(6, 3), "between the radius, 3 mm"),
        (lambda: d_hole(6, 6), "measures 6 mm from its flat"),
        (lambda: d_hole(-6, -4), "D-shaped hole of -6 mm"),
        (lambda: double_d_hole(6, 6), "6 mm across them"),
        (lambda: double_d_hole(6, 0), "0 mm across them"),
        (lambda: square_hole(0), "size across flats is 0 mm"),
        (lambda: square_hole(4, 2), "below 2 mm"),
        (lambda: hexagon_hole(4, -0.1), "radius of -0.1 mm"),
        (lambda: hexagon_hole(float("nan")), "across flats is nan"),
    ],
)
def test_impossible_holes_are_refused(make, message):
    with pytest.raises(DesignError, match=message):
        make()


def test_a_flat_is_known_for_a_quarter_inch():
    assert usual_flat(6.35) == 5.8
