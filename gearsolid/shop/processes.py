"""What a way of making does to sizes: clearances, holes that come out small, least walls, teeth and modules.

The data file holds first values by common practice; its column `origin` says which were read in guides of service
bureaux, which differ among themselves by a factor of two. A test piece decides: every value can be replaced.
"""

import csv
from collections.abc import Mapping
from dataclasses import dataclass, fields, replace
from difflib import get_close_matches
from functools import cache
from importlib.resources import files
from math import isfinite
from typing import Any, Literal

from gearsolid.errors import DesignError
from gearsolid.shop.notice import Notice

Clearance = Literal["press", "slide", "moving"]
ProcessName = Literal[
    "FDM", "SLA", "SLS", "MJF", "laser cutting", "waterjet cutting", "wire EDM", "hobbing", "moulding"
]


@dataclass(frozen=True)
class Process:
    """A way of making, and its numbers.

    Args:
        name: of the process.
        clearance_press: hole less pin for a press fit [mm] on the diameter.
        clearance_slide: the same for parts put together by hand [mm].
        clearance_moving: the same for parts that turn or slide in use [mm].
        min_wall: least wall [mm]; 0 where the material decides.
        min_hole: least hole diameter [mm].
        min_hole_per_thickness: least hole diameter by the thickness of the part [-].
        hole_growth_least: least of what is usually added to the diameter of a hole, since it comes out small [mm].
        hole_growth_most: most of it [mm].
        min_tooth: least thickness of a tooth [mm].
        min_tooth_per_thickness: the same by the thickness of the part [-].
        module_smallest: [mm].
        module_comfortable: module from which on nothing special is needed [mm].
        play_least: least usual circumferential play of a pair [mm].
        play_most: most of it [mm].
        play_least_per_module: what is added to the least play for each mm of module [-].
        play_most_per_module: what is added to the most play for each mm of module [-].

    Raises:
        DesignError: a number is below 0, or the most of a range lies below its least.
    """

    name: str
    clearance_press: float
    clearance_slide: float
    clearance_moving: float
    min_wall: float
    min_hole: float
    min_hole_per_thickness: float
    hole_growth_least: float
    hole_growth_most: float
    min_tooth: float
    min_tooth_per_thickness: float
    module_smallest: float
    module_comfortable: float
    play_least: float
    play_most: float
    play_least_per_module: float
    play_most_per_module: float

    def __post_init__(self) -> None:
        for key in NUMBERS:
            value = getattr(self, key)
            if not (value >= 0 and isfinite(value)):
                raise DesignError(f"{self.name}: {key} is {value:g}; it must be 0 or more")
        ranges = (
            ("hole_growth_least", "hole_growth_most"),
            ("module_smallest", "module_comfortable"),
            ("play_least", "play_most"),
            ("play_least_per_module", "play_most_per_module"),
        )
        for low, high in ranges:
            least, most = getattr(self, low), getattr(self, high)
            if least > most:
                raise DesignError(
                    f"{self.name}: {low} is {least:g} and {high} is {most:g}; the first must not be above the second: "
                    "give both"
                )

    @property
    def hole_growth(self) -> float:
        """Added to the diameter of a hole, so that it comes out as wanted [mm]: the middle of the usual range."""
        return (self.hole_growth_least + self.hole_growth_most) / 2

    def hole_for(self, pin: float, clearance: Clearance) -> float:
        """Diameter at which the hole for a bought pin, roller or bearing is drawn [mm].

        Args:
            pin: diameter of what goes in [mm].
            clearance: how it is to fit.
        """
        return pin + float(getattr(self, f"clearance_{clearance}")) + self.hole_growth

    def pin_for(self, hole: float, clearance: Clearance) -> float:
        """Diameter at which a pin made by this process for a bought hole is drawn [mm].

        Args:
            hole: diameter of what it goes into [mm].
            clearance: how it is to fit.
        """
        return hole - float(getattr(self, f"clearance_{clearance}"))

    def play(self, module: float) -> float:
        """Usual circumferential play of a pair [mm]: the middle of the range, by the module [mm]."""
        fixed, per_module = self.play_least + self.play_most, self.play_least_per_module + self.play_most_per_module
        return (fixed + per_module * module) / 2

    def tooth_thinning(self, module: float) -> float:
        """By how much to thin the teeth of each of two mates for that play [mm], as an arc of the reference circle."""
        return self.play(module) / 2

    def least_hole(self, thickness: float) -> float:
        """Least diameter of a hole through a part of this thickness [mm]."""
        return max(self.min_hole, self.min_hole_per_thickness * thickness)

    def least_tooth(self, thickness: float) -> float:
        """Least thickness of a tooth of a part of this thickness [mm]."""
        return max(self.min_tooth, self.min_tooth_per_thickness * thickness)

    def module_notices(self, module: float) -> tuple[Notice, ...]:
        """What is to say of a module [mm] made by this process."""
        if module < self.module_smallest:
            sentence = (
                f"a module of {module:g} mm is below the smallest that {self.name} makes, {self.module_smallest:g} mm: "
                "take a larger module or another process"
            )
            return (Notice("module-too-small", sentence, module, self.module_smallest),)
        if module < self.module_comfortable:
            sentence = (
                f"a module of {module:g} mm is made by {self.name} only with care; from {self.module_comfortable:g} mm "
                "on it is easy: make a test piece first"
            )
            return (Notice("module-small", sentence, module, self.module_comfortable),)
        return ()

    def wall_notices(self, wall: float, place: str) -> tuple[Notice, ...]:
        """What is to say of a wall [mm]; `place` names it, as in "the sun: wall between bore and root circle"."""
        return self._below("thin-wall", wall, self.min_wall, place)

    def hole_notices(self, diameter: float, thickness: float, place: str) -> tuple[Notice, ...]:
        """What is to say of a hole [mm] through a part of this thickness [mm]; `place` names it."""
        return self._below("small-hole", diameter, self.least_hole(thickness), place)

    def tooth_notices(self, tooth: float, thickness: float, place: str) -> tuple[Notice, ...]:
        """What is to say of a tooth this thick [mm] on a part of this thickness [mm]; `place` names it."""
        return self._below("thin-tooth", tooth, self.least_tooth(thickness), place)

    def _below(self, code: str, number: float, limit: float, place: str) -> tuple[Notice, ...]:
        if number >= limit:
            return ()
        sentence = f"{place} is {number:.3g} mm; {self.name} needs at least {limit:.3g} mm"
        return (Notice(code, sentence, number, limit),)


NUMBERS = tuple(f.name for f in fields(Process) if f.name != "name")


@cache
def _table() -> dict[str, Process]:
    with files("gearsolid.shop").joinpath("data/processes.csv").open(encoding="ascii") as lines:
        found = {}
        for row in csv.DictReader(lines):
            numbers = {k.removesuffix("_mm"): float(v) for k, v in row.items() if k not in ("process", "origin")}
            found[row["process"]] = Process(row["process"], **numbers)
        return found


def process_names() -> tuple[str, ...]:
    """The processes known."""
    return tuple(_table())


def process(name: str, changes: Mapping[str, float] | None = None) -> Process:
    """A process by its name.

    Args:
        name: one of `process_names`.
        changes: numbers of one's own in place of the table's, as a mapping or a table read from TOML.

    Raises:
        DesignError: no such process or number, or a number out of range.
    """
    known = _table()
    if name not in known:
        raise DesignError(f'no process is called "{name}"; known: {", ".join(known)}')
    own: dict[str, Any] = dict(changes or {})
    for key, value in own.items():
        if key not in NUMBERS:
            near = get_close_matches(key, NUMBERS, n=1)
            hint = f'; did you mean "{near[0]}"?' if near else f"; known: {', '.join(NUMBERS)}"
            raise DesignError(f'{name}: no number of a process is called "{key}"{hint}')
        if isinstance(value, bool) or not isinstance(value, int | float):
            raise DesignError(f"{name}: {key} is {value!r}; it must be a number in mm")
    return replace(known[name], **own)
