"""The input shaft of a reducer: a plain shaft with one eccentric pressed on for each disc."""

from dataclasses import dataclass
from math import pi

import numpy as np

from gearsolid.curves.loops import disc
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc
from gearsolid.errors import DesignError
from gearsolid.pairs.colours import RUST, STEEL
from gearsolid.pairs.crank_discs import CrankDiscs
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.part import Body, Part
from gearsolid.shop.bore import Bore


@dataclass(frozen=True)
class EccentricShaft:
    """Sizes of the input shaft; the room between eccentric and disc bore is the bearing's.

    Args:
        diameter: of the shaft [mm].
        eccentric_diameter: of the eccentrics, the bearing's inner seat [mm].
        overhang: length of shaft beyond the output flange and beyond the ring [mm].

    Raises:
        DesignError: a size is not above 0.
    """

    diameter: float
    eccentric_diameter: float
    overhang: float

    def __post_init__(self) -> None:
        for name in ("diameter", "eccentric_diameter", "overhang"):
            if not getattr(self, name) > 0:
                raise DesignError(f"{name} of the eccentric shaft is {getattr(self, name):g} mm; it must be above 0")

    def check(self, discs: CrankDiscs) -> None:
        """Refuse a shaft that does not fit the discs or the output flange.

        Raises:
            DesignError: with the limits.
        """
        least = self.diameter + 2 * discs.eccentricity
        if not least < self.eccentric_diameter <= discs.bore.diameter:
            raise DesignError(
                f"the eccentric diameter is {self.eccentric_diameter:g} mm; round a shaft of {self.diameter:g} mm with "
                f"{discs.eccentricity:g} mm throw it must be above {least:g} mm, and at most the disc bore of "
                f"{discs.bore.diameter:g} mm"
            )
        if self.diameter >= discs.output_bore.diameter:
            raise DesignError(
                f"the shaft diameter is {self.diameter:g} mm; it must pass the output bore of "
                f"{discs.output_bore.diameter:g} mm with room to turn"
            )

    def parts(self, discs: CrankDiscs) -> tuple[Part, ...]:
        """Shaft and eccentrics, turning with the input."""
        stack = discs.stack
        bottom = -stack.flange_width - self.overhang
        shaft = Body(disc(self.diameter / 2), stack.height(discs.count) + self.overhang - bottom, z=bottom)
        turning = Motion(rate=1.0)
        eccentrics = (Part(f"eccentric {k + 1}", self._eccentric(discs, k), turning, RUST) for k in range(discs.count))
        return (Part("input shaft", shaft, turning, STEEL), *eccentrics)

    def _eccentric(self, discs: CrankDiscs, index: int) -> Body:
        crank = 2 * pi * index / discs.count
        throw = discs.eccentricity * complex(np.exp(1j * crank))
        rim = Outline((Piece(Arc(throw, self.eccentric_diameter / 2, crank, crank + 2 * pi), "tip"),), 1)
        return Body(rim, discs.stack.disc_width, bore=Bore(self.diameter), z=discs.stack.disc_z(index))
