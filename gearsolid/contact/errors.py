"""Single-flank roll test of members with errors: bores off their centres and a wrong centre distance.

Errors are rigid motions, followed exactly over the whole period. What two perfect outlines do depends only on the
distance of their centres and on how a stands to the line of centres; that is rolled at a few distances, and
interpolated.
"""

from dataclasses import dataclass, replace
from math import gcd

import numpy as np

from gearsolid.contact.action import drive
from gearsolid.contact.double_flank import Composite
from gearsolid.curves.curve import Reals
from gearsolid.errors import DesignError
from gearsolid.pairs.engagement import Engagement

_DISTANCES = 5
_PER_PITCH = 16
_ROUNDS = 4


@dataclass(frozen=True)
class Misplaced:
    """How two members sit wrongly. At the start the centre of a's teeth is off its bore towards b.

    Args:
        runout_a: radial runout of a's teeth about its bore [mm]: twice the distance of the two centres.
        runout_b: the same of b [mm].
        distance: centre distance less the stated one [mm].
        phase_deg: direction in which b's teeth are off their bore at the start, from a towards b [deg].
    """

    runout_a: float = 0.0
    runout_b: float = 0.0
    distance: float = 0.0
    phase_deg: float = 0.0

    def __post_init__(self) -> None:
        if not (self.runout_a >= 0 and self.runout_b >= 0):
            raise DesignError(f"runouts are {self.runout_a:g} and {self.runout_b:g} mm; they must be 0 or more")


def turned(e: Engagement, wrong: Misplaced) -> tuple[Reals, Reals]:
    """How far b lags or leads while a drives it, over the whole period.

    Args:
        e: two members on fixed axes.
        wrong: their errors.

    Returns:
        Input angles [rad] and the extra turn of b from its stated motion [rad], shape (n,).

    Raises:
        DesignError: the members bind or lose each other at some angle.
    """
    pitches = e.a.order * e.b.order // gcd(e.a.order, e.b.order)
    psi = np.arange(pitches * _PER_PITCH) * (e.period / _PER_PITCH)
    line = (e.centre_b - e.centre_a) / abs(e.centre_b - e.centre_a)
    axes = abs(e.centre_b - e.centre_a) + wrong.distance
    reach = (wrong.runout_a + wrong.runout_b) / 2
    nodes = axes + reach * np.cos(np.pi * (np.arange(_DISTANCES) + 0.5) / _DISTANCES)
    rolled = [drive(replace(e, centre_b=e.centre_a + d * line)) for d in (nodes if reach else nodes[:1])]
    steps = np.append(rolled[0].sweep.psi, e.period)
    extra: Reals = np.zeros_like(psi)
    for _ in range(_ROUNDS):
        off_a = wrong.runout_a / 2 * np.exp(1j * e.rate_a * psi)
        off_b = wrong.runout_b / 2 * np.exp(1j * (e.rate_b * psi + extra + np.radians(wrong.phase_deg)))
        apart = axes + off_b - off_a
        lean: Reals = np.angle(apart).astype(np.float64)
        stands = np.mod(psi - lean / e.rate_a, e.period)
        stops = np.array([np.interp(stands, steps, np.append(d.turn, d.turn[0])) for d in rolled])
        extra = lean * (1 - e.rate_b / e.rate_a) + _between(nodes[: len(rolled)], stops, np.abs(apart))
    return psi.astype(np.float64), extra


def _between(nodes: Reals, values: Reals, at: Reals) -> Reals:
    """The polynomial through values at the nodes, one column a place."""
    total = np.zeros_like(at)
    for k, node in enumerate(nodes):
        others = np.delete(nodes, k)
        total += values[k] * np.prod([(at - o) / (node - o) for o in others], axis=0)
    return total


def single_flank(e: Engagement, wrong: Misplaced) -> Composite:
    """Tangential composite deviation while a drives b, over the whole period.

    Args:
        e: two members on fixed axes.
        wrong: their errors.

    Returns:
        The record as an arc of b's pitch circle [mm]; its `total` is Fi' and its `one_pitch` fi'.

    Raises:
        DesignError: the members bind or lose each other at some angle.

    Source: definitions of ISO 1328-1, from memory.
    """
    psi, extra = turned(e, wrong)
    pitch_point = e.pitch_point
    if pitch_point is None:
        raise DesignError(f"{e.name_a} and {e.name_b} turn at the same rate; they have no pitch circles")
    return Composite.of(np.degrees(psi * e.rate_a), extra * abs(pitch_point - e.centre_b), _PER_PITCH)
