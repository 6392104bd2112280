"""Readers for what was written: text of a PDF, elements of a page."""

from __future__ import annotations

import io
import re
from html.parser import HTMLParser

import pypdf


def reader(pdf: bytes) -> pypdf.PdfReader:
    return pypdf.PdfReader(io.BytesIO(pdf))


def page_texts(pdf: bytes) -> list[str]:
    return [page.extract_text() for page in reader(pdf).pages]


def squeezed(text: str) -> str:
    """Text without blanks and line breaks, as lines are broken anywhere."""
    return re.sub(r"\s+", "", text)


def identification(pdf: bytes) -> dict[str, str]:
    """What the XMP metadata say the file conforms to."""
    xmp = reader(pdf).trailer["/Root"]["/Metadata"].get_data().decode()
    return {name: value for name, value in re.findall(r"<(pdf\w*id:\w+)>([^<]*)<", xmp)}  # noqa: C416


def structure(pdf: bytes) -> list[tuple[str, str | None]]:
    """Every tagged element in reading order: its kind and its spoken alternative."""
    found: list[tuple[str, str | None]] = []

    def walk(node: object) -> None:
        node = node.get_object() if isinstance(node, pypdf.generic.IndirectObject) else node
        if isinstance(node, list):
            for child in node:
                walk(child)
        elif isinstance(node, dict) and ("/S" in node or node.get("/Type") == "/StructTreeRoot"):
            if "/S" in node:
                found.append((node["/S"][1:], node.get("/Alt")))
            walk(node.get("/K", []))

    walk(reader(pdf).trailer["/Root"]["/StructTreeRoot"])
    return found


def bookmarks(pdf: bytes) -> list[tuple[int, str, int]]:
    """Depth, title and page (from 0) of every bookmark."""
    file = reader(pdf)
    found: list[tuple[int, str, int]] = []

    def walk(items: list[object], depth: int) -> None:
        for item in items:
            if isinstance(item, list):
                walk(item, depth + 1)
            else:
                found.append((depth, item.title, file.get_destination_page_number(item)))

    walk(file.outline, 0)
    return found


class Elements(HTMLParser):
    """Elements with their attributes, the text outside the style sheet, ids and links."""

    def __init__(self, page: str) -> None:
        super().__init__(convert_charrefs=True)
        self.elements: list[tuple[str, dict[str, str]]] = []
        self.words: list[str] = []
        self._styles = 0
        self.style = ""
        self.feed(page)
        self.close()

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.elements.append((tag, {key: value or "" for key, value in attrs}))
        self._styles += tag == "style"

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.elements.append((tag, {key: value or "" for key, value in attrs}))

    def handle_endtag(self, tag: str) -> None:
        self._styles -= tag == "style"

    def handle_data(self, data: str) -> None:
        if self._styles:
            self.style += data
        else:
            self.words.append(data)

    @property
    def text(self) -> str:
        return "".join(self.words)

    def of(self, tag: str) -> list[dict[str, str]]:
        return [attributes for name, attributes in self.elements if name == tag]

    @property
    def ids(self) -> list[str]:
        return [attributes["id"] for _, attributes in self.elements if "id" in attributes]
