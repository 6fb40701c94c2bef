"""Turns what pydantic finds wrong into sentences: key path, value given, what is allowed, the nearest known key."""

import json
from collections.abc import Sequence
from difflib import get_close_matches
from typing import Any

from pydantic import ValidationError
from pydantic.fields import FieldInfo
from pydantic_core import ErrorDetails

from gearsolid.recipe.allowed import allowed, sub_table, words
from gearsolid.recipe.table import Table

_Path = Sequence[int | str]


def sentences(model: type[Table], error: ValidationError) -> list[str]:
    """One sentence a mistake.

    Args:
        model: the table the recipe was read into.
        error: what its validation raised.
    """
    return [_sentence(model, e) for e in error.errors()]


def nearest(word: str, known: Sequence[str]) -> str:
    """A hint naming the known word closest to a mistyped one, or empty."""
    found = get_close_matches(word.lower(), known, n=1, cutoff=0.6)
    return f'; did you mean "{found[0]}"?' if found else ""


def shown(value: Any) -> str:
    """A value as a recipe writes it, cut short when long."""
    try:
        text = json.dumps(value, ensure_ascii=False)
    except TypeError:
        text = str(value)
    return text if len(text) <= 60 else f"{text[:57]}..."


def _sentence(model: type[Table], error: ErrorDetails) -> str:
    path = error["loc"]
    where = ".".join(str(p) for p in path)
    if error["type"] == "value_error":
        return f"{where}: {error['ctx']['error']}" if where else str(error["ctx"]["error"])
    if error["type"] == "extra_forbidden":
        known = list(_table_at(model, path[:-1]).model_fields)
        hint = nearest(str(path[-1]), known) or f"; known here: {', '.join(known)}"
        return f"{where} = {shown(error['input'])}: no such key{hint}"
    field = _field_at(model, path)
    if field is None:
        return f"{where} = {shown(error['input'])}: {error['msg']}"
    meaning = f" ({field.description})" if field.description else ""
    if error["type"] == "missing":
        return f"{where}: missing; give {allowed(field)}{meaning}"
    hint = nearest(str(error["input"]), words(field))
    return f"{where} = {shown(error['input'])}: must be {allowed(field)}{meaning}{hint}"


def _table_at(model: type[Table], path: _Path) -> type[Table]:
    for step in path:
        model = sub_table(model.model_fields[str(step)]) or model
    return model


def _field_at(model: type[Table], path: _Path) -> FieldInfo | None:
    return _table_at(model, path[:-1]).model_fields.get(str(path[-1])) if path else None
