"""Binary STL files with a stated chord tolerance in millimetres, proved by reading them back."""

from dataclasses import dataclass
from pathlib import Path

import numpy as np

from gearsolid.errors import ExportError
from gearsolid.output.triangles import Triangles, body_triangles
from gearsolid.output.whole_file import whole_file
from gearsolid.pairs.part import Body

_HEADER = 80
_RECORD = np.dtype([("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("attribute", "<u2")])


@dataclass(frozen=True)
class StlFile:
    """An STL file as it read back.

    Args:
        path: where it is.
        size: [bytes].
        triangles: number of triangles [-]; they form a watertight surface.
        volume: enclosed by them [mm3].
        tol: largest distance of an edge from the exact boundary [mm].
    """

    path: Path
    size: int
    triangles: int
    volume: float
    tol: float


def write_stl(path: Path, body: Body, tol: float = 0.01) -> StlFile:
    """Write a body as triangles and prove the file by reading it back. It appears only when it has passed.

    Args:
        path: file to make or to replace.
        body: what is made; the file's unit is the millimetre.
        tol: largest distance of a triangle's edge from the exact boundary [mm], absolute.

    Returns:
        What was read back.

    Raises:
        DesignError: the tolerance is not above 0.
        ExportError: the file could not be written, or does not read back as a watertight surface of the right volume.
    """
    surface = body_triangles(body, tol)
    with whole_file(path) as fresh:
        fresh.write_bytes(_bytes(surface))
        found = read_stl(fresh)
        prove(found, body.volume, tol, path)
        size = fresh.stat().st_size
    return StlFile(path, size, len(found.corners), found.volume, tol)


def read_stl(path: Path) -> Triangles:
    """The triangles of a binary STL file, corners at the same place made one.

    Raises:
        ExportError: the file is no whole binary STL file.
    """
    data = path.read_bytes()
    count = int.from_bytes(data[_HEADER : _HEADER + 4], "little")
    if len(data) != _HEADER + 4 + count * _RECORD.itemsize or not count:
        raise ExportError(f"{path} is no whole binary STL file: {len(data)} bytes for {count} triangles")
    corners = np.frombuffer(data, _RECORD, offset=_HEADER + 4)["corners"].reshape(-1, 3)
    points, places = np.unique(corners, axis=0, return_inverse=True)
    return Triangles(points.astype(float), places.reshape(-1, 3))


def prove(found: Triangles, volume: float, tol: float, path: Path) -> None:
    """Refuse triangles that are not watertight or enclose another volume.

    Args:
        found: what was read.
        volume: expected [mm3].
        tol: chord tolerance it was made with [mm].
        path: of the file, for the message.

    Raises:
        ExportError: a check fails.
    """
    if not found.is_watertight:
        raise ExportError(f"{path} does not read back watertight: an edge is not shared by exactly two triangles")
    # Single precision moves corners by at most this much.
    rounding = float(np.max(np.abs(found.points))) * float(np.finfo(np.float32).eps)
    allowed = found.side_area * tol + found.area * rounding
    if not abs(found.volume - volume) <= allowed:
        raise ExportError(
            f"{path} reads back with a volume of {found.volume:.7g} mm3 and the design has {volume:.7g} mm3; they may "
            f"differ by {allowed:.3g} mm3 at a chord tolerance of {tol:g} mm"
        )


def _bytes(surface: Triangles) -> bytes:
    records = np.zeros(len(surface.corners), _RECORD)
    corners = surface.points[surface.corners]
    normal = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    length = np.linalg.norm(normal, axis=1, keepdims=True)
    records["normal"] = normal / np.where(length > 0, length, 1.0)
    records["corners"] = corners
    header = b"binary STL, unit mm".ljust(_HEADER)
    return header + len(records).to_bytes(4, "little") + records.tobytes()
