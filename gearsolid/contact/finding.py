"""A named cause of what the roll test found, and what it is found from."""

from dataclasses import dataclass
from enum import StrEnum

from gearsolid.contact.result import Contact, Verdict
from gearsolid.pairs.engagement import Engagement
from gearsolid.teeth.member import Member


class Cause(StrEnum):
    """What goes wrong.

    `tip interference`: a tip strikes a tip or the flank of its mate. `root interference`: a tip digs into a fillet or a
    root. `involute interference`: a tip reaches past the point where its mate's involute begins at the base circle.
    `trimming`: a pinion cannot be moved into its ring radially. `undercut`: undercut has taken flank that the mate
    would use. `contact ratio`: the next pair of teeth comes too late. `neighbours`: parts that never work together
    collide. `negative play`: the teeth are too thick for the centre distance. `out of step`: a part stands turned off
    the middle of its play. `early contact`: teeth meet well before the line of centres, where friction bites.
    """

    TIP = "tip interference"
    ROOT = "root interference"
    INVOLUTE = "involute interference"
    TRIMMING = "trimming"
    UNDERCUT = "undercut"
    CONTACT_RATIO = "contact ratio"
    NEIGHBOURS = "neighbours"
    NEGATIVE_PLAY = "negative play"
    OUT_OF_STEP = "out of step"
    EARLY = "early contact"


@dataclass(frozen=True)
class Finding:
    """One thing that is wrong, or worth knowing.

    Args:
        cause: its name.
        pairs: names of the parts, for every pair alike; the place belongs to the first.
        binds: whether it makes the parts bind; else it is only reported.
        sentence: what is the matter, with numbers.
        size: how large it is [mm], as the sentence says.
        place: where, in the machine's frame at rest [mm].
        input_angle: when [deg].
        remedy: what to change, with numbers.
    """

    cause: Cause
    pairs: tuple[tuple[str, str], ...]
    binds: bool
    sentence: str
    size: float
    place: complex
    input_angle: float
    remedy: str


@dataclass(frozen=True)
class Suspects:
    """A contact with all that is known of its two parts.

    Args:
        e: how they move.
        c: what the roll test found.
        members: the two as toothed members, None where a part is none.
    """

    e: Engagement
    c: Contact
    members: tuple[Member | None, Member | None]

    @property
    def binds(self) -> bool:
        """Whether the two overlap."""
        return self.c.verdict is Verdict.BINDS

    @property
    def distance(self) -> float:
        """Of their axes [mm]."""
        return abs(self.e.centre_b - self.e.centre_a)

    def found(self, cause: Cause, size: float, sentence: str, remedy: str, *, binds: bool) -> Finding:
        """A finding at the place of the least clearance."""
        c = self.c
        return Finding(cause, ((c.name_a, c.name_b),), binds, sentence, size, c.place, c.input_angle, remedy)


def late(pair: Suspects, ratio: float, pitch: float, along: str) -> Finding:
    """The next pair of teeth comes too late: a contact ratio [-] under 1, with the pitch [mm] it is counted along."""
    size = (1 - ratio) * pitch
    sentence = (
        f"the contact ratio is {ratio:.3f}: each pair of teeth leaves {size:.4f} mm {along} before the next comes"
    )
    remedy = "take longer addenda, more teeth or a smaller centre distance until the ratio is above 1, better 1.2"
    return pair.found(Cause.CONTACT_RATIO, size, sentence, remedy, binds=False)
