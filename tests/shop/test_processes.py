import csv
import tomllib
from dataclasses import fields
from importlib.resources import files
from typing import get_args

import pytest
from hypothesis import given
from hypothesis import strategies as st

from gearsolid.errors import DesignError
from gearsolid.shop.processes import NUMBERS, Process, ProcessName, process, process_names

ROWS = list(csv.DictReader(files("gearsolid.shop").joinpath("data/processes.csv").open(encoding="ascii")))


@pytest.mark.parametrize("row", ROWS, ids=lambda r: r["process"])
def test_a_process_has_the_numbers_of_its_row_and_says_where_they_come_from(row):
    found = process(row["process"])
    for field in fields(Process):
        if field.name != "name":
            cell = row.get(f"{field.name}_mm", row.get(field.name))
            assert getattr(found, field.name) == float(cell), field.name
    assert row["origin"].startswith("common practice")


@pytest.mark.parametrize(
    ("name", "drawn", "growth"), [("FDM", 8.7, 0.2), ("SLA", 8.35, 0.05), ("wire EDM", 8.02, 0), ("moulding", 8.15, 0)]
)
def test_a_hole_for_a_moving_pin_is_drawn_larger_by_clearance_and_growth(name, drawn, growth):
    """By hand from the rows: pin + moving clearance + middle of the growth."""
    assert process(name).hole_for(8, "moving") == pytest.approx(drawn)
    assert process(name).hole_growth == pytest.approx(growth)


def test_clearances_grow_from_press_to_moving():
    for name in process_names():
        made = process(name)
        assert made.hole_for(5, "press") <= made.hole_for(5, "slide") <= made.hole_for(5, "moving")
        assert made.pin_for(5, "press") >= made.pin_for(5, "slide") >= made.pin_for(5, "moving")


@pytest.mark.parametrize(("name", "module", "play"), [("FDM", 2, 0.15), ("hobbing", 2, 0.08), ("hobbing", 5, 0.2)])
def test_play_is_the_middle_of_the_range_and_each_mate_takes_half(name, module, play):
    assert process(name).play(module) == pytest.approx(play)
    assert process(name).tooth_thinning(module) == pytest.approx(play / 2)


@given(name=st.sampled_from(process_names()), key=st.sampled_from(NUMBERS), value=st.floats(0, 100))
def test_any_number_can_be_ones_own(name, key, value):
    low, high = key.replace("most", "least"), key.replace("least", "most")
    low, high = low.replace("comfortable", "smallest"), high.replace("smallest", "comfortable")
    changed = process(name, {low: value, high: value})
    for other in NUMBERS:
        assert getattr(changed, other) == (value if other in (low, high) else getattr(process(name), other))


def test_numbers_of_ones_own_from_a_table_in_toml():
    changes = tomllib.loads("hole_growth_least = 0.05\nhole_growth_most = 0.07\nmin_wall = 2")
    made = process("FDM", changes)
    assert (made.hole_growth, made.min_wall, made.min_hole) == (pytest.approx(0.06), 2, 2.0)


@pytest.mark.parametrize(
    ("name", "changes", "message"),
    [
        ("casting", {}, '"casting"; known: FDM, SLA'),
        ("FDM", {"min_wal": 1}, 'did you mean "min_wall"'),
        ("FDM", {"colour": 1}, "known: clearance_press"),
        ("FDM", {"min_wall": -1}, "min_wall is -1; it must be 0 or more"),
        ("FDM", {"min_wall": float("nan")}, "min_wall is nan"),
        ("FDM", {"min_wall": "thin"}, "'thin'; it must be a number"),
        ("FDM", {"min_wall": True}, "True; it must be a number"),
        ("FDM", {"play_most": 0.05}, "play_least is 0.1 and play_most is 0.05"),
    ],
)
def test_what_a_process_cannot_be_is_refused(name, changes, message):
    with pytest.raises(DesignError, match=message):
        process(name, changes)


@pytest.mark.parametrize(
    ("name", "module", "code"),
    [
        ("FDM", 0.99, "module-too-small"),
        ("FDM", 1.0, "module-small"),
        ("FDM", 1.49, "module-small"),
        ("FDM", 1.5, None),
        ("wire EDM", 0.2, None),
    ],
)
def test_small_modules_are_found(name, module, code):
    found = process(name).module_notices(module)
    assert [f.code for f in found] == ([code] if code else [])
    for f in found:
        assert f.number == module < f.limit
        assert f"{module:g} mm" in f.sentence
        assert f"{f.limit:g} mm" in f.sentence


@pytest.mark.parametrize(
    ("found", "code", "number", "limit"),
    [
        (process("FDM").wall_notices(0.9, "the wall"), "thin-wall", 0.9, 1.0),
        (process("laser cutting").hole_notices(2.9, 3.0, "the hole"), "small-hole", 2.9, 3.0),
        (process("waterjet cutting").hole_notices(1.5, 3.0, "the hole"), "small-hole", 1.5, 2.0),
        (process("laser cutting").tooth_notices(1.4, 3.0, "the tooth"), "thin-tooth", 1.4, 1.5),
    ],
    ids=["wall", "hole by thickness", "hole", "tooth by thickness"],
)
def test_what_is_too_thin_is_found_with_number_and_limit(found, code, number, limit):
    (one,) = found
    assert (one.code, one.number, one.limit) == (code, number, limit)
    assert f"is {number:g} mm" in one.sentence
    assert f"at least {limit:g} mm" in one.sentence


def test_what_is_thick_enough_is_not_found():
    assert process("FDM").wall_notices(1.0, "the wall") == ()
    assert process("laser cutting").hole_notices(3.0, 3.0, "the hole") == ()
    assert process("laser cutting").tooth_notices(1.5, 3.0, "the tooth") == ()


def test_the_names_that_recipes_may_use_are_those_of_the_table():
    assert get_args(ProcessName) == process_names()
