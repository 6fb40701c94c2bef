"""Arc length of a curve, from parameter to length and back, by adaptive Gauss-Legendre panels."""

from dataclasses import dataclass
from functools import cached_property
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from gearsolid.curves.curve import Curve, Reals
from gearsolid.curves.outline import smooth_spans
from gearsolid.errors import ToleranceError

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(12)
# Share of the length that rounding may have spoilt, however fine the panels.
_ROUNDING = 4 * float(np.finfo(float).eps)
_PANEL_BUDGET = 4096
_NEWTON_STEPS = 60


class _Panels(NamedTuple):
    """Neighbouring stretches of the span: their edges, the length from the span start to each edge, the error."""

    edges: Reals
    lengths: Reals
    error: float


@dataclass(frozen=True)
class ArcLength:
    """Length travelled along a curve, measured from the start of its span.

    Each smooth span is cut into panels until a panel's Gauss sum and the sum over its two halves agree. A curve may
    stand still anywhere (cusps), but places where its speed jumps must be among its breaks.

    Args:
        curve: the curve to measure.
        tol: allowed error of the total length [mm].

    Raises:
        ToleranceError: on first use, when `tol` is not reached within the panel budget.
    """

    curve: Curve
    tol: float = 1e-10

    @property
    def total(self) -> float:
        """Length of the whole span [mm]."""
        return float(self._panels.lengths[-1])

    @property
    def error(self) -> float:
        """Estimate of the error of `total` [mm]: by how much the panels and their halves differ, and rounding."""
        return self._panels.error

    def at(self, t: Reals) -> Reals:
        """Lengths [mm] from the span start to parameters t [-] of any shape; negative before the start."""
        t = np.asarray(t, dtype=float)
        edges, lengths, _ = self._panels
        k = np.clip(np.searchsorted(edges, t, side="right") - 1, 0, len(edges) - 2)
        return lengths[k] + self._walk(edges[k], t)

    def parameter(self, s: Reals) -> Reals:
        """Parameters t [-] reached after lengths s [mm] of any shape; lengths off the curve give its ends."""
        edges, lengths, _ = self._panels
        s = np.clip(np.asarray(s, dtype=float), 0.0, lengths[-1])
        k = np.clip(np.searchsorted(lengths, s, side="right") - 1, 0, len(edges) - 2)
        low: Reals = edges[k]
        high: Reals = edges[k + 1]
        t: Reals = low + (high - low) * self._guess(k, s)
        settled = 4 * np.finfo(float).eps * max(1.0, float(np.max(np.abs(edges))))
        for _ in range(_NEWTON_STEPS):
            miss = lengths[k] + self._walk(edges[k], t) - s
            low, high = np.where(miss < 0, t, low), np.where(miss > 0, t, high)
            with np.errstate(divide="ignore", invalid="ignore"):
                new = t - miss / self._speed(t)
            new = np.where((new >= low) & (new <= high), new, (low + high) / 2)
            new = np.where(miss == 0, t, new)
            still = np.abs(new - t) <= settled
            t = new
            if np.all(still):
                break
        return t

    def _guess(self, k: NDArray[np.intp], s: Reals) -> Reals:
        """Share of panel k at length s if the speed grew evenly from edge to edge; exact at both ends."""
        edges, lengths, _ = self._panels
        whole = lengths[k + 1] - lengths[k]
        part = (s - lengths[k]) / np.where(whole > 0, whole, 1.0)
        before, after = self._speed(edges[k]), self._speed(edges[k + 1])
        mean = (before + after) / 2
        mean = np.where(mean > 0, mean, 1.0)
        before, after = before / mean, after / mean
        root = before + np.sqrt(np.maximum(before**2 + 2 * (after - before) * part, 0.0))
        return np.clip(2 * part / np.where(root > 0, root, 1.0), 0.0, 1.0)

    def _speed(self, t: Reals) -> Reals:
        speed: Reals = np.abs(self.curve.derivative(t))
        return speed

    def _walk(self, a: Reals, b: Reals) -> Reals:
        """Length from parameters a to b, within one panel each, by one Gauss sum."""
        half = (np.asarray(b) - np.asarray(a))[..., None] / 2
        length: Reals = np.sum(half * _WEIGHTS * self._speed(np.asarray(a)[..., None] + half * (1 + _NODES)), axis=-1)
        return length

    @cached_property
    def _panels(self) -> _Panels:
        edges = np.array([t for t, _ in smooth_spans(self.curve)] + [self.curve.span[1]], dtype=float)
        while True:
            middle = (edges[:-1] + edges[1:]) / 2
            halves = np.stack((self._walk(edges[:-1], middle), self._walk(middle, edges[1:])), axis=-1)
            errors = np.abs(np.sum(halves, axis=-1) - self._walk(edges[:-1], edges[1:]))
            error = float(np.sum(errors) + _ROUNDING * np.sum(halves))
            if error <= self.tol:
                return _Panels(np.sort(np.append(edges, middle)), np.append(0.0, np.cumsum(halves)), error)
            coarse = ~(errors <= self.tol / (2 * len(errors)))
            if not np.any(coarse) or len(edges) + int(np.sum(coarse)) > _PANEL_BUDGET:
                raise ToleranceError(
                    f"the arc length of a {type(self.curve).__name__} is known to {error:.3g} mm after {len(errors)} "
                    f"panels, not to the {self.tol:.3g} mm asked; ask for a larger tol, or declare the curve's corners "
                    "in breaks()"
                )
            edges = np.sort(np.append(edges, middle[coarse]))
