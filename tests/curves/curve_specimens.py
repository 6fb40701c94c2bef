"""One curve of every class, by a human name, and formulas written independently of the library."""

from math import pi, tan

import numpy as np

from gearsolid.curves.curve import Curve, Mirrored, Reversed, Section, Turned
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.fit import fit
from gearsolid.curves.parallel import Parallel
from gearsolid.curves.primitives import Arc, Ellipse, Formula, Segment
from gearsolid.curves.rolling import CircleOnCircle, CircleOnLine, LineOnCircle
from gearsolid.curves.roulette import Roulette, Trace


def parabola(c: float, first: float, last: float) -> Formula:
    """y^2 = 4 c x, with y as the parameter over 2 c."""
    return Formula(
        lambda u: c * u**2 + 2j * c * u,
        lambda u: 2 * c * u + 2j * c,
        lambda u: np.full(np.shape(u), 2 * c),
        first,
        last,
    )


def involute(base_radius: float, first: float, last: float) -> Formula:
    """Involute of a circle by its roll angle [rad], unwinding counter-clockwise from the x axis."""
    return Formula(
        lambda t: base_radius * np.exp(1j * t) * (1 - 1j * t),
        lambda t: base_radius * t * np.exp(1j * t),
        lambda t: base_radius * (1 + 1j * t) * np.exp(1j * t),
        first,
        last,
    )


def epicycloid(fixed: float, rolling: float, roll: float, start: float = 0.0) -> Trace:
    """From its cusp on the x axis."""
    return Trace(CircleOnCircle(fixed, rolling), -rolling, start, roll)


def hypocycloid(fixed: float, rolling: float, roll: float, start: float = 0.0) -> Trace:
    """From its cusp on the x axis, clockwise."""
    return Trace(CircleOnCircle(fixed, -rolling), rolling, start, roll)


def corner() -> Formula:
    """Two straight lines that meet at (1, 0)."""
    return Formula(
        lambda t: np.where(t < 1, t, 1) + 1j * np.where(t < 1, 0, t - 1),
        lambda t: np.where(t < 1, 1, 1j),
        lambda t: np.zeros(np.shape(t)),
        0.0,
        2.5,
        (1.0,),
    )


def rack_flank(angle: float = np.radians(20), height: float = 2.0) -> Segment:
    """A straight rack flank through the pitch point, x outward."""
    return Segment(-height * (1 + 1j * tan(angle)), height * (1 + 1j * tan(angle)))


SPECIMENS: dict[str, Curve] = {
    "segment": Segment(1, 3 + 2j),
    "clockwise arc": Arc(1 + 1j, 2, 2, -3),
    "ellipse": Ellipse(3, 1, 0.1, 6, 1j),
    "parabola": parabola(1.5, -1, 2),
    "corner": corner(),
    "cycloid arch": Trace(CircleOnLine(3), -3, 0, 2 * pi),
    "two cycloid arches": Trace(CircleOnLine(3), -3, 0, 4 * pi),
    "epicycloid": epicycloid(32, 2, pi / 2),
    "hypocycloid": hypocycloid(20, 6, 1.2),
    "whole deltoid": hypocycloid(6, 2, 6 * pi),
    "curtate trochoid": Trace(CircleOnCircle(9, -10), 12, -1, 5),
    "involute from its cusp": Trace(LineOnCircle(10), 0, 0, 8),
    "undulary": Roulette(Segment(0, 9), Ellipse(2, 1.2), 1.6),
    "ellipse on ellipse": Roulette(Ellipse(2, 1.2, 0, 3), Reversed(Ellipse(2, 1.2, -5, 0)), 1.6 + 0.2j),
    "envelope of a rack": Envelope(rack_flank(), LineOnCircle(20)),
    "envelope of an epicycloid": Envelope(Turned(epicycloid(32, 2, 1.5), -1), CircleOnCircle(8, 32), -1),
    "envelope of a pin": Envelope(Arc(-10, 1, -1, 1), CircleOnCircle(9, -10)),
    "parallel of an ellipse": Parallel(Ellipse(3, 1, 0.3, 6), 0.5),
    "parallel of an epicycloid from its cusp": Parallel(epicycloid(32, 2, 1.5), -0.4),
    "turned": Turned(Ellipse(3, 1, 0, 2), 2j, 1),
    "mirrored": Mirrored(epicycloid(32, 2, 1.5)),
    "reversed": Reversed(hypocycloid(20, 6, 1.2)),
    "section": Section(Ellipse(3, 1), 1, 2),
    "section from a cusp inside": Section(Trace(CircleOnLine(3), -3, -2, 2), 0, 2),
    "spline": fit(Ellipse(3, 1, 0, 2), 1e-3)[0],
}
