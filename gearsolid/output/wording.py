"""The sentences in which every output says what the roll test found."""

from gearsolid.contact.finding import Finding
from gearsolid.contact.result import Contact, Verdict

VERDICTS = {
    Verdict.ROLLS: "It rolls",
    Verdict.TOUCHES: "It rolls, touching",
    Verdict.BINDS: "It binds",
    Verdict.UNPROVEN: "Not proven to roll",
}


def finding(contact: Contact) -> str:
    """What was found at a contact's tightest place, one sentence."""
    if contact.verdict is Verdict.BINDS:
        amount = f"overlap by {-contact.clearance:.4f} mm"
    else:
        amount = f"come within {max(contact.clearance, 0.0):.4f} mm"
    return (
        f"{contact.name_a} and {contact.name_b} {amount} at input angle {angle_text(contact.input_angle)}, "
        f"at x {contact.place.real:.3f}, y {contact.place.imag:.3f} mm ({contact.roles[0]} on {contact.roles[1]})."
    )


def number(value: float | None, digits: int) -> str:
    """A figure with so many decimals, or nothing where it has no meaning."""
    # Adding zero turns a rounded -0.0 into 0.0.
    return "" if value is None else f"{round(value, digits) + 0.0:.{digits}f}"


def ratio_text(ratio: float) -> str:
    """A ratio of input turns to output turns, as in 29 : 1 or 1 : 7.5; negative when they turn opposite ways."""
    return f"{ratio:.6g} : 1" if abs(ratio) >= 1 else f"{'-' if ratio < 0 else ''}1 : {1 / abs(ratio):.6g}"


def angle_text(angle: float) -> str:
    """An angle from 0 to below 360 degrees."""
    return f"{round(angle, 3) % 360:.3f}°"


def cause_text(found: Finding) -> str:
    """A named cause in two sentences: what is the matter, and what to change."""
    more = f" (and {len(found.pairs) - 1} pairs alike)" if len(found.pairs) > 1 else ""
    return f"{found.sentence}{more}. To do: {found.remedy}."
