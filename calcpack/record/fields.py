"""The places of the cover's sign-off block as signature fields, empty and tagged."""

from __future__ import annotations

import itertools
from collections.abc import Iterator, Sequence
from typing import Any

from pyhanko.pdf_utils import generic
from pyhanko.sign.fields import SigFieldSpec, append_signature_field

from calcpack.export.pack_pdf import SigningPlace
from calcpack.record.pdf_update import Update, name
from calcpack.record.statement import Statement, put_statement


def ready_to_sign(pdf: bytes, places: Sequence[SigningPlace], statement: Statement) -> bytes:
    """A pack with an empty signature field at each place and the statement that signing needs.

    The fields are there before anybody signs, so that the first signature can certify the pack and still
    leave the others possible, and so that any other program can sign in them too. Each is tagged as a form
    element in its cell of the sign-off table and has a spoken name.

    Parameters
    ----------
    pdf : bytes
        The pack as it was set.
    places : sequence of SigningPlace
    statement : Statement

    Returns
    -------
    bytes
        ``pdf`` with an addition; the same for the same input.
    """
    update = Update(pdf)
    put_statement(update, statement)
    for place in places:
        append_signature_field(
            update,
            SigFieldSpec(
                sig_field_name=place.role,
                on_page=place.page,
                box=place.box,  # type: ignore[arg-type]
                readable_field_name=f"Signature: {place.role}",
            ),
        )
    _tag(update, [place.role for place in places])
    return update.bytes()


def _tag(update: Update, roles: Sequence[str]) -> None:
    """Make every field's widget a form element of the document's structure.

    Source: ISO 14289-1, 7.18.4 (a widget stands in a Form element) and ISO 32000-1, 14.7.4.3.
    """
    tree = update.root["/StructTreeRoot"]
    numbers = tree["/ParentTree"]["/Nums"]
    key = max((numbers[index] for index in range(0, len(numbers), 2)), default=-1) + 1
    cells = _signing_cells(tree, len(roles))
    fields = {
        str(field.get_object()["/T"]): field
        for field in (update.root["/AcroForm"]["/Fields"].raw_get(index) for index in range(len(roles)))
    }
    for role, cell in zip(roles, cells, strict=True):
        reference = fields[role]
        widget = reference.get_object()
        place = generic.DictionaryObject(
            {name("Type"): name("OBJR"), name("Obj"): reference, name("Pg"): widget.raw_get("/P")}
        )
        element = generic.DictionaryObject(
            {
                name("Type"): name("StructElem"),
                name("S"): name("Form"),
                name("P"): _reference(cell, update),
                name("K"): place,
                name("Alt"): generic.TextStringObject(f"Signature: {role}"),
            }
        )
        form = update.add_object(element)
        kids = cell.get("/K")
        kept = kids if isinstance(kids, generic.ArrayObject) else [] if kids is None else [cell.raw_get("/K")]
        cell[name("K")] = generic.ArrayObject([*kept, form])
        update.update_container(cell)
        widget[name("StructParent")] = generic.NumberObject(key)
        numbers.extend([generic.NumberObject(key), form])
        key += 1
    update.update_container(numbers)
    tree[name("ParentTreeNextKey")] = generic.NumberObject(key)
    update.update_container(tree)


def _reference(element: Any, update: Update) -> generic.IndirectObject:
    reference = element.container_ref
    return generic.IndirectObject(reference.idnum, reference.generation, update)


def _signing_cells(tree: Any, count: int) -> list[Any]:
    """The empty last cells of the sign-off table's rows; without such a table the document's own element."""
    for table in itertools.islice(_elements(tree, "/Table"), 4):  # the cover comes first
        for body in _elements(table, "/TBody"):
            rows = [list(_elements(row, "/TD")) for row in _elements(body, "/TR")]
            if len(rows) == count and all(len(row) == 4 and not row[-1].get("/K") for row in rows):
                return [row[-1] for row in rows]
    return [next(_elements(tree, "/Document"))] * count


def _elements(node: Any, kind: str) -> Iterator[Any]:
    """Structure elements of a kind under a node, in reading order."""
    kids = node.get("/K")
    kids = kids if isinstance(kids, generic.ArrayObject) else [] if kids is None else [kids]
    for kid in kids:
        kid = kid.get_object() if isinstance(kid, generic.IndirectObject) else kid
        if isinstance(kid, generic.DictionaryObject) and "/S" in kid:
            if kid["/S"] == kind:
                yield kid
            else:
                yield from _elements(kid, kind)
