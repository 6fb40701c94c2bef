import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from gearsolid.curves.loops import disc, hole, holes, pins
from gearsolid.output.cut import crossings, material
from gearsolid.shop.bore import Bore
from gearsolid.teeth.involute import InvoluteGear


def test_a_plain_disc_is_material_from_the_axis_outward():
    assert material([disc(5.0)], 0.4) == [(0.0, pytest.approx(5.0, abs=5e-3))]


def test_a_ring_leaves_the_hole_free():
    ((inner, outer),) = material([disc(5.0), hole(2.0)], 1.0)
    assert (inner, outer) == (pytest.approx(2.0, abs=5e-3), pytest.approx(5.0, abs=5e-3))


@pytest.mark.parametrize(
    ("angle", "expected"),
    [(0.0, [(0, 6), (10, 15)]), (np.pi / 4, [(0, 15)]), (np.pi, [(0, 6), (10, 15)])],
    ids=["through a hole", "between holes", "through the hole opposite"],
)
def test_holes_on_a_circle(angle, expected):
    found = material([disc(15.0), holes(4, 8.0, 2.0)], angle)
    assert np.allclose(found, expected, atol=1e-2)


def test_the_keyway_is_cut_along_x_and_not_opposite():
    bore = Bore.keyed(12.0)
    radii = [material([disc(20.0), bore.outline], angle)[0][0] for angle in (0.0, np.pi)]
    assert radii == [pytest.approx(bore.floor, abs=1e-2), pytest.approx(bore.radius, abs=1e-2)]


def test_pins_give_one_stretch_or_none():
    assert np.allclose(material([pins(6, 10.0, 1.5)], 0.0), [(8.5, 11.5)], atol=1e-2)
    assert material([pins(6, 10.0, 1.5)], np.pi / 6) == []


@given(st.floats(-np.pi, np.pi))
def test_a_half_line_leaves_a_wheel_between_root_and_tip(angle):
    gear = InvoluteGear(17, 2.0)
    (radius,) = crossings(gear.outline, angle)
    assert gear.root_radius - 1e-3 <= radius <= gear.tip_radius + 1e-3
