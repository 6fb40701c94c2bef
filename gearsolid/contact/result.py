"""What the roll test says."""

from dataclasses import dataclass
from enum import StrEnum

import numpy as np

from gearsolid.curves.curve import Reals


class Verdict(StrEnum):
    """`rolls`: clear everywhere. `touches`: contact within the tolerance. `binds`: the parts overlap."""

    ROLLS = "rolls"
    TOUCHES = "touches"
    BINDS = "binds"


@dataclass(frozen=True)
class Contact:
    """Two parts turned through a whole pitch of their engagement.

    Args:
        name_a: first part.
        name_b: second part.
        verdict: of this pair.
        clearance: least normal distance [mm]; negative is the greatest depth of overlap.
        input_angle: input angle where it occurs [deg], 0 to 360.
        place: where it occurs in the machine's frame at rest [mm].
        roles: what touches there on a and b ("flank", "tip", "root", "fillet", "pin", "hole").
        play_angle: least angular play of b with a held [deg]; negative when even the best position overlaps;
            None for parts that never work together.
        play: the same as an arc on b's pitch circle [mm] (for pins in holes: the shift of the pin), or None.
        contact_ratio: mean number of tooth pairs in contact when b is turned against a, or None.
        transmission_error: peak to peak of b's angle in driven contact over a pitch [deg], or None.
        angles: input angles of the curves below [deg], shape (n,).
        clearances: least distance at those angles [mm], shape (n,).
        plays: angular play of b at those angles [deg], shape (n,), or None.
    """

    name_a: str
    name_b: str
    verdict: Verdict
    clearance: float
    input_angle: float
    place: complex
    roles: tuple[str, str]
    play_angle: float | None
    play: float | None
    contact_ratio: float | None
    transmission_error: float | None
    angles: Reals
    clearances: Reals
    plays: Reals | None


@dataclass(frozen=True)
class RollResult:
    """The verdict on a machine and on each pair of parts in it."""

    contacts: tuple[Contact, ...]
    tolerance: float

    @property
    def worst(self) -> Contact:
        """The contact with the least clearance."""
        return self.contacts[int(np.argmin([c.clearance for c in self.contacts]))]

    @property
    def verdict(self) -> Verdict:
        """The worst contact's verdict."""
        return self.worst.verdict

    @property
    def sentence(self) -> str:
        """One line: verdict, pair, amount, angle and place."""
        c = self.worst
        amount = (
            f"depth {-c.clearance:.4f} mm" if c.verdict is Verdict.BINDS else f"least clearance {c.clearance:.4f} mm"
        )
        return (
            f"{c.verdict.value}: {c.name_a} with {c.name_b}, {amount} at input angle {c.input_angle:.3f} deg, "
            f"x {c.place.real:.3f} y {c.place.imag:.3f} mm ({c.roles[0]} on {c.roles[1]})"
        )
