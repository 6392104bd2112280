"""Comments that a reviewer put into a signed pack: told from other changes, and said in words."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import Any

from pyhanko.pdf_utils import generic
from pyhanko.pdf_utils.reader import HistoricalResolver
from pyhanko.sign.diff_analysis import DEFAULT_DIFF_POLICY, ModificationLevel, StandardDiffPolicy
from pyhanko.sign.diff_analysis.commons import compare_dicts
from pyhanko.sign.diff_analysis.rules_api import QualifiedWhitelistRule, ReferenceUpdate

# Markup annotations and their pop-ups (ISO 32000-1, table 170); nothing that acts or carries files.
MARKUP = frozenset(
    {
        *("/Text", "/FreeText", "/Line", "/Square", "/Circle", "/Polygon", "/PolyLine", "/Highlight"),
        *("/Underline", "/Squiggly", "/StrikeOut", "/Stamp", "/Caret", "/Ink", "/Popup"),
    }
)
_ACTS = ("/A", "/AA", "/FS", "/JS", "/Movie", "/Sound")
_BACK = ("/P", "/Parent", "/IRT", "/Popup")  # lead back to the page or to another comment
MOST_PARTS = 20_000
_LONGEST = 60


def _pages(resolver: HistoricalResolver) -> list[generic.IndirectObject]:
    """References of the pages, in order."""
    found: list[generic.IndirectObject] = []

    def gather(node: Any, depth: int) -> None:
        kids = node.get_object()["/Kids"]
        for number in range(len(kids)):
            kid = kids.raw_get(number)
            if not isinstance(kid, generic.IndirectObject) or depth > 50 or len(found) > MOST_PARTS:
                raise ValueError("the tree of pages is not one")
            if "/Kids" in kid.get_object():
                gather(kid, depth + 1)
            else:
                found.append(kid)

    gather(resolver.root["/Pages"], 0)
    return found


def _annotations(page: Any) -> list[Any]:
    """A page's annotations as they stand in its list, references where they are such."""
    held = page.get("/Annots", ())
    return [held.raw_get(number) for number in range(len(held))]


def _same_reference(one: Any, other: Any) -> bool:
    return (
        isinstance(one, generic.IndirectObject)
        and isinstance(other, generic.IndirectObject)
        and one.reference == other.reference
    )


def _added(old: HistoricalResolver, new: HistoricalResolver) -> Iterator[tuple[int, Any, list[Any]]]:
    """Page number from 1, page reference, comments put onto it; pages changed otherwise are left out."""
    before, after = _pages(old), _pages(new)
    if len(before) != len(after) or not all(map(_same_reference, before, after)):
        return
    for number, reference in enumerate(after, start=1):
        page, was = new(reference.reference), old(reference.reference)
        if not compare_dicts(was, page, frozenset({"/Annots"}), raise_exc=False):
            continue
        own, earlier = _annotations(page), _annotations(was)
        kept, added = own[: len(earlier)], own[len(earlier) :]
        if added and len(kept) == len(earlier) and all(map(_same_reference, kept, earlier)):
            yield number, page, added


def _is_markup(annotation: Any) -> bool:
    data = annotation.get_object()
    return (
        isinstance(annotation, generic.IndirectObject)
        and isinstance(data, generic.DictionaryObject)
        and data.get("/Subtype") in MARKUP
        and not any(key in data for key in _ACTS)
    )


class MarkupRule(QualifiedWhitelistRule):  # type: ignore[misc, unused-ignore]
    """New markup annotations at the end of a page's list, made of nothing but new objects."""

    def apply_qualified(
        self, old: HistoricalResolver, new: HistoricalResolver
    ) -> Iterable[tuple[ModificationLevel, ReferenceUpdate]]:
        """The objects that such comments explain."""
        known = _known(old)
        for _, page, added in _added(old, new):
            if not all(map(_is_markup, added)):
                continue
            explained = {page.container_ref}
            held = page.raw_get("/Annots")
            if isinstance(held, generic.IndirectObject):
                explained.add(held.reference)
            for each in added:
                explained |= set(_own_parts(each, known))
            for reference in explained:
                yield ModificationLevel.ANNOTATIONS, ReferenceUpdate(reference)


def _known(state: HistoricalResolver) -> set[generic.Reference]:
    """All objects that a state of the file and those before it define."""
    table = state.reader.xrefs
    return {
        each for revision in range(state.revision + 1) for each in table.explicit_refs_in_revision(revision)
    }


def _own_parts(
    annotation: generic.IndirectObject, known: set[generic.Reference]
) -> Iterator[generic.Reference]:
    """The objects a comment is made of, those that were not there before."""
    waiting: list[Any] = [annotation]
    seen: set[generic.Reference] = set()
    while waiting and len(seen) < MOST_PARTS:
        each = waiting.pop()
        if isinstance(each, generic.IndirectObject):
            reference = each.reference
            if reference in seen or reference in known:
                continue
            seen.add(reference)
            yield reference
            each = each.get_object()
        if isinstance(each, generic.DictionaryObject):
            waiting += [each.raw_get(key) for key in each if key not in _BACK]
        elif isinstance(each, generic.ArrayObject):
            waiting += [each.raw_get(number) for number in range(len(each))]


POLICY = StandardDiffPolicy(
    global_rules=[*DEFAULT_DIFF_POLICY.global_rules, MarkupRule()], form_rule=DEFAULT_DIFF_POLICY.form_rule
)
"""What pyhanko lets be appended to a signed file, and comments."""


def comments_since(old: HistoricalResolver, new: HistoricalResolver) -> tuple[str, ...]:
    """Each comment put onto a page between two states of a file: "page 3: 'Please show this'"."""
    return tuple(
        f"page {number}: {_said(each.get_object())}"
        for number, _, added in _added(old, new)
        for each in added
        if _is_markup(each) and each.get_object()["/Subtype"] != "/Popup"
    )


def _said(annotation: Any) -> str:
    text = " ".join(str(annotation.get("/Contents", "")).split())
    if len(text) > _LONGEST:
        text = f"{text[:_LONGEST]}…"
    return f"'{text}'" if text else f"a mark without words ({str(annotation['/Subtype'])[1:].lower()})"
