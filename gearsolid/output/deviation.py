"""How far the flanks of a solid lie from the exact outline: measured on the solid itself, however it came about."""

import cadquery as cq
import numpy as np
from OCP.BRepAdaptor import BRepAdaptor_Surface

from gearsolid.curves.curve import Points
from gearsolid.curves.field import field_of
from gearsolid.pairs.part import Body

# Points an edge, ends left out: neighbouring edges share them.
_POINTS = 15
# Points each way on a spline face of twisted teeth, its edges included.
_GRID = 9


def flank_deviation(solid: cq.Shape, body: Body, grid: int = _GRID) -> float:
    """Largest distance of a solid's boundary from the body's exact one, across the axis [mm].

    Taken on the edges of the bottom face and, where teeth are twisted, on their faces all the way up. Normal to a
    helicoid the distance is smaller, by the cosine of the helix angle.

    Args:
        solid: made from the body, or read back from a file, standing where the body stands.
        body: the design.
        grid: points each way on a face of twisted teeth [-].

    Returns:
        An estimate from points along every edge and face.
    """
    points = _edge_points(solid, body.z)
    if body.twists:
        points = np.concatenate([points, _face_points(solid, body, grid)])
    outlines = [body.outer, *body.holes, *([body.bore.mouth] if body.bore else [])]
    return float(np.max(np.min([np.abs(field_of(o).near(points).distance) for o in outlines], axis=0)))


def _edge_points(solid: cq.Shape, z: float) -> Points:
    (bottom,) = [f for f in solid.Faces() if f.geomType() == "PLANE" and abs(f.Center().z - z) < 1e-6]
    at = np.linspace(0, 1, _POINTS + 2)[1:-1].tolist()
    places = [p for edge in bottom.Edges() for p in edge.positions(at)]
    return np.array([complex(p.x, p.y) for p in places])


def _face_points(solid: cq.Shape, body: Body, grid: int) -> Points:
    """Points on the flanks, turned back to where they stand in the section at the bottom face."""
    shares = np.linspace(0, 1, grid)
    places = []
    for face in solid.Faces():
        if face.geomType() == "BSPLINE":
            surface = BRepAdaptor_Surface(face.wrapped)
            u0, u1, v0, v1 = (
                surface.FirstUParameter(),
                surface.LastUParameter(),
                surface.FirstVParameter(),
                surface.LastVParameter(),
            )
            us, vs = (u0 + (u1 - u0) * shares).tolist(), (v0 + (v1 - v0) * shares).tolist()
            places += [(p.X(), p.Y(), p.Z()) for p in (surface.Value(u, v) for u in us for v in vs)]
    x, y, z = np.array(places).T
    return np.asarray((x + 1j * y) * np.exp(-1j * body.turn_at(z - body.z)))
