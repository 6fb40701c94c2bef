"""Two outlines that can touch while their machine turns, seen in the frame in which both axes stand still."""

from dataclasses import dataclass

import numpy as np

from gearsolid.curves.outline import Outline
from gearsolid.errors import DesignError
from gearsolid.pairs.motion import Motion


@dataclass(frozen=True)
class Engagement:
    """Two outlines on fixed axes, turning at fixed rates with the input angle psi [rad].

    Args:
        name_a: part the first outline belongs to.
        name_b: part the second outline belongs to.
        a: first outline (the driver where one drives).
        b: second outline.
        centre_a: axis of a in the common frame at psi = 0 [mm].
        centre_b: axis of b [mm].
        angle_a: turn of a at psi = 0 [rad].
        angle_b: turn of b at psi = 0 [rad].
        rate_a: turns of a per input turn in the common frame [-].
        rate_b: turns of b per input turn in the common frame [-].
        frame_rate: turns of the common frame per input turn [-].
        must_touch: whether the two work together, so that play and contact ratio have a meaning.

    Raises:
        DesignError: the pitches of the two do not pass in step.
    """

    name_a: str
    name_b: str
    a: Outline
    b: Outline
    centre_a: complex
    centre_b: complex
    angle_a: float
    angle_b: float
    rate_a: float
    rate_b: float
    frame_rate: float = 0.0
    must_touch: bool = True

    def __post_init__(self) -> None:
        pitches_a, pitches_b = abs(self.rate_a) * self.a.order, abs(self.rate_b) * self.b.order
        if abs(pitches_a - pitches_b) > 1e-9 * max(pitches_a, pitches_b):
            raise DesignError(
                f"{self.name_a} passes {pitches_a:.9g} pitches an input turn and {self.name_b} {pitches_b:.9g}; "
                "parts that work together must pass equally many: check tooth counts and ratio"
            )

    @property
    def period(self) -> float:
        """Input angle after which the two stand as at the start, one pitch on [rad]."""
        return 2 * np.pi / (self.a.order * abs(self.rate_a))

    @property
    def pitch_point(self) -> complex | None:
        """Instant centre of the relative motion in the common frame [mm]; None where it lies at infinity."""
        if abs(self.rate_a - self.rate_b) < 1e-12:
            return None
        return (self.rate_a * self.centre_a - self.rate_b * self.centre_b) / (self.rate_a - self.rate_b)


def engage(
    name_a: str,
    a: Outline,
    motion_a: Motion,
    name_b: str,
    b: Outline,
    motion_b: Motion,
    *,
    must_touch: bool = True,
) -> Engagement:
    """The engagement of two moving outlines, in the frame that turns with their axes.

    Raises:
        DesignError: the two axes circle the origin at different rates, so no such frame exists.
    """
    rates = [m.centre_rate for m in (motion_a, motion_b) if m.centre_radius > 0]
    frame = rates[0] if rates else 0.0
    if any(r != frame for r in rates):
        raise DesignError(f"the axes of {name_a} and {name_b} circle at different rates; they cannot work together")
    return Engagement(
        name_a,
        name_b,
        a,
        b,
        motion_a.centre(0.0),
        motion_b.centre(0.0),
        motion_a.angle,
        motion_b.angle,
        motion_a.rate - frame,
        motion_b.rate - frame,
        frame,
        must_touch,
    )
