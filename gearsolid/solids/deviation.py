"""How far the edges of a finished solid lie from the exact outlines they stand for."""

import cadquery as cq
import numpy as np
from OCP.BRepAdaptor import BRepAdaptor_Curve

from gearsolid.curves.curve import Points
from gearsolid.curves.field import field_of
from gearsolid.pairs.part import Body

_LEVEL = 1e-6


def flank_deviation(body: Body, solid: cq.Shape, samples: int = 33) -> float:
    """Largest distance of the solid's lower end edges from the body's exact boundaries [mm].

    Measured on the kernel's own edges, every one of them, against the exact curves.

    Args:
        body: what was to be made.
        solid: what the kernel made, where the body stands.
        samples: points on each edge [-].
    """
    points = np.concatenate([_on_edge(e, samples) for e in solid.Edges() if _lies_on(e, body.z)])
    boundaries = [body.outer, *body.holes, *([body.bore.mouth] if body.bore else [])]
    gaps = [np.abs(field_of(b).near(points).distance) for b in boundaries]
    return float(np.max(np.min(gaps, axis=0)))


def _lies_on(edge: cq.Edge, z: float) -> bool:
    return abs(edge.startPoint().z - z) < _LEVEL and abs(edge.endPoint().z - z) < _LEVEL


def _on_edge(edge: cq.Edge, samples: int) -> Points:
    curve = BRepAdaptor_Curve(edge.wrapped)
    places = [curve.Value(u) for u in np.linspace(curve.FirstParameter(), curve.LastParameter(), samples).tolist()]
    return np.array([complex(p.X(), p.Y()) for p in places])
