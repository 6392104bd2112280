"""Where the files every job shares stand: data tables and sheet templates."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path
from typing import Literal

HOUSE = ("shared", "report_templates")


@lru_cache(maxsize=4)
def house_folder(name: Literal["shared", "report_templates"]) -> Path:
    """The folder of that name: inside an installed package, or at the root of a checkout.

    Parameters
    ----------
    name : str
        "shared" (materials, sections, combinations, live loads) or "report_templates".

    Raises
    ------
    ValueError
        There is no folder of that name by design.
    FileNotFoundError
        The installation is incomplete.

    Examples
    --------
    >>> house_folder("shared").joinpath("materials").is_dir()
    True
    """
    if name not in HOUSE:
        raise ValueError(f"the house folders are {HOUSE}, not {name!r}")
    package = Path(__file__).resolve().parent.parent
    for folder in (package / "_house" / name, package.parent / name):
        if folder.is_dir():
            return folder
    raise FileNotFoundError(f"the folder '{name}' is missing from this installation of calcpack")
