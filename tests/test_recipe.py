"""Recipes: what is read, and how every mistake is named."""

import re
from pathlib import Path

import pytest

from gearsolid.errors import DesignError, RecipeError
from gearsolid.pairs.planetary import PlanetaryStage
from gearsolid.pairs.reducer import PinWheelReducer
from gearsolid.pairs.spur_pair import SpurPair
from gearsolid.recipe.allowed import sub_table
from gearsolid.recipe.keys import key_rows, keys_text, page
from gearsolid.recipe.machines import MACHINES
from gearsolid.recipe.read import read_recipe
from gearsolid.recipe.table import unit

RECIPES = Path(__file__).parents[1] / "recipes"
STAGE = (RECIPES / "planetary-stage.toml").read_text(encoding="utf-8")
RING_PAIR = """
name = "Ring pair"
machine = "ring-pair"
module = 1.5
[pinion]
teeth = 20
face_width = 8
[ring]
teeth = 60
face_width = 8
tip_shortening = 0.3
"""
INVOLUTE_PAIR = """
name = "Shifted pair"
machine = "involute-pair"
module = 2.0
[driver]
teeth = 12
face_width = 20
profile_shift = 0.4
[driven]
teeth = 25
face_width = 18
profile_shift = 0.1
"""


def read(tmp_path, text):
    file = tmp_path / "recipe.toml"
    file.write_text(text, encoding="utf-8")
    return read_recipe(file)


def refused(tmp_path, text, error=RecipeError):
    with pytest.raises(error) as caught:
        read(tmp_path, text)
    return str(caught.value)


@pytest.mark.parametrize(
    ("file", "kind", "ratio"),
    [
        ("planetary-stage.toml", PlanetaryStage, 5),
        ("printed-reducer.toml", PinWheelReducer, -29),
        ("clock-pair.toml", SpurPair, -8 / 60),
    ],
)
def test_a_shipped_recipe_gives_its_machine(file, kind, ratio):
    recipe = read_recipe(RECIPES / file)
    assert isinstance(recipe.machine, kind)
    assert recipe.machine.ratio == pytest.approx(ratio, rel=1e-12)


def test_a_pinion_drives_a_ring(tmp_path):
    machine = read(tmp_path, RING_PAIR).machine
    assert machine.ratio == 3
    assert machine.centre_distance == pytest.approx(1.5 * (60 - 20) / 2)


def test_centre_distance_left_out_is_the_one_without_play(tmp_path):
    # Both flanks touch at that distance: a hair closer binds, a hair farther has play.
    from gearsolid.contact.roll import roll_test

    distance = read(tmp_path, INVOLUTE_PAIR).machine.centre_distance
    assert distance > 37.0, "positive shifts push the axes apart"
    found = [
        roll_test(
            read(tmp_path, INVOLUTE_PAIR.replace("module", f"centre_distance = {distance + d!r}\nmodule")).machine
        )
        for d in (-1e-3, 1e-3)
    ]
    assert found[0].worst.clearance == pytest.approx(-1e-3 * 0.35, rel=0.3)
    assert found[1].worst.clearance == pytest.approx(1e-3 * 0.35, rel=0.3)


def test_rows_show_defaults_and_units():
    rows = read_recipe(RECIPES / "planetary-stage.toml").rows
    assert rows["machine"]["pressure_angle"] == "20°", "a default"
    assert rows["sun"]["bore"] == "8 mm"
    assert rows["sun"]["key"] == "yes"
    assert rows["planet"]["key"] == "no"
    assert "bore" not in rows["ring"]


MISTAKES = {
    "out of range": ("teeth = 18", "teeth = 2", ["sun.teeth = 2: must be a whole number not below 3"]),
    "wrong type": ("teeth = 18", 'teeth = "many"', ['sun.teeth = "many": must be a whole number']),
    "half a tooth": ("teeth = 18", "teeth = 18.5", ["sun.teeth = 18.5: must be a whole number"]),
    "a truth as a number": ("module = 1.0", "module = true", ["module = true: must be a number above 0, in mm"]),
    "not a number": ("module = 1.0", "module = nan", ["module = NaN: must be a number above 0"]),
    "mistyped key": (
        "teeth = 18",
        "theeth = 18",
        ['theeth = 18: no such key; did you mean "teeth"?', "sun.teeth: missing"],
    ),
    "unlike any key": (
        "teeth = 18",
        "teeth = 18\nweight = 3",
        ["sun.weight = 3: no such key; known here: ", "face_width"],
    ),
    "mistyped word": ('fixed = "ring"', 'fixed = "rong"', ['"sun" or "ring" or "carrier"', 'did you mean "ring"?']),
    "mistyped table": ("[sun]", "[sum]", ['did you mean "sun"?', "sun: missing"]),
    "value for a table": ("[ring]", "ring = 3\n[other]", ["ring = 3: must be a table", "other"]),
    "key without bore": ("bore = 8.0", "", ["sun: a key, chamfer, fit or made_by is given without a bore"]),
    "empty name": ('name = "Pump drive stage"', 'name = ""', ['name = "": must be a text']),
    "two mistakes": (
        "teeth = 18\nface_width = 12.0",
        "teeth = 1\nface_width = -1",
        ["2 mistakes", "sun.teeth", "sun.face_width"],
    ),
    "other machine": ('machine = "planetary"', 'machine = "planetry"', ['did you mean "planetary"?', '"pin-wheel"']),
    "no machine": ('machine = "planetary"', "", ["machine: missing", '"involute-pair"']),
    "machine a number": ('machine = "planetary"', "machine = 3", ["machine = 3: must be"]),
    "not TOML": ("[sun]", "[sun", ["is not TOML", "line"]),
}


@pytest.mark.parametrize(("old", "new", "expected"), MISTAKES.values(), ids=MISTAKES.keys())
def test_a_mistake_is_named(tmp_path, old, new, expected):
    if old.startswith(("[ring]", "[sun]")) and "=" in new:
        text = new.split("\n")[0] + "\n" + STAGE.replace(old, new.split("\n")[1], 1)
    else:
        assert old in STAGE
        text = STAGE.replace(old, new, 1)
    message = refused(tmp_path, text)
    assert "recipe.toml" in message
    for part in expected:
        assert part in message


def test_names_of_a_pair_must_differ(tmp_path):
    text = INVOLUTE_PAIR.replace("[driver]", '[driver]\nname = "driven"')
    assert 'both called "driven"' in refused(tmp_path, text)


def test_a_name_must_suit_every_file(tmp_path):
    text = INVOLUTE_PAIR.replace("[driver]", '[driver]\nname = "Räd"')
    assert "letters, digits, spaces and hyphens" in refused(tmp_path, text)


@pytest.mark.parametrize(
    ("old", "new", "table", "words"),
    [
        (
            "bore = 8.0             # a 2 x 2 key, ISO/R 773\nkey = true",
            "bore = 5.0\nkey = true",
            "sun",
            "no standard key",
        ),
        ("rim_diameter = 86.0", "rim_diameter = 60.0", "ring", "rim"),
        ("planets = 3", "planets = 4", "", "4 equally spaced planets"),
        ("planets = 3", "planets = 5", "", "planets"),
    ],
    ids=["key", "rim", "assembly", "neighbours"],
)
def test_a_design_that_cannot_exist_names_its_table(tmp_path, old, new, table, words):
    assert old in STAGE
    message = refused(tmp_path, STAGE.replace(old, new), DesignError)
    assert words in message
    assert f"recipe.toml: {table}" in message


@pytest.mark.parametrize("kind", ["missing", "folder", "binary"])
def test_a_file_that_is_no_recipe(tmp_path, kind):
    place = tmp_path / "place"
    if kind == "folder":
        place.mkdir()
    if kind == "binary":
        place.write_bytes(b"\xff\xfe\x00\x01")
    with pytest.raises(RecipeError, match=re.escape(str(place))):
        read_recipe(place)


def tables(model):
    yield model
    for field in model.model_fields.values():
        if sub_table(field):
            yield from tables(sub_table(field))


@pytest.mark.parametrize("kind", MACHINES)
def test_every_key_is_documented(kind):
    assert MACHINES[kind].__doc__
    for table in tables(MACHINES[kind]):
        for key, field in table.model_fields.items():
            assert field.description, f"{table.__name__}.{key}"
            assert not field.description.endswith(".")
            assert unit(field) in {"", "mm", "deg"}


@pytest.mark.parametrize("kind", MACHINES)
def test_every_key_with_a_letter_lost_is_guessed(kind, tmp_path):
    for table in tables(MACHINES[kind]):
        known = list(table.model_fields)
        from gearsolid.recipe.mistakes import nearest

        for key in (k for k in known if len(k) > 3):
            assert f'"{key}"' in nearest(key[:2] + key[3:], known)


@pytest.mark.parametrize("kind", MACHINES)
def test_keys_lists_every_key(kind):
    text = keys_text(kind)
    assert all(row.path in text and row.meaning in text for row in key_rows(MACHINES[kind]))


def test_keys_of_an_unknown_machine():
    with pytest.raises(RecipeError, match='did you mean "planetary"'):
        keys_text("planetari")


def test_the_page_of_recipes_lists_the_keys_as_they_are():
    # To write it anew: Path("recipes/keys.md").write_text(gearsolid.recipe.keys.page())
    assert (RECIPES / "keys.md").read_text(encoding="utf-8") == page()


def test_a_fit_names_the_limits_and_the_size_drawn(tmp_path):
    path = tmp_path / "recipe.toml"
    path.write_text(STAGE.replace("bore = 12.0 ", 'fit = "H7"\ndrawn = "middle"\nbore = 12.0 '), encoding="utf-8")
    planet = next(p for p in read_recipe(path).machine.parts if p.name.startswith("planet"))
    assert planet.body.bore.callout == "⌀ 12 H7 (+0.018 / 0)"
    assert planet.body.bore.diameter == pytest.approx(12.009)


@pytest.mark.parametrize(
    ("added", "words"),
    [
        ('fit = "H7b"', ['planet: no limits are tabulated for a hole of class "H7b"', "known: "]),
        ('drawn = "middle"', ["planet: ", "add the key fit"]),
    ],
    ids=["unknown class", "middle of nothing"],
)
def test_a_fit_that_says_nothing_is_refused(tmp_path, added, words):
    message = refused(tmp_path, STAGE.replace("bore = 12.0 ", f"{added}\nbore = 12.0 "), (DesignError, RecipeError))
    assert all(w in message for w in words)


def test_keys_come_from_the_table_asked_for_and_may_be_two(tmp_path):
    path = tmp_path / "recipe.toml"
    inch = 'key = true\nkey_table = "inch rectangular"\nsecond_key = 180.0\nbore = 12.7 '
    path.write_text(STAGE.replace("bore = 12.0 ", inch), encoding="utf-8")
    planet = next(p for p in read_recipe(path).machine.parts if p.name.startswith("planet"))
    assert (planet.body.bore.key.width, planet.body.bore.key.height) == pytest.approx((25.4 / 8, 25.4 * 3 / 32))
    assert planet.body.bore.second_key == 180


@pytest.mark.parametrize("added", ['key_table = "inch"', "second_key = 90.0"])
def test_what_a_key_needs_is_refused_without_one(tmp_path, added):
    message = refused(tmp_path, STAGE.replace("bore = 12.0 ", f"{added}\nbore = 12.0 "))
    assert "planet: second_key or key_table is given without a key" in message


@pytest.mark.parametrize(
    ("keys", "callout"),
    [
        ('bore_form = "D"\nbore = 6.0', "⌀ 6, 5.5 across the flat"),
        ('bore_form = "D"\nacross_flat = 4.8\nbore = 6.0', "⌀ 6, 4.8 across the flat"),
        ('bore_form = "double D"\nacross_flat = 4.0\nbore = 6.0', "⌀ 6, 4 across flats"),
        ('bore_form = "square"\nbore = 8.0', "□ 8"),
        ('bore_form = "hexagon"\ncorner_relief = 0.4\nbore = 8.0', "hexagon 8, corners drilled R 0.4"),
        ('bore_form = "round"\nbore = 8.0', "⌀ 8"),
    ],
)
def test_a_shaft_hole_of_any_form(tmp_path, keys, callout):
    path = tmp_path / "recipe.toml"
    path.write_text(STAGE.replace("bore = 12.0 ", f"{keys} ").replace("chamfer = 0.4\n", ""), encoding="utf-8")
    planet = next(p for p in read_recipe(path).machine.parts if p.name.startswith("planet"))
    assert planet.body.bore.callout == callout


@pytest.mark.parametrize(
    ("keys", "words"),
    [
        ('bore_form = "D"', "given without a bore"),
        ('bore_form = "D"\nbore = 6.0\nkey = true', "key, chamfer, fit and made_by are for a round bore"),
        ('bore_form = "double D"\nbore = 6.0', "needs across_flat"),
        ("across_flat = 5.0\nbore = 6.0", "across_flat is for"),
        ('bore_form = "D"\ncorner_relief = 0.3\nbore = 6.0', "corner_relief is for"),
        ('bore_form = "D"\nbore = 7.0', "no flat is usual on a shaft of 7 mm"),
        ('bore_form = "hexagonal"\nbore = 7.0', 'did you mean "hexagon"?'),
        ('bore_form = "square"\nbore = 18.0', "the root circle has a radius"),
    ],
)
def test_what_a_form_cannot_have_is_refused(tmp_path, keys, words):
    text = STAGE.replace("bore = 12.0 ", f"{keys} ").replace("chamfer = 0.4\n", "")
    assert words in refused(tmp_path, text, (DesignError, RecipeError))


CLOCK = (RECIPES / "clock-pair.toml").read_text(encoding="utf-8")


def test_crossings_and_holes_go_through_the_wheel_and_into_the_report(tmp_path):
    path = tmp_path / "recipe.toml"
    drilled = "[wheel.holes]\ncount = 4\ncircle_diameter = 6.5\ndiameter = 0.8\nangle = 45.0\n"
    path.write_text(f"{CLOCK}\n{drilled}", encoding="utf-8")
    recipe = read_recipe(path)
    crossings, holes = recipe.machine.parts[0].body.holes
    assert (crossings.order, holes.order) == (5, 4)
    assert recipe.rows["wheel.crossings"]["arms"] == "5"
    assert recipe.rows["wheel.holes"]["circle_diameter"] == "6.5 mm"
    assert "crossings" not in recipe.rows["wheel"]


@pytest.mark.parametrize(
    ("old", "new", "words"),
    [
        ("arms = 5", "arms = 2", "wheel.crossings.arms = 2: must be a whole number"),
        ("arms = 5", "amrs = 5", 'wheel.crossings.amrs = 5: no such key; did you mean "arms"?'),
        ("fillet = 0.6", "", "wheel.crossings.fillet: missing"),
        ("fillet = 0.6", "fillet = 5.0", "wheel: crossings: between the hub circle"),
        ("rim_diameter = 27.0", "rim_diameter = 30.0", "wheel: openings reach from 4.5 to 15 mm"),
        ("hub_diameter = 9.0", "hub_diameter = 3.9", "the bore, which reaches 2 mm"),
    ],
)
def test_crossings_that_cannot_be_are_refused(tmp_path, old, new, words):
    assert old in CLOCK
    assert words in refused(tmp_path, CLOCK.replace(old, new, 1), (DesignError, RecipeError))


def test_a_printed_bore_is_drawn_larger_and_named_by_its_fit(tmp_path):
    path = tmp_path / "recipe.toml"
    printed = 'fit = "H7"\ndrawn = "middle"\nmade_by = "FDM"\nbore = 12.0 '
    path.write_text(STAGE.replace("bore = 12.0 ", printed), encoding="utf-8")
    planet = next(p for p in read_recipe(path).machine.parts if p.name.startswith("planet"))
    assert planet.body.bore.diameter == pytest.approx(12.009 + 0.2)
    assert planet.body.bore.callout.startswith("⌀ 12 H7")


def test_what_is_thin_is_noted_and_what_is_shipped_is_not(tmp_path):
    path = tmp_path / "recipe.toml"
    path.write_text(CLOCK.replace("rim_diameter = 27.0", "rim_diameter = 28.0"), encoding="utf-8")
    assert [n.code for n in read_recipe(path).notices] == ["thin-rim"]
    assert read_recipe(RECIPES / "clock-pair.toml").notices == ()
