"""A body as a solid: walls on its boundaries and plane faces between them, without a Boolean on teeth."""

import cadquery as cq
from OCP.TopoDS import TopoDS, TopoDS_Solid

from gearsolid.curves.fitted import fitted
from gearsolid.curves.outline import Outline
from gearsolid.pairs.part import Body, is_toothed
from gearsolid.solids.check import VOLUME_TOL, check_prism, check_solid
from gearsolid.solids.twisted import twisted_wall
from gearsolid.solids.walls import Wall, bore_wall, join_faces, plane_face, prism_walls

# Share of the volume's tolerance that the fit of the flanks may use up.
_AREA_SHARE = 0.3


def body_solid(body: Body, tol: float = 1e-4) -> cq.Solid:
    """The solid of a body, checked.

    Args:
        body: outlines, widths, bore and bosses.
        tol: allowed distance of a fitted flank from the exact one [mm]; tightened where the volume asks for it.

    Returns:
        One solid whose volume is the body's within 1e-6 of it. A straight body is judged by its end faces, which hold
        every boundary; a helical one by the kernel's full check, which every body passes again when a file is written.

    Raises:
        SolidError: the kernel's solid is faulty or has another volume.
        ToleranceError: a flank cannot be fitted.
    """
    solid = cq.Solid(build_solid(body, tol))
    if body.twists:
        return check_solid(solid, body.volume)
    return check_prism(solid, _section(body) - (abs(body.bore.mouth.area) if body.bore else 0.0))


def _section(body: Body) -> float:
    """Area of outer boundary and holes [mm2], the bore not yet taken off."""
    return body.outer.area + sum(h.area for h in body.holes)


def build_solid(body: Body, tol: float = 1e-4) -> TopoDS_Solid:
    """The kernel's solid of a body, not checked; `tol` [mm] as for `body_solid`."""
    outlines = [body.outer, *body.holes, *(b.outline for b in body.bosses)]
    area_tol = _AREA_SHARE * VOLUME_TOL * abs(_section(body)) / len(outlines)

    def walls(outline: Outline, z: float, height: float) -> list[Wall]:
        return prism_walls(fitted(outline, tol, area_tol), z, height)

    def rims(outline: Outline) -> list[Wall]:
        if body.twists and is_toothed(outline):
            rim = fitted(outline, tol, area_tol)
            courses = [twisted_wall(rim, body.z, levels) for levels in body.courses]
            return [_grooved(courses, body.groove.floor(outline), body) if body.groove else courses[0]]
        return walls(outline, body.z, body.width)

    top = body.z + body.width
    sides = [w for o in (body.outer, *body.holes) for w in rims(o)]
    raised = [(b, w) for b in body.bosses for w in walls(b.outline, top, b.height)]
    bore = [bore_wall(body.bore, body.z, body.bore_length)] if body.bore else []
    below_hub = [] if body.hub else bore

    faces = [f for w in (*sides, *(w for _, w in raised), *bore) for f in w.faces]
    faces.append(plane_face(body.z, [w.lower for w in (*sides, *bore)], up=False))
    faces.append(plane_face(top, [*(w.upper for w in (*sides, *below_hub)), *(w.lower.Reversed() for _, w in raised)]))
    for boss, wall in raised:
        through = bore if boss is body.hub else []
        faces.append(plane_face(top + boss.height, [w.upper for w in (wall, *through)]))
    return join_faces(faces)


def _grooved(courses: list[Wall], floor: Outline, body: Body) -> Wall:
    """One wall from two courses of teeth and the relief groove between them."""
    below, above = courses
    (_, (low, _)), ((high, _), _) = body.courses
    (relief,) = prism_walls(floor, body.z + low, high - low)
    # The outer boundary comes first; in the groove of a ring that is its floor.
    hand = 1 if floor.area > 0 else -1
    ends = [
        plane_face(body.z + low, [below.upper, TopoDS.Wire_s(relief.lower.Reversed())][::hand]),
        plane_face(body.z + high, [above.lower, TopoDS.Wire_s(relief.upper.Reversed())][::hand], up=False),
    ]
    return Wall((*below.faces, *relief.faces, *ends, *above.faces), below.lower, above.upper)
