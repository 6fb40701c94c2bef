"""What a body must pass before anybody gets it: one valid solid, the volume it was designed with."""

import cadquery as cq
from OCP.BRepCheck import BRepCheck_Analyzer
from OCP.BRepGProp import BRepGProp
from OCP.GProp import GProp_GProps

from gearsolid.errors import SolidError

# Largest relative error of the volume, and the accuracy asked of the kernel's quadrature.
VOLUME_TOL = 1e-6
_QUADRATURE = 1e-8


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


def valid_solid(shape: cq.Shape, name: str) -> cq.Solid:
    """The one solid in a shape, when the kernel's checker finds no fault in it.

    Raises:
        SolidError: not exactly one solid, or not valid.
    """
    solids = shape.Solids()
    if len(solids) != 1:
        raise SolidError(f"{name}: the CAD kernel returned {len(solids)} solids instead of one")
    if not is_valid(solids[0]):
        raise SolidError(
            f"{name}: the CAD kernel's checker finds the solid faulty; usually boundaries cross or touch, or a hole or "
            "boss reaches over the edge of its face: check the radii of holes, bore, keyway and bosses"
        )
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
