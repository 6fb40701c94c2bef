"""How far the flanks of a solid lie from the exact outline: measured on the solid itself, however it came about."""

import cadquery as cq
import numpy as np

from gearsolid.curves.curve import Points
from gearsolid.curves.field import field_of
from gearsolid.pairs.part import Body

# Points an edge, ends left out: neighbouring edges share them.
_POINTS = 15


def flank_deviation(solid: cq.Shape, body: Body) -> float:
    """Largest distance between the edges of a solid's bottom face and the body's exact boundaries [mm].

    Args:
        solid: made from the body, or read back from a file, standing where the body stands.
        body: the design.

    Returns:
        An estimate from points along every edge.
    """
    points = _edge_points(solid, body.z)
    outlines = [body.outer, *body.holes, *([body.bore.mouth] if body.bore else [])]
    return float(np.max(np.min([np.abs(field_of(o).near(points).distance) for o in outlines], axis=0)))


def _edge_points(solid: cq.Shape, z: float) -> Points:
    (bottom,) = [f for f in solid.Faces() if f.geomType() == "PLANE" and abs(f.Center().z - z) < 1e-6]
    at = np.linspace(0, 1, _POINTS + 2)[1:-1].tolist()
    places = [p for edge in bottom.Edges() for p in edge.positions(at)]
    return np.array([complex(p.x, p.y) for p in places])
