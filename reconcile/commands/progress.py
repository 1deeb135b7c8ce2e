"""Progress on stderr, on a terminal only."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from contextlib import contextmanager


@contextmanager
def steps(total: int) -> Iterator[Callable[[str], None]]:
    """A bar of ``total`` steps; call what is handed over with the name of each step as it begins."""
    from rich.console import Console
    from rich.progress import BarColumn, Progress, TextColumn, TimeElapsedColumn

    console = Console(stderr=True)
    bar = Progress(
        TextColumn("{task.description}"), BarColumn(bar_width=24), TimeElapsedColumn(),
        console=console, transient=True, disable=not console.is_terminal,
    )  # fmt: skip
    with bar:
        task = bar.add_task("", total=total)
        begun = False

        def begin(name: str) -> None:
            nonlocal begun
            bar.update(task, description=name, advance=1 if begun else 0)
            begun = True

        yield begin
