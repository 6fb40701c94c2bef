"""What `report.json` says: the verdict, each contact, each part, each file, in a schema that pydantic checks."""

from collections.abc import Mapping, Sequence
from typing import Literal

import numpy as np
from pydantic import BaseModel, ConfigDict, Field

from gearsolid.contact.finding import Cause, Finding
from gearsolid.contact.result import Contact, RollResult, Verdict
from gearsolid.curves.curve import Reals
from gearsolid.pairs.machine import Machine


class _Record(BaseModel):
    model_config = ConfigDict(extra="forbid", frozen=True)


class Place(_Record):
    """A point in the machine's frame at rest."""

    x: float = Field(description="[mm]")
    y: float = Field(description="[mm]")


class Curves(_Record):
    """A contact through one pitch, one entry an input angle."""

    input_angles: tuple[float, ...] = Field(description="input angles [deg]")
    clearances: tuple[float, ...] = Field(description="least distance of the two parts at those angles [mm]")
    plays: tuple[float, ...] | None = Field(description="angular play at those angles [deg], or null")


class ContactRecord(_Record):
    """Two parts turned through a whole pitch."""

    part_a: str = Field(description="name of the first part")
    part_b: str = Field(description="name of the second part")
    verdict: Verdict = Field(description="rolls, touches (within the tolerance), binds, or unproven")
    clearance: float = Field(description="least distance [mm]; negative is the greatest depth of overlap")
    proven: float = Field(description="the two are nowhere nearer than this, at any angle of the revolution [mm]")
    input_angle: float = Field(description="input angle where the least distance occurs [deg]")
    place: Place = Field(description="where it occurs")
    role_a: str = Field(description="what touches there on the first part: flank, tip, root, fillet, pin or hole")
    role_b: str = Field(description="what touches there on the second part")
    play_angle: float | None = Field(description="least angular play of the second part, the first held [deg], or null")
    play: float | None = Field(description="the same as an arc of the pitch circle [mm], or null")
    contact_ratio: float | None = Field(description="mean number of tooth pairs in contact [-], or null")
    transmission_error: float | None = Field(
        description="peak to peak of the driven angle over a pitch in one-sided contact [deg], or null"
    )
    curves: Curves = Field(description="the same through one pitch")


class FindingRecord(_Record):
    """A named cause: why parts bind, or what is worth knowing."""

    cause: Cause = Field(description="its name")
    pairs: tuple[tuple[str, str], ...] = Field(description="names of the parts, one entry for every pair alike")
    binds: bool = Field(description="whether it makes the parts bind; else it is only reported")
    sentence: str = Field(description="what is the matter, with numbers")
    size: float = Field(description="how large it is [mm]")
    place: Place = Field(description="where, for the first pair")
    input_angle: float = Field(description="input angle at which it is there [deg]")
    remedy: str = Field(description="what to change, with numbers")


class FileRecord(_Record):
    """A file of the folder."""

    name: str = Field(description="file name in the folder")
    content: str = Field(description="what it holds")
    size: int = Field(description="[bytes]", ge=0)
    sha256: str = Field(description="SHA-256 of the bytes, hexadecimal", pattern="^[0-9a-f]{64}$")


class PartRecord(_Record):
    """A part as made; equal parts are made once and placed several times."""

    name: str = Field(description="name of the part as made")
    placed_as: tuple[str, ...] = Field(description="names of its places in the machine")
    width: float = Field(description="face width [mm]")
    diameter: float = Field(description="largest diameter about the axis [mm]")
    bore: str | None = Field(description="size of the shaft hole with its fit [mm], or null")
    volume: float = Field(description="volume of the solid read back from STEP [mm3]")
    exact_volume: float = Field(description="volume by Green's theorem on the exact outline [mm3]")
    valid: bool = Field(description="the STEP file read back as one valid solid")
    flank_deviation: float = Field(description="largest distance between solid and exact outline [mm]")
    triangles: int = Field(description="triangles of the STL file [-]")
    facet_volume: float = Field(description="volume of the watertight surface read back from STL [mm3]")
    curve_deviation: float = Field(
        description="largest distance of the cut lines in the DXF file from the outline [mm]"
    )
    arc_deviation: float = Field(description="the same in the DXF file that holds arcs only [mm]")
    files: tuple[str, ...] = Field(description="its files")


class Report(_Record):
    """The whole of `report.json`."""

    format: Literal["gearsolid report 1"] = Field("gearsolid report 1", description="names this schema")
    version: str = Field(description="version of gearsolid that wrote it")
    name: str = Field(description="name of the recipe")
    title: str = Field(description="what the machine is")
    ratio: float = Field(description="input turns per output turn [-], negative when the output turns the other way")
    centre_distance: float = Field(description="distance of the working axes [mm]")
    verdict: Verdict = Field(description="verdict of the worst contact")
    sentence: str = Field(description="the verdict in one line")
    tolerance: float = Field(description="clearance below which a contact touches [mm]")
    contacts: tuple[ContactRecord, ...] = Field(description="every pair that can touch, the tightest first")
    findings: tuple[FindingRecord, ...] = Field(description="named causes, those that make parts bind first")
    parts: tuple[PartRecord, ...] = Field(description="every distinct part")
    recipe: dict[str, dict[str, str]] = Field(description="the recipe with its defaults filled in, table by table")
    files: tuple[FileRecord, ...] = Field(description="every file of the folder except report.json itself")


def contact_record(contact: Contact) -> ContactRecord:
    """The record of one contact."""
    return ContactRecord(
        part_a=contact.name_a,
        part_b=contact.name_b,
        verdict=contact.verdict,
        clearance=contact.clearance,
        proven=contact.proven,
        input_angle=contact.input_angle,
        place=Place(x=contact.place.real, y=contact.place.imag),
        role_a=contact.roles[0],
        role_b=contact.roles[1],
        play_angle=contact.play_angle,
        play=contact.play,
        contact_ratio=contact.contact_ratio,
        transmission_error=contact.transmission_error,
        curves=Curves(
            input_angles=_rounded(contact.angles),
            clearances=_rounded(contact.clearances),
            plays=None if contact.plays is None else _rounded(contact.plays),
        ),
    )


def finding_record(found: Finding) -> FindingRecord:
    """The record of one named cause."""
    return FindingRecord(
        cause=found.cause,
        pairs=found.pairs,
        binds=found.binds,
        sentence=found.sentence,
        size=found.size,
        place=Place(x=found.place.real, y=found.place.imag),
        input_angle=found.input_angle,
        remedy=found.remedy,
    )


def tightest_first(result: RollResult) -> list[Contact]:
    """The contacts by growing clearance."""
    return sorted(result.contacts, key=lambda c: c.clearance)


def make_report(
    *,
    version: str,
    name: str,
    machine: Machine,
    result: RollResult,
    found: Sequence[Finding],
    parts: Sequence[PartRecord],
    recipe: Mapping[str, Mapping[str, str]],
    files: Sequence[FileRecord],
) -> Report:
    """The report on a machine.

    Args:
        version: of gearsolid.
        name: of the recipe.
        machine: the machine.
        result: its roll test.
        found: the named causes.
        parts: the distinct parts as made.
        recipe: table -> key -> value as text with its unit.
        files: the files of the folder.

    Returns:
        The report, ready for `model_dump_json`.
    """
    return Report(
        version=version,
        name=name,
        title=machine.title,
        ratio=machine.ratio,
        centre_distance=machine.centre_distance,
        verdict=result.verdict,
        sentence=result.sentence,
        tolerance=result.tolerance,
        contacts=tuple(contact_record(c) for c in tightest_first(result)),
        findings=tuple(finding_record(f) for f in found),
        parts=tuple(parts),
        recipe={table: dict(rows) for table, rows in recipe.items()},
        files=tuple(files),
    )


def _rounded(values: Reals) -> tuple[float, ...]:
    return tuple(np.round(values, 7).tolist())
