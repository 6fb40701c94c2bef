"""3MF files: parsed by a second reader, judged as meshes, and refused when anything in them is spoilt."""

import re
import zipfile
from collections import Counter
from dataclasses import replace
from xml.dom import minidom

import numpy as np
import pytest
import trimesh
from shipped import MACHINES, PARTS

from gearsolid.curves.loops import disc
from gearsolid.errors import DesignError, ExportError
from gearsolid.output.made import distinct
from gearsolid.output.threemf import read_threemf, write_machine_threemf, write_part_threemf
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.part import Body, Part
from gearsolid.shop.bore import Bore

MODEL = "3D/3dmodel.model"
ROD = Body(disc(3), 8), "rod"
BODY = Body(disc(9), 5, bore=Bore(6))
TRAIN = (
    Part("wheel 1", replace(BODY, z=-2.0), Motion(10, 1.0, 0, 0.5), (1, 0, 0)),
    Part("wheel 2", BODY, Motion(25, 4.0, 0, -2.0), (1, 0, 0)),
    Part("pin & co", Body(disc(2), 30), Motion(), (0, 1, 0)),
)


def text(path):
    with zipfile.ZipFile(path) as package:
        return package.read(MODEL).decode()


def meshes(path):
    """Name and judge's mesh of each object, parsed another way."""
    found = {}
    for node in minidom.parseString(text(path)).getElementsByTagName("object"):
        points = [[float(v.getAttribute(k)) for k in "xyz"] for v in node.getElementsByTagName("vertex")]
        faces = [[int(t.getAttribute(k)) for k in ("v1", "v2", "v3")] for t in node.getElementsByTagName("triangle")]
        if points:
            found[node.getAttribute("name")] = trimesh.Trimesh(points, faces, process=False)
    return found


@pytest.mark.parametrize("name", PARTS)
def test_every_shipped_part_is_a_watertight_solid(tmp_path, name):
    made = PARTS[name]
    done = write_part_threemf(tmp_path / "part.3mf", made.body, made.name, 0.01)
    ((found, judge),) = meshes(tmp_path / "part.3mf").items()
    assert found == made.name
    assert judge.is_watertight
    assert judge.is_winding_consistent
    assert judge.body_count == 1
    assert len(judge.faces) == done.triangles
    assert judge.volume == pytest.approx(done.volume, rel=1e-9)
    assert abs(judge.volume - made.body.volume) <= 0.01 * judge.area
    assert judge.area_faces.min() > 0
    assert len(np.unique(judge.vertices, axis=0)) == len(judge.vertices)


@pytest.mark.parametrize("name", MACHINES)
def test_every_shipped_machine_stands_in_its_place(tmp_path, name):
    machine = MACHINES[name]
    done = write_machine_threemf(tmp_path / "all.3mf", machine.parts, name, 0.02)
    package = read_threemf(tmp_path / "all.3mf")
    assert Counter(p.name for p in package.placed) == {m.name: len(m.parts) for m in distinct(machine.parts)}
    judges = meshes(tmp_path / "all.3mf")
    assert all(j.is_watertight and j.is_winding_consistent for j in judges.values())
    assert done.volume == pytest.approx(sum(judges[p.name].volume for p in package.placed), rel=1e-9)
    whole = np.concatenate([judges[p.name].vertices @ p.transform[:3] + p.transform[3] for p in package.placed])
    assert whole.min(axis=0) == pytest.approx(np.zeros(3), abs=1e-6)
    high = max(p.body.z + p.body.width + max((b.height for b in p.body.bosses), default=0) for p in machine.parts)
    assert np.ptp(whole[:, 2]) == pytest.approx(high - min(p.body.z for p in machine.parts), abs=1e-6)


def test_parts_stand_where_their_motion_says(tmp_path):
    write_machine_threemf(tmp_path / "train.3mf", TRAIN, "train")
    placed = read_threemf(tmp_path / "train.3mf").placed
    origin = placed[2].transform[3]
    for got, part in zip(placed, TRAIN, strict=True):
        place = got.transform[3] - origin
        assert complex(*place[:2]) == pytest.approx(part.motion.centre(0), abs=1e-9)
        assert place[2] == pytest.approx(part.body.z)
        assert complex(*got.transform[0, :2]) == pytest.approx(np.exp(1j * part.motion.turn(0)), abs=1e-9)
        assert np.linalg.det(got.transform[:3]) == pytest.approx(1)


def test_the_package_is_as_the_specification_wants_it(tmp_path):
    write_machine_threemf(tmp_path / "train.3mf", TRAIN, "a <train>")
    with zipfile.ZipFile(tmp_path / "train.3mf") as package:
        assert package.namelist() == ["[Content_Types].xml", "_rels/.rels", MODEL]
        assert package.testzip() is None
        relations = minidom.parseString(package.read("_rels/.rels"))
    (relation,) = relations.getElementsByTagName("Relationship")
    assert relation.getAttribute("Target") == f"/{MODEL}"
    model = minidom.parseString(text(tmp_path / "train.3mf")).documentElement
    assert model.getAttribute("unit") == "millimeter"
    objects = model.getElementsByTagName("object")
    assert [o.getAttribute("id") for o in objects] == ["1", "2", "3"]
    assert [o.getAttribute("name") for o in objects] == ["wheel", "pin & co", "a <train>"]
    assert [c.getAttribute("objectid") for c in objects[2].getElementsByTagName("component")] == ["1", "1", "2"]
    (item,) = model.getElementsByTagName("item")
    assert item.getAttribute("objectid") == "3"
    names = [m.getAttribute("name") for m in model.getElementsByTagName("metadata")]
    assert names == ["Title", "Application"]


def test_equal_parts_give_equal_files(tmp_path):
    for name in ("a", "b"):
        write_part_threemf(tmp_path / name, *ROD)
    assert (tmp_path / "a").read_bytes() == (tmp_path / "b").read_bytes()


def lone_edge(model):
    return model.replace(re.search(r"<triangle [^>]*/>", model)[0], "", 1)


def flipped(model):
    return re.sub(r'v1="(\d+)" v2="(\d+)"', r'v1="\2" v2="\1"', model, count=1)


def inside_out(model):
    return re.sub(r'v1="(\d+)" v2="(\d+)"', r'v1="\2" v2="\1"', model)


def thicker(model):
    return model.replace('z="8.0000000"', 'z="8.1000000"')


def doubled_point(model):
    vertex = re.search(r"<vertex [^>]*/>", model)[0]
    return model.replace("</vertices>", f"{vertex}</vertices>")


def moved(model):
    return re.sub(r'transform="(.*) 0"', r'transform="\1 0.5"', model)


SPOILT = {
    lone_edge: "watertight",
    flipped: "watertight",
    inside_out: "may differ by",
    thicker: "may differ by",
    doubled_point: "written twice",
    moved: "from its place",
    lambda m: m.replace("millimeter", "inch"): "in unit inch",
    lambda m: m.replace('id="1"', 'id="0"'): "object id 0",
    lambda m: m.replace('id="1"', 'id="2147483648"'): "out of range",
    lambda m: m.replace('id="1"', 'id="one"'): "does not read back",
    lambda m: m.replace('objectid="1"', 'objectid="7"'): "object 7 is referred to",
    lambda m: re.sub("<item [^>]*>", "", m): "nothing is placed",
    lambda m: re.sub("(<item [^>]*>)", r"\1\1", m): "2 placed parts",
    lambda m: m.replace('name="rod"', 'name="bar"'): "written were",
    lambda m: re.sub(r'v1="\d+"', 'v1="99999"', m, count=1): "on these points",
    lambda m: re.sub(r'v1="\d+"', 'v1="x"', m, count=1): "does not read back",
    lambda m: re.sub(r'transform="\S+ ', 'transform="', m): "does not read back",
    lambda m: m.replace("core/2015/02", "core/1999/01"): "not a core model",
    lambda m: m[:-20]: "no whole 3MF file",
}


@pytest.mark.parametrize(("spoil", "words"), SPOILT.items(), ids=SPOILT.values())
def test_a_spoilt_model_never_appears(tmp_path, monkeypatch, spoil, words):
    target = tmp_path / "rod.3mf"
    write_part_threemf(target, *ROD)
    before, good = target.read_bytes(), text(target)
    assert spoil(good) != good
    monkeypatch.setattr("gearsolid.output.threemf._model", lambda *_: spoil(good))
    with pytest.raises(ExportError, match=words):
        write_part_threemf(target, *ROD)
    assert target.read_bytes() == before
    assert [p.name for p in tmp_path.iterdir()] == ["rod.3mf"]


@pytest.mark.parametrize(
    ("entry", "old", "new", "words"),
    [
        ("[Content_Types].xml", b"ms-package.3dmanufacturing", b"other", "content types"),
        ("_rels/.rels", b"2013/01/3dmodel", b"2013/01/thumbnail", "0 models to start with"),
        ("_rels/.rels", b'Target="/3D', b'Target="/2D', "no whole 3MF file"),
        ("_rels/.rels", b"</Relationships>", b"", "no whole 3MF file"),
    ],
    ids=["type", "start", "target", "broken"],
)
def test_a_spoilt_package_is_refused(tmp_path, entry, old, new, words):
    write_part_threemf(tmp_path / "good.3mf", *ROD)
    with zipfile.ZipFile(tmp_path / "good.3mf") as good, zipfile.ZipFile(tmp_path / "bad.3mf", "w") as bad:
        for name in good.namelist():
            content = good.read(name)
            assert name != entry or old in content
            bad.writestr(name, content.replace(old, new) if name == entry else content)
    with pytest.raises(ExportError, match=words):
        read_threemf(tmp_path / "bad.3mf")


@pytest.mark.parametrize("share", [0.3, 0.95])
def test_a_cut_off_file_is_refused(tmp_path, share):
    write_part_threemf(tmp_path / "rod.3mf", *ROD)
    content = (tmp_path / "rod.3mf").read_bytes()
    (tmp_path / "rod.3mf").write_bytes(content[: int(share * len(content))])
    with pytest.raises(ExportError, match="no whole 3MF file"):
        read_threemf(tmp_path / "rod.3mf")


def test_two_parts_of_one_name_are_refused(tmp_path):
    other = Part("wheel", Body(disc(2), 3), Motion(), (0, 1, 0))
    with pytest.raises(DesignError, match="called wheel"):
        write_machine_threemf(tmp_path / "two.3mf", (*TRAIN, other), "two")


def test_a_tolerance_of_nothing_is_refused(tmp_path):
    with pytest.raises(DesignError, match="tolerance is 0 mm"):
        write_part_threemf(tmp_path / "rod.3mf", *ROD, 0)
