"""Outlines as closed polygons whose chords stay within a stated distance of the exact curve."""

import numpy as np

from gearsolid.curves.curve import Curve, Points, Reals
from gearsolid.curves.outline import Outline, smooth_spans
from gearsolid.errors import DesignError, ToleranceError

# Dense samples of a span; the sagittas are measured on them.
_SAMPLES = 2049
# A chord turns through at most this angle [rad], however large the tolerance.
_LARGEST_TURN = np.pi / 9
_GROWTH = 1.2
_ROUNDS = 20
# Effort [mm^0.5] for each mm of length, against rounding where nothing turns.
_STRAIGHT = 1e-6
# Chord counts are whole within this.
_WHOLE = 1e-3


def polygons(outline: Outline, tol: float) -> list[Points]:
    """Corners of closed polygons on the exact boundary, in travel order: one rim, or one for each loop of a pattern.

    Args:
        outline: exact outline.
        tol: largest distance of a chord from the curve it spans [mm].

    Returns:
        Complex corners [mm], the first not repeated.

    Raises:
        DesignError: the tolerance is not above 0.
        ToleranceError: a curve cannot be followed that closely.
    """
    if not tol > 0:
        raise DesignError(f"the chord tolerance is {tol:g} mm; it must be above 0, 0.01 mm is usual")
    spans = [(p.curve, t0, t1) for p in outline.pieces for t0, t1 in smooth_spans(p.curve)]
    pitch = np.concatenate([curve.point(chord_parameters(curve, t0, t1, tol)[:-1]) for curve, t0, t1 in spans])
    pitches = pitch * (outline.step ** np.arange(outline.order))[:, None]
    return [pitches.ravel()] if outline.is_chain else list(pitches)


def chord_parameters(curve: Curve, first: float, last: float, tol: float) -> Reals:
    """Parameters of the corners on one smooth span, ends included, spread so that all chords are equally far off.

    Args:
        curve: the curve.
        first: first parameter [-].
        last: last parameter [-].
        tol: largest distance of a chord from the curve [mm].

    Raises:
        ToleranceError: the curve cannot be followed that closely.
    """
    t = np.linspace(first, last, _SAMPLES)
    z = curve.point(t)
    lengths = np.abs(np.diff(z))
    turns = np.abs(np.gradient(np.unwrap(np.angle(np.diff(z)))))
    # A chord of length l on a curve of curvature k is l^2 k / 8 off: equal shares of the integral of sqrt(k) are
    # equally far off. The small share of the length keeps straight stretches in order.
    effort = np.concatenate([[0.0], np.cumsum(np.sqrt(turns * lengths) + _STRAIGHT * lengths)])
    count = max(1.0, effort[-1] / np.sqrt(8 * tol), float(np.sum(turns)) / _LARGEST_TURN)
    for _ in range(_ROUNDS):
        corners = np.interp(np.linspace(0, effort[-1], int(np.ceil(count - _WHOLE)) + 1), effort, t)
        if _sagitta(t, z, corners, curve.point(corners)) <= tol:
            return corners
        count *= _GROWTH
    raise ToleranceError(
        f"a curve of {float(np.sum(lengths)):.4g} mm is not followed within {tol:g} mm by {int(count)} chords; take a "
        "larger chord tolerance"
    )


def _sagitta(t: Reals, z: Points, corners: Reals, ends: Points) -> float:
    """Largest distance of the samples z(t) from the chords between the points `ends` at the parameters `corners`."""
    chord = np.clip(np.searchsorted(corners, t, side="right") - 1, 0, corners.size - 2)
    run = np.diff(ends)[chord]
    return float(np.max(np.abs(np.imag((z - ends[chord]) * np.conj(run))) / np.abs(run)))
