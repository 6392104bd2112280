"""Drawings made harmless: only shapes, text and paints pass, nothing that acts or reaches outside.

What a style sheet or a style attribute said is written as plain attributes, so that the page may
forbid inline styles altogether.
"""

from __future__ import annotations

import base64
import binascii
import re
from functools import lru_cache
from xml.etree.ElementTree import Element, ParseError, fromstring, register_namespace, tostring

from calcpack.export.text import clean

SVG = "http://www.w3.org/2000/svg"
_XLINK = "{http://www.w3.org/1999/xlink}href"
register_namespace("", SVG)


def _words(text: str) -> frozenset[str]:
    return frozenset(text.split())


_ELEMENTS = _words("""
    svg g defs symbol use path rect circle ellipse line polyline polygon text tspan clipPath mask
    pattern marker linearGradient radialGradient stop image title desc
""")
_ATTRIBUTES = _words("""
    id x y x1 y1 x2 y2 cx cy r rx ry fx fy dx dy d points width height viewBox preserveAspectRatio
    transform clipPathUnits maskUnits maskContentUnits patternUnits patternContentUnits patternTransform
    gradientUnits gradientTransform spreadMethod offset markerWidth markerHeight markerUnits refX refY
    orient rotate textLength lengthAdjust version
""")
_PAINTS = _words("""
    fill fill-opacity fill-rule stroke stroke-width stroke-opacity stroke-dasharray stroke-dashoffset
    stroke-linecap stroke-linejoin stroke-miterlimit opacity color visibility display clip-path
    clip-rule mask marker-start marker-mid marker-end stop-color stop-opacity font-family font-size
    font-style font-weight font-variant font-stretch text-anchor dominant-baseline baseline-shift
    letter-spacing word-spacing text-decoration vector-effect shape-rendering paint-order
""")
_LOCAL = re.compile(r"url\(\s*['\"]?#([\w.:-]+)['\"]?\s*\)")
_REACHING = re.compile(r"url\s*\(|expression|import|javascript|\\|<|/\*", re.I)
_DATA_IMAGE = re.compile(r"data:image/(png|jpeg);base64,([A-Za-z0-9+/=\s]*)")
_FONT = re.compile(
    r"^(?P<before>(?:[\w-]+\s+)*)(?P<size>[\d.]+(?:px|pt|mm|em)?)(?:/[\w.]+)?\s+(?P<family>.+)$"
)
_RULE = re.compile(r"([^{}]+)\{([^{}]*)\}")
_DECLARING = re.compile(r"<!ENTITY|<!DOCTYPE[^>]*\[", re.I)
_DEEPEST = 64
_MM = {"px": 25.4 / 96, "pt": 25.4 / 72, "mm": 1.0, "cm": 10.0, "in": 25.4}


def _local_name(tag: object) -> str:
    """The element's name when it is SVG's own (or of no namespace), else nothing."""
    if not isinstance(tag, str):
        return ""
    space, _, name = tag.rpartition("}")
    return name if space in ("", "{" + SVG) else ""


def _declarations(style: str) -> dict[str, str]:
    """What a style says, name by name; the ``font`` shorthand taken apart."""
    found: dict[str, str] = {}
    for part in style.split(";"):
        name, colon, value = part.partition(":")
        name, value = name.strip().lower(), value.strip()
        if not colon:
            continue
        if name == "font" and (match := _FONT.match(value)):
            found |= {"font-size": match["size"], "font-family": match["family"]}
            for word in match["before"].split():
                if word in ("italic", "oblique"):
                    found["font-style"] = word
                elif word in ("bold", "bolder", "lighter") or word.isdigit():
                    found["font-weight"] = word
        else:
            found[name] = value
    return found


def _family(value: str) -> str:
    """The nearest face that is at hand wherever the sheet is read."""
    first = value.split(",")[0].strip(" '\"").lower()
    if any(word in first for word in ("mono", "courier", "consol", "typewriter")):
        return "'DejaVu Sans Mono', monospace"
    if "sans" in first or first in ("arial", "helvetica", "verdana"):
        return "'DejaVu Sans', sans-serif"
    return "'Libertinus Serif', serif"


def _safe_value(name: str, value: str) -> str | None:
    if name == "font-family":
        return _family(value)
    local = _LOCAL.fullmatch(value.strip())
    if local:
        return f"url(#{local[1]})"
    return None if _REACHING.search(value) else value


def _picture(value: str) -> str | None:
    """A raster image carried inside, letter by letter as base64 says it."""
    if not (match := _DATA_IMAGE.fullmatch(value.strip())):
        return None
    try:
        raw = base64.b64decode(match[2], validate=False)
    except binascii.Error:
        return None
    return f"data:image/{match[1]};base64,{base64.b64encode(raw).decode()}"


def _attributes(
    element: Element, name: str, everywhere: dict[str, str], ids: frozenset[str]
) -> dict[str, str]:
    said = {key: value for key, value in element.attrib.items() if key in _PAINTS}
    said |= everywhere if name == "svg" else {}
    said |= _declarations(element.get("style", ""))
    found: dict[str, str] = {}
    for key, value in element.attrib.items():
        if key in _ATTRIBUTES and not _REACHING.search(value):
            found[key] = value
    for key, value in said.items():
        if key in _PAINTS and (safe := _safe_value(key, value)) is not None:
            found[key] = safe
    if name in ("use", "image"):
        target = element.get("href") or element.get(_XLINK) or ""
        safe = f"#{target[1:]}" if name == "use" and target[1:] in ids and target[0] == "#" else None
        if name == "image":
            safe = _picture(target)
        if safe is None:
            raise _Dropped
        found["href"] = safe
    return found


class _Dropped(Exception):
    """The element does not pass."""


def _copied(element: Element, everywhere: dict[str, str], ids: frozenset[str], depth: int = 0) -> Element:
    name = _local_name(element.tag)
    if name not in _ELEMENTS or depth > _DEEPEST:
        raise _Dropped
    copy = Element(f"{{{SVG}}}{name}", _attributes(element, name, everywhere, ids))
    if name in ("text", "tspan", "title", "desc"):
        copy.text = clean(element.text or "")
    for child in element:
        try:
            part = _copied(child, everywhere, ids, depth + 1)
        except _Dropped:
            continue
        if name in ("text", "tspan"):
            part.tail = clean(child.tail or "")
        copy.append(part)
    return copy


def _everywhere(root: Element) -> dict[str, str]:
    """What a style element says of every element at once (``*``); other rules are left out."""
    found: dict[str, str] = {}
    for element in root.iter(f"{{{SVG}}}style"):
        for selector, body in _RULE.findall(element.text or ""):
            if selector.strip() in ("*", "svg"):
                found |= _declarations(body)
    return found


@lru_cache(maxsize=256)
def safe_svg(svg: str) -> str:
    """A drawing with only what draws.

    Scripts, foreign content, event attributes, links, style sheets and outside addresses are left
    out; style attributes become plain ones, faces those the sheet carries.

    Raises
    ------
    ValueError
        It is not an SVG drawing, or declares entities.

    Examples
    --------
    >>> safe_svg('<svg xmlns="http://www.w3.org/2000/svg" onload="x()"><script>y()</script><g id="a"/></svg>')
    '<svg xmlns="http://www.w3.org/2000/svg"><g id="a" /></svg>'
    """
    if _DECLARING.search(svg):
        raise ValueError("a drawing declares no entities")
    try:
        root = fromstring(svg)
    except (ParseError, ValueError) as error:
        raise ValueError("a drawing is not well-formed SVG") from error
    if _local_name(root.tag) != "svg":
        raise ValueError("a drawing is an <svg> element")
    ids = frozenset(value for element in root.iter() if (value := element.get("id")))
    try:
        copy = _copied(root, _everywhere(root), ids)
    except _Dropped as error:  # pragma: no cover - the root is an svg element
        raise ValueError("a drawing is an <svg> element") from error
    return tostring(copy, encoding="unicode")


def with_prefix(svg: str, prefix: str) -> str:
    """The drawing with its inner names made its own, so that several can stand in one page.

    Examples
    --------
    >>> with_prefix('<svg><use href="#a" /><g id="a" fill="url(#b)" /></svg>', "f1-")
    '<svg><use href="#f1-a" /><g id="f1-a" fill="url(#f1-b)" /></svg>'
    """
    # Written by safe_svg: an attribute begins after a blank, values and text hold no raw quote or bracket.
    svg = re.sub(r'(<[^<>]*?)\bid="', rf'\1id="{prefix}', svg)
    svg = re.sub(r'(<use [^<>]*?)href="#', rf'\1href="#{prefix}', svg)
    return svg.replace('"url(#', f'"url(#{prefix}')


def size_mm(svg: str) -> tuple[float, float]:
    """Width and height the drawing claims [mm], 0 where it claims none.

    Examples
    --------
    >>> size_mm('<svg width="72pt" height="10mm"></svg>')
    (25.4, 10.0)
    """
    head = svg[: svg.find(">") + 1]
    sizes = []
    for key in ("width", "height"):
        match = re.search(rf'\s{key}="([\d.]+)(pt|px|mm|cm|in)?"', head)
        sizes.append(round(float(match[1]) * _MM.get(match[2] or "px", 0.0), 3) if match else 0.0)
    return sizes[0], sizes[1]
