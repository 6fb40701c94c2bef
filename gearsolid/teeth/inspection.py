"""Tooth thickness as an inspector measures it: span, pins or balls, chord. By formula, and from the drawn outline.

The two ways share nothing: the formulas use tooth count, shift and thinning (ISO 21771), the others lay anvils and pins
against the outline itself. The pins of helical gears are balls, and their anvils stand square to the teeth at the base
circle; the base helix angle carries both over from the transverse outline.
"""

from collections.abc import Callable

import numpy as np
from scipy.optimize import brentq

from gearsolid.curves.curve import Curve, Reals
from gearsolid.curves.parallel import Parallel
from gearsolid.errors import DesignError
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.involute_member import InvoluteMember
from gearsolid.teeth.involute_relations import inv, inverse_inv, reach


def ideal_span_teeth(gear: InvoluteGear) -> float:
    """Teeth to span [-], not whole, for anvils that touch the circle of diameter d + 2 x mn. ISO 21771."""
    shift = gear.profile_shift / gear.teeth
    tangent, helix = np.tan(np.radians(gear.pressure_angle_deg)), np.radians(gear.helix_angle_deg)
    lean = np.cos(helix) ** 2 + tangent**2
    root = np.sqrt(lean * (1 / np.cos(helix) + 2 * shift) ** 2 - 1)
    gain = (1 + np.sin(helix) ** 2 / lean) * root - inv(gear.transverse_angle) - 2 * shift * tangent
    return float(gear.teeth * gain / np.pi + 0.5)


def span_limits(gear: InvoluteGear) -> tuple[int, int]:
    """Fewest and most teeth over which parallel anvils touch the involutes [-]; the first above the second if none."""
    start = gear.thickness_at(gear.base_radius)
    reaches = (reach(r, gear.base_radius) for r in (gear.form_radius, gear.involute_end_radius))
    low, high = ((2 * length - start) / gear.base_pitch + 1 for length in reaches)
    return max(1, int(np.ceil(low))), int(np.floor(high))


def span(gear: InvoluteGear, teeth: int) -> float:
    """Span measurement (base tangent length) over a number of teeth [mm]. ISO 21771.

    Args:
        gear: external gear.
        teeth: teeth spanned [-], near `ideal_span_teeth`.

    Raises:
        DesignError: parallel anvils over that many teeth touch no involute.
    """
    low, high = span_limits(gear)
    if not low <= teeth <= high:
        raise _no_span(gear, teeth)
    return ((teeth - 1) * gear.base_pitch + gear.thickness_at(gear.base_radius)) * gear.base_helix_cosine


def drawn_span(gear: InvoluteGear, teeth: int) -> float:
    """Span measurement over a number of teeth [mm], by parallel anvils laid against the outline.

    Raises:
        DesignError: parallel anvils over that many teeth touch no involute.
    """
    flank = _upper_flank(gear)
    turn = np.exp(1j * np.pi * (teeth - 1) / gear.teeth)
    touch = _root(flank, lambda t: float(np.imag(flank.tangent(t) * turn)))
    if touch is None:
        raise _no_span(gear, teeth)
    return 2 * float(np.imag(flank.point(touch) * turn)) * gear.base_helix_cosine


def _no_span(gear: InvoluteGear, teeth: int) -> DesignError:
    low, high = span_limits(gear)
    allowed = f"{low} to {high} teeth do" if low <= high else "no number of teeth does: use pins"
    return DesignError(
        f"parallel anvils over {teeth} teeth touch no involute of this {gear.teeth}-tooth gear; {allowed}"
    )


def ideal_pin(member: InvoluteMember) -> float:
    """Diameter [mm] of pins or balls that touch the flanks at the circle of diameter d + 2 x mn. ISO 21771.

    Where that circle crosses no involute, the nearest one that does. For helical members by the straight gear that
    stands for them, with z / cos^3 of the helix angle teeth.
    """
    helix, angle = np.cos(np.radians(member.helix_angle_deg)), np.radians(member.pressure_angle_deg)
    radius = member.reference_radius / helix**2
    base = radius * np.cos(angle)
    half_space = (np.pi * member.module - member.thickness * helix) / (2 * radius)
    inner, outer = sorted((member.form_radius, member.involute_end_radius))
    shifted = member.reference_radius + member.hand * member.profile_shift * member.module
    touch = radius + min(max(shifted, inner), outer) - member.reference_radius
    tangent = reach(touch, base) / base
    centre = tangent - inv(angle) + member.hand * half_space
    return float(2 * member.hand * base * (np.tan(centre) - tangent))


def pin_dimension(member: InvoluteMember, pin: float) -> float:
    """Dimension over two pins or balls in opposite spaces of a gear, between them in a ring [mm]. ISO 21771.

    Args:
        member: gear or ring.
        pin: diameter of the pins or balls [mm], near `ideal_pin`.

    Raises:
        DesignError: the pins do not touch the involutes.
    """
    offset = pin / (2 * member.base_helix_cosine)
    half_space = np.pi / member.teeth - member.thickness / (2 * member.reference_radius)
    value = inv(member.transverse_angle) + member.hand * (offset / member.base_radius - half_space)
    if not (pin > 0 and value >= 0):
        raise _no_touch(member, pin)
    angle = float(inverse_inv(value))
    along = member.base_radius * np.tan(angle) - member.hand * pin / 2 * member.base_helix_cosine
    touch = np.hypot(along, member.base_radius)
    if along < 0 or not min(member.form_radius, member.tip_radius) <= touch <= max(
        member.form_radius, member.tip_radius
    ):
        raise _no_touch(member, pin)
    odd = np.cos(np.pi / (2 * member.teeth)) if member.teeth % 2 else 1.0
    return float(2 * member.base_radius / np.cos(angle) * odd) + member.hand * pin


def drawn_pin_dimension(member: InvoluteMember, pin: float) -> float:
    """Dimension over (in a ring: between) two pins or balls [mm], by circles laid into two spaces of the outline.

    Raises:
        DesignError: the pins do not touch the involutes.
    """
    centres = Parallel(_upper_flank(member), -pin / (2 * member.base_helix_cosine))
    middle = np.exp(-1j * np.pi / member.teeth)
    touch = _root(centres, lambda t: float(np.angle(centres.point(t) * middle)))
    if touch is None:
        raise _no_touch(member, pin)
    centre = complex(centres.point(touch))
    opposite = centre * np.exp(2j * np.pi * (member.teeth // 2) / member.teeth)
    return float(abs(centre - opposite)) + member.hand * pin


def _no_touch(member: InvoluteMember, pin: float) -> DesignError:
    return DesignError(
        f"pins of {pin:.4g} mm do not touch the involutes of this {member.teeth}-tooth member between radius "
        f"{member.form_radius:.5g} and {member.involute_end_radius:.5g} mm; about {ideal_pin(member):.4g} mm does"
    )


def chord(gear: InvoluteGear) -> tuple[float, float]:
    """Normal chordal tooth thickness at the reference circle, and the height of the tip above it [mm]. ISO 21771."""
    helix = np.cos(np.radians(gear.helix_angle_deg))
    radius = gear.reference_radius / helix**2
    half = gear.thickness * helix / (2 * radius)
    return float(2 * radius * np.sin(half)), float(
        radius * (1 - np.cos(half)) + gear.tip_radius - gear.reference_radius
    )


def drawn_chord(gear: InvoluteGear) -> tuple[float, float]:
    """Chordal thickness and height [mm] from where the outline of a straight gear crosses its reference circle.

    Raises:
        DesignError: the gear is helical (its outline is no normal section), or no flank is at the reference circle.
    """
    if gear.helix_angle_deg:
        raise DesignError(
            f"the outline of a gear with {gear.helix_angle_deg:g} deg helix angle is its transverse section; the "
            "normal chord can be drawn for 0 deg only"
        )
    flank = _upper_flank(gear)
    touch = _root(flank, lambda t: float(np.abs(flank.point(t))) - gear.reference_radius)
    if touch is None:
        raise DesignError(
            f"the reference circle, radius {gear.reference_radius:.5g} mm, does not cross the flanks, which run from "
            f"{gear.form_radius:.5g} to {gear.tip_radius:.5g} mm: measure over pins instead"
        )
    z = complex(flank.point(touch))
    return 2 * z.imag, gear.tip_radius - z.real


def rack_pin_height(*, module: float, pressure_angle_deg: float, thickness: float, height: float, pin: float) -> float:
    """Height over a pin laid into a rack [mm]. ISO 21771.

    Args:
        module: normal module [mm].
        pressure_angle_deg: [deg].
        thickness: normal tooth thickness [mm] on the line at `height`.
        height: of that line above the rack's base [mm].
        pin: diameter of the pin [mm].
    """
    a = np.radians(pressure_angle_deg)
    return float(height - (np.pi * module - thickness) / (2 * np.tan(a)) + pin / 2 * (1 + 1 / np.sin(a)))


def _upper_flank(member: InvoluteMember) -> Curve:
    """The involute above the +x axis, without relief."""
    upper = (p.curve for p in member.outline.pieces if p.role == "flank" and p.curve.start.imag > 0)
    return min(upper, key=lambda c: min(abs(abs(z) - member.form_radius) for z in (c.start, c.end)))


def _root(curve: Curve, function: Callable[[Reals], float]) -> Reals | None:
    """Parameter at which a function changes sign over the span, or None where it does not."""
    first, last = (function(np.asarray(t)) for t in curve.span)
    if first * last > 0:
        return None
    return np.asarray(brentq(lambda t: function(np.asarray(t)), *curve.span, xtol=1e-15))
