"""What drawing each kind of figure and deriving each equivalent costs, as multiples of the cheapest figure.

    python tests/benchmarks/figures_and_derivations.py

Everything is measured in one run, the least of five; ratios hold on any machine, seconds on this one.
"""

from __future__ import annotations

import sys
import time
from collections.abc import Callable
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parent.parent / "figures"))

from figure_cases import CASES  # type: ignore[import-not-found]

from calcpack.equivalent import KINDS
from calcpack.equivalent.derive import derivation

SHAPES = ("uniform", "triangle", "trapezoid", "general")


def least(work: Callable[[], object], times: int = 5) -> float:
    """Processor seconds of the quickest of some runs."""
    found = []
    for _ in range(times):
        begun = time.process_time()
        work()
        found.append(time.process_time() - begun)
    return min(found)


def main() -> None:
    """Measure and print, the dearest first."""
    seconds = {f"figure: {name}": least(draw) for name, draw in CASES.items()}
    unit = min(seconds.values())
    for shape in SHAPES:
        for kind in KINDS:
            # Derived once in a process and kept: only the first run counts.
            seconds[f"derivation: {shape}, {kind}"] = least(lambda s=shape, k=kind: derivation(s, k), 1)
    for name, spent in sorted(seconds.items(), key=lambda item: -item[1]):
        print(f"{spent / unit:8.1f}  {1000 * spent:8.1f} ms  {name}")


if __name__ == "__main__":
    main()
