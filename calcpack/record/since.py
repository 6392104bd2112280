"""A build after an earlier edition: changed lines marked, unchanged sheets left as they were issued."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Any

import nbformat

from calcpack.export.content import SheetContent, sheet_content
from calcpack.export.pack import Section
from calcpack.job.errors import CalcpackError
from calcpack.record.changes import changes_section
from calcpack.record.compare import compare
from calcpack.record.editions import Edition, SheetRecord, edition_says

Built = tuple[SheetContent, Any]  # a sheet and its notebook


@dataclass(frozen=True)
class Since:
    """What a build makes of an earlier edition.

    Parameters
    ----------
    contents : tuple of (SheetContent, notebook)
        With the changed lines marked.
    kept : mapping of mark to (SheetContent, notebook)
        As the earlier edition holds them: the same but for revision and date.
    section : Section
        "Changes since revision A".
    """

    contents: tuple[Built, ...]
    kept: Mapping[str, Built]
    section: Section


def mark_changes(old: Edition, contents: Sequence[Built]) -> Since:
    """Mark what changed since an earlier edition, and find what did not.

    Parameters
    ----------
    old : Edition
    contents : sequence of (SheetContent, notebook)
        As executed.
    """
    sheets = {
        content.mark: SheetRecord.model_validate(content.record)
        for content, _ in contents
        if content.record is not None
    }
    comparison = compare(old, Edition(edition_says(sheets), sheets))
    marked = []
    for content, node in contents:
        changed = comparison.marked(content.mark)
        if content.mark in comparison.added:
            changed = tuple(line.no for line in sheets[content.mark].lines)
        if changed:
            node.metadata["calcpack"]["changed"] = list(changed)
            content = replace(content, changed=frozenset(changed))
        marked.append((content, node))
    kept = {}
    for content, _ in marked:
        before = None if content.changed else _before(old.notebooks.get(content.mark))
        if before is not None and _same(before[0], content):
            kept[content.mark] = before
    return Since(tuple(marked), kept, changes_section(comparison))


def _before(notebook: bytes | None) -> Built | None:
    """A sheet of the earlier edition, None where its notebook is not there or not whole."""
    if notebook is None:
        return None
    try:
        node = nbformat.reads(notebook.decode("utf-8"), as_version=4)  # type: ignore[no-untyped-call]
        return sheet_content(node), node
    except (CalcpackError, ValueError, AttributeError, KeyError):
        return None


def _same(before: SheetContent, after: SheetContent) -> bool:
    """Whether two sheets differ in revision, date and the hash of the whole input only."""
    # A sheet names the start of that hash in its text, too.
    shown = repr(before.blocks).replace(before.input_digest[:16], after.input_digest[:16])
    header = before.header.model_copy(update={"revision": after.header.revision, "date": after.header.date})
    return (
        header == after.header
        and shown == repr(after.blocks)
        and (before.title, before.submission, before.template, before.program)
        == (after.title, after.submission, after.template, after.program)
    )
