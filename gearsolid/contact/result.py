"""What the roll test says."""

from dataclasses import dataclass
from enum import StrEnum

from gearsolid.curves.curve import Reals


class Verdict(StrEnum):
    """What the roll test says of a pair.

    `rolls`: proven clear at every angle. `touches`: contact within the tolerance. `binds`: the parts overlap, with a
    witness. `unproven`: clear at every angle looked at, but the proof for the angles between ran out of budget.
    """

    ROLLS = "rolls"
    TOUCHES = "touches"
    BINDS = "binds"
    UNPROVEN = "unproven"


_SEVERITY = (Verdict.ROLLS, Verdict.TOUCHES, Verdict.UNPROVEN, Verdict.BINDS)


@dataclass(frozen=True)
class Contact:
    """Two parts turned through a whole pitch of their engagement.

    Args:
        name_a: first part.
        name_b: second part.
        verdict: of this pair.
        clearance: least normal distance [mm]; negative is the greatest depth of overlap.
        proven: the parts are nowhere nearer than this, at any angle of the revolution [mm]; at most the clearance.
        input_angle: input angle where the least clearance occurs [deg], 0 to 360.
        place: where it occurs in the machine's frame at rest [mm].
        roles: what touches there on a and b ("flank", "tip", "root", "fillet", "pin", "hole").
        play_angle: least angular play of b with a held [deg]; negative when even the best position overlaps;
            None for parts that never work together.
        play: the same as an arc on b's pitch circle [mm] (for pins in holes: the shift of the pin), or None.
        contact_ratio: mean number of tooth pairs in contact when b is turned against a; None where play is None or the
            parts bind.
        transmission_error: peak to peak of b's angle in driven contact over a pitch [deg]; None as contact_ratio.
        angles: input angles of the curves below [deg], shape (n,).
        clearances: least distance at those angles [mm], shape (n,).
        plays: angular play of b at those angles [deg], shape (n,), or None.
    """

    name_a: str
    name_b: str
    verdict: Verdict
    clearance: float
    proven: float
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
        """The contact that decides the verdict: of the worst verdict, the one with the least clearance."""
        return min((c for c in self.contacts if c.verdict is self.verdict), key=lambda c: c.clearance)

    @property
    def verdict(self) -> Verdict:
        """The worst verdict of all contacts."""
        return max((c.verdict for c in self.contacts), key=_SEVERITY.index)

    @property
    def proven(self) -> float:
        """No two parts come nearer than this, at any angle of the revolution [mm]."""
        return min(c.proven for c in self.contacts)

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
