"""What every table of a recipe is made of: keys with a meaning, a unit and a range, and nothing besides."""

from collections.abc import Iterator
from contextlib import contextmanager
from typing import Any

from pydantic import BaseModel, ConfigDict, Field
from pydantic.fields import FieldInfo

from gearsolid.errors import DesignError


class Table(BaseModel):
    """A recipe table; unknown keys, numbers given as text and nan are refused."""

    model_config = ConfigDict(extra="forbid", strict=True, frozen=True, allow_inf_nan=False)


def entry(meaning: str, unit: str = "", default: Any = ..., **limits: Any) -> Any:
    """A key of a table.

    Args:
        meaning: what it says, without a full stop.
        unit: mm, deg, or empty for numbers without a unit and for words.
        default: value when left out; required without one.
        **limits: gt, ge, lt, le, pattern and lengths as in `pydantic.Field`.
    """
    return Field(default, description=meaning, json_schema_extra={"unit": unit}, **limits)


def unit(field: FieldInfo) -> str:
    """The unit of a key, empty without one."""
    extra = field.json_schema_extra
    return str(extra.get("unit", "")) if isinstance(extra, dict) else ""


@contextmanager
def of_table(name: str) -> Iterator[None]:
    """Put the table's name before what a constructor refuses inside the block."""
    try:
        yield
    except DesignError as error:
        raise DesignError(f"{name}: {error}") from error
