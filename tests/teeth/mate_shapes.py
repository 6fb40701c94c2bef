"""Given members for the tests of mates, written out of plain curves."""

import numpy as np

from gearsolid.contact.result import Contact
from gearsolid.contact.roll import roll_engagements
from gearsolid.curves.curve import Mirrored, Reversed, Turned
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.curves.rolling import CircleOnCircle
from gearsolid.curves.roulette import Trace
from gearsolid.pairs.engagement import Engagement
from gearsolid.teeth.mate import Mate


def tooth(lower, tip_radius, root_radius, teeth):
    """A symmetric tooth from the curves of its lower side, root to tip, with arcs on tip and root circle."""
    sides = [Piece(c, "flank") for c in lower]
    top, foot = float(np.angle(lower[-1].end)), float(np.angle(lower[0].start))
    tip = [Piece(Arc(0, tip_radius, top, -top), "tip")] if top < -1e-12 else []
    root = Piece(Arc(0, root_radius, -foot, 2 * np.pi / teeth + foot), "root")
    return Outline((*sides, *tip, *(Piece(Mirrored(p.curve), p.role) for p in reversed(sides)), root), teeth)


def cycloidal_side(teeth, outside, inside, addendum, dedendum):
    """Lower side of a cycloidal tooth of module 1: hypocycloid below the pitch circle, epicycloid above."""
    r, half = teeth / 2, complex(np.exp(-0.5j * np.pi / teeth))

    def roll(a, reach):
        return float(np.arccos(((r + a) ** 2 + a**2 - reach**2) / (2 * a * (r + a))))

    face = Trace(CircleOnCircle(r, outside), -outside, 0.0, roll(outside, r + addendum))
    flank = Trace(CircleOnCircle(r, -inside), inside, 0.0, roll(-inside, r - dedendum))
    return Reversed(Turned(flank, half)), Turned(face, half)


def cycloidal(teeth, outside, inside, addendum=0.9, dedendum=1.1):
    return tooth(
        cycloidal_side(teeth, outside, inside, addendum, dedendum), teeth / 2 + addendum, teeth / 2 - dedendum, teeth
    )


def straight(teeth, tip_radius, root_radius, half_tip, half_root):
    """Straight-sided teeth, half as wide as given at tip and root [mm]."""
    top = np.sqrt(tip_radius**2 - half_tip**2) - 1j * half_tip
    foot = np.sqrt(root_radius**2 - half_root**2) - 1j * half_root
    return tooth([Segment(complex(foot), complex(top))], tip_radius, root_radius, teeth)


def ogival(teeth, pitch_radius, radius, root_radius):
    """Pointed teeth of radial flanks with arcs of `radius` above the pitch circle, as old clock wheels have them."""
    half = np.pi / (2 * teeth)
    joint = pitch_radius * complex(np.exp(-1j * half))
    # The arc sets out along the radial flank: its centre lies across from there.
    centre = joint + 1j * radius * joint / abs(joint)
    top = centre.real + np.sqrt(radius**2 - centre.imag**2)
    start, end = (float(np.angle(z - centre)) for z in (joint, top))
    return tooth(
        [Segment(joint * root_radius / pitch_radius, joint), Arc(centre, radius, start, end)], top, root_radius, teeth
    )


def rack(angle_deg, addendum, dedendum, thickness=np.pi / 2):
    """One pitch, pi mm, of a straight rack as `rack_mate` takes it."""
    lean, half = np.tan(np.radians(angle_deg)), thickness / 2
    foot, top = dedendum + 1j * (half + dedendum * lean), -addendum + 1j * (half - addendum * lean)
    points = [dedendum + 0.5j * np.pi, foot, top, np.conj(top), np.conj(foot), dedendum - 0.5j * np.pi]
    roles = ["root", "flank", "tip", "flank", "root"]
    return [Piece(Segment(complex(a), complex(b)), r) for a, b, r in zip(points[:-1], points[1:], roles, strict=True)]


def facing(given, mate: Mate) -> Engagement:
    """The given member on the origin and its mate, a tooth of the first in a space of the second on the x axis."""
    inside = mate.outline.area < 0 or mate.reference_radius + mate.centre_distance < given.r_max
    far = -mate.centre_distance if mate.outline.area < 0 else mate.centre_distance
    sense = 1 if inside else -1
    turn = np.pi / mate.teeth + (0 if inside else np.pi)
    return Engagement("given", "mate", given, mate.outline, 0, far, 0.0, turn, 1.0, sense * given.order / mate.teeth)


def rolled(given, mate: Mate) -> Contact:
    return roll_engagements([facing(given, mate)]).contacts[0]
