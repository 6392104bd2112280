"""Template and parameters make a notebook."""

from __future__ import annotations

import ast
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

import nbformat

from calcpack.job.errors import CalcpackError
from calcpack.job.model import Job
from calcpack.notebook.templates import Template

PARAMETERS_TAG = "parameters"
KERNEL = {"display_name": "Python 3 (ipykernel)", "language": "python", "name": "python3"}


@dataclass(frozen=True)
class FilledNotebook:
    """A notebook with its parameters in, not yet executed."""

    mark: str
    node: Any  # nbformat.NotebookNode


def parameters_cell(text: str) -> str:
    """Source of the cell that holds the parameters: one string literal, nothing else.

    The JSON text is put into a raw triple-quoted literal; an apostrophe, the one character that
    could end it, is written as its JSON escape.

    Examples
    --------
    >>> cell = parameters_cell('{"title": "O\\'Hara\\'s loft"}')
    >>> "O'Hara" in cell
    False
    """
    literal = "r'''" + text.replace("'", "\\u0027") + "'''"
    if ast.literal_eval(literal) != text.replace("'", "\\u0027"):
        raise CalcpackError("the parameters cannot be written into the notebook")
    return f"PARAMETERS = {literal}"


def fill(template: Template, mark: str, parameters: str, metadata: Mapping[str, Any]) -> FilledNotebook:
    """Put parameters into a template's notebook.

    Parameters
    ----------
    template : Template
    mark : str
    parameters : str
        JSON text.
    metadata : mapping
        What an exporter needs beside the cells, from :func:`sheet_metadata`.

    Returns
    -------
    FilledNotebook

    Raises
    ------
    CalcpackError
        The template has no cell tagged ``parameters``.
    """
    node = nbformat.reads(template.notebook, as_version=4)  # type: ignore[no-untyped-call]
    for number, cell in enumerate(node.cells):
        cell["id"] = f"cell-{number:02d}"
        if cell.cell_type == "code":
            cell.outputs, cell.execution_count = [], None
    tagged = [cell for cell in node.cells if PARAMETERS_TAG in cell.metadata.get("tags", ())]
    if len(tagged) != 1 or tagged[0].cell_type != "code":
        raise CalcpackError(
            f"the template '{template.settings.name}' has no code cell tagged '{PARAMETERS_TAG}'",
            remedy="tag the one cell that the parameters are to replace",
        )
    tagged[0].source = parameters_cell(parameters)
    node.metadata = nbformat.from_dict(  # type: ignore[no-untyped-call]
        {"kernelspec": KERNEL, "language_info": {"name": "python"}, "calcpack": dict(metadata)}
    )
    node.nbformat, node.nbformat_minor = 4, 5
    return FilledNotebook(mark, node)


def sheet_metadata(job: Job, mark: str, template: Template, program: str) -> dict[str, Any]:
    """What an exporter needs to know beside the cells: the title block and the provenance."""
    return {
        "mark": mark,
        "title": template.settings.title,
        "header": job.job.model_dump(mode="json"),
        "submission": job.submission.model_dump(mode="json"),
        "template": template.stamp.model_dump(mode="json", include={"name", "version", "sha256"}),
        "input": job.digest,
        "program": program,
        "sheets": {"first": 1, "of": 1},
    }
