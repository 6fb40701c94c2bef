"""A wheel and the lantern pinion it drives."""

from math import pi

from gearsolid.errors import DesignError
from gearsolid.teeth.clock_pair import ClockPair, Drives
from gearsolid.teeth.lantern import LanternPinion, LanternWheel
from gearsolid.teeth.trundle_flank import TrundleFlank

# Practice, in modules or as shares; from memory.
_TRUNDLE = 0.525
_PRACTICAL = 0.95
_CLEARANCE = 0.4


def lantern_pair(
    wheel_teeth: int,
    trundles: int,
    module: float,
    *,
    trundle_radius: float | None = None,
    play: float = 0.05,
) -> ClockPair:
    """A wheel that drives a lantern pinion, all contact after the line of centres.

    Lanterns are driven: with the lantern driving all contact would come before the line of centres.

    Args:
        wheel_teeth: [-].
        trundles: [-].
        module: [mm].
        trundle_radius: [mm]; None takes 0.525 module, a trundle as thick as a leaf (from memory).
        play: circumferential play as a share of the pitch at the pitch circle [-]; the wheel's teeth are thinned by it.

    Raises:
        DesignError: contact would break off before the next trundle takes over, or the members cannot be made.
    """
    if not 0 <= play < 0.5:
        raise DesignError(f"the play is {play:g} of the pitch; it must lie from 0 to below 0.5")
    if not (module > 0 and wheel_teeth > 0):
        raise DesignError(f"{wheel_teeth:g} teeth of module {module:g} mm were given; both must be above 0")
    pinion = LanternPinion(trundles, module, _TRUNDLE * module if trundle_radius is None else trundle_radius)
    q, thinning = pinion.trundle_radius, play * pi * module
    flank = TrundleFlank(wheel_teeth * module / 2, pinion.reference_radius, q)
    pointed = flank.point(flank.turn_at_angle((pi - thinning / module) / wheel_teeth))
    wheel = LanternWheel(
        wheel_teeth,
        trundles,
        module,
        q,
        addendum=_PRACTICAL * (abs(pointed) - flank.pitch_radius),
        dedendum=q + _CLEARANCE * module,
        tooth_thinning=thinning,
    )
    if wheel.contact_ratio < 1:
        raise DesignError(
            f"{wheel_teeth} teeth keep {trundles} trundles of {2 * q:g} mm diameter in contact for "
            f"{wheel.contact_ratio:.3f} of a pitch; 1 is needed: take thinner or more trundles, more teeth or less play"
        )
    return ClockPair(wheel, pinion, wheel.reference_radius + pinion.reference_radius, Drives.WHEEL)
