"""Path data is read back by a separate evaluator and compared with the exact outline."""

import numpy as np
import pytest
from evaluate import area, loops

from gearsolid.curves.loops import disc, hole, pins
from gearsolid.curves.outline import Outline
from gearsolid.output.picture import path
from gearsolid.shop.bore import Bore
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.pinwheel import CycloidDisc, PinRing

OUTLINES = {
    "disc": disc(7.0),
    "hole": hole(2.0),
    "pins": pins(8, 18.0, 2.5, 0.3),
    "keyed bore": Bore.keyed(12.0).outline,
    "involute wheel": InvoluteGear(23, 1.5, profile_shift=0.2).outline,
    "undercut pinion": InvoluteGear(9, 1.0).outline,
    "cycloid disc": CycloidDisc(29, 0.8, 30.0, 1.5).outline,
    "pocketed ring": PinRing(30, 30.0, 1.5, 30.0).pocketed,
}


def exact_points(outline: Outline) -> np.ndarray:
    pitch = outline.points(2001)
    return np.concatenate([pitch * outline.step**k for k in range(outline.order)])


@pytest.mark.parametrize("outline", OUTLINES.values(), ids=OUTLINES.keys())
def test_drawn_area_is_the_exact_area(outline):
    drawn = sum(area(loop) for loop in loops(path(outline), per_step=400))
    # Polygons between the read points cut off less than this; the exact area comes from Green's theorem.
    assert drawn == pytest.approx(outline.area, rel=3e-5)


@pytest.mark.parametrize("name", ["involute wheel", "undercut pinion", "cycloid disc"])
@pytest.mark.parametrize("tol", [1e-2, 1e-3, 1e-4])
def test_drawn_points_lie_on_the_flank_within_the_tolerance(name, tol):
    outline = OUTLINES[name]
    (drawn,) = loops(path(outline, tol), per_step=9)
    drawn = drawn[np.abs(np.angle(drawn)) <= outline.pitch_angle]
    exact = exact_points(outline)
    exact = exact[np.abs(np.angle(exact)) <= 2 * outline.pitch_angle]
    distance = np.abs(drawn[:, None] - exact[None, :]).min(axis=1)
    # The exact points stand up to half a step apart, and numbers are written to 5 decimals.
    step = np.abs(np.diff(exact)).max()
    assert distance.max() <= tol + 1e-5 + (0.0 if step < tol else step**2)


def test_a_coarser_tolerance_draws_fewer_cubics():
    outline = OUTLINES["cycloid disc"]
    assert path(outline, 1e-1).count("C") < path(outline, 1e-4).count("C")


def test_arcs_stay_arcs():
    assert "C" not in path(disc(5.0))
    assert path(InvoluteGear(20, 1.0).outline).count("A") == 40, "a tip and a root arc a tooth"


def test_a_pattern_is_drawn_as_separate_loops():
    assert [len(loops(path(pins(n, 10.0, 1.0)))) for n in (1, 3, 8)] == [1, 3, 8]


def test_the_area_check_notices_a_hundredth_of_a_millimetre():
    thinned = path(InvoluteGear(23, 1.5, profile_shift=0.2, tooth_thinning=0.01).outline)
    drawn = sum(area(loop) for loop in loops(thinned, per_step=400))
    assert drawn != pytest.approx(OUTLINES["involute wheel"].area, rel=3e-5)
