"""Template and parameters become a notebook; the notebook is executed; its sections write the sheet."""

from calcpack.notebook.work import Source, Work, load_sheet

__all__ = ["Source", "Work", "load_sheet"]
