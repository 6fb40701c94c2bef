"""3MF files (Core specification) of a part or of a placed machine, proved by reading them back.

One object a distinct part. The parts of a machine are components of one more object, so that whatever lays things out
on a print bed keeps them in their places.
"""

import zipfile
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import NamedTuple
from xml.etree import ElementTree
from xml.sax.saxutils import escape, quoteattr

import numpy as np

from gearsolid import __version__
from gearsolid.curves.curve import Reals
from gearsolid.errors import DesignError, ExportError
from gearsolid.output.made import Made, distinct
from gearsolid.output.stl import prove as prove_surface
from gearsolid.output.triangles import Triangles, body_triangles
from gearsolid.output.whole_file import whole_file
from gearsolid.pairs.part import Body, Part

# Part names, types and namespaces of the 3MF Core specification 1.4.0 and the Open Packaging Conventions under it.
_TYPES, _RELATIONS, _MODEL = "[Content_Types].xml", "_rels/.rels", "3D/3dmodel.model"
_CORE = "http://schemas.microsoft.com/3dmanufacturing/core/2015/02"
_START = "http://schemas.microsoft.com/3dmanufacturing/2013/01/3dmodel"
_PACKAGE = "http://schemas.openxmlformats.org/package/2006"
_EXTENSIONS = {
    "rels": "application/vnd.openxmlformats-package.relationships+xml",
    "model": "application/vnd.ms-package.3dmanufacturing-3dmodel+xml",
}
_HEAD = '<?xml version="1.0" encoding="UTF-8"?>\n'
_MOST_ID = 2**31
# A fixed stamp, so that equal designs give equal files.
_STAMP = (1980, 1, 1, 0, 0, 0)
# Placed points may be off by this [mm]: coordinates are written with seven decimals.
_ROUNDING = 1e-6


class Solid(NamedTuple):
    """A named surface of a file."""

    name: str
    surface: Triangles


class Placed(NamedTuple):
    """Where a named surface stands: rows of the transform, the last one the shift [mm], shape (4, 3)."""

    name: str
    transform: Reals


class Package(NamedTuple):
    """What a 3MF file holds: its surfaces, and each place where one of them stands."""

    solids: tuple[Solid, ...]
    placed: tuple[Placed, ...]


@dataclass(frozen=True)
class ThreeMfFile:
    """A 3MF file as it read back.

    Args:
        path: where it is.
        size: [bytes].
        triangles: of all its objects, each counted once [-]; every object is watertight.
        volume: of everything placed [mm3].
        tol: largest distance of an edge from the exact boundary [mm].
    """

    path: Path
    size: int
    triangles: int
    volume: float
    tol: float


def write_part_threemf(path: Path, body: Body, name: str, tol: float = 0.01) -> ThreeMfFile:
    """Write one part; the file appears only when it has read back as the design.

    Args:
        path: file to make or to replace.
        body: what is made; it stands where all its coordinates are positive.
        name: of the part.
        tol: largest distance of a triangle's edge from the exact boundary [mm], absolute.

    Raises:
        DesignError: the tolerance is not above 0.
        ExportError: the file could not be written, or does not read back as the design.
    """
    surface = body_triangles(body, tol)
    items = [Placed(name, _shifted(_upright(), -surface.points.min(axis=0)))]
    return _write(path, name, [Made(name, body, ())], [surface], items, "", tol)


def write_machine_threemf(path: Path, parts: Sequence[Part], name: str, tol: float = 0.01) -> ThreeMfFile:
    """Write the parts of a machine in their places at input angle 0; proved like a part.

    Args:
        path: file to make or to replace.
        parts: of the machine; those of one shape become one object.
        name: of the machine.
        tol: largest distance of a triangle's edge from the exact boundary [mm], absolute.

    Raises:
        DesignError: the tolerance is not above 0, or two distinct parts have one name.
        ExportError: the file could not be written, or does not read back as the design.
    """
    made = distinct(parts)
    names = [m.name for m in made]
    twice = sorted({n for n in names if names.count(n) > 1})
    if twice:
        raise DesignError(f"two distinct parts of {name} are called {twice[0]}; give one of them another name")
    surfaces = [body_triangles(m.body, tol) for m in made]
    placed = [(s, Placed(m.name, transform(p))) for m, s in zip(made, surfaces, strict=True) for p in m.parts]
    low = np.min([_moved(s.points, p.transform).min(axis=0) for s, p in placed], axis=0)
    items = [Placed(p.name, _shifted(p.transform, -low)) for _, p in placed]
    return _write(path, name, made, surfaces, items, name, tol)


def transform(part: Part) -> Reals:
    """Where a part's body, made at height 0, stands at input angle 0: rows for row vectors, shape (4, 3)."""
    ray, centre = np.exp(1j * part.motion.turn(0.0)), part.motion.centre(0.0)
    turn = [[ray.real, ray.imag, 0.0], [-ray.imag, ray.real, 0.0], [0.0, 0.0, 1.0]]
    return np.array([*turn, [centre.real, centre.imag, part.body.z]])


def read_threemf(path: Path) -> Package:
    """The surfaces of a 3MF file and where they stand.

    Raises:
        ExportError: the file breaks a rule of the specification that this reader knows.
    """
    try:
        with zipfile.ZipFile(path) as package:
            types, relations = (ElementTree.fromstring(package.read(n)) for n in (_TYPES, _RELATIONS))
            starts = [r.get("Target", "") for r in relations if r.get("Type") == _START]
            if len(starts) != 1:
                raise ExportError(f"{path} names {len(starts)} models to start with; it must be one")
            model = ElementTree.fromstring(package.read(starts[0].lstrip("/")))
    except (zipfile.BadZipFile, KeyError, ElementTree.ParseError) as error:
        raise ExportError(f"{path} is no whole 3MF file: {error}") from error
    known = {t.get("Extension"): t.get("ContentType") for t in types}
    if not known.items() >= _EXTENSIONS.items():
        raise ExportError(f"{path} declares the content types {known}; needed are {_EXTENSIONS}")
    if model.tag != f"{{{_CORE}}}model" or model.get("unit") != "millimeter":
        raise ExportError(f"{path} holds {model.tag} in unit {model.get('unit')}, not a core model in millimeter")
    try:
        return _package(model)
    except (ExportError, ValueError, TypeError) as error:
        raise ExportError(f"{path} does not read back: {error}") from error


def prove(found: Package, made: Sequence[Made], items: Sequence[Placed], tol: float, path: Path) -> float:
    """Refuse a package that is not the parts expected in their places, each a watertight surface of its volume.

    Args:
        found: what was read.
        made: the distinct parts.
        items: where they should stand.
        tol: chord tolerance the surfaces were made with [mm].
        path: of the file, for the message.

    Returns:
        Volume of everything placed [mm3].

    Raises:
        ExportError: anything differs.
    """
    names = [s.name for s in found.solids]
    if names != [m.name for m in made]:
        raise ExportError(f"{path} reads back with the objects {names}; written were {[m.name for m in made]}")
    for solid, part in zip(found.solids, made, strict=True):
        if len(np.unique(solid.surface.points, axis=0)) != len(solid.surface.points):
            raise ExportError(f"{path} reads back with points of {solid.name} written twice; each must stand once")
        prove_surface(solid.surface, part.body.volume, tol, path)
    surfaces = {s.name: s.surface for s in found.solids}
    if [p.name for p in found.placed] != [p.name for p in items]:
        raise ExportError(f"{path} reads back with {len(found.placed)} placed parts; written were {len(items)}")
    for got, wanted in zip(found.placed, items, strict=True):
        points = surfaces[got.name].points
        off = float(np.max(np.abs(_moved(points, got.transform) - _moved(points, wanted.transform))))
        if not off <= _ROUNDING:
            raise ExportError(f"{path} reads back with {got.name} {off:.3g} mm from its place")
    return sum(surfaces[p.name].volume for p in found.placed)


def _write(
    path: Path,
    title: str,
    made: Sequence[Made],
    surfaces: Sequence[Triangles],
    items: Sequence[Placed],
    whole: str,
    tol: float,
) -> ThreeMfFile:
    solids = [Solid(m.name, s) for m, s in zip(made, surfaces, strict=True)]
    with whole_file(path) as fresh:
        _pack(fresh, _model(title, solids, items, whole))
        found = read_threemf(fresh)
        volume = prove(found, made, items, tol, path)
        size = fresh.stat().st_size
    return ThreeMfFile(path, size, sum(len(s.surface.corners) for s in found.solids), volume, tol)


def _pack(path: Path, model: str) -> None:
    defaults = "".join(f'<Default Extension="{e}" ContentType="{t}"/>' for e, t in _EXTENSIONS.items())
    relation = f'<Relationship Id="model" Type="{_START}" Target="/{_MODEL}"/>'
    parts = {
        _TYPES: f'{_HEAD}<Types xmlns="{_PACKAGE}/content-types">{defaults}</Types>',
        _RELATIONS: f'{_HEAD}<Relationships xmlns="{_PACKAGE}/relationships">{relation}</Relationships>',
        _MODEL: model,
    }
    with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED) as package:
        for name, text in parts.items():
            entry = zipfile.ZipInfo(name, _STAMP)
            entry.compress_type = zipfile.ZIP_DEFLATED
            package.writestr(entry, text)


def _model(title: str, solids: Sequence[Solid], items: Sequence[Placed], whole: str) -> str:
    """The model as XML; with a name for the whole, the items become components of one object of that name."""
    ids = {s.name: k for k, s in enumerate(solids, 1)}
    objects = "".join(_object(ids[s.name], s.name, _mesh(s.surface)) for s in solids)
    places = [f'objectid="{ids[p.name]}" transform="{_numbers(p.transform)}"' for p in items]
    if whole:
        components = "".join(f"<component {p}/>" for p in places)
        last = len(solids) + 1
        objects += _object(last, whole, f"<components>{components}</components>")
        places = [f'objectid="{last}"']
    build = "".join(f"<item {p}/>" for p in places)
    return (
        f'{_HEAD}<model xmlns="{_CORE}" unit="millimeter" xml:lang="en">'
        f'<metadata name="Title">{escape(title)}</metadata>'
        f'<metadata name="Application">gearsolid {__version__}</metadata>'
        f"<resources>{objects}</resources><build>{build}</build></model>\n"
    )


def _object(number: int, name: str, content: str) -> str:
    return f'<object id="{number}" type="model" name={quoteattr(name)}>{content}</object>'


def _mesh(surface: Triangles) -> str:
    points = ('<vertex x="%.7f" y="%.7f" z="%.7f"/>' * len(surface.points)) % tuple(surface.points.ravel().tolist())
    corners = ('<triangle v1="%d" v2="%d" v3="%d"/>' * len(surface.corners)) % tuple(surface.corners.ravel().tolist())
    return f"<mesh><vertices>{points}</vertices><triangles>{corners}</triangles></mesh>"


def _numbers(matrix: Reals) -> str:
    return " ".join(f"{v:.12g}" for v in matrix.ravel().tolist())


def _package(model: ElementTree.Element) -> Package:
    solids: dict[int, Solid] = {}
    groups: dict[int, list[Placed]] = {}
    for found in model.findall("{*}resources/{*}object"):
        number = int(found.get("id", "0"))
        if not 0 < number < _MOST_ID or number in groups:
            raise ExportError(f"object id {number} is taken or out of range; ids are whole numbers from 1")
        mesh = found.find("{*}mesh")
        if mesh is not None:
            solids[number] = Solid(found.get("name", ""), _surface(mesh))
            groups[number] = [Placed(solids[number].name, _upright())]
        else:
            groups[number] = _all_placed(found.findall("{*}components/{*}component"), groups)
    placed = _all_placed(model.findall("{*}build/{*}item"), groups)
    if not placed:
        raise ExportError("nothing is placed: the build has no items")
    return Package(tuple(solids.values()), tuple(placed))


def _all_placed(references: Sequence[ElementTree.Element], groups: dict[int, list[Placed]]) -> list[Placed]:
    """Surfaces that components or items refer to; an object must stand before what refers to it."""
    placed = []
    for reference in references:
        number = int(reference.get("objectid", "0"))
        if number not in groups:
            raise ExportError(f"object {number} is referred to before it is defined")
        text = reference.get("transform")
        matrix = _upright() if text is None else np.array(text.split(), dtype=float).reshape(4, 3)
        placed += [Placed(p.name, _moved(p.transform, matrix) - _LINEAR * matrix[3]) for p in groups[number]]
    return placed


# The first three rows of a transform are directions: a shift does not move them.
_LINEAR = np.array([[1.0], [1.0], [1.0], [0.0]])


def _surface(mesh: ElementTree.Element) -> Triangles:
    vertices, triangles = mesh.findall("{*}vertices/{*}vertex"), mesh.findall("{*}triangles/{*}triangle")
    points = np.array([[v.get(k) for k in "xyz"] for v in vertices], dtype=float).reshape(-1, 3)
    corners = np.array([[t.get(k) for k in ("v1", "v2", "v3")] for t in triangles], dtype=np.int64).reshape(-1, 3)
    if len(corners) < 4 or corners.min() < 0 or corners.max() >= len(points):
        raise ExportError(f"{len(corners)} triangles on {len(points)} points: at least 4 are needed, on these points")
    return Triangles(points, corners)


def _moved(points: Reals, matrix: Reals) -> Reals:
    return points @ matrix[:3] + matrix[3]


def _upright() -> Reals:
    return np.eye(4, 3)


def _shifted(matrix: Reals, shift: Reals) -> Reals:
    return np.vstack([matrix[:3], matrix[3] + shift])
