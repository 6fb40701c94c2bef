"""The path of a cutter's centre: half a kerf from the material, everywhere, or a refusal with the kerf that fits."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.spatial import cKDTree

from gearsolid.curves.loops import disc, hole, holes
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.errors import DesignError
from gearsolid.shop.bore import Bore
from gearsolid.shop.kerf import compensated
from gearsolid.teeth.cycloidal import CycloidalGear
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.pinwheel import CycloidDisc

SQUARE = Outline((Piece(Segment(10 - 10j, 10 + 10j), "tip"),), 4)
SQUARE_HOLE = Outline((Piece(Segment(10 + 10j, 10 - 10j), "hole"),), 4)
TOOTHED = {
    "involute": InvoluteGear(20, 2).outline,
    "undercut": InvoluteGear(7, 2).outline,
    "annulus": InternalGear(40, 2).outline,
    "cycloid disc": CycloidDisc(11, 1.5, 50, 5).outline,
    "clock wheel": CycloidalGear(30, 1.0, 4.0, 7.5, 1.3, 1.6).outline,
    "clock pinion": CycloidalGear(8, 1.0, 15.0, 2.0, 0.8, 1.6).outline,
    "keyway": Bore.keyed(14).outline,
}


def points(outline, count):
    """Points of all pitches."""
    pitch = np.concatenate([p.curve.point(p.curve.sample(count)) for p in outline.pieces])
    return (pitch * (outline.step ** np.arange(outline.order))[:, None]).ravel()


def distances(z, outline):
    """Distances of points from an outline, by a dense cloud of its own points: never too small."""
    cloud = points(outline, 3001)
    return cKDTree(np.column_stack([cloud.real, cloud.imag])).query(np.column_stack([z.real, z.imag]))[0]


@pytest.mark.parametrize("kerf", [0.1, 0.5])
@pytest.mark.parametrize("name", TOOTHED)
def test_the_path_lies_half_a_kerf_outside(name, kerf):
    outline = TOOTHED[name]
    path = compensated(outline, kerf)
    gap = distances(points(path, 21), outline)
    assert gap.min() == pytest.approx(kerf / 2, abs=1e-6)
    assert gap.max() == pytest.approx(kerf / 2, abs=1e-4), "the cloud is a little further away than the curve"
    assert path.order == outline.order
    assert path.is_chain == outline.is_chain
    assert path.area > outline.area


@pytest.mark.parametrize("name", ["involute", "undercut", "annulus", "cycloid disc"])
def test_smooth_outlines_lose_nothing(name):
    outline = TOOTHED[name]
    assert distances(points(outline, 21), compensated(outline, 0.2)).max() == pytest.approx(0.1, abs=1e-4)


@given(st.floats(0.01, 5))
def test_outward_corners_become_arcs(kerf):
    d = kerf / 2
    assert compensated(SQUARE, kerf).area == pytest.approx(400 + 80 * d + np.pi * d**2, rel=1e-12)
    assert compensated(disc(9), kerf).area == pytest.approx(np.pi * (9 + d) ** 2, rel=1e-12)


@given(st.floats(0.01, 5))
def test_inward_corners_stay_sharp_in_the_path(kerf):
    d = kerf / 2
    assert compensated(SQUARE_HOLE, kerf).area == pytest.approx(-((20 - 2 * d) ** 2), rel=1e-9)
    assert compensated(holes(5, 30, 6), kerf).area == pytest.approx(-5 * np.pi * (6 - d) ** 2, rel=1e-12)


def test_a_keyway_keeps_its_sides():
    bore = Bore.keyed(14)
    path = compensated(bore.outline, 0.2)
    z = points(path, 3)
    assert z.real.max() == pytest.approx(bore.floor - 0.1)
    assert z.imag[z.real > bore.radius + 0.5].max() == pytest.approx(bore.key.width / 2 - 0.1)


def test_true_arcs_and_lines_stay_so():
    kinds = {type(p.curve) for p in compensated(SQUARE, 0.2).pieces}
    assert kinds == {Segment, Arc}
    (piece,) = compensated(hole(5), 0.2).pieces
    assert piece.curve.radius == pytest.approx(4.9)


def slot(width):
    """A square with a slot of `width` mm cut into each side."""
    w = width / 2
    corners = [10 - 10j, 10 - 1j * w, 6 - 1j * w, 6 + 1j * w, 10 + 1j * w, 10 + 10j]
    roles = ["tip", "flank", "root", "flank", "tip"]
    return Outline(tuple(Piece(Segment(a, b), r) for a, b, r in zip(corners, corners[1:], roles, strict=False)), 4)


@pytest.mark.parametrize("width", [0.3, 1.0, 2.5])
def test_a_slot_takes_a_kerf_up_to_its_width(width):
    outline = slot(width)
    area = compensated(outline, 0.98 * width).area
    assert area > outline.area
    with pytest.raises(DesignError, match=rf"kerf of {1.1 * width:g} mm does not fit") as refused:
        compensated(outline, 1.1 * width)
    limit = float(str(refused.value).split("up to ")[1].split(" mm")[0])
    assert limit == pytest.approx(width, rel=1e-3)


def test_a_fillet_takes_a_kerf_up_to_its_diameter():
    # A square hole with corners of radius 0.5 mm.
    arc = Arc(9.5 + 9.5j, 0.5, np.pi / 2, 0)
    outline = Outline((Piece(arc, "fillet"), Piece(Segment(10 + 9.5j, 10 - 9.5j), "hole")), 4)
    assert compensated(outline, 0.9).area == pytest.approx(-(19.1**2 - (4 - np.pi) * 0.05**2), rel=1e-9)
    with pytest.raises(DesignError, match="a fillet; up to 1 mm fits"):
        compensated(outline, 1.2)


@pytest.mark.parametrize("kerf", [0, -0.2, float("nan")])
def test_a_kerf_of_nothing_is_refused(kerf):
    with pytest.raises(DesignError, match="must be above 0"):
        compensated(SQUARE, kerf)
