"""STEP text made smaller and repeatable: equal points, directions and curves are written once."""

import re

# Geometry without a name of its own, each level referring to earlier ones only: equal text is the same thing.
_LEVELS = (
    {"CARTESIAN_POINT", "DIRECTION"},
    {"VECTOR", "AXIS1_PLACEMENT", "AXIS2_PLACEMENT_3D", "B_SPLINE_CURVE_WITH_KNOTS"},
    {"LINE", "CIRCLE"},
)
_ENTITY = re.compile(r"#(\d+) = (.*?);\n", re.DOTALL)
_REFERENCE = re.compile(r"#(\d+)")
_KIND = re.compile(r"\w*")
_WRAP = re.compile(r"\n *")
_OCCURRENCE = re.compile(r"(?<=NEXT_ASSEMBLY_USAGE_OCCURRENCE\()'\d+'")


def share_geometry(text: str) -> str:
    """The same STEP file with every distinct point, direction, placement and curve written once.

    ISO 10303-21 lets any number of entities refer to one instance. Entities are renumbered without gaps, and the
    running numbers of occurrences counted from 1, so that equal designs give equal files whatever was written before.

    Args:
        text: whole file, as the CAD kernel writes it.
    """
    start = text.index("DATA;\n") + len("DATA;\n")
    end = text.rindex("ENDSEC;")
    entities = dict(_ENTITY.findall(text[start:end]))
    kinds = {number: _KIND.match(body)[0] for number, body in entities.items()}  # type: ignore[index]
    stands_for: dict[str, str] = {}

    def resolve(body: str, names: dict[str, str]) -> str:
        return _REFERENCE.sub(lambda m: "#" + names.get(m[1], m[1]), body)

    for level in _LEVELS:
        first: dict[str, str] = {}
        for number, kind in kinds.items():
            if kind in level:
                body = resolve(_WRAP.sub("", entities[number]), stands_for)
                stands_for[number] = first.setdefault(body, number)
    kept = [n for n in entities if stands_for.get(n, n) == n]
    places = {n: str(k) for k, n in enumerate(kept, 1)}
    names = {n: places[stands_for.get(n, n)] for n in entities}
    occurrence = iter(range(1, len(kept)))
    data = "".join(f"#{places[n]}={resolve(entities[n], names)};\n" for n in kept)
    data = _OCCURRENCE.sub(lambda _: f"'{next(occurrence)}'", data)
    return text[:start] + data + text[end:]
