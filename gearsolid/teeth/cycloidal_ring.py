"""Internal cycloidal wheels: the annulus that works with a cycloidal pinion inside it."""

from dataclasses import dataclass
from typing import ClassVar

from gearsolid.teeth.cycloidal import CycloidalGear


@dataclass(frozen=True)
class CycloidalRing(CycloidalGear):
    """An internal cycloidal wheel; its outline is travelled clockwise, the material outside.

    The addendum points towards the axis: its circle rolls inside the reference circle and draws a hypocycloid that
    works with the pinion's dedendum. The dedendum circle rolls outside and works with the pinion's addendum. Faces of
    ring and pinion keep clear of each other while the two describing circles together are no larger than the centre
    distance.

    Fields as in `CycloidalMember`; `teeth` is positive.

    Raises:
        DesignError: as for an external member; the message gives the limit.
    """

    hand: ClassVar[int] = -1
