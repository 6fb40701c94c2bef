"""What the numbers of involute members say of their interference, thickness, undercut and assembly."""

from collections.abc import Callable, Iterator

import numpy as np

from gearsolid.contact.finding import Cause, Finding, Suspects, late
from gearsolid.errors import DesignError
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.involute_member import InvoluteMember
from gearsolid.teeth.involute_pair import InvolutePair
from gearsolid.teeth.involute_relations import inv, inverse_inv
from gearsolid.teeth.ring_margins import RingMargins, ring_margins

# Lengths this small [mm] are nothing.
_NOTHING = 1e-6
_HALVINGS = 40


def involute_of(pair: Suspects) -> tuple[InvolutePair, str, str] | None:
    """The two as involute gear and mate, with their names; None for other members."""
    sides = list(zip(pair.members, (pair.c.name_a, pair.c.name_b), strict=True))
    # A ring is always the mate.
    sides.sort(key=lambda side: getattr(side[0], "hand", 1), reverse=True)
    (gear, gear_name), (mate, mate_name) = sides
    if not (isinstance(gear, InvoluteGear) and isinstance(mate, InvoluteMember)):
        return None
    try:
        return InvolutePair(gear, mate, pair.distance), gear_name, mate_name
    except DesignError:
        return None


def too_thick(pair: Suspects, known: InvolutePair) -> Iterator[Finding]:
    """Teeth too thick for the centre distance."""
    if known.play >= -_NOTHING:
        return
    lack, hand = -known.play, known.mate.hand
    bases = known.gear.base_radius * hand + known.mate.base_radius
    # The play grows by 2 (inv a' - inv a) times the base radii; a ring is the other way round.
    angle = inv(known.working_angle) + hand * lack * np.cos(known.working_angle) / (2 * bases)
    distance = bases / float(np.cos(inverse_inv(angle)))
    thin = lack * np.cos(known.working_angle) / np.cos(known.gear.transverse_angle)
    sentence = f"the teeth are too thick for the centre distance: the play is {-lack:.4f} mm at the working circles"
    remedy = (
        f"set the centre distance to {distance:.4f} mm or {'more' if hand > 0 else 'less'} (now {pair.distance:.4f} "
        f"mm), or thin the teeth by {thin:.4f} mm in all"
    )
    yield pair.found(Cause.NEGATIVE_PLAY, lack, sentence, remedy, binds=True)


def interference(pair: Suspects, known: InvolutePair, gear: str, mate: str) -> Iterator[Finding]:
    """A tip beyond the flank it should work on; it binds where the play does not make up for it."""
    names = (gear, mate), (mate, gear)
    sides = zip(names, (known.gear, known.mate), known.needed_shortening, _past_base(known), strict=True)
    for (own, other), member, short, past in sides:
        if short <= _NOTHING:
            continue
        limit = member.tip_radius - member.hand * short
        beyond = (
            f"reaches past the point where the involute of {other} begins at the base circle"
            if past
            else f"reaches below the flank of {other}, into its fillet"
        )
        sentence = f"the tip of {own}, radius {member.tip_radius:.4f} mm, {beyond}, by {short:.4f} mm of radius"
        if pair.binds:
            sentence += f"; the overlap is {-pair.c.clearance:.4f} mm deep"
        else:
            sentence += "; the play makes up for it, but the ratio wavers"
        least = "no lower than" if member.hand < 0 else "no higher than"
        remedy = f"shorten the tip of {own} by {short:.4f} mm, to a radius {least} {limit:.4f} mm"
        if known.gear.profile_shift == 0 and past:
            remedy += f", or give {other} more teeth"
        binds = pair.binds and _explains(pair, known)
        yield pair.found(Cause.INVOLUTE if past else Cause.ROOT, short, sentence, remedy, binds=binds)
    if known.mate.hand < 0 and known.margins.trochoid < 0:
        yield _tips(pair, known, gear, mate)


def _explains(pair: Suspects, known: InvolutePair) -> bool:
    """Whether interference is why the pair binds: a tip is where it does, or the teeth are not too thick."""
    return "tip" in pair.c.roles or known.play >= -_NOTHING


def _past_base(known: InvolutePair) -> tuple[bool, bool]:
    """Whether each member's tip reaches past the other's base tangent point; a ring's flank has none above it."""
    offset = known.mate.hand * known.centre_distance * float(np.sin(known.working_angle))
    ours = float(np.sqrt(known.gear.tip_radius**2 - known.gear.base_radius**2))
    theirs = float(np.sqrt(max(known.mate.tip_radius**2 - known.mate.base_radius**2, 0.0)))
    return known.mate.hand > 0 and ours > offset, offset - known.mate.hand * theirs < 0


def _tips(pair: Suspects, known: InvolutePair, gear: str, mate: str) -> Finding:
    size = min(-known.margins.trochoid * known.mate.tip_radius, known.gear.module)
    short = _shortening(known, lambda m: m.trochoid)
    sentence = f"the tips of {gear} and {mate} cross where they meet, by {size:.4f} mm along the ring's tip circle"
    remedy = (
        f"shorten the tip of {gear} by {short:.4f} mm" if short else f"take a smaller tip on {gear}"
    ) + ", or a larger difference of tooth counts"
    return pair.found(Cause.TIP, size, sentence, remedy, binds=pair.binds and _explains(pair, known))


def _shortening(known: InvolutePair, margin: Callable[[RingMargins], float]) -> float | None:
    """By how much the gear's tip must be shortened for a margin of its ring to vanish [mm]; None where none does."""

    def left(short: float) -> float:
        return margin(
            ring_margins(
                teeth=(known.gear.teeth, known.mate.teeth),
                tip=(known.gear.tip_radius - short, known.mate.tip_radius),
                base=(known.gear.base_radius, known.mate.base_radius),
                distance=known.centre_distance,
                working=known.working_angle,
            )
        )

    low, high = 0.0, min(known.gear.module, known.gear.tip_radius - known.gear.base_radius - _NOTHING)
    if not left(high) >= 0:
        return None
    for _ in range(_HALVINGS):
        middle = (low + high) / 2
        low, high = (low, middle) if left(middle) >= 0 else (middle, high)
    return high


def shape(pair: Suspects, known: InvolutePair, gear: str, mate: str) -> Iterator[Finding]:
    """What an involute pair's own numbers warn of: reported, whether or not anything binds."""
    # Where the mate's tip reaches past the base tangent point it could use the whole involute.
    past = _past_base(known)[::-1]
    for member, active, name, whole in zip(
        (known.gear, known.mate), known.active_radii, (gear, mate), past, strict=True
    ):
        lost = member.form_radius - (member.base_radius if whole else active)
        if isinstance(member, InvoluteGear) and member.undercut > 0 and lost > _NOTHING:
            sentence = (
                f"undercut takes the flank of {name} up to radius {member.form_radius:.4f} mm, {lost:.4f} mm more than "
                f"its mate leaves unused: the contact ratio is {known.contact_ratio:.3f}, not "
                f"{known.nominal_contact_ratio:.3f}"
            )
            remedy = f"raise the profile shift of {name} from {member.profile_shift:g} to {member.least_shift:.3f}"
            yield pair.found(Cause.UNDERCUT, lost, sentence, remedy, binds=False)
    if known.contact_ratio < 1:
        yield late(pair, known.contact_ratio, known.gear.base_pitch, "along the line of action")
    if known.mate.hand < 0 and known.margins.trimming < 0:
        size = -known.margins.trimming * known.gear.tip_radius
        short = _shortening(known, lambda m: m.trimming)
        sentence = f"{gear} cannot be moved into {mate} radially: its tips are {size:.4f} mm too wide on the way"
        remedy = f"put {gear} in along the axis"
        if short:
            remedy += f", or shorten its tip by {short:.4f} mm"
        yield pair.found(Cause.TRIMMING, size, sentence, remedy, binds=False)
