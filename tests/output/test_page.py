"""The pieces of the report page, on designs small enough to see through."""

import re
from dataclasses import replace

import numpy as np
import pytest

from gearsolid.contact.causes import causes
from gearsolid.contact.result import RollResult, Verdict
from gearsolid.contact.roll import roll_test
from gearsolid.output.made import distinct
from gearsolid.output.page import page
from gearsolid.output.plot import line_plot
from gearsolid.output.report import PartRecord, make_report
from gearsolid.output.text import roll_text
from gearsolid.output.views import part_view
from gearsolid.output.wording import angle_text, finding, number, ratio_text
from gearsolid.pairs.blank import Blank
from gearsolid.pairs.spur_pair import SpurPair
from gearsolid.shop.bore import Bore
from gearsolid.teeth.involute import InvoluteGear


@pytest.fixture(scope="module")
def pair():
    gear = InvoluteGear(12, 2.0, profile_shift=0.3, tooth_thinning=0.1)
    return SpurPair(gear, gear, 25.3, Blank(6.0, Bore.keyed(6.0, 0.2)), Blank(5.0), "left", "right")


@pytest.fixture(scope="module")
def rolled(pair):
    return roll_test(pair)


def html(pair, rolled, name="Two wheels", found=()):
    made = distinct(pair.parts)
    parts = [
        PartRecord(
            name=m.name,
            placed_as=tuple(p.name for p in m.parts),
            width=m.body.width,
            diameter=2 * m.body.outer.r_max,
            bore=m.body.bore.callout if m.body.bore else None,
            volume=m.body.volume,
            exact_volume=m.body.volume,
            valid=True,
            flank_deviation=0.0,
            triangles=12,
            facet_volume=m.body.volume,
            curve_deviation=0.0,
            arc_deviation=0.0,
            files=("a.step", "a.stl"),
        )
        for m in made
    ]
    recipe = {"machine": {"name": name}}
    report = make_report(
        version="0", name=name, machine=pair, result=rolled, found=found, parts=parts, recipe=recipe, files=()
    )
    return page(report, pair, rolled, made)


def binding(result):
    curve = result.worst.clearances
    worst = replace(result.worst, verdict=Verdict.BINDS, clearance=-0.0123, clearances=curve - curve.min() - 0.0123)
    return RollResult((worst,), result.tolerance)


def test_names_cannot_break_the_page(pair, rolled):
    text = html(pair, rolled, '<script>alert("x")</script> & $ratio')
    assert "<script>alert" not in text
    assert "&lt;script&gt;alert(&quot;x&quot;)&lt;/script&gt; &amp; $ratio" in text


@pytest.mark.parametrize(("spoil", "css", "words"), [(False, "rolls", "It rolls"), (True, "binds", "It binds")])
def test_the_banner_follows_the_verdict(pair, rolled, spoil, css, words):
    text = html(pair, binding(rolled) if spoil else rolled)
    assert f'<section class="banner {css}"' in text
    assert f'<p class="word">{words}</p>' in text
    assert ("overlap by 0.0123 mm" in text) == spoil
    assert ('class="overlap"' in text) == spoil


def test_parts_stand_where_the_tightest_place_is(pair, rolled):
    text = html(pair, rolled)
    psi = np.radians(rolled.worst.input_angle)
    x, y, turn = (
        float(v) for v in re.search(r'data-part="1".*?translate\((\S+) (\S+)\) rotate\((\S+)\)', text).groups()
    )
    assert complex(x, y) == pytest.approx(25.3, abs=1e-5)
    assert turn == pytest.approx(np.degrees(pair.parts[1].motion.turn(psi)), abs=1e-4)


def test_a_part_sheet_carries_its_dimensions(pair):
    sheet = part_view(distinct(pair.parts)[0], 0)
    diameter = 2 * pair.driver.tip_radius
    for text in ("⌀ 6<", ">6<", f"⌀ {round(diameter, 3):g}<"):
        assert text in sheet
    assert sheet.count('class="cut"') == 2, "above and below the bore"


def test_equal_bodies_are_one_piece_of_work(pair):
    (left, right) = distinct(pair.parts)
    assert (left.name, right.name) == ("left", "right"), "other widths, other pieces"
    same = replace(pair, driven_blank=pair.driver_blank)
    (both,) = distinct(same.parts)
    assert [p.name for p in both.parts] == ["left", "right"]


@pytest.mark.parametrize(
    ("low", "high", "ticks"),
    [
        (0.02, 0.09, ["0.00", "0.05", "0.10"]),
        (-0.3, 0.5, ["-0.4", "-0.2", "0.0", "0.2", "0.4", "0.6"]),
        (9.0, 10.0, ["0", "5", "10"]),
    ],
)
def test_plots_count_in_round_numbers_from_zero(low, high, ticks):
    svg = line_plot(np.array([0.0, 5.0, 10.0]), np.array([high, low, high]), "Clearance", "mm", kind="clearance")
    assert re.findall(r'text-anchor="end">([-0-9.]+)</text>', svg) == ticks
    assert ('class="overlap"' in svg) == (low < 0)


def test_a_plot_marks_its_least_value():
    y = np.array([3.0, 1.0, 2.0])
    svg = line_plot(np.array([0.0, 1.0, 2.0]), y, "Play", "degrees", kind="play")
    points = re.search(r'points="([^"]+)"', svg)[1].split()
    marked = re.search(r'cx="([\d.]+)" cy="([\d.]+)"', svg).groups()
    assert points[1] == ",".join(marked)


@pytest.mark.parametrize(
    ("ratio", "text"), [(5.0, "5 : 1"), (-29.0, "-29 : 1"), (-8 / 60, "-1 : 7.5"), (0.25, "1 : 4"), (1.0, "1 : 1")]
)
def test_ratios_in_words(ratio, text):
    assert ratio_text(ratio) == text


def test_figures_in_words():
    assert number(None, 3) == ""
    assert number(-1e-9, 3) == "0.000"
    assert angle_text(359.9999) == "0.000°"


def test_the_finding_names_depth_angle_and_place(rolled):
    worst = binding(rolled).worst
    said = finding(replace(worst, input_angle=12.5, place=3 - 4j, roles=("tip", "fillet")))
    assert (
        said == "left and right overlap by 0.0123 mm at input angle 12.500°, at x 3.000, y -4.000 mm (tip on fillet)."
    )


def test_the_text_lists_the_tightest_first(pair, rolled):
    nothing = dict.fromkeys(("play", "play_angle", "contact_ratio", "transmission_error"))
    loose = replace(rolled.worst, name_b="far", clearance=2.0, **nothing)
    text = roll_text("Two wheels", pair, RollResult((loose, rolled.worst), 1e-5), ())
    assert text.index("left with right") < text.index("left with far")
    assert text.endswith("2.0000"), "figures without a meaning are left out"


def too_near(pair):
    machine = replace(pair, centre_distance=24.7, driver_name="<left>")
    return machine, roll_test(machine)


def test_findings_are_listed_with_their_remedy_and_cannot_break_the_page(pair, rolled):
    (found,) = causes(*too_near(pair))
    text = html(pair, rolled, found=(found,))
    assert '<li class="binds"><b>negative play</b>, &lt;left&gt; with right: ' in text
    assert f"To do: {found.remedy}." in text
    assert "Findings" not in html(pair, rolled)


def test_findings_stand_below_the_table_of_a_terminal(pair):
    machine, result = too_near(pair)
    text = roll_text("Two wheels", machine, result, causes(machine, result))
    assert "negative play: the teeth are too thick" in text
    assert all(len(line) <= 100 for line in text.splitlines())
