import itertools
from math import pi

import numpy as np
import pytest
from curve_specimens import epicycloid, hypocycloid
from hypothesis import given
from hypothesis import strategies as st

from gearsolid.curves.curve import Mirrored, Reversed, Section, Turned
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.length import ArcLength
from gearsolid.curves.loops import disc, hole, holes, pins
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.parallel import Parallel
from gearsolid.curves.primitives import Arc, Ellipse, Formula, Segment
from gearsolid.curves.rolling import CircleOnCircle
from gearsolid.curves.roulette import Trace
from gearsolid.errors import DesignError, ToleranceError

sizes = st.floats(0.1, 50)
counts = st.integers(2, 40)


def square(size: float, order: int = 4) -> tuple[Piece, ...]:
    """The sides of a square that one pitch of it holds, counter-clockwise."""
    corners = size * np.exp(1j * (pi / 4 + pi / 2 * np.arange(5))) * np.sqrt(2)
    return tuple(Piece(Segment(a, b), "flank") for a, b in itertools.pairwise(corners))[: 4 // order]


@given(sizes)
def test_disc_and_hole(radius):
    assert disc(radius).area == pytest.approx(pi * radius**2, rel=1e-13)
    assert hole(radius).area == pytest.approx(-pi * radius**2, rel=1e-13)
    for outline in (disc(radius), hole(radius)):
        assert outline.is_chain
        assert outline.step == pytest.approx(1)
        assert (outline.r_min, outline.r_max) == pytest.approx((radius, radius), rel=1e-13)


@given(counts, sizes, st.floats(0.01, 0.99), st.floats(-pi, pi))
def test_patterns_of_circles(count, circle, share, angle):
    radius = share * circle
    for outline, sign in ((pins(count, circle, radius, angle), 1), (holes(count, circle, radius, angle), -1)):
        assert outline.area == pytest.approx(sign * count * pi * radius**2, rel=1e-10)
        assert (outline.r_min, outline.r_max) == pytest.approx((circle - radius, circle + radius), rel=1e-9)
        assert not outline.is_chain
        assert outline.step == pytest.approx(np.exp(2j * pi / count))


@pytest.mark.parametrize("order", [1, 2, 4])
def test_square(order):
    outline = Outline(square(3, order), order)
    assert outline.area == pytest.approx(36)
    assert outline.r_min == pytest.approx(3)
    assert outline.r_max == pytest.approx(3 * np.sqrt(2))
    assert outline.is_chain
    assert outline.pitch_angle == 2 * pi / order
    assert outline.points(5).shape == (20 // order,)


@pytest.mark.parametrize("arches", [3, 5, 12])
def test_epicycloid_rim(arches):
    outline = Outline((Piece(epicycloid(arches, 1, 2 * pi), "flank"),), arches)
    assert outline.is_chain
    assert outline.step == pytest.approx(np.exp(2j * pi / arches))
    assert outline.area == pytest.approx(pi * (arches + 1) * (arches + 2), rel=1e-12)
    assert (outline.r_min, outline.r_max) == pytest.approx((arches, arches + 2), rel=1e-12)


@pytest.mark.parametrize("arches", [3, 5, 12])
def test_hypocycloid_rim_runs_clockwise(arches):
    outline = Outline((Piece(hypocycloid(arches, 1, 2 * pi), "flank"),), arches)
    assert outline.is_chain
    assert outline.step == pytest.approx(np.exp(-2j * pi / arches))
    assert outline.area == pytest.approx(-pi * (arches - 1) * (arches - 2), rel=1e-12)
    assert (outline.r_min, outline.r_max) == pytest.approx((arches - 2, arches), rel=1e-12)


def test_a_reversed_rim_is_a_hole_of_the_same_size():
    rim = Outline((Piece(epicycloid(5, 1, 2 * pi), "flank"),), 5)
    back = Outline((Piece(Reversed(rim.pieces[0].curve), "flank"),), 5)
    assert back.area == pytest.approx(-rim.area, rel=1e-13)
    assert back.step == pytest.approx(np.conj(rim.step))
    assert (back.r_min, back.r_max) == pytest.approx((rim.r_min, rim.r_max))


def test_a_mirrored_rim_keeps_its_material():
    curve = epicycloid(5, 1, 2 * pi)
    mirrored = Outline((Piece(Mirrored(curve), "flank"),), 5)
    assert mirrored.area == pytest.approx(Outline((Piece(curve, "flank"),), 5).area, rel=1e-13)


@given(st.floats(0.01, 0.99), st.floats(-pi, pi))
def test_area_does_not_depend_on_cuts_or_turn(cut, angle):
    curve = Turned(epicycloid(5, 1, 2 * pi), complex(np.exp(1j * angle)))
    parts = [Section(curve, 0, cut * 2 * pi), Section(curve, cut * 2 * pi, 2 * pi)]
    outline = Outline(tuple(Piece(p, "flank") for p in parts), 5)
    assert outline.area == pytest.approx(42 * pi, rel=1e-12)


def test_area_counts_two_cusps_inside_one_piece():
    two = Outline((Piece(epicycloid(6, 1, 4 * pi), "flank"),), 3)
    assert two.area == pytest.approx(pi * 7 * 8, rel=1e-12)


@pytest.mark.parametrize("shortening", [0.5, 0.9, 0.99])
def test_area_of_a_disc_with_sharp_valleys(shortening):
    """Steiner for a parallel of a closed curve of turning number one: A - L d + pi d^2 inwards."""
    path = Trace(CircleOnCircle(9, -10), 10 / shortening, 0, 2 * pi)
    disc = Outline((Piece(Parallel(path, 1e-3), "flank"),), 9)
    area = Outline((Piece(path, "flank"),), 9).area
    length = 9 * ArcLength(path).total
    sign = np.sign(area)
    assert disc.area == pytest.approx(area - 1e-3 * length + sign * pi * 1e-6, rel=1e-11)


def test_a_hidden_corner_spoils_the_area_and_is_reported():
    bent = Formula(lambda t: 3 + t * 1j, lambda t: np.where(t < 0.1, 1j, 3j), np.zeros_like, -1, 1)
    with pytest.raises(ToleranceError, match=r"area under a Formula still changes by .* must be among its breaks"):
        _ = Outline((Piece(bent, "flank"), Piece(Segment(3 + 1j, 3 - 1j), "root")), 1).area


def test_extreme_radii_inside_a_piece():
    ellipse = Outline((Piece(Ellipse(3, 2, 0.3, 0.3 + 2 * pi), "tip"),), 1)
    assert (ellipse.r_min, ellipse.r_max) == pytest.approx((2, 3), rel=1e-12)
    # A segment nearest the origin between its ends.
    assert Outline(square(1.7), 4).r_min == pytest.approx(1.7, rel=1e-12)


def test_a_gap_is_refused():
    first, second, *rest = square(3, 1)
    for shift in (1e-6, 1e-6j):
        broken = Piece(Turned(second.curve, 1, shift), "tip")
        with pytest.raises(DesignError, match=r"outline pieces 0 \(flank\) and 1 \(tip\) miss each other by 1e-06 mm"):
            Outline((first, broken, *rest), 1)
    rounding = Piece(Turned(second.curve, 1, 1e-12), "tip")
    assert Outline((first, rounding, *rest), 1).area == pytest.approx(36)


def test_an_open_pitch_is_refused():
    with pytest.raises(DesignError, match="neither closes the pitch nor reaches the next one"):
        Outline(square(3, 4), 5)
    with pytest.raises(DesignError, match="neither closes"):
        Outline((Piece(Arc(0, 2, 0, 2 * pi / 7 + 1e-7), "tip"),), 7)


def test_nothing_is_refused():
    with pytest.raises(DesignError, match="at least one piece and one pitch, not 0, 3"):
        Outline((), 3)
    with pytest.raises(DesignError, match="not 4, 0"):
        Outline(square(3, 1), 0)


@pytest.mark.parametrize("place", [0, 1, 2])
def test_a_piece_without_an_end_is_refused_wherever_it_stands(place):
    never = Piece(Envelope(Segment(-9j, 9j), CircleOnCircle(8, 3)), "flank")
    pieces = list(square(3, 1))
    pieces[place] = never
    with pytest.raises(DesignError, match="no finite end point"):
        Outline(tuple(pieces), 1)


def test_a_whole_rim_cannot_be_repeated():
    with pytest.raises(DesignError, match="closed round the origin cannot be repeated 4 times"):
        Outline(square(3, 1), 4)
