"""What a key allows, in words: for messages and for the table of keys."""

from types import NoneType, UnionType
from typing import Any, Literal, Union, get_args, get_origin

import annotated_types as at
from pydantic.fields import FieldInfo

from gearsolid.recipe.table import Table, unit

_KINDS = {int: "a whole number", float: "a number", bool: "true or false", str: "a text in quotes"}


def members(annotation: Any) -> tuple[Any, ...]:
    """The alternatives of an annotation, None left out."""
    if get_origin(annotation) in (Union, UnionType):
        return tuple(a for a in get_args(annotation) if a is not NoneType)
    return (annotation,)


def sub_table(field: FieldInfo) -> type[Table] | None:
    """The table a key opens, or None for a plain value."""
    for kind in members(field.annotation):
        if isinstance(kind, type) and issubclass(kind, Table):
            return kind
    return None


def words(field: FieldInfo) -> tuple[str, ...]:
    """The words a key chooses from, empty for other keys."""
    return tuple(w for kind in members(field.annotation) if get_origin(kind) is Literal for w in get_args(kind))


def allowed(field: FieldInfo) -> str:
    """Kind, range and unit of a key's value, as in "a number above 0, in mm"."""
    choice = words(field)
    if choice:
        return " or ".join(f'"{w}"' for w in choice)
    if sub_table(field):
        return "a table"
    kind = _KINDS.get(members(field.annotation)[0], "a value")
    ranges = " and ".join(filter(None, (_limit(m) for m in field.metadata)))
    measure = f", in {unit(field)}" if unit(field) else ""
    return f"{kind} {ranges}".strip() + measure


def _limit(limit: Any) -> str:
    match limit:
        case at.Gt(gt):
            return f"above {gt:g}"
        case at.Ge(ge):
            return f"not below {ge:g}"
        case at.Lt(lt):
            return f"below {lt:g}"
        case at.Le(le):
            return f"not above {le:g}"
    return ""
