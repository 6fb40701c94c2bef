"""Closed forms of cycloidal pairs: contact before and after the line of centres, and who needs how high a tooth."""

from math import degrees, inf, pi
from typing import NamedTuple

from gearsolid.errors import DesignError
from gearsolid.teeth.cycloid import Cycloid
from gearsolid.teeth.cycloidal_member import CycloidalMember

# Describing circles this near to each other, as a share of their radius, are the same.
_SAME = 1e-9
_MOST_TEETH = 10**7


class ContactRatio(NamedTuple):
    """Parts of the contact ratio of a pair [-].

    Args:
        approach: before the line of centres: the driven member's addendum on the driver's dedendum.
        recess: after the line of centres: the driver's addendum on the driven member's dedendum.
    """

    approach: float
    recess: float

    @property
    def total(self) -> float:
        """Mean number of tooth pairs in contact [-]."""
        return self.approach + self.recess


def contact_ratio(driver: CycloidalMember, driven: CycloidalMember) -> ContactRatio:
    """Contact ratio of a pair at its exact centre distance, as far as the addenda reach.

    Raises:
        DesignError: the members do not work together; see `check_mates`.

    Source: EB 1911, "Mechanics", articles 49-52 (the two describing circles are the path of contact).
    """
    check_mates(driver, driven)
    return ContactRatio(_share(driven), _share(driver))


def _share(member: CycloidalMember) -> float:
    return member.face.share(member.hand * member.addendum, member.pitch)


def pressure_angle_deg(member: CycloidalMember) -> float:
    """Largest pressure angle [deg] while this member's addendum works: half the roll at its tip."""
    return degrees(member.face.roll(member.hand * member.addendum)) / 2


def check_mates(first: CycloidalMember, second: CycloidalMember) -> None:
    """Refuse members that do not roll together: each one's addendum circle is the other's dedendum circle.

    Raises:
        DesignError: modules or describing circles differ, a mate's flank ends too soon, or both members are internal,
            or the faces of a ring and its pinion run into each other.
    """
    if abs(first.module - second.module) > _SAME * first.module:
        raise DesignError(f"modules {first.module:g} and {second.module:g} mm do not work together; they must be equal")
    for one, other in ((first, second), (second, first)):
        if abs(one.addendum_circle - other.dedendum_circle) > _SAME * one.addendum_circle:
            raise DesignError(
                f"the addendum circle of {one.teeth} teeth has a radius of {one.addendum_circle:g} mm and the dedendum "
                f"circle of its mate {other.dedendum_circle:g} mm; they must be the same circle"
            )
        need, have = needed_dedendum(one, other), other.dedendum
        if need > have:
            raise DesignError(
                f"an addendum of {one.addendum:g} mm touches its mate's flank down to {need:.4g} mm from the reference "
                f"circle; the mate's dedendum is {have:g} mm: deepen it or lower the addendum"
            )
    if first.hand + second.hand < 0:
        raise DesignError("both members are internal; a ring works with an external pinion inside it")
    if first.hand != second.hand:
        ring, pinion = (first, second) if first.hand < 0 else (second, first)
        check_ring_room(ring, pinion)


def check_ring_room(ring: CycloidalMember, pinion: CycloidalMember) -> None:
    """Refuse a ring and pinion whose faces run into each other.

    Both faces are also drawn by one larger circle rolling between the members (double generation), of radius
    R - a for the ring and r + b for the pinion; the faces keep clear while the ring's is the larger.

    Raises:
        DesignError: the describing circles together are larger than the centre distance.

    Source: the rule is C. W. MacCord's, Kinematics (1883), from memory; derived again from the double generation.
    """
    distance = ring.reference_radius - pinion.reference_radius
    together = ring.addendum_circle + pinion.addendum_circle
    if together > distance * (1 + _SAME):
        raise DesignError(
            f"the addendum circles of ring and pinion measure {together:g} mm together; to keep the faces clear they "
            f"may be no more than the centre distance, {distance:g} mm: take smaller circles or more teeth in the ring"
        )


def needed_dedendum(member: CycloidalMember, mate: CycloidalMember) -> float:
    """Depth from the mate's reference circle [mm] down to which this member's addendum touches it."""
    roll = member.face.roll(member.hand * member.addendum)
    return abs(mate.flank.height(roll))


def takeover_addendum(driver_teeth: float, driven_teeth: int, module: float) -> float:
    """Addendum of a driver that drives from the line of centres until the next tooth arrives there [mm].

    The driven member has radial flanks. No contact before the line of centres is needed, so none of its friction.

    Args:
        driver_teeth: [-]; infinite for a rack.
        driven_teeth: [-].
        module: [mm].

    Returns:
        Addendum [mm]; it must not exceed the addendum at which the driver's tooth is pointed.
    """
    return _radial_face(driver_teeth, driven_teeth, module).takeover(pi * module)


def receding_share(driver_teeth: float, driven_teeth: int, thickness_share: float = 0.5) -> float:
    """Contact ratio after the line of centres of a driver with pointed teeth on radial flanks [-].

    Args:
        driver_teeth: [-]; infinite for a rack.
        driven_teeth: [-].
        thickness_share: the driver's tooth thickness as a share of the pitch at the reference circle [-].
    """
    face = _radial_face(driver_teeth, driven_teeth, 1.0)
    roll = face.roll_at_lean(pi * thickness_share / 2)
    return driven_teeth * roll / (4 * pi)


def early_contact_deg(driven_teeth: int, recess: float) -> float:
    """Turn of the driven member before the line of centres at which contact must begin [deg].

    Args:
        driven_teeth: [-].
        recess: contact ratio after the line of centres [-].
    """
    return max(0.0, 1 - recess) * 360 / driven_teeth


def least_driver(driven_teeth: int, thickness_share: float = 0.5) -> int:
    """Fewest teeth of a driver with pointed teeth that drives radial flanks only after the line of centres [-].

    Args:
        driven_teeth: [-].
        thickness_share: the driver's tooth thickness as a share of the pitch [-].

    Raises:
        DesignError: not even a rack does.
    """
    best = receding_share(inf, driven_teeth, thickness_share)
    if best < 1:
        raise DesignError(
            f"{driven_teeth} leaves cannot be driven wholly after the line of centres: even a rack with teeth of "
            f"{thickness_share:.4g} pitch keeps contact for {best:.3f} pitches of the 1 needed; take more leaves or "
            "thicker teeth on the driver"
        )
    few, many = 2, 4
    while receding_share(many, driven_teeth, thickness_share) < 1:
        few, many = many, 2 * many
        if many > _MOST_TEETH:
            raise DesignError(f"{driven_teeth} leaves need a driver of more than {_MOST_TEETH} teeth: take a rack")
    while many - few > 1:
        middle = (few + many) // 2
        if receding_share(middle, driven_teeth, thickness_share) < 1:
            few = middle
        else:
            many = middle
    return many


def _radial_face(driver_teeth: float, driven_teeth: int, module: float) -> Cycloid:
    return Cycloid(driver_teeth * module / 2, driven_teeth * module / 4)
