"""SVG outlines at true size: read by a second reader, and refused when spoilt."""

import re
from xml.dom import minidom

import pytest
from evaluate import area, loops
from shipped import PARTS

from gearsolid.curves.loops import disc, holes
from gearsolid.errors import DesignError, ExportError
from gearsolid.output.flat import INSIDE, OUTSIDE, flat
from gearsolid.output.svg import read_svg, write_svg
from gearsolid.pairs.part import Body
from gearsolid.shop.bore import Bore

PLATE = flat(Body(disc(30), 4, holes=(holes(5, 18, 4, 0.3),), bore=Bore.keyed(10)), "plate <1>")


@pytest.mark.parametrize("name", PARTS)
def test_every_shipped_part_is_drawn_true(tmp_path, name):
    section = flat(PARTS[name].body, PARTS[name].name)
    done = write_svg(tmp_path / "part.svg", section)
    assert done.deviation <= 1e-3
    drawing = minidom.parse(str(tmp_path / "part.svg")).documentElement
    width, height = (drawing.getAttribute(k) for k in ("width", "height"))
    box = [float(v) for v in drawing.getAttribute("viewBox").split()]
    assert (f"{box[2]:g}mm", f"{box[3]:g}mm") == (width, height)
    paths = {p.getAttribute("id"): p.getAttribute("d") for p in drawing.getElementsByTagName("path")}
    found = {layer: [area(z) for z in loops(d)] for layer, d in paths.items()}
    assert sum(len(a) for a in found.values()) == done.loops
    total = sum(map(abs, found[OUTSIDE])) - sum(map(abs, found.get(INSIDE, [])))
    assert total == pytest.approx(section.area, rel=5e-3)
    assert done.area == pytest.approx(section.area, rel=5e-4)
    for z in loops(paths[OUTSIDE]):
        assert abs(z).max() == pytest.approx(section.diameter / 2, abs=1e-3)
        assert abs(z).max() < box[2] / 2


def test_nothing_but_cut_lines_is_drawn(tmp_path):
    write_svg(tmp_path / "plate.svg", PLATE)
    drawing = minidom.parse(str(tmp_path / "plate.svg"))
    tags = {n.tagName for n in drawing.getElementsByTagName("*")}
    assert tags == {"svg", "title", "desc", "g", "path"}
    assert drawing.getElementsByTagName("title")[0].firstChild.data == "plate <1>"
    assert "whoever cuts it offsets for the kerf" in drawing.getElementsByTagName("desc")[0].firstChild.data


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        ('width="64mm"', 'width="64px"', "true size"),
        ('width="64mm"', 'width="31mm"', "true size"),
        ("</svg>", "", "no SVG drawing"),
        (r"M30 0A", "M30.1 0A", "may differ by|off the design"),
        (r'id="CUT_INSIDE"', 'id="else"', "and 0 inside"),
        (r"A30 ", "A29 ", "may differ by|off the design"),
        (r'd="M[^M]*Z', 'd="', "0 closed outside"),
    ],
    ids=["unit", "scale", "cut off", "moved", "renamed", "radius", "dropped"],
)
def test_a_spoilt_drawing_never_appears(tmp_path, monkeypatch, old, new, words):
    target = tmp_path / "plate.svg"
    write_svg(target, PLATE)
    good = target.read_text(encoding="utf-8")
    spoilt = re.sub(old, new, good, count=1)
    assert spoilt != good
    monkeypatch.setattr("gearsolid.output.svg._text", lambda *_: spoilt)
    with pytest.raises(ExportError, match=words):
        write_svg(target, PLATE)
    assert target.read_text(encoding="utf-8") == good
    assert [p.name for p in tmp_path.iterdir()] == ["plate.svg"]


def test_what_is_no_drawing_is_refused(tmp_path):
    with pytest.raises(ExportError, match="no SVG drawing"):
        read_svg(tmp_path / "none.svg")
    (tmp_path / "page.svg").write_text("<html/>")
    with pytest.raises(ExportError, match="true size"):
        read_svg(tmp_path / "page.svg")


def test_a_tolerance_of_nothing_is_refused(tmp_path):
    with pytest.raises(DesignError, match="tolerance is 0 mm"):
        write_svg(tmp_path / "plate.svg", PLATE, 0)
