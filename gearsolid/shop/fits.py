"""Limits of size of holes and shafts by ISO 286-2.

The data files hold upper and lower deviations by tolerance class and size step. Their column `origin` says which rows
were found printed and which follow from printed grades and fundamental deviations by the rules of ISO 286-1. Half-way
deviations of JS classes are kept exact, where ISO 286-1 lets them be rounded to whole micrometres.
"""

import csv
from dataclasses import dataclass
from functools import cache
from importlib.resources import files

from gearsolid.errors import DesignError


@dataclass(frozen=True)
class Limits:
    """Nominal size and the limits a made size must keep.

    Args:
        nominal: [mm].
        tolerance_class: letter and grade, as in "H7".
        lower: lower deviation, EI or ei [mm].
        upper: upper deviation, ES or es [mm].
        origin: how the deviations are known.
    """

    nominal: float
    tolerance_class: str
    lower: float
    upper: float
    origin: str

    @property
    def least(self) -> float:
        """Lower limit of size [mm]."""
        return self.nominal + self.lower

    @property
    def most(self) -> float:
        """Upper limit of size [mm]."""
        return self.nominal + self.upper

    @property
    def middle(self) -> float:
        """Size half way between the limits [mm]: what a machine is set to."""
        return self.nominal + (self.lower + self.upper) / 2

    @property
    def callout(self) -> str:
        """Size with class and deviations [mm], as on a drawing: "25 H7 (+0.021 / 0)"."""
        upper, lower = (f"{d:+.4f}".rstrip("0").rstrip(".") if d else "0" for d in (self.upper, self.lower))
        return f"{self.nominal:g} {self.tolerance_class} ({upper} / {lower})"


@dataclass(frozen=True)
class _Step:
    over: float
    to: float
    lower: float
    upper: float
    origin: str


@cache
def _steps(table: str) -> dict[str, tuple[_Step, ...]]:
    """Steps of growing size by tolerance class."""
    found: dict[str, tuple[_Step, ...]] = {}
    with files("gearsolid.shop").joinpath(f"data/iso286-{table}s.csv").open(encoding="ascii") as lines:
        for row in csv.DictReader(lines):
            upper, lower = (float(next(v for k, v in row.items() if k.lower() == c)) / 1000 for c in ("es_um", "ei_um"))
            step = _Step(float(row["size_over_mm"]), float(row["size_to_mm"]), lower, upper, row["origin"])
            found[row["class"]] = (*found.get(row["class"], ()), step)
    return found


def hole_limits(diameter: float, tolerance_class: str) -> Limits:
    """Limits of a hole. ISO 286-2:2010.

    Args:
        diameter: nominal size [mm].
        tolerance_class: capital letters and grade, as in "H7"; `hole_classes` lists those known.

    Raises:
        DesignError: a class or size the table does not hold.
    """
    return _limits("hole", diameter, tolerance_class)


def shaft_limits(diameter: float, tolerance_class: str) -> Limits:
    """Limits of a shaft. ISO 286-2:2010.

    Args:
        diameter: nominal size [mm].
        tolerance_class: small letters and grade, as in "k6"; `shaft_classes` lists those known.

    Raises:
        DesignError: a class or size the table does not hold.
    """
    return _limits("shaft", diameter, tolerance_class)


def hole_classes() -> tuple[str, ...]:
    """The tolerance classes of holes known."""
    return tuple(_steps("hole"))


def shaft_classes() -> tuple[str, ...]:
    """The tolerance classes of shafts known."""
    return tuple(_steps("shaft"))


def _limits(table: str, diameter: float, tolerance_class: str) -> Limits:
    steps = _steps(table).get(tolerance_class)
    if steps is None:
        raise DesignError(
            f'no limits are tabulated for a {table} of class "{tolerance_class}"; known: {", ".join(_steps(table))} '
            "(capital letters for holes, small ones for shafts)"
        )
    smallest, largest = steps[0].over, steps[-1].to
    if not smallest < diameter <= largest:
        raise DesignError(
            f"no limits are tabulated for a {table} of {diameter:g} mm; the table of ISO 286-2 kept here covers sizes "
            f"over {smallest:g} up to {largest:g} mm: leave the class out and give the limits on the drawing"
        )
    # A step reads "over ... up to and including".
    step = next(s for s in steps if diameter <= s.to)
    return Limits(diameter, tolerance_class, step.lower, step.upper, step.origin)
