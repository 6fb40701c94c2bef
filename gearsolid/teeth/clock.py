"""Clock pairs: practical ogival teeth, and exact cycloidal ones with as little contact before the centres as can be.

The practical numbers are those of BS 978-2:1952 (fine pitch gears, cycloidal type), all from memory. The addendum
factor is computed: the formula gives every recalled table value to its last digit.
"""

from enum import StrEnum
from math import inf, pi

from gearsolid.errors import DesignError
from gearsolid.teeth.clock_gear import ClockGear
from gearsolid.teeth.clock_pair import ClockPair, Drives
from gearsolid.teeth.cycloid import Cycloid
from gearsolid.teeth.cycloidal import CycloidalGear
from gearsolid.teeth.cycloidal_relations import check_mates
from gearsolid.teeth.leaf_tip import Ogive

# BS 978-2:1952, from memory; lengths in modules.
_PRACTICAL = 0.95
_ARC = 1.40
_CLEARANCE = 0.4
_WHEEL_DEDENDUM = pi / 2
_SLENDER, _STOUT = 1.05, 1.25
_MOST_SLENDER = 10


class LeafTop(StrEnum):
    """Tops of pinion leaves. The order of the letters is the least certain thing recalled."""

    ROUND = "A"
    MEDIUM_OGIVE = "B"
    HIGH_OGIVE = "C"


# Addendum and arc radius in modules, up to ten leaves and from eleven; BS 978-2:1952, from memory.
_TOPS = {
    LeafTop.ROUND: ((0.525, 0.525), (0.625, 0.625)),
    LeafTop.MEDIUM_OGIVE: ((0.67, 0.70), (0.805, 0.83)),
    LeafTop.HIGH_OGIVE: ((0.855, 1.05), (1.05, 1.25)),
}


def theoretical_addendum_factor(leaves: int, ratio: float) -> float:
    """Addendum, in modules, at which a wheel tooth of half the pitch is pointed [-].

    Args:
        leaves: of the radial-flanked pinion [-].
        ratio: wheel teeth / leaves [-]; infinite for a rack.
    """
    face = Cycloid(leaves * ratio / 2, leaves / 4)
    return face.height(face.roll_at_lean(pi / 4))


def practical_addendum_factor(leaves: int, ratio: float) -> float:
    """0.95 of the theoretical addendum factor [-]. BS 978-2:1952, from memory; arguments as there."""
    return _PRACTICAL * theoretical_addendum_factor(leaves, ratio)


def leaf_thickness(leaves: int) -> float:
    """Thickness of a leaf in modules [-]: 1.05 up to ten leaves, then 1.25. BS 978-2:1952, from memory."""
    return _SLENDER if leaves <= _MOST_SLENDER else _STOUT


def usual_top(leaves: int) -> LeafTop:
    """The top usually given to a number of leaves; from memory."""
    if leaves <= 7:
        return LeafTop.HIGH_OGIVE
    return LeafTop.MEDIUM_OGIVE if leaves <= 9 else LeafTop.ROUND


def leaf_tip(top: LeafTop, leaves: int, module: float) -> Ogive:
    """The arcs of a leaf's top; module in [mm]. BS 978-2:1952, from memory."""
    height, radius = _TOPS[top][leaves > _MOST_SLENDER]
    return Ogive(height * module, radius * module)


def ogival_pair(
    wheel_teeth: int,
    leaves: int,
    module: float,
    *,
    top: LeafTop | None = None,
    root_fillet: float = 0.0,
    leaf_root_fillet: float = inf,
) -> ClockPair:
    """A practical pair whose wheel drives: radial flanks, ogival wheel teeth, rounded or ogival leaves.

    Args:
        wheel_teeth: [-].
        leaves: [-], 6 or more.
        module: [mm]; the standard covers 0.07 to 1.
        top: of the leaves; None takes the usual one.
        root_fillet: of the wheel [mm].
        leaf_root_fillet: of the pinion [mm]; infinity rounds the root.

    Raises:
        DesignError: fewer than 6 leaves, a wheel smaller than the pinion, or teeth that cannot be made.

    Source: BS 978-2:1952, from memory.
    """
    _check_counts(wheel_teeth, leaves, module)
    factor = practical_addendum_factor(leaves, wheel_teeth / leaves)
    wheel = ClockGear(
        wheel_teeth,
        module,
        pi * module / 2,
        Ogive(factor * module, _ARC * factor * module),
        _WHEEL_DEDENDUM * module,
        root_fillet,
    )
    pinion = ClockGear(
        leaves,
        module,
        leaf_thickness(leaves) * module,
        leaf_tip(top or usual_top(leaves), leaves, module),
        (factor + _CLEARANCE) * module,
        leaf_root_fillet,
    )
    return ClockPair(wheel, pinion, wheel.reference_radius + pinion.reference_radius, Drives.WHEEL)


def cycloidal_pair(
    wheel_teeth: int,
    leaves: int,
    module: float,
    *,
    drives: Drives = Drives.WHEEL,
    play: float = 0.1,
    early: float = 0.05,
) -> ClockPair:
    """An exact pair with radial flanks on both members and no more contact before the line of centres than needed.

    The driver's teeth are cut where the next one takes over, or at 0.95 of their point. The driven member's addendum is
    just high enough to start contact where the driver's would leave a gap, and `early` more.

    Args:
        wheel_teeth: [-].
        leaves: [-], 6 or more.
        module: [mm].
        drives: which member drives.
        play: circumferential play as a share of the pitch at the pitch circle [-]; the leaves are made thinner by it.
        early: contact ratio beyond 1 that the driven member's addendum gives [-].

    Raises:
        DesignError: fewer than 6 leaves, a wheel smaller than the pinion, play out of range, or teeth that cannot be
            made; where the driven member's teeth are too low the message names both contact ratios.
    """
    _check_counts(wheel_teeth, leaves, module)
    if not 0 <= play < 0.5:
        raise DesignError(f"the play is {play:g} of the pitch; it must lie from 0 to below 0.5, 0.05 to 0.17 are usual")
    if not 0 < early < 0.5:
        raise DesignError(f"the early contact is {early:g} of a pitch; it must lie between 0 and 0.5")
    pitch, thinning = pi * module, {wheel_teeth: 0.0, leaves: play * pi * module}
    driver, driven = (wheel_teeth, leaves) if drives is Drives.WHEEL else (leaves, wheel_teeth)
    face = Cycloid(driver * module / 2, driven * module / 4)
    point = face.height(face.roll_at_lean((pitch / 2 - thinning[driver]) / 2))
    high = min(face.takeover(pitch), _PRACTICAL * point)
    recess = face.share(high, pitch)
    low = _addendum_for(max(0.0, 1 - recess) + early, driven, driver, module, pitch / 2 - thinning[driven])
    addendum = {driver: high, driven: low}
    members = {
        teeth: CycloidalGear(
            teeth,
            module,
            addendum_circle=mate * module / 4,
            dedendum_circle=teeth * module / 4,
            addendum=addendum[teeth],
            dedendum=addendum[mate] + _CLEARANCE * module,
            tooth_thinning=thinning[teeth],
        )
        for teeth, mate in ((driver, driven), (driven, driver))
    }
    check_mates(members[driver], members[driven])
    wheel, pinion = members[wheel_teeth], members[leaves]
    return ClockPair(wheel, pinion, wheel.reference_radius + pinion.reference_radius, drives)


def _addendum_for(share: float, teeth: int, mate: int, module: float, thickness: float) -> float:
    """Addendum [mm] that gives a part of the contact ratio, against radial flanks of the mate."""
    face = Cycloid(teeth * module / 2, mate * module / 4)
    roll, most = share * pi * module / face.describing, face.roll_at_lean(thickness / 2)
    if roll > most:
        have = most * face.describing / (pi * module)
        raise DesignError(
            f"{teeth} teeth must keep contact for {share:.4g} of a pitch before the line of centres; pointed they "
            f"reach {have:.4g}: take less play or less early contact, or more teeth in the driver"
        )
    return face.height(roll)


def _check_counts(wheel_teeth: int, leaves: int, module: float) -> None:
    if leaves < 6:
        raise DesignError(f"a clock pinion has {leaves} leaves; 6 or more are possible here")
    if wheel_teeth <= leaves:
        raise DesignError(
            f"the wheel has {wheel_teeth} teeth and the pinion {leaves} leaves; the wheel must have more teeth"
        )
    if not module > 0:
        raise DesignError(f"the module is {module:g} mm; it must be above 0")
