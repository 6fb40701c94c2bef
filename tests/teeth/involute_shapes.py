"""Polygons of members and of their tools, for tests that judge outlines without the library's own geometry."""

import numpy as np
from shapely.geometry import Polygon

from gearsolid.curves.outline import Outline


def polygon(outline: Outline, per_piece: int = 40) -> Polygon:
    """All pitches as one shapely polygon."""
    pitch = np.concatenate([p.curve.point(p.curve.sample(per_piece))[:-1] for p in outline.pieces])
    z = np.concatenate([pitch * outline.step**k for k in range(outline.order)])
    return Polygon(np.column_stack([z.real, z.imag]))


def rack_tool(*, module, angle_deg, shift, dedendum, rounding, helix_deg=0.0, thinning=0.0, count=160):
    """Boundary points of one tooth of the generating rack, pitch line at x = 0, gear below; tooth centred on y = 0."""
    a, stretch = np.radians(angle_deg), 1 / np.cos(np.radians(helix_deg))
    rho, deep = rounding * module, (dedendum - shift) * module
    land = module * (np.pi / 4 - (dedendum - rounding) * np.tan(a)) - rho / np.cos(a)
    turn = np.linspace(np.pi, np.pi / 2 + a, count)
    corner = -(deep - rho) + rho * np.cos(turn) + 1j * (land + rho * np.sin(turn))
    top = corner[-1] + np.linspace(0, 1, 2 * count) * (2.5 * module + deep) * (1 + 1j * np.tan(a))
    side = np.concatenate([corner, top])
    side = side.real + 1j * (side.imag * stretch + thinning / 2)
    flat = -deep + 1j * np.linspace(-1, 1, 20) * side[0].imag
    return np.concatenate([np.conj(side[::-1]), flat, side])


def pinion_tool(*, teeth, module, angle_deg, shift, addendum, rounding, thickening=0.0, count=160):
    """Boundary points of one tooth of a pinion-shaped cutter about its axis, tooth centred on the +x axis."""
    a, r = np.radians(angle_deg), module * teeth / 2
    base, rho = r * np.cos(a), rounding * module
    tip = r + module * (addendum + shift)
    half = (module * (np.pi / 2 + 2 * shift * np.tan(a)) + thickening) / (2 * r) + np.tan(a) - a
    end = rho + np.sqrt((tip - rho) ** 2 - base**2)
    s = np.linspace(0, end, count) / base
    flank = base * (1 - 1j * s) * np.exp(1j * (s - half))
    ray = np.exp(1j * (s[-1] - half))
    centre = base * ray - 1j * (end - rho) * ray
    turn = np.linspace(np.angle(-1j * ray), np.angle(centre), count)
    corner = centre + rho * np.exp(1j * turn)
    land = tip * np.exp(1j * np.linspace(turn[-1], -turn[-1], 20))
    side = np.concatenate([flank, corner])
    return np.concatenate([side, land, np.conj(side[::-1])])
