"""Bodies inside CadQuery scripts, and the door to the CAD kernel."""

import subprocess
import sys
from math import cos, pi, sin

import cadquery as cq
import pytest
from bodies import PLAIN, SQUARE, TOOTHED

from gearsolid.curves.loops import holes
from gearsolid.errors import DesignError, SolidError
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.part import Body, Part
from gearsolid.solids.assembly import assembly, location
from gearsolid.solids.check import exact_volume
from gearsolid.solids.plugin import at_points, cut_form, on_plane, outline_face, outline_wire
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear

pytestmark = pytest.mark.cad

GEAR, RING = InvoluteGear(12, 2), InternalGear(40, 2)


def test_invoke_puts_the_body_on_a_tilted_workplane():
    body = Body(GEAR.outline, 4)
    work = cq.Workplane(cq.Plane((5, 6, 7), normal=(1, 0, 0))).invoke(on_plane(body))
    solid = work.val()
    assert exact_volume(solid) == pytest.approx(body.volume, rel=1e-6)
    assert solid.Center().toTuple() == pytest.approx((7, 6, 7), abs=1e-3)
    assert work.faces(">X").workplane().plane.origin.x == pytest.approx(9), "the chain goes on"


def test_eachpoint_places_copies_of_one_shape():
    body = Body(GEAR.outline, 4)
    solids = cq.Workplane().rarray(60, 1, 3, 1).eachpoint(at_points(body), clean=False).vals()
    assert [round(s.Center().x, 3) for s in solids] == [-60, 0, 60]
    assert len({s.located(cq.Location()) for s in solids}) == 1, "all share one shape"
    assert sum(exact_volume(s) for s in solids) == pytest.approx(3 * body.volume, rel=1e-6)


@pytest.mark.parametrize("depth", [10, 14], ids=["flush", "beyond"])
def test_an_internal_form_is_cut_into_a_part(depth):
    block = cq.Workplane().box(110, 110, 10)
    work = block.faces(">Z").workplane().invoke(cut_form(RING.outline, depth))
    (part,) = work.solids().vals()
    assert part.isValid()
    assert exact_volume(part) == pytest.approx(110 * 110 * 10 + RING.outline.area * 10, rel=1e-6)


def test_a_blind_pattern_is_cut_into_a_part():
    block = cq.Workplane().box(100, 100, 10).faces(">Z").workplane()
    part = block.invoke(cut_form(holes(5, 30, 4), 6)).val()
    assert part.Volume() == pytest.approx(100 * 100 * 10 - 5 * 16 * pi * 6, rel=1e-9)


def test_impossible_cuts_are_refused():
    with pytest.raises(DesignError, match="material inside"):
        cut_form(GEAR.outline, 5)
    with pytest.raises(DesignError, match="depth of cut is 0 mm"):
        cut_form(RING.outline, 0)


def test_a_cut_that_leaves_nothing_is_refused():
    with pytest.raises(SolidError, match="leaves no sound part"):
        cq.Workplane().box(20, 20, 10).faces(">Z").workplane().invoke(cut_form(RING.outline, 12))


def test_a_faulty_cut_is_refused(monkeypatch):
    monkeypatch.setattr("gearsolid.solids.plugin.is_valid", lambda shape: False)
    with pytest.raises(SolidError, match="leaves no sound part"):
        cq.Workplane().box(100, 100, 10).invoke(cut_form(holes(5, 30, 4), 6))


def test_wires_and_faces_are_values_for_other_tools():
    wire = outline_wire(GEAR.outline)
    assert wire.IsClosed()
    face = outline_face(GEAR.outline, holes(3, 5, 1.5))
    area = GEAR.outline.area - 3 * pi * 1.5**2
    assert face.isValid()
    assert face.Area() == pytest.approx(area, rel=1e-6)
    prism = cq.Workplane().placeSketch(cq.Sketch().face(face)).extrude(2).val()
    assert exact_volume(prism) == pytest.approx(2 * area, rel=1e-6)
    with pytest.raises(DesignError, match="no single wire"):
        outline_wire(holes(3, 5, 1))


@pytest.mark.parametrize("psi", [0.0, 1.3])
def test_assembly_stands_where_the_motion_says(psi):
    motion = Motion(30.0, 0.4, 0.25, 0.1, -2.0)
    parts = [
        Part("arm", Body(SQUARE, 5, z=4), motion, (1, 0, 0)),
        Part("other arm", Body(SQUARE, 5), Motion(), (0, 1, 0)),
    ]
    placed = assembly(parts, psi)
    arm, other = placed.children
    assert arm.obj == other.obj, "equal but for the height: one shape"
    corner = 30 * complex(cos(0.4 + 0.25 * psi), sin(0.4 + 0.25 * psi))
    corner += abs(10 + 10j) * complex(cos(0.1 - 2 * psi + pi / 4), sin(0.1 - 2 * psi + pi / 4))
    found = [v.toTuple() for v in arm.obj.moved(location(parts[0], psi)).Vertices()]
    assert any((x, y, z) == pytest.approx((corner.real, corner.imag, 4), abs=1e-9) for x, y, z in found)
    assert [c.name for c in placed.children] == ["arm", "other arm"]


def test_parts_of_equal_bodies_share_one_shape():
    body = TOOTHED["undercut involute 7"]
    parts = [Part(f"planet {k}", body, Motion(40, k), (0.5, 0.5, 0.5)) for k in range(3)]
    parts.append(Part("plate", PLAIN["square"], Motion(), (1, 1, 1)))
    shapes = [child.obj for child in assembly(parts).children]
    assert shapes[0] is shapes[1] is shapes[2]
    assert shapes[3] != shapes[0]


@pytest.mark.parametrize(
    ("missing", "message"),
    [
        ("libGL.so.1: cannot open shared object file: No such file or directory", "libgl1"),
        ("No module named 'cadquery'", "cadquery 2.8"),
    ],
)
def test_a_missing_library_is_named(tmp_path, missing, message):
    (tmp_path / "cadquery.py").write_text(f"raise ImportError({missing!r})")
    script = f"""
import sys
sys.path.insert(0, {str(tmp_path)!r})
from gearsolid.errors import MissingLibraryError
try:
    import gearsolid.solids.body
except MissingLibraryError as error:
    print(error)
"""
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=True)
    assert message in done.stdout


def test_facets_need_no_cad_kernel():
    script = """
import sys
sys.modules["cadquery"] = sys.modules["OCP"] = None
import gearsolid.output.stl
"""
    subprocess.run([sys.executable, "-c", script], check=True)
