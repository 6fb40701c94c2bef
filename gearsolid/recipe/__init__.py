"""Recipes: a machine in a TOML file, read into a typed design with every mistake named."""

from gearsolid.recipe.keys import keys_text
from gearsolid.recipe.read import Recipe, read_recipe

__all__ = ["Recipe", "keys_text", "read_recipe"]
