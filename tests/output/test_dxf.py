"""DXF drawings: read by a second reader, and refused when anything in them is spoilt."""

from dataclasses import replace

import ezdxf
import ezdxf.math
import numpy as np
import pytest
import shapely
from shapely.ops import polygonize
from shipped import PARTS

from gearsolid.curves.loops import disc, holes, pins
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Segment
from gearsolid.errors import DesignError, ExportError
from gearsolid.output.dxf import AREA_TOL, read_dxf, write_arc_dxf, write_dxf
from gearsolid.output.flat import FINISHED, INSIDE, NOTE, OUTSIDE, SHOWN, cutter_path, flat
from gearsolid.pairs.part import Body, Boss
from gearsolid.shop.bore import Bore
from gearsolid.teeth.involute import InvoluteGear

CURVES = {"LINE", "ARC", "CIRCLE", "SPLINE"}
WHEEL_BODY = Body(InvoluteGear(20, 2).outline, 10, bore=Bore.keyed(14, 0.5))
WHEEL = flat(WHEEL_BODY, "wheel", (20.0,))
PLATE = flat(Body(disc(30), 4, holes=(holes(5, 18, 4, 0.3),), bore=Bore(10)), "plate")


def followed(entity, step):
    """Chords along an entity, all within `step` mm of it, by the other library: one list a simple curve."""
    match entity.dxftype():
        case "LINE":
            return [[entity.dxf.start, entity.dxf.end]]
        case "LWPOLYLINE":
            return [chords for part in entity.virtual_entities() for chords in followed(part, step)]
    return [list(entity.flattening(step))]


def judged(path, step):
    """Area of the section, its number of boundaries and their length, by other libraries."""
    area = loops = length = 0
    for layer, sign in ((OUTSIDE, 1), (INSIDE, -1)):
        entities = ezdxf.readfile(path).modelspace().query(f'*[layer=="{layer}"]')
        chords = [[(p.x, p.y) for p in c] for e in entities for c in followed(e, step)]
        lines = [shapely.set_precision(shapely.LineString(c), 1e-8) for c in chords]
        faces = list(polygonize(lines))
        area += sign * sum(f.area for f in faces)
        loops += len(faces)
        length += sum(f.length for f in faces)
    return area, loops, length


@pytest.mark.parametrize("name", PARTS)
def test_every_shipped_part_is_drawn_true(tmp_path, name):
    section = flat(PARTS[name].body, PARTS[name].name)
    done = write_dxf(tmp_path / "part.dxf", section)
    assert done.area == pytest.approx(section.area, rel=AREA_TOL)
    assert done.deviation <= 1e-4
    area, loops, length = judged(tmp_path / "part.dxf", 1e-5)
    assert loops == done.loops == sum(1 if o.is_chain else o.order for o in (section.outside, *section.inside))
    assert area == pytest.approx(section.area, abs=1e-5 * length)


@pytest.mark.parametrize("name", PARTS)
def test_every_shipped_part_is_drawn_in_arcs(tmp_path, name):
    section = flat(PARTS[name].body, PARTS[name].name)
    done = write_arc_dxf(tmp_path / "part.dxf", section, 0.005)
    assert done.deviation <= 0.005
    kinds = {e.dxftype() for e in ezdxf.readfile(tmp_path / "part.dxf").modelspace() if e.dxf.layer != NOTE}
    assert kinds <= {"LWPOLYLINE", "CIRCLE"}
    area, loops, length = judged(tmp_path / "part.dxf", 1e-4)
    assert loops == done.loops
    assert area == pytest.approx(done.area, abs=1e-4 * length)


def test_the_area_is_exact_to_a_second_reader(tmp_path):
    write_dxf(tmp_path / "wheel.dxf", WHEEL)
    area, _, _ = judged(tmp_path / "wheel.dxf", 1e-6)
    assert area == pytest.approx(WHEEL.area, rel=AREA_TOL)


@pytest.mark.parametrize("tol", [0.1, 0.01, 0.001, 0.0001])
def test_arcs_stay_within_the_tolerance_and_use_it(tmp_path, tol):
    done = write_arc_dxf(tmp_path / "wheel.dxf", WHEEL, tol)
    assert tol / 100 < done.deviation <= tol


def test_a_drawing_says_its_unit_and_holds_a_line_to_measure(tmp_path):
    write_dxf(tmp_path / "wheel.dxf", WHEEL)
    document = ezdxf.readfile(tmp_path / "wheel.dxf")
    assert document.header["$INSUNITS"] == 4
    assert document.header["$MEASUREMENT"] == 1
    assert not document.audit().has_issues
    space = document.modelspace()
    assert {e.dxf.layer for e in space} == {OUTSIDE, INSIDE, SHOWN, NOTE}
    assert {e.dxftype() for e in space if e.dxf.layer in (OUTSIDE, INSIDE)} <= CURVES
    (circle,) = space.query(f'*[layer=="{SHOWN}"]')
    assert circle.dxf.radius == 20
    (line,) = space.query(f'LINE[layer=="{NOTE}"]')
    assert line.dxf.start.distance(line.dxf.end) == pytest.approx(44)
    words = [t.dxf.text for t in space.query("TEXT")]
    assert "The line above is 44.0000 mm long, the largest diameter about the axis" in words
    assert {"wheel, 10 mm thick", "Unit millimetre, scale 1 to 1", FINISHED} <= set(words)
    assert "Bore chamfer 0.5 mm at 45 degrees, both ends, not drawn" in words
    assert "Splines within 0.0001 mm of the exact curves" in words
    assert max(t.dxf.insert.y for t in space.query("TEXT")) < -22, "words stand below the part"


def test_what_is_raised_is_shown_and_not_cut(tmp_path):
    section = flat(Body(disc(30), 4, bore=Bore(12), bosses=(Boss(pins(3, 20, 4), 9),)), "carrier")
    assert write_dxf(tmp_path / "carrier.dxf", section).loops == 2
    space = ezdxf.readfile(tmp_path / "carrier.dxf").modelspace()
    assert len(space.query(f'CIRCLE[layer=="{SHOWN}"]')) == 3
    assert any("Raised on one face by 9 mm" in t.dxf.text for t in space.query("TEXT"))


def test_helical_teeth_are_said():
    assert any("helical" in note for note in flat(replace(WHEEL_BODY, twists=(0.2,)), "wheel").notes)
    assert not any("helical" in note for note in WHEEL.notes)


def test_no_line_is_drawn_twice_or_without_length(tmp_path):
    write_dxf(tmp_path / "wheel.dxf", WHEEL)
    space = ezdxf.readfile(tmp_path / "wheel.dxf").modelspace()
    middles = []
    for entity in space:
        if entity.dxf.layer in (OUTSIDE, INSIDE):
            (chords,) = followed(entity, 0.001)
            points = np.array([(p.x, p.y) for p in chords])
            assert np.sum(np.hypot(*np.diff(points, axis=0).T)) > 0.01
            middles.append(tuple(np.round(points.mean(axis=0), 6)))
    assert len(middles) == len(set(middles))


def first(space, kind, layer=OUTSIDE):
    return space.query(f'{kind}[layer=="{layer}"]').first


def delete(space):
    space.delete_entity(first(space, "SPLINE"))


def double(space):
    space.add_entity(first(space, "SPLINE").copy())


def speck(space):
    place = first(space, "ARC").start_point
    space.add_line(place, place, dxfattribs={"layer": OUTSIDE})


def lone_speck(space):
    space.add_line((1, 1), (1, 1), dxfattribs={"layer": INSIDE})


def gap(space):
    line = first(space, "LINE", INSIDE)
    line.dxf.end += ezdxf.math.Vec3(0.001, 0)


def word(space):
    space.add_text("cut here", dxfattribs={"layer": OUTSIDE})


def open_polyline(space):
    space.add_lwpolyline([(0, 0), (1, 0), (1, 1)], dxfattribs={"layer": INSIDE})


def extra_hole(space):
    space.add_circle((15, 0), 0.1, dxfattribs={"layer": INSIDE})


def other_layer(space):
    for entity in space.query(f'*[layer=="{INSIDE}"]'):
        entity.dxf.layer = NOTE


def dent(space):
    # Two poles moved opposite ways leave the area nearly as it was.
    spline = first(space, "SPLINE")
    points = np.array(spline.control_points)
    points[1] += (0.01, 0, 0)
    points[2] -= (0.01, 0, 0)
    spline.control_points = points


def bulge(space):
    spline = first(space, "SPLINE")
    spline.control_points = np.array(spline.control_points) + np.outer(
        np.sin(np.linspace(0, np.pi, len(spline.control_points))), (0.05, 0.05, 0)
    )


@pytest.mark.parametrize(
    ("spoil", "words"),
    [
        (delete, "do not meet exactly one other end"),
        (double, "do not meet exactly one other end"),
        (speck, "do not meet exactly one other end"),
        (lone_speck, "inside boundaries; the design has"),
        (gap, "do not meet exactly one other end"),
        (word, "holds TEXT"),
        (open_polyline, "holds LWPOLYLINE"),
        (extra_hole, "1 outside and 2 inside|1 closed outside and 2 inside"),
        (other_layer, "and 0 inside"),
        (dent, "mm off the design"),
        (bulge, "they may differ by"),
    ],
    ids=lambda p: getattr(p, "__name__", None),
)
def test_a_spoilt_drawing_never_appears(tmp_path, monkeypatch, spoil, words):
    target = tmp_path / "wheel.dxf"
    write_dxf(target, WHEEL)
    before = target.read_bytes()
    save = ezdxf.document.Drawing.saveas

    def spoilt(document, path):
        spoil(document.modelspace())
        save(document, path)

    monkeypatch.setattr(ezdxf.document.Drawing, "saveas", spoilt)
    with pytest.raises(ExportError, match=words):
        write_dxf(target, WHEEL)
    assert target.read_bytes() == before
    assert [p.name for p in tmp_path.iterdir()] == ["wheel.dxf"]


def test_a_spoilt_chain_of_arcs_never_appears(tmp_path, monkeypatch):
    save = ezdxf.document.Drawing.saveas

    def spoilt(document, path):
        line = first(document.modelspace(), "LWPOLYLINE")
        points = line.get_points()
        line.set_points([*points[:3], (*points[3][:4], points[3][4] + 0.02), *points[4:]])
        save(document, path)

    monkeypatch.setattr(ezdxf.document.Drawing, "saveas", spoilt)
    with pytest.raises(ExportError, match="mm off the design"):
        write_arc_dxf(tmp_path / "wheel.dxf", WHEEL, 0.001)
    assert not list(tmp_path.iterdir())


@pytest.mark.parametrize(("key", "value"), [("$INSUNITS", 1), ("$INSUNITS", 6), ("$MEASUREMENT", 0)])
def test_another_unit_is_refused(tmp_path, key, value):
    write_dxf(tmp_path / "plate.dxf", PLATE)
    document = ezdxf.readfile(tmp_path / "plate.dxf")
    document.header[key] = value
    document.saveas(tmp_path / "plate.dxf")
    with pytest.raises(ExportError, match="millimetres are 4, 1"):
        read_dxf(tmp_path / "plate.dxf")


@pytest.mark.parametrize("content", [b"", b"no drawing", b"\x00\xff" * 40], ids=["empty", "words", "bytes"])
def test_what_is_no_drawing_is_refused(tmp_path, content):
    (tmp_path / "part.dxf").write_bytes(content)
    with pytest.raises(ExportError, match=r"part.dxf"):
        read_dxf(tmp_path / "part.dxf")


def test_a_missing_drawing_is_refused(tmp_path):
    with pytest.raises(ExportError, match="no DXF drawing"):
        read_dxf(tmp_path / "none.dxf")


@pytest.mark.parametrize("write", [write_dxf, write_arc_dxf])
def test_a_tolerance_of_nothing_is_refused(tmp_path, write):
    with pytest.raises(DesignError, match="tolerance is 0 mm"):
        write(tmp_path / "wheel.dxf", WHEEL, 0)
    assert not list(tmp_path.iterdir())


def test_a_corner_far_from_the_axis_keeps_its_place(tmp_path):
    square = Outline((Piece(Segment(1000 - 1000j, 1000 + 1000j), "tip"),), 4)
    section = replace(PLATE, outside=square)
    done = write_dxf(tmp_path / "square.dxf", section)
    assert done.area == pytest.approx(4e6 - 5 * np.pi * 16 - np.pi * 25, rel=1e-12)


def test_the_path_of_the_cutter_is_drawn_when_asked_for(tmp_path):
    path = cutter_path(PLATE, 0.2)
    done = write_dxf(tmp_path / "plate.dxf", path)
    assert done.area == pytest.approx(np.pi * (30.1**2 - 5 * 3.9**2 - 4.9**2), rel=1e-9)
    words = [t.dxf.text for t in ezdxf.readfile(tmp_path / "plate.dxf").modelspace().query("TEXT")]
    assert FINISHED not in words
    assert "Path of the cutter's centre for a kerf of 0.2 mm: no further offset" in words
    toothed = cutter_path(WHEEL, 0.2)
    assert write_dxf(tmp_path / "wheel.dxf", toothed).area > WHEEL.area
    assert write_arc_dxf(tmp_path / "arcs.dxf", toothed).deviation <= 0.002
