import numpy as np
import pytest

from gearsolid.curves.curve import Mirrored, Section, Turned
from gearsolid.curves.fit import Spline
from gearsolid.curves.fitted import fitted
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc, Ellipse, Segment
from gearsolid.errors import ToleranceError

QUARTER = Ellipse(30, 20, 0, np.pi / 2)


def _ellipse(factor: complex = 1.0) -> Outline:
    """An ellipse from one exact quarter and its mirror image, turned."""
    quarter, image = Turned(QUARTER, factor), Turned(Turned(Mirrored(QUARTER), -1), factor)
    return Outline((Piece(quarter, "tip"), Piece(image, "tip")), 2)


@pytest.mark.parametrize("factor", [1.0, np.exp(0.7j), 2 * np.exp(-2j)], ids=["as is", "turned", "turned and scaled"])
def test_pieces_become_splines_on_the_same_ends(factor):
    exact = _ellipse(factor)
    fit = fitted(exact, 1e-5)
    assert all(isinstance(p.curve, Spline) and p.curve.error <= 1e-5 for p in fit.pieces)
    assert [p.curve.start for p in fit.pieces] == pytest.approx([p.curve.start for p in exact.pieces], abs=1e-12)
    assert fit.area == pytest.approx(600 * np.pi * abs(factor) ** 2, rel=1e-6)


def test_mirror_images_share_their_poles():
    quarter, image = (p.curve for p in fitted(_ellipse()).pieces)
    assert image.poles == pytest.approx([-p.conjugate() for p in reversed(quarter.poles)], abs=1e-12)


@pytest.mark.parametrize(
    "tip",
    [
        Section(Arc(0, 5, -1, 1), 0.3, 0.7),
        Mirrored(Arc(0, 5, -0.4, 0.4)),
        Turned(Arc(0, 2.5, -1.4, -0.6), 2 * np.exp(1j)),
        Turned(Mirrored(Section(Arc(0, 5, 0, 2), 0.1, 0.5)), np.exp(0.6j)),
    ],
    ids=["section", "mirrored", "turned and scaled", "all of it"],
)
def test_arcs_and_segments_stay_what_they_are(tip):
    chord = Segment(5 * np.exp(0.4j - 2j), 5 * np.exp(2j * np.pi / 5 - 0.4j - 2j))
    exact = Outline((Piece(tip, "tip"), Piece(Turned(chord, np.exp(2j)), "root")), 5)
    arc, side = (p.curve for p in fitted(exact).pieces)
    assert isinstance(arc, Arc)
    assert isinstance(side, Segment)
    assert arc.point(np.linspace(0, 1, 5)) == pytest.approx(tip.point(tip.sample(5)), abs=1e-12)
    assert side.start == pytest.approx(5 * np.exp(0.4j))


def test_area_tightens_the_fit():
    exact = _ellipse()
    loose = abs(fitted(exact, 0.1).area - exact.area)
    tight = abs(fitted(exact, 0.1, area_tol=loose / 1000).area - exact.area)
    assert tight <= loose / 1000


def test_an_area_out_of_reach_is_said():
    with pytest.raises(ToleranceError, match="ask for a larger area tolerance"):
        fitted(_ellipse(), 0.1, area_tol=1e-18)
