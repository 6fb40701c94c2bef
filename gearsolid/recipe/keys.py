"""The keys a recipe may hold, written from the schema itself: for `recipes/keys.md` and for `gearsolid keys`."""

from collections.abc import Iterator
from dataclasses import dataclass

from pydantic_core import PydanticUndefined

from gearsolid.errors import RecipeError
from gearsolid.recipe.allowed import allowed, sub_table
from gearsolid.recipe.machines import MACHINES
from gearsolid.recipe.mistakes import nearest, shown
from gearsolid.recipe.table import Table


@dataclass(frozen=True)
class KeyRow:
    """A documented key.

    Args:
        path: key path, as in `sun.teeth`.
        meaning: what it says.
        allowed: kind, range and unit.
        default: value when left out, or "required".
    """

    path: str
    meaning: str
    allowed: str
    default: str


def key_rows(model: type[Table], prefix: str = "") -> Iterator[KeyRow]:
    """All keys of a table and of the tables in it, in the order of the schema."""
    for name, field in model.model_fields.items():
        path = prefix + name
        table = sub_table(field)
        if field.default is PydanticUndefined:
            default = "required"
        else:
            default = "left out" if field.default is None else shown(field.default)
        if table is None:
            yield KeyRow(path, field.description or "", allowed(field), default)
        else:
            if default != "required":
                yield KeyRow(path, field.description or "", "a table", "left out")
            yield from key_rows(table, f"{path}.")


def markdown(model: type[Table]) -> str:
    """The keys as a Markdown table."""
    lines = ["| key | meaning | value | default |", "|---|---|---|---|"]
    lines += [f"| `{r.path}` | {r.meaning} | {r.allowed} | {r.default} |" for r in key_rows(model)]
    return "\n".join(lines) + "\n"


def keys_text(machine: str | None) -> str:
    """The keys of one kind of machine, or of all, as lines for a terminal.

    Args:
        machine: kind of machine as recipes name it; None lists every kind.

    Raises:
        RecipeError: no such kind.
    """
    if machine is None:
        return "\n\n".join(keys_text(kind) for kind in MACHINES)
    if machine not in MACHINES:
        known = ", ".join(MACHINES)
        raise RecipeError(f"no machine is called {shown(machine)}; known: {known}{nearest(machine, list(MACHINES))}")
    model = MACHINES[machine]
    found = list(key_rows(model))
    width = max(len(r.path) for r in found)
    lines = [f"{r.path.ljust(width)}  {r.meaning}\n{'':{width}}  {r.allowed}; {r.default}" for r in found]
    return "\n".join([f'machine = "{machine}": {_summary(model)}', "", *lines])


def page() -> str:
    """The keys of every kind of machine as a Markdown page."""
    return "# Keys of a recipe\n\n" + "\n".join(
        f'## `machine = "{kind}"`\n\n{_summary(m)}\n\n{markdown(m)}' for kind, m in MACHINES.items()
    )


def _summary(model: type[Table]) -> str:
    return (model.__doc__ or "").strip().splitlines()[0]
