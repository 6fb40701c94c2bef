"""The distinct parts of a machine: what is made once and placed one or more times."""

import re
from collections.abc import Sequence
from dataclasses import dataclass

from gearsolid.pairs.part import Body, Part


@dataclass(frozen=True)
class Made:
    """A body to make and the parts of the machine that are this body.

    Args:
        name: of the body; the parts' common name without their numbers.
        body: what is made, as its first part carries it.
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
    """Group parts whose bodies have the same outlines, widths, bore and bosses, wherever and how high they stand."""
    groups: dict[object, list[Part]] = {}
    for part in parts:
        groups.setdefault(_shape(part.body), []).append(part)
    return tuple(Made(_common_name(group), group[0].body, tuple(group)) for group in groups.values())


def _shape(body: Body) -> object:
    """What makes two bodies the same piece of work; outlines count as equal when they are one object."""
    return (
        id(body.outer),
        body.width,
        tuple(id(h) for h in body.holes),
        body.bore,
        tuple((id(b.outline), b.height) for b in body.bosses),
    )


def _common_name(group: list[Part]) -> str:
    return group[0].name if len(group) == 1 else re.sub(r"\s*\d+$", "", group[0].name)
