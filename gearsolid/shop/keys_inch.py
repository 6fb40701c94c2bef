"""Parallel keys, inch: the seat that belongs to a bore.

Source of the table: ANSI B17.1-1967. The column `origin_W_H` of the data file says which rows were found printed and
which were written down from memory; check the latter before use. Tolerances of depth and corner radii are not kept.
"""

import csv
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from math import sqrt
from typing import Literal

from gearsolid.errors import DesignError
from gearsolid.shop.keys import KeySeat

KeySection = Literal["preferred", "square", "rectangular"]

_INCH = 25.4
# Clearance C over a parallel key [in].
_CLEARANCE = 0.005
# Bores are given in mm; sizes this close to a limit of the table, relative to it, are on it.
_ROUNDING = 1e-9


@dataclass(frozen=True)
class SeatDepths:
    """Depths across the seat as inch drawings state them.

    Args:
        shaft: S, from the bottom of the shaft's seat to the opposite side of the shaft [mm].
        hub: T, from the bottom of the keyway to the opposite side of the bore [mm].
    """

    shaft: float
    hub: float


@dataclass(frozen=True)
class _Step:
    over: float
    to: float
    width: float
    heights: dict[str, float]
    preferred: str
    origin: str


@cache
def _steps() -> tuple[_Step, ...]:
    with files("gearsolid.shop").joinpath("data/keyway-asme-b17-1.csv").open(encoding="ascii") as lines:
        return tuple(_step(row) for row in csv.DictReader(lines))


def _step(row: dict[str, str]) -> _Step:
    columns = {"square": row["H_square_in"], "rectangular": row["H_rect_in"]}
    return _Step(
        over=float(row["d_over_in"]),
        to=float(row["d_to_in"]),
        width=float(row["W_in"]),
        heights={section: float(height) for section, height in columns.items() if height},
        preferred=row["preferred"],
        origin=row["origin_W_H"],
    )


def seat_depths(diameter: float, width: float, height: float) -> SeatDepths:
    """Depths S and T of a parallel key's seat. ANSI B17.1-1967.

    Half the key's height lies below the edge where its side meets the shaft, so the crown Y that its width cuts off the
    shaft counts: S = D - Y - H/2 and T = D - Y + H/2 + C, with Y = (D - sqrt(D^2 - W^2)) / 2.

    Args:
        diameter: of the bore [mm].
        width: of the key [mm].
        height: of the key [mm].

    Raises:
        DesignError: the key is not narrower than the bore.
    """
    if not 0 < width < diameter:
        raise DesignError(
            f"a key {width:g} mm wide has no seat in a bore of {diameter:g} mm; it must be narrower than the bore"
        )
    crown = (diameter - sqrt(diameter**2 - width**2)) / 2
    return SeatDepths(diameter - crown - height / 2, diameter - crown + height / 2 + _CLEARANCE * _INCH)


def inch_key_for_bore(diameter: float, section: KeySection = "preferred") -> KeySeat:
    """The inch key of a bore.

    A step reads "over ... up to and including", so a bore on a limit takes the smaller key.

    Args:
        diameter: bore diameter [mm].
        section: square or rectangular; the standard prefers square keys up to 6 1/2 in, rectangular ones above.

    Returns:
        The key seat by ANSI B17.1, its depths from the bore circle as for metric keys.

    Raises:
        DesignError: no key, or none of this section, is tabulated for this bore.
    """
    steps = _steps()
    size = diameter / _INCH
    if not steps[0].over * (1 + _ROUNDING) < size <= steps[-1].to * (1 + _ROUNDING):
        raise DesignError(
            f"no inch key for a bore of {diameter:g} mm; ANSI B17.1 covers bores over {steps[0].over * _INCH:g} up to "
            f"{steps[-1].to * _INCH:g} mm: leave the key out, or give a key seat of your own"
        )
    step = next(s for s in steps if size <= s.to * (1 + _ROUNDING))
    chosen = step.preferred if section == "preferred" else section
    if chosen not in step.heights:
        raise DesignError(
            f"ANSI B17.1 has no {chosen} key for a bore of {diameter:g} mm; between {step.over * _INCH:g} and "
            f"{step.to * _INCH:g} mm it has {' and '.join(step.heights)} keys"
        )
    width, height = step.width * _INCH, step.heights[chosen] * _INCH
    depths = seat_depths(diameter, width, height)
    return KeySeat(width, height, diameter - depths.shaft, depths.hub - diameter, origin=step.origin)
