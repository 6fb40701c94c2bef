"""What every shaft hole of a body offers: round, keyed, flattened, square or hexagonal."""

from typing import Protocol

from gearsolid.curves.outline import Outline


class ShaftHole(Protocol):
    """A hole round the axis, the same all the way through but for chamfers at its mouths."""

    @property
    def diameter(self) -> float:
        """The size its callout starts with [mm]: across the round part, or across flats."""
        ...

    @property
    def radius(self) -> float:
        """Half the diameter [mm]."""
        ...

    @property
    def chamfer(self) -> float:
        """45 degree chamfer at both mouths [mm], 0 without."""
        ...

    @property
    def callout(self) -> str:
        """The size as a drawing states it [mm]."""
        ...

    @property
    def reach(self) -> float:
        """Largest distance of removed material from the axis [mm]."""
        ...

    @property
    def outline(self) -> Outline:
        """Section between the chamfers, clockwise: material outside."""
        ...

    @property
    def mouth(self) -> Outline:
        """Boundary in the end faces, clockwise."""
        ...

    def volume(self, width: float) -> float:
        """Volume taken out of a body over a length [mm] of hole [mm3], exact.

        Raises:
            DesignError: the chamfers find no room in this length.
        """
        ...
