"""STEP files with our names and without parameter-space curves, proved by reading them back."""

import re
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from datetime import UTC, datetime
from io import BytesIO
from pathlib import Path

import cadquery as cq
from OCP.APIHeaderSection import APIHeaderSection_MakeHeader
from OCP.IFSelect import IFSelect_RetDone
from OCP.Interface import Interface_Static
from OCP.STEPCAFControl import STEPCAFControl_Reader, STEPCAFControl_Writer
from OCP.TCollection import TCollection_ExtendedString, TCollection_HAsciiString
from OCP.TDataStd import TDataStd_Name
from OCP.TDF import TDF_Label, TDF_LabelSequence
from OCP.TDocStd import TDocStd_Document
from OCP.XCAFApp import XCAFApp_Application
from OCP.XCAFDoc import XCAFDoc_ColorGen, XCAFDoc_DocumentTool, XCAFDoc_ShapeTool

from gearsolid.errors import ExportError, SolidError
from gearsolid.output.step_text import share_geometry
from gearsolid.output.whole_file import whole_file
from gearsolid.solids.check import check_volume, exact_volume, valid_solid

# Settings of the kernel's writer, which are global: schema AP214, no curves in the parameter space of faces, mm.
_SETTINGS = {
    "write.step.schema": "AP214IS",
    "write.surfacecurve.mode": "Off",
    "write.step.unit": "MM",
    "xstep.cascade.unit": "MM",
}


@dataclass(frozen=True)
class Placed:
    """A named shape and where it stands."""

    name: str
    shape: cq.Shape
    location: cq.Location
    colour: cq.Color | None = None


@dataclass(frozen=True)
class StepFile:
    """A STEP file as it read back.

    Args:
        path: where it is.
        size: [bytes].
        parts: the placed shapes as read; each is one valid solid.
        volume: of all of them together [mm3].
    """

    path: Path
    size: int
    parts: tuple[Placed, ...]
    volume: float


def write_step(
    path: Path, assembly: cq.Assembly, *, author: str = "", organisation: str = "", time: datetime | None = None
) -> StepFile:
    """Write the solids of an assembly and prove the file by reading it back.

    A lone solid that stands where it was made becomes a part; else all solids are placed in one assembly. A shape used
    several times is written once. The file appears only when it has passed.

    Args:
        path: file to make or to replace.
        assembly: every object in it one valid solid; names in ASCII.
        author: for the file's header.
        organisation: for the file's header.
        time: stamp of the header; now when left out.

    Returns:
        What was read back.

    Raises:
        ExportError: the file could not be written, or does not read back as the valid solids it was made from.
    """
    parts = _flattened(assembly)
    volumes = {shape: exact_volume(shape) for shape in {p.shape for p in parts}}
    text = _text(_document(parts, assembly.name), assembly.name, author, organisation, time or datetime.now(UTC))
    with whole_file(path) as fresh:
        fresh.write_text(share_geometry(text), encoding="ascii", newline="\n")
        found = read_step(fresh)
        volume = prove(found, {p.name: volumes[p.shape] for p in parts}, path)
        size = fresh.stat().st_size
    return StepFile(path, size, tuple(found), volume)


def prove(found: Sequence[Placed], volumes: dict[str, float], path: Path) -> float:
    """Refuse what a file held unless it is the parts expected, each one valid solid of its volume.

    Args:
        found: what was read.
        volumes: expected part names and their volumes [mm3].
        path: of the file, for the message.

    Returns:
        Volume of all placed solids found [mm3].

    Raises:
        ExportError: anything differs.
    """
    names = [p.name for p in found]
    if sorted(names) != sorted(volumes):
        raise ExportError(f"{path} reads back with the parts {sorted(names)}; written were {sorted(volumes)}")
    measured: dict[cq.Shape, float] = {}
    try:
        for part in found:
            if part.shape not in measured:
                measured[part.shape] = exact_volume(valid_solid(part.shape, part.name))
            check_volume(measured[part.shape], volumes[part.name], part.name)
    except SolidError as error:
        raise ExportError(f"{path} does not read back as written: {error}") from error
    return sum(measured[p.shape] for p in found)


def read_step(path: Path) -> list[Placed]:
    """The named, placed shapes of a STEP file.

    Raises:
        ExportError: the file cannot be read.
    """
    reader = STEPCAFControl_Reader()
    reader.SetNameMode(True)
    document = _new_document()
    with _settings({"xstep.cascade.unit": "MM"}):
        if reader.ReadFile(str(path)) != IFSelect_RetDone or not reader.Transfer(document):
            raise ExportError(f"{path} is no STEP file the CAD kernel can read")
    roots = TDF_LabelSequence()
    XCAFDoc_DocumentTool.ShapeTool_s(document.Main()).GetFreeShapes(roots)
    return [placed for label in roots for placed in _placed(label, label, cq.Location())]


def _placed(label: TDF_Label, named: TDF_Label, at: cq.Location) -> Iterator[Placed]:
    """Simple shapes below a label, with the names of their occurrences."""
    if not XCAFDoc_ShapeTool.IsAssembly_s(label):
        yield Placed(_name(named), cq.Shape.cast(XCAFDoc_ShapeTool.GetShape_s(label)), at)
        return
    components = TDF_LabelSequence()
    XCAFDoc_ShapeTool.GetComponents_s(label, components)
    for component in components:
        product = TDF_Label()
        XCAFDoc_ShapeTool.GetReferredShape_s(component, product)
        yield from _placed(product, component, at * cq.Location(XCAFDoc_ShapeTool.GetLocation_s(component)))


def _flattened(assembly: cq.Assembly) -> list[Placed]:
    # Shapes are taken back to where they were made, so that moved copies are known as the same product.
    parts = [
        Placed(name.removeprefix(f"{assembly.name}/"), shape.located(cq.Location()), at * shape.location(), colour)
        for shape, name, at, colour in assembly
    ]
    for name in (assembly.name, *(p.name for p in parts)):
        if not (name.isascii() and name.isprintable() and name):
            raise ExportError(f"the part name {name!r} cannot stand in a STEP file; use plain ASCII letters and digits")
    if not parts:
        raise ExportError(f"the assembly {assembly.name!r} holds no shapes; add parts before writing it")
    return parts


def _document(parts: Sequence[Placed], name: str) -> TDocStd_Document:
    document = _new_document()
    tool = XCAFDoc_DocumentTool.ShapeTool_s(document.Main())
    tool.SetAutoNaming_s(False)
    colours = XCAFDoc_DocumentTool.ColorTool_s(document.Main())
    lone = len(parts) == 1 and parts[0].location.toTuple() == ((0, 0, 0), (0, 0, 0))
    whole = None if lone else tool.NewShape()
    if whole:
        _set_name(whole, name)
    products: dict[cq.Shape, TDF_Label] = {}
    for part in parts:
        if part.shape not in products:
            products[part.shape] = label = tool.AddShape(part.shape.wrapped, False)
            _set_name(label, _product_name(part, parts))
            if part.colour:
                colours.SetColor(label, part.colour.wrapped, XCAFDoc_ColorGen)
        if whole:
            _set_name(tool.AddComponent(whole, products[part.shape], part.location.wrapped), part.name)
    tool.UpdateAssemblies()
    return document


def _product_name(part: Placed, parts: Sequence[Placed]) -> str:
    """Name of a product: of its part, without the number where the part is one of several."""
    common = re.sub(r"\W*\d+$", "", part.name)
    alone = sum(p.shape == part.shape for p in parts) == 1
    taken = any(p.name == common for p in parts)
    return part.name if alone or taken or not common else common


def _text(document: TDocStd_Document, name: str, author: str, organisation: str, time: datetime) -> str:
    writer = STEPCAFControl_Writer()
    writer.SetColorMode(True)
    writer.SetNameMode(True)
    stream = BytesIO()
    with _settings(_SETTINGS):
        if not writer.Transfer(document):
            raise ExportError(f"the CAD kernel cannot turn {name!r} into STEP")
        header = APIHeaderSection_MakeHeader(writer.ChangeWriter().Model())
        header.SetName(TCollection_HAsciiString(name))
        header.SetTimeStamp(TCollection_HAsciiString(time.isoformat(timespec="seconds")))
        header.SetAuthorValue(1, TCollection_HAsciiString(author))
        header.SetOrganizationValue(1, TCollection_HAsciiString(organisation))
        header.SetOriginatingSystem(TCollection_HAsciiString("gearsolid"))
        if writer.WriteStream(stream) != IFSelect_RetDone:
            raise ExportError(f"the CAD kernel cannot write {name!r} as STEP")
    return stream.getvalue().decode("ascii")


@contextmanager
def _settings(values: dict[str, str]) -> Iterator[None]:
    """Settings of the kernel that hold for all its readers and writers, put back afterwards."""
    before = {key: Interface_Static.CVal_s(key) for key in values}
    for key, value in values.items():
        if not Interface_Static.SetCVal_s(key, value):
            raise ExportError(f"the CAD kernel does not take {value} for its setting {key}")
    try:
        yield
    finally:
        for key, value in before.items():
            Interface_Static.SetCVal_s(key, value)


def _new_document() -> TDocStd_Document:
    document = TDocStd_Document(TCollection_ExtendedString("BinXCAF"))
    XCAFApp_Application.GetApplication_s().InitDocument(document)
    return document


def _set_name(label: TDF_Label, name: str) -> None:
    TDataStd_Name.Set_s(label, TCollection_ExtendedString(name))


def _name(label: TDF_Label) -> str:
    name = TDataStd_Name()
    return name.Get().ToExtString() if label.FindAttribute(TDataStd_Name.GetID_s(), name) else ""
