"""The members of a pin-wheel reducer: the cycloid disc, and the ring of pins it rolls in."""

from dataclasses import dataclass
from functools import cached_property
from math import pi

import numpy as np

from gearsolid.curves.curve import Reversed
from gearsolid.curves.loops import pins
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.parallel import Parallel
from gearsolid.curves.primitives import Arc
from gearsolid.curves.rolling import CircleOnCircle
from gearsolid.curves.roulette import Trace
from gearsolid.errors import DesignError


@dataclass(frozen=True)
class CycloidDisc:
    """Cycloid disc with one lobe less than the ring has pins: the parallel curve of an epitrochoid.

    Seen from the disc the ring's pin centres trace an epitrochoid; the disc is what pins of the ring leave standing.
    At zero turn a valley lies on the +x axis.

    Args:
        lobes: [-]; the ring has lobes + 1 pins.
        eccentricity: distance of the disc axis from the ring axis [mm].
        pin_circle_radius: [mm].
        pin_radius: [mm].
        equidistant: amount the profile lies inside the exact one everywhere [mm]: play by a pin radius taken larger.
        moved_distance: amount the profile is generated with a larger pin circle [mm]; negative gives play.

    Raises:
        DesignError: shortening factor not below 1, undercut, or a size out of range; the message gives the limit.

    Source: geometry of the curtate epitrochoid, e.g. Chen, Fang, Li, Wang, Sci. China Ser. E 51(5), 2008, 598-610.
    """

    lobes: int
    eccentricity: float
    pin_circle_radius: float
    pin_radius: float
    equidistant: float = 0.0
    moved_distance: float = 0.0

    def __post_init__(self) -> None:
        if self.lobes < 2:
            raise DesignError(f"a cycloid disc has {self.lobes} lobes; at least 2 are possible, 6 and more are usual")
        for name in ("eccentricity", "pin_circle_radius", "pin_radius"):
            if not getattr(self, name) > 0:
                raise DesignError(f"{name} is {getattr(self, name):g} mm; it must be above 0")
        if not self.shortening < 1:
            raise DesignError(
                f"eccentricity {self.eccentricity:g} mm x {self.lobes + 1} pins / pin circle radius "
                f"{self.pin_circle_radius:g} mm is {self.shortening:.4f}; it must be below 1: take an eccentricity below "
                f"{self.pin_circle_radius / (self.lobes + 1):.4g} mm"
            )
        if not self._offset > 0:
            raise DesignError(f"pin_radius plus equidistant is {self._offset:g} mm; it must be above 0")
        if not self._offset < self.undercut_limit:
            raise DesignError(
                f"pin radius {self._offset:.6g} mm (with the equidistant amount) undercuts the lobes; the smallest convex "
                f"radius of the pin path is {self.undercut_limit:.6g} mm: take smaller pins or less eccentricity"
            )

    @property
    def teeth(self) -> int:
        return self.lobes

    @property
    def shortening(self) -> float:
        """Eccentricity x pins / pin circle radius, as generated [-]."""
        return self.eccentricity * (self.lobes + 1) / self._generated_radius

    @property
    def _generated_radius(self) -> float:
        return self.pin_circle_radius + self.moved_distance

    @property
    def _offset(self) -> float:
        return self.pin_radius + self.equidistant

    @property
    def reference_radius(self) -> float:
        """Pitch radius eccentricity x lobes [mm]."""
        return self.eccentricity * self.lobes

    @property
    def tip_radius(self) -> float:
        return self._generated_radius + self.eccentricity - self._offset

    @property
    def root_radius(self) -> float:
        return self._generated_radius - self.eccentricity - self._offset

    @property
    def undercut_limit(self) -> float:
        """Smallest convex curvature radius of the pin path [mm]; larger pins undercut the lobes.

        Source: two branches, at the tip for a small shortening factor, else on the flank (Rao, planetary transmission
        handbook, cycloid chapter).
        """
        n, k = self.lobes + 1, self.shortening
        if k <= (n - 2) / (2 * n - 1):
            return self._generated_radius * (1 + k) ** 2 / (1 + n * k)
        return self._generated_radius * float(np.sqrt(27 * (1 - k**2) * (n - 1) / (n + 1) ** 3))

    @cached_property
    def outline(self) -> Outline:
        """One lobe, counter-clockwise, from valley to valley; the first valley on the +x axis."""
        rolling = CircleOnCircle(self.reference_radius, -self.eccentricity * (self.lobes + 1))
        pin_path = Reversed(Trace(rolling, self._generated_radius, -2 * pi, 0.0))
        return Outline((Piece(Parallel(pin_path, self._offset), "flank"),), self.lobes)


@dataclass(frozen=True)
class PinRing:
    """Ring pins on a circle, held half-buried in the bore of a housing.

    Args:
        pins: number of pins [-].
        pin_circle_radius: [mm].
        pin_radius: [mm].
        housing_radius: bore of the housing between the pins [mm].

    Raises:
        DesignError: neighbouring pins overlap, or the housing does not hold the pins.
    """

    pins: int
    pin_circle_radius: float
    pin_radius: float
    housing_radius: float

    def __post_init__(self) -> None:
        room = self.pin_circle_radius * np.sin(pi / self.pins)
        if not 0 < self.pin_radius < room:
            raise DesignError(
                f"{self.pins} pins of {self.pin_radius:g} mm radius do not fit on a circle of "
                f"{self.pin_circle_radius:g} mm; the radius must be above 0 and below {room:.4g} mm"
            )
        low, high = self.pin_circle_radius - self.pin_radius, self.pin_circle_radius + self.pin_radius
        if not low < self.housing_radius < high:
            raise DesignError(
                f"the housing bore radius is {self.housing_radius:g} mm; to hold the pins it must lie between "
                f"{low:g} and {high:g} mm"
            )
        if self._bury_angle >= pi / self.pins:
            raise DesignError("neighbouring pin pockets meet: take fewer or smaller pins, or a smaller housing bore")

    @property
    def teeth(self) -> int:
        return self.pins

    @cached_property
    def pattern(self) -> Outline:
        """The pins as separate round loops."""
        return pins(self.pins, self.pin_circle_radius, self.pin_radius)

    @property
    def _bury_angle(self) -> float:
        """Angle at the ring axis between a pin's centre and where it leaves the housing bore [rad]."""
        c, h, r = self.pin_circle_radius, self.housing_radius, self.pin_radius
        return float(np.arccos((c**2 + h**2 - r**2) / (2 * c * h)))

    @property
    def _exit_angle(self) -> float:
        """Angle at the pin's centre from the outward direction to where it leaves the housing bore [rad]."""
        corner = self.housing_radius * np.exp(1j * self._bury_angle) - self.pin_circle_radius
        return float(np.angle(corner))

    @property
    def _land(self) -> Piece:
        start, end = -self._bury_angle, -2 * pi / self.pins + self._bury_angle
        return Piece(Arc(0, self.housing_radius, start, end), "root")

    @cached_property
    def pocketed(self) -> Outline:
        """Bore of the housing with a pocket for each pin, clockwise (material outside)."""
        pocket = Arc(self.pin_circle_radius, self.pin_radius, self._exit_angle, -self._exit_angle)
        return Outline((Piece(pocket, "hole"), self._land), self.pins)

    @cached_property
    def studded(self) -> Outline:
        """Bore of a ring that is one piece with its pins, clockwise (material outside)."""
        nose = Arc(self.pin_circle_radius, self.pin_radius, self._exit_angle, 2 * pi - self._exit_angle)
        return Outline((Piece(nose, "pin"), self._land), self.pins)
