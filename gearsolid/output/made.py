"""The distinct parts of a machine: what is made once and placed one or more times."""

import re
from collections.abc import Sequence
from dataclasses import dataclass, replace

from gearsolid.pairs.machine import Machine
from gearsolid.pairs.part import Body, Part


@dataclass(frozen=True)
class Made:
    """A body to make and the parts of the machine that are this body.

    Args:
        name: of the body; the parts' common name without their numbers.
        body: what is made, standing on height 0.
        parts: the parts, all of this shape.
    """

    name: str
    body: Body
    parts: tuple[Part, ...]

    @property
    def file_name(self) -> str:
        """The name as a file name without ending: lower case, hyphens."""
        return re.sub(r"[^a-z0-9]+", "-", self.name.lower()).strip("-")


def distinct(parts: Sequence[Part]) -> tuple[Made, ...]:
    """Group parts that are the same piece of work, wherever and however high they stand."""
    groups: dict[Body, list[Part]] = {}
    for part in parts:
        groups.setdefault(replace(part.body, z=0.0), []).append(part)
    return tuple(Made(_common_name(group), body, tuple(group)) for body, group in groups.items())


def pitch_radii(machine: Machine, parts: Sequence[Part]) -> tuple[float, ...]:
    """Radii of the pitch circles [mm] on which parts work together with others, rising, each once."""
    names = {p.name for p in parts}
    radii = set()
    for e in machine.engagements:
        pole = e.pitch_point
        if pole is not None and e.must_touch:
            centres = ((e.name_a, e.centre_a), (e.name_b, e.centre_b))
            radii |= {round(abs(pole - centre), 4) for name, centre in centres if name in names}
    return tuple(sorted(radii))


def _common_name(group: list[Part]) -> str:
    return group[0].name if len(group) == 1 else re.sub(r"\s*\d+$", "", group[0].name)
