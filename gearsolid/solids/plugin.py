"""Toothed bodies inside CadQuery scripts: shapes as values, and callables for `invoke` and `eachpoint`.

    wheel = body_solid(Body(gear.outline, width=12))
    cq.Workplane().rarray(100, 1, 2, 1).eachpoint(at_points(body), clean=False)
    cq.Workplane().box(90, 90, 10).invoke(cut_form(ring.outline, depth=10))

Nothing is added to CadQuery's classes.
"""

from collections.abc import Callable

import cadquery as cq
from OCP.TopoDS import TopoDS

from gearsolid.curves.fitted import fitted
from gearsolid.curves.outline import Outline
from gearsolid.errors import DesignError, SolidError
from gearsolid.pairs.part import Body
from gearsolid.solids.body import body_solid
from gearsolid.solids.check import is_valid
from gearsolid.solids.walls import join_faces, plane_face, prism_walls
from gearsolid.solids.wires import outline_wires

Step = Callable[[cq.Workplane], cq.Workplane]


def outline_wire(outline: Outline, tol: float = 1e-4) -> cq.Wire:
    """The closed wire of a rim, in the plane z = 0.

    Args:
        outline: one boundary round the axis.
        tol: allowed distance of a fitted flank from the exact one [mm].

    Raises:
        DesignError: the outline is a pattern of several loops.
    """
    if not outline.is_chain:
        raise DesignError(f"a pattern of {outline.order} loops has no single wire; use outline_face with a boundary")
    (wire,) = outline_wires(fitted(outline, tol))
    return cq.Wire(wire)


def outline_face(outer: Outline, *holes: Outline, tol: float = 1e-4) -> cq.Face:
    """The plane face between an outer boundary and holes, at z = 0, for `extrude`, `Sketch.face` and the like.

    Args:
        outer: outer boundary.
        holes: boundaries or patterns inside.
        tol: allowed distance of a fitted flank from the exact one [mm].
    """
    wires = [wire for o in (outer, *holes) for wire in outline_wires(fitted(o, tol))]
    return cq.Face(plane_face(0.0, wires))


def on_plane(body: Body, tol: float = 1e-4) -> Step:
    """For `Workplane.invoke`: put the body on the workplane, its axis through the origin along the normal.

    Args:
        body: what is made.
        tol: allowed distance of a fitted flank from the exact one [mm].
    """
    solid = body_solid(body, tol)

    # A closure, since invoke looks at the code object of what it is given.
    def place(work: cq.Workplane) -> cq.Workplane:
        return work.newObject([solid.moved(work.plane.location)])

    return place


def at_points(body: Body, tol: float = 1e-4) -> Callable[[cq.Location], cq.Shape]:
    """For `Workplane.eachpoint`: the body at each point of the stack, all copies sharing one shape.

    Args:
        body: what is made.
        tol: allowed distance of a fitted flank from the exact one [mm].
    """
    return body_solid(body, tol).moved


def cut_form(hole: Outline, depth: float, tol: float = 1e-4) -> Step:
    """For `Workplane.invoke`: cut the space inside an outline out of the part, downward from the workplane.

    Args:
        hole: boundary with the material outside, such as the toothed hole of an annulus, or a pattern of such loops.
        depth: [mm], against the workplane's normal; a through cut may go deeper than the part.
        tol: allowed distance of a fitted flank from the exact one [mm].

    Raises:
        DesignError: the outline has its material inside, or the depth is not above 0.
        SolidError: the cut leaves nothing or a faulty part (raised when the step is invoked).
    """
    if not hole.area < 0:
        raise DesignError("this outline has its material inside; give the boundary of a hole, such as an annulus has")
    if not depth > 0:
        raise DesignError(f"the depth of cut is {depth:g} mm; it must be above 0")
    plugs = _plugs(fitted(hole, tol), depth)

    def cut(work: cq.Workplane) -> cq.Workplane:
        tools = [plug.moved(work.plane.location) for plug in plugs]
        part = work.findSolid()
        left = part.cut(*tools)
        if not left.Solids() or not is_valid(left):
            raise SolidError("the cut leaves no sound part; keep the form inside it and clear of edges and other holes")
        return work.newObject([left])

    return cut


def _plugs(hole: Outline, depth: float) -> list[cq.Solid]:
    """What fills the loops of a hole, from the plane z = 0 down."""
    plugs = []
    for wall in prism_walls(hole, -depth, depth):
        ends = [
            plane_face(-depth, [TopoDS.Wire_s(wall.lower.Reversed())], up=False),
            plane_face(0.0, [TopoDS.Wire_s(wall.upper.Reversed())]),
        ]
        plugs.append(cq.Solid(join_faces([*(TopoDS.Face_s(f.Reversed()) for f in wall.faces), *ends])))
    return plugs
