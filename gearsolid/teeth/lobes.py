"""Rotors of lobe blowers: epicycloid lobes and hypocycloid spaces of one describing circle."""

from dataclasses import dataclass
from functools import cached_property
from math import pi

import numpy as np
from scipy.optimize import root

from gearsolid.curves.curve import Curve, Reals, Reversed, Section, Turned
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.parallel import Parallel
from gearsolid.curves.rolling import CircleOnCircle
from gearsolid.curves.roulette import Trace
from gearsolid.errors import DesignError

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(16)


@dataclass(frozen=True)
class LobeRotor:
    """Rotor that rolls with its equal: lobes outside, spaces inside the pitch circle, all of one describing circle.

    At zero turn a lobe is centred on the +x axis.

    Args:
        lobes: [-].
        pitch_radius: [mm].
        inset: amount the profile lies inside the exact one everywhere [mm]; half the running clearance of two alike.

    Raises:
        DesignError: a number out of its range.
    """

    lobes: int
    pitch_radius: float
    inset: float = 0.0

    def __post_init__(self) -> None:
        if self.lobes != int(self.lobes) or self.lobes < 2:
            raise DesignError(
                f"a lobe rotor has {self.lobes:g} lobes; it must be a whole number, 2 or more: 2 and 3 are usual"
            )
        if not 0 < self.pitch_radius < np.inf:
            raise DesignError(f"the pitch radius is {self.pitch_radius:g} mm; it must be above 0")
        if not 0 <= self.inset < self.describing_radius / 4:
            raise DesignError(
                f"the inset is {self.inset:g} mm; it must be 0 or more and below a quarter of the describing circle's "
                f"radius, {self.describing_radius / 4:.4g} mm"
            )

    @property
    def teeth(self) -> int:
        return self.lobes

    @property
    def reference_radius(self) -> float:
        return self.pitch_radius

    @property
    def describing_radius(self) -> float:
        """Radius of the circle that describes lobes and spaces [mm]: one turn of it covers half a pitch."""
        return self.pitch_radius / (2 * self.lobes)

    @property
    def tip_radius(self) -> float:
        return self.pitch_radius + 2 * self.describing_radius - self.inset

    @property
    def root_radius(self) -> float:
        return self.pitch_radius - 2 * self.describing_radius - self.inset

    @property
    def _space(self) -> Curve:
        """Exact hypocycloid before the lobe, the describing circle's turn from 0 to 2 pi."""
        a = self.describing_radius
        arch = Reversed(Trace(CircleOnCircle(self.pitch_radius, -a), a, -2 * pi, 0.0))
        return Turned(arch, complex(np.exp(-1.5j * pi / self.lobes)))

    @property
    def _lobe(self) -> Curve:
        """Exact epicycloid, the describing circle's turn from 0 to 2 pi."""
        a = self.describing_radius
        arch = Trace(CircleOnCircle(self.pitch_radius, a), -a, 0.0, 2 * pi)
        return Turned(arch, complex(np.exp(-0.5j * pi / self.lobes)))

    @cached_property
    def outline(self) -> Outline:
        """One pitch, counter-clockwise: space, lobe."""
        space, lobe = self._space, self._lobe
        if self.inset:
            space, lobe = self._inset(space, lobe)
        return Outline((Piece(space, "flank"), Piece(lobe, "flank")), self.lobes)

    def _inset(self, space: Curve, lobe: Curve) -> tuple[Curve, Curve]:
        """Parallel curves, cut where they cross: at the pitch circle a lobe is infinitely sharp and loses a little."""
        into_lobe, from_space = _trimmed(self.lobes, self.inset / self.describing_radius)
        space, lobe = Parallel(space, self.inset), Parallel(lobe, self.inset)
        return Section(space, from_space, 2 * pi - from_space), Section(lobe, into_lobe, 2 * pi - into_lobe)


def _trimmed(lobes: int, share: float) -> tuple[float, float]:
    """Turn of the describing circle, from the pitch circle on, that lobe and space lose to an inset [rad].

    Along both arches the direction turns in proportion to the describing circle's turn u: k + 1/2 and k - 1/2 times, k
    the ratio of describing and pitch radius, while the speed is 2 (1 +- k) sin(u/2) describing radii. The parallels
    cross where the arches' ways and the shifts of the parallels cancel. Ways are integrals and the unknowns multiples
    of the inset, so that nothing is lost however small it is.

    Args:
        lobes: [-].
        share: inset as a share of the describing radius [-].
    """
    k = 1 / (2 * lobes)

    def way(u: float, side: int) -> complex:
        s = u / 2 * (1 + _NODES)
        return complex(
            u / 2 * np.sum(_WEIGHTS * 2 * (1 + side * k) * np.sin(s / 2) * np.exp(1j * (0.5 + side * k) * s))
        )

    def turned(u: float, side: int) -> complex:
        angle = (0.5 + side * k) * u
        return 1j * complex(-2 * np.sin(angle / 2) ** 2, np.sin(angle))

    def miss(x: Reals) -> tuple[float, float]:
        u, v = share * x
        apart = way(u, +1) + way(v, -1) + share * (turned(u, +1) - turned(v, -1))
        return apart.real / share**2, apart.imag / share**3

    into_lobe, from_space = share * root(miss, (0.8, 0.35)).x
    return float(into_lobe), float(from_space)
