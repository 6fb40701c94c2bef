"""What external and internal involute members share once they are drawn: one pitch from its fillet, flank and root."""

from abc import ABC, abstractmethod
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from gearsolid.curves.curve import Curve
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc
from gearsolid.errors import DesignError
from gearsolid.teeth.involute_numbers import NO_LAND, InvoluteNumbers
from gearsolid.teeth.tip_form import SHARP, TipForm, TipRelief
from gearsolid.teeth.toothed import mirrored


@dataclass(frozen=True)
class InvoluteMember(InvoluteNumbers, ABC):
    """An involute member that can be drawn; further fields as in `InvoluteNumbers`.

    Args:
        relief: how the flank falls back towards its tip, or None.
        tip: how flank and tip circle meet.
    """

    relief: TipRelief | None = None
    tip: TipForm = SHARP

    @property
    @abstractmethod
    def root_radius(self) -> float:
        """[mm]."""

    @property
    @abstractmethod
    def form_radius(self) -> float:
        """Radius at which fillet and involute meet [mm] (half the root form diameter)."""

    @property
    def undercut(self) -> float:
        """How far the tool's straight flank reaches below the base tangent point [mm]; 0 when nothing is undercut."""
        return 0.0

    @property
    @abstractmethod
    def _fillet(self) -> Curve:
        """From the root circle to the involute, on the side of the tooth that is travelled first."""

    @property
    @abstractmethod
    def _flank(self) -> Curve:
        """Involute from the fillet to the tip circle; its parameter grows in proportion to the base tangent."""

    @property
    @abstractmethod
    def _half_root_land(self) -> float:
        """Half the flat left by the tool's tip [mm]."""

    @cached_property
    def _flanks(self) -> tuple[Curve, ...]:
        """The involute and, with tip relief, the stretch that falls back from it."""
        return self.relief.relieve(self._flank, self.tip_radius) if self.relief else (self._flank,)

    @cached_property
    def _side(self) -> tuple[Piece, ...]:
        """The tooth's first side, from the root circle to the tip circle."""
        *below, last = self._flanks
        flank, *corner = self.tip.finish(last, self.tip_radius)
        return (
            Piece(self._fillet, "fillet"),
            *(Piece(c, "flank") for c in (*below, flank)),
            *(Piece(c, "tip") for c in corner),
        )

    @property
    def involute_end_radius(self) -> float:
        """Radius at which the involute gives way to relief, chamfer, rounding or tip circle [mm]."""
        return abs(next(p.curve for p in self._side if p.role == "flank").end)

    @property
    def tip_form_radius(self) -> float:
        """Radius at which the flank, relief included, ends towards the tip [mm] (half the tip form diameter)."""
        return abs(next(p.curve for p in reversed(self._side) if p.role == "flank").end)

    @cached_property
    def outline(self) -> Outline:
        """One pitch, the tooth centred on the +x axis: fillet, flank, tip, flank, fillet, root.

        Travelled counter-clockwise by a gear, clockwise by a ring.
        """
        side = self._side
        start, end = (float(np.angle(z)) for z in (side[0].curve.start, side[-1].curve.end))
        pieces = [*side, Piece(Arc(0, self.tip_radius, end, -end), "tip"), *mirrored(side)]
        if self._half_root_land > NO_LAND * self.module:
            step = self.hand * 2 * float(np.pi) / self.teeth
            pieces.append(Piece(Arc(0, self.root_radius, -start, start + step), "root"))
        return Outline(tuple(pieces), self.teeth)

    def _check_tip_form(self) -> None:
        """Refuse relief, chamfer or rounding that leave no tip land.

        Raises:
            DesignError: says how much room there is.
        """
        if self.hand * self._side[-1].curve.end.imag >= 0:
            raise DesignError(
                f"relief, chamfer or rounding leave no tip land; the sharp tooth has {self.tip_land:.4g} mm: make them "
                "smaller or shorten the tip"
            )
