"""A recipe as rows of text for the report: table, key, value with its unit."""

from gearsolid.recipe.table import Table, unit


def rows(table: Table) -> dict[str, dict[str, str]]:
    """All keys of a recipe, defaults filled in, those left empty left out.

    Args:
        table: the recipe's top level.

    Returns:
        Table name -> key -> value as text; keys of the top level stand under "machine".
    """
    found: dict[str, dict[str, str]] = {"machine": {}}
    for key, field in type(table).model_fields.items():
        value = getattr(table, key)
        if isinstance(value, Table):
            found[key] = {
                k: _text(getattr(value, k), unit(f))
                for k, f in type(value).model_fields.items()
                if getattr(value, k) is not None
            }
        elif value is not None:
            found["machine"][key] = _text(value, unit(field))
    return found


def _text(value: object, measure: str) -> str:
    if isinstance(value, bool):
        return "yes" if value else "no"
    text = f"{value:g}" if isinstance(value, float) else str(value)
    return {"mm": f"{text} mm", "deg": f"{text}°"}.get(measure, text)
