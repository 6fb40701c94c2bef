import csv
from importlib.resources import files
from pathlib import Path

import pytest

from gearsolid.errors import DesignError
from gearsolid.shop.bore import Bore
from gearsolid.shop.fits import hole_classes, hole_limits, shaft_classes, shaft_limits
from gearsolid.shop.keys import key_for_bore

# Grades and fundamental deviations found printed, from which the rules of ISO 286-1 give every class anew.
GRADES = list(csv.DictReader(Path(__file__).with_name("data").joinpath("iso286-grades.csv").open(encoding="ascii")))
TABLES = {
    "hole": (hole_limits, hole_classes, "ES_um", "EI_um"),
    "shaft": (shaft_limits, shaft_classes, "es_um", "ei_um"),
}
ROWS = [
    (kind, row)
    for kind in TABLES
    for row in csv.DictReader(files("gearsolid.shop").joinpath(f"data/iso286-{kind}s.csv").open(encoding="ascii"))
]


def _microns(limits):
    return pytest.approx((1000 * limits.upper, 1000 * limits.lower), abs=1e-9)


@pytest.mark.parametrize(
    ("kind", "row"),
    ROWS,
    ids=lambda v: v if isinstance(v, str) else f"{v['class']}-{v[next(k for k in v if 'to' in k)]}",
)
def test_a_step_reads_over_up_to_and_including(kind, row):
    limits, _, upper, lower = TABLES[kind]
    over, to = float(row["size_over_mm"]), float(row["size_to_mm"])
    expected = float(row[upper]), float(row[lower])
    for size in (to, over + 1e-9, (over + to) / 2):
        found = limits(size, row["class"])
        assert expected == _microns(found)
        assert (found.nominal, found.tolerance_class, found.origin) == (size, row["class"], row["origin"])


def _by_rule(name: str, grade: dict[str, str]) -> tuple[float, float]:
    """Upper and lower deviation [um] of a class by the rules of ISO 286-1."""
    letter, it = name.rstrip("0123456789"), int(name.lstrip("DEFGHJKMNPSdefghjkmnps"))
    width, small = float(grade[f"IT{it}_um"]), float(grade["size_to_mm"]) <= 3
    column = {"k": "k_ei_um_IT4_to_IT7", "m": "m_ei_um", "n": "n_ei_um", "p": "p_ei_um"}
    if letter in ("js", "JS"):
        return width / 2, -width / 2
    if letter in "defgh":
        es = 0.0 if letter == "h" else float(grade[f"{letter}_es_um"])
        return es, es - width
    if letter in "DEFGH":
        ei = 0.0 if letter == "H" else -float(grade[f"{letter.lower()}_es_um"])
        return ei + width, ei
    if letter in "kmnp":
        ei = float(grade[column[letter]])
        return ei + width, ei
    if letter == "N" and it > 8:
        es = -4.0 if small else 0.0
        return es, es - width
    step_up = 0.0 if small or (letter == "P" and it > 7) else width - float(grade[f"IT{it - 1}_um"])
    es = -float(grade[column[letter.lower()]]) + step_up
    return es, es - width


@pytest.mark.parametrize("kind", TABLES)
def test_every_class_follows_from_grades_and_deviations(kind):
    limits, classes, *_ = TABLES[kind]
    for grade in GRADES:
        for name in classes():
            assert _by_rule(name, grade) == _microns(limits(float(grade["size_to_mm"]), name)), (name, grade)


@pytest.mark.parametrize(
    ("limits", "size", "name", "upper", "lower"),
    [
        (hole_limits, 25, "H7", 21, 0),
        (shaft_limits, 40, "k6", 18, 2),
        (hole_limits, 8, "P9", -15, -51),
        (shaft_limits, 6, "m6", 12, 4),
        (hole_limits, 12, "JS9", 21.5, -21.5),
    ],
    ids=lambda v: v if isinstance(v, str) else None,
)
def test_well_known_limits(limits, size, name, upper, lower):
    """ISO 286-2 as printed in shop tables (from memory)."""
    assert (upper, lower) == _microns(limits(size, name))


def test_sizes_between_the_limits():
    fit = hole_limits(25, "H7")
    assert (fit.least, fit.middle, fit.most) == pytest.approx((25, 25.0105, 25.021))


@pytest.mark.parametrize(
    ("limits", "text"),
    [
        (hole_limits(25, "H7"), "25 H7 (+0.021 / 0)"),
        (hole_limits(12, "JS9"), "12 JS9 (+0.0215 / -0.0215)"),
        (shaft_limits(6.35, "h6"), "6.35 h6 (0 / -0.009)"),
    ],
    ids=["H7", "JS9", "h6"],
)
def test_callouts(limits, text):
    assert limits.callout == text


@pytest.mark.parametrize("size", [0, -1, 250.001, float("nan")])
@pytest.mark.parametrize(("limits", "name"), [(hole_limits, "H7"), (shaft_limits, "h6")], ids=["hole", "shaft"])
def test_sizes_outside_the_table_are_refused(limits, name, size):
    with pytest.raises(DesignError, match="over 0 up to 250 mm"):
        limits(size, name)


@pytest.mark.parametrize(("limits", "name"), [(hole_limits, "h7"), (shaft_limits, "H7"), (hole_limits, "Z3")])
def test_unknown_classes_are_refused(limits, name):
    with pytest.raises(DesignError, match=rf'"{name}"; known: .*6'):
        limits(20, name)


@pytest.mark.parametrize("size", ["nominal", "middle"])
def test_a_bore_is_drawn_at_the_size_chosen_and_called_by_its_fit(size):
    fit = hole_limits(20, "H7")
    bore = Bore(getattr(fit, size), key_for_bore(20), fit=fit)
    assert bore.diameter == {"nominal": 20, "middle": 20.0105}[size]
    assert bore.callout == "⌀ 20 H7 (+0.021 / 0)"
    assert Bore(20).callout == "⌀ 20"
