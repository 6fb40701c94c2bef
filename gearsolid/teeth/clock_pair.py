"""A wheel and a pinion that work together, and which of them drives."""

from dataclasses import dataclass
from enum import StrEnum

from gearsolid.teeth.member import Member


class Drives(StrEnum):
    """Which member of a clock pair drives."""

    WHEEL = "wheel"
    PINION = "pinion"


@dataclass(frozen=True)
class ClockPair:
    """A wheel and a pinion that work together.

    Args:
        wheel: the larger member.
        pinion: the smaller one.
        centre_distance: [mm].
        drives: which of them drives.
    """

    wheel: Member
    pinion: Member
    centre_distance: float
    drives: Drives

    @property
    def driver(self) -> Member:
        """The member that drives."""
        return self.wheel if self.drives is Drives.WHEEL else self.pinion

    @property
    def driven(self) -> Member:
        """The member that is driven."""
        return self.pinion if self.drives is Drives.WHEEL else self.wheel
