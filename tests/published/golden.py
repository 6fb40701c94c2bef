"""Golden values kept as files: case, kind, inputs, expected as printed, source, origin.

`origin` is `published` (read in a public text), `from memory` (recalled from the publication named) or
`own computation` (no published number known: guards against regressions, not against a shared mistake). An expected
value is a string as printed; it is met when the computed one rounds to it. Whole numbers are exact. Where a source is
known not to agree with its own formula, `off` names the value and by how many units of its last digit, and `note` the
reason.
"""

import json
from collections.abc import Mapping
from math import isnan
from pathlib import Path
from types import MappingProxyType
from typing import NamedTuple

import pytest

ORIGINS = {"published", "from memory", "own computation"}
KEYS = {"case", "kind", "inputs", "expected", "source", "origin"}


def cases(name, kind=None):
    """Cases of one file as pytest parameters, all or those of one kind."""
    found = json.loads((Path(__file__).parent / "data" / f"{name}.json").read_text())
    for case in found:
        assert KEYS <= case.keys() <= KEYS | {"note", "off"}, case["case"]
        assert case["origin"] in ORIGINS, case["case"]
        assert "note" in case or "off" not in case, case["case"]
    picked = [c for c in found if kind in (None, c["kind"])]
    return [pytest.param(c["inputs"], Printed(c["expected"], c.get("off", {})), id=c["case"]) for c in picked]


def kinds(name):
    """The kinds of case in a file."""
    return {c["kind"] for c in json.loads((Path(__file__).parent / "data" / f"{name}.json").read_text())}


class Printed(NamedTuple):
    """Values as printed, and by how many units of the last digit some of them are known to be off."""

    values: dict[str, str]
    off: Mapping[str, int] = MappingProxyType({})


def misses(expected, computed):
    """Printed values that the computed ones do not round to, as sentences."""
    found = []
    for key, printed in expected.values.items():
        value = float(computed[key])
        places = len(printed.partition(".")[2])
        allowed = max(0.5, expected.off.get(key, 0)) * 10.0**-places + 1e-9 if places else 1e-9
        met = isnan(value) if printed == "nan" else abs(value - float(printed)) <= allowed
        if not met:
            found.append(f"{key}: printed {printed}, computed {value:.{places + 3}f}")
    return found
