"""Mates against the sweep itself, done with polygons or point by point: nothing here uses the law of gearing."""

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from mate_shapes import cycloidal, facing, ogival, rolled, straight
from shapely.affinity import rotate, translate
from shapely.geometry import Polygon
from shapely.ops import unary_union

from gearsolid.curves.field import field_of
from gearsolid.curves.loops import pins
from gearsolid.errors import DesignError
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.mate import domed_tips, external_mate, inner_mate, ring_mate

CASES = {
    "involute": (InvoluteGear(20, 1).outline, lambda g: external_mate(g, 10, 30, 16)),
    "undercut to 6": (InvoluteGear(60, 1).outline, lambda g: external_mate(g, 30, 6, 4)),
    "domed tips": (domed_tips(InvoluteGear(20, 1).outline, 0.25), lambda g: external_mate(g, 10, 15, 8.4)),
    "cycloidal": (cycloidal(40, 2.5, 2.0), lambda g: external_mate(g, 20, 12, 6.85)),
    "lantern": (pins(10, 5, 0.6), lambda g: external_mate(g, 5, 40, 20.5)),
    "lantern inside its pitch circle": (pins(10, 4.8, 0.6), lambda g: external_mate(g, 5, 40, 20.2)),
    "lantern outside its pitch circle": (pins(10, 5.3, 0.6), lambda g: external_mate(g, 5, 40, 20.1)),
    "lantern whose pins loop": (pins(21, 10.55, 0.402), lambda g: external_mate(g, 10.5, 8, 4.4)),
    "straight teeth": (straight(24, 13, 11, 0.5, 0.5), lambda g: external_mate(g, 12, 30, 15.7)),
    "ogival": (ogival(60, 30, 1.4, 28), lambda g: external_mate(g, 30, 10, 6)),
    "ring around a pinion": (InvoluteGear(20, 1).outline, lambda g: ring_mate(g, 10, 42, 20.2)),
    "pinion in a ring": (InternalGear(60, 1).outline, lambda g: inner_mate(g, 30, 20, 11)),
    "straight teeth in a ring": (straight(12, 7, 5, 0.6, 0.8), lambda g: ring_mate(g, 6, 30, 14.2)),
}


def comb(outline, pitches):
    """Some pitches of a member as one polygon: a wheel's closed through its axis, a ring's far outside, pins apart."""
    per_piece = 400 if len(outline.pieces) == 1 else 30
    pitch = np.concatenate([p.curve.point(p.curve.sample(per_piece))[:-1] for p in outline.pieces])
    if not outline.is_chain:
        return unary_union([polygon(pitch * np.exp(1j * outline.pitch_angle * k)) for k in pitches])
    z = np.concatenate([pitch * outline.step**k for k in pitches])
    return polygon(closed(z, 0 if outline.area > 0 else 1.6 * outline.r_max))


def closed(z, radius):
    """A stretch of boundary closed along a circle about the axis."""
    first, last = np.angle(z[[0, -1]])
    return np.append(z, radius * np.exp(1j * np.linspace(last, first, 40)))


def polygon(z):
    return Polygon(np.column_stack([z.real, z.imag]))


def moved(shape, engagement, psi):
    """The given shape in the frame of the mate at an input angle."""
    e = engagement
    place = rotate(shape, e.angle_a + e.rate_a * psi, (0, 0), use_radians=True)
    back = -(e.angle_b + e.rate_b * psi)
    shift = (e.centre_a - e.centre_b) * np.exp(1j * back)
    turned = rotate(place, back, (0, 0), use_radians=True)
    return translate(turned, shift.real, shift.imag)


def left_standing(outline, mate, steps):
    """What the given teeth leave of a sector of the mate's blank, and what the mate's outline says is left."""
    e = facing(outline, mate)
    reach = 3 * outline.pitch_angle
    teeth = comb(outline, range(-4, 6))
    swept = unary_union([moved(teeth, e, psi) for psi in np.linspace(-reach, reach, steps)])
    own = mate.outline
    middle, half = np.pi / own.order, np.pi / own.order
    arc = np.exp(1j * np.linspace(middle - half, middle + half, 60))
    ring = own.area < 0
    low, high = (own.r_min, own.r_max + 1) if ring else (0.2 * own.r_min, own.r_max)
    sector = polygon(np.concatenate([high * arc, low * arc[::-1]]))
    pitch = np.concatenate([p.curve.point(p.curve.sample(60))[:-1] for p in own.pieces])
    z = np.concatenate([pitch * own.step**k for k in range(-2, 3)])
    body = polygon(closed(z, own.r_max + 2 if ring else 0))
    return sector.difference(swept), sector.intersection(body)


@pytest.mark.parametrize(("outline", "make"), CASES.values(), ids=CASES)
def test_swept_polygons_leave_this_outline(outline, make):
    swept, stated = left_standing(outline, make(outline), 701)
    # Nothing stated is swept, but for the chords of the polygons; between two positions a little more is left.
    assert stated.difference(swept).area < 1e-3
    assert stated.difference(swept).buffer(-3e-4).is_empty
    assert swept.difference(stated).area < 0.02
    assert swept.difference(stated).buffer(-4e-3).is_empty


def test_the_sweep_sees_a_mate_that_is_a_little_too_thin():
    outline = InvoluteGear(20, 1).outline
    thin = external_mate(outline, 10, 30, 16, tooth_thinning=0.02)
    swept, stated = left_standing(outline, thin, 241)
    assert not swept.difference(stated).buffer(-4e-3).is_empty


def test_the_sweep_sees_a_mate_that_is_a_little_too_thick():
    small, large = InvoluteGear(20, 1, tooth_thinning=0.002).outline, InvoluteGear(20, 1).outline
    swept, stated = left_standing(large, external_mate(small, 10, 30, 16), 241)
    assert not stated.difference(swept).buffer(-3e-4).is_empty


def gaps(outline, mate, z, psi):
    """Signed distance of points of the mate from the given member at each input angle, shape (angles, points)."""
    e = facing(outline, mate)
    frame = np.exp(1j * (e.angle_b + e.rate_b * psi))[:, None]
    seen = (e.centre_b + frame * z[None, :]) * np.exp(-1j * (e.angle_a + e.rate_a * psi))[:, None]
    return field_of(outline).near(seen.ravel()).distance.reshape(seen.shape)


def least_gap(outline, mate, z):
    """Least distance each point of the mate comes to while the given member passes."""
    reach = 1.6 * outline.pitch_angle + 1.6 * mate.outline.pitch_angle * mate.teeth / outline.order
    psi = np.linspace(-reach, reach, 601)
    coarse = gaps(outline, mate, z, psi)
    at = psi[np.argmin(coarse, axis=0)]
    best = coarse.min(axis=0)
    for step in (psi[1] - psi[0]) * 0.2 ** np.arange(6):
        near = at[None, :] + step * np.linspace(-1, 1, 11)[:, None]
        fine = np.stack([gaps(outline, mate, z[[k]], near[:, k])[:, 0] for k in range(z.size)], axis=1)
        at, best = near[np.argmin(fine, axis=0), np.arange(z.size)], np.minimum(best, fine.min(axis=0))
    return best


@settings(max_examples=12, deadline=None)
@given(
    teeth=st.integers(9, 40),
    mate_teeth=st.integers(9, 60),
    lean=st.floats(-0.05, 0.6),
    width=st.floats(0.35, 0.6),
    depth=st.floats(0.5, 1.0),
)
def test_every_point_of_the_edge_is_touched_and_never_entered(teeth, mate_teeth, lean, width, depth):
    """Straight-sided teeth of any taper: the given member comes up to each point of its mate's edge, and no further."""
    pitch = teeth / 2
    half = width * np.pi / 2
    tip, root = half - lean * depth, half + lean * depth
    assume(tip > 0.05 and root < 0.45 * np.pi)
    outline = straight(teeth, pitch + depth, pitch - depth, tip, root)
    try:
        mate = external_mate(outline, pitch, mate_teeth, mate_teeth / 2 + 0.8 * depth)
    except DesignError as error:
        assume("pointed" in str(error) or "teeth off" in str(error))
        raise
    z = np.concatenate([p.curve.point(p.curve.sample(7)[1:-1]) for p in mate.outline.pieces if p.role != "tip"])
    worst = least_gap(outline, mate, z)
    assert np.max(worst) < 1e-6
    assert np.min(worst) > -1e-6


def test_the_touching_check_sees_a_turned_mate():
    outline = straight(20, 11, 9, 0.4, 0.9)
    mate = external_mate(outline, 10, 30, 15.8)
    z = np.concatenate([p.curve.point(p.curve.sample(7)) for p in mate.outline.pieces if p.role == "flank"])
    assert np.min(least_gap(outline, mate, z * np.exp(1e-4j))) < -1e-4


@settings(max_examples=10, deadline=None)
@given(teeth=st.integers(12, 60), mate_teeth=st.integers(10, 80), shift=st.floats(-0.3, 0.5))
def test_any_involute_gear_rolls_with_its_mate(teeth, mate_teeth, shift):
    outline = InvoluteGear(teeth, 1, profile_shift=shift).outline
    tool = domed_tips(outline, 0.15)
    mate = external_mate(tool, teeth / 2, mate_teeth, mate_teeth / 2 + 0.9 - shift, tooth_thinning=0.02)
    assert rolled(outline, mate).play == pytest.approx(0.02, abs=1e-5)
