"""Two toothed members on parallel fixed axes."""

from dataclasses import dataclass
from functools import cached_property
from math import pi

from gearsolid.errors import DesignError
from gearsolid.pairs.blank import Blank, is_ring
from gearsolid.pairs.colours import BRASS, STEEL
from gearsolid.pairs.engagement import Engagement, engage
from gearsolid.pairs.helix import check_helices, member_body
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.part import Part
from gearsolid.pairs.phasing import mate_angle, tooth_offset
from gearsolid.teeth.member import Member


@dataclass(frozen=True)
class SpurPair:
    """A driving and a driven member; one of them may be an annulus. The driver's axis is the origin.

    Args:
        driver: member on the input axis.
        driven: its mate.
        centre_distance: [mm].
        driver_blank: body of the driver.
        driven_blank: body of the driven member.
        driver_name: name of the driver's part.
        driven_name: name of the driven part.

    Raises:
        DesignError: both members are rings, their helices do not match, or the centre distance is not above 0.
    """

    driver: Member
    driven: Member
    centre_distance: float
    driver_blank: Blank
    driven_blank: Blank
    driver_name: str = "driver"
    driven_name: str = "driven"

    def __post_init__(self) -> None:
        if not self.centre_distance > 0:
            raise DesignError(f"the centre distance is {self.centre_distance:g} mm; it must be above 0")
        if is_ring(self.driver.outline) and is_ring(self.driven.outline):
            raise DesignError("both members are rings; a ring works with an external pinion inside it")
        check_helices(
            {
                self.driver_name: (self.driver, self.driver_blank),
                self.driven_name: (self.driven, self.driven_blank),
            }
        )

    @property
    def _sense(self) -> int:
        """-1 where the two turn opposite ways (both external), +1 with a ring."""
        return 1 if is_ring(self.driver.outline) or is_ring(self.driven.outline) else -1

    @property
    def title(self) -> str:
        return f"pair of {self.driver.teeth} and {self.driven.teeth} teeth"

    @property
    def ratio(self) -> float:
        return self._sense * self.driven.teeth / self.driver.teeth

    @cached_property
    def _motions(self) -> tuple[Motion, Motion]:
        """The driver has a tooth or a space on the line of centres at the start; the driven member has its opposite."""
        side = pi if is_ring(self.driven.outline) else 0.0
        offset = tooth_offset(self.driver.teeth, 0.0, side)
        direction = pi if self._sense < 0 else side
        angle = mate_angle(self.driven.teeth, direction, self._sense * offset)
        rate = self._sense * self.driver.teeth / self.driven.teeth
        return Motion(rate=1.0), Motion(centre_radius=self.centre_distance, angle=angle, rate=rate)

    @cached_property
    def parts(self) -> tuple[Part, ...]:
        driver, driven = self._motions
        return (
            Part(self.driver_name, member_body(self.driver, self.driver_blank), driver, BRASS),
            Part(self.driven_name, member_body(self.driven, self.driven_blank), driven, STEEL),
        )

    @cached_property
    def engagements(self) -> tuple[Engagement, ...]:
        driver, driven = self._motions
        return (engage(self.driver_name, self.driver.outline, driver, self.driven_name, self.driven.outline, driven),)
