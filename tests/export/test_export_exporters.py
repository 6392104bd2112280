"""Jupyter finds the exporters and runs them."""

from __future__ import annotations

import warnings

import nbformat
import pytest
import samples

from calcpack.export import sheet_content, sheet_html, sheet_pdf
from calcpack.job.errors import CalcpackError

with warnings.catch_warnings():
    warnings.simplefilter("ignore")  # what other exporters' libraries say on being loaded
    from nbconvert.exporters import get_exporter


@pytest.mark.parametrize(("name", "ending"), [("calcpack_html", ".html"), ("calcpack_pdf", ".pdf")])
def test_found_by_name_and_equal_to_the_sheet(tmp_path, name, ending):
    node = samples.ordinary()
    nbformat.write(node, tmp_path / "B5.ipynb")
    exporter = get_exporter(name)()
    output, resources = exporter.from_filename(str(tmp_path / "B5.ipynb"))
    content = sheet_content(node)
    assert output == (sheet_html(content) if ending == ".html" else sheet_pdf(content))
    assert resources["output_extension"] == exporter.file_extension == ending


def test_an_unexecuted_notebook_is_refused():
    node = samples.ordinary()
    node.cells[0].execution_count = None
    with pytest.raises(CalcpackError, match="cell 1 has not been executed"):
        get_exporter("calcpack_pdf")().from_notebook_node(node)
