import csv
from importlib.resources import files
from itertools import pairwise

import pytest

from gearsolid.errors import DesignError
from gearsolid.shop.keys import KeySeat, key_for_bore

ROWS = list(csv.DictReader(files("gearsolid.shop").joinpath("data/keyway-iso773.csv").open(encoding="ascii")))


def _is_row(seat: KeySeat, row: dict[str, str]) -> bool:
    return (
        seat.width == float(row["b_mm"])
        and seat.height == float(row["h_mm"])
        and seat.shaft_depth == float(row["t1_shaft_mm"])
        and seat.hub_depth == float(row["t2_hub_mm"])
        and seat.depth_tolerance == float(row["t_tol_upper_mm"])
        and (seat.corner_radius_min, seat.corner_radius_max)
        == (float(row["keyway_r_min_mm"]), float(row["keyway_r_max_mm"]))
        and (seat.origin == "memory") == ("memory" in (row["origin_b_h_t2_r"], row["origin_t1"]))
    )


@pytest.mark.parametrize("row", ROWS, ids=lambda r: f"{r['d_over_mm']}-{r['d_to_mm']}")
def test_a_step_reads_over_up_to_and_including(row):
    over, to = float(row["d_over_mm"]), float(row["d_to_mm"])
    assert _is_row(key_for_bore(to), row), "the upper limit belongs to this step"
    assert _is_row(key_for_bore(over + 1e-9), row), "just above the lower limit belongs to this step"
    assert over == 6 or not _is_row(key_for_bore(over), row), "the lower limit belongs to the step below"


def test_table_has_no_gaps_and_grows():
    for below, above in pairwise(ROWS):
        assert below["d_to_mm"] == above["d_over_mm"]
        assert float(below["b_mm"]) < float(above["b_mm"])
        assert float(below["t2_hub_mm"]) <= float(above["t2_hub_mm"])


@pytest.mark.parametrize("row", ROWS, ids=lambda r: r["d_to_mm"])
def test_seats_together_are_deeper_than_the_key_by_its_clearance(row):
    clearance = float(row["t1_shaft_mm"]) + float(row["t2_hub_mm"]) - float(row["h_mm"])
    assert 0.2 - 1e-9 <= clearance <= 0.5 + 1e-9


@pytest.mark.parametrize(
    ("bore", "width", "height", "shaft", "hub"),
    [(6, 2, 2, 1.2, 1.0), (12, 4, 4, 2.5, 1.8), (20, 6, 6, 3.5, 2.8), (25, 8, 7, 4.0, 3.3), (50, 14, 9, 5.5, 3.8)],
)
def test_common_bores(bore, width, height, shaft, hub):
    """Rows of DIN 6885-1:1968 as printed; 6 mm by common practice."""
    seat = key_for_bore(bore)
    assert (seat.width, seat.height, seat.shaft_depth, seat.hub_depth) == (width, height, shaft, hub)


@pytest.mark.parametrize("bore", [5.99, 0, -3, 500.01, float("nan")])
def test_bores_outside_the_table_are_refused(bore):
    with pytest.raises(DesignError, match="6 to 500 mm"):
        key_for_bore(bore)


def test_a_seat_of_nothing_is_refused():
    with pytest.raises(DesignError, match="hub depth is 0 mm"):
        KeySeat(2, 2, 1.2, 0)
