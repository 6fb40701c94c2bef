"""A file that appears whole or not at all."""

import os
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from gearsolid.errors import ExportError


@contextmanager
def whole_file(target: Path) -> Iterator[Path]:
    """A path beside `target` that takes its place when the block ends well, and vanishes when it does not.

    Args:
        target: file to make or to replace.

    Raises:
        ExportError: the file system refuses.
    """
    fresh = target.with_name(f".{target.stem}.new-{os.getpid()}{target.suffix}")
    try:
        yield fresh
        fresh.replace(target)
    except OSError as error:
        if isinstance(error, ExportError):
            raise
        raise ExportError(f"cannot write {target}: {error}; choose another place") from error
    finally:
        fresh.unlink(missing_ok=True)
