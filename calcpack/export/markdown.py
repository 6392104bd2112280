"""Markdown cells as blocks: the same road to paper and screen as everything else on a sheet.

Raw HTML stands there as its letters; pictures are named, not fetched; links show where they lead.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import lru_cache
from typing import Any

import mistune

from calcpack.export.blocks import Block, Run, read_blocks
from calcpack.export.text import clean

Node = Mapping[str, Any]


@lru_cache(maxsize=1)
def _reader() -> mistune.Markdown:
    return mistune.create_markdown(renderer="ast", plugins=["table", "math"])


def markdown_blocks(source: str) -> tuple[Block, ...]:
    """Blocks of a Markdown text.

    Examples
    --------
    >>> [block.type for block in markdown_blocks("# Loads\\n\\nFrom *panel* P1, $q = 3$ kPa.")]
    ['heading', 'text']
    """
    nodes = _reader()(source)
    assert not isinstance(nodes, str)
    return read_blocks([block for node in nodes for block in _block(node)])


def _block(node: Node) -> list[dict[str, Any]]:
    children: Sequence[Node] = node.get("children", ())
    match node["type"]:
        case "heading":
            return [{"type": "heading", "level": min(node["attrs"]["level"], 2), "text": _runs(children)}]
        case "paragraph" | "block_text":
            return [{"type": "text", "runs": _runs(children)}]
        case "block_quote":
            parts = [block for child in children for block in _block(child)]
            return [part | ({"role": "note"} if part["type"] == "text" else {}) for part in parts]
        case "list":
            return [{"type": "list", "items": _items(node)}]
        case "table":
            return [_table(children)]
        case "block_math":
            return [{"type": "formula", "latex": node["raw"].strip()}]
        case "block_code" | "block_html":
            return [{"type": "plain", "text": node["raw"].rstrip("\n")}]
    return []


def _items(node: Node) -> list[list[Run]]:
    """Items of a list, those of lists inside it after their own, numbers and dashes written out."""
    ordered = bool(node["attrs"].get("ordered"))
    items: list[list[Run]] = []
    for number, item in enumerate(node["children"], start=int(node["attrs"].get("start", 1))):
        runs: list[Run] = [Run("text", f"{number}. ")] if ordered else []
        inside: list[list[Run]] = []
        for child in item["children"]:
            if child["type"] == "list":
                inside += [[Run("text", "– "), *part] for part in _items(child)]
            else:
                runs += ([Run("text", " ")] if runs and runs[-1].text[-1:] != " " else []) + _runs_of(child)
        items += [runs, *inside]
    return items


def _runs_of(node: Node) -> list[Run]:
    return _runs(node["children"]) if "children" in node else [Run("text", clean(node.get("raw", "")))]


def _table(parts: Sequence[Node]) -> dict[str, Any]:
    head, *body = parts
    columns = [
        {"head": _runs(cell["children"]), "align": cell["attrs"].get("align") or "left"}
        for cell in head["children"]
    ]
    lines = [row["children"] for part in body for row in part["children"]]
    rows = [[_runs(cell["children"]) for cell in line] for line in lines]
    return {"type": "table", "columns": columns, "rows": rows}


def _runs(nodes: Sequence[Node]) -> list[Run]:
    runs: list[Run] = []
    for node in nodes:
        kind, raw = node["type"], node.get("raw", "")
        children: Sequence[Node] = node.get("children", ())
        match kind:
            case "inline_math":
                runs.append(Run("math", raw))
            case "strong" | "emphasis":
                text = "".join(run.text for run in _runs(children))
                runs.append(Run("strong" if kind == "strong" else "em", text))
            case "codespan":
                runs.append(Run("code", clean(raw)))
            case "softbreak" | "linebreak":
                runs.append(Run("text", " "))
            case "link":
                inner = _runs(children)
                url = clean(node["attrs"]["url"])
                said = "".join(run.text for run in inner)
                runs += inner if said == url else [*inner, Run("text", f" ({url})")]
            case "image":
                runs.append(Run("text", f"[{''.join(run.text for run in _runs(children))}]"))
            case _:
                runs += _runs(children) if children else [Run("text", clean(raw))]
    return runs
