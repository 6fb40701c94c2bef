"""Smoothing splines through points that carry noise: as smooth as the points allow.

The spline has more poles than it needs; a penalty on the second differences of its poles holds it smooth, and the
amount of penalty is the one that would best foretell each point from all the others (generalised cross-validation).
Source: penalised splines after Eilers and Marx, Statistical Science 11(2), 1996; choice of the penalty after Craven and
Wahba, Numerische Mathematik 31, 1979.
"""

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray
from scipy.interpolate import BSpline, make_interp_spline
from scipy.linalg import solveh_banded
from scipy.sparse import csr_array

from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.fit import Spline
from gearsolid.errors import DesignError

_DEGREE = 5
_ORDER = 2
# Points for each span, in all and of each laid-over row, and the numbers of spans worth having.
_POINTS_PER_SPAN, _OF_EACH_ROW = 5, 2
_FEWEST_SPANS, _MOST_SPANS = 3, 100
# Fewer points than this leave nothing to judge noise by.
LEAST_POINTS = 12
_PENALTIES = 10.0 ** np.arange(-14, 7, 0.5)
# Share of the largest entry that keeps poles without points from running away.
_RIDGE = 1e-14
_ROUNDS = 4
_FOOT_STEPS = 5


class Smoothed(NamedTuple):
    """A smoothing spline and how it lies to its points.

    Args:
        spline: its `error` is the largest distance of a point from it [mm].
        points: the points, on a rim turned onto the pitch where their feet lie [mm], shape (n,).
        shares: parameters of the points' feet [-], shape (n,).
        offsets: distances of the points, positive to the right of travel [mm], shape (n,).
    """

    spline: Spline
    points: Points
    shares: Reals
    offsets: Reals


def smoothed(
    points: Points, shares: Reals, rows: int = 1, start: complex | None = None, end: complex | None = None
) -> Smoothed:
    """The smoothing spline of an open row of points.

    Args:
        points: [mm], shape (n,).
        shares: where they lie along the row, about, 0 to 1, shape (n,).
        rows: how many rows of points are laid over each other [-].
        start: first point the spline must set out from [mm], or None.
        end: last point it must reach [mm], or None.

    Raises:
        DesignError: fewer than 12 points.
    """
    _check(points)
    spans = _spans(points.size, rows)
    knots = np.concatenate((np.zeros(_DEGREE), np.linspace(0, 1, spans + 1), np.ones(_DEGREE)))
    fixed = {0: start, knots.size - _DEGREE - 2: end}
    held = {k: z for k, z in fixed.items() if z is not None}
    u = np.clip(shares, 0.0, 1.0)
    for _ in range(_ROUNDS):
        matrix = csr_array(BSpline.design_matrix(u, knots, _DEGREE))
        poles = _penalised(matrix, points, csr_array(np.diff(np.eye(matrix.shape[1]), _ORDER, axis=0)), held)
        spline = Spline(_DEGREE, tuple(knots.tolist()), tuple(poles.tolist()))
        u = feet(spline, points, u)
    return _judged(spline, points, u)


def smoothed_rim(points: Points, shares: Reals, rows: int, step: complex) -> Smoothed:
    """The smoothing spline of one pitch of a rim without corners: it runs on into the next pitch as smoothly.

    Args:
        points: all points, turned back onto one pitch [mm], shape (n,).
        shares: where they lie along the pitch, about, 0 to 1, shape (n,).
        rows: how many pitches are laid over each other [-].
        step: turn from one pitch to the next, as a unit complex number.

    Raises:
        DesignError: fewer than 12 points.
    """
    _check(points)
    spans = min(2 * _spans(points.size, rows), _MOST_SPANS)
    knots = np.arange(-_DEGREE, spans + _DEGREE + 1) / spans
    # Poles beyond the pitch are those at its start, turned by one pitch.
    turns = np.zeros((spans + _DEGREE, spans), dtype=complex)
    turns[np.arange(spans + _DEGREE), np.arange(spans + _DEGREE) % spans] = step ** (
        np.arange(spans + _DEGREE) // spans
    )
    penalty = csr_array(np.diff(np.eye(spans + _DEGREE), _ORDER, axis=0)) @ csr_array(turns)
    clamped = np.concatenate((np.zeros(_DEGREE), np.linspace(0, 1, spans + 1), np.ones(_DEGREE)))
    u = np.mod(shares, 1.0)
    seen = points * step ** -np.floor(shares)
    for _ in range(_ROUNDS):
        matrix = csr_array(BSpline.design_matrix(u, knots, _DEGREE)) @ csr_array(turns)
        poles = turns @ _penalised(matrix, seen, penalty, {})
        spline = _clamped(BSpline(knots, poles, _DEGREE), clamped)
        # Points whose feet lie on the next pitch are turned back once more.
        u = feet(spline, seen, u, overrun=0.05)
        seen, u = seen * step ** -np.floor(u), np.mod(u, 1.0)
    return _judged(spline, seen, u)


def _check(points: Points) -> None:
    if points.size < LEAST_POINTS:
        raise DesignError(
            f"{points.size} points lie on this stretch; at least {LEAST_POINTS} are needed to tell curve from noise"
        )


def _spans(count: int, rows: int) -> int:
    """Number of spans; rows measured at the same places tell no more between them than one row does."""
    return int(np.clip(min(count // _POINTS_PER_SPAN, count // (rows * _OF_EACH_ROW)), _FEWEST_SPANS, _MOST_SPANS))


def feet(spline: Spline, points: Points, near: Reals, overrun: float = 0.0) -> Reals:
    """Parameters of the feet of points on a spline, by Newton's method.

    Args:
        spline: where the feet are sought.
        points: [mm], shape (n,).
        near: first guesses [-], shape (n,).
        overrun: how far beyond its ends the spline may be continued [-].
    """
    u = np.asarray(near, dtype=float)
    for _ in range(_FOOT_STEPS):
        away, slope = spline.point(u) - points, spline.derivative(u)
        square = np.abs(slope) ** 2
        fall = square + np.real(away * np.conj(spline.second(u)))
        u = u - np.real(away * np.conj(slope)) / np.where(fall > square / 2, fall, square)
        u = np.clip(u, -overrun, 1 + overrun)
    return u


def _judged(spline: Spline, points: Points, u: Reals) -> Smoothed:
    offsets: Reals = np.real((points - spline.point(u)) * np.conj(-1j * spline.tangent(np.clip(u, 0.0, 1.0))))
    worst = float(np.max(np.abs(points - spline.point(u))))
    return Smoothed(Spline(spline.degree, spline.knots, spline.poles, worst), points, u, offsets)


def _clamped(spline: BSpline, knots: Reals) -> Spline:
    """The same curve over 0 to 1 with its ends as poles."""
    averages = np.array([knots[k + 1 : k + 1 + _DEGREE].mean() for k in range(knots.size - _DEGREE - 1)])
    z = spline(averages)
    poles = make_interp_spline(averages, np.column_stack([z.real, z.imag]), _DEGREE, t=knots).c
    return Spline(_DEGREE, tuple(knots.tolist()), tuple((poles[:, 0] + 1j * poles[:, 1]).tolist()))


def _penalised(matrix: csr_array, points: Points, penalty: csr_array, held: dict[int, complex]) -> Points:
    """Poles with the penalty that cross-validation finds best; those in `held` keep their place."""
    poles = np.zeros(matrix.shape[1], dtype=complex)
    poles[list(held)] = list(held.values())
    free = np.setdiff1d(_interleaved(matrix.shape[1]), list(held), assume_unique=True)
    target, rough = points - matrix @ poles, -(penalty @ poles)
    a, d = csr_array(matrix[:, free]), csr_array(penalty[:, free])
    gram, stiff = (a.conj().T @ a).toarray(), (d.conj().T @ d).toarray()
    gram += _RIDGE * np.max(np.abs(gram)) * np.eye(free.size)
    pull, bend = a.conj().T @ target, d.conj().T @ rough
    width = int(np.max(np.abs(np.subtract(*np.nonzero(np.abs(gram) + np.abs(stiff))))))
    scale = float(np.trace(np.abs(gram)) / np.trace(np.abs(stiff)))
    best = np.inf, pull
    for penalised in _PENALTIES * scale:
        # The poles, and how far each follows its own points: the sum of that is what the fit has cost.
        answers = np.column_stack([pull + penalised * bend, gram])
        found = solveh_banded(_band(gram + penalised * stiff, width), answers, lower=True)
        cost = float(np.trace(found[:, 1:]).real)
        miss = float(np.sum(np.abs(target - a @ found[:, 0]) ** 2))
        score = miss / max(points.size - cost, 1.0) ** 2
        if score < best[0]:
            best = score, found[:, 0]
    poles[free] = best[1]
    return poles


def _interleaved(count: int) -> NDArray[np.int64]:
    """Numbers from both ends in turn: poles in this order have their neighbours near, round a rim too."""
    order = np.empty(count, dtype=np.int64)
    half = (count + 1) // 2
    order[::2], order[1::2] = np.arange(half), np.arange(count - 1, half - 1, -1)
    return order


def _band(matrix: Points, width: int) -> Points:
    """Diagonals on and below the main one, as rows."""
    rows = np.zeros((width + 1, matrix.shape[0]), dtype=matrix.dtype)
    for k in range(width + 1):
        rows[k, : matrix.shape[0] - k] = np.diagonal(matrix, -k)
    return rows
