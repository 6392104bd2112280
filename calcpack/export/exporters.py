"""The exporters as Jupyter finds them: ``jupyter nbconvert --to calcpack_html`` or ``calcpack_pdf``."""

from __future__ import annotations

from typing import Any

import nbformat
from nbconvert.exporters import Exporter

from calcpack.export.content import sheet_content
from calcpack.export.page_html import sheet_html
from calcpack.export.pdf import sheet_pdf


def _known(exporter: Exporter, resources: dict[str, Any] | None) -> dict[str, Any]:
    """What nbconvert's writers look up, the ending of the file's name for one."""
    known: dict[str, Any] = exporter._init_resources(resources)  # type: ignore[no-untyped-call]
    return known


class SheetHTMLExporter(Exporter):
    """An executed sheet notebook as one HTML file.

    A notebook that was not executed to its end is refused with a
    :class:`~calcpack.job.errors.CalcpackError`.
    """

    export_from_notebook = "Calculation sheet (HTML)"
    output_mimetype = "text/html"

    def _file_extension_default(self) -> str:
        return ".html"

    def from_notebook_node(  # type: ignore[override]  # as its other exporters to text and PDF
        self, nb: nbformat.NotebookNode, resources: dict[str, Any] | None = None, **kw: Any
    ) -> tuple[str, dict[str, Any]]:
        """The page, and what nbconvert wants to know of it."""
        content = sheet_content(nb)
        return sheet_html(content), _known(self, resources)


class SheetPDFExporter(Exporter):
    """An executed sheet notebook as a PDF, set by Typst.

    A notebook that was not executed to its end is refused with a
    :class:`~calcpack.job.errors.CalcpackError`.
    """

    export_from_notebook = "Calculation sheet (PDF)"
    output_mimetype = "application/pdf"

    def _file_extension_default(self) -> str:
        return ".pdf"

    def from_notebook_node(  # type: ignore[override]  # as its other exporters to text and PDF
        self, nb: nbformat.NotebookNode, resources: dict[str, Any] | None = None, **kw: Any
    ) -> tuple[bytes, dict[str, Any]]:
        """The file, and what nbconvert wants to know of it."""
        content = sheet_content(nb)
        return sheet_pdf(content), _known(self, resources)
