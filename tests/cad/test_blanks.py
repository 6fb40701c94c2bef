"""Blanks over their whole range: one valid solid, its volume that of the exact outlines."""

from dataclasses import replace
from math import pi, sin

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from gearsolid.curves.loops import disc
from gearsolid.errors import DesignError
from gearsolid.output.triangles import body_triangles
from gearsolid.pairs.blank import Blank, body_of
from gearsolid.pairs.part import Body
from gearsolid.shop.bore import Bore
from gearsolid.shop.keys_inch import inch_key_for_bore
from gearsolid.shop.openings import Crossings, hole_circle
from gearsolid.shop.profile_hole import d_hole, double_d_hole, hexagon_hole, square_hole
from gearsolid.solids.body import body_solid
from gearsolid.solids.check import exact_volume
from gearsolid.teeth.cycloidal import CycloidalGear
from gearsolid.teeth.involute import InvoluteGear

pytestmark = pytest.mark.cad

TEETH = {
    "clock wheel": CycloidalGear(20, 3.0, 12.0, 15.0, 3.9, 4.8).outline,
    "involute": InvoluteGear(16, 4).outline,
    "plain disc": disc(30),
}


@st.composite
def keyed_bores(draw):
    diameter = draw(st.floats(8.5, 40))
    keyed = draw(st.sampled_from((Bore.keyed, lambda d: Bore(d, inch_key_for_bore(d)))))(diameter)
    second = draw(st.none() | st.sampled_from((90, 120, 180, 270)))
    chamfer = draw(st.just(0.0) | st.floats(0.1, 0.9).map(lambda k: k * keyed.key.hub_depth))
    return replace(keyed, second_key=second, chamfer=chamfer)


@st.composite
def profile_holes(draw):
    size, share = draw(st.floats(2, 20)), draw(st.floats(0.05, 0.95))
    make = draw(st.sampled_from(("D", "double D", "square", "hexagon")))
    if make == "D":
        return d_hole(size, size / 2 * (1 + share))
    if make == "double D":
        return double_d_hole(size, size * share)
    relief = draw(st.just(0.0) | st.floats(0.01, 0.2)) * size
    return (square_hole if make == "square" else hexagon_hole)(size, relief)


@st.composite
def openings(draw, low, high):
    """Crossings or holes between two radii [mm]."""
    if draw(st.booleans()):
        count, middle = draw(st.integers(1, 8)), (low + high) / 2
        most = min(high - low, 2 * middle * sin(pi / max(count, 2)))
        return hole_circle(count, 2 * middle, draw(st.floats(0.05, 0.9)) * most, draw(st.floats(-180, 180)))
    arms, width = draw(st.integers(3, 8)), draw(st.floats(0.1, 0.8))
    width *= 2 * low * sin(pi / arms)
    at_rim = draw(st.none() | st.floats(0.4, 1.2).map(lambda k: k * width))
    try:
        return Crossings(arms, 2 * low, 2 * high, width, draw(st.floats(0.05, 0.4)) * (high - low), at_rim).outline
    except DesignError:
        assume(False)


def _proved(body: Body) -> None:
    """The solid, checked within 1e-6 of the exact volume, and the facets, watertight and as near as their chords."""
    solid = body_solid(body)
    assert solid.isValid()
    assert exact_volume(solid) == pytest.approx(body.volume, rel=1e-6)
    facets = body_triangles(body, 0.005)
    assert facets.is_watertight
    assert facets.volume == pytest.approx(body.volume, abs=0.005 * facets.side_area + 1e-9)


@given(bore=keyed_bores(), width=st.floats(8, 40))
@settings(max_examples=25, deadline=None)
def test_keyed_bores(bore, width):
    assume(2.1 * bore.chamfer < width)
    _proved(Body(disc(bore.reach + 2), width, bore=bore))


@given(hole=profile_holes(), width=st.floats(1, 40))
@settings(max_examples=25, deadline=None)
def test_profile_holes(hole, width):
    body = Body(disc(hole.reach + 2), width, bore=hole)
    assert body.volume == pytest.approx(pi * (hole.reach + 2) ** 2 * width - hole.volume(width), rel=1e-9)
    _proved(body)


@given(data=st.data(), teeth=st.sampled_from(list(TEETH)))
@settings(max_examples=10, deadline=None)
def test_openings_in_wheels(data, teeth):
    outline = TEETH[teeth]
    bore = data.draw(st.none() | profile_holes())
    start = (bore.reach if bore else 2.0) + data.draw(st.floats(0.5, 3))
    end = outline.r_min - data.draw(st.floats(0.5, 3))
    assume(start + 1 < end)
    body = body_of(outline, Blank(4, bore, openings=(data.draw(openings(start, end)),)))
    assert body.volume < body_of(outline, Blank(4, bore)).volume
    _proved(body)
