"""The body before teeth: face width, bore, rim; and the body it becomes with an outline."""

from dataclasses import dataclass

from gearsolid.curves.loops import disc
from gearsolid.curves.outline import Outline
from gearsolid.errors import DesignError
from gearsolid.pairs.part import Body, Groove
from gearsolid.shop.shaft_hole import ShaftHole

# How the teeth of a helical body run up the face width: signs of the helix over equally long stretches.
HELICAL: tuple[int, ...] = (1,)
DOUBLE_HELICAL: tuple[int, ...] = (1, -1)


@dataclass(frozen=True)
class Blank:
    """What a member is made from.

    Args:
        face_width: [mm] along the axis.
        bore: shaft hole, or None.
        rim_diameter: outside diameter of an annulus [mm]; None takes two tooth depths beyond the root circle.
        z: height of the bottom face [mm].
        openings: crossings, bolt holes and the like, each wholly inside the body, material on their left.
        course: of helical teeth up the face width: `HELICAL` or `DOUBLE_HELICAL`, whose lower half has the member's
            own hand; straight teeth have none.
        groove: relief between the two courses of double helical teeth, or None.
    """

    face_width: float
    bore: ShaftHole | None = None
    rim_diameter: float | None = None
    z: float = 0.0
    openings: tuple[Outline, ...] = ()
    course: tuple[int, ...] = HELICAL
    groove: Groove | None = None

    def twists(self, rate: float) -> tuple[float, ...]:
        """Turns of the stretches [rad], given the turn per height [rad/mm]; none for straight teeth."""
        stretch = (self.face_width - (self.groove.width if self.groove else 0.0)) / len(self.course)
        return tuple(sign * rate * stretch for sign in self.course) if rate else ()


def is_ring(outline: Outline) -> bool:
    """Whether an outline is the toothed hole of an annulus (material outside)."""
    return outline.area < 0


def body_of(outline: Outline, blank: Blank, rate: float = 0.0) -> Body:
    """The body of a toothed member.

    Args:
        outline: the member's transverse section.
        blank: the body before teeth.
        rate: turn of the section per height [rad/mm], positive right-hand; 0 for straight teeth.

    Raises:
        DesignError: the bore, keyway or an opening reaches the root circle, an opening the bore, a ring is given a bore
            or a wheel a rim, or the rim leaves no material behind the teeth.
    """
    if is_ring(outline):
        return _ring_body(outline, blank, rate)
    if blank.rim_diameter is not None:
        raise DesignError(
            f"a rim diameter of {blank.rim_diameter:g} mm was given to a member with outside teeth; only an annulus "
            "has a rim: leave it out"
        )
    if blank.bore is not None and blank.bore.reach >= outline.r_min:
        raise DesignError(
            f"the bore (with keyways, corners, chamfer) reaches {blank.bore.reach:.4g} mm from the axis, but the root "
            f"circle has a radius of {outline.r_min:.4g} mm: take a smaller bore, no key, or more teeth"
        )
    _check_openings(blank, ("the bore", blank.bore.reach if blank.bore else 0.0), ("the root circle", outline.r_min))
    return Body(
        outline, blank.face_width, blank.openings, blank.bore, z=blank.z, twists=blank.twists(rate), groove=blank.groove
    )


def _ring_body(outline: Outline, blank: Blank, rate: float) -> Body:
    if blank.bore is not None:
        raise DesignError("a bore was given to an annulus, whose hole is toothed: leave the bore out")
    least = 2 * outline.r_max
    rim = blank.rim_diameter or least + 4 * (outline.r_max - outline.r_min)
    if rim <= least:
        raise DesignError(
            f"the rim diameter is {rim:g} mm, but the root circle of the annulus has {least:.4f} mm: take a larger rim"
        )
    _check_openings(blank, ("the root circle", outline.r_max), ("the rim", rim / 2))
    return Body(
        disc(rim / 2),
        blank.face_width,
        holes=(outline, *blank.openings),
        z=blank.z,
        twists=blank.twists(rate),
        groove=blank.groove,
    )


def _check_openings(blank: Blank, inside: tuple[str, float], outside: tuple[str, float]) -> None:
    """Refuse openings that break through to a boundary, each given by name and radius [mm]."""
    for opening in blank.openings:
        if not inside[1] < opening.r_min < opening.r_max < outside[1]:
            raise DesignError(
                f"openings reach from {opening.r_min:.4g} to {opening.r_max:.4g} mm from the axis; they must lie "
                f"between {inside[0]}, which reaches {inside[1]:.4g} mm with its corners, and {outside[0]} of "
                f"{outside[1]:.4g} mm radius: move them, or make them smaller"
            )
