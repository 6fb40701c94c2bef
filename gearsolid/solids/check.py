"""What a body must pass before anybody gets it: one valid solid, the volume it was designed with."""

import cadquery as cq
from OCP.BRepCheck import BRepCheck_Analyzer
from OCP.BRepGProp import BRepGProp
from OCP.GProp import GProp_GProps

from gearsolid.errors import SolidError

# Largest relative error of the volume, and the accuracy asked of the kernel's quadrature.
VOLUME_TOL = 1e-6
_QUADRATURE = 1e-8
_AREA_QUADRATURE = 1e-4

# Cosine above which a plane face counts as square to the axis.
_SQUARE = 0.999

_CROSSING = (
    "usually boundaries cross or touch, or a hole or boss reaches over the edge of its face: check the radii of holes, "
    "bore, keyway and bosses"
)


def is_valid(shape: cq.Shape) -> bool:
    """Whether the kernel's checker, run on all cores, finds no fault in a shape."""
    return bool(BRepCheck_Analyzer(shape.wrapped, True, True).IsValid())


def exact_volume(shape: cq.Shape) -> float:
    """Volume [mm3] by the kernel's Gauss-Kronrod quadrature.

    Its other adaptive quadrature, the one behind `Shape.Volume(tol)`, was measured up to 2e-4 off on spline flanks.
    """
    properties = GProp_GProps()
    BRepGProp.VolumePropertiesGK_s(shape.wrapped, properties, _QUADRATURE, False, False, False, False, False)
    return float(properties.Mass())


def check_solid(shape: cq.Shape, volume: float, name: str = "body") -> cq.Solid:
    """The one valid solid in a shape.

    Args:
        shape: what the kernel made.
        volume: expected [mm3].
        name: what the message calls it.

    Raises:
        SolidError: not exactly one solid, not valid, or of another volume.
    """
    solid = valid_solid(shape, name)
    check_volume(exact_volume(solid), volume, name)
    return solid


def check_prism(solid: cq.Solid, section: float, name: str = "body") -> cq.Solid:
    """A straight body judged by its plane faces square to the axis, a fraction of the work of the full check.

    All boundaries lie in those faces, and the walls between them are swept. The faces of an end must pass the kernel's
    checker and cover the section, steps and all.

    Args:
        solid: body raised along the z axis.
        section: area of the body seen along the axis [mm2].
        name: what the message calls it.

    Raises:
        SolidError: a face is faulty, or the areas are not those of the section.
    """
    flat = [(f, f.normalAt().z) for f in solid.Faces() if f.geomType() == "PLANE"]
    up, down = ([f for f, z in flat if way * z > _SQUARE] for way in (1, -1))
    # The one face up of a body without bosses is the swept copy of its face down.
    for faces in [down] if len(up) == 1 else [down, up]:
        if not all(map(is_valid, faces)):
            raise SolidError(f"{name}: the CAD kernel's checker finds an end face faulty; {_CROSSING}")
        reached = sum(map(_area, faces))
        if not abs(reached - section) <= VOLUME_TOL * section:
            raise SolidError(
                f"{name}: the end faces cover {reached:.9g} mm2 and the design {section:.9g} mm2; they must agree "
                f"within {VOLUME_TOL:g} of it"
            )
    return solid


def _area(face: cq.Face) -> float:
    """Area [mm2] by the kernel's adaptive quadrature; `Face.Area()` was measured 7e-6 off beside cusps."""
    properties = GProp_GProps()
    BRepGProp.SurfaceProperties_s(face.wrapped, properties, _AREA_QUADRATURE, False)
    return float(properties.Mass())


def valid_solid(shape: cq.Shape, name: str) -> cq.Solid:
    """The one solid in a shape, when the kernel's checker finds no fault in it.

    Raises:
        SolidError: not exactly one solid, or not valid.
    """
    solids = shape.Solids()
    if len(solids) != 1:
        raise SolidError(f"{name}: the CAD kernel returned {len(solids)} solids instead of one")
    if not is_valid(solids[0]):
        raise SolidError(f"{name}: the CAD kernel's checker finds the solid faulty; {_CROSSING}")
    return solids[0]


def check_volume(reached: float, volume: float, name: str) -> None:
    """Refuse a volume [mm3] that is not the expected one.

    Raises:
        SolidError: they differ by more than 1e-6 of it.
    """
    if not abs(reached - volume) <= VOLUME_TOL * abs(volume):
        raise SolidError(
            f"{name}: the solid has a volume of {reached:.9g} mm3 and the design {volume:.9g} mm3; they must agree "
            f"within {VOLUME_TOL:g} of it"
        )
