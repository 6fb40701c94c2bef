"""A recipe as rows of text for the report: table, key, value with its unit."""

from gearsolid.recipe.table import Table, unit


def rows(table: Table) -> dict[str, dict[str, str]]:
    """All keys of a recipe, defaults filled in, those left empty left out.

    Args:
        table: the recipe's top level.

    Returns:
        Table name -> key -> value as text; keys of the top level stand under "machine".
    """
    return _gathered(table, "machine", "")


def _gathered(table: Table, name: str, prefix: str) -> dict[str, dict[str, str]]:
    """Rows of a table under its name, and of the tables in it, which `prefix` goes before."""
    found: dict[str, dict[str, str]] = {name: {}}
    for key, field in type(table).model_fields.items():
        value = getattr(table, key)
        if isinstance(value, Table):
            found |= _gathered(value, f"{prefix}{key}", f"{prefix}{key}.")
        elif value is not None:
            found[name][key] = _text(value, unit(field))
    return found


def _text(value: object, measure: str) -> str:
    if isinstance(value, bool):
        return "yes" if value else "no"
    text = f"{value:g}" if isinstance(value, float) else str(value)
    return {"mm": f"{text} mm", "deg": f"{text}°"}.get(measure, text)
