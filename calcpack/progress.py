"""How far long work has come: who is told, and what a terminal shows of it."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from contextlib import contextmanager
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from rich.console import Console
    from rich.progress import TaskID

Follow = Callable[[str, int, int], None]
"""Told of a stage, the steps done and the steps in all."""
_MANY = 50  # steps of which a stage is worth lines where there is no terminal
_LINES = 4  # of a stage, after the first


@contextmanager
def progress(console: Console, *, plain: bool = False) -> Iterator[Follow]:
    """A bar a stage on a terminal; elsewhere nothing, or a ``plain`` line now and then of a long stage."""
    if plain and not console.is_terminal:
        yield _plain_lines(console)
        return
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn, TimeElapsedColumn

    bar = Progress(
        TextColumn("{task.description}"),
        BarColumn(),
        MofNCompleteColumn(),
        TimeElapsedColumn(),
        console=console,
        transient=True,
        disable=not console.is_terminal,
    )
    tasks: dict[str, TaskID] = {}
    try:

        def follow(stage: str, done: int, of: int) -> None:
            if not tasks:
                bar.start()
            if stage not in tasks:
                tasks[stage] = bar.add_task(stage, total=of)
            bar.update(tasks[stage], completed=done, total=of)

        yield follow
    finally:
        if tasks:
            bar.stop()


def _plain_lines(console: Console) -> Follow:
    said: dict[str, int] = {}

    def follow(stage: str, done: int, of: int) -> None:
        if of > _MANY and said.get(stage, -1) < (reached := done * _LINES // of):
            said[stage] = reached
            console.print(f"{stage}: {done} of {of}", markup=False, highlight=False)

    return follow
