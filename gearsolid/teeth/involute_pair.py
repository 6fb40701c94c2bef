"""Two involute members in contact: working circle, contact path, contact ratio and play, external or internal."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from gearsolid.errors import DesignError
from gearsolid.teeth import involute_relations as relations
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.involute_member import InvoluteMember
from gearsolid.teeth.involute_relations import reach
from gearsolid.teeth.ring_margins import RingMargins, ring_margins


@dataclass(frozen=True)
class InvolutePair:
    """A gear and its mate, a gear or a ring, at a centre distance.

    Args:
        gear: external member.
        mate: external or internal member of the same module, pressure angle and helix angle.
        distance: centre distance [mm]; None takes the one at which full teeth (no thinning) leave no play.

    Raises:
        DesignError: the members are of different families, or cannot work at this distance.
    """

    gear: InvoluteGear
    mate: InvoluteMember
    distance: float | None = None

    def __post_init__(self) -> None:
        for name, unit in (("module", "mm"), ("pressure_angle_deg", "deg")):
            one, other = getattr(self.gear, name), getattr(self.mate, name)
            if one != other:
                raise DesignError(
                    f"the {name.removesuffix('_deg').replace('_', ' ')} of the two members is {one:g} and {other:g} "
                    f"{unit}; members that work together share it"
                )
        # The helices of an external pair are of opposite hand, those of a gear in a ring of the same hand.
        if self.gear.helix_angle_deg != -self.mate.hand * self.mate.helix_angle_deg:
            raise DesignError(
                f"helix angles are {self.gear.helix_angle_deg:g} and {self.mate.helix_angle_deg:g} deg; they must be "
                f"{'opposite' if self.mate.hand > 0 else 'equal'} on parallel axes"
            )
        if not np.isfinite(self.working_angle):
            raise DesignError(f"centre distance is {self.distance} mm; it must be a number")

    @property
    def _counts(self) -> tuple[int, int]:
        return self.gear.teeth, self.mate.hand * self.mate.teeth

    @property
    def _angles(self) -> tuple[float, float]:
        return float(np.radians(self.gear.pressure_angle_deg)), abs(float(np.radians(self.gear.helix_angle_deg)))

    @property
    def _signed_distance(self) -> float:
        return self.mate.hand * self.centre_distance

    @property
    def reference_distance(self) -> float:
        """Centre distance of the reference circles [mm]."""
        return self.mate.reference_radius + self.mate.hand * self.gear.reference_radius

    @cached_property
    def centre_distance(self) -> float:
        """[mm]."""
        if self.distance is not None:
            return self.distance
        shifts = self.gear.profile_shift + self.mate.profile_shift
        return abs(relations.centre_distance(*self._counts, shifts, *self._angles, module=self.gear.module))

    @cached_property
    def working_angle(self) -> float:
        """Transverse pressure angle at the working circles [rad]."""
        return relations.working_angle_at(*self._counts, self._signed_distance, *self._angles, module=self.gear.module)

    @property
    def working_radii(self) -> tuple[float, float]:
        """Radii of the two working circles [mm]."""
        cosine = float(np.cos(self.working_angle))
        return self.gear.base_radius / cosine, self.mate.base_radius / cosine

    @property
    def shift_sum(self) -> float:
        """Sum of profile shifts [-] that would leave no play at this distance, ring shift positive inwards."""
        return relations.shift_sum(*self._counts, self._signed_distance, *self._angles, module=self.gear.module)

    @property
    def clearance_shortening(self) -> float:
        """Tip shortening [mm] that restores the rack's bottom clearance: the negative of k mn. ISO 21771."""
        shifts = self.gear.module * (self.gear.profile_shift + self.mate.profile_shift)
        return self.mate.hand * (self.reference_distance - self.centre_distance) + shifts

    def _reach_on_gear(self, radius: float) -> float:
        """Where a circle of the mate [mm] crosses the line of action, from the gear's base tangent point [mm]."""
        offset = self._signed_distance * float(np.sin(self.working_angle))
        return offset - self.mate.hand * reach(radius, self.mate.base_radius)

    @property
    def contact_path(self) -> tuple[float, float]:
        """First and last contact on the line of action, from the gear's base tangent point [mm].

        Limited by both tips and by where both flanks start to be involutes.
        """
        ours, theirs = self.gear, self.mate
        first = max(self._reach_on_gear(theirs.tip_form_radius), reach(ours.form_radius, ours.base_radius))
        last = min(reach(ours.tip_form_radius, ours.base_radius), self._reach_on_gear(theirs.form_radius))
        return first, last

    @property
    def contact_ratio(self) -> float:
        """Transverse contact ratio [-] of the flanks as cut."""
        first, last = self.contact_path
        return max(0.0, last - first) / self.gear.base_pitch

    @property
    def nominal_contact_ratio(self) -> float:
        """Transverse contact ratio [-] if both flanks are used up to their tips, whatever lies below. ISO 21771."""
        return relations.contact_ratio(
            tip1=self.gear.tip_radius,
            base1=self.gear.base_radius,
            tip2=self.mate.hand * self.mate.tip_radius,
            base2=self.mate.hand * self.mate.base_radius,
            distance=self._signed_distance,
            working=self.working_angle,
            base_pitch=self.gear.base_pitch,
        )

    @property
    def active_radii(self) -> tuple[float, float]:
        """Innermost radius of contact on the gear, and innermost (on a ring outermost) on the mate [mm]."""
        offset = self._signed_distance * float(np.sin(self.working_angle))
        first, last = self._reach_on_gear(self.mate.tip_radius), reach(self.gear.tip_radius, self.gear.base_radius)
        return float(np.hypot(first, self.gear.base_radius)), float(np.hypot(offset - last, self.mate.base_radius))

    @property
    def needed_shortening(self) -> tuple[float, float]:
        """By how much the tips of gear and mate must be shortened [mm] to stay off the fillets of the other; 0 if not.

        A full-depth ring often runs into the fillet of its planet, for it reaches deeper than the planet's rack. The
        fillet of an undercut tooth stands back and limits a gear nothing, a ring to the planet's base tangent point.
        """
        gear, mate, free = self.gear, self.mate, float("inf")
        first, last = reach(gear.form_radius, gear.base_radius), self._reach_on_gear(mate.form_radius)
        first = first if not gear.undercut else 0.0 if mate.hand < 0 else -free
        last = last if not mate.undercut else free
        offset = self._signed_distance * float(np.sin(self.working_angle))
        ours = gear.tip_radius - float(np.hypot(max(last, 0.0), gear.base_radius))
        theirs = mate.hand * (mate.tip_radius - float(np.hypot(offset - first, mate.base_radius)))
        return max(0.0, ours), max(0.0, theirs)

    @property
    def play(self) -> float:
        """Play as a transverse arc of the working circles [mm]; negative when the teeth are too thick."""
        ours, theirs = self.working_radii
        taken = self.gear.thickness_at(ours) + self.mate.thickness_at(theirs)
        return 2 * float(np.pi) * ours / self.gear.teeth - taken

    @property
    def normal_play(self) -> float:
        """Play as the shortest distance between the flanks [mm]."""
        return self.play * float(np.cos(self.working_angle)) * self.gear.base_helix_cosine

    @property
    def radial_play(self) -> float:
        """How far the centre distance may change before the play is gone [mm], to first order."""
        return self.play / (2 * float(np.tan(self.working_angle)))

    @property
    def margins(self) -> RingMargins:
        """Margins against interference of a gear in its ring.

        Raises:
            DesignError: the mate is no ring.
        """
        if self.mate.hand > 0:
            raise DesignError("interference margins belong to a gear in a ring; the mate is an external gear")
        return ring_margins(
            teeth=(self.gear.teeth, self.mate.teeth),
            tip=(self.gear.tip_radius, self.mate.tip_radius),
            base=(self.gear.base_radius, self.mate.base_radius),
            distance=self.centre_distance,
            working=self.working_angle,
        )
