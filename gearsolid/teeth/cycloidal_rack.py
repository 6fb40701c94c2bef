"""Cycloidal racks: faces and flanks are plain cycloids."""

from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from math import inf, isfinite
from typing import ClassVar

from gearsolid.curves.curve import Curve, Turned
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Segment
from gearsolid.curves.roulette import Trace
from gearsolid.errors import DesignError
from gearsolid.teeth.cycloidal_member import CycloidalMember
from gearsolid.teeth.root import RootLine
from gearsolid.teeth.toothed import NONE


@dataclass(frozen=True)
class CycloidalRack(CycloidalMember):
    """A cycloidal rack along the y axis: pitch line x = 0, teeth pointing to +x.

    Fields as in `CycloidalMember`, with pitch line for reference circle.

    Args:
        teeth: number of teeth of the bar [-].
        back: thickness of the bar below the root [mm]; None takes the tooth's own height.

    Raises:
        DesignError: as for wheels, or the back is not above 0.
    """

    back: float | None = None

    fewest: ClassVar[int] = 1

    def __post_init__(self) -> None:
        super().__post_init__()
        if self.back is not None and not (self.back > 0 and isfinite(self.back)):
            raise DesignError(f"the back of the rack is {self.back:g} mm thick; it must be above 0")

    @property
    def reference_radius(self) -> float:
        """Infinite [mm]."""
        return inf

    def _beside(self, curve: Trace) -> Curve:
        return Turned(curve, 1.0, -0.5j * self.thickness)

    @property
    def _root(self) -> RootLine:
        return RootLine(self.dedendum, self.pitch)

    def _tip_land(self, start: complex) -> Segment:
        return Segment(start, start.conjugate())

    @cached_property
    def outline(self) -> Outline:
        """The whole bar as one closed loop, counter-clockwise, its first tooth centred on the +x axis.

        The bar ends in the middle of a tooth space at both ends.
        """
        row = [
            Piece(Turned(p.curve, 1.0, 1j * self.pitch * k), p.role)
            for k in range(self.teeth)
            for p in self.pitch_pieces
        ]
        if row[-1].role == "root":
            row.pop()
        bottom = -self.dedendum - (self.back or self.addendum + self.dedendum)
        first, last = row[0].curve.start, row[-1].curve.end
        low, high = -0.5j * self.pitch, 1j * self.pitch * (self.teeth - 0.5)
        corners = [last, -self.dedendum + high, bottom + high, bottom + low, -self.dedendum + low, first]
        ends = [Piece(Segment(a, b), "root") for a, b in pairwise(corners) if abs(a - b) > NONE * self.module]
        return Outline((*row, *ends), 1)
