"""What is worth a second look in the bodies of a machine before they are made: thin walls, small holes and modules.

The limits by the module are common practice in steel; those of a process come from its own numbers.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

from gearsolid.curves.outline import Outline
from gearsolid.pairs.part import Body, Part
from gearsolid.shop.bore import Bore
from gearsolid.shop.notice import Notice
from gearsolid.shop.processes import Process

# Least walls in modules: from a keyway's floor and from openings to the root circle.
_OVER_KEYWAY = 2.5
_RIM = 2.0
# Least wall between a keyway's floor and the outside of the hub [mm].
_HUB = 2.0


@dataclass(frozen=True)
class Wall:
    """Material between two boundaries of a body, measured along a radius.

    Args:
        inside: name of the boundary nearer to the axis.
        outside: name of the one further out.
        thickness: [mm].
    """

    inside: str
    outside: str
    thickness: float


def walls(body: Body) -> tuple[Wall, ...]:
    """The walls between bore, openings and rim, from the axis outward; boundaries side by side have none."""
    named = sorted((("openings", o) for o in body.holes), key=lambda pair: pair[1].r_min)
    rings = [(_name(body, name, o), o.r_min, o.r_max) for name, o in [*named, ("outer boundary", body.outer)]]
    if body.bore:
        rings.insert(0, ("bore", 0.0, body.bore.reach))
    found = []
    (inside, _, reach), *further = rings
    for outside, low, high in further:
        if low > reach:
            found.append(Wall(inside, outside, low - reach))
        if high > reach:
            inside, reach = outside, high
    return tuple(found)


def _name(body: Body, name: str, outline: Outline) -> str:
    toothed = outline.is_chain and any(p.role == "flank" for p in outline.pieces)
    return "root circle" if toothed else "bore" if outline.is_chain and outline is not body.outer else name


def part_notices(parts: Sequence[Part], module: float | None, process: Process | None) -> tuple[Notice, ...]:
    """What is to say of the bodies of a machine; equal bodies are spoken of once.

    Args:
        parts: of the machine.
        module: of its teeth [mm], or None where it has none.
        process: by which all parts are made, or None.
    """
    bodies: dict[Body, str] = {}
    for part in parts:
        bodies.setdefault(replace(part.body, z=0.0), part.name)
    found = list(process.module_notices(module)) if process and module else []
    for body, name in bodies.items():
        found += _at_keyway(body, name)
        if module:
            found += _by_module(body, name, module)
        if process:
            found += _by_process(body, name, process)
    return tuple(found)


def _at_keyway(body: Body, name: str) -> Iterator[Notice]:
    if not (isinstance(body.bore, Bore) and body.bore.key):
        return
    ends = [h.r_min for h in body.holes] + ([body.hub.outline.r_min] if body.hub else [])
    over, least = min(ends, default=float("inf")) - body.bore.floor, max(body.bore.key.height / 2, _HUB)
    if over < least:
        sentence = (
            f"{name}: the hub is {over:.3g} mm thick over the keyway's floor; {least:.3g} mm, half the key's height "
            "and at least 2 mm, are advised in steel (common practice): take a larger hub"
        )
        yield Notice("thin-hub", sentence, over, least)


def _by_module(body: Body, name: str, module: float) -> Iterator[Notice]:
    if isinstance(body.bore, Bore) and body.bore.key:
        over, least = body.outer.r_min - body.bore.floor, _OVER_KEYWAY * module
        if over < least:
            sentence = (
                f"{name}: {over:.3g} mm are left between the keyway's floor and the root circle; {least:.3g} mm, 2.5 "
                "modules, are advised (common practice): take a smaller bore, or cut the teeth on the shaft"
            )
            yield Notice("thin-over-keyway", sentence, over, least)
    for wall in walls(body):
        if wall.inside == "openings" and wall.thickness < _RIM * module:
            least = _RIM * module
            sentence = (
                f"{name}: the rim between openings and {wall.outside} is {wall.thickness:.3g} mm; {least:.3g} mm, 2 "
                "modules, are advised (common practice): end the openings nearer to the axis"
            )
            yield Notice("thin-rim", sentence, wall.thickness, least)


def _by_process(body: Body, name: str, process: Process) -> Iterator[Notice]:
    for wall in walls(body):
        yield from process.wall_notices(wall.thickness, f"{name}: the wall between {wall.inside} and {wall.outside}")
    if body.bore:
        yield from process.hole_notices(body.bore.diameter, body.width, f"{name}: the bore")
