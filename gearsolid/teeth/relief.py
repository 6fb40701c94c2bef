"""Relief of a pin-generated flank at root and tip, so that pins touch it on a working arc only."""

from dataclasses import dataclass

import numpy as np

from gearsolid.curves.curve import Curve, Points, Reals
from gearsolid.errors import DesignError


@dataclass(frozen=True)
class Relief:
    """How far the flank steps back from the exact one outside its working arc.

    The step grows smoothly from nothing at the ends of the arc to the full depth at valley and crest. Choose the arc
    around the phase of zero pressure angle and longer than a pin pitch (360 deg / pins): then some pin always drives.

    Args:
        depth: at the bottom of the valley and at the crest [mm].
        first_deg: phase at which the working arc begins [deg]; the bottom of a valley is at 0.
        last_deg: phase at which it ends [deg]; the crest is at 180.

    Raises:
        DesignError: no depth, or phases out of order.
    """

    depth: float
    first_deg: float
    last_deg: float

    def __post_init__(self) -> None:
        if not 0 < self.depth < np.inf:
            raise DesignError(f"the relief is {self.depth:g} mm deep; it must be above 0: leave it out for none")
        if not 0 < self.first_deg < self.last_deg < 180:
            raise DesignError(
                f"the working arc runs from {self.first_deg:g} to {self.last_deg:g} deg; it must begin above 0 and end "
                "below 180"
            )

    @property
    def ends(self) -> tuple[float, float]:
        """Phases of the ends of the working arc [rad]."""
        return float(np.radians(self.first_deg)), float(np.radians(self.last_deg))

    def _ways(self, phase: Reals) -> tuple[Reals, Reals]:
        """Share of the way from the working arc to valley or crest, and its derivative by the phase."""
        first, last = self.ends
        below, above = phase < first, phase > last
        share = np.where(below, (first - phase) / first, np.where(above, (phase - last) / (np.pi - last), 0.0))
        slope = np.where(below, -1 / first, np.where(above, 1 / (np.pi - last), 0.0))
        return share, slope

    def amount(self, phase: Reals) -> Reals:
        """Step back from the exact flank [mm] at phases from 0 to pi [rad]."""
        share, _ = self._ways(np.asarray(phase))
        amount: Reals = self.depth * share**2 * (3 - 2 * share)
        return amount

    def growth(self, phase: Reals) -> Reals:
        """Derivative of `amount` by the phase [mm/rad]."""
        share, slope = self._ways(np.asarray(phase))
        growth: Reals = self.depth * 6 * share * (1 - share) * slope
        return growth


@dataclass(frozen=True)
class RelievedParallel(Curve):
    """The curve to the left of a pin path at a distance that grows outside the working arc.

    Args:
        base: pin path, its parameter the phase from 0 to at most pi.
        distance: on the working arc [mm].
        relief: what is added outside it.
    """

    base: Curve
    distance: float
    relief: Relief

    @property
    def span(self) -> tuple[float, float]:
        return self.base.span

    def point(self, t: Reals) -> Points:
        return self.base.point(t) + 1j * (self.distance + self.relief.amount(t)) * self.base.tangent(t)

    def derivative(self, t: Reals) -> Points:
        pace = np.abs(self.base.derivative(t)) - (self.distance + self.relief.amount(t)) * self.base.turning(t)
        return self.base.tangent(t) * (pace + 1j * self.relief.growth(t))

    def breaks(self) -> tuple[float, ...]:
        first, last = self.span
        return tuple(t for t in self.relief.ends if first < t < last)
