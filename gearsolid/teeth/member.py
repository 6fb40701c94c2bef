"""What every toothed member offers, whatever its tooth system."""

from typing import Protocol

from gearsolid.curves.outline import Outline


class Member(Protocol):
    """A toothed member: a wheel, pinion or annulus."""

    @property
    def teeth(self) -> int:
        """Number of teeth [-], positive for an annulus too."""
        ...

    @property
    def outline(self) -> Outline:
        """One pitch of the boundary, a tooth centred on the +x axis; travelled clockwise by an annulus."""
        ...

    @property
    def reference_radius(self) -> float:
        """Radius of the reference (pitch) circle [mm]."""
        ...

    @property
    def tip_radius(self) -> float:
        """Radius of the tip circle [mm]."""
        ...

    @property
    def root_radius(self) -> float:
        """Radius of the root circle [mm]."""
        ...
