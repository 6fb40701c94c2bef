"""First-pass forces and contact stresses of a pin-wheel reducer, by the lever law.

Rigid bodies, equal stiffness of all contacts, no friction, one disc carrying its torque alone. Real loads also depend
on pitch errors, on the stiffness of housing and bearings and on speed; `CAUTION` says so where figures are shown.
"""

from dataclasses import dataclass
from functools import cached_property
from math import pi

import numpy as np
from scipy.optimize import brentq, minimize_scalar

from gearsolid.curves.curve import Points, Reals
from gearsolid.errors import DesignError
from gearsolid.pairs.line_contact import contact_stress
from gearsolid.teeth.pinwheel import CycloidDisc

# To stand beside every figure of this kind.
CAUTION = (
    "First-pass figures: rigid bodies, equal contact stiffness, no friction, no pitch errors. Before anything is built "
    "that can hurt somebody, have them verified by a qualified engineer against the local codes, and guard the machine."
)


@dataclass(frozen=True)
class PinLoads:
    """What every ring pin carries at one crank angle, in the order of the pins; all arrays of shape (pins,).

    Args:
        phase_deg: polar angle of the pin from the crank [deg].
        force: normal force [N]; 0 on pins that do not carry.
        lever: of the contact normal about the disc axis [mm]; negative where the disc turns away from the pin.
        contact: contact point in the frame of the ring [mm].
        curvature_radius: of the disc at the contact [mm], negative where it is hollow.
    """

    phase_deg: Reals
    force: Reals
    lever: Reals
    contact: Points
    curvature_radius: Reals


@dataclass(frozen=True)
class LeverLaw:
    """Ring pin forces on one disc, proportional to their levers about the disc axis.

    Args:
        disc: its modifications count only where gaps are asked for.
        torque: on this disc [N mm]; of two discs each takes half and, common practice, a tenth more.

    Raises:
        DesignError: torque not above 0, or a tooth difference other than 1.

    Source: Lehmann, dissertation, TU Munich 1976; Malhotra and Parameswaran, Mech. Mach. Theory 18(6), 1983, 491-499
    (from memory).
    """

    disc: CycloidDisc
    torque: float

    def __post_init__(self) -> None:
        if not self.torque > 0:
            raise DesignError(f"the torque on the disc is {self.torque:g} N mm; it must be above 0")
        if self.disc.difference != 1:
            raise DesignError(
                f"the disc has a tooth difference of {self.disc.difference}; pin forces are known for 1 only, since "
                "trimmed tips leave some pins without contact"
            )

    @property
    def longest_lever(self) -> float:
        """Lever of a pin at zero pressure angle [mm]: the pitch radius of the disc."""
        return self.disc.disc_pitch_radius

    @property
    def largest_force(self) -> float:
        """Force on a pin at zero pressure angle [N], mean over the crank angle: 4 T / (pins x lever)."""
        return 4 * self.torque / (self.disc.pins * self.longest_lever)

    @property
    def force_across(self) -> float:
        """Ring's push on the disc across the line of centres, against the crank [N]; exact at every crank angle."""
        return self.torque / self.longest_lever

    @property
    def force_along(self) -> float:
        """Ring's push on the disc along the line of centres, away from the ring axis [N]; mean over the crank."""
        k = self.disc.exact_path.shortening
        shape = 1 / k - (1 - k**2) / (2 * k**2) * np.log((1 + k) / (1 - k))
        return float(self.largest_force * self.disc.pins / (2 * pi) * shape)

    @cached_property
    def _pins(self) -> Reals:
        return 2 * pi * np.arange(self.disc.pins) / self.disc.pins

    def loads(self, crank_deg: float) -> PinLoads:
        """Pin loads of the unmodified disc.

        Args:
            crank_deg: crank angle [deg]; at 0 it points to the first pin.
        """
        phase = self._pins - np.radians(crank_deg)
        lever = self._lever(phase)
        carries = np.maximum(lever, 0.0)
        return self._loads(phase, lever, self.torque * carries / np.sum(carries**2))

    def loads_with_gaps(self, crank_deg: float, stiffness: float) -> PinLoads:
        """Pin loads of the modified disc: its gaps must close before a pin carries.

        Args:
            crank_deg: crank angle [deg].
            stiffness: of one contact [N/mm]: force over approach.

        Source: form used in the literature on two-stage reducers (from memory), solved for the disc's turn.
        """
        if not stiffness > 0:
            raise DesignError(f"the contact stiffness is {stiffness:g} N/mm; it must be above 0")
        phase = self._pins - np.radians(crank_deg)
        lever = self._lever(phase)
        gaps = self.disc.gap(np.degrees(phase))

        def forces(turn: float) -> Reals:
            approach = np.where(lever > 0, turn * lever - gaps, 0.0)
            result: Reals = stiffness * np.maximum(approach, 0.0)
            return result

        def excess(turn: float) -> float:
            return float(np.sum(forces(turn) * lever)) - self.torque

        able = lever > 1e-3 * self.longest_lever
        if np.min(gaps[able]) < -1e-9:
            raise DesignError(
                f"these modifications leave gaps down to {np.min(gaps[able]):.4g} mm at the ring pins; loads are known "
                "for gaps of 0 or more: raise equidistant or lower moved_distance"
            )
        # At this turn the pins with a useful lever have closed their gaps and carry the torque, if not more.
        high = np.max(gaps[able] / lever[able]) + self.torque / (stiffness * np.sum(lever[able] ** 2))
        return self._loads(phase, lever, forces(float(brentq(excess, 0.0, high, xtol=1e-16))))

    def _lever(self, phase: Reals) -> Reals:
        lever: Reals = self.longest_lever * np.sin(phase) / self.disc.exact_path.stretch(phase)
        return lever

    def _loads(self, phase: Reals, lever: Reals, force: Reals) -> PinLoads:
        disc, path = self.disc, self.disc.exact_path
        crank = np.exp(1j * (self._pins - phase))
        pins = disc.pin_circle_radius * np.exp(1j * self._pins)
        pitch_point = disc.eccentricity * disc.pins * crank
        contact = pins + disc.pin_radius * (pitch_point - pins) / np.abs(pitch_point - pins)
        return PinLoads(np.degrees(phase), force, lever, contact, path.curvature_radius(phase) - disc.pin_radius)

    def resultant(self, crank_deg: float) -> complex:
        """Sum of the ring's forces on the disc [N]: along the crank + i across it, ahead of it.

        Args:
            crank_deg: crank angle [deg].
        """
        loads = self.loads(crank_deg)
        inward = self.disc.eccentricity * self.disc.pins - loads.contact * np.exp(-1j * np.radians(crank_deg))
        return complex(np.sum(loads.force * inward / np.abs(inward)))

    def stresses(self, loads: PinLoads, width: float, modulus: float) -> Reals:
        """Contact stress at every pin [MPa].

        Args:
            loads: at some crank angle.
            width: of the disc [mm].
            modulus: reduced modulus of pin and disc [MPa].
        """
        return contact_stress(loads.force, width, np.asarray(self.disc.pin_radius), loads.curvature_radius, modulus)

    def worst_stress(self, width: float, modulus: float) -> tuple[float, float]:
        """Largest contact stress [MPa] under the mean scale of forces, and the phase of the pin [deg] that has it.

        It is not the pin with the largest force: the lobes are most sharply curved elsewhere.

        Args:
            width: of the disc [mm].
            modulus: reduced modulus of pin and disc [MPa].
        """

        def stress(phase: Reals) -> Reals:
            force = self.largest_force * self._lever(phase) / self.longest_lever
            radius = self.disc.exact_path.curvature_radius(phase) - self.disc.pin_radius
            return contact_stress(force, width, np.asarray(self.disc.pin_radius), radius, modulus)

        phase = np.linspace(0, pi, 1001)
        k = int(np.argmax(stress(phase)))
        found = minimize_scalar(
            lambda u: -float(stress(np.asarray(u))), bounds=(phase[k - 1], phase[k + 1]), options={"xatol": 1e-9}
        )
        return float(-found.fun), float(np.degrees(found.x))


def roller_force(torque: float, rollers: int, circle_radius: float) -> float:
    """Largest force of a disc on an output roller [N]: 4 T / (rollers x radius), one across from the crank.

    Args:
        torque: on the disc [N mm].
        rollers: number of output rollers [-].
        circle_radius: of their axes [mm].
    """
    return 4 * torque / (rollers * circle_radius)


def roller_force_sum(torque: float, circle_radius: float) -> float:
    """Sum of all roller forces on a disc [N], mean over the crank angle; all act along the line of centres.

    Args:
        torque: on the disc [N mm].
        circle_radius: of the rollers' axes [mm].
    """
    return 4 * torque / (pi * circle_radius)


def ring_pin_loss(disc: CycloidDisc, friction: float) -> float:
    """Share of the output power lost at plain ring pins that do not turn [-].

    Args:
        disc: the cycloid disc.
        friction: coefficient [-]; for a roller turning on a journal, times journal radius over roller radius.
    """
    return 4 * friction * (disc.pin_circle_radius - disc.pin_radius) / (pi * disc.disc_pitch_radius)


def roller_loss(disc: CycloidDisc, friction: float, circle_radius: float) -> float:
    """Share of the output power lost at plain output pins that do not turn [-], not checked independently.

    Args:
        disc: the cycloid disc.
        friction: coefficient [-].
        circle_radius: of the output pins [mm].
    """
    return 4 * friction * disc.eccentricity * disc.pins / (pi * circle_radius)
