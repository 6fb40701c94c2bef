import re
from datetime import UTC, datetime
from math import degrees

import cadquery as cq
import pytest
from bodies import BODIES, PLAIN, TOOTHED
from OCP.Interface import Interface_Static

from gearsolid.errors import ExportError
from gearsolid.output.deviation import flank_deviation
from gearsolid.output.step import Placed, prove, read_step, write_step
from gearsolid.output.step_text import share_geometry
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.part import Part
from gearsolid.solids.assembly import assembly
from gearsolid.solids.body import body_solid

pytestmark = pytest.mark.cad

GOLD, GREY = (0.8, 0.65, 0.3), (0.5, 0.5, 0.55)
NOON = datetime(2026, 1, 1, 12, tzinfo=UTC)


@pytest.fixture(scope="module")
def stage():
    """Three pins plates round a toothed wheel, on two levels."""
    plate = PLAIN["carrier with pins"]
    wheel = TOOTHED["undercut involute 7"]
    parts = [
        Part("sun", wheel, Motion(angle=0.1, rate=1.0), GOLD),
        *(Part(f"plate {k + 1}", plate, Motion(80.0, 2.0 * k, 0.25, 0.3 * k, -0.5), GREY) for k in range(3)),
    ]
    return parts, assembly(parts, name="stage")


@pytest.mark.parametrize("name", ["undercut involute 7", "hub, keyed chamfered bore, pins and holes"])
def test_a_part_reads_back_as_one_valid_named_solid(tmp_path, name):
    body = BODIES[name]
    done = write_step(tmp_path / "part.step", cq.Assembly(body_solid(body), name="wheel 7"))
    (part,) = done.parts
    assert part.name == "wheel 7"
    assert part.shape.ShapeType() == "Solid"
    assert part.shape.isValid()
    assert done.volume == pytest.approx(body.volume, rel=1e-6)
    assert done.size == (tmp_path / "part.step").stat().st_size
    assert flank_deviation(part.shape, body) <= 1e-4
    assert [p.name for p in tmp_path.iterdir()] == ["part.step"], "nothing else is left behind"


def test_cadquery_itself_reads_the_part(tmp_path):
    body = TOOTHED["undercut involute 7"]
    write_step(tmp_path / "part.step", cq.Assembly(body_solid(body), name="wheel"))
    (solid,) = cq.importers.importStep(str(tmp_path / "part.step")).solids().vals()
    assert solid.isValid()
    assert solid.Volume(tol=1e-7) == pytest.approx(body.volume, rel=1e-6)


def test_names_places_and_colours_survive(tmp_path, stage):
    parts, placed = stage
    done = write_step(tmp_path / "stage.step", placed)
    assert [p.name for p in done.parts] == ["sun", "plate 1", "plate 2", "plate 3"]
    assert done.volume == pytest.approx(sum(p.body.volume for p in parts), rel=1e-6)
    for part, found in zip(parts, done.parts, strict=True):
        (x, y, z), (_, _, turn) = found.location.toTuple()
        centre = part.motion.centre(0.0)
        assert (x, y, z) == pytest.approx((centre.real, centre.imag, part.body.z), abs=1e-9)
        assert turn == pytest.approx(degrees(part.motion.turn(0.0)), abs=1e-7)
    again = cq.Assembly.importStep(str(tmp_path / "stage.step"))
    colours = {name: colour.toTuple()[:3] for _, name, _, colour in again}
    assert colours["stage/sun"] == pytest.approx(cq.Color(*GOLD).toTuple()[:3], abs=1e-3)
    assert colours["stage/plate 2"] == pytest.approx(cq.Color(*GREY).toTuple()[:3], abs=1e-3)


def test_equal_parts_are_written_once(tmp_path, stage):
    _, placed = stage
    write_step(tmp_path / "stage.step", placed)
    text = (tmp_path / "stage.step").read_text()
    assert len(re.findall("MANIFOLD_SOLID_BREP", text)) == 2
    assert re.findall(r"PRODUCT\('([^']*)'", text) == ["stage", "sun", "plate"]


def test_moved_copies_are_one_product(tmp_path):
    box = cq.Solid.makeBox(1, 2, 3)
    placed = cq.Assembly(name="row")
    for k in range(3):
        placed.add(box.moved(cq.Location((4 * k, 0, 0))), name=f"box {k}", loc=cq.Location((0, k, 0)))
    done = write_step(tmp_path / "row.step", placed)
    assert (tmp_path / "row.step").read_text().count("MANIFOLD_SOLID_BREP") == 1
    assert [p.location.toTuple()[0] for p in done.parts] == [(0, 0, 0), (4, 1, 0), (8, 2, 0)]


def test_equal_designs_give_equal_files(tmp_path, stage):
    _, placed = stage
    for name in ("a.step", "b.step"):
        write_step(tmp_path / name, placed, author="A. Turner", organisation="Shop", time=NOON)
    a, b = (tmp_path / name for name in ("a.step", "b.step"))
    assert a.read_bytes() == b.read_bytes()
    head = a.read_text()[:500]
    assert "2026-01-01T12:00:00" in head
    assert "A. Turner" in head
    assert "AUTOMOTIVE_DESIGN" in head, "AP214"
    assert "PCURVE" not in a.read_text()


def test_settings_of_the_kernel_are_put_back(tmp_path):
    write_step(tmp_path / "a.step", cq.Assembly(cq.Solid.makeBox(1, 1, 1), name="a"))
    Interface_Static.SetCVal_s("write.surfacecurve.mode", "On")
    write_step(tmp_path / "a.step", cq.Assembly(cq.Solid.makeBox(1, 1, 1), name="a"))
    assert Interface_Static.CVal_s("write.surfacecurve.mode") == "On"


def test_sharing_keeps_the_shape_and_saves_a_third(tmp_path):
    body = TOOTHED["undercut involute 7"]
    plain = tmp_path / "plain.step"
    placed = cq.Assembly(name="set")
    placed.add(body_solid(body), name="wheel")
    placed.export(str(plain), write_pcurves=False)
    text = plain.read_text()
    shared = share_geometry(text)
    (tmp_path / "shared.step").write_text(shared)
    (part,) = read_step(tmp_path / "shared.step")
    assert prove([part], {"wheel": body.volume}, plain) == pytest.approx(body.volume, rel=1e-6)
    assert len(shared) < 0.67 * len(text)
    assert share_geometry(re.sub(r"^(#\d+)=", r"\1 = ", shared, flags=re.MULTILINE)) == shared, "nothing left to share"


def test_failed_export_leaves_the_old_file(tmp_path, monkeypatch):
    target = tmp_path / "part.step"
    good = cq.Assembly(cq.Solid.makeBox(1, 1, 1), name="box")
    write_step(target, good)
    before = target.read_bytes()
    box = cq.Solid.makeBox(1, 1, 1)
    holed = cq.Solid.makeSolid(cq.Shell.makeShell(box.Faces()[:5]))
    two = cq.Compound.makeCompound([box, box.moved(cq.Location((5, 0, 0)))])
    for bad in (cq.Assembly(holed, name="box"), cq.Assembly(two, name="box")):
        with pytest.raises(ExportError, match="does not read back as written"):
            write_step(target, bad)
    monkeypatch.setattr("gearsolid.output.step.share_geometry", lambda text: text.replace("1.,1.,0.", "1.,1.01,0."))
    with pytest.raises(ExportError, match="does not read back as written"):
        write_step(target, good)
    monkeypatch.setattr("gearsolid.output.step.share_geometry", lambda text: text[: len(text) // 2])
    with pytest.raises(ExportError, match=r"no STEP file|reads back with"):
        write_step(target, good)
    assert target.read_bytes() == before
    assert [p.name for p in tmp_path.iterdir()] == ["part.step"]


def test_proof_refuses_missing_parts_and_other_volumes(tmp_path):
    box = Placed("box", cq.Solid.makeBox(1, 1, 1), cq.Location())
    assert prove([box], {"box": 1.0}, tmp_path) == pytest.approx(1)
    with pytest.raises(ExportError, match="they must agree"):
        prove([box], {"box": 1.000002}, tmp_path)
    with pytest.raises(ExportError, match="written were"):
        prove([box], {"box": 1.0, "lid": 1.0}, tmp_path)
    with pytest.raises(ExportError, match="written were"):
        prove([box, box], {"box": 1.0}, tmp_path)


@pytest.mark.parametrize(
    ("make", "message"),
    [
        (lambda: cq.Assembly(cq.Solid.makeBox(1, 1, 1), name="Ø6"), "plain ASCII"),
        (lambda: cq.Assembly(name="empty"), "holds no shapes"),
    ],
)
def test_what_cannot_be_written_is_said(tmp_path, make, message):
    with pytest.raises(ExportError, match=message):
        write_step(tmp_path / "a.step", make())
    assert not list(tmp_path.iterdir())


def test_a_folder_that_is_missing_is_said(tmp_path):
    with pytest.raises(ExportError, match="cannot write"):
        write_step(tmp_path / "none" / "a.step", cq.Assembly(cq.Solid.makeBox(1, 1, 1), name="a"))


def test_a_file_that_is_no_step_is_said(tmp_path):
    (tmp_path / "a.step").write_text("not a STEP file")
    with pytest.raises(ExportError, match="no STEP file"):
        read_step(tmp_path / "a.step")
