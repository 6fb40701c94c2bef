"""The roll test as lines for a terminal."""

from collections.abc import Sequence
from textwrap import fill

from gearsolid.contact.finding import Finding
from gearsolid.contact.result import Contact, RollResult, Verdict
from gearsolid.output.report import tightest_first
from gearsolid.output.wording import VERDICTS, cause_text, finding, number, ratio_text
from gearsolid.pairs.machine import Machine

_HEADS = (
    ("", "", "clearance", "play", "play", "contact", "transmission"),
    ("pair", "verdict", "mm", "mm", "deg", "ratio", "error, deg"),
)
# Columns that hold words line up on the left, figures on the right.
_WORDS = 2


def roll_text(name: str, machine: Machine, result: RollResult, found: Sequence[Finding]) -> str:
    """Verdict, machine, every contact, the tightest first, and the named causes.

    Args:
        name: of the recipe.
        machine: the machine.
        result: its roll test.
        found: the named causes.

    Returns:
        Lines without a final line end.
    """
    said = finding(result.worst)
    if result.verdict is Verdict.TOUCHES:
        said += f" Contact within {result.tolerance:g} mm counts as rolling."
    if result.verdict in (Verdict.ROLLS, Verdict.UNPROVEN):
        said += f" Between the angles looked at, nothing comes nearer than {result.proven:.4f} mm."
    return "\n".join(
        [
            name,
            machine.title,
            "",
            fill(f"{VERDICTS[result.verdict]}. {said}", 100),
            "",
            f"ratio            {ratio_text(machine.ratio)}, input to output",
            f"centre distance  {machine.centre_distance:.4f} mm",
            "",
            *_table([*_HEADS, *(_row(c) for c in tightest_first(result))]),
            *(line for f in found for line in ("", _cause(f))),
        ]
    )


def _cause(f: Finding) -> str:
    return fill(f"{f.cause.value}{'' if f.binds else ' (reported)'}: {cause_text(f)}", 100, subsequent_indent="  ")


def _row(c: Contact) -> tuple[str, ...]:
    return (
        f"{c.name_a} with {c.name_b}",
        c.verdict.value,
        number(c.clearance, 4),
        number(c.play, 4),
        number(c.play_angle, 4),
        number(c.contact_ratio, 3),
        number(c.transmission_error, 5),
    )


def _table(rows: list[tuple[str, ...]]) -> list[str]:
    widths = [max(map(len, column)) for column in zip(*rows, strict=True)]
    return ["  ".join(_cell(k, *pair) for k, pair in enumerate(zip(row, widths, strict=True))).rstrip() for row in rows]


def _cell(column: int, text: str, width: int) -> str:
    return text.ljust(width) if column < _WORDS else text.rjust(width)
