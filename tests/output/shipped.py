"""The distinct parts of every shipped recipe."""

from pathlib import Path

from gearsolid.output.made import distinct
from gearsolid.recipe.read import read_recipe

RECIPES = sorted((Path(__file__).parents[2] / "recipes").glob("*.toml"))
MACHINES = {path.stem: read_recipe(path).machine for path in RECIPES}
PARTS = {f"{name}, {made.name}": made for name, machine in MACHINES.items() for made in distinct(machine.parts)}
