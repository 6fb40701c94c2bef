"""The members of an inside-out pin-wheel reducer: the lobed ring, and the disc that carries the pins."""

from dataclasses import dataclass
from functools import cached_property
from typing import ClassVar

from gearsolid.curves.loops import pins
from gearsolid.curves.outline import Outline, Piece
from gearsolid.teeth.pin_generated import PinGenerated
from gearsolid.teeth.pin_seat import PinSeat


@dataclass(frozen=True)
class LobedRing(PinGenerated):
    """Ring with more lobes than the disc inside it has pins: the parallel curve of a hypotrochoid.

    At zero turn a valley lies on the +x axis; the outline is travelled clockwise, material outside.

    Args:
        lobes: [-]; the disc has lobes - difference pins.
        eccentricity: distance of the disc axis from the ring axis [mm].
        pin_circle_radius: of the disc [mm].
        pin_radius: [mm].
        equidistant: amount the profile lies inside its material everywhere [mm]: play by a pin radius taken larger.
        moved_distance: amount the profile is generated with a larger pin circle [mm]; positive gives play.
        difference: tooth difference [-]; with 2 the tips are trimmed where the two traces of the pins cross.
        angular_deg: angle each flank is turned into its lobe about the ring axis [deg].
        relief: step back of the flank at root and tip; None lets pins touch it everywhere.

    Raises:
        DesignError: shortening factor too near 1, undercut, or a size out of range; the message gives the limit.
    """

    hand: ClassVar[int] = -1


@dataclass(frozen=True)
class PinDisc:
    """Pins on a circle, held half-buried in the rim of a disc.

    Args:
        pins: number of pins [-].
        pin_circle_radius: [mm].
        pin_radius: [mm].
        body_radius: rim of the disc between the pins [mm].

    Raises:
        DesignError: neighbouring pins overlap, or the disc does not hold the pins.
    """

    pins: int
    pin_circle_radius: float
    pin_radius: float
    body_radius: float

    def __post_init__(self) -> None:
        self._seat.check("disc")

    @property
    def teeth(self) -> int:
        return self.pins

    @cached_property
    def pattern(self) -> Outline:
        """The pins as separate round loops."""
        return pins(self.pins, self.pin_circle_radius, self.pin_radius)

    @property
    def _seat(self) -> PinSeat:
        return PinSeat(self.pins, self.pin_circle_radius, self.pin_radius, self.body_radius)

    @cached_property
    def pocketed(self) -> Outline:
        """Rim of the disc with a pocket for each pin, counter-clockwise."""
        return Outline((Piece(self._seat.inner(+1), "hole"), Piece(self._seat.land(+1), "tip")), self.pins)

    @cached_property
    def studded(self) -> Outline:
        """Rim of a disc that is one piece with its pins, counter-clockwise."""
        return Outline((Piece(self._seat.outer(+1), "pin"), Piece(self._seat.land(+1), "root")), self.pins)
