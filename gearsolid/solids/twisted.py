"""Walls whose section turns on its way up: the teeth of helical and double helical bodies.

Flanks are tensor B-splines, (fitted profile) x (fitted rotation), so their distance from the exact helicoid is known
before they are built: that of the profile plus a rotation error below what the kernel takes for none. Tip and root stay
true cylinders, which workshops can pick and measure.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from itertools import pairwise
from math import ceil, cos, pi, sin

import numpy as np
from OCP.BRep import BRep_Builder
from OCP.BRepAdaptor import BRepAdaptor_Curve
from OCP.BRepBuilderAPI import BRepBuilderAPI_MakeEdge, BRepBuilderAPI_Transform
from OCP.Geom import Geom_BSplineCurve, Geom_BSplineSurface, Geom_Curve, Geom_CylindricalSurface, Geom_Surface
from OCP.Geom2d import Geom2d_BSplineCurve, Geom2d_Curve, Geom2d_Line
from OCP.gp import gp_Ax1, gp_Ax3, gp_Dir, gp_Dir2d, gp_Pnt, gp_Pnt2d, gp_Trsf, gp_Vec
from OCP.TColgp import TColgp_Array1OfPnt, TColgp_Array1OfPnt2d, TColgp_Array2OfPnt
from OCP.TopExp import TopExp
from OCP.TopoDS import TopoDS, TopoDS_Edge, TopoDS_Face, TopoDS_Iterator, TopoDS_Wire

from gearsolid.curves.curve import Curve
from gearsolid.curves.fit import Spline, fit
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.curves.rotation import rotation
from gearsolid.errors import SolidError
from gearsolid.pairs.part import Level
from gearsolid.solids.walls import Wall
from gearsolid.solids.wires import knot_arrays, outline_wires

_AXIS = gp_Ax1(gp_Pnt(0, 0, 0), gp_Dir(0, 0, 1))
_CONFUSION = 1e-7
# Distance of a helix from its cylinder [mm]: the two must agree within the kernel's confusion, with a margin.
_ROTATION_TOL = 1e-8
# Fit of arcs off the axis (tip roundings) [mm]; no profile needs to be better.
_ROUNDING_TOL = 1e-6
# A cylinder face that turns further comes near its own period, where the kernel wraps it.
_MOST_TURN = pi / 2
_UNIT = Spline(1, (0.0, 0.0, 1.0, 1.0), (0.0, 1.0))


def twisted_wall(outline: Outline, z: float, levels: Sequence[Level]) -> Wall:
    """Wall raised on a fitted rim, its section turning steadily between levels.

    Args:
        outline: rim round the axis, of arcs, segments and splines only.
        z: from where heights count [mm].
        levels: heights above that [mm] and turns of the section there [rad], counter-clockwise seen from above.

    Raises:
        SolidError: the kernel refuses an edge.
        ToleranceError: a turn cannot be followed.
    """
    rim = _ready(outline)
    levels = _close(levels)
    (base,) = outline_wires(rim, z)
    rings = [_raised(base, h, t) for h, t in levels]
    faces = [
        face
        for ((h0, t0), (h1, t1)), (lower, upper) in zip(pairwise(levels), pairwise(rings), strict=True)
        for face in _Stretch(rim, z + h0, h1 - h0, t0, t1 - t0).faces(lower, upper)
    ]
    return Wall(tuple(faces), rings[0], rings[-1])


def _close(levels: Sequence[Level]) -> list[Level]:
    """The levels, with more put in where the section turns far between two."""
    found = [levels[0]]
    for (h0, t0), (h1, t1) in pairwise(levels):
        parts = ceil(abs(t1 - t0) / _MOST_TURN) or 1
        found += [(h0 + (h1 - h0) * k / parts, t0 + (t1 - t0) * k / parts) for k in range(1, parts + 1)]
    return found


def _ready(outline: Outline) -> Outline:
    """The outline with all but circles about the axis written as splines: only those stay themselves when they turn."""
    return Outline(tuple(Piece(c, p.role) for p in outline.pieces for c in _turnable(p.curve)), outline.order)


def _turnable(curve: Curve) -> tuple[Arc | Spline, ...]:
    match curve:
        case Spline():
            return (curve,)
        case Arc() if curve.centre == 0:
            return (curve,)
        case Segment(first, last):
            return (replace(_UNIT, poles=(first, last)),)
    return fit(curve, _ROUNDING_TOL)


def _raised(wire: TopoDS_Wire, height: float, turn: float) -> TopoDS_Wire:
    raised = TopoDS.Wire_s(BRepBuilderAPI_Transform(wire, _screw(turn, height), True).Shape())
    # The kernel's copy forgets that the wire is closed.
    raised.Closed(True)
    return raised


def _screw(turn: float, height: float = 0.0) -> gp_Trsf:
    move, lift = gp_Trsf(), gp_Trsf()
    move.SetRotation(_AXIS, turn)
    lift.SetTranslation(gp_Vec(0, 0, height))
    return lift.Multiplied(move)


@dataclass(frozen=True)
class _Sheet:
    """Surface over one piece of the first pitch, and how the edges of its face run in the surface's parameters.

    Args:
        surface: of the first pitch.
        lower: parameters (u, v) at the first point of the lower edge.
        upper: the same at the upper edge.
        along: du per parameter of those edges, +1 or -1; it tells whether the surface's normal looks out too.
        start: trace of the helix at the start of the piece.
        end: trace of the helix at its end.
    """

    surface: Geom_Surface
    lower: tuple[float, float]
    upper: tuple[float, float]
    along: int
    start: Geom2d_Curve
    end: Geom2d_Curve

    def across(self, place: tuple[float, float], edge: TopoDS_Edge) -> Geom2d_Line:
        """Trace of the lower or upper edge, whose parameter the kernel may have moved by whole turns of a circle."""
        u, v = place
        return _line(u - self.along * BRepAdaptor_Curve(edge).FirstParameter(), v, self.along, 0)


class _Stretch:
    """The wall between two rings, the section turning steadily from one to the other.

    Args:
        rim: of arcs about the axis and splines.
        z: lower level [mm].
        height: [mm].
        start: turn of the lower ring [rad].
        turn: from the lower to the upper ring [rad].
    """

    def __init__(self, rim: Outline, z: float, height: float, start: float, turn: float) -> None:
        self._z, self._height, self._start, self._turn = z, height, start, turn
        self._rim = rim
        self._rise = rotation(turn, _ROTATION_TOL / rim.r_max)
        self._knots = knot_arrays(self._rise)
        knots, degree = np.array(self._rise.knots), self._rise.degree
        windows = np.lib.stride_tricks.sliding_window_view(knots[1:-1], degree)
        # Poles at these heights make the height grow in proportion to the parameter.
        self._levels = (z + height * windows.mean(axis=1)).tolist()
        self._carry = np.exp(1j * start) * np.array(self._rise.poles)

    def faces(self, lower: TopoDS_Wire, upper: TopoDS_Wire) -> Iterator[TopoDS_Face]:
        """The faces between the rings, which have their edges in the order of the rim."""
        rim, pieces = self._rim, len(self._rim.pieces)
        pitch = float(np.angle(rim.step))
        sheets = [self._sheet(p.curve) for p in rim.pieces]
        curves = [self._helix(p.curve.start) for p in rim.pieces]
        edges, tops = _edges(lower), _edges(upper)
        places = [(k, pitch * j) for j in range(rim.order) for k in range(pieces)]
        helices = [
            _helix_edge(curves[k].Transformed(_screw(a)), e, t)
            for (k, a), e, t in zip(places, edges, tops, strict=True)
        ]
        for n, (k, angle) in enumerate(places):
            yield _face(sheets[k], angle, edges[n], helices[(n + 1) % len(places)], tops[n], helices[n])

    def _helix(self, corner: complex) -> Geom_BSplineCurve:
        poles = TColgp_Array1OfPnt(1, len(self._levels))
        for k, (p, z) in enumerate(zip((corner * self._carry).tolist(), self._levels, strict=True), 1):
            poles.SetValue(k, gp_Pnt(p.real, p.imag, z))
        return Geom_BSplineCurve(poles, *self._knots, self._rise.degree)

    def _sheet(self, curve: Curve) -> _Sheet:
        return self._cylinder(curve) if isinstance(curve, Arc) else self._tensor(curve)

    def _tensor(self, profile: Curve) -> _Sheet:
        assert isinstance(profile, Spline)
        product = np.outer(profile.poles, self._carry)
        poles = TColgp_Array2OfPnt(1, product.shape[0], 1, product.shape[1])
        for k, row in enumerate(product.tolist(), 1):
            for n, (p, z) in enumerate(zip(row, self._levels, strict=True), 1):
                poles.SetValue(k, n, gp_Pnt(p.real, p.imag, z))
        (u_knots, u_counts), (v_knots, v_counts) = knot_arrays(profile), self._knots
        surface = Geom_BSplineSurface(poles, u_knots, v_knots, u_counts, v_counts, profile.degree, self._rise.degree)
        return _Sheet(surface, (0.0, 0.0), (0.0, 1.0), 1, _line(0, 0, 0, 1), _line(1, 0, 0, 1))

    def _cylinder(self, arc: Arc) -> _Sheet:
        first, last = arc.angle_from + self._start, arc.angle_to + self._start
        # The cylinder's own x axis stands clear of the face on the side its parameters grow from.
        seam = min(first, last) + min(0.0, self._turn) - pi / 4
        surface = Geom_CylindricalSurface(
            gp_Ax3(gp_Pnt(0, 0, self._z), gp_Dir(0, 0, 1), gp_Dir(cos(seam), sin(seam), 0)), arc.radius
        )
        return _Sheet(
            surface,
            (first - seam, 0.0),
            (first - seam + self._turn, self._height),
            1 if arc.sweep > 0 else -1,
            _slope(first - seam, self._turn, self._height),
            _slope(last - seam, self._turn, self._height),
        )


def _face(
    sheet: _Sheet, angle: float, lower: TopoDS_Edge, end: TopoDS_Edge, upper: TopoDS_Edge, start: TopoDS_Edge
) -> TopoDS_Face:
    """The face of a piece in the pitch at `angle` [rad], looking out of the material."""
    builder, face, wire = BRep_Builder(), TopoDS_Face(), TopoDS_Wire()
    builder.MakeFace(face, sheet.surface.Transformed(_screw(angle)), _CONFUSION)
    builder.MakeWire(wire)
    for edge in (lower, end, TopoDS.Edge_s(upper.Reversed()), TopoDS.Edge_s(start.Reversed())):
        builder.Add(wire, edge)
    wire.Closed(True)
    outward = sheet.along > 0
    builder.Add(face, wire if outward else TopoDS.Wire_s(wire.Reversed()))
    builder.UpdateEdge(lower, sheet.across(sheet.lower, lower), face, _CONFUSION)
    builder.UpdateEdge(upper, sheet.across(sheet.upper, upper), face, _CONFUSION)
    builder.UpdateEdge(start, sheet.start, face, _CONFUSION)
    builder.UpdateEdge(end, sheet.end, face, _CONFUSION)
    return face if outward else TopoDS.Face_s(face.Reversed())


def _edges(wire: TopoDS_Wire) -> list[TopoDS_Edge]:
    found, it = [], TopoDS_Iterator(wire)
    while it.More():
        found.append(TopoDS.Edge_s(it.Value()))
        it.Next()
    return found


def _helix_edge(curve: Geom_Curve, lower: TopoDS_Edge, upper: TopoDS_Edge) -> TopoDS_Edge:
    """Edge from the start of a lower edge to the start of the one above it."""
    maker = BRepBuilderAPI_MakeEdge(curve, TopExp.FirstVertex_s(lower), TopExp.FirstVertex_s(upper), 0.0, 1.0)
    if not maker.IsDone():
        raise SolidError(
            f"the CAD kernel makes no helix edge ({maker.Error().name}); levels must be more than 1e-7 mm apart"
        )
    return maker.Edge()


def _line(u: float, v: float, along_u: float, along_v: float) -> Geom2d_Line:
    return Geom2d_Line(gp_Pnt2d(u, v), gp_Dir2d(along_u, along_v))


def _slope(u: float, along_u: float, height: float) -> Geom2d_BSplineCurve:
    """Straight trace from (u, 0), travelled once while its parameter grows from 0 to 1."""
    poles = TColgp_Array1OfPnt2d(1, 2)
    poles.SetValue(1, gp_Pnt2d(u, 0))
    poles.SetValue(2, gp_Pnt2d(u + along_u, height))
    return Geom2d_BSplineCurve(poles, *knot_arrays(_UNIT), 1)
