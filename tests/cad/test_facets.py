from dataclasses import replace

import numpy as np
import pytest
import trimesh
from bodies import BODIES, PLAIN, TOOTHED

from gearsolid.curves.field import field_of
from gearsolid.errors import DesignError, ExportError
from gearsolid.output.polygon import polygons
from gearsolid.output.stl import prove, read_stl, write_stl
from gearsolid.output.triangles import Triangles, body_triangles


@pytest.mark.parametrize("tol", [0.1, 0.003])
@pytest.mark.parametrize("name", BODIES)
def test_facets_are_watertight_and_of_the_bodys_volume(tmp_path, name, tol):
    body = BODIES[name]
    done = write_stl(tmp_path / "part.stl", body, tol)
    judge = trimesh.load(tmp_path / "part.stl")
    assert judge.is_watertight
    assert judge.is_winding_consistent
    assert len(judge.faces) == done.triangles
    assert judge.volume == pytest.approx(done.volume, rel=1e-5)
    assert abs(done.volume - body.volume) <= tol * judge.area
    assert done.size == 84 + 50 * done.triangles


@pytest.mark.parametrize("tol", [0.1, 0.01, 0.001])
@pytest.mark.parametrize("name", TOOTHED)
def test_chords_stay_within_the_tolerance_of_the_exact_outline(name, tol):
    body = TOOTHED[name]
    for outline in (body.outer, *body.holes):
        for corners in polygons(outline, tol):
            chord = corners[:, None] + np.linspace(0, 1, 9) * (np.roll(corners, -1) - corners)[:, None]
            gaps = np.abs(field_of(outline).near(chord.ravel()).distance).reshape(chord.shape)
            assert gaps.max() <= tol * (1 + 1e-3)
            # The judge's own nearest points are good to some 5e-9 mm.
            assert gaps[:, 0].max() < 2e-8, "corners lie on the exact outline"


def test_volume_error_falls_with_the_tolerance():
    body = TOOTHED["involute 20, keyed chamfered bore"]
    errors = [abs(body_triangles(body, tol).volume / body.volume - 1) for tol in (0.1, 0.01, 0.001, 0.0001)]
    assert errors[0] > 5 * errors[1] > 25 * errors[2] > 125 * errors[3]


def test_no_points_are_added_inside_faces():
    body = PLAIN["square"]
    assert len(body_triangles(body, 0.01).corners) == 12


def test_proof_refuses_a_hole_a_flipped_facet_and_another_volume(tmp_path):
    body = TOOTHED["undercut involute 7"]
    good = body_triangles(body, 0.01)
    prove(good, body.volume, 0.01, tmp_path)
    flipped = good.corners.copy()
    flipped[5] = flipped[5, ::-1]
    for bad in (good.corners[1:], flipped, np.vstack([good.corners, good.corners[:1]])):
        with pytest.raises(ExportError, match="watertight"):
            prove(Triangles(good.points, bad), body.volume, 0.01, tmp_path)
    with pytest.raises(ExportError, match="may differ"):
        prove(good, body.volume * 1.01, 0.01, tmp_path)
    with pytest.raises(ExportError, match="may differ"):
        prove(Triangles(good.points, good.corners[:, ::-1]), body.volume, 0.01, tmp_path)


def test_failed_export_leaves_the_old_file(tmp_path, monkeypatch):
    target, body = tmp_path / "part.stl", PLAIN["square"]
    write_stl(target, body)
    before = target.read_bytes()
    fatter = body_triangles(replace(body, width=body.width * 1.01))
    monkeypatch.setattr("gearsolid.output.stl.body_triangles", lambda *_: fatter)
    with pytest.raises(ExportError, match="may differ"):
        write_stl(target, body)
    assert target.read_bytes() == before
    assert [p.name for p in tmp_path.iterdir()] == ["part.stl"]


def test_a_cut_off_file_is_said(tmp_path):
    write_stl(tmp_path / "part.stl", PLAIN["square"])
    (tmp_path / "half.stl").write_bytes((tmp_path / "part.stl").read_bytes()[:-10])
    with pytest.raises(ExportError, match="no whole binary STL"):
        read_stl(tmp_path / "half.stl")


def test_a_tolerance_of_nothing_is_refused(tmp_path):
    with pytest.raises(DesignError, match="chord tolerance is 0 mm"):
        write_stl(tmp_path / "part.stl", PLAIN["square"], 0)
