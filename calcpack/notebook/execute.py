"""Notebooks executed in a few kernels that are kept from beam to beam."""

from __future__ import annotations

import asyncio
import contextlib
import os
import re
import sys
import tempfile
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from calcpack.job.errors import CalcpackError, Problem
from calcpack.notebook.fill import FilledNotebook
from calcpack.processes import processors

CELL_SECONDS = 300
# Loaded while the kernel waits, forgotten by the reset between two notebooks but still in memory.
WARM_UP = "import calcpack.notebook.work, calcpack.equivalent, calcpack.figures"
_KEYED = re.compile(r"((?:design|basis)\.[a-zA-Z0-9_.]+): (.*)")
RESET = "get_ipython().reset(new_session=True, aggressive=False)"


@dataclass(frozen=True)
class ExecutedNotebook:
    """A notebook with its outputs; only such a one can be exported."""

    mark: str
    node: Any  # nbformat.NotebookNode


class _Kernel:
    """A kernel behind local sockets, with a place of its own for what Jupyter likes to keep."""

    def __init__(self, number: int, folder: Path) -> None:
        from jupyter_client.manager import AsyncKernelManager

        self.folder = folder / f"kernel{number}"
        self.folder.mkdir()
        self.manager = AsyncKernelManager(
            kernel_name="python3",
            transport="ipc",
            ip=str(self.folder / "socket"),
            connection_file=str(self.folder / "connection.json"),
        )
        self.client: Any = None

    async def start(self) -> None:
        environment = os.environ | {
            "IPYTHONDIR": str(self.folder),
            "PYTHONHASHSEED": "0",
            "PYDEVD_DISABLE_FILE_VALIDATION": "1",
            "JUPYTER_PLATFORM_DIRS": "1",
        }
        # what the checkout's own interpreter finds, the kernel must find too
        environment["PYTHONPATH"] = os.pathsep.join(path for path in sys.path if path)
        await self.manager.start_kernel(env=environment, cwd=str(self.folder))
        self.client = self.manager.client()
        self.client.start_channels()
        await self.client.wait_for_ready(timeout=120)
        self.client.execute(WARM_UP, silent=True, store_history=False)

    async def run(self, filled: FilledNotebook) -> ExecutedNotebook:
        from nbclient import NotebookClient
        from nbclient.exceptions import CellExecutionError, CellTimeoutError, DeadKernelError

        runner = NotebookClient(filled.node, km=self.manager, timeout=CELL_SECONDS, record_timing=False)
        runner.kc = self.client
        try:
            await runner.async_execute(reset_kc=False)
        except CellExecutionError as error:
            said = str(error.evalue).strip() or error.ename
            if error.ename == "CalcpackError":
                raise CalcpackError(*_problems(said, f"beam {filled.mark}")) from None
            raise CalcpackError(
                f"the notebook stops: {error.ename}: {said}", mark=f"beam {filled.mark}"
            ) from None
        except (CellTimeoutError, DeadKernelError):
            raise _Unfinished(
                f"the notebook did not finish (limit {CELL_SECONDS} s a cell)", mark=f"beam {filled.mark}"
            ) from None
        await self._execute_quietly(RESET)
        return ExecutedNotebook(filled.mark, _settled(filled.node))

    async def _execute_quietly(self, code: str) -> None:
        await self.client.execute_interactive(
            code, silent=True, store_history=False, output_hook=lambda _message: None
        )

    async def stop(self) -> None:
        with contextlib.suppress(Exception):
            if self.client is not None:
                self.client.stop_channels()
            await self.manager.shutdown_kernel(now=True)


class _Unfinished(CalcpackError):
    """A notebook without an end: of its own, or because another one stopped all."""


def _problems(said: str, mark: str) -> list[Problem]:
    """What a notebook found wrong, one a line; a design key at its beginning is its place.

    Examples
    --------
    >>> print(*_problems("design.cover: leaves no room for bars", "beam B1"))
    beam B1: design.cover: leaves no room for bars
    """
    found = []
    for line in said.splitlines():
        match = _KEYED.fullmatch(line.removeprefix(f"{mark}: "))
        key, message = match.groups() if match else (None, line.removeprefix(f"{mark}: "))
        found.append(Problem(message, mark=mark, key=key))
    return found


def _settled(node: Any) -> Any:
    """The notebook without what differs from run to run."""
    count = 0
    for cell in node.cells:
        cell.metadata.pop("execution", None)
        if cell.cell_type == "code":
            count += 1
            cell.execution_count = count
            for output in cell.outputs:
                if output.output_type == "execute_result":
                    output.execution_count = count
    node.metadata.pop("widgets", None)
    node.metadata["language_info"] = {"name": "python"}
    return node


async def _execute(
    notebooks: Sequence[FilledNotebook], kernels: int, done: Callable[[str], None]
) -> list[ExecutedNotebook]:
    results: dict[int, ExecutedNotebook] = {}
    waiting = list(enumerate(notebooks))[::-1]
    with tempfile.TemporaryDirectory(prefix="calcpack-", ignore_cleanup_errors=True) as name:
        crew = [_Kernel(number, Path(name)) for number in range(min(kernels, len(notebooks)))]

        async def work(kernel: _Kernel) -> None:
            await kernel.start()
            while waiting:
                number, filled = waiting.pop()
                results[number] = await kernel.run(filled)
                done(filled.mark)

        try:
            async with asyncio.TaskGroup() as tasks:
                for kernel in crew:
                    tasks.create_task(work(kernel))
        except BaseExceptionGroup as group:
            found = [error for error in group.exceptions if isinstance(error, CalcpackError)]
            # where one notebook has stopped the others, theirs is no fault of their own
            found = [error for error in found if not isinstance(error, _Unfinished)] or found
            if not found:
                raise
            problems = [problem for error in found for problem in error.problems]
            raise CalcpackError(*problems) from None
        finally:
            for kernel in crew:
                await kernel.stop()
    return [results[number] for number in range(len(notebooks))]


def execute(
    notebooks: Sequence[FilledNotebook],
    *,
    kernels: int | None = None,
    done: Callable[[str], None] = lambda _mark: None,
) -> list[ExecutedNotebook]:
    """Execute notebooks, a few at a time.

    Parameters
    ----------
    notebooks : sequence of FilledNotebook
    kernels : int, optional
        How many kernels; by default one a processor, four at most.
    done : callable
        Called with a beam's mark as each is finished.

    Returns
    -------
    list of ExecutedNotebook
        In the order given.

    Raises
    ------
    CalcpackError
        A notebook stops with an error; the beam is named.
    """
    if not notebooks:
        return []
    count = kernels or processors(4)
    return asyncio.run(_execute(notebooks, count, done))
