"""How an involute flank ends at its tip: falls back (tip relief), then a sharp corner, a chamfer or a rounding.

All work on a flank travelled from root to tip with material on its left, of a gear or of a ring.
"""

from abc import ABC, abstractmethod
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from scipy.optimize import brentq

from gearsolid.curves.curve import Curve, Points, Reals, Section
from gearsolid.curves.parallel import Parallel
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.errors import DesignError


@dataclass(frozen=True)
class Relieved(Curve):
    """A curve that leaves `base` to the left by `amount` x (share of the way from `first` to `full`) ^ `power`.

    Args:
        base: the curve left.
        first: parameter where it is left [-].
        full: parameter where the distance reaches `amount` [-].
        last: parameter of the end [-], near `full`.
        amount: [mm].
        power: 1 for a straight relief, 2 for a parabolic one.
    """

    base: Curve
    first: float
    full: float
    last: float
    amount: float
    power: int

    @property
    def span(self) -> tuple[float, float]:
        return self.first, self.last

    def _share(self, t: Reals) -> Reals:
        return (np.asarray(t, dtype=float) - self.first) / (self.full - self.first)

    def point(self, t: Reals) -> Points:
        return self.base.point(t) + 1j * self.base.tangent(t) * self.amount * self._share(t) ** self.power

    def derivative(self, t: Reals) -> Points:
        fall = self.amount * self._share(t) ** self.power
        rate = self.amount * self.power * self._share(t) ** (self.power - 1) / (self.full - self.first)
        velocity = self.base.derivative(t)
        along = np.abs(velocity) * (1 - self.base.curvature(t) * fall)
        return self.base.tangent(t) * (along + 1j * rate)


@dataclass(frozen=True)
class TipRelief:
    """Flank falling back into the tooth towards its tip, so that loaded teeth enter contact without a blow.

    Args:
        amount: how far it has fallen back at the tip, square to the flank [mm].
        length: of the relieved stretch, along the base tangent (length of roll) [mm].
        power: 1 for a straight relief, which starts with a slight edge; 2 for a parabolic one, which starts smoothly.

    Raises:
        DesignError: a number is outside its limits.
    """

    amount: float
    length: float
    power: int = 1

    def __post_init__(self) -> None:
        if not (0 < self.amount <= self.length / 5):
            raise DesignError(
                f"tip relief is {self.amount:g} mm over {self.length:g} mm of roll; the amount must lie between 0 "
                f"and a fifth of the length, {self.length / 5:g} mm"
            )
        if self.power not in (1, 2):
            raise DesignError(f"the power of the tip relief is {self.power}; it must be 1 (straight) or 2 (parabolic)")

    def relieve(self, flank: Curve, tip_radius: float) -> tuple[Curve, Curve]:
        """The flank below the relief, and the relief up to the tip circle.

        Args:
            flank: involute whose parameter grows in proportion to the base tangent.
            tip_radius: [mm].

        Raises:
            DesignError: the flank is shorter than the relief.
        """
        first, last = flank.span
        whole = abs(abs(_base_tangent(flank, last)) - abs(_base_tangent(flank, first)))
        if self.length >= whole:
            raise DesignError(
                f"tip relief takes {self.length:.4g} mm of roll; the flank has {whole:.4g} mm: make it shorter"
            )
        start = last - (last - first) * self.length / whole
        beyond = last + 2 * self.amount / self.length * (last - start)
        turn = np.real(flank.tangent(np.asarray(beyond)) * np.conj(flank.tangent(np.asarray(last))))
        if not turn > 0:
            raise DesignError(
                f"tip relief of {self.amount:.4g} mm needs an involute that goes on beyond the tip circle, which lies "
                "too near the base circle: shorten the tip or relieve less"
            )
        endless = Relieved(flank, start, last, beyond, self.amount, self.power)
        end = _where(lambda t: _radius(endless, t) - tip_radius, *endless.span)
        return Section(flank, first, start), Relieved(flank, start, last, end, self.amount, self.power)


class TipForm(ABC):
    """How flank and tip circle meet."""

    @abstractmethod
    def finish(self, flank: Curve, tip_radius: float) -> tuple[Curve, ...]:
        """What is left of the flank, and what leads from there to the tip circle.

        Args:
            flank: from root to tip, ends on the tip circle.
            tip_radius: [mm].

        Raises:
            DesignError: there is no room on the flank.
        """


@dataclass(frozen=True)
class SharpTip(TipForm):
    """Flank and tip circle meet in a corner."""

    def finish(self, flank: Curve, tip_radius: float) -> tuple[Curve, ...]:
        return (flank,)


SHARP = SharpTip()


@dataclass(frozen=True)
class ChamferedTip(TipForm):
    """A flat from the flank to the tip circle.

    Args:
        height: radial height of the flat, and its width along the tip circle [mm].

    Raises:
        DesignError: the height is not above 0.
    """

    height: float

    def __post_init__(self) -> None:
        if not self.height > 0:
            raise DesignError(f"the tip chamfer is {self.height:g} mm high; it must be above 0")

    def finish(self, flank: Curve, tip_radius: float) -> tuple[Curve, ...]:
        radius = tip_radius - _sense(flank) * self.height
        if not min(abs(flank.start), tip_radius) < radius < max(abs(flank.start), tip_radius):
            raise DesignError(
                f"a tip chamfer {self.height:.4g} mm high does not fit a flank "
                f"{abs(abs(flank.start) - tip_radius):.4g} mm high: make it smaller"
            )
        cut = _where(lambda t: _radius(flank, t) - radius, *flank.span)
        inward = -float(np.sign(flank.end.imag)) * self.height / tip_radius
        left = Section(flank, flank.span[0], cut)
        return left, Segment(left.end, flank.end * complex(np.exp(1j * inward)))


@dataclass(frozen=True)
class RoundedTip(TipForm):
    """An arc that runs smoothly into flank and tip circle.

    Args:
        radius: [mm].

    Raises:
        DesignError: the radius is not above 0.
    """

    radius: float

    def __post_init__(self) -> None:
        if not self.radius > 0:
            raise DesignError(f"the tip rounding has a radius of {self.radius:g} mm; it must be above 0")

    def finish(self, flank: Curve, tip_radius: float) -> tuple[Curve, ...]:
        sense = _sense(flank)
        centres = Parallel(flank, self.radius)
        target = tip_radius - sense * self.radius
        if sense * (_radius(centres, flank.span[0]) - target) >= 0 or sense * (abs(centres.end) - target) <= 0:
            raise DesignError(
                f"a tip rounding of {self.radius:.4g} mm does not fit a flank "
                f"{abs(abs(flank.start) - tip_radius):.4g} mm high: make it smaller"
            )
        touch = _where(lambda t: _radius(centres, t) - target, *flank.span)
        left = Section(flank, flank.span[0], touch)
        centre = complex(centres.point(np.asarray(touch)))
        start = float(np.angle(left.end - centre))
        turn = float(np.angle(sense * centre / (left.end - centre))) % (2 * np.pi)
        return left, Arc(centre, self.radius, start, start + turn)


def _radius(curve: Curve, t: float) -> float:
    return float(np.abs(curve.point(np.asarray(t))))


def _sense(flank: Curve) -> int:
    """+1 where the tip lies outside, -1 where it lies inside (ring)."""
    return 1 if abs(flank.end) > abs(flank.start) else -1


def _base_tangent(flank: Curve, t: float) -> float:
    """Signed length of the base tangent at a point of an involute [mm]: its distance along its own normal."""
    at = np.asarray(t)
    return float(np.imag(flank.point(at) * np.conj(flank.tangent(at))))


def _where(miss: Callable[[float], float], first: float, last: float) -> float:
    return float(brentq(miss, first, last, xtol=1e-15))
