"""A folder that appears whole or not at all.

Files are written into a sibling folder, which takes the target's place at the end. An earlier folder is replaced only
when everything in it was written by this program and is unchanged since, as its `report.json` tells: running a recipe
again just works, and nothing of anyone else's is ever deleted.
"""

import hashlib
import os
import shutil
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from pydantic import BaseModel, ValidationError

from gearsolid.errors import ExportError
from gearsolid.output.report import FileRecord

REPORT = "report.json"


class _Earlier(BaseModel):
    """The part of an earlier report that every version writes."""

    format: str
    files: tuple[FileRecord, ...]


@contextmanager
def swapped_in(target: Path) -> Iterator[Path]:
    """A new, empty folder that becomes `target` when the block ends well, and vanishes when it does not.

    Args:
        target: folder to make or to replace.

    Raises:
        ExportError: the target is not ours to replace, or the file system refuses.
    """
    check_replaceable(target)
    target = target.resolve()
    fresh, old = (target.with_name(f".{target.name}.{word}-{os.getpid()}") for word in ("new", "old"))
    try:
        fresh.mkdir(parents=True)
        yield fresh
        if target.exists():
            target.rename(old)
        fresh.rename(target)
    except OSError as error:
        if isinstance(error, ExportError):
            raise
        raise ExportError(f"cannot write folder {target}: {error}; choose another place with --out") from error
    finally:
        if old.exists() and not target.exists():
            old.rename(target)
        for left in (fresh, old):
            shutil.rmtree(left, ignore_errors=True)


def check_replaceable(target: Path) -> None:
    """Refuse a target that holds anything this program did not write.

    Raises:
        ExportError: it is a file, or holds files that are not listed, unchanged, in its `report.json`.
    """
    if not target.exists() and not target.is_symlink():
        return
    if not target.is_dir() or target.is_symlink():
        raise ExportError(f"{target} is not a folder; name another place with --out")
    known = _known(target / REPORT)
    strangers = sorted(p.name for p in target.iterdir() if not _is_ours(p, known))
    if strangers:
        names = ", ".join(strangers[:3]) + (f" and {len(strangers) - 3} more" if len(strangers) > 3 else "")
        raise ExportError(
            f"folder {target} holds files that were not written by gearsolid or were changed since: {names}; "
            "move them away or name another folder with --out"
        )


def fingerprint(path: Path) -> str:
    """SHA-256 of a file, hexadecimal."""
    return hashlib.sha256(path.read_bytes()).hexdigest()


def _known(report: Path) -> dict[str, str]:
    """File name -> fingerprint as the earlier report lists them; empty when it is not a report of ours."""
    try:
        earlier = _Earlier.model_validate_json(report.read_bytes())
    except (OSError, ValidationError):
        return {}
    if not earlier.format.startswith("gearsolid report"):
        return {}
    return {f.name: f.sha256 for f in earlier.files} | {REPORT: ""}


def _is_ours(path: Path, known: dict[str, str]) -> bool:
    if not path.is_file() or path.is_symlink() or path.name not in known:
        return False
    return path.name == REPORT or fingerprint(path) == known[path.name]
