"""Pairs of non-circular wheels: from ellipses, from any closed pitch curve, or from the ratio wanted at every angle."""

import math
from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from gearsolid.curves.curve import Reals
from gearsolid.curves.pitch_curve import MatingCurve, PitchCurve, Polar
from gearsolid.curves.primitives import Ellipse
from gearsolid.errors import DesignError
from gearsolid.teeth.noncircular import NoncircularWheel
from gearsolid.teeth.rack import ISO53_A, BasicRack

# The mean ratio may differ by this share from the one that closes.
_CLOSES = 1e-9
_PLACES = 4096


@dataclass(frozen=True)
class NoncircularPair:
    """Two external wheels on pitch curves that roll on each other at a fixed centre distance.

    At the start a tooth of the driver and a space of the driven wheel lie on the line of centres.

    Args:
        driver: wheel about the origin.
        driven: its mate, its axis on +x.
        mating: how the driven pitch curve follows from the driver's.
    """

    driver: NoncircularWheel
    driven: NoncircularWheel
    mating: MatingCurve

    @property
    def centre_distance(self) -> float:
        """[mm]."""
        return self.mating.centre_distance

    @cached_property
    def _periods(self) -> tuple[float, float]:
        """Angles of one period of the driver and of the driven wheel [rad]."""
        return 2 * math.pi / self.driver.pitch_curve.order, 2 * math.pi / self.driven.pitch_curve.order

    def driven_angle(self, driver_deg: Reals | float) -> Reals:
        """Turn of the driven wheel from the start [deg], opposite to the driver's.

        Args:
            driver_deg: turn of the driver from the start [deg], any shape, any number of turns.
        """
        t, rounds = self._place(driver_deg)
        return np.degrees(self.mating.turn.angle.at(t) + rounds * self._periods[1])

    def ratio(self, driver_deg: Reals | float) -> Reals:
        """Speed of the driven wheel against the driver's [-], negative as it turns the other way.

        Args:
            driver_deg: turn of the driver from the start [deg], any shape.
        """
        t, _ = self._place(driver_deg)
        radius = np.abs(self.mating.given.curve.point(t))
        return np.asarray(-radius / (self.centre_distance - radius), dtype=float)

    def _place(self, driver_deg: Reals | float) -> tuple[Reals, Reals]:
        """Parameter of the driver's pitch curve on the line of centres, and the period."""
        # The driver turns forwards, so its pitch curve passes the line of centres backwards.
        angle = -np.radians(np.asarray(driver_deg, dtype=float))
        rounds = np.floor(angle / self._periods[0])
        return self.mating.given.winding.angle.parameter(angle - rounds * self._periods[0]), rounds


def noncircular_pair(
    pitch_curve: PitchCurve,
    teeth: int,
    driven_order: int = 1,
    *,
    pressure_angle_deg: float = 20.0,
    rack: BasicRack = ISO53_A,
) -> NoncircularPair:
    """The pair on a given pitch curve, at the centre distance that closes its mate.

    Args:
        pitch_curve: of the driver, about its axis.
        teeth: of the driver [-].
        driven_order: periods of the driven pitch curve, each rolling on one period of the driver's [-].
        pressure_angle_deg: of the rack that generates both [deg].
        rack: its proportions.

    Raises:
        DesignError: the driven wheel would not have a whole number of teeth, or a wheel cannot be cut.
    """
    return _pair(pitch_curve, pitch_curve.closing_distance(driven_order), teeth, driven_order, pressure_angle_deg, rack)


def elliptic_pair(
    half_axis: float,
    eccentricity: float,
    teeth: int,
    driven_order: int = 1,
    *,
    pressure_angle_deg: float = 20.0,
    rack: BasicRack = ISO53_A,
) -> NoncircularPair:
    """An ellipse about one of its foci and its mate, which is the same ellipse when that has one period too.

    Args:
        half_axis: half the long axis [mm].
        eccentricity: distance of the foci by the long axis [-], from 0 to below 1.
        teeth: of the driver [-].
        driven_order: periods of the driven pitch curve [-].
        pressure_angle_deg: of the rack that generates both [deg].
        rack: its proportions.

    Raises:
        DesignError: the ellipse is none, or as in `noncircular_pair`.
    """
    if not (half_axis > 0 and 0 <= eccentricity < 1):
        raise DesignError(
            f"the ellipse has a half axis of {half_axis:g} mm and eccentricity {eccentricity:g}; the half axis must be "
            "above 0 and the eccentricity from 0 to below 1"
        )
    ellipse = Ellipse(half_axis, half_axis * math.sqrt(1 - eccentricity**2), centre=-half_axis * eccentricity)
    return noncircular_pair(PitchCurve(ellipse), teeth, driven_order, pressure_angle_deg=pressure_angle_deg, rack=rack)


def ratio_pair(
    ratio: Callable[[Reals], Reals],
    centre_distance: float,
    teeth: int,
    driver_order: int = 1,
    driven_order: int = 1,
    *,
    pressure_angle_deg: float = 20.0,
    rack: BasicRack = ISO53_A,
) -> NoncircularPair:
    """The pair that gives a stated ratio at every angle.

    Args:
        ratio: angle by which the driver has turned backwards [rad] -> speed of the driven wheel by the driver's [-];
            above 0, smooth, repeating `driver_order` times a turn; takes and gives arrays.
        centre_distance: [mm].
        teeth: of the driver [-].
        driver_order: how often the ratio repeats in a turn of the driver [-].
        driven_order: how often it repeats in a turn of the driven wheel [-].
        pressure_angle_deg: of the rack that generates both [deg].
        rack: its proportions.

    Raises:
        DesignError: the ratio is not above 0 or does not close after whole turns, or as in `noncircular_pair`.
    """
    if not centre_distance > 0:
        raise DesignError(f"the centre distance is {centre_distance:g} mm; it must be above 0")
    angle = np.arange(_PLACES) / _PLACES * 2 * np.pi / driver_order
    wanted = np.asarray(ratio(angle), dtype=float) * np.ones(_PLACES)
    if not np.all(wanted > 0):
        raise DesignError(f"the ratio goes down to {wanted.min():.4g}; it must stay above 0: neither wheel may stop")
    mean, closing = float(wanted.mean()), driver_order / driven_order
    if abs(mean - closing) > _CLOSES * closing:
        raise DesignError(
            f"the ratio is {mean:.9g} in the mean; to close after {driver_order} periods of the driver and "
            f"{driven_order} of the driven wheel it must be {closing:.9g}: multiply it by "
            f"{closing / mean:.9g}, or take other periods"
        )

    def radius(at: Reals) -> Reals:
        speed = np.asarray(ratio(at), dtype=float)
        return centre_distance * speed / (1 + speed)

    curve = PitchCurve(Polar.of(radius, driver_order), driver_order)
    return _pair(curve, centre_distance, teeth, driven_order, pressure_angle_deg, rack)


def _pair(
    curve: PitchCurve, distance: float, teeth: int, driven_order: int, angle_deg: float, rack: BasicRack
) -> NoncircularPair:
    if (teeth * driven_order) % curve.order:
        step = curve.order // math.gcd(curve.order, driven_order)
        raise DesignError(
            f"{teeth} teeth on a pitch curve of {curve.order} periods give {teeth * driven_order / curve.order:.4g} on "
            f"one of {driven_order}; both must be whole: take {teeth - teeth % step} or {teeth - teeth % step + step}"
        )
    mating = curve.mate(distance)
    return NoncircularPair(
        NoncircularWheel(curve, teeth, False, angle_deg, rack),
        NoncircularWheel(mating.closed(driven_order), teeth * driven_order // curve.order, True, angle_deg, rack),
        mating,
    )
