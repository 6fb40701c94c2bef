"""Parts of a machine placed at an input angle, as a CadQuery assembly."""

from collections.abc import Sequence
from dataclasses import replace
from math import degrees

import cadquery as cq

from gearsolid.pairs.part import Body, Part
from gearsolid.solids.body import body_solid


def assembly(parts: Sequence[Part], psi: float = 0.0, name: str = "machine", tol: float = 1e-4) -> cq.Assembly:
    """Parts in their places.

    Parts that are the same piece of work, at whatever height, share one shape: a file holds it once.

    Args:
        parts: with unique names.
        psi: input angle of the machine [rad].
        name: of the assembly.
        tol: allowed distance of a fitted flank from the exact one [mm].

    Raises:
        SolidError: a body cannot be made.
    """
    shapes: dict[Body, cq.Solid] = {}
    placed = cq.Assembly(name=name)
    for part in parts:
        grounded = replace(part.body, z=0.0)
        if grounded not in shapes:
            shapes[grounded] = body_solid(grounded, tol)
        placed.add(shapes[grounded], name=part.name, loc=location(part, psi), color=cq.Color(*part.colour))
    return placed


def location(part: Part, psi: float = 0.0) -> cq.Location:
    """Where a part's body, made at height 0, stands at input angle psi [rad]."""
    centre = part.motion.centre(psi)
    place = cq.Vector(centre.real, centre.imag, part.body.z)
    # Motions say how the section at height 0 stands; helical teeth have turned on by the time they reach the body.
    turn = part.motion.turn(psi) + part.body.twist_rate * part.body.z
    return cq.Location(place, cq.Vector(0, 0, 1), degrees(turn))
