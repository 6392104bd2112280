"""Drawings: what acts or reaches outside does not pass, what draws does."""

from __future__ import annotations

from xml.etree.ElementTree import fromstring

import pytest

from calcpack.export.svg import safe_svg, with_prefix

HEAD = '<svg xmlns="http://www.w3.org/2000/svg" xmlns:xlink="http://www.w3.org/1999/xlink"'


@pytest.mark.parametrize(
    "inside",
    [
        "<script>alert(1)</script>",
        "<foreignObject><p xmlns='http://www.w3.org/1999/xhtml'>a</p></foreignObject>",
        '<a xlink:href="javascript:alert(1)"><path d="M0 0"/></a>',
        '<image xlink:href="http://x.test/a.png" width="1" height="1"/>',
        '<image href="data:image/svg+xml;base64,AAAA" width="1" height="1"/>',
        '<use href="http://x.test/a.svg#b"/>',
        '<use href="#missing"/>',
        '<path d="M0 0" onclick="alert(1)"/>',
        '<path d="M0 0" style="fill: url(http://x.test/a)"/>',
        '<path d="M0 0" fill="url(http://x.test/#a)"/>',
        '<path d="M0 0" style="background: expression(alert(1))"/>',
        "<style>@import url(http://x.test/a.css);</style>",
        '<animate attributeName="href" to="javascript:alert(1)"/>',
        '<set attributeName="onload" to="alert(1)"/>',
        '<iframe src="http://x.test"/>',
        "<metadata>x.test</metadata>",
        "<x:script xmlns:x='http://www.w3.org/1999/xhtml'>alert(1)</x:script>",
        "<!-- --><?xml-stylesheet href='http://x.test/a.css'?>",
    ],
)
def test_what_acts_or_reaches_outside_is_left_out(inside):
    safe = safe_svg(f'{HEAD} onload="alert(1)">{inside}<rect width="3" height="2"/></svg>')
    assert "alert" not in safe
    assert "x.test" not in safe
    assert "missing" not in safe
    assert "data:" not in safe
    assert '<rect width="3" height="2" />' in safe


@pytest.mark.parametrize(
    "text", ['<!DOCTYPE svg [<!ENTITY a "b">]>' + HEAD + ">&a;</svg>", "", "<p/>", "\x00"]
)
def test_what_is_no_plain_drawing_is_refused(text):
    with pytest.raises(ValueError, match="drawing"):
        safe_svg(text)


def test_styles_become_plain_attributes():
    safe = safe_svg(
        f"{HEAD}><style>*{{stroke-linejoin: round}} .a{{fill:red}}</style>"
        "<text style=\"font: italic 700 10px/1.2 'Some Face', serif; fill: #123456; position: fixed\">"
        "5 &lt; 6</text></svg>"
    )
    text = fromstring(safe)[0]
    assert text.attrib == {
        "font-size": "10px",
        "font-family": "'Libertinus Serif', serif",
        "font-style": "italic",
        "font-weight": "700",
        "fill": "#123456",
    }
    assert text.text == "5 < 6"
    assert fromstring(safe).attrib == {"stroke-linejoin": "round"}


def test_inner_references_stay_and_can_be_made_their_own():
    drawing = (
        f'{HEAD}><defs><path id="m" d="M0 0h1"/>'
        '<clipPath id="c"><rect width="1" height="1"/></clipPath></defs>'
        '<g clip-path="url(#c)"><use xlink:href="#m" x="3"/></g></svg>'
    )
    safe = safe_svg(drawing)
    assert 'href="#m"' in safe
    own = with_prefix(safe, "f1-")
    for piece in ('id="f1-m"', 'id="f1-c"', 'url(#f1-c)"', 'href="#f1-m"'):
        assert piece in own
    assert safe_svg(safe) == safe


def test_raster_images_inside_stay():
    safe = safe_svg(f'{HEAD}><image href="data:image/png;base64,iVBORw0K Gg==" width="1" height="1"/></svg>')
    assert "data:image/png;base64,iVBORw0KGg==" in safe


def test_deep_nesting_is_cut():
    safe = safe_svg(HEAD + ">" + "<g>" * 500 + "</g>" * 500 + "</svg>")
    assert safe.count("<g") < 100
