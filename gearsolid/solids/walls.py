"""Walls: the faces of a solid between two levels, with the closed wires they end in.

A wall shares its wires' edges with the plane faces that close the solid, so nothing has to be sewn or cut. Faces look
out of the material; wires have the material on their left, seen from above.
"""

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

import cadquery as cq
from OCP.BRep import BRep_Builder, BRep_Tool
from OCP.BRepPrimAPI import BRepPrimAPI_MakePrism
from OCP.Geom import Geom_BSplineCurve, Geom_BSplineSurface, Geom_Plane, Geom_SurfaceOfLinearExtrusion
from OCP.gp import gp_Dir, gp_Pnt, gp_Vec
from OCP.TColgp import TColgp_Array2OfPnt
from OCP.TColStd import TColStd_Array1OfInteger, TColStd_Array1OfReal
from OCP.TopAbs import TopAbs_EDGE
from OCP.TopExp import TopExp_Explorer
from OCP.TopLoc import TopLoc_Location
from OCP.TopoDS import TopoDS, TopoDS_Face, TopoDS_Iterator, TopoDS_Shape, TopoDS_Shell, TopoDS_Solid, TopoDS_Wire

from gearsolid.curves.loops import disc
from gearsolid.curves.outline import Outline
from gearsolid.shop.shaft_hole import ShaftHole
from gearsolid.solids.wires import outline_wires

# Largest distance the kernel takes for none [mm].
_CONFUSION = 1e-7


@dataclass(frozen=True)
class Wall:
    """Faces standing between a lower and an upper wire."""

    faces: tuple[TopoDS_Face, ...]
    lower: TopoDS_Wire
    upper: TopoDS_Wire


def prism_walls(outline: Outline, z: float, height: float) -> list[Wall]:
    """Walls raised along the axis on each loop of a fitted outline.

    Args:
        outline: of arcs, segments and splines only.
        z: lower level [mm].
        height: [mm].
    """
    return [_prism_wall(wire, height) for wire in outline_wires(outline, z)]


def _prism_wall(wire: TopoDS_Wire, height: float) -> Wall:
    prism = BRepPrimAPI_MakePrism(wire, gp_Vec(0, 0, height))
    # The sweep of a wire with the material on its left looks into the material.
    faces = tuple(TopoDS.Face_s(f.Reversed()) for f in _parts(prism.Shape()))
    for face in faces:
        _settle_surface(face, height)
    return Wall(faces, wire, TopoDS.Wire_s(prism.LastShape()))


def _settle_surface(face: TopoDS_Face, height: float) -> None:
    """Give a face swept from a spline a spline surface of its own, in the parameters of the sweep.

    The kernel integrates over a swept spline without minding its knots: `Shape.Volume(tol=1e-7)` was 1e-4 off.
    """
    swept = BRep_Tool.Surface_s(face)
    if not isinstance(swept, Geom_SurfaceOfLinearExtrusion) or not isinstance(swept.BasisCurve(), Geom_BSplineCurve):
        return
    traces = [(e, BRep_Tool.CurveOnSurface_s(e, face, 0.0, 0.0)) for e in map(TopoDS.Edge_s, _edges(face))]
    builder = BRep_Builder()
    builder.UpdateFace(
        face, _ruled(swept.BasisCurve(), gp_Vec(swept.Direction()), height), TopLoc_Location(), _CONFUSION
    )
    for edge, trace in traces:
        builder.UpdateEdge(edge, trace, face, _CONFUSION)


def _ruled(curve: Geom_BSplineCurve, direction: gp_Vec, height: float) -> Geom_BSplineSurface:
    """Spline surface from a curve to its copy `height` against the direction, where the sweep has its far end."""
    far = direction.Multiplied(-height)
    poles = TColgp_Array2OfPnt(1, curve.NbPoles(), 1, 2)
    for k in range(1, curve.NbPoles() + 1):
        poles.SetValue(k, 1, curve.Pole(k).Translated(far))
        poles.SetValue(k, 2, curve.Pole(k))
    knots, counts = TColStd_Array1OfReal(1, 2), TColStd_Array1OfInteger(1, 2)
    for k, knot in ((1, -height), (2, 0.0)):
        knots.SetValue(k, knot)
        counts.SetValue(k, 2)
    return Geom_BSplineSurface(poles, curve.Knots(), knots, curve.Multiplicities(), counts, curve.Degree(), 1)


def _edges(face: TopoDS_Face) -> Iterator[TopoDS_Shape]:
    explorer = TopExp_Explorer(face, TopAbs_EDGE)
    while explorer.More():
        yield explorer.Current()
        explorer.Next()


def bore_wall(bore: ShaftHole, z: float, height: float) -> Wall:
    """Wall of a shaft hole with its keyway and mouth chamfers.

    Args:
        bore: the hole.
        z: lower level [mm].
        height: [mm].
    """
    (plain,) = prism_walls(bore.outline, z, height)
    if not bore.chamfer:
        return plain
    # Cones are cut from a sleeve around the hole: a Boolean on a few faces instead of on the toothed body.
    (jacket,) = prism_walls(disc(bore.reach + 1.0), z, height)
    bottom = plane_face(z, [jacket.lower, plain.lower], up=False)
    top = plane_face(z + height, [jacket.upper, plain.upper])
    sleeve = cq.Solid(join_faces([*jacket.faces, *plain.faces, bottom, top]))
    faces = sleeve.cut(*_mouth_cones(bore, z, height)).Faces()
    lower, upper = sorted((f for f in faces if f.innerWires()), key=lambda f: f.Center().z)
    jacket_face = max((f for f in faces if not f.innerWires()), key=lambda f: f.BoundingBox().xlen)
    inside = tuple(f.wrapped for f in faces if not f.innerWires() and not f.isSame(jacket_face))
    return Wall(inside, _inner_wire(lower).Reversed(), _inner_wire(upper))


def _mouth_cones(bore: ShaftHole, z: float, height: float) -> tuple[cq.Solid, cq.Solid]:
    """Cones that chamfer both mouths; they run on past the ends of the chamfer, so that no edges coincide."""
    over = bore.radius / 2
    wide, narrow, deep = bore.radius + bore.chamfer + over, bore.radius - over, bore.chamfer + 2 * over
    low = cq.Solid.makeCone(wide, narrow, deep, cq.Vector(0, 0, z - over))
    # Both cones look upward, so that their seams fall on the +x axis: into the keyway, where no face is left to split.
    high = cq.Solid.makeCone(narrow, wide, deep, cq.Vector(0, 0, z + height + over - deep))
    return low, high


def _inner_wire(face: cq.Face) -> TopoDS_Wire:
    (wire,) = face.innerWires()
    return wire.wrapped


def plane_face(z: float, wires: Iterable[TopoDS_Wire], *, up: bool = True) -> TopoDS_Face:
    """Plane face across the axis.

    Args:
        z: level [mm].
        wires: boundaries on that level, the outer one first, material on their left seen from above.
        up: whether the face looks up; else down.
    """
    builder, face = BRep_Builder(), TopoDS_Face()
    builder.MakeFace(face, Geom_Plane(gp_Pnt(0, 0, z), gp_Dir(0, 0, 1)), _CONFUSION)
    for wire in wires:
        builder.Add(face, wire)
    return face if up else TopoDS.Face_s(face.Reversed())


def join_faces(faces: Iterable[TopoDS_Face]) -> TopoDS_Solid:
    """Solid bounded by faces that share their edges and look outward; nothing is checked."""
    builder, shell, solid = BRep_Builder(), TopoDS_Shell(), TopoDS_Solid()
    builder.MakeShell(shell)
    for face in faces:
        builder.Add(shell, face)
    shell.Closed(True)
    builder.MakeSolid(solid)
    builder.Add(solid, shell)
    return solid


def _parts(shape: TopoDS_Shape) -> Iterator[TopoDS_Shape]:
    it = TopoDS_Iterator(shape)
    while it.More():
        yield it.Value()
        it.Next()
