"""Outer rotors and lobe rotors: simple outlines or named limits, and what an inset really leaves."""

import re

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st
from scipy.spatial import cKDTree
from shapely.geometry import Polygon

from gearsolid.errors import DesignError
from gearsolid.teeth.lobes import LobeRotor
from gearsolid.teeth.rotors import OuterRotor


def polygon(outline, per_piece=400):
    pitch = np.concatenate([p.curve.point(p.curve.sample(per_piece))[:-1] for p in outline.pieces])
    z = np.concatenate([pitch * outline.step**k for k in range(outline.order)])
    return Polygon(np.column_stack([z.real, z.imag]))


@settings(max_examples=100, deadline=None)
@given(
    lobes=st.integers(2, 20),
    radius=st.floats(0.05, 0.99),
    root=st.floats(0.3, 1.6),
    fillet=st.one_of(st.just(0.0), st.floats(0.01, 0.5)),
)
@example(6, 0.418, 0.794, 0.05)
@example(6, 0.418, 0.794, 0.5)
def test_outer_rotor_is_simple_or_the_limit_is_named(lobes, radius, root, fillet):
    try:
        rotor = OuterRotor(lobes, 30.0, radius * 30.0 * np.sin(np.pi / lobes), root * 30.0, fillet * 30.0)
    except DesignError as refusal:
        assert re.search(r"\d", str(refusal))
        return
    outline = rotor.outline
    shape = polygon(outline)
    assert shape.is_valid
    assert not shape.exterior.is_ccw
    assert -outline.area == pytest.approx(shape.area, rel=1e-3)
    assert outline.r_min == pytest.approx(rotor.tip_radius, rel=1e-12)
    assert outline.r_max == pytest.approx(rotor.root_radius, rel=1e-12)


def test_root_fillet_runs_into_lobe_and_root_smoothly():
    outline = OuterRotor(6, 33.642, 14.062, 26.8, 1.5).outline
    pieces = [p.curve for p in outline.pieces]
    assert [p.role for p in outline.pieces] == ["fillet", "flank", "fillet", "root"]
    for before, after in zip(pieces, [*pieces[1:], pieces[0]], strict=True):
        joint = complex(after.tangent(np.asarray(after.span[0]))) / complex(before.tangent(np.asarray(before.span[1])))
        turn = outline.step if after is pieces[0] else 1
        assert abs(np.angle(joint * turn)) < 1e-6
    assert pieces[0].radius == 1.5


@settings(max_examples=100, deadline=None)
@given(lobes=st.integers(2, 12), radius=st.floats(1, 300), inset=st.one_of(st.just(0.0), st.floats(1e-9, 0.3)))
@example(2, 40.0, 1e-6)
@example(3, 40.0, 0.2499)
def test_lobe_rotor_is_simple_or_the_limit_is_named(lobes, radius, inset):
    try:
        rotor = LobeRotor(lobes, radius, inset * radius / (2 * lobes))
    except DesignError as refusal:
        assert re.search(r"\d", str(refusal))
        return
    outline = rotor.outline
    shape = polygon(outline)
    assert shape.is_valid
    assert shape.exterior.is_ccw
    assert outline.area == pytest.approx(shape.area, rel=1e-3)
    assert (outline.r_min, outline.r_max) == pytest.approx((rotor.root_radius, rotor.tip_radius), rel=1e-9)


@pytest.mark.parametrize("inset", [0.02, 0.1, 0.9])
@pytest.mark.parametrize("lobes", [2, 3, 5])
def test_inset_is_the_distance_from_the_exact_rotor(lobes, inset):
    """Measured to a crowd of points of the exact rotor, also where lobe and space meet in an infinite curvature."""
    exact, inner = LobeRotor(lobes, 40.0).outline, LobeRotor(lobes, 40.0, inset).outline
    crowd = np.concatenate([p.curve.point(p.curve.sample(100_001)) for p in exact.pieces])
    spacing = np.max(np.abs(np.diff(crowd)))
    crowd = np.concatenate([crowd, crowd * exact.step, crowd / exact.step])
    z = np.concatenate([p.curve.point(p.curve.sample(1000)) for p in inner.pieces])
    depth, _ = cKDTree(np.column_stack([crowd.real, crowd.imag])).query(np.column_stack([z.real, z.imag]))
    assert depth.min() > inset - 1e-9
    assert depth.max() < inset + spacing**2 / (8 * inset) + 1e-9
    assert inner.area < exact.area


REFUSALS = [
    (lambda: LobeRotor(1, 40.0), "2 or more"),
    (lambda: LobeRotor(2, 0.0), "above 0"),
    (lambda: LobeRotor(2, 40.0, 2.5), "2.5 mm"),
    (lambda: LobeRotor(2, 40.0, -0.1), "0 or more"),
    (lambda: OuterRotor(6, 33.6, 17.0, 26.7), "below 16.8 mm"),
    (lambda: OuterRotor(6, 33.6, 14.0, 19.0), "between 19.6 and 47.6 mm"),
    (lambda: OuterRotor(6, 33.6, 14.0, 26.7, -1.0), "0 or more"),
    (lambda: OuterRotor(6, 33.6, 14.0, 26.7, 6.0), "half a pitch is 30 deg"),
]


@pytest.mark.parametrize(("make", "words"), REFUSALS, ids=[w for _, w in REFUSALS])
def test_refusal(make, words):
    with pytest.raises(DesignError, match=re.escape(words)):
        make()
