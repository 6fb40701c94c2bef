"""The path of contact: where driven flanks touch, at what pressure angle, and how they slide."""

from dataclasses import dataclass

import numpy as np

from gearsolid.contact.clearance import Sweep, distances_at, sweep
from gearsolid.contact.path import TOUCH, conjugate_places, touching_places
from gearsolid.contact.play import window
from gearsolid.curves.curve import Points, Reals
from gearsolid.errors import DesignError
from gearsolid.pairs.engagement import Engagement

# Contact this near to the pitch point, as a share of the pitch length, is at it.
_AT_POINT = 1e-6

# Overlap up to this share of the pitch length is contact, not binding.
_CONTACT = 1e-5


@dataclass(frozen=True)
class Driven:
    """b turned against a until it is stopped.

    Args:
        sweep: the engagement at its sampled input angles.
        turn: of b from its stated position [rad], shape (m,).
        way: +1 or -1, the way b was turned.
        radius: of b's pitch circle, or of the circle its pins stand on [mm].
    """

    sweep: Sweep
    turn: Reals
    way: int
    radius: float

    @property
    def steady(self) -> bool:
        """Whether the ratio does not waver."""
        return bool(np.ptp(self.turn) * self.radius <= TOUCH * self.sweep.pitch_length)


def drive(e: Engagement) -> Driven:
    """a drives, b resists and lags until it is stopped.

    Raises:
        DesignError: the parts bind, or nothing stops b.
    """
    s = sweep(e)
    least = float(distances_at(e, s.psi).min())
    if least < -_CONTACT * s.pitch_length:
        raise DesignError(
            f"{e.name_a} and {e.name_b} overlap by {-least:.4g} mm; only parts that do not bind drive each other: see "
            "the roll test for the cause"
        )
    pitch_point = e.pitch_point
    radius = (e.b.r_min + e.b.r_max) / 2 if pitch_point is None else abs(pitch_point - e.centre_b)
    freedom = window(s, radius, least)
    way = -int(np.sign(e.rate_b))
    turn = freedom.ahead if way > 0 else freedom.back
    if np.isnan(turn).any():
        raise DesignError(
            f"nothing stops {e.name_b} from turning against {e.name_a}: they are {least:.4g} mm apart; bring them into "
            "reach of each other"
        )
    return Driven(s, turn, way, radius)


@dataclass(frozen=True)
class PathOfContact:
    """Places where a drives b, in the frame in which both axes stand still, in the order of travel, shape (n,) each.

    Args:
        input_angles_deg: input angle at each [deg].
        places: where they touch [mm].
        pressure_angles_deg: between the line of action and the tangent of the pitch circles [deg].
        sliding: sliding speed per input speed [mm/rad]; negative before the line of centres.
        sliding_ratio_a: sliding over the speed at which contact travels along a's flank [-].
        sliding_ratio_b: the same along b's flank [-].
    """

    input_angles_deg: Reals
    places: Points
    pressure_angles_deg: Reals
    sliding: Reals
    sliding_ratio_a: Reals
    sliding_ratio_b: Reals


def path_of_contact(e: Engagement) -> PathOfContact:
    """Every place of contact while a drives b against resistance, its ends exact.

    The speed of the contact along a flank is the part of that flank's own speed along the common tangent; sliding is
    the difference of the two, and the ratios are the specific sliding of ISO 21771.

    Raises:
        DesignError: the parts bind, nothing stops b, the ratio wavers (the law of gearing is not met), or the two turn
            alike (a pin in a hole has no pitch point).
    """
    forward = _forward(e)
    d = drive(e)
    if not d.steady:
        raise DesignError(
            f"the angle of {e.name_b} wavers by {np.degrees(np.ptp(d.turn)):.4g} deg while {e.name_a} drives it: there "
            "is no one line of action; take exact flanks or see the transmission error"
        )
    psi, place = conjugate_places(e, d.sweep, d.turn, d.way)
    arm = place - _pitch_point(e)
    order = np.argsort(np.real(arm * np.conj(forward)), kind="stable")
    # Contact at the pitch point itself has no arm to tell the normal by, and no sliding: it adds nothing.
    order = order[np.abs(arm[order]) > _AT_POINT * d.sweep.pitch_length]
    psi, place, arm = psi[order], place[order], arm[order]
    after = np.real(arm * np.conj(forward))
    normal = arm / np.abs(arm) * np.where(after < 0, -1, 1)
    along_a, along_b = (
        np.real(np.conj(1j * normal) * 1j * rate * (place - centre))
        for rate, centre in ((e.rate_a, e.centre_a), (e.rate_b, e.centre_b))
    )
    slip = along_a - along_b
    with np.errstate(divide="ignore"):
        ratio_a, ratio_b = slip / along_a, -slip / along_b
    pressure = np.degrees(np.arccos(np.clip(np.real(normal * np.conj(forward)), -1, 1)))
    return PathOfContact(np.degrees(psi) % 360.0, place, pressure, np.sign(after) * np.abs(slip), ratio_a, ratio_b)


def early_contact(e: Engagement) -> float:
    """How far before the line of centres contact begins while a drives b [mm]; 0 where it does not.

    There the teeth slide towards each other's roots and friction bites; after the line of centres it eases.

    Raises:
        DesignError: the parts bind, nothing stops b, or the two turn alike.
    """
    pitch_point, forward = _pitch_point(e), _forward(e)
    d = drive(e)
    find = conjugate_places if d.steady else touching_places
    _, place = find(e, d.sweep, d.turn, d.way)
    before = np.real((pitch_point - place) * np.conj(forward))
    early = float(np.max(before, initial=0.0))
    return early if early > _AT_POINT * d.sweep.pitch_length else 0.0


def _pitch_point(e: Engagement) -> complex:
    if e.pitch_point is None:
        raise DesignError(f"{e.name_a} and {e.name_b} turn at the same rate; they have no pitch point and no path")
    return e.pitch_point


def _forward(e: Engagement) -> complex:
    """Direction in which a moves at the pitch point."""
    travel = 1j * e.rate_a * (_pitch_point(e) - e.centre_a)
    return travel / abs(travel)
