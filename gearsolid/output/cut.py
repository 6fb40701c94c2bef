"""Where a half line from the axis runs through the material of a body: what a side section and a marking dot need."""

from collections.abc import Sequence

import numpy as np

from gearsolid.curves.curve import Points, Reals
from gearsolid.curves.outline import Outline

# Points a piece; pictures only.
_POINTS = 65


def crossings(outline: Outline, angle: float) -> Reals:
    """Radii [mm] at which an outline crosses the half line at polar `angle` [rad], rising.

    Flanks are followed as polylines, good enough for a picture.
    """
    z = _loops(outline) * np.exp(-1j * angle)
    a, b = z[:, :-1], z[:, 1:]
    cut = (a.imag < 0) != (b.imag < 0)
    a, b = a[cut], b[cut]
    x = a.real + (b.real - a.real) * a.imag / (a.imag - b.imag)
    return np.sort(x[x > 0])


def material(outlines: Sequence[Outline], angle: float) -> list[tuple[float, float]]:
    """Stretches [mm] of the half line at polar `angle` [rad] inside the region `outlines` bound, outermost last."""
    radii = np.sort(np.concatenate([crossings(o, angle) for o in outlines]))
    # Seen from outside every second stretch is material; an odd number of crossings means the axis itself is.
    if len(radii) % 2:
        radii = np.concatenate([[0.0], radii])
    return [(float(a), float(b)) for a, b in radii.reshape(-1, 2)]


def _loops(outline: Outline) -> Points:
    """The outline as closed polylines, one a row: one row for a toothed rim, one a loop for a pattern."""
    pitch = outline.points(_POINTS)
    pitches = pitch[None, :] * (outline.step ** np.arange(outline.order))[:, None]
    rows = pitches.reshape(1, -1) if outline.is_chain else pitches
    return np.concatenate([rows, rows[:, :1]], axis=1)
