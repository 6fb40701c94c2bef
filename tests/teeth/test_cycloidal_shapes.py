"""Every outline is simple and closed, or the design is refused with the number of the violated limit."""

from math import inf, pi

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st
from shapely.geometry import Polygon

from gearsolid.errors import DesignError
from gearsolid.teeth.clock_gear import ClockGear
from gearsolid.teeth.cycloidal import CycloidalGear
from gearsolid.teeth.cycloidal_rack import CycloidalRack
from gearsolid.teeth.cycloidal_ring import CycloidalRing
from gearsolid.teeth.lantern import LanternPinion, LanternRing, LanternWheel, PinRingPinion
from gearsolid.teeth.leaf_tip import Ogive, RoundTip


def polygon(outline, per_piece=24):
    """All pitches as one shapely polygon; pieces of a fine member may be as small as a millionth of it."""
    pitch = np.concatenate([p.curve.point(p.curve.sample(per_piece))[:-1] for p in outline.pieces])
    z = np.concatenate([pitch * outline.step**k for k in range(outline.order)])
    return Polygon(np.column_stack([z.real, z.imag]))


def made(build):
    """The member, or None if it is refused with a number in the message."""
    try:
        member = build()
        return member, member.outline
    except DesignError as refusal:
        assert any(c.isdigit() for c in str(refusal)), refusal
        return None


def check(build, low, high):
    """Simple, with its material on the left, and between its circles."""
    found = made(build)
    if found is None:
        return
    member, outline = found
    shape = polygon(outline)
    assert shape.is_valid
    assert shape.exterior.is_ccw == (outline.area > 0)
    assert outline.r_min == pytest.approx(getattr(member, low), rel=1e-6)
    assert outline.r_max == pytest.approx(getattr(member, high), rel=1e-6)


FILLETS = st.one_of(st.just(0.0), st.just(inf), st.floats(0.02, 0.6))

NUMBERS = {
    "module": st.floats(0.05, 20),
    "face": st.floats(0.2, 1.4),
    "flank": st.floats(0.05, 1.4),
    "addendum": st.floats(0.1, 2.5),
    "dedendum": st.floats(0.3, 2.8),
    "thinning": st.floats(0, 0.8),
    "fillet": FILLETS,
}


def sized(kind, teeth, module, face, flank, addendum, dedendum, thinning, fillet, size):
    """A member with lengths in modules and describing circles as shares of half a pitch radius of `size` teeth."""
    quarter = size * module / 4
    return kind(
        teeth,
        module,
        face * quarter,
        flank * quarter,
        addendum * module,
        dedendum * module,
        thinning * module,
        fillet * module,
    )


@settings(max_examples=300, deadline=None)
@given(teeth=st.integers(5, 300), **NUMBERS)
@example(teeth=6, module=1, face=10, flank=1, addendum=1.3, dedendum=1.8, thinning=0, fillet=inf)
@example(teeth=12, module=1, face=1, flank=1.3, addendum=1, dedendum=1.3, thinning=0, fillet=0)
@example(teeth=42, module=1.185, face=1, flank=0.99999, addendum=1, dedendum=0.5, thinning=0, fillet=inf)
@example(teeth=8, module=1, face=1, flank=0.5, addendum=1, dedendum=1.3, thinning=0.3, fillet=0.3)
def test_wheels(teeth, module, face, flank, addendum, dedendum, thinning, fillet):
    numbers = (teeth, module, face, flank, addendum, dedendum, thinning, fillet)
    check(lambda: sized(CycloidalGear, *numbers, size=teeth), "root_radius", "tip_radius")


@settings(max_examples=300, deadline=None)
@given(teeth=st.integers(5, 300), **NUMBERS)
@example(teeth=60, module=1, face=0.2, flank=0.2, addendum=1, dedendum=1.3, thinning=0, fillet=inf)
@example(teeth=20, module=1, face=1.3, flank=1, addendum=1.5, dedendum=1.3, thinning=0, fillet=0)
def test_rings(teeth, module, face, flank, addendum, dedendum, thinning, fillet):
    numbers = (teeth, module, face, flank, addendum, dedendum, thinning, fillet)
    check(lambda: sized(CycloidalRing, *numbers, size=teeth), "tip_radius", "root_radius")


@settings(max_examples=200, deadline=None)
@given(teeth=st.integers(1, 6), size=st.integers(6, 60), **NUMBERS)
@example(teeth=3, size=12, module=1, face=1, flank=1, addendum=1, dedendum=1.3, thinning=0, fillet=inf)
def test_racks(teeth, size, module, face, flank, addendum, dedendum, thinning, fillet):
    numbers = (teeth, module, face, flank, addendum, dedendum, thinning, fillet)
    found = made(lambda: sized(CycloidalRack, *numbers, size=size))
    if found is None:
        return
    rack, outline = found
    shape = polygon(outline)
    assert shape.is_valid
    assert shape.exterior.is_ccw
    low, bottom, high, top = shape.bounds
    assert high == pytest.approx(rack.addendum, rel=1e-5)
    assert low == pytest.approx(-2 * rack.dedendum - rack.addendum, rel=1e-9)
    assert top - bottom == pytest.approx(teeth * rack.pitch, rel=1e-9)


TIPS = st.one_of(
    st.just(RoundTip()),
    st.builds(Ogive, st.floats(0.3, 2.2), st.floats(0.3, 4), st.one_of(st.just(0.0), st.floats(0, 0.25))),
)


@settings(max_examples=300, deadline=None)
@given(
    teeth=st.integers(5, 300),
    thickness=st.floats(0.4, 2.6),
    tip=TIPS,
    dedendum=st.floats(0.3, 2.8),
    fillet=FILLETS,
)
@example(teeth=6, thickness=1.05, tip=Ogive(0.525, 0.525), dedendum=1.7, fillet=inf)
@example(teeth=64, thickness=pi / 2, tip=Ogive(1.4745720, 2.0644008, 0.05), dedendum=pi / 2, fillet=0)
def test_clock_gears(teeth, thickness, tip, dedendum, fillet):
    check(lambda: ClockGear(teeth, 1, thickness, tip, dedendum, fillet), "root_radius", "tip_radius")


LANTERN = {
    "teeth": st.integers(3, 200),
    "trundles": st.integers(3, 200),
    "radius": st.floats(0.05, 1.6),
    "addendum": st.floats(0.1, 3),
    "dedendum": st.floats(0.1, 2.5),
    "thinning": st.floats(0, 0.5),
    "fillet": FILLETS,
}


@settings(max_examples=300, deadline=None)
@given(**LANTERN)
@example(teeth=64, trundles=8, radius=0.625, addendum=1.9, dedendum=1, thinning=0.1, fillet=inf)
def test_lantern_wheels(teeth, trundles, radius, addendum, dedendum, thinning, fillet):
    numbers = (teeth, trundles, 1, radius, addendum, dedendum, thinning, fillet)
    check(lambda: LanternWheel(*numbers), "root_radius", "tip_radius")


@settings(max_examples=300, deadline=None)
@given(**LANTERN)
@example(teeth=24, trundles=12, radius=0.7, addendum=1.2, dedendum=1, thinning=0.1, fillet=inf)
def test_lantern_rings(teeth, trundles, radius, addendum, dedendum, thinning, fillet):
    numbers = (teeth, trundles, 1, radius, addendum, dedendum, thinning, fillet)
    check(lambda: LanternRing(*numbers), "tip_radius", "root_radius")


@settings(max_examples=300, deadline=None)
@given(**LANTERN)
@example(teeth=12, trundles=40, radius=0.7, addendum=1, dedendum=1, thinning=0.1, fillet=inf)
def test_pinions_in_pin_rings(teeth, trundles, radius, addendum, dedendum, thinning, fillet):
    numbers = (teeth, trundles, 1, radius, addendum, dedendum, thinning, fillet)
    check(lambda: PinRingPinion(*numbers), "root_radius", "tip_radius")


@settings(max_examples=100, deadline=None)
@given(trundles=st.integers(3, 60), radius=st.floats(0.05, 2))
def test_lanterns(trundles, radius):
    found = made(lambda: LanternPinion(trundles, 1, radius))
    if found is not None:
        lantern, outline = found
        gap = abs(lantern.reference_radius * (1 - outline.step)) - 2 * radius
        assert gap > 0
        assert outline.area == pytest.approx(trundles * pi * radius**2, rel=1e-12)
