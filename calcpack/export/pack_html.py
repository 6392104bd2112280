"""The pack's page for the screen."""

from __future__ import annotations

import posixpath
from urllib.parse import quote

from markupsafe import Markup

from calcpack.export.mathematics import Mathematics
from calcpack.export.pack import Pack
from calcpack.export.page_html import Screen, header_fields, render
from calcpack.export.paper import foot
from calcpack.export.text import shown_date


def index_html(pack: Pack, mathematics: Mathematics | None = None) -> str:
    """The pack's page for the screen: leads to every sheet's page.

    Parameters
    ----------
    pack : Pack
        Its sheets numbered.
    mathematics : Mathematics
        Formulas known already.
    """
    sections = [*pack.sections, *pack.annex]
    blocks = [block for section in sections for block in section.blocks]
    addresses = {content.mark: sheet_address(content.mark, "html") for content in pack.bound}
    addresses |= {
        f"{content.mark} {line}": Markup("{}#line-{}").format(sheet_address(content.mark, "html"), line)
        for content in pack.bound
        for line in content.line_numbers
    }
    screen = Screen(mathematics or Mathematics(), blocks, frozenset(), addresses)
    sheets = [
        {
            "mark": content.mark,
            "title": content.title,
            "first": content.numbers.first if content.numbers.of > 1 else None,
            "html": sheet_address(content.mark, "html"),
            "pdf": sheet_address(content.mark, "pdf"),
        }
        for content in pack.bound
    ]
    return render(
        "index.html.j2",
        pack.submission.paper,
        head=pack.header,
        date=shown_date(pack.header.date),
        fields=[("site", pack.header.site), *header_fields(pack.header)],
        sheets=sheets,
        sections=sections,
        files=pack.files,
        foot=foot([pack.program], pack.input_digest),
        changed=frozenset(),
        below=2,
        **screen.names(),
    )


def sheet_address(mark: str, ending: str) -> Markup:
    """Where a sheet's file stands, seen from the pack's page.

    Examples
    --------
    >>> str(sheet_address("B 1", "html"))
    'sheets/B%201.html'
    """
    return Markup(posixpath.join("sheets", f"{quote(mark, safe='')}.{ending}"))
