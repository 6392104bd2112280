"""What every process that works for another one does first."""

from __future__ import annotations

import multiprocessing
import os
import signal
import threading
from multiprocessing.connection import wait


def work_for_another() -> None:
    """Leave an interrupt to the process this one works for, and end when that one ends, however it does."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    parent = multiprocessing.parent_process()
    if parent is not None:
        threading.Thread(target=_end_with, args=(parent.sentinel,), daemon=True).start()


def _end_with(sentinel: int) -> None:
    wait([sentinel])
    os._exit(1)
