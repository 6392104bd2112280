"""From an executed notebook to paper and screen: sheets in PDF and HTML, the pack that binds them.

A notebook becomes a :class:`SheetContent`; that becomes ``sheet_pdf`` and ``sheet_html``; several
become a :class:`Pack`. Jupyter finds ``SheetHTMLExporter`` and ``SheetPDFExporter`` as plug-ins; only
they need nbconvert, which is loaded when one of them is asked for.
"""

from typing import TYPE_CHECKING, Any

from calcpack.export.content import (
    SheetContent,
    SheetNumbers,
    notebook_bytes,
    record_bytes,
    sheet_content,
)
from calcpack.export.mathematics import Mathematics
from calcpack.export.pack import Pack, PackedFile, Section
from calcpack.export.pack_html import index_html
from calcpack.export.pack_pdf import BuiltPack, SigningPlace, build_pack, paginate, set_sheets
from calcpack.export.page_html import sheet_html
from calcpack.export.pdf import sheet_pdf
from calcpack.export.press import Press
from calcpack.export.tables import schedule_csv
from calcpack.export.typesetting import Attached

if TYPE_CHECKING:
    from calcpack.export.exporters import SheetHTMLExporter, SheetPDFExporter


def __getattr__(name: str) -> Any:
    if name in ("SheetHTMLExporter", "SheetPDFExporter"):
        from calcpack.export import exporters

        return getattr(exporters, name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")


__all__ = [
    "Attached",
    "BuiltPack",
    "Mathematics",
    "Pack",
    "PackedFile",
    "Press",
    "Section",
    "SheetContent",
    "SheetHTMLExporter",
    "SheetNumbers",
    "SheetPDFExporter",
    "SigningPlace",
    "build_pack",
    "index_html",
    "notebook_bytes",
    "paginate",
    "record_bytes",
    "schedule_csv",
    "set_sheets",
    "sheet_content",
    "sheet_html",
    "sheet_pdf",
]
