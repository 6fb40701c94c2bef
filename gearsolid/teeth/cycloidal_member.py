"""What cycloidal wheels, annuli and racks share: two describing circles, a tooth between them, and its limits."""

from abc import ABC, abstractmethod
from dataclasses import dataclass
from functools import cached_property
from math import isfinite, pi
from typing import ClassVar

from gearsolid.curves.curve import Curve, Reversed
from gearsolid.curves.outline import Piece
from gearsolid.curves.primitives import Segment
from gearsolid.curves.roulette import Trace
from gearsolid.errors import DesignError
from gearsolid.teeth.cycloid import Cycloid
from gearsolid.teeth.root import Foot, Root
from gearsolid.teeth.toothed import POINTED, mirrored, pitch_pieces


@dataclass(frozen=True)
class CycloidalMember(ABC):
    """Numbers of one cycloidal member; lengths always positive.

    The circle that describes a member's addendum must describe the dedendum of its mate.

    Args:
        teeth: number of teeth or leaves [-].
        module: [mm].
        addendum_circle: radius of the circle that describes the face, rolled on the tip's side of the reference
            circle [mm].
        dedendum_circle: radius of the circle that describes the flank, rolled on the root's side [mm].
        addendum: height of the tip from the reference circle [mm].
        dedendum: depth of the root from the reference circle [mm].
        tooth_thinning: circumferential reduction of the tooth thickness pi module / 2 at the reference circle [mm].
        root_fillet: radius joining flank and root [mm]; 0 leaves a corner, infinity takes the largest that fits, a
            full round.

    Raises:
        DesignError: the tooth comes to a point below the tip, the flank does not reach the root, the fillet does not
            fit, or a number is out of its range; the message gives the limit.
    """

    teeth: int
    module: float
    addendum_circle: float
    dedendum_circle: float
    addendum: float
    dedendum: float
    tooth_thinning: float = 0.0
    root_fillet: float = 0.0

    # +1 where teeth point away from the axis, -1 where they point towards it.
    hand: ClassVar[int] = 1
    fewest: ClassVar[int] = 5

    def __post_init__(self) -> None:
        if self.teeth != int(self.teeth) or self.teeth < self.fewest:
            raise DesignError(
                f"a cycloidal member has {self.teeth:g} teeth; a whole number from {self.fewest} is possible here"
            )
        for name in ("module", "addendum_circle", "dedendum_circle", "addendum", "dedendum"):
            value = getattr(self, name)
            if not (value > 0 and isfinite(value)):
                raise DesignError(f"{name} is {value:g} mm; it must be above 0")
        if not 0 <= self.tooth_thinning < self.pitch / 2:
            raise DesignError(
                f"tooth_thinning is {self.tooth_thinning:g} mm; it must lie from 0 to below half the pitch, "
                f"{self.pitch / 2:.4g} mm"
            )
        if not self.root_fillet >= 0:
            raise DesignError(f"root_fillet is {self.root_fillet:g} mm; it must be 0 or more")
        self._check_face()
        self._check_flank()
        if self.root_fillet > 0:
            _ = self.foot

    def _check_face(self) -> None:
        face, most = self.face, self.pointed_addendum
        if self.addendum > most + POINTED * self.module:
            reason = "the tooth is pointed" if self._pointed_roll < pi else "its describing circle ends"
            raise DesignError(
                f"the addendum is {self.addendum:g} mm, but {reason} at {most:.6g} mm: lower it (clock practice for "
                f"pointed teeth: {0.95 * most:.4g} mm), thin the tooth less or take another addendum circle"
            )
        half = self._half(face, self._face_roll)
        if half >= self.pitch / 2:
            raise DesignError(
                f"the teeth widen towards their tips and meet below the addendum of {self.addendum:g} mm: take an "
                f"addendum circle of at most half the reference radius, {self.reference_radius / 2:.6g} mm"
            )

    def _check_flank(self) -> None:
        flank = self.flank
        deepest = min(flank.reach, self.reference_radius)
        if self.dedendum > deepest - POINTED * self.module:
            raise DesignError(
                f"the dedendum is {self.dedendum:g} mm; this describing circle reaches {deepest:.6g} mm from the "
                "reference circle: lower the dedendum or bring the dedendum circle nearer to half the reference radius"
            )
        half = self._half(flank, flank.roll(-self.hand * self.dedendum))
        if half >= self.pitch / 2:
            deepest = abs(flank.height(flank.roll_at_lean(self.hand * (self.thickness - self.pitch) / 2)))
            raise DesignError(
                f"the flanks of neighbouring teeth meet {deepest:.6g} mm from the reference circle, before the "
                f"dedendum of {self.dedendum:g} mm: lower the dedendum, thin the tooth or take a larger dedendum circle"
            )
        if half <= 0:
            deepest = abs(flank.height(flank.roll_at_lean(self.hand * self.thickness / 2)))
            raise DesignError(
                f"the tooth narrows to nothing {deepest:.6g} mm from the reference circle, before the dedendum of "
                f"{self.dedendum:g} mm: lower the dedendum or take a dedendum circle of at most half the reference "
                f"radius, {self.reference_radius / 2:.6g} mm"
            )

    @property
    def reference_radius(self) -> float:
        """module x teeth / 2 [mm]."""
        return self.module * self.teeth / 2

    @property
    def pitch(self) -> float:
        """pi x module, an arc of the reference circle [mm]."""
        return pi * self.module

    @property
    def thickness(self) -> float:
        """Tooth thickness as an arc of the reference circle [mm]."""
        return self.pitch / 2 - self.tooth_thinning

    @cached_property
    def face(self) -> Cycloid:
        """Curve of the addendum."""
        return Cycloid(self.reference_radius, self.hand * self.addendum_circle)

    @cached_property
    def flank(self) -> Cycloid:
        """Curve of the dedendum."""
        return Cycloid(self.reference_radius, -self.hand * self.dedendum_circle)

    def _half(self, curve: Cycloid, roll: float) -> float:
        """Half the tooth's thickness at a roll [rad], as an arc of the reference circle [mm]."""
        return self.thickness / 2 - self.hand * curve.lean(roll)

    @cached_property
    def pointed_addendum(self) -> float:
        """Addendum at which the tooth comes to a point, or at which its describing circle ends [mm]."""
        return abs(self.face.height(self._pointed_roll))

    @cached_property
    def _pointed_roll(self) -> float:
        return self.face.roll_at_lean(self.hand * self.thickness / 2)

    @cached_property
    def _face_roll(self) -> float:
        if self.addendum > self.pointed_addendum - POINTED * self.module:
            return self._pointed_roll
        return self.face.roll(self.hand * self.addendum)

    @abstractmethod
    def _beside(self, curve: Trace) -> Curve:
        """A cycloid from the +x axis moved to the side of the tooth that is travelled first."""

    @property
    @abstractmethod
    def _root(self) -> Root: ...

    @abstractmethod
    def _tip_land(self, start: complex) -> Curve:
        """The tip from its first point [mm] to the mirrored one."""

    @cached_property
    def foot(self) -> Foot:
        """Root fillet and flank of one side."""
        roll = self.flank.roll(-self.hand * self.dedendum)
        return self._root.foot(self._flank_curve(roll), self.root_fillet)

    def _flank_curve(self, roll: float) -> Curve:
        inside = self._beside(self.flank.trace(roll))
        if 2 * self.flank.describing == -self.reference_radius:
            return Segment(inside.end, inside.start)
        return Reversed(inside)

    @property
    def largest_root_fillet(self) -> float:
        """Radius of the largest root fillet that fits [mm]."""
        return self._root.largest_fillet(self._flank_curve(self.flank.roll(-self.hand * self.dedendum)))

    @cached_property
    def _crown(self) -> tuple[Piece, ...]:
        face = Piece(self._beside(self.face.trace(self._face_roll)), "flank")
        sides = (face,), mirrored((face,))
        if self._face_roll == self._pointed_roll and self._half(self.face, self._face_roll) < POINTED * self.module:
            return (*sides[0], *sides[1])
        return (*sides[0], Piece(self._tip_land(face.curve.end), "tip"), *sides[1])

    @property
    def pitch_pieces(self) -> tuple[Piece, ...]:
        """One pitch of the boundary, a tooth centred on the +x axis."""
        return pitch_pieces(self.foot, self._crown, self._root)
