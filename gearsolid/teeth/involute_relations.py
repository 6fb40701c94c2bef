"""Relations of involute gears and their pairs, in the signs of ISO 21771.

With those signs one formula serves external and internal pairs alike: a ring has negative tooth count and radii,
its centre distance comes out negative, and its positive profile shift moves the profile towards the axis (thicker ring
tooth).
"""

import numpy as np

from gearsolid.curves.curve import Reals
from gearsolid.errors import DesignError


def inv(angle: Reals | float) -> Reals:
    """Involute function tan a - a [rad] of a pressure angle a [rad]."""
    a = np.asarray(angle, dtype=float)
    return np.asarray(np.tan(a) - a)


def inverse_inv(value: Reals | float) -> Reals:
    """Pressure angle [rad] whose involute function is `value` [rad], any shape, exact to rounding.

    Newton on u - arctan u = value, a convex function of u = tan a, from a start that lies above the root.

    Raises:
        DesignError: a value is negative: no involute reaches it.
    """
    v = np.asarray(value, dtype=float)
    if np.any(v < 0) or not np.all(np.isfinite(v)):
        raise DesignError(f"the involute function of a pressure angle is {np.min(v):.6g} rad; it must be at least 0")
    u = v + np.cbrt(3 * v)
    for _ in range(5):
        u = u - np.where(u > 0, (u - np.arctan(u) - v) * (1 + u**2) / np.where(u > 0, u, 1.0) ** 2, 0.0)
    return np.asarray(np.arctan(u))


def transverse_angle(pressure_angle: float, helix_angle: float) -> float:
    """Transverse pressure angle [rad] from the normal one and the helix angle at the reference circle [rad]."""
    return float(np.arctan(np.tan(pressure_angle) / np.cos(helix_angle)))


def reference_centre_distance(z1: int, z2: int, module: float, helix_angle: float = 0.0) -> float:
    """Centre distance [mm] of unshifted members; negative for a ring (z2 < 0). `module` [mm] normal, angle [rad]."""
    return module * (z1 + z2) / (2 * float(np.cos(helix_angle)))


def working_angle(z1: int, z2: int, shift_sum: float, pressure_angle: float, helix_angle: float = 0.0) -> float:
    """Transverse working pressure angle [rad] at which two members touch on both flanks (no play). ISO 21771.

    Args:
        z1: teeth of the first member [-].
        z2: teeth of the second [-], negative for a ring.
        shift_sum: x1 + x2 [-], ring shift positive towards the axis.
        pressure_angle: normal pressure angle [rad].
        helix_angle: at the reference circle [rad].

    Raises:
        DesignError: the members have equally many teeth, or the shifts draw them closer than any involute allows.
    """
    if z1 + z2 == 0:
        raise DesignError(f"pinion and ring both have {z1} teeth; a ring needs more teeth than the pinion inside it")
    value = inv(transverse_angle(pressure_angle, helix_angle)) + 2 * np.tan(pressure_angle) * shift_sum / (z1 + z2)
    if value < 0:
        least = -inv(transverse_angle(pressure_angle, helix_angle)) * (z1 + z2) / (2 * np.tan(pressure_angle))
        raise DesignError(
            f"profile shifts of {z1} and {z2} teeth add up to {shift_sum:.4g}; they must "
            f"{'reach' if z1 + z2 > 0 else 'stay below'} {least:.4g} for involutes to touch: change a shift or a count"
        )
    return float(inverse_inv(value))


def centre_distance(
    z1: int, z2: int, shift_sum: float, pressure_angle: float, helix_angle: float = 0.0, *, module: float
) -> float:
    """Centre distance without play [mm], negative for a ring; arguments as in `working_angle`, `module` [mm] normal."""
    reference = reference_centre_distance(z1, z2, module, helix_angle)
    working = working_angle(z1, z2, shift_sum, pressure_angle, helix_angle)
    return reference * float(np.cos(transverse_angle(pressure_angle, helix_angle)) / np.cos(working))


def working_angle_at(
    z1: int, z2: int, distance: float, pressure_angle: float, helix_angle: float = 0.0, *, module: float
) -> float:
    """Transverse working pressure angle [rad] at a given centre distance [mm], negative for a ring. ISO 21771.

    Raises:
        DesignError: the distance is shorter than that of the two base circles.
    """
    base = reference_centre_distance(z1, z2, module, helix_angle)
    base *= float(np.cos(transverse_angle(pressure_angle, helix_angle)))
    if not 0 < base / distance <= 1:
        raise DesignError(
            f"centre distance of {z1} and {z2} teeth is {distance:.6g} mm; it must be beyond {base:.6g} mm, "
            "where the base circles meet: choose another distance or module"
        )
    return float(np.arccos(base / distance))


def shift_sum(
    z1: int, z2: int, distance: float, pressure_angle: float, helix_angle: float = 0.0, *, module: float
) -> float:
    """x1 + x2 [-] that leave no play at a given centre distance [mm], negative for a ring. ISO 21771."""
    working = working_angle_at(z1, z2, distance, pressure_angle, helix_angle, module=module)
    gain = float(inv(working) - inv(transverse_angle(pressure_angle, helix_angle)))
    return (z1 + z2) * gain / (2 * float(np.tan(pressure_angle)))


def reach(radius: float, base_radius: float) -> float:
    """Length of the base tangent from the base circle to a circle of `radius` [mm]; both [mm], signs dropped.

    Raises:
        DesignError: the circle lies inside the base circle, where there is no involute.
    """
    if abs(radius) < abs(base_radius):
        raise DesignError(
            f"a circle of radius {abs(radius):.6g} mm lies inside the base circle of {abs(base_radius):.6g} mm, "
            "where there is no involute"
        )
    return float(np.sqrt(radius**2 - base_radius**2))


def contact_ratio(
    *, tip1: float, base1: float, tip2: float, base2: float, distance: float, working: float, base_pitch: float
) -> float:
    """Transverse contact ratio eps_alpha [-] of two members whose flanks are used up to their tips. ISO 21771.

    Args:
        tip1: tip radius of the first member [mm].
        base1: its base radius [mm].
        tip2: tip radius of the second member [mm], negative for a ring.
        base2: its base radius [mm], negative for a ring.
        distance: centre distance [mm], negative for a ring.
        working: transverse working pressure angle [rad].
        base_pitch: transverse base pitch [mm].
    """
    path = reach(tip1, base1) + np.sign(base2) * reach(tip2, base2) - distance * np.sin(working)
    return float(path / base_pitch)


def overlap_ratio(face_width: float, module: float, helix_angle: float) -> float:
    """Overlap ratio eps_beta [-] from the face width [mm], normal module [mm] and helix angle [rad]. ISO 21771."""
    return float(face_width * abs(np.sin(helix_angle)) / (np.pi * module))


def active_radius(*, tip: float, base: float, own_base: float, distance: float, working: float) -> float:
    """Radius [mm] down to which (up to which, on a ring) a member's flank is touched: half of dNf. ISO 21771.

    Args:
        tip: tip radius of the mate [mm], negative for a ring.
        base: base radius of the mate [mm], negative for a ring.
        own_base: base radius of this member [mm], negative for a ring.
        distance: centre distance [mm], negative for a ring.
        working: transverse working pressure angle [rad].

    Returns:
        A positive radius, for a ring too.
    """
    left = distance * np.sin(working) - np.sign(base) * reach(tip, base)
    return float(np.hypot(left, own_base))
