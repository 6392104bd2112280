"""How long the audit of a pack of two hundred beams takes, against the time in which it is to be done.

    python tests/benchmarks/audit_of_a_large_pack.py FOLDER

builds two packs in FOLDER (once: what stands there is used again), one of load sheets and one of strength sheets,
audits folder and pack of each in a process of its own, and prints seconds and their share of what is allowed.
It is a measurement, not a test: it says nothing of a machine that does other things at the same time.
"""

from __future__ import annotations

import subprocess
import sys
import time
from pathlib import Path

ALLOWED = 20.0  # seconds on two cores
TEMPLATES = ("beam_loads", "concrete_beam_en1992")

HEAD = """\
format = 1
[job]
number = "9001"
title = "Sail lofts, one floor of two hundred beams"
date = 2026-12-01
prepared = {{ name = "A. Lind", licence = "11" }}
checked = {{ name = "B. Moe", licence = "12" }}
[basis]
actions = "EN 1990"
[grid]
x = {{ {x} }}
y = {{ {y} }}
[materials.c30]
grade = "C30/37"
bars = "B500B"
[sections.r]
shape = "rectangle"
width = "300 mm"
depth = "550 mm"
"""
PANEL = """\
[[panel]]
mark = "P{number}"
corners = ["{a}", "{b}"]
thickness = "170 mm"
dead = "1.4 kPa"
live = "{live} kPa"
"""
BEAM = """\
[[beam]]
mark = "B{number}"
line = ["{a}", "{b}"]
section = "r"
material = "c30"
template = "{template}"
"""
COLUMN = '[[column]]\nmark = "C{number}"\nat = "{at}"\n'


def large_job(template: str, wide: int = 10, deep: int = 9) -> str:
    """A floor of bays on columns, one beam to each side of a bay; 199 beams by default.

    Examples
    --------
    >>> [large_job("beam_loads", 2, 1).count(each) for each in ("[[beam]]", "[[column]]")]
    [7, 6]
    """
    names = [chr(ord("A") + number) for number in range(wide + 1)]
    places = [4.0 * number + 0.2 * (number % 3) for number in range(max(wide, deep) + 1)]
    parts = [
        HEAD.format(
            x=", ".join(f'{name} = "{at:.1f} m"' for name, at in zip(names, places, strict=False)),
            y=", ".join(f'{row + 1} = "{1.2 * places[row]:.2f} m"' for row in range(deep + 1)),
        )
    ]
    bays = [(i, j) for j in range(deep) for i in range(wide)]
    parts += [
        PANEL.format(
            number=number, a=f"{names[i]}{j + 1}", b=f"{names[i + 1]}{j + 2}", live=2 + (i + j) % 3 * 0.5
        )
        for number, (i, j) in enumerate(bays, start=1)
    ]
    along = [(f"{names[i]}{j + 1}", f"{names[i + 1]}{j + 1}") for j in range(deep + 1) for i in range(wide)]
    across = [(f"{names[i]}{j + 1}", f"{names[i]}{j + 2}") for j in range(deep) for i in range(wide + 1)]
    parts += [
        BEAM.format(number=number, a=a, b=b, template=template)
        for number, (a, b) in enumerate(along + across, start=1)
    ]
    points = [f"{name}{row + 1}" for row in range(deep + 1) for name in names]
    parts += [COLUMN.format(number=number, at=at) for number, at in enumerate(points, start=1)]
    return "".join(parts)


def timed(*words: object) -> float:
    """Seconds that a command takes."""
    begun = time.monotonic()
    code = "import sys; from calcpack import cli; cli.main()"
    subprocess.run([sys.executable, "-c", code, *map(str, words)], check=True, stdout=subprocess.DEVNULL)
    return time.monotonic() - begun


def main(folder: Path) -> None:
    """Build where nothing is built yet, audit, print."""
    folder.mkdir(parents=True, exist_ok=True)
    for template in TEMPLATES:
        job, out = folder / f"{template}.toml", folder / template
        if not (out / "manifest.sha256").is_file():
            job.write_text(large_job(template), encoding="utf-8")
            print(f"{template}: built in {timed('build', job, '--out', out):.0f} s", flush=True)
        for target in (out, out / "pack.pdf"):
            seconds = timed("audit", target)
            part = seconds / ALLOWED
            print(
                f"{template}: audit of {target.name} {seconds:.1f} s, {part:.2f} of the allowed", flush=True
            )


if __name__ == "__main__":
    main(Path(sys.argv[1]))
