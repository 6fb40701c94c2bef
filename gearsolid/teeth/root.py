"""The root between two teeth: a flat with rounded corners, up to one full round."""

from abc import ABC, abstractmethod
from collections.abc import Callable
from dataclasses import dataclass
from math import pi
from typing import NamedTuple

import numpy as np
from scipy.optimize import brentq

from gearsolid.curves.curve import Curve, Points, Reals, Section
from gearsolid.curves.outline import Piece
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.errors import DesignError

# A root fillet of this radius is made as large as fits: one round from flank to flank where the flanks allow it.
FULL_ROUND = float("inf")

_SAMPLES = 65

# A flank above its fillet counts as nothing when shorter than this share of its distance from the axis.
_NOTHING = 1e-9


class Foot(NamedTuple):
    """One side of a tooth from the root up: its pieces in travel order, and where the root's flat ends [mm]."""

    pieces: tuple[Piece, ...]
    form_point: complex


class Root(ABC):
    """Root of a tooth space. A flank rises from it, travelled with material on its left, the tooth on the +x axis."""

    @abstractmethod
    def rounding(self, p: Points, outward: Points) -> Reals:
        """Radius [mm] of the circle that touches a flank at p and the root, given the flank's unit normal."""

    @abstractmethod
    def spare(self, centre: Points) -> Reals:
        """How far [mm] a circle's centre stands before the middle of the space, on its own flank's side."""

    @abstractmethod
    def down(self, centre: complex) -> complex:
        """Unit direction from a centre to the root."""

    @abstractmethod
    def land(self, foot: complex) -> Curve:
        """The root from the far side's mirrored foot to the next tooth's foot, given this tooth's foot [mm]."""

    def _largest_touch(self, flank: Curve) -> float:
        """Parameter of the flank where the largest fillet that fits touches it."""
        t = flank.sample(_SAMPLES)

        def centre(u: Reals) -> tuple[Points, Reals]:
            p, normal = flank.point(u), -1j * flank.tangent(u)
            radius = self.rounding(p, normal)
            return p + radius * normal, radius

        def room(u: Reals) -> Reals:
            return self.spare(centre(u)[0])

        def pace(u: Reals) -> Reals:
            # A flank that is hollower than the fillet cannot be touched from its space.
            return np.abs(flank.derivative(u)) + centre(u)[1] * flank.turning(u)

        ends = [float(t[-1])]
        for condition in (room, pace):
            good = condition(t) >= 0
            if not good[1:].all():
                k = int(np.argmin(good[1:])) + 1
                ends.append(_zero(condition, float(t[k - 1]), float(t[k])))
        return min(ends)

    def _radius(self, flank: Curve, u: Reals) -> Reals:
        return self.rounding(flank.point(u), -1j * flank.tangent(u))

    def largest_fillet(self, flank: Curve) -> float:
        """Radius of the largest fillet that fits [mm]."""
        return float(self._radius(flank, np.asarray(self._largest_touch(flank))))

    def foot(self, flank: Curve, fillet: float) -> Foot:
        """A flank joined to the root by a fillet.

        Args:
            flank: from the root up.
            fillet: radius [mm]; 0 leaves a corner, infinity takes the largest that fits.

        Raises:
            DesignError: the fillet does not fit.
        """
        if fillet == 0:
            return Foot((Piece(flank, "flank"),), flank.start)
        touch = self._largest_touch(flank)
        largest = float(self._radius(flank, np.asarray(touch)))
        if fillet < largest:
            touch = _zero(lambda u: self._radius(flank, u) - fillet, flank.span[0], touch)
        elif np.isfinite(fillet) and fillet > largest * (1 + 1e-9):
            raise DesignError(
                f"a root fillet of {fillet:g} mm does not fit: with these flanks and this depth the largest is "
                f"{largest:.6g} mm; take a smaller one, or infinity for the largest"
            )
        u = np.asarray(touch)
        point, normal = complex(flank.point(u)), -1j * complex(flank.tangent(u))
        radius = min(fillet, largest)
        centre = point + radius * normal
        down = self.down(centre)
        start = float(np.angle(down))
        arc = Arc(centre, radius, start, start - float(np.angle(down / -normal)) % (2 * pi))
        pieces = [Piece(arc, "fillet")]
        if abs(flank.end - point) > _NOTHING * abs(flank.end):
            pieces.append(Piece(Section(flank, touch, flank.span[1]), "flank"))
        return Foot(tuple(pieces), point)


def _zero(f: Callable[[Reals], Reals], low: float, high: float) -> float:
    return float(brentq(lambda u: float(f(np.asarray(u))), low, high, xtol=1e-15))


@dataclass(frozen=True)
class RootCircle(Root):
    """The root of a wheel (hand +1) or an annulus (hand -1).

    Args:
        radius: of the root circle [mm].
        teeth: [-].
        hand: +1 where teeth point away from the axis, else -1.
    """

    radius: float
    teeth: int
    hand: int = 1

    def rounding(self, p: Points, outward: Points) -> Reals:
        rise = self.hand * (np.abs(p) ** 2 - self.radius**2)
        return np.asarray(rise / (2 * (self.radius - self.hand * np.real(p * np.conj(outward)))))

    def spare(self, centre: Points) -> Reals:
        middle = np.exp(1j * self.hand * pi / self.teeth)
        return self.hand * np.imag(centre * middle)

    def down(self, centre: complex) -> complex:
        return -self.hand * centre / abs(centre)

    def land(self, foot: complex) -> Curve:
        angle = float(np.angle(foot))
        return Arc(0, self.radius, -angle, self.hand * 2 * pi / self.teeth + angle)


@dataclass(frozen=True)
class RootLine(Root):
    """The root of a rack whose pitch line is the y axis.

    Args:
        depth: below the pitch line [mm].
        pitch: [mm].
    """

    depth: float
    pitch: float

    def rounding(self, p: Points, outward: Points) -> Reals:
        return np.asarray((np.real(p) + self.depth) / (1 - np.real(outward)))

    def spare(self, centre: Points) -> Reals:
        return np.asarray(np.imag(centre) + self.pitch / 2)

    def down(self, centre: complex) -> complex:
        return -1 + 0j

    def land(self, foot: complex) -> Curve:
        return Segment(foot.conjugate(), foot + 1j * self.pitch)
