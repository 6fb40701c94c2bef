"""How much play between tooth flanks is usual."""

import numpy as np

from gearsolid.errors import DesignError


def least_normal_play(module: float, centre_distance: float) -> float:
    """Recommended least normal play jbn of industrial gears [mm], rounded up to 0.01 mm.

    For steel gears in an iron case below 15 m/s; no rule for plastic or printed teeth. ISO/TR 10064-2:1996, table A.1
    and its formula (from memory).

    Args:
        module: normal module [mm].
        centre_distance: [mm].

    Raises:
        DesignError: a length is not above 0.
    """
    if not (module > 0 and centre_distance > 0):
        raise DesignError(f"module {module:g} mm and centre distance {centre_distance:g} mm must both be above 0 mm")
    play = 2 / 3 * (0.06 + 0.0005 * centre_distance + 0.03 * module)
    return float(np.ceil(play * 100 - 1e-9)) / 100
