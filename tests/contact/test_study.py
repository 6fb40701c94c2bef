"""The study of the roll test, and that it sees a roll test that lies."""

from dataclasses import replace

import numpy as np
import pytest

from gearsolid.cli import BAD_INPUT, ROLLS, main
from gearsolid.contact import polygons, study
from gearsolid.contact.polygons import PolygonPair
from gearsolid.contact.result import Verdict
from gearsolid.contact.roll import roll_engagements
from gearsolid.contact.study import Judged, Judgement, Study, draw, judge
from gearsolid.errors import MissingLibraryError
from tests.contact.machines import involute_pair


def rolled(e):
    return roll_engagements([e]).contacts[0]


@pytest.mark.parametrize("first", [0, 4])
def test_a_share_of_the_study_passes(first):
    done = study.study(range(first, first + 4), seed=7)
    assert done.passed
    assert done.count(Judgement.AGREES) == 4
    assert [d.kind for d in done.designs] == ["external", "ring", "cycloidal", "disc and pins"]
    assert "false rolls    0\nfalse binds    0\n" in done.text


@pytest.mark.slow
def test_the_study():
    done = study.study(range(2000), seed=1)
    assert done.passed, done.text


def test_a_false_rolls_is_seen():
    e = involute_pair(20, 30, distance=24.95)
    lie = replace(rolled(e), verdict=Verdict.ROLLS, clearance=0.01, proven=0.005)
    assert rolled(e).verdict is Verdict.BINDS
    assert judge(e, lie)[0] is Judgement.FALSE_ROLLS


def test_a_gap_promised_too_wide_is_seen():
    e = involute_pair(20, 30, thinning=0.05)
    honest = rolled(e)
    assert judge(e, honest)[0] is Judgement.AGREES
    assert judge(e, replace(honest, proven=1.1 * honest.clearance))[0] is Judgement.FALSE_ROLLS


@pytest.mark.parametrize("depth", [0.001, 0.1])
def test_a_false_binds_is_seen(depth):
    e = involute_pair(20, 30, thinning=0.05)
    assert judge(e, replace(rolled(e), verdict=Verdict.BINDS, clearance=-depth))[0] is Judgement.FALSE_BINDS


def test_a_false_binds_that_overlaps_at_another_angle_is_seen():
    e = replace(involute_pair(20, 30, thinning=0.05), angle_b=np.pi + np.pi / 30 + 0.006)
    honest = rolled(e)
    assert honest.verdict is Verdict.BINDS
    assert judge(e, honest)[0] is Judgement.AGREES
    far = replace(e, angle_b=e.angle_b - 0.006)
    assert judge(far, honest)[0] is Judgement.FALSE_BINDS


def test_equal_numbers_and_seeds_give_equal_designs():
    (one, two), other = (draw(5, 3)[1] for _ in range(2)), draw(5, 4)[1]
    assert (one.centre_b, one.angle_b, one.a.order) == (two.centre_b, two.angle_b, two.a.order)
    assert one.angle_b != other.angle_b


def judged(judgement):
    return Judged(0, "external", Verdict.ROLLS, judgement, 0.1, -0.1, 1e-4, 0)


def test_one_false_rolls_or_one_false_binds_in_two_hundred_fail_the_study():
    fine = (judged(Judgement.AGREES),) * 200
    assert Study(fine).passed
    assert not Study((*fine, judged(Judgement.FALSE_ROLLS))).passed
    assert Study((*fine, judged(Judgement.FALSE_BINDS))).passed
    assert not Study((*fine[:199], judged(Judgement.FALSE_BINDS))).passed
    assert "design 0, external: false rolls, clearance 0.1" in Study((judged(Judgement.FALSE_ROLLS),)).text


def test_polygons_state_their_error():
    e = involute_pair(20, 30, thinning=0.05)
    exact = rolled(e)
    for sides in (60, 240, 960):
        pair = PolygonPair(e, sides)
        assert abs(pair.least(np.radians(exact.input_angle)) - exact.clearance) < pair.error
    assert pair.error < 1e-4


def test_the_command_prints_both_counts(capsys):
    assert main(["study", "--designs", "2", "--first", "2"]) == ROLLS
    out = capsys.readouterr().out
    assert "false rolls    0" in out
    assert "false binds    0" in out
    assert main(["study", "--designs", "0"]) == BAD_INPUT


def test_a_missing_polygon_library_is_said(monkeypatch):
    def missing(name):
        raise ImportError(name)

    monkeypatch.setattr(polygons, "import_module", missing)
    with pytest.raises(MissingLibraryError, match="needs shapely"):
        PolygonPair(involute_pair(20, 30))
