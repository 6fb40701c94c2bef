"""Parallel keys, metric: the seat that belongs to a bore.

Source of the table: ISO/R 773:1969 = DIN 6885-1:1968. The columns `origin_*` of the data file say which values were
found printed and which were written down from memory (shaft depths above 230 mm); check the latter before use.
"""

import csv
from dataclasses import dataclass
from functools import cache
from importlib.resources import files

from gearsolid.errors import DesignError


@dataclass(frozen=True)
class KeySeat:
    """Key section and the depths of its seat in shaft and hub.

    Args:
        width: key and keyway width b [mm].
        height: key height h [mm].
        shaft_depth: t1 [mm], from the bore circle into the shaft.
        hub_depth: t2 [mm], from the bore circle into the hub.
        depth_tolerance: upper deviation of both depths [mm]; the lower one is 0.
        corner_radius_min: smallest corner radius at the seat's floor [mm].
        corner_radius_max: largest corner radius at the seat's floor [mm].
        origin: how the values are known: "found" printed, or "memory" where any of them was recalled.

    Raises:
        DesignError: a size is not above 0.
    """

    width: float
    height: float
    shaft_depth: float
    hub_depth: float
    depth_tolerance: float = 0.0
    corner_radius_min: float = 0.0
    corner_radius_max: float = 0.0
    origin: str = "given"

    def __post_init__(self) -> None:
        for name in ("width", "height", "shaft_depth", "hub_depth"):
            if not getattr(self, name) > 0:
                raise DesignError(
                    f"the key's {name.replace('_', ' ')} is {getattr(self, name):g} mm; it must be above 0"
                )


@dataclass(frozen=True)
class _Step:
    over: float
    to: float
    seat: KeySeat


@cache
def _steps() -> tuple[_Step, ...]:
    with files("gearsolid.shop").joinpath("data/keyway-iso773.csv").open(encoding="ascii") as lines:
        return tuple(_step(row) for row in csv.DictReader(lines))


def _step(row: dict[str, str]) -> _Step:
    seat = KeySeat(
        width=float(row["b_mm"]),
        height=float(row["h_mm"]),
        shaft_depth=float(row["t1_shaft_mm"]),
        hub_depth=float(row["t2_hub_mm"]),
        depth_tolerance=float(row["t_tol_upper_mm"]),
        corner_radius_min=float(row["keyway_r_min_mm"]),
        corner_radius_max=float(row["keyway_r_max_mm"]),
        origin="memory" if "memory" in (row["origin_b_h_t2_r"], row["origin_t1"]) else "found",
    )
    return _Step(float(row["d_over_mm"]), float(row["d_to_mm"]), seat)


def key_for_bore(diameter: float) -> KeySeat:
    """The standard key of a bore.

    A step reads "over ... up to and including", so a bore on a limit takes the smaller key. Exactly 6 mm lies below the
    first step, but is accepted with its 2 x 2 key, as catalogues do (common practice).

    Args:
        diameter: bore diameter [mm].

    Returns:
        The key seat by ISO/R 773 = DIN 6885-1.

    Raises:
        DesignError: no key is tabulated for this bore.
    """
    steps = _steps()
    smallest, largest = steps[0].over, steps[-1].to
    if not smallest <= diameter <= largest:
        raise DesignError(
            f"no standard key for a bore of {diameter:g} mm; ISO/R 773 covers {smallest:g} to {largest:g} mm: leave "
            "the key out (a flat, a set screw or a press fit holds small bores), or give a key seat of your own"
        )
    return next(step.seat for step in steps if diameter <= step.to)
