"""Interchangeable cycloidal sets: one describing circle for every wheel, ring and rack of a module."""

from dataclasses import dataclass
from math import pi

from gearsolid.errors import DesignError
from gearsolid.teeth.cycloidal import CycloidalGear
from gearsolid.teeth.cycloidal_rack import CycloidalRack
from gearsolid.teeth.cycloidal_ring import CycloidalRing


@dataclass(frozen=True)
class InterchangeableSet:
    """Members of one module that all work together.

    The describing circle is half as large as the smallest pinion of the set, whose flanks are radial. A ring must have
    at least `base_teeth` more teeth than the pinion inside it.

    Args:
        module: [mm].
        base_teeth: teeth of the pinion with radial flanks [-]: 12, or 15 for smoother action.
        addendum: in modules [-].
        clearance: bottom clearance in modules [-].
        play: circumferential play of a pair as a share of the pitch [-]; each member is thinned by half of it.

    Raises:
        DesignError: a number is out of its range.

    Source: EB 1911, "Mechanics", articles 49 and 52: 12 teeth as the floor, tooth 5/11 and space 6/11 of the pitch
    (play 1/11), bottom clearance about a tenth of the pitch. The 15-tooth base: from memory, as sold by an old maker of
    cutters.
    """

    module: float
    base_teeth: int = 12
    addendum: float = 1.0
    clearance: float = pi / 10
    play: float = 1 / 11

    def __post_init__(self) -> None:
        if not self.base_teeth >= 5:
            raise DesignError(f"the set is based on {self.base_teeth:g} teeth; 5 or more are possible, 12 or 15 usual")
        if not 0 <= self.play < 0.5:
            raise DesignError(f"the play is {self.play:g} of the pitch; it must lie from 0 to below 0.5")
        for name in ("module", "addendum", "clearance"):
            if not getattr(self, name) > 0:
                raise DesignError(f"{name} of the set is {getattr(self, name):g}; it must be above 0")

    @property
    def describing_radius(self) -> float:
        """Radius of the common describing circle [mm]."""
        return self.module * self.base_teeth / 4

    def _numbers(self, teeth: int) -> tuple[int, float, float, float, float, float, float]:
        a, m = self.describing_radius, self.module
        depth = self.addendum + self.clearance
        return teeth, m, a, a, self.addendum * m, depth * m, self.play * pi * m / 2

    def wheel(self, teeth: int, root_fillet: float = 0.0) -> CycloidalGear:
        """An external member; root fillet in [mm]."""
        return CycloidalGear(*self._numbers(teeth), root_fillet)

    def ring(self, teeth: int, root_fillet: float = 0.0) -> CycloidalRing:
        """An annulus; root fillet in [mm]."""
        return CycloidalRing(*self._numbers(teeth), root_fillet)

    def rack(self, teeth: int, root_fillet: float = 0.0) -> CycloidalRack:
        """A rack of that many teeth; root fillet in [mm]."""
        return CycloidalRack(*self._numbers(teeth), root_fillet)
