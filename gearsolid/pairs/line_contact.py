"""Pressure where two cylinders touch along a line, by Hertz."""

from math import pi

import numpy as np

from gearsolid.curves.curve import Reals


def reduced_modulus(modulus_1: float, poisson_1: float, modulus_2: float, poisson_2: float) -> float:
    """Modulus E* of two bodies in contact [MPa]: 1/E* = (1 - nu1^2)/E1 + (1 - nu2^2)/E2.

    Args:
        modulus_1: Young's modulus of one body [MPa].
        poisson_1: its Poisson's ratio [-].
        modulus_2: Young's modulus of the other [MPa].
        poisson_2: its Poisson's ratio [-].
    """
    return 1 / ((1 - poisson_1**2) / modulus_1 + (1 - poisson_2**2) / modulus_2)


def contact_stress(force: Reals, width: float, radius_1: Reals, radius_2: Reals, modulus: float) -> Reals:
    """Largest pressure of a line contact [MPa], by Hertz.

    Args:
        force: normal force [N], any shape.
        width: length of the contact [mm].
        radius_1: curvature radius of one body [mm], negative where it is hollow.
        radius_2: curvature radius of the other [mm], negative where it is hollow.
        modulus: reduced modulus [MPa].
    """
    stress: Reals = np.sqrt(force * modulus / (pi * width) * (1 / radius_1 + 1 / radius_2))
    return stress


def contact_half_width(force: Reals, width: float, radius_1: Reals, radius_2: Reals, modulus: float) -> Reals:
    """Half the width of the flattened strip of a line contact [mm], by Hertz; parameters as `contact_stress`."""
    half: Reals = np.sqrt(4 * force / (pi * width * modulus * (1 / radius_1 + 1 / radius_2)))
    return half
