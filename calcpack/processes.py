"""Processes that work for another one: how many, how they are started, what each does first."""

from __future__ import annotations

import multiprocessing
import os
import signal
import threading
from collections.abc import Callable
from concurrent.futures import ProcessPoolExecutor
from multiprocessing.connection import wait


def processors(most: int) -> int:
    """How many processors this process may use, up to a number."""
    ours = len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1
    return min(most, ours)


def process_pool(workers: int, begin: Callable[[], None]) -> ProcessPoolExecutor:
    """Processes started afresh, not forked: whoever starts them may have threads running.

    Parameters
    ----------
    workers : int
    begin : callable
        What each does first; :func:`work_for_another`, or something that does it.
    """
    return ProcessPoolExecutor(workers, mp_context=multiprocessing.get_context("spawn"), initializer=begin)


def work_for_another() -> None:
    """Leave an interrupt to the process this one works for, and end when that one ends, however it does."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    parent = multiprocessing.parent_process()
    if parent is not None:
        threading.Thread(target=_end_with, args=(parent.sentinel,), daemon=True).start()


def _end_with(sentinel: int) -> None:
    wait([sentinel])
    os._exit(1)
