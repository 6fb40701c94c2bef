"""Lantern pinions and pin wheels, and the toothed members that work with them."""

from abc import ABC, abstractmethod
from dataclasses import dataclass
from functools import cached_property
from math import asin, isfinite, pi, sin
from typing import ClassVar

import numpy as np

from gearsolid.curves.curve import Section, Turned
from gearsolid.curves.loops import pins
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.errors import DesignError
from gearsolid.teeth.root import Foot, RootCircle
from gearsolid.teeth.toothed import POINTED, mirrored, pitch_pieces
from gearsolid.teeth.trundle_flank import TrundleFlank


@dataclass(frozen=True)
class LanternPinion:
    """Round trundles on a pitch circle: a lantern pinion, or the pins of a pin wheel or pin ring.

    Args:
        teeth: number of trundles [-].
        module: [mm]; the pitch circle runs through the trundle centres.
        trundle_radius: [mm].

    Raises:
        DesignError: fewer than 3 trundles, or trundles that touch each other.
    """

    teeth: int
    module: float
    trundle_radius: float

    def __post_init__(self) -> None:
        if self.teeth != int(self.teeth) or self.teeth < 3:
            raise DesignError(f"a lantern has {self.teeth:g} trundles; a whole number from 3 is possible, 6 are usual")
        if not (self.module > 0 and isfinite(self.module)):
            raise DesignError(f"the module is {self.module:g} mm; it must be above 0")
        room = self.reference_radius * sin(pi / self.teeth)
        if not 0 < self.trundle_radius < room:
            raise DesignError(
                f"{self.teeth} trundles of {self.trundle_radius:g} mm radius do not fit on a pitch circle of "
                f"{self.reference_radius:g} mm radius; theirs must be above 0 and below {room:.4g} mm"
            )

    @property
    def reference_radius(self) -> float:
        """Radius of the circle through the trundle centres [mm]."""
        return self.module * self.teeth / 2

    @property
    def tip_radius(self) -> float:
        return self.reference_radius + self.trundle_radius

    @property
    def root_radius(self) -> float:
        """Innermost reach of the trundles [mm]."""
        return self.reference_radius - self.trundle_radius

    @cached_property
    def outline(self) -> Outline:
        """The trundles as separate round loops, one centred on the +x axis."""
        return pins(self.teeth, self.reference_radius, self.trundle_radius)


@dataclass(frozen=True)
class TrundleMate(ABC):
    """What the toothed mates of round trundles share; lengths always positive.

    The flank is a parallel of the path of the trundle centres, from where it leaves a trundle on the line of centres.
    Below it the space has straight walls, parallel to its middle before the tooth is thinned.

    Args:
        teeth: [-].
        trundles: number of trundles of the mate [-].
        module: [mm].
        trundle_radius: [mm].
        addendum: height of the tip from the pitch circle [mm].
        dedendum: depth of the root from the pitch circle [mm].
        tooth_thinning: circumferential reduction of the tooth thickness at the pitch circle [mm].
        root_fillet: radius joining wall and root [mm]; 0 leaves a corner, infinity takes the largest that fits, a full
            round.

    Raises:
        DesignError: trundles too thick, the tooth pointed below its tip, a space that does not take the trundles, or a
            number out of its range; the message gives the limit.
    """

    teeth: int
    trundles: int
    module: float
    trundle_radius: float
    addendum: float
    dedendum: float
    tooth_thinning: float = 0.0
    root_fillet: float = float("inf")

    hand: ClassVar[int] = 1

    def __post_init__(self) -> None:
        for name, value in (("teeth", self.teeth), ("trundles", self.trundles)):
            if value != int(value) or value < 3:
                raise DesignError(f"{name} are {value:g}; a whole number from 3 is possible")
        for name in ("module", "trundle_radius", "addendum", "dedendum"):
            value = getattr(self, name)
            if not (value > 0 and isfinite(value)):
                raise DesignError(f"{name} is {value:g} mm; it must be above 0")
        self._check_counts()
        space = 2 * self.trundle_radius
        if not 0 <= self.tooth_thinning < pi * self.module - space:
            raise DesignError(
                f"trundles of {space:g} mm diameter and a tooth_thinning of {self.tooth_thinning:g} mm leave no tooth "
                f"in a pitch of {pi * self.module:.4g} mm; together they must be smaller, the thinning 0 or more"
            )
        if not self.root_fillet >= 0:
            raise DesignError(f"root_fillet is {self.root_fillet:g} mm; it must be 0 or more")
        if self.addendum > self.pointed_addendum + POINTED * self.module:
            raise DesignError(
                f"the addendum is {self.addendum:g} mm, but the tooth ends at {self.pointed_addendum:.6g} mm: lower it "
                f"(practice: {0.95 * self.pointed_addendum:.4g} mm), thin the tooth less or take thinner trundles"
            )
        self._check_space()
        _ = self.outline

    @abstractmethod
    def _check_counts(self) -> None:
        """Refuse tooth counts that do not fit each other."""

    @property
    @abstractmethod
    def _describing(self) -> float:
        """Signed radius of the circle that describes the path of the trundle centres [mm]."""

    @property
    def reference_radius(self) -> float:
        """module x teeth / 2 [mm]."""
        return self.module * self.teeth / 2

    @property
    def tip_radius(self) -> float:
        return self.reference_radius + self.hand * self.addendum

    @property
    def root_radius(self) -> float:
        return self.reference_radius - self.hand * self.dedendum

    @cached_property
    def flank(self) -> TrundleFlank:
        """The flank beside the middle of a space."""
        return TrundleFlank(self.reference_radius, self._describing, self.trundle_radius)

    @property
    def _thinning_angle(self) -> float:
        return self.tooth_thinning / (2 * self.reference_radius)

    @cached_property
    def _pointed_turn(self) -> float:
        return self.flank.turn_at_angle(pi / self.teeth - self._thinning_angle)

    @property
    def pointed_addendum(self) -> float:
        """Addendum at which the tooth comes to a point, or at which its flank ends [mm]."""
        return self.hand * (abs(self.flank.point(self._pointed_turn)) - self.reference_radius)

    @cached_property
    def last_turn(self) -> float:
        """Turn of the trundles from the line of centres to the end of contact at the tip [rad]."""
        if self.addendum > self.pointed_addendum - POINTED * self.module:
            return self._pointed_turn
        return self.flank.turn_at_radius(self.tip_radius, self._pointed_turn)

    @property
    def contact_ratio(self) -> float:
        """Mean number of trundles in contact [-]; see `TrundleFlank.contact_ratio`."""
        return self.flank.contact_ratio(self.trundles, self.last_turn)

    @property
    def _to_tooth(self) -> complex:
        """Factor from the middle of a space to the tooth before it, thinned."""
        return complex(np.exp(-1j * self.hand * (pi / self.teeth - self._thinning_angle)))

    @cached_property
    def _first_point(self) -> complex:
        """Where the flank starts, seen from the middle of the space [mm]."""
        return self.flank.point(self.flank.first_turn)

    def _check_space(self) -> None:
        start = self._first_point
        half_width = abs(start.imag)
        least = half_width + abs(self.reference_radius - start.real)
        if self.dedendum < least:
            raise DesignError(
                f"the dedendum is {self.dedendum:g} mm; to take trundles of {self.trundle_radius:g} mm radius above a "
                f"round root it must be at least {least:.6g} mm"
            )
        inmost = half_width / sin(pi / self.teeth - self._thinning_angle)
        if self.hand > 0 and self.root_radius <= inmost:
            raise DesignError(
                f"the dedendum is {self.dedendum:g} mm, but neighbouring spaces meet "
                f"{self.reference_radius - inmost:.6g} mm below the pitch circle: lower it, thin the tooth less, or "
                "take thinner trundles or more teeth"
            )

    @property
    def _wall(self) -> Segment:
        """Wall of the space from the root to where the flank starts."""
        start = self._first_point
        foot = self.root_radius * complex(np.exp(1j * asin(start.imag / self.root_radius)))
        return Segment(foot * self._to_tooth, start * self._to_tooth)

    @property
    def _root(self) -> RootCircle:
        return RootCircle(self.root_radius, self.teeth, self.hand)

    @cached_property
    def foot(self) -> Foot:
        """Root fillet and wall of one side."""
        return self._root.foot(self._wall, self.root_fillet)

    @cached_property
    def outline(self) -> Outline:
        """One pitch, counter-clockwise (clockwise for a ring), a tooth centred on the +x axis."""
        flank = Section(Turned(self.flank.curve, self._to_tooth), self.flank.first_turn, self.last_turn)
        side = (Piece(flank, "flank"),)
        angle = float(np.angle(flank.end))
        pointed = self.last_turn == self._pointed_turn and abs(angle) * self.tip_radius < POINTED * self.module
        tip = () if pointed else (Piece(Arc(0, abs(flank.end), angle, -angle), "tip"),)
        return Outline(pitch_pieces(self.foot, (*side, *tip, *mirrored(side)), self._root), self.teeth)


@dataclass(frozen=True)
class LanternWheel(TrundleMate):
    """A wheel that drives a lantern pinion outside it."""

    def _check_counts(self) -> None:
        """Any counts work together."""

    @property
    def _describing(self) -> float:
        return self.module * self.trundles / 2


@dataclass(frozen=True)
class LanternRing(TrundleMate):
    """An annulus with teeth towards the axis that drives a lantern pinion inside it."""

    hand: ClassVar[int] = -1

    def _check_counts(self) -> None:
        if not 2 * self.trundles <= self.teeth:
            raise DesignError(
                f"a lantern of {self.trundles} trundles was given to a ring of {self.teeth} teeth; it may have at most "
                f"half as many, {self.teeth // 2}: beyond that the flanks of a space would cross"
            )

    @property
    def _describing(self) -> float:
        return -self.module * self.trundles / 2


@dataclass(frozen=True)
class PinRingPinion(TrundleMate):
    """A toothed pinion inside a ring of pins."""

    def _check_counts(self) -> None:
        if not self.trundles > self.teeth:
            raise DesignError(
                f"a pinion of {self.teeth} teeth does not fit inside a ring of {self.trundles} pins; the ring must "
                "have more pins than the pinion has teeth"
            )

    @property
    def _describing(self) -> float:
        # By double generation the path is the epicycloid of a circle as large as the centre distance.
        return self.module * (self.trundles - self.teeth) / 2
