"""A steady turn as a B-spline: what carries a profile along the axis of a helical body."""

import numpy as np
from scipy.interpolate import BSpline

from gearsolid.curves.fit import Spline
from gearsolid.errors import ToleranceError

_DEGREE = 5
_MOST_POLES = 40
_FIT_PER_POLE = 20
_CHECK_PER_POLE = 40


def rotation(angle: float, tol: float) -> Spline:
    """B-spline e(v) with |e(v) - exp(i angle v)| within `tol` for v from 0 to 1, exact at both ends.

    Unlike a fit of the unit circle it is held to the parameter too: at share v of the way the turn is v times the
    angle.

    Args:
        angle: whole turn [rad].
        tol: largest error [-], that is [mm] on a radius of 1 mm.

    Returns:
        The spline, with the error found on a dense grid.

    Raises:
        ToleranceError: the tolerance is not reached.
    """
    for count in range(2, _MOST_POLES + 1):
        spline = _turning(angle, count)
        if spline.error <= tol:
            return spline
    raise ToleranceError(
        f"the best B-spline with {_MOST_POLES} poles for a turn of {np.degrees(angle):.4g} deg is {spline.error:.3g} "
        f"off, not the {tol:.3g} asked; turn through a smaller angle"
    )


def _turning(angle: float, count: int) -> Spline:
    degree = min(_DEGREE, count - 1)
    inner = np.linspace(0.0, 1.0, count - degree + 1)[1:-1]
    knots = np.concatenate((np.zeros(degree + 1), inner, np.ones(degree + 1)))
    shares = np.linspace(0.0, 1.0, _FIT_PER_POLE * count)
    matrix = BSpline.design_matrix(shares, knots, degree).toarray()
    ends = np.exp(1j * angle * np.array([0.0, 1.0]))
    rest = np.exp(1j * angle * shares) - matrix[:, [0, -1]] @ ends
    free = np.linalg.lstsq(matrix[:, 1:-1], np.stack((rest.real, rest.imag), axis=-1), rcond=None)[0]
    poles = np.concatenate((ends[:1], free @ (1, 1j), ends[1:]))
    spline = Spline(degree, tuple(knots.tolist()), tuple(poles.tolist()))
    dense = np.linspace(0.0, 1.0, _CHECK_PER_POLE * count + 1)
    error = float(np.max(np.abs(spline.point(dense) - np.exp(1j * angle * dense))))
    return Spline(degree, spline.knots, spline.poles, error)
