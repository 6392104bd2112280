"""Separately set PDFs bound into one: pages, tags, bookmarks, named places and files carried inside.

Source: ISO 32000-1, 12.3 (destinations and bookmarks), 14.7 (logical structure), 7.9.6 and 7.9.7 (name and
number trees); ISO 19005-3 and ISO 14289-1 for what the whole must still hold as its parts do.
"""

from __future__ import annotations

import base64
import hashlib
import io
import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from pikepdf import Array, Dictionary, Name, ObjectStreamMode, Page, Pdf, String

from calcpack.export.paper import BOUND

_OF_THE_WHOLE = ("/Lang", "/MarkInfo", "/Metadata", "/OutputIntents", "/ViewerPreferences")


@dataclass(frozen=True)
class Place:
    """A place on a page: the page counts from 0; from its left and upper edge [pt]."""

    page: int
    left: float
    top: float


@dataclass(frozen=True)
class Bound:
    """A PDF to be bound.

    Parameters
    ----------
    name : str
        Sets its named places apart: "sheet/" of a part named "3" becomes "3/".
    pdf : bytes
        Tagged, as the typesetter writes it.
    places : mapping
        Further places that other parts lead to: "5.12" of the part "3" becomes "3/5.12".
    """

    name: str
    pdf: bytes
    places: Mapping[str, Place] = field(default_factory=dict)


def bind(parts: Sequence[Bound], *, files: bool = True) -> bytes:
    """Parts bound in order; the first one's title, language and metadata are those of the whole.

    Links to "bound:NAME/PLACE" lead to that place.

    Parameters
    ----------
    parts : sequence of Bound
    files : bool
        Whether the whole carries what the parts carry inside.

    Returns
    -------
    bytes
        The same for the same parts.
    """
    whole = _Whole(files)
    for part in parts:
        whole.add(part)
    return whole.bytes()


class _Whole:
    """The PDF that grows, part by part."""

    def __init__(self, with_files: bool) -> None:
        self._with_files = with_files
        self._pdf = Pdf.new()
        self._count = 0
        self._bookmarks: list[Any] = []
        self._places: dict[str, Array] = {}
        self._files: dict[str, Any] = {}
        self._associated: list[Any] = []
        self._elements: list[Any] = []
        self._parents: list[Any] = []  # alternately key and element or elements
        self._next_key = 0
        self._identities: dict[str, Any] = {}
        self._roles: dict[str, Any] = {}
        self._ways: list[Any] = []  # links from part to part
        self._instances = hashlib.sha256()

    def add(self, part: Bound) -> None:
        """Bind one more part."""
        source = Pdf.open(io.BytesIO(part.pdf))
        number = self._count
        self._count += 1
        self._instances.update(bytes(source.trailer.ID[1]))
        _set_apart(source, f"{number}-", self._next_key)
        if number == 0:
            for key in _OF_THE_WHOLE:
                self._pdf.Root[key] = self._copied(source, source.Root[key])
            self._pdf.trailer.Info = self._copied(source, source.trailer.Info)
        self._take(part, self._copied(source, _gathered(source, self._with_files)))

    def _copied(self, source: Pdf, value: Any) -> Any:
        return self._pdf.copy_foreign(value if value.is_indirect else source.make_indirect(value))

    def _take(self, part: Bound, found: Any) -> None:
        pages = list(found.Pages)
        for page in pages:
            page.Type = Name.Page
            self._pdf.pages.append(Page(page))
            self._ways += [annot for annot in page.get("/Annots", ()) if _way(annot) is not None]
        self._bookmarks += _in_row(found.Outlines)
        self._associated += list(found.get("/AF", ()))
        for tree, kept in (("/Dests", self._places), ("/EmbeddedFiles", self._files)):
            for name, value in _pairs(_at(found, "/Names", tree, "/Names")):
                kept[_renamed(part.name, str(name)) if tree == "/Dests" else str(name)] = value
        for name, place in part.places.items():
            page = pages[place.page]
            height = float(page.MediaBox[3])
            self._places[f"{part.name}/{name}"] = Array(
                [page, Name.XYZ, round(place.left, 3), round(height - place.top, 3), 0]
            )
        self._take_structure(found.StructTreeRoot)

    def _take_structure(self, tree: Any) -> None:
        for element in tree.K:
            element.S = Name.Part
            self._elements.append(element)
        for key, value in _pairs(tree.ParentTree.Nums):
            self._parents += [int(key) + self._next_key, value]
        self._next_key += int(tree.ParentTreeNextKey)
        self._identities |= {str(name): value for name, value in _pairs(_at(tree, "/IDTree", "/Names"))}
        self._roles |= dict(tree.get("/RoleMap", Dictionary()).items())

    def bytes(self) -> bytes:
        """The whole."""
        root = self._pdf.Root
        root.Outlines = self._outlines()
        root.Names = Dictionary(
            Dests=Dictionary(Names=_name_tree(self._places)),
            EmbeddedFiles=Dictionary(Names=_name_tree(self._files)),
        )
        if self._associated:
            root.AF = Array(self._associated)
        root.PageLabels = Dictionary(Nums=[0, Dictionary(Type=Name.PageLabel, S=Name.D, St=1)])
        root.StructTreeRoot = self._structure()
        self._lead()
        self._restate()
        written = io.BytesIO()
        self._pdf.save(
            written,
            force_version="1.7",
            object_stream_mode=ObjectStreamMode.generate,
            deterministic_id=True,
            fix_metadata_version=False,
        )
        return written.getvalue()

    def _outlines(self) -> Any:
        top = self._pdf.make_indirect(Dictionary(Type=Name.Outlines, Count=len(self._bookmarks)))
        for before, after in zip(self._bookmarks, self._bookmarks[1:], strict=False):
            before.Next, after.Prev = after, before
        for each in self._bookmarks:
            each.Parent = top
        top.First, top.Last = self._bookmarks[0], self._bookmarks[-1]
        return top

    def _structure(self) -> Any:
        tree = self._pdf.make_indirect(Dictionary(Type=Name.StructTreeRoot))
        document = self._pdf.make_indirect(
            Dictionary(Type=Name.StructElem, S=Name.Document, P=tree, K=Array(self._elements))
        )
        for element in self._elements:
            element.P = document
        tree.K = Array([document])
        tree.ParentTree = self._pdf.make_indirect(Dictionary(Nums=Array(self._parents)))
        tree.ParentTreeNextKey = self._next_key
        tree.IDTree = Dictionary(Names=_name_tree(self._identities))
        tree.RoleMap = Dictionary(self._roles)
        return tree

    def _lead(self) -> None:
        """Links from part to part to where they lead."""
        numbers = {page.obj.objgen: number for number, page in enumerate(self._pdf.pages, start=1)}
        for annot in self._ways:
            name = str(_way(annot))
            del annot["/A"]
            annot.Dest = String(name)
            annot.Contents = String(f"page {numbers[self._places[name][0].objgen]}")

    def _restate(self) -> None:
        """The metadata's count of pages and name of this very file."""
        xmp = self._pdf.Root.Metadata.read_bytes().decode()
        xmp = re.sub(r"(?<=<xmpTPg:NPages>)\d+", str(len(self._pdf.pages)), xmp)
        if stated := re.search(r"<xmpMM:InstanceID>([^<]+)<", xmp):
            own = base64.b64encode(self._instances.digest()[:16]).decode()
            xmp = xmp.replace(stated[1], own)
        self._pdf.Root.Metadata.write(xmp.encode())
        self._pdf.Root.Metadata.update({"/Type": Name.Metadata, "/Subtype": Name.XML})


def _gathered(source: Pdf, with_files: bool) -> Any:
    """All of a part that is bound, as one object.

    Its pages lose their kind, as a page is left out of a copy that only mentions it.
    """
    root = source.Root
    pages = [page.obj for page in source.pages]
    for page in pages:
        del page["/Type"]
        del page["/Parent"]
    wanted = ["/Outlines", "/Names", "/StructTreeRoot", *(["/AF"] if with_files else [])]
    if not with_files and "/Names" in root and "/EmbeddedFiles" in root.Names:
        del root.Names["/EmbeddedFiles"]
    kept = {key: root[key] for key in wanted if key in root}
    return source.make_indirect(Dictionary(kept | {"/Pages": Array(pages)}))


def _set_apart(source: Pdf, prefix: str, first_key: int) -> None:
    """Names for a part's table headers and keys for its pages and links that no other part has."""
    for page in source.pages:
        page.obj.StructParents = int(page.obj.StructParents) + first_key
        for annot in page.obj.get("/Annots", ()):
            annot.StructParent = int(annot.StructParent) + first_key
    names = _at(source.Root.StructTreeRoot, "/IDTree", "/Names")
    for index in range(0, len(names), 2):
        names[index] = String(prefix + str(names[index]))
        names[index + 1].ID = names[index]
    for each in source.objects:
        if isinstance(each, Dictionary) and each.get("/S") in (Name.TD, Name.TH):
            for attributes in each.get("/A", ()):
                if headers := attributes.get("/Headers", None):
                    attributes.Headers = Array([String(prefix + str(header)) for header in headers])


def _renamed(part: str, name: str) -> str:
    """A named place of a part among those of the whole.

    Examples
    --------
    >>> _renamed("3", "sheet/"), _renamed("end", "end/2")
    ('3/', 'end/2')
    """
    return f"{part}/{name.partition('/')[2]}"


def _way(annot: Any) -> str | None:
    """The place in another part that a link leads to."""
    address = str(annot.get("/A", Dictionary()).get("/URI", ""))
    return address.removeprefix(BOUND) if address.startswith(BOUND) else None


def _in_row(outlines: Any) -> Iterator[Any]:
    item = outlines.get("/First")
    while item is not None:
        yield item
        item = item.get("/Next")


def _at(holder: Any, *keys: str) -> Any:
    """What stands at the end of a way of keys; nothing where it ends before."""
    for key in keys:
        holder = holder.get(key)
        if holder is None:
            return ()
    return holder


def _pairs(flat: Any) -> Iterator[tuple[Any, Any]]:
    values = iter(flat)
    return zip(values, values, strict=True)


def _name_tree(named: Mapping[str, Any]) -> Array:
    """The leaves of a name tree, which are sorted by the bytes of their names."""
    ordered = sorted((bytes(String(name)), name, value) for name, value in named.items())
    return Array([each for _, name, value in ordered for each in (String(name), value)])
