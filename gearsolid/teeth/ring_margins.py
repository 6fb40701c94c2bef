"""Margins against the three interferences of a pinion inside a ring: planet in annulus, cutter in the ring it cuts."""

from dataclasses import dataclass

import numpy as np

from gearsolid.teeth.involute_relations import inv


@dataclass(frozen=True)
class RingMargins:
    """How far a pinion and a ring are from interfering; every margin must be at least 0.

    Args:
        involute: the ring's tip stays on the pinion's involute [-]; below 0 it reaches under the pinion's base circle.
        trochoid: the pinion's tip corner passes the ring's tip corner [rad]; infinite where the tip circles do not
            cross: negative when the pinion's surrounds the ring's, positive when the pinion does not reach the ring.
        trimming: the pinion can be moved out radially [rad]; below 0 only along the axis; nan where the rule does not
            apply.
    """

    involute: float
    trochoid: float
    trimming: float


def ring_margins(
    *, teeth: tuple[int, int], tip: tuple[float, float], base: tuple[float, float], distance: float, working: float
) -> RingMargins:
    """Margins of a pinion (first) in a ring (second), all numbers positive.

    Formulas from a gear maker's technical reference (Elements of Metric Gear Technology, section 5), from memory.

    Args:
        teeth: tooth counts [-].
        tip: tip radii [mm].
        base: base radii [mm].
        distance: centre distance [mm].
        working: transverse working pressure angle [rad].
    """
    (z1, z2), (ra1, ra2), (rb1, rb2), a = teeth, tip, base, distance
    angle1, angle2 = np.arccos(rb1 / ra1), np.arccos(rb2 / ra2)
    gain1, gain2 = inv(angle1) - inv(working), inv(angle2) - inv(working)
    with np.errstate(invalid="ignore"):
        corner1 = np.arccos((ra2**2 - ra1**2 - a**2) / (2 * a * ra1)) + gain1
        corner2 = np.arccos((a**2 + ra2**2 - ra1**2) / (2 * a * ra2))
        feed1 = np.arcsin(np.sqrt((1 - (np.cos(angle1) / np.cos(angle2)) ** 2) / (1 - (z1 / z2) ** 2)))
        feed2 = np.arcsin(np.sqrt(((np.cos(angle2) / np.cos(angle1)) ** 2 - 1) / ((z2 / z1) ** 2 - 1)))
    trochoid = corner1 * z1 / z2 - gain2 - corner2
    if not abs(ra1 - ra2) < a < ra1 + ra2:
        trochoid = -np.inf if ra1 > ra2 else np.inf
    return RingMargins(
        float(z1 / z2 - 1 + np.tan(angle2) / np.tan(working)),
        float(trochoid),
        float(feed1 + gain1 - (z2 / z1) * (feed2 + gain2)),
    )
