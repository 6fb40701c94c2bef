"""From a recipe file to a machine, every mistake named with its key path."""

import tomllib
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from gearsolid.errors import DesignError, RecipeError
from gearsolid.pairs.machine import Machine
from gearsolid.pairs.notices import part_notices
from gearsolid.recipe.machines import MACHINES, MachineTable
from gearsolid.recipe.mistakes import nearest, sentences, shown
from gearsolid.recipe.rows import rows
from gearsolid.shop.notice import Notice

Rows = dict[str, dict[str, str]]


@dataclass(frozen=True)
class Recipe:
    """A recipe read and built.

    Args:
        name: of the design.
        machine: what it describes.
        rows: table -> key -> value as text with its unit, defaults filled in.
    """

    name: str
    machine: Machine
    rows: Rows
    notices: tuple[Notice, ...] = ()


def read_recipe(path: Path) -> Recipe:
    """The recipe in a TOML file.

    Args:
        path: the file.

    Raises:
        RecipeError: the file is not there, not TOML, or says something no recipe may say; every mistake is listed.
        DesignError: the machine cannot exist; the message names the table.
    """
    data = _load(path)
    table = _table(path, data)
    try:
        machine = table.build()
        # Bodies are made on first use; a recipe whose bodies cannot exist is refused here, not half way through.
        module = getattr(table, "module", None)
        return Recipe(table.name, machine, rows(table), part_notices(machine.parts, module, None))
    except DesignError as error:
        raise DesignError(f"{path}: {error}") from error


def _load(path: Path) -> dict[str, Any]:
    try:
        return tomllib.loads(path.read_text(encoding="utf-8"))
    except tomllib.TOMLDecodeError as error:
        raise RecipeError(f"{path} is not TOML: {error}") from error
    except UnicodeDecodeError as error:
        raise RecipeError(f"{path} is not a text file in UTF-8; a recipe is a TOML file") from error
    except OSError as error:
        raise RecipeError(f"cannot read {path}: {error.strerror}; name a TOML file that holds a recipe") from error


def _table(path: Path, data: dict[str, Any]) -> MachineTable:
    kinds = " or ".join(f'"{k}"' for k in MACHINES)
    if "machine" not in data:
        raise RecipeError(f"{path}: machine: missing; give {kinds}")
    kind = data["machine"]
    if not isinstance(kind, str) or kind not in MACHINES:
        raise RecipeError(f"{path}: machine = {shown(kind)}: must be {kinds}{nearest(str(kind), list(MACHINES))}")
    model = MACHINES[kind]
    try:
        return model.model_validate(data)
    except ValidationError as error:
        found = sentences(model, error)
        head = f"{path}: 1 mistake" if len(found) == 1 else f"{path}: {len(found)} mistakes"
        raise RecipeError("\n  ".join([head, *found])) from error
