"""The flank that round trundles (or ring pins) leave on a wheel: a parallel of the cycloid their centres trace."""

from dataclasses import dataclass
from functools import cached_property
from math import asin, pi

import numpy as np
from scipy.optimize import brentq

from gearsolid.curves.curve import Reals
from gearsolid.curves.parallel import Parallel
from gearsolid.errors import DesignError
from gearsolid.teeth.cycloid import Cycloid

_SAMPLES = 129


@dataclass(frozen=True)
class TrundleFlank:
    """The flank that leaves the space whose middle lies on the +x axis; its parameter is the turn of the trundles.

    The turn [rad] is counted from the line of centres. Outside a wheel the flank lies at positive angles and runs
    outward; in a ring it lies at negative angles and runs inward.

    Args:
        pitch_radius: of the toothed member [mm].
        describing: radius of the circle that describes the path of the trundle centres [mm], signed as in `Cycloid`:
            the lantern's pitch radius for a wheel, its negative for a ring around the lantern, and for a wheel inside a
            ring of pins the centre distance (double generation).
        trundle_radius: [mm].

    Source: EB 1911, "Mechanics", article 51 (Rankine).
    """

    pitch_radius: float
    describing: float
    trundle_radius: float

    @cached_property
    def curve(self) -> Parallel:
        """The whole parallel, swallowtail included, up to half a turn of the trundles."""
        return Parallel(Cycloid(self.pitch_radius, self.describing).trace(pi), self.trundle_radius)

    def point(self, turn: float) -> complex:
        """Point of the flank at a turn [rad], in [mm]."""
        return complex(self.curve.point(np.asarray(turn)))

    @property
    def cusp_turn(self) -> float:
        """Turn [rad] at which the parallel curve has its own cusp; 0 where it has none.

        Raises:
            DesignError: the trundles are so thick that nothing of the flank is left.
        """
        big, c, q = self.pitch_radius, self.describing, self.trundle_radius
        bend = (big + 2 * c) / (4 * abs(c) * (big + c))
        if q * bend >= 1:
            raise DesignError(
                f"trundles of {q:g} mm radius undercut the whole flank; the radius must be below {1 / bend:.6g} mm"
            )
        return 2 * asin(max(q * bend, 0.0))

    @cached_property
    def first_turn(self) -> float:
        """Turn [rad] at which contact starts: before it the flank lies inside a trundle on the line of centres.

        Raises:
            DesignError: the trundles are so thick that nothing of the flank is left.
        """
        cusp = self.cusp_turn
        if cusp == 0:
            return 0.0
        turns = np.linspace(cusp, pi, _SAMPLES)
        clear = np.flatnonzero(self._clearance(turns) > 0)
        if clear.size == 0:
            raise DesignError(
                f"trundles of {self.trundle_radius:g} mm radius leave nothing of the flank: take thinner ones"
            )
        k = int(clear[0])
        return float(brentq(lambda u: float(self._clearance(np.asarray(u))), turns[k - 1], turns[k], xtol=1e-15))

    def _clearance(self, turn: Reals) -> Reals:
        """Squared distance from the trundle's centre on the line of centres less its squared radius [mm2].

        Written without the difference of nearly equal squares: with the path's point C and unit normal n it is
        |C - R|^2 + 2 q Re((C - R) conj n).
        """
        base = self.curve.base
        away = base.point(turn) - self.pitch_radius
        normal = 1j * base.tangent(turn)
        return np.abs(away) ** 2 + 2 * self.trundle_radius * np.real(away * np.conj(normal))

    def turn_at_angle(self, angle: float) -> float:
        """First turn [rad] at which the flank stands `angle` [rad] from the middle of its space.

        Where it never does, the turn at which it reaches farthest from the pitch circle.
        """
        side = 1 if self.describing > 0 else -1

        def beyond(turn: Reals) -> Reals:
            return side * np.angle(self.curve.point(turn)) - angle

        turns = np.linspace(self.first_turn, pi, _SAMPLES)
        over = np.flatnonzero(beyond(turns) >= 0)
        if over.size == 0:
            return float(turns[int(np.argmax(side * np.abs(self.curve.point(turns))))])
        k = int(over[0])
        if k == 0:
            return self.first_turn
        return float(brentq(lambda u: float(beyond(np.asarray(u))), turns[k - 1], turns[k], xtol=1e-15))

    def turn_at_radius(self, radius: float, last: float) -> float:
        """Turn [rad] between the first and `last` at which the flank stands at a radius [mm]."""

        def miss(turn: float) -> float:
            return abs(self.point(turn)) - radius

        return float(brentq(miss, self.first_turn, last, xtol=1e-15))

    def contact_ratio(self, trundles: int, last: float) -> float:
        """Mean number of trundles in contact [-], all after the line of centres when the toothed member drives.

        Only in a ring of twice the lantern's size, where the trundles move on straight lines, do the flanks guide them
        before the line of centres as well.

        Args:
            trundles: [-].
            last: turn at the tip [rad].
        """
        straight = self.pitch_radius + 2 * self.describing == 0
        return trundles * (last - self.first_turn) / (pi if straight else 2 * pi)
