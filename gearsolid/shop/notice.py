"""Something in a design that can be made but is worth a second look."""

from dataclasses import dataclass


@dataclass(frozen=True)
class Notice:
    """A number beyond what common practice advises. What cannot exist is refused instead.

    Args:
        code: stable name of the rule, as in "thin-wall".
        sentence: what was found, what is advised and what to try.
        number: the design's value, in the unit the sentence states.
        limit: the value advised, in the same unit.
    """

    code: str
    sentence: str
    number: float
    limit: float
