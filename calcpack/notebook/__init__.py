"""Template and parameters become a notebook; the notebook is executed; its sections write the sheet.

What a sheet is written with is loaded when it is asked for: an audit reads templates and draws nothing.
"""

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from calcpack.notebook.work import Source, Work, load_sheet


def __getattr__(name: str) -> Any:
    if name in __all__:
        from calcpack.notebook import work

        return getattr(work, name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")


__all__ = ["Source", "Work", "load_sheet"]
