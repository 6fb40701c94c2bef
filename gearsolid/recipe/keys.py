"""The keys a recipe may hold, written from the schema itself: for the page of recipes and for `gearsolid keys`."""

from collections.abc import Iterator
from dataclasses import dataclass

from pydantic_core import PydanticUndefined

from gearsolid.recipe.allowed import allowed, sub_table
from gearsolid.recipe.mistakes import shown
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
