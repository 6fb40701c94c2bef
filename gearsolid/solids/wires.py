"""Outlines as wires of the CAD kernel: vertices made once, edges between shared vertices, true circles and lines."""

import cmath
from dataclasses import dataclass
from itertools import chain

from OCP.BRep import BRep_Builder
from OCP.BRepBuilderAPI import BRepBuilderAPI_MakeEdge, BRepBuilderAPI_MakeVertex
from OCP.Geom import Geom_BSplineCurve, Geom_Circle, Geom_Curve, Geom_Line
from OCP.gp import gp_Ax1, gp_Ax2, gp_Dir, gp_Pnt, gp_Trsf
from OCP.TColgp import TColgp_Array1OfPnt
from OCP.TColStd import TColStd_Array1OfInteger, TColStd_Array1OfReal
from OCP.TopoDS import TopoDS_Edge, TopoDS_Vertex, TopoDS_Wire

from gearsolid.curves.curve import Curve
from gearsolid.curves.fit import Spline
from gearsolid.curves.outline import Outline
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.errors import SolidError

_AXIS = gp_Ax1(gp_Pnt(0, 0, 0), gp_Dir(0, 0, 1))
_UP, _DOWN, _X = gp_Dir(0, 0, 1), gp_Dir(0, 0, -1), gp_Dir(1, 0, 0)


@dataclass(frozen=True)
class _Stroke:
    """Kernel curve of one piece of the first pitch, and how it is taken to the other pitches.

    Args:
        start: first point [mm].
        curve: kernel curve, travelled with growing parameter.
        first: parameter of the first point.
        last: parameter of the last point.
        slide: parameter per radian of turn for a circle about the axis, which all pitches share; 0 for curves that
            have to be turned.
    """

    start: complex
    curve: Geom_Curve
    first: float
    last: float
    slide: int = 0

    def edge(self, angle: float, start: TopoDS_Vertex, end: TopoDS_Vertex) -> TopoDS_Edge:
        if self.slide or angle == 0:
            curve, shift = self.curve, self.slide * angle
        else:
            turn = gp_Trsf()
            turn.SetRotation(_AXIS, angle)
            curve, shift = self.curve.Transformed(turn), 0.0
        maker = BRepBuilderAPI_MakeEdge(curve, start, end, self.first + shift, self.last + shift)
        if not maker.IsDone():
            raise SolidError(
                f"the CAD kernel makes no edge at {self.start:.6g} mm ({maker.Error().name}); pieces of an outline "
                "must meet within 1e-7 mm and be longer than that"
            )
        return maker.Edge()


def outline_wires(outline: Outline, z: float = 0.0) -> list[TopoDS_Wire]:
    """Closed wires of an outline, travelled like it: one for a rim, one a loop for a pattern.

    Args:
        outline: of arcs, segments and splines only, as `curves.fitted` gives it.
        z: height of the plane [mm].

    Raises:
        SolidError: the kernel refuses an edge.
    """
    strokes = [_stroke(p.curve, z) for p in outline.pieces]
    angles = [cmath.phase(outline.step) * k for k in range(outline.order)]
    corners = [[_vertex(s.start * cmath.exp(1j * a), z) for s in strokes] for a in angles]
    ends = [row[0] for row in corners]
    if outline.is_chain:
        ends = ends[1:] + ends[:1]
    pitches = [
        [s.edge(a, v, w) for s, v, w in zip(strokes, row, [*row[1:], end], strict=True)]
        for a, row, end in zip(angles, corners, ends, strict=True)
    ]
    return [_wire(list(chain.from_iterable(pitches)))] if outline.is_chain else [_wire(edges) for edges in pitches]


def _wire(edges: list[TopoDS_Edge]) -> TopoDS_Wire:
    # The edges share their vertices, so the wire is closed by construction and needs no search within a tolerance.
    builder, wire = BRep_Builder(), TopoDS_Wire()
    builder.MakeWire(wire)
    for edge in edges:
        builder.Add(wire, edge)
    wire.Closed(True)
    return wire


def _vertex(point: complex, z: float) -> TopoDS_Vertex:
    return BRepBuilderAPI_MakeVertex(gp_Pnt(point.real, point.imag, z)).Vertex()


def _stroke(curve: Curve, z: float) -> _Stroke:
    match curve:
        case Arc(centre, radius, angle_from, _):
            hand = 1 if curve.sweep > 0 else -1
            place = complex(centre)
            axes = gp_Ax2(gp_Pnt(place.real, place.imag, z), _UP if hand > 0 else _DOWN, _X)
            first = hand * angle_from
            slide = hand if place == 0 else 0
            return _Stroke(curve.start, Geom_Circle(axes, radius), first, first + abs(curve.sweep), slide)
        case Segment(first, last):
            run = complex(last - first)
            line = Geom_Line(gp_Pnt(complex(first).real, complex(first).imag, z), gp_Dir(run.real, run.imag, 0))
            return _Stroke(curve.start, line, 0.0, abs(run))
        case Spline():
            return _Stroke(curve.start, _spline(curve, z), 0.0, 1.0)
    raise SolidError(
        f"an outline piece is a {type(curve).__name__}; fit the outline to arcs, segments and splines first"
    )


def _spline(spline: Spline, z: float) -> Geom_BSplineCurve:
    poles = TColgp_Array1OfPnt(1, len(spline.poles))
    for k, p in enumerate(spline.poles, 1):
        poles.SetValue(k, gp_Pnt(p.real, p.imag, z))
    return Geom_BSplineCurve(poles, *knot_arrays(spline), spline.degree)


def knot_arrays(spline: Spline) -> tuple[TColStd_Array1OfReal, TColStd_Array1OfInteger]:
    """Distinct knots of a spline, and how often each stands in its knot vector."""
    steps = sorted(set(spline.knots))
    knots, counts = TColStd_Array1OfReal(1, len(steps)), TColStd_Array1OfInteger(1, len(steps))
    for k, knot in enumerate(steps, 1):
        knots.SetValue(k, knot)
        counts.SetValue(k, spline.knots.count(knot))
    return knots, counts
