from dataclasses import replace
from math import hypot, pi

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad
from shapely.affinity import rotate
from shapely.geometry import Point, box
from shapely.ops import unary_union

from gearsolid.errors import DesignError
from gearsolid.shop.bore import Bore
from gearsolid.shop.keys import KeySeat


def _region(bore: Bore, radius: float):
    """The hole by shapely's own union of a fine polygon and the keyway's rectangle."""
    round_part = Point(0, 0).buffer(radius, quad_segs=4096)
    if bore.key is None:
        return round_part
    keyway = box(0, -bore.key.width / 2, bore.floor, bore.key.width / 2)
    second = [] if bore.second_key is None else [rotate(keyway, bore.second_key, origin=(0, 0))]
    return unary_union([round_part, keyway, *second])


TWO_KEYS = {angle: replace(Bore.keyed(20, 1.0), second_key=angle) for angle in (90, 120, 180, 270)}


@pytest.mark.parametrize(
    "bore", [Bore(8), Bore.keyed(20), Bore.keyed(6), Bore.keyed(44, 1.5), *TWO_KEYS.values()], ids=str
)
def test_outline_encloses_hole_and_keyway(bore):
    assert bore.outline.is_chain
    assert -bore.outline.area == pytest.approx(_region(bore, bore.radius).area, rel=1e-6)


def test_keyway_of_a_25_mm_bore():
    """Floor at d/2 + t2 = 15.8 mm, its corner at 16.298 mm from the axis (derived from the DIN 6885-1 row)."""
    bore = Bore.keyed(25)
    assert bore.floor == pytest.approx(15.8)
    assert bore.reach == pytest.approx(16.298, abs=5e-4)
    corners = [p.curve.start for p in bore.outline.pieces]
    assert max(c.real for c in corners) == pytest.approx(15.8), "the keyway lies on the +x axis"
    assert sorted(c.imag for c in corners) == pytest.approx([-4, -4, 4, 4])


@given(
    diameter=st.floats(6, 110),
    share=st.floats(0.01, 0.9),
    width=st.floats(10, 100),
)
def test_keyed_volume_is_the_sum_of_its_sections(diameter, share, width):
    plain = Bore.keyed(diameter)
    chamfer = min(share * plain.key.hub_depth, 0.45 * width)
    bore = Bore(diameter, plain.key, chamfer)
    mouth = quad(lambda d: -bore.section(bore.radius + chamfer - d).area, 0, chamfer, epsabs=0, epsrel=1e-12)[0]
    summed = -bore.outline.area * (width - 2 * chamfer) + 2 * mouth
    assert bore.volume(width) == pytest.approx(summed, rel=1e-12)


@pytest.mark.parametrize("bore", [Bore.keyed(20, 1.0), *TWO_KEYS.values()], ids=["one key", *map(str, TWO_KEYS)])
def test_keyed_volume_agrees_with_slices_of_shapely_regions(bore):
    depth, weight = np.polynomial.legendre.leggauss(6)
    mouth = sum(w / 2 * _region(bore, bore.radius + 1 - (d + 1) / 2).area for d, w in zip(depth, weight, strict=True))
    assert bore.volume(12) == pytest.approx(_region(bore, bore.radius).area * 10 + 2 * mouth, rel=1e-6)


def test_plain_chamfered_volume_is_cylinder_and_frustums():
    frustum = pi * 1.0 / 3 * (10**2 + 10 * 11 + 11**2)
    assert Bore(20, None, 1.0).volume(12) == pytest.approx(pi * 100 * 10 + 2 * frustum, rel=1e-14)


def test_mouth_is_wider_than_the_bore_and_keeps_the_keyway_floor():
    bore = Bore.keyed(20, 0.5)
    assert bore.mouth.r_min == pytest.approx(10.5)
    assert bore.mouth.r_max == pytest.approx(hypot(12.8, 3))


@pytest.mark.parametrize(
    ("make", "message"),
    [
        (lambda: Bore(0), "bore diameter is 0 mm"),
        (lambda: Bore(float("nan")), "bore diameter is nan"),
        (lambda: Bore(10, None, -0.1), "chamfer is -0.1 mm"),
        (lambda: Bore(10, KeySeat(10, 3, 1.8, 1.4)), "10 mm wide does not fit a bore of 10 mm"),
        (lambda: Bore.keyed(20, 2.8), "below the keyway depth of 2.8 mm"),
        (lambda: Bore(10, second_key=90), "no first one"),
        (lambda: Bore(20, KeySeat(10, 8, 5, 3.3), second_key=60), "more than 60.00 deg apart"),
        (lambda: Bore(20, KeySeat(10, 8, 5, 3.3), second_key=301), "301 deg from the first runs into it"),
        (lambda: Bore.keyed(5), "6 to 500 mm"),
        (lambda: Bore(10, None, 2.0).volume(4), "below 2 mm"),
    ],
)
def test_impossible_bores_are_refused_with_their_limits(make, message):
    with pytest.raises(DesignError, match=message):
        make()
