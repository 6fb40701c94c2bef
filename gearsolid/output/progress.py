"""What a long command says while it works: a bar on a terminal, plain lines elsewhere."""

import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager

# Called with the number of steps done, the number of all steps, and what is being done now.
Tell = Callable[[int, int, str], None]


@contextmanager
def progress() -> Iterator[Tell]:
    """A teller that writes to stderr and cleans up after itself."""
    if not sys.stderr.isatty():
        yield _plain
        return
    from rich.console import Console
    from rich.progress import BarColumn, Progress, TextColumn

    columns = (
        BarColumn(bar_width=28),
        TextColumn("{task.completed:.0f} of {task.total:.0f}"),
        TextColumn("{task.description}"),
    )
    with Progress(*columns, console=Console(stderr=True), transient=True) as bar:
        task = bar.add_task("", total=1)
        yield lambda done, total, what: bar.update(task, completed=done, total=total, description=what)


def _plain(done: int, total: int, what: str) -> None:
    if done < total:
        print(f"{done + 1} of {total}: {what}" if total > 1 else what, file=sys.stderr, flush=True)
