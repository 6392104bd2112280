"""Blocks as HTML for a notebook on the screen: plain, complete, every text escaped.

JupyterLab sets the mathematics of an HTML output between dollar signs; everything else is shielded
from that, so that a dollar sign in a job's title stays one.
"""

from __future__ import annotations

import base64
import re
from collections.abc import Mapping, Sequence
from html import escape
from typing import Any

from calcpack.sheet.runs import Checked

_SHIELD = re.compile(r"[$\\]")


def text_html(text: str) -> str:
    r"""A text with nothing in it that a browser or its mathematics would act on.

    Examples
    --------
    >>> text_html("<b> $5 & up")
    '&lt;b&gt; <span>$</span>5 &amp; up'
    """
    return _SHIELD.sub(lambda found: f"<span>{found[0]}</span>", escape(text))


def math_html(latex: str, display: bool = False) -> str:
    """Mathematics for the browser to set."""
    mark = "$$" if display else "$"
    return f'<span class="mathjax_process">{mark}{escape(latex)}{mark}</span>'


def runs_html(runs: Checked) -> str:
    """Words with what is among them."""
    if isinstance(runs, str):
        return text_html(runs)
    texts = []
    for run in runs:
        if isinstance(run, str):
            texts.append(text_html(run))
            continue
        ((kind, value),) = run.items()
        if kind == "math":
            texts.append(math_html(value))
        elif kind == "line":
            texts.append(text_html(value))
        else:
            texts.append(f"<{kind}>{text_html(value)}</{kind}>")
    return "".join(texts)


def blocks_html(blocks: Sequence[Mapping[str, Any]]) -> str:
    """Blocks one under the other."""
    inside = "\n".join(_WRITERS[block["type"]](block) for block in blocks)
    return f'<div class="calcpack mathjax_ignore">\n{inside}\n</div>'


def _heading(block: Mapping[str, Any]) -> str:
    level = block["level"] + 1
    number = f"{text_html(block['number'])}&ensp;" if block["number"] else ""
    return f"<h{level}>{number}{runs_html(block['text'])}</h{level}>"


def _text(block: Mapping[str, Any]) -> str:
    inside = runs_html(block["runs"])
    if block["role"] in ("caution", "unsafe"):
        inside = f"<strong>{inside}</strong>"
    return f"<p>{inside}</p>"


def _list(block: Mapping[str, Any]) -> str:
    return "<ul>" + "".join(f"<li>{runs_html(item)}</li>" for item in block["items"]) + "</ul>"


def _line(block: Mapping[str, Any]) -> str:
    rows = [" ".join(row) for row in block["rows"]]
    sides = [block["symbol"], *rows] if block["symbol"] else rows
    between = " = " if block["symbol"] else r" \qquad "
    formula = math_html(between.join(sides))
    drawn = "from " + ", ".join(block["from"]) if block["from"] else ""
    like = f"worked out as {block['like']}" if block.get("like") else ""
    side = "; ".join(filter(None, (block["cite"], block["origin"], like, drawn)))
    verdict = {True: "satisfied", False: "not satisfied", None: ""}[block["passes"]]
    return (
        f"<p><small>{text_html(block['no'])}</small>&ensp;{runs_html(block['says'])}"
        + (f"&ensp;<small>{text_html(side)}</small>" if side else "")
        + ("&ensp;" if block["kind"] == "take" else "<br>&emsp;")
        + formula
        + (f"&ensp;<strong>{verdict}</strong>" if verdict else "")
        + "</p>"
    )


def _derivation(block: Mapping[str, Any]) -> str:
    return "".join(
        f"<p>{runs_html(step['says'])}<br>&emsp;{'&emsp;'.join(math_html(row) for row in step['rows'])}</p>"
        for step in block["steps"]
    )


def _table(block: Mapping[str, Any]) -> str:
    aligns = [column["align"] for column in block["columns"]]

    def row(cells: Sequence[Checked], tag: str, bold: bool = False) -> str:
        texts = [f"<strong>{runs_html(cell)}</strong>" if bold else runs_html(cell) for cell in cells]
        pairs = zip(texts, aligns, strict=True)
        return "<tr>" + "".join(f'<{tag} align="{side}">{text}</{tag}>' for text, side in pairs) + "</tr>"

    head = row([column["head"] for column in block["columns"]], "th")
    body = "".join(
        row(cells, "td", place in block["strong_rows"]) for place, cells in enumerate(block["rows"])
    )
    caption = f"<caption>{runs_html(block['caption'])}</caption>" if block["caption"] else ""
    return f"<table>{caption}<thead>{head}</thead><tbody>{body}</tbody></table>"


def _ratios(block: Mapping[str, Any]) -> str:
    rows = "".join(
        f"<tr><td align='left'>{runs_html(row['says'])}</td><td>{text_html(row['demand'])}</td>"
        f"<td>{text_html(row['resistance'])}</td><td>{row['ratio']:.2f}</td>"
        f"<td>{'satisfied' if row['passes'] else '<strong>not satisfied</strong>'}</td></tr>"
        for row in block["rows"]
    )
    head = "".join(f"<th>{name}</th>" for name in ("what is shown", "demand", "resistance", "ratio", ""))
    return f"<table><thead><tr>{head}</tr></thead><tbody>{rows}</tbody></table>"


def _figure(block: Mapping[str, Any]) -> str:
    caption = f"<figcaption>{runs_html(block['caption'])}</figcaption>" if block["caption"] else ""
    # Jupyter takes drawings out of the page of a notebook it does not trust yet, pictures it leaves
    source = "data:image/svg+xml;base64," + base64.b64encode(block["svg"].encode()).decode()
    return f'<figure><img alt="{escape(block["alt"])}" src="{source}">{caption}</figure>'


def _columns(block: Mapping[str, Any]) -> str:
    cells = "".join(
        f'<td valign="top" align="left">{blocks_html(column)}</td>' for column in block["columns"]
    )
    return f"<table><tr>{cells}</tr></table>"


def _signoff(block: Mapping[str, Any]) -> str:
    keys = ("role", "name", "licence", "date")
    rows = "".join(
        "<tr>" + "".join(f'<td align="left">{text_html(row[key])}</td>' for key in keys) + "</tr>"
        for row in block["rows"]
    )
    return f"<table>{rows}</table>"


def _facts(block: Mapping[str, Any]) -> str:
    rows = "".join(
        f'<tr><th align="left">{runs_html(label)}</th><td align="left">{runs_html(value)}</td></tr>'
        for label, value in block["rows"]
    )
    return f"<table>{rows}</table>"


def _notation(block: Mapping[str, Any]) -> str:
    rows = "".join(
        f'<tr><td align="left">{math_html(latex)}</td><td align="left">{runs_html(meaning)}</td>'
        f'<td align="left">{text_html(unit)}</td></tr>'
        for latex, meaning, unit in block["rows"]
    )
    return f"<table>{rows}</table>"


_WRITERS = {
    "heading": _heading, "text": _text, "list": _list, "line": _line, "derivation": _derivation,
    "table": _table, "ratios": _ratios, "figure": _figure, "columns": _columns, "signoff": _signoff,
    "facts": _facts, "notation": _notation,
}  # fmt: skip
