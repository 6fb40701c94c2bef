"""What a measuring machine or an old drawing says about known members."""

import ezdxf
import numpy as np

from gearsolid.curves.field import field_of
from gearsolid.curves.fit import Spline
from gearsolid.curves.fitted import fitted
from gearsolid.curves.length import ArcLength
from gearsolid.curves.primitives import Arc, Segment


def once_round(outline, per_mm, noise=0.0, seed=1, centre=0.0, turn=0.0):
    """Points along a whole outline, each off by normal noise in x and y [mm], about another centre and turned [rad]."""
    rng = np.random.default_rng(seed)
    rows = []
    for p in outline.pieces:
        length = ArcLength(p.curve, 1e-8)
        count = max(2, round(length.total * per_mm))
        # A probe does not come by at the same places of every tooth.
        at = (np.arange(count) + rng.uniform(0, 1, (outline.order, 1))) / count * length.total
        rows.append(p.curve.point(length.parameter(at)))
    z = (np.concatenate(rows, axis=1) * outline.step ** np.arange(outline.order)[:, None]).ravel()
    z = z + noise * (rng.standard_normal(z.size) + 1j * rng.standard_normal(z.size))
    return z * np.exp(1j * turn) + centre


def off(measured, outline):
    """Distances of a measured outline from the true one, tooth on tooth [mm]."""
    z = np.concatenate([p.curve.point(p.curve.sample(150)) for p in measured.outline.pieces])
    return field_of(outline).near(z).distance


def drawn(path, outline, *, units=4, scale=1.0, layer="0", leave_out=0, polyline=False):
    """A DXF drawing of all pitches of an outline, its flanks as splines."""
    document = ezdxf.new("R2010")
    document.units = units
    space = document.modelspace()
    style = {"layer": layer}
    pieces = fitted(outline, 1e-6).pieces
    parts = [(p.curve, outline.step**k) for k in range(outline.order) for p in pieces]
    for curve, turn in parts[leave_out:]:
        factor = complex(turn) * scale
        match curve:
            case Arc() if polyline:
                z = [curve.start * factor, curve.end * factor]
                space.add_lwpolyline(
                    [(w.real, w.imag, np.tan(curve.sweep / 4)) for w in z], format="xyb", dxfattribs=style
                )
            case Arc():
                ends = sorted(np.degrees(np.angle(factor) + np.array([curve.angle_from, curve.angle_to])))
                centre = curve.centre * factor
                space.add_arc((centre.real, centre.imag), curve.radius * scale, *ends, dxfattribs=style)
            case Segment():
                a, b = curve.first * factor, curve.last * factor
                space.add_line((a.real, a.imag), (b.real, b.imag), dxfattribs=style)
            case Spline():
                spline = space.add_spline(degree=curve.degree, dxfattribs=style)
                spline.control_points = [((z * factor).real, (z * factor).imag, 0) for z in curve.poles]
                spline.knots = list(curve.knots)
    document.saveas(path)
    return path
