"""A small line plot as SVG: one quantity over the input angle."""

from html import escape

import numpy as np

from gearsolid.curves.curve import Reals

_WIDTH, _HEIGHT = 420.0, 140.0
_LEFT, _RIGHT, _TOP, _BOTTOM = 62.0, 12.0, 24.0, 24.0


def line_plot(x: Reals, y: Reals, title: str, unit: str, *, kind: str) -> str:
    """A curve with its least value marked.

    Args:
        x: input angles [deg], shape (n,).
        y: the quantity, shape (n,).
        title: name of the quantity.
        unit: its unit, as text.
        kind: CSS class of the curve.

    Returns:
        An `svg` element that takes its colours from the page.
    """
    steps = _ticks(min(float(y.min()), 0.0), max(float(y.max()), 0.0))
    low, high = steps[0], steps[-1]
    px = _LEFT + (x - x[0]) / (x[-1] - x[0]) * (_WIDTH - _LEFT - _RIGHT)
    scale = (_HEIGHT - _TOP - _BOTTOM) / (high - low)
    py = _HEIGHT - _BOTTOM - (y - low) * scale
    zero = _HEIGHT - _BOTTOM + low * scale
    k = int(np.argmin(y))
    points = " ".join(f"{a:.2f},{b:.2f}" for a, b in zip(px.tolist(), py.tolist(), strict=True))
    decimals = max(0, int(-np.floor(np.log10(steps[1] - steps[0]) + 1e-9)))
    lines = [
        f'<svg class="plot" viewBox="0 0 {_WIDTH:g} {_HEIGHT:g}" role="img" aria-label="{escape(title)} over the input '
        f'angle, least {y[k]:.4g} {escape(unit)}">',
        f'<text class="plot-title" x="{_LEFT:g}" y="14">{escape(title)} <tspan>{escape(unit)}</tspan></text>',
    ]
    if low < 0:
        across, down = _WIDTH - _LEFT - _RIGHT, _HEIGHT - _BOTTOM - zero
        lines.append(f'<rect class="overlap" x="{_LEFT:g}" y="{zero:.2f}" width="{across:g}" height="{down:.2f}"/>')
    for value in steps:
        v = _HEIGHT - _BOTTOM - (value - low) * scale
        css = "zero" if abs(value) < 1e-12 else "grid"
        lines.append(f'<line class="{css}" x1="{_LEFT:g}" x2="{_WIDTH - _RIGHT:g}" y1="{v:.2f}" y2="{v:.2f}"/>')
        lines.append(
            f'<text class="tick" x="{_LEFT - 6:g}" y="{v + 3.5:.2f}" text-anchor="end">{value:.{decimals}f}</text>'
        )
    for value, at, anchor in ((x[0], _LEFT, "start"), (x[-1], _WIDTH - _RIGHT, "end")):
        lines.append(f'<text class="tick" x="{at:g}" y="{_HEIGHT - 7:g}" text-anchor="{anchor}">{value:.2f}°</text>')
    lines.append(f'<polyline class="curve {kind}" points="{points}"/>')
    lines.append(f'<circle class="least {kind}" cx="{px[k]:.2f}" cy="{py[k]:.2f}" r="3"/></svg>')
    return "".join(lines)


def _ticks(low: float, high: float) -> list[float]:
    """Three to six round numbers that span low to high."""
    reach = max(high - low, 1e-6)
    power = 10.0 ** np.floor(np.log10(reach / 3))
    step = next(float(power * m) for m in (1, 2, 5, 10) if power * m >= reach / 4)
    first, last = np.floor(low / step + 1e-9), np.ceil(high / step - 1e-9)
    return [float(step * k) for k in np.arange(first, last + 1)]
