"""What every machine offers to the roll test, the solids and the report."""

from typing import Protocol

from gearsolid.pairs.engagement import Engagement
from gearsolid.pairs.part import Part


class Machine(Protocol):
    """Parts in their places, and the pairs among them that can touch."""

    @property
    def title(self) -> str:
        """One line saying what the machine is, with its counts."""
        ...

    @property
    def ratio(self) -> float:
        """Input turns per output turn [-], negative when the output turns the other way."""
        ...

    @property
    def centre_distance(self) -> float:
        """Distance of the working axes [mm] (eccentricity for a pin-wheel reducer)."""
        ...

    @property
    def parts(self) -> tuple[Part, ...]:
        """All parts, placed and moving with the input."""
        ...

    @property
    def engagements(self) -> tuple[Engagement, ...]:
        """Every pair of outlines that can touch."""
        ...
