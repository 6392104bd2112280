"""Executed notebooks made by hand: an ordinary beam, every kind of block, and hostile words."""

from __future__ import annotations

import base64
import struct
import zlib
from typing import Any

import nbformat

BLOCKS = "application/vnd.calcpack.blocks+json"
RECORD = "application/vnd.calcpack.record+json"

HOSTILE = (
    '#panic("x")',
    "$x$ and #{sys.version}",
    "<script>alert(1)</script>",
    r"\input{/etc/passwd}",
    "{{ 7*7 }} {% raw %}",
    '"; read("data.json")',
    "]#eval(1)[",
    "W" * 90,
    "שלום עולם",
    "Überbau, Łódź, балка 梁",
)


def header(**changes: Any) -> dict[str, Any]:
    return {
        "number": "2417",
        "title": "Boat workshop, loft floor",
        "site": "Quay 4, Norrhamn",
        "client": "Norrhamn Boat Guild",
        "authority": "Norrhamn building office",
        "permit": "NB-2026-118",
        "contact": "office@example.test",
        "revision": "A",
        "date": "2026-12-01",
        "units": "SI",
        "prepared": {"name": "K. Lindqvist", "licence": "SE-10432"},
        "checked": {"name": "M. Achterberg", "licence": ""},
        "approved": {"name": "", "licence": ""},
    } | changes


def metadata(mark: str, title: str, **changes: Any) -> dict[str, Any]:
    return {
        "mark": mark,
        "title": title,
        "header": header(),
        "submission": {
            "paper": "A4",
            "check_level": "second person",
            "attachments": True,
            "allow_markup": False,
        },
        "template": {"name": "concrete_beam_en1992", "version": "1.0", "sha256": "ab" * 32},
        "input": "3f9a07c1" * 8,
        "program": "calcpack 0.1.0",
        "sheets": {"first": 1, "of": 1},
    } | changes


def figure(width_mm: float = 80, height_mm: float = 40, words: str = "54.0 kN·m at 3.00 m") -> str:
    """A diagram with its lettering as text."""
    return (
        f'<svg xmlns="http://www.w3.org/2000/svg" width="{width_mm}mm" height="{height_mm}mm"'
        f' viewBox="0 0 {width_mm} {height_mm}">'
        f'<path d="M4 8 Q{width_mm / 2} {height_mm * 1.4} {width_mm - 4} 8"'
        ' fill="#e7ebee" stroke="#1b232d" stroke-width="0.3"/><path id="a" clip-path="url(#c)" d="M4 8 H60"'
        ' stroke="#1b232d" stroke-width="0.4"/><clipPath id="c"><rect width="60" height="40"/></clipPath>'
        f'<text x="{width_mm / 2}" y="{height_mm * 0.6}" font-size="2.8" text-anchor="middle"'
        f' font-family="Libertinus Serif">{words}</text></svg>'
    )


def png() -> str:
    """A picture of four grey dots."""

    def chunk(kind: bytes, data: bytes) -> bytes:
        return struct.pack(">I", len(data)) + kind + data + struct.pack(">I", zlib.crc32(kind + data))

    rows = zlib.compress(b"\x00\x20\x80\x00\xc0\x40")
    head = struct.pack(">IIBBBBB", 2, 2, 8, 0, 0, 0, 0)
    raw = b"\x89PNG\r\n\x1a\n" + chunk(b"IHDR", head) + chunk(b"IDAT", rows) + chunk(b"IEND", b"")
    return base64.b64encode(raw).decode()


def line(no: str, kind: str, says: Any, symbol: str, rows: list[list[str]], **more: Any) -> dict[str, Any]:
    return {
        "type": "line",
        "no": no,
        "kind": kind,
        "says": says,
        "symbol": symbol,
        "rows": rows,
        "cite": "",
        "origin": "",
        "from": [],
        "passes": None,
        "alt": "",
    } | more


def ratio(value: float, words: str = "bending") -> dict[str, Any]:
    return {"says": words, "demand": "2 kN", "resistance": "1 kN", "ratio": value, "passes": value <= 1}


def place() -> list[dict[str, Any]]:
    """Where the beam stands, and what is shown of it."""
    ratios = {
        "type": "ratios",
        "rows": [
            {
                "says": "bending at midspan",
                "demand": "110.7 kN·m",
                "resistance": "146.2 kN·m",
                "ratio": 0.757,
                "passes": True,
            },
            {
                "says": "shear at the support",
                "demand": "61.3 kN",
                "resistance": "94.0 kN",
                "ratio": 0.652,
                "passes": True,
            },
            {
                "says": "crack width",
                "demand": "0.33 mm",
                "resistance": "0.30 mm",
                "ratio": 1.10,
                "passes": False,
            },
            {
                "says": "deflection, total",
                "demand": "8.4 mm",
                "resistance": "24.0 mm",
                "ratio": 0.35,
                "passes": True,
            },
        ],
    }
    return [
        {"type": "heading", "level": 1, "number": "1", "text": "Where this beam stands"},
        {
            "type": "columns",
            "widths": [2, 3],
            "columns": [
                [
                    {
                        "type": "figure",
                        "svg": figure(64, 60, "B5"),
                        "alt": "plan with beam B5 on line 2",
                        "caption": "Hatched: what drains to B5",
                        "width_mm": 64,
                    }
                ],
                [
                    ratios,
                    {
                        "type": "text",
                        "role": "body",
                        "runs": [
                            "Crack width governs, line ",
                            {"line": "2.03"},
                            ". Reactions passed on: 61.3 kN to C2, 61.3 kN to B9.",
                        ],
                    },
                ],
            ],
        },
    ]


def takes() -> list[dict[str, Any]]:
    return [
        {"type": "heading", "level": 1, "number": "2", "text": "Taken from the job"},
        line("2.01", "take", "Span", "L", [["6.00\\,\\text{m}"]], origin="beam B5 line"),
        line(
            "2.02",
            "take",
            "Live load on panel P1",
            "q",
            [["3.00\\,\\text{kPa}"]],
            origin="panel P1 live",
            cite="EN 1991-1-1 Table 6.2",
        ),
        line(
            "2.03",
            "take",
            "Short side of panel P1, which is the length that matters for the load",
            "S",
            [["4.50\\,\\text{m}"]],
            origin="panel P1 corners",
        ),
    ]


def working() -> list[dict[str, Any]]:
    wide = [rf"+ \frac{{\gamma_{{{n}}}\,q_{{{n}}}\,S_{{{n}}}^{{2}}}}{{24\,L_{{{n}}}}}" for n in range(1, 9)]
    return [
        {"type": "heading", "level": 1, "number": "3", "text": ["Load from the panels"]},
        line(
            "3.01",
            "hence",
            ["Side ratio of panel P1; below ", {"math": "1/2"}, " it would span one way"],
            "m",
            [["\\frac{S}{L}"], ["\\frac{4.50\\,\\text{m}}{6.00\\,\\text{m}}"], ["\\textbf{0.750}"]],
            cite="common practice",
            **{"from": ["2.01", "2.03"]},
        ),
        line(
            "3.02",
            "hence",
            "Equal largest moment: the uniform load that bends the span as the trapezoid does",
            "w_{\\text{eq}}",
            [
                ["\\frac{q\\,S}{2}", "\\cdot \\frac{3 - m^{2}}{3}"],
                ["\\frac{5.50\\,\\text{kPa} \\cdot 4.50\\,\\text{m}}{2}", "\\cdot \\frac{3 - 0.750^{2}}{3}"],
                ["\\textbf{10.06 kN/m}"],
            ],
            cite="statics, derived in 2.11",
            alt="equal largest moment, 10.06 kN/m",
            **{"from": ["2.02", "2.03", "3.01", "9.99"]},
        ),
        line(
            "3.03",
            "hence",
            "A sum that is wider than the page",
            "w",
            [["w_0", *wide], ["\\textbf{12.3 kN/m}"]],
        ),
        line(
            "3.04",
            "require",
            "Bending at midspan",
            "M_{\\text{Ed}}",
            [["110.7\\,\\text{kN·m}", "\\le M_{\\text{Rd}}", "= 146.2\\,\\text{kN·m}"]],
            passes=True,
            cite="EN 1992-1-1 6.1(2)P",
            **{"from": ["3.02"]},
        ),
        line(
            "3.05",
            "require",
            "Crack width",
            "",
            [["w_{\\text{k}} = 0.33\\,\\text{mm}", "\\le 0.30\\,\\text{mm}"]],
            passes=False,
            cite="EN 1992-1-1 7.3.1",
        ),
        {
            "type": "text",
            "role": "unsafe",
            "runs": "The shear-matched load would be 23 % short in moment: unsafe for bending.",
        },
        {
            "type": "text",
            "role": "caution",
            "runs": "Point loads at the very ends are left out of the equivalents.",
        },
        {"type": "text", "role": "note", "runs": ["Values ", {"em": "from memory"}, " are marked as such."]},
    ]


def rest() -> list[dict[str, Any]]:
    table = {
        "type": "table",
        "caption": "Combinations, with live load at its worst place",
        "columns": [
            {"head": "combination", "align": "left"},
            {"head": ["largest ", {"math": "M"}], "align": "right"},
            {"head": "smallest", "align": "right"},
            {"head": "shear", "align": "right"},
        ],
        "rows": [
            [f"{g} G + 1.50 Q", f"{g * 80:.1f} kN·m", "0.0 kN·m", f"{g * 45:.1f} kN"]
            for g in (1.35, 1.15, 1.0)
        ],
        "strong_rows": [0],
    }
    return [
        {"type": "heading", "level": 1, "number": "4", "text": "Analysis"},
        {
            "type": "figure",
            "svg": figure(160, 45),
            "alt": "bending moment, largest 54.0 kN·m at 3.00 m",
            "caption": "Bending moment, drawn on the tension side",
            "width_mm": 160,
        },
        table,
        {"type": "heading", "level": 2, "number": "4.1", "text": "Derivation"},
        {
            "type": "derivation",
            "steps": [
                {
                    "says": "Moment of the trapezoid at midspan",
                    "rows": ["M = \\frac{w L^{2}}{8} - \\frac{w a^{2}}{6}", "\\frac{dM}{dx} = V"],
                    "alt": "M equals w L squared over 8",
                },
                {
                    "says": ["put equal to that of ", {"math": "w_{\\text{eq}}"}],
                    "rows": ["w_{\\text{eq}} = w\\left(1 - \\frac{4 a^{2}}{3 L^{2}}\\right)"],
                    "alt": "",
                },
            ],
        },
        {"type": "list", "items": ["one", ["two ", {"strong": "strong"}]]},
        {"type": "facts", "rows": [["template", "concrete_beam_en1992 1.0"], ["input", "3f9a07c1"]]},
        {"type": "notation", "rows": [["L", "span", "m"], ["w_{\\text{eq}}", "equivalent load", "kN/m"]] * 4},
        {
            "type": "signoff",
            "rows": [
                {"role": "prepared", "name": "K. Lindqvist", "licence": "SE-10432", "date": "1 Dec 2026"},
                {"role": "checked", "name": "", "licence": "", "date": ""},
            ],
        },
    ]


NOT_FORMULAS = (
    r"\input{/etc/passwd}",
    "#panic(1)",
    "a $ b",
    r"\href{x}{<b>}",
    r"\frac{",
    "&",
    "%",
    r"\text{梁}",
    "`c`",
)


def empties() -> list[dict[str, Any]]:
    """Blocks with nothing in them."""
    return [
        {"type": "heading", "level": 2, "number": "", "text": ""},
        {"type": "heading", "level": 1, "number": "1", "text": []},
        {"type": "heading", "level": 2, "number": "1.1", "text": [{"math": "w_0"}]},
        {"type": "heading", "level": 2, "number": "梁", "text": ["\u00a0", {"math": " "}]},
        {"type": "text", "runs": ""},
        {"type": "list", "items": []},
        {"type": "list", "items": [""]},
        line("1.01", "hence", "", "", [], **{"from": ["梁 <1>", "1.02"]}),
        line("梁 <1>", "take", "", "", []),
        line("1.02", "require", "", "", [[], [" "]], passes=False),
        line("1.03", "take", "", "L", []),
        {"type": "derivation", "steps": []},
        {"type": "derivation", "steps": [{"says": "", "rows": [], "alt": ""}]},
        {"type": "table", "columns": [{"head": ""}], "rows": []},
        {"type": "ratios", "rows": []},
        {"type": "figure", "svg": figure(), "alt": "", "caption": ""},
        {"type": "columns", "widths": [], "columns": []},
        {"type": "columns", "widths": [1, 2], "columns": [[], []]},
        {"type": "signoff", "rows": []},
        {"type": "facts", "rows": []},
        {"type": "notation", "rows": []},
        {"type": "plain", "text": ""},
        {"type": "formula", "latex": "", "alt": ""},
    ]


def record(mark: str) -> dict[str, Any]:
    """A sheet record with the results a pack draws on."""
    return {
        "format": 1,
        "job": {"number": "2417"},
        "mark": mark,
        "revision": "A",
        "template": {"name": "concrete_beam_en1992", "version": "1.0", "sha256": "ab" * 32},
        "lines": [],
        "results": {
            "spans": [6.0, 5.0],
            "loads": {"dead": [], "live": []},
            "total": {"dead": 60.0, "live": 40.0},
            "reactions": {"dead": [20.0, 30.0, 10.0], "live": [15.0, 18.0, 7.0]},
            "equivalent": [],
            "combinations": [],
            "envelope": {
                "moment_max": 110.7,
                "moment_max_at": 3.0,
                "moment_min": -42.5,
                "moment_min_at": 6.0,
                "shear_max": 61.3,
            },
            "deflection": {"total_mm": 8.4, "live_mm": 3.1},
            "checks": [
                {
                    "name": "bending",
                    "demand": 110.7,
                    "capacity": 146.2,
                    "unit": "kN*m",
                    "ratio": 0.757,
                    "passes": True,
                    "cite": "EN 1992-1-1 6.1",
                }
            ],
            "governing": {"name": "bending", "ratio": 0.757},
        },
    }


def notebook(
    blocks: list[list[dict[str, Any]]],
    mark: str = "B5",
    title: str = "Concrete beam, EN 1992-1-1",
    markdown: str = "",
    plain: bool = False,
    **changes: Any,
) -> nbformat.NotebookNode:
    """An executed notebook: one cell a list of blocks, the record last."""
    cells = []
    if markdown:
        cells.append(nbformat.v4.new_markdown_cell(markdown, id="text"))
    outputs = [
        nbformat.v4.new_output("display_data", {BLOCKS: {"blocks": part}, "text/plain": "…"})
        for part in blocks
    ]
    if plain:
        outputs += [
            nbformat.v4.new_output("stream", name="stdout", text="own cell: 12 bars\n  indented\n"),
            nbformat.v4.new_output("stream", name="stderr", text="a warning of this machine\n"),
            nbformat.v4.new_output(
                "execute_result",
                {"text/plain": "x**2/3", "text/latex": "$\\displaystyle \\frac{x^{2}}{3}$"},
                execution_count=1,
            ),
            nbformat.v4.new_output("display_data", {"image/png": png(), "text/plain": "<Figure>"}),
            nbformat.v4.new_output(
                "display_data", {"image/svg+xml": figure(50, 20, "own drawing"), "text/plain": "<Figure>"}
            ),
            nbformat.v4.new_output(
                "display_data", {"text/html": "<b onclick='x()'>frame</b>", "text/plain": "frame"}
            ),
        ]
    outputs.append(nbformat.v4.new_output("display_data", {RECORD: record(mark), "text/plain": "record"}))
    for number, output in enumerate(outputs, start=1):
        cells.append(
            nbformat.v4.new_code_cell("show()", id=f"c{number}", outputs=[output], execution_count=number)
        )
        if output.output_type == "execute_result":
            output["execution_count"] = number
    node = nbformat.v4.new_notebook(cells=cells, metadata={"calcpack": metadata(mark, title, **changes)})
    node.nbformat_minor = 5
    return node


def ordinary(mark: str = "B5", **changes: Any) -> nbformat.NotebookNode:
    """An ordinary beam: every kind of block in it."""
    return notebook([place(), takes(), working(), rest()], mark=mark, **changes)


def hostile() -> nbformat.NotebookNode:
    """Hostile words wherever words can stand."""
    blocks: list[dict[str, Any]] = [{"type": "heading", "level": 1, "number": "#1", "text": HOSTILE[0]}]
    for number, words in enumerate(HOSTILE):
        blocks += [
            line(f"2.{number:02d}", "hence", "no formulas", words, [list(NOT_FORMULAS), [words]]),
            {"type": "derivation", "steps": [{"says": words, "rows": [*NOT_FORMULAS, words], "alt": ""}]},
            {"type": "text", "role": "body", "runs": [words, {"strong": words}, {"em": words}]},
            line(f"1.{number:02d}", "take", words, "L", [["6"]], cite=words, origin=words, alt=words),
            {
                "type": "table",
                "caption": words,
                "columns": [{"head": words, "align": "right"}],
                "rows": [[[words, {"math": "x"}]]],
                "strong_rows": [],
            },
            {
                "type": "ratios",
                "rows": [
                    {"says": words, "demand": words, "resistance": words, "ratio": 1.5, "passes": False}
                ],
            },
            {"type": "facts", "rows": [[words, words]]},
            {
                "type": "figure",
                "svg": figure(40, 15, words.replace("&", "&amp;").replace("<", "&lt;")),
                "alt": words,
                "caption": words,
                "width_mm": 40,
            },
            {"type": "notation", "rows": [["x", words, words]]},
            {"type": "signoff", "rows": [{"role": words, "name": words, "licence": words, "date": words}]},
            {"type": "list", "items": [words]},
        ]
    titles = {
        "header": header(
            title=HOSTILE[0] + HOSTILE[2],
            site=HOSTILE[4],
            prepared={"name": HOSTILE[1], "licence": HOSTILE[3]},
        )
    }
    return notebook([blocks], title=HOSTILE[2] + HOSTILE[4], markdown="\n\n".join(HOSTILE), **titles)
