"""The basic rack: the straight-sided tooth form that defines a family of involute gears."""

from dataclasses import dataclass

import numpy as np

from gearsolid.errors import DesignError


@dataclass(frozen=True)
class BasicRack:
    """Basic rack tooth profile in its normal section, as multiples of the module; its tool is the counter profile.

    Args:
        addendum: haP* [-], above the datum line.
        dedendum: hfP* [-], below the datum line.
        root_radius: rfP* [-], fillet radius of the rack = tip radius of its tool.

    Raises:
        DesignError: a number is not above 0, or the dedendum is smaller than the addendum.
    """

    addendum: float = 1.0
    dedendum: float = 1.25
    root_radius: float = 0.38

    def __post_init__(self) -> None:
        for name, value in (
            ("addendum", self.addendum),
            ("dedendum", self.dedendum),
            ("root radius", self.root_radius),
        ):
            if not 0 < value < 10:
                raise DesignError(f"the basic rack's {name} is {value:g} modules; it must lie between 0 and 10")
        if self.dedendum < self.addendum:
            raise DesignError(
                f"the basic rack's dedendum is {self.dedendum:g} modules and its addendum {self.addendum:g}; the "
                "dedendum must be at least as large, or the mate's tip runs into the root"
            )

    @property
    def clearance(self) -> float:
        """Bottom clearance cP* [-]."""
        return self.dedendum - self.addendum

    def straight_dedendum(self, pressure_angle_deg: float) -> float:
        """Depth hFfP* [-] below the datum line where the straight flank ends, at a pressure angle [deg]. ISO 53."""
        return self.dedendum - self.root_radius * (1 - float(np.sin(np.radians(pressure_angle_deg))))

    def half_tip_land(self, pressure_angle_deg: float) -> float:
        """Half the flat at the tool's tip [-], at a pressure angle [deg]; negative when the tip is rounded too much."""
        a = np.radians(pressure_angle_deg)
        sharp = np.pi / 4 - self.dedendum * np.tan(a)
        return float(sharp - self.root_radius * np.tan((np.pi / 2 - a) / 2))

    def full_root_radius(self, pressure_angle_deg: float) -> float:
        """Root radius [-] that leaves no flat at the tool's tip, at a pressure angle [deg]. ISO 53."""
        a = np.radians(pressure_angle_deg)
        return float((np.pi / 4 - self.dedendum * np.tan(a)) / np.tan((np.pi / 2 - a) / 2))

    def largest_root_radius(self, pressure_angle_deg: float) -> float:
        """Largest root radius rfP* [-] at a pressure angle [deg]. ISO 53.

        Beyond it the straight flank ends above the reach of the mate's tip, or the tool's tip has no flat left.
        """
        fillet_depth = self.clearance / (1 - float(np.sin(np.radians(pressure_angle_deg))))
        return min(fillet_depth, self.full_root_radius(pressure_angle_deg))

    def check(self, pressure_angle_deg: float) -> None:
        """Refuse a rack whose tool cannot exist at a pressure angle [deg].

        Raises:
            DesignError: the tool's tip is rounded beyond its full radius, or the rack's own tip is pointed.
        """
        a = pressure_angle_deg
        if self.half_tip_land(a) < -1e-12:
            raise DesignError(
                f"root radius is {self.root_radius:g} modules; with dedendum {self.dedendum:g} at {a:g} deg it can be "
                f"at most {self.full_root_radius(a):.4f}: take a smaller root radius, dedendum or pressure angle"
            )
        if self.addendum * np.tan(np.radians(a)) >= np.pi / 4:
            raise DesignError(
                f"addendum is {self.addendum:g} modules; at {a:g} deg the rack tooth is pointed at "
                f"{np.pi / 4 / np.tan(np.radians(a)):.4f}: take a smaller addendum or pressure angle"
            )


# ISO 53:1998, table 2 (values from memory; checked against that standard's own formula for the largest root radius).
ISO53_A = BasicRack(1.0, 1.25, 0.38)
ISO53_B = BasicRack(1.0, 1.25, 0.30)
ISO53_C = BasicRack(1.0, 1.25, 0.25)
ISO53_D = BasicRack(1.0, 1.40, 0.39)
