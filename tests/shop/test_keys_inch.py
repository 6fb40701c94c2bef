import csv
from importlib.resources import files
from pathlib import Path

import pytest

from gearsolid.errors import DesignError
from gearsolid.shop.keys_inch import inch_key_for_bore, seat_depths

INCH = 25.4
ROWS = list(csv.DictReader(files("gearsolid.shop").joinpath("data/keyway-asme-b17-1.csv").open(encoding="ascii")))
# Depths S and T as printed, to a thousandth of an inch (column origin: found).
PUBLISHED = list(
    csv.DictReader(Path(__file__).with_name("data").joinpath("keyway-asme-b17-1-depths.csv").open(encoding="ascii"))
)
SECTIONS = {"square": ("H_square_in", "square"), "rectangular": ("H_rect_in", "rect")}


def _inches(text: str) -> float:
    return sum(float(p) if "/" not in p else float(p.split("/")[0]) / float(p.split("/")[1]) for p in text.split())


@pytest.mark.parametrize("section", SECTIONS)
@pytest.mark.parametrize("row", PUBLISHED, ids=lambda r: r["D_frac"])
def test_published_depths(row, section):
    bore = _inches(row["D_frac"]) * INCH
    seat = inch_key_for_bore(bore, section)
    short = SECTIONS[section][1]
    assert seat.width == pytest.approx(_inches(row["W_frac"]) * INCH)
    assert seat.height == pytest.approx(_inches(row[f"H_{short}_frac"]) * INCH)
    # Half a unit of the last digit printed.
    assert (bore - seat.shaft_depth) / INCH == pytest.approx(float(row[f"S_{short}_published"]), abs=0.000501)
    assert (bore + seat.hub_depth) / INCH == pytest.approx(float(row[f"T_{short}_published"]), abs=0.000501)


@pytest.mark.parametrize("row", ROWS, ids=lambda r: r["d_to_frac"])
def test_a_step_reads_over_up_to_and_including(row):
    over, to = (_inches(row[c]) * INCH for c in ("d_over_frac", "d_to_frac"))
    for bore in (to, over + 1e-6, (over + to) / 2):
        seat = inch_key_for_bore(bore)
        height = SECTIONS[row["preferred"]][0]
        assert (seat.width, seat.height) == pytest.approx((float(row["W_in"]) * INCH, float(row[height]) * INCH))
        assert seat.origin == row["origin_W_H"]


@pytest.mark.parametrize("row", ROWS, ids=lambda r: r["d_to_frac"])
def test_a_section_is_given_where_it_is_tabulated_and_refused_elsewhere(row):
    bore = float(row["d_to_in"]) * INCH
    for section, (column, _) in SECTIONS.items():
        if row[column]:
            assert inch_key_for_bore(bore, section).height == pytest.approx(float(row[column]) * INCH)
        else:
            with pytest.raises(
                DesignError,
                match=f"no {section} key .* it has {row['preferred'] if row['H_rect_in'] else 'square'} keys",
            ):
                inch_key_for_bore(bore, section)


def test_the_seats_leave_the_clearance_over_the_key():
    seat = inch_key_for_bore(INCH)
    assert seat.shaft_depth + seat.hub_depth - seat.height == pytest.approx(0.005 * INCH)


@pytest.mark.parametrize("bore", [0, -3, 5 / 16 * INCH, 30.001 * INCH, float("nan")])
def test_bores_outside_the_table_are_refused(bore):
    with pytest.raises(DesignError, match=r"over 7\.9375 up to 762 mm"):
        inch_key_for_bore(bore)


def test_a_key_as_wide_as_the_bore_has_no_seat():
    with pytest.raises(DesignError, match="10 mm wide has no seat in a bore of 10 mm"):
        seat_depths(10, 10, 8)
