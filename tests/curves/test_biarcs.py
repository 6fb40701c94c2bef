"""Chains of arcs: within the tolerance asked, closed, and smooth where the outline is."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from gearsolid.curves.biarcs import arc_loops, arc_through
from gearsolid.curves.loops import disc, holes
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc, Ellipse
from gearsolid.errors import DesignError, ToleranceError

A, B = 10.0, 6.0
ELLIPSE = Outline((Piece(Ellipse(A, B), "tip"),), 1)


def curves(loop):
    return [arc_through(*ends) for ends in zip(loop.corners, np.roll(loop.corners, -1), loop.bulges, strict=True)]


def from_ellipse(z):
    """Distances of points from the ellipse, by Newton's method on its own angle."""
    t = np.angle(z.real / A + 1j * z.imag / B)
    for _ in range(30):
        p, v, w = A * np.cos(t) + 1j * B * np.sin(t), -A * np.sin(t) + 1j * B * np.cos(t), None
        w = -p
        t -= np.real((p - z) * np.conj(v)) / (np.abs(v) ** 2 + np.real((p - z) * np.conj(w)))
    return np.abs(A * np.cos(t) + 1j * B * np.sin(t) - z)


@pytest.mark.parametrize("tol", [0.1, 0.01, 1e-3, 1e-4, 1e-5])
def test_arcs_lie_within_the_tolerance_of_an_ellipse(tol):
    (loop,) = arc_loops(ELLIPSE, tol)
    worst = max(from_ellipse(c.point(c.sample(41))).max() for c in curves(loop))
    assert worst <= tol
    assert worst <= loop.error <= tol


def test_the_number_of_arcs_grows_as_the_cube_root():
    counts = [arc_loops(ELLIPSE, tol)[0].corners.size for tol in (1e-3, 1e-6)]
    assert 5 < counts[1] / counts[0] < 20


def test_arcs_meet_with_one_direction():
    (loop,) = arc_loops(ELLIPSE, 1e-3)
    chain = curves(loop)
    turns = [
        float(np.angle(two.tangent(np.array(0.0)) / one.tangent(np.array(1.0))))
        for one, two in zip(chain, [*chain[1:], chain[0]], strict=True)
    ]
    assert turns[:-1] == pytest.approx(np.zeros(len(turns) - 1), abs=1e-9)
    # Where the piece begins and ends the fitted spline leans a little from the curve.
    assert turns[-1] == pytest.approx(0, abs=1e-3)


@given(st.floats(-3, 3), st.floats(-5, 5), st.floats(0.1, 5))
def test_an_arc_through_two_points_turns_as_its_bulge_says(bulge, x, y):
    first, last = complex(x, 1), complex(x, 1) + complex(1, y)
    arc = arc_through(first, last, bulge)
    assert arc.start == pytest.approx(first)
    assert arc.end == pytest.approx(last)
    # The height of an arc over its chord is half the chord times the bulge, to the right of a left turn.
    middle = complex(arc.point(np.array(0.5)))
    assert middle == pytest.approx((first + last) / 2 - 0.5j * bulge * (last - first), abs=1e-9)
    step = 1e-6
    slope = (arc.point(np.array(0.3 + step)) - arc.point(np.array(0.3 - step))) / (2 * step)
    assert complex(arc.derivative(np.array(0.3))) == pytest.approx(complex(slope), rel=1e-6)


def test_true_arcs_stay_exact():
    (loop,) = arc_loops(disc(7), 0.1)
    assert loop.error == 0
    assert sum(4 * np.arctan(loop.bulges)) == pytest.approx(2 * np.pi)
    assert len(arc_loops(holes(6, 20, 3), 0.1)) == 6
    wide = Outline((Piece(Arc(0, 5, 0, np.pi), "tip"), Piece(Arc(0, 5, np.pi, 2 * np.pi), "tip")), 1)
    assert np.abs(arc_loops(wide, 0.1)[0].corners) == pytest.approx(5)


def test_a_tolerance_out_of_reach_is_refused():
    with pytest.raises(DesignError, match="tolerance is 0 mm"):
        arc_loops(ELLIPSE, 0)
    with pytest.raises(ToleranceError):
        arc_loops(ELLIPSE, 1e-17)
