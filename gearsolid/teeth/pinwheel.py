"""The members of a pin-wheel reducer: the cycloid disc, and the ring of pins it rolls in."""

from dataclasses import dataclass
from functools import cached_property
from math import pi, sin

from gearsolid.curves.loops import pins
from gearsolid.curves.outline import Outline, Piece
from gearsolid.teeth.pin_generated import PinGenerated
from gearsolid.teeth.pin_seat import PinSeat


@dataclass(frozen=True)
class CycloidDisc(PinGenerated):
    """Cycloid disc with fewer lobes than the ring around it has pins: the parallel curve of an epitrochoid.

    Seen from the disc the ring's pin centres trace an epitrochoid; the disc is what pins of the ring leave standing.
    At zero turn a valley lies on the +x axis.

    Args:
        lobes: [-]; the ring has lobes + difference pins.
        eccentricity: distance of the disc axis from the ring axis [mm].
        pin_circle_radius: [mm].
        pin_radius: [mm].
        equidistant: amount the profile lies inside the exact one everywhere [mm]: play by a pin radius taken larger.
        moved_distance: amount the profile is generated with a larger pin circle [mm]; negative gives play.
        difference: tooth difference [-]; with 2 the tips are trimmed where the two traces of the pins cross.
        angular_deg: angle each flank is turned into its lobe about the disc axis [deg].
        relief: step back of the flank at root and tip; None lets pins touch it everywhere.

    Raises:
        DesignError: shortening factor too near 1, undercut, or a size out of range; the message gives the limit.

    Source: geometry of the curtate epitrochoid, e.g. Chen, Fang, Li, Wang, Sci. China Ser. E 51(5), 2008, 598-610.
    """


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
        self._seat.check("housing")

    @property
    def teeth(self) -> int:
        return self.pins

    @property
    def spacing(self) -> float:
        """Half the distance of neighbouring pin centres over the pin radius [-]; 1 where pins touch."""
        return self.pin_circle_radius * sin(pi / self.pins) / self.pin_radius

    @cached_property
    def pattern(self) -> Outline:
        """The pins as separate round loops."""
        return pins(self.pins, self.pin_circle_radius, self.pin_radius)

    @property
    def _seat(self) -> PinSeat:
        return PinSeat(self.pins, self.pin_circle_radius, self.pin_radius, self.housing_radius)

    @cached_property
    def pocketed(self) -> Outline:
        """Bore of the housing with a pocket for each pin, clockwise (material outside)."""
        return Outline((Piece(self._seat.outer(-1), "hole"), Piece(self._seat.land(-1), "root")), self.pins)

    @cached_property
    def studded(self) -> Outline:
        """Bore of a ring that is one piece with its pins, clockwise (material outside)."""
        return Outline((Piece(self._seat.inner(-1), "pin"), Piece(self._seat.land(-1), "root")), self.pins)
