"""What a cutter of sheet needs of a part: the boundaries of its section, what is shown beside them, and the words."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

from gearsolid.curves.outline import Outline
from gearsolid.pairs.part import Body
from gearsolid.shop.kerf import compensated

# Layers of a drawing, by purpose: what is cut, what is only shown, and words.
OUTSIDE, INSIDE, SHOWN, NOTE = "CUT_OUTSIDE", "CUT_INSIDE", "REFERENCE", "NOTE"

FINISHED = "Finished outline: whoever cuts it offsets for the kerf"


@dataclass(frozen=True)
class Flat:
    """The flat section of a part.

    Args:
        name: of the part, ASCII.
        outside: boundary of the blank, cut outside.
        inside: boundaries of holes, cut inside.
        raised: boundaries of what stands on the face; shown, not cut.
        circles: radii of pitch circles about the axis [mm]; shown, not cut.
        notes: lines of text, ASCII.
    """

    name: str
    outside: Outline
    inside: tuple[Outline, ...]
    raised: tuple[Outline, ...]
    circles: tuple[float, ...]
    notes: tuple[str, ...]

    @property
    def area(self) -> float:
        """Area of the section [mm2]."""
        return self.outside.area + sum(o.area for o in self.inside)

    @property
    def diameter(self) -> float:
        """Largest diameter about the axis [mm]."""
        return 2 * self.outside.r_max


def flat(body: Body, name: str, circles: Sequence[float] = ()) -> Flat:
    """The flat section of a body with its finished outlines, the bore between its chamfers.

    Args:
        body: the part.
        name: of the part, ASCII.
        circles: radii of its pitch circles [mm].
    """
    notes = [f"{name}, {body.width:g} mm thick", "Unit millimetre, scale 1 to 1", FINISHED]
    if body.twists:
        notes.append("Section at the bottom face: the teeth are helical and cannot be cut from sheet")
    if body.bore and body.bore.chamfer:
        notes.append(f"Bore chamfer {body.bore.chamfer:g} mm at 45 degrees, both ends, not drawn")
    notes += [f"Raised on one face by {b.height:g} mm, not cut: see layer {SHOWN}" for b in body.bosses]
    inside = (*body.holes, *([body.bore.outline] if body.bore else []))
    return Flat(name, body.outer, inside, tuple(b.outline for b in body.bosses), tuple(circles), tuple(notes))


def cutter_path(section: Flat, kerf: float) -> Flat:
    """The same section as the path of a cutter's centre, for a shop that agreed to take it so.

    Args:
        section: with its finished outlines.
        kerf: width of the cut [mm].

    Raises:
        DesignError: the kerf is not above 0, or the cutter does not fit a valley.
    """
    said = f"Path of the cutter's centre for a kerf of {kerf:g} mm: no further offset"
    return replace(
        section,
        outside=compensated(section.outside, kerf),
        inside=tuple(compensated(o, kerf) for o in section.inside),
        notes=tuple(said if n == FINISHED else n for n in section.notes),
    )
