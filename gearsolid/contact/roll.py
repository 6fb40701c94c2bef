"""The roll test: turn every pair of parts that can touch, and say whether anything binds."""

from collections.abc import Iterable
from dataclasses import dataclass, replace

import numpy as np

from gearsolid.contact.clearance import least_distance, sweep, sweep_at
from gearsolid.contact.path import contact_ratio
from gearsolid.contact.play import window
from gearsolid.contact.proof import prove
from gearsolid.contact.result import Contact, RollResult, Verdict
from gearsolid.errors import DesignError
from gearsolid.pairs.engagement import Engagement
from gearsolid.pairs.machine import Machine

# A gap or overlap this small [mm] is contact: a hundredth of what a good workshop can measure.
TOLERANCE = 1e-5

# Overlap beyond this share of the pitch length is no longer a matter of play.
_GROSS = 0.05


def roll_test(machine: Machine, tolerance: float = TOLERANCE) -> RollResult:
    """Turn a machine and measure every pair of parts that can touch.

    A perfect pair repeats itself pitch by pitch, so one pitch of its engagement answers for the whole revolution.

    Args:
        machine: any machine of `gearsolid.pairs`.
        tolerance: gaps and overlaps up to this are called touching [mm].

    Returns:
        Verdict, and for each pair least clearance, place, play and contact ratio.
    """
    return roll_engagements(machine.engagements, tolerance)


def roll_engagements(engagements: Iterable[Engagement], tolerance: float = TOLERANCE) -> RollResult:
    """The roll test for engagements given one by one."""
    known: dict[tuple[object, ...], Contact] = {}
    contacts = []
    for e in engagements:
        alike = _Alike.of(e)
        if alike.key not in known:
            known[alike.key] = alike.normalised(_contact(e, tolerance))
        contacts.append(alike.restored(known[alike.key], e))
    if not contacts:
        raise DesignError("nothing to roll: the machine has no two parts that can touch")
    return RollResult(tuple(contacts), tolerance)


def _contact(e: Engagement, tolerance: float) -> Contact:
    s = sweep(e)
    step = e.period / s.psi.size
    least, curve = least_distance(e, s, step)
    proof = prove(e, s.psi, curve, least.distance)
    if proof.lowest < least.distance:
        closer = sweep_at(e, np.array([proof.lowest_psi]))
        least = min(least, least_distance(e, closer, proof.step)[0], key=lambda found: found.distance)
    frame = complex(np.exp(1j * e.frame_rate * least.psi))
    found = Contact(
        e.name_a,
        e.name_b,
        _verdict(least.distance, proof.bound, tolerance),
        least.distance,
        min(proof.bound, least.distance),
        float(np.degrees(least.psi)),
        least.place * frame,
        least.roles,
        None,
        None,
        None,
        None,
        np.degrees(s.psi),
        curve,
        None,
    )
    if not e.must_touch or least.distance < -_GROSS * s.pitch_length:
        return found
    pitch_point = e.pitch_point
    radius = (e.b.r_min + e.b.r_max) / 2 if pitch_point is None else abs(pitch_point - e.centre_b)
    freedom = window(s, radius, least.distance)
    if np.isnan(freedom.width).any():
        return found
    # b resists, so it lags: it is stopped on the side against its own motion.
    way = -int(np.sign(e.rate_b))
    driven = freedom.ahead if way > 0 else freedom.back
    play = float(freedom.width.min())
    found = replace(found, play_angle=float(np.degrees(play)), play=play * radius, plays=np.degrees(freedom.width))
    if found.verdict is Verdict.BINDS:
        return found
    return replace(
        found,
        contact_ratio=contact_ratio(e, s, driven, way, radius),
        transmission_error=float(np.degrees(np.ptp(driven))),
    )


def _verdict(least: float, bound: float, tolerance: float) -> Verdict:
    if least < -tolerance:
        return Verdict.BINDS
    if least <= tolerance:
        return Verdict.TOUCHES
    return Verdict.ROLLS if bound > 0 else Verdict.UNPROVEN


@dataclass(frozen=True)
class _Alike:
    """What two engagements must share to be the same but for a turn of the frame and a start at another angle.

    Args:
        key: equal for engagements that are alike.
        line: polar angle of the line of centres [rad].
        start: input angle at which a pitch of a stands on the line of centres [rad].
        frame_rate: turns of the common frame per input turn [-].
    """

    key: tuple[object, ...]
    line: float
    start: float
    frame_rate: float

    @classmethod
    def of(cls, e: Engagement) -> "_Alike":
        apart = e.centre_b - e.centre_a
        line = float(np.angle(apart))
        start = float(np.mod((line - e.angle_a) / e.rate_a, e.period))
        at_b = (e.angle_b + e.rate_b * start - line) / e.b.pitch_angle
        phase = round(float(np.mod(at_b + 1e-7, 1.0)), 6)
        key = (id(e.a), id(e.b), round(abs(apart), 9), e.rate_a, e.rate_b, e.frame_rate, e.must_touch, phase)
        return cls(key, line, start, e.frame_rate)

    def normalised(self, c: Contact) -> Contact:
        """The contact as if the line of centres lay on the x axis and a pitch of a on it at the start."""
        return self._moved(c, -self.start, -self.line)

    def restored(self, c: Contact, e: Engagement) -> Contact:
        """A normalised contact as this engagement has it."""
        return replace(self._moved(c, self.start, self.line), name_a=e.name_a, name_b=e.name_b)

    def _moved(self, c: Contact, psi: float, line: float) -> Contact:
        degrees = float(np.degrees(psi))
        place = c.place * complex(np.exp(1j * (line + self.frame_rate * psi)))
        return replace(
            c,
            input_angle=(c.input_angle + degrees) % 360.0,
            place=place,
            angles=c.angles + degrees,
        )
