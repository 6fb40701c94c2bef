"""Solid cycloidal and planetary gear bodies for CadQuery, and a roll test that says whether they bind.

Every name below is loaded on first use: `import gearsolid` itself loads neither numpy nor the CAD kernel.
"""

from importlib import import_module
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from gearsolid.contact.result import Contact, RollResult, Verdict
    from gearsolid.contact.roll import roll_test
    from gearsolid.errors import DesignError, ExportError, GearsolidError, RecipeError, SolidError, ToleranceError
    from gearsolid.output.dxf import write_arc_dxf, write_dxf
    from gearsolid.output.flat import Flat, cutter_path, flat
    from gearsolid.output.folder import make_folder
    from gearsolid.output.step import write_step
    from gearsolid.output.stl import write_stl
    from gearsolid.output.svg import write_svg
    from gearsolid.output.threemf import write_machine_threemf, write_part_threemf
    from gearsolid.pairs.blank import Blank
    from gearsolid.pairs.part import Body, Boss, Part
    from gearsolid.pairs.planetary import PlanetaryStage
    from gearsolid.pairs.reducer import OutputRollers, PinWheelReducer, Stack
    from gearsolid.pairs.spur_pair import SpurPair
    from gearsolid.recipe.read import Recipe, read_recipe
    from gearsolid.shop.bore import Bore
    from gearsolid.shop.fits import hole_limits, shaft_limits
    from gearsolid.shop.keys import key_for_bore
    from gearsolid.shop.keys_inch import inch_key_for_bore
    from gearsolid.shop.openings import Crossings, hole_circle
    from gearsolid.shop.processes import process
    from gearsolid.shop.profile_hole import d_hole, double_d_hole, hexagon_hole, square_hole
    from gearsolid.solids.assembly import assembly
    from gearsolid.solids.body import body_solid
    from gearsolid.solids.plugin import at_points, cut_form, on_plane, outline_face, outline_wire
    from gearsolid.teeth.cycloidal import CycloidalGear
    from gearsolid.teeth.internal import InternalGear
    from gearsolid.teeth.involute import InvoluteGear
    from gearsolid.teeth.pinwheel import CycloidDisc, PinRing
    from gearsolid.teeth.rack import BasicRack

__version__ = "0.1.0"

_HOMES = {
    "contact.result": ("Contact", "RollResult", "Verdict"),
    "contact.roll": ("roll_test",),
    "errors": ("DesignError", "ExportError", "GearsolidError", "RecipeError", "SolidError", "ToleranceError"),
    "output.dxf": ("write_arc_dxf", "write_dxf"),
    "output.flat": ("Flat", "cutter_path", "flat"),
    "output.folder": ("make_folder",),
    "output.step": ("write_step",),
    "output.stl": ("write_stl",),
    "output.svg": ("write_svg",),
    "output.threemf": ("write_machine_threemf", "write_part_threemf"),
    "pairs.blank": ("Blank",),
    "pairs.part": ("Body", "Boss", "Part"),
    "pairs.planetary": ("PlanetaryStage",),
    "pairs.reducer": ("OutputRollers", "PinWheelReducer", "Stack"),
    "pairs.spur_pair": ("SpurPair",),
    "recipe.read": ("Recipe", "read_recipe"),
    "shop.bore": ("Bore",),
    "shop.fits": ("hole_limits", "shaft_limits"),
    "shop.keys": ("key_for_bore",),
    "shop.keys_inch": ("inch_key_for_bore",),
    "shop.openings": ("Crossings", "hole_circle"),
    "shop.processes": ("process",),
    "shop.profile_hole": ("d_hole", "double_d_hole", "hexagon_hole", "square_hole"),
    "solids.assembly": ("assembly",),
    "solids.body": ("body_solid",),
    "solids.plugin": ("at_points", "cut_form", "on_plane", "outline_face", "outline_wire"),
    "teeth.cycloidal": ("CycloidalGear",),
    "teeth.internal": ("InternalGear",),
    "teeth.involute": ("InvoluteGear",),
    "teeth.pinwheel": ("CycloidDisc", "PinRing"),
    "teeth.rack": ("BasicRack",),
}
_HOME = {name: f"gearsolid.{module}" for module, names in _HOMES.items() for name in names}

__all__ = [
    "BasicRack",
    "Blank",
    "Body",
    "Bore",
    "Boss",
    "Contact",
    "Crossings",
    "CycloidDisc",
    "CycloidalGear",
    "DesignError",
    "ExportError",
    "Flat",
    "GearsolidError",
    "InternalGear",
    "InvoluteGear",
    "OutputRollers",
    "Part",
    "PinRing",
    "PinWheelReducer",
    "PlanetaryStage",
    "Recipe",
    "RecipeError",
    "RollResult",
    "SolidError",
    "SpurPair",
    "Stack",
    "ToleranceError",
    "Verdict",
    "assembly",
    "at_points",
    "body_solid",
    "cut_form",
    "cutter_path",
    "d_hole",
    "double_d_hole",
    "flat",
    "hexagon_hole",
    "hole_circle",
    "hole_limits",
    "inch_key_for_bore",
    "key_for_bore",
    "make_folder",
    "on_plane",
    "outline_face",
    "outline_wire",
    "process",
    "read_recipe",
    "roll_test",
    "shaft_limits",
    "square_hole",
    "write_arc_dxf",
    "write_dxf",
    "write_machine_threemf",
    "write_part_threemf",
    "write_step",
    "write_stl",
    "write_svg",
]


def __getattr__(name: str) -> object:
    """Load a public name from its room when it is first used."""
    if name not in _HOME:
        raise AttributeError(f"module 'gearsolid' has no attribute {name!r}")
    value = getattr(import_module(_HOME[name]), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return sorted({*globals(), *__all__})
