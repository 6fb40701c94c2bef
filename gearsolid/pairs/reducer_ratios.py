"""Ratios of pin-wheel reducers, input turns per output turn, negative where the output turns the other way."""

from gearsolid.errors import DesignError


def _checked(**counts: int) -> None:
    for name, count in counts.items():
        if count < 1 or count != int(count):
            raise DesignError(f"{name.replace('_', ' ')} is {count:g}; it must be a whole number, 1 or more")


def ring_held(disc_teeth: int, difference: int = 1) -> float:
    """Ratio crank to disc with the ring held [-].

    Args:
        disc_teeth: lobes of the disc, or its pins in a lobed ring [-].
        difference: tooth difference to the ring [-].
    """
    _checked(disc_teeth=disc_teeth, tooth_difference=difference)
    return -disc_teeth / difference


def disc_held(ring_teeth: int, difference: int = 1) -> float:
    """Ratio crank to ring with the disc kept from turning [-].

    Args:
        ring_teeth: pins of the ring, or its lobes [-].
        difference: tooth difference to the disc [-].
    """
    _checked(ring_teeth=ring_teeth, tooth_difference=difference)
    return ring_teeth / difference


def two_stage_ring_held(sun: int, planet: int, pins: int, difference: int = 1) -> float:
    """Ratio sun to carrier of a planetary stage whose planets turn the cranks, the pin ring held [-].

    Args:
        sun: teeth of the sun on the input shaft [-].
        planet: teeth of the planet on each crank [-].
        pins: pins of the ring [-].
        difference: tooth difference between ring and disc [-].

    Source: Yang, Zhou, Chang, Chen, Mech. Mach. Theory 163, 2021, 104384, equation 2.
    """
    return 1 - two_stage_carrier_held(sun, planet, pins, difference)


def two_stage_carrier_held(sun: int, planet: int, pins: int, difference: int = 1) -> float:
    """Ratio sun to pin ring of the same stages with the carrier held [-]; parameters as `two_stage_ring_held`."""
    _checked(sun=sun, planet=planet, pins=pins, tooth_difference=difference)
    return -planet * pins / (sun * difference)
