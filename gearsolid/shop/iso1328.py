"""Flank tolerances of cylindrical gears by ISO 1328-1:2013.

Formulas from memory of the standard; that totals are rounded from unrounded parts is the least certain of them.
"""

from dataclasses import dataclass

import numpy as np

from gearsolid.errors import DesignError

# Validity of ISO 1328-1:2013: quantity, unit, least, most.
_RANGES = {
    "tolerance class": ("", 1, 11),
    "number of teeth": ("", 5, 1000),
    "reference diameter": (" mm", 5, 15000),
    "normal module": (" mm", 0.5, 70),
    "face width": (" mm", 4, 1200),
    "helix angle": (" deg", 0, 45),
}


@dataclass(frozen=True)
class FlankTolerances:
    """Tolerances of one gear [um], each for one flank side.

    Args:
        single_pitch: fpT [um].
        cumulative_pitch: FpT [um].
        profile_slope: fHaT [um].
        profile_form: ffaT [um].
        profile: total, FaT [um].
        helix_slope: fHbT [um].
        helix_form: ffbT [um].
        helix: total, FbT [um].
        runout: FrT, informative [um].
    """

    single_pitch: float
    cumulative_pitch: float
    profile_slope: float
    profile_form: float
    profile: float
    helix_slope: float
    helix_form: float
    helix: float
    runout: float


def flank_tolerances(
    tolerance_class: int, *, teeth: int, diameter: float, module: float, face_width: float, helix_angle_deg: float = 0.0
) -> FlankTolerances:
    """Tolerances of a cylindrical gear, rounded as the standard says. ISO 1328-1:2013.

    Args:
        tolerance_class: 1 (finest) to 11 [-].
        teeth: tooth count [-].
        diameter: reference diameter [mm].
        module: normal module [mm].
        face_width: [mm].
        helix_angle_deg: [deg].

    Raises:
        DesignError: a number lies outside the standard's range.
    """
    given = (tolerance_class, teeth, diameter, module, face_width, abs(helix_angle_deg))
    for value, (name, (unit, least, most)) in zip(given, _RANGES.items(), strict=True):
        if not least <= value <= most:
            raise DesignError(
                f"the {name} is {value:g}{unit}; ISO 1328-1:2013 gives tolerances from {least:g} to {most:g}{unit}: "
                "agree on tolerances without it"
            )
    step = np.sqrt(2) ** (tolerance_class - 5)
    root_d, root_b = np.sqrt(diameter), np.sqrt(face_width)
    cumulative = 0.002 * diameter + 0.55 * root_d + 0.7 * module + 12
    profile_slope, profile_form = 0.4 * module + 0.001 * diameter + 4, 0.55 * module + 5
    helix_slope, helix_form = 0.05 * root_d + 0.35 * root_b + 4, 0.07 * root_d + 0.45 * root_b + 4
    class_5 = (
        0.001 * diameter + 0.4 * module + 5,
        cumulative,
        profile_slope,
        profile_form,
        np.hypot(profile_slope, profile_form),
        helix_slope,
        helix_form,
        np.hypot(helix_slope, helix_form),
        0.9 * cumulative,
    )
    return FlankTolerances(*(rounded(float(value * step)) for value in class_5))


def rounded(value: float) -> float:
    """A tolerance [um] rounded to 1 above 10, to 0.5 above 5, else to 0.1 [um]. ISO 1328-1:2013."""
    parts = 1 if value > 10 else 2 if value > 5 else 10
    return float(np.floor(value * parts + 0.5)) / parts
