"""The verification manual as a PDF."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Literal

from calcpack.export.blocks import read_blocks
from calcpack.export.content import CAUTION
from calcpack.export.mathematics import Mathematics
from calcpack.export.paper import PAPERS, Paper
from calcpack.export.text import shown_date
from calcpack.export.typesetting import Setting, typeset, with_known_letters
from calcpack.figures.figure import Figure
from calcpack.verification import shown
from calcpack.verification.charts import plate_figure, tolerance_figure
from calcpack.verification.findings import Findings, Summary
from calcpack.verification.identity import RECIPE, parts, shipped_templates, version
from calcpack.verification.pages import deviation_blocks, topic_blocks
from calcpack.verification.theory import Data, heading, listing, scope, table, text, theory, validity

TITLE = "Verification manual"
LOCAL = (
    "Local codes and licensed practice come first. This manual does not replace the judgement of the engineer"
    " who signs a calculation, nor the review by an authority."
)

COMMANDS = """\
calcpack audit out                           every line, result, load and paper by other roads
calcpack audit out --sheet B1 --trace 5.06   the chain behind a line, down to the job file
calcpack audit out --all --report audit.pdf  the same as a document for the file
calcpack verification --out manual.pdf       this manual again, byte for byte"""


@dataclass(frozen=True)
class Section:
    """A numbered section of the manual; others refer to it by its key."""

    key: str
    title: str
    blocks: Sequence[Data]
    fresh: bool = False


def refer(key: str) -> Data:
    """Running text that leads to a section."""
    return {"refer": key}


# ---- the sections that are not comparisons -----------------------------------------------------------


def _drawn(figure: Figure, caption: str) -> Data:
    facts = {"svg": figure.svg, "alt": figure.alt, "width_mm": figure.width_mm}
    return {"type": "figure", "caption": caption, **facts}


def _summary_row(summary: Summary, key: str = "") -> list[Any]:
    compared = summary.comparisons > 0
    return [
        [{"refer": key, "words": summary.name}] if key else summary.name,
        str(summary.comparisons) if compared else "–",
        str(summary.from_memory) if compared else "–",
        str(summary.by_hand) if compared else "–",
        shown.of_allowed(summary.largest) if compared else "–",
        str(summary.methods) if summary.methods else "–",
        "all hold" if not summary.failing else f"{summary.failing} do not hold",
    ]


def _summary(found: Findings) -> list[Data]:
    whole = found.whole
    columns = (
        ("topic", "left"), ("values compared", "right"), ("from memory", "right"),
        ("by hand, own method", "right"),
        ("largest difference, of what is allowed", "right"), ("other methods", "right"), ("verdict", "left"),
    )  # fmt: skip
    rows = [
        _summary_row(summary, topic.key) for topic, summary in zip(found.topics, found.summaries, strict=True)
    ]
    rows.append(_summary_row(whole))
    blocks = [
        {**table(columns, rows), "strong_rows": [len(rows) - 1]},
        text(
            f"{whole.from_memory} of {whole.comparisons} published values were recalled from memory: printed"
            " tables and examples known to the writers, without the page at hand. Hold one against its"
            " printed source before you rely on it; each is marked. Values by hand are worked out from a"
            " clause's own formula; those by a method of our own are known deviations.",
            role="caution",
        ),
        _drawn(
            tolerance_figure([topic for topic in found.topics if topic.table], found.comparisons),
            "How the differences spread over what is allowed, topic by topic: those near zero are formulas"
            " met to the last digits and values taken over, the others lie within the printed rounding.",
        ),
    ]
    if found.failing:
        wrong = "; ".join(str(each) for each in found.failing)
        blocks.insert(1, text({"strong": "Do not hold: "}, wrong, role="unsafe"))
    return blocks


def _identification() -> list[Data]:
    folders = [
        [[{"code": part.name}], part.says, str(part.files), [{"code": part.sha256}]] for part in parts()
    ]
    templates = [
        [[{"code": each.settings.name}], each.settings.version, [{"code": each.sha256}]]
        for each in shipped_templates()
    ]
    return [
        text(
            f"This manual was made by {version()} itself, from the files named here. Every sheet names the"
            " program, its version and the hashes of its template and of its input."
        ),
        table((("folder", "left"), ("what it is", "left"), ("files", "right"), ("SHA-256", "left")), folders),
        text(
            "The hash is over the list of the files' hashes. Inside the folder (",
            {"code": "shared"}, " and ", {"code": "report_templates"}, " stand in ",
            {"code": "calcpack/_house"}, " of an installed package) this gives it again:",
        ),
        {"type": "plain", "text": RECIPE},
        table((("template", "left"), ("version", "left"), ("SHA-256, as on its sheets", "left")), templates),
        text("Inside a template's folder: ", {"code": "cat notebook.ipynb template.toml | sha256sum"}, "."),
    ]  # fmt: skip


def _asked(found: Findings) -> list[Data]:
    first, last = refer(found.topics[0].key), refer(found.topics[-1].key)
    rows: list[list[Any]] = [
        [
            "which program, which version, which files",
            [refer("identification"), "; foot of every sheet, manifest of every pack"],
        ],
        ["what it may be used for", [refer("scope")]],
        ["theory, assumptions, codes, editions", [refer("theory"), "; basis of design in every pack"]],
        ["limits of validity", [refer("validity"), "; every sheet"]],
        ["comparison with independent results", [refer("reading"), "; ", first, " to ", last]],
        ["known deviations", [refer("deviations")]],
        [
            "input as it was read, output that can be checked",
            "every pack: the input, and numbered lines with words, formula, numbers, clause",
        ],
        ["how a reader finds any number again", [refer("audit")]],
        ["who answers for the result", [refer("responsibility")]],
    ]  # fmt: skip
    return [
        text(
            "Authorities that accept calculations made with a program ask, in one wording or another, for"
            " what is listed here before they accept its output; the right column says where it stands. Which"
            " of it a given authority wants, and in which form, is for that authority to say."
        ),
        table((("asked for", "left"), ("found in", "left")), rows),
    ]


def _reading() -> list[Data]:
    return [
        text(
            "Each row puts a published value beside what the program makes of the same input, in the unit of"
            " the source. ", {"strong": "Allowed"}, " is half a unit of the last printed digit, with a hair"
            " for ties; where it is wider, the reason stands above the table, and a formula is met to the"
            " accuracy"
            " of the computer (printed as a part of the value). ", {"strong": "Difference"}, " is ours less"
            " the published value, 0 where it is less than a hundredth of what is allowed.",
        ),
        text(
            "No tolerance is there for show: for each table a slip is named, made, and counted in how many"
            " rows it would be noticed. The tests of the program read the same tables; they fail when a row"
            " does not hold or a slip is not noticed."
        ),
        text(
            "The tables are plain text files in ", {"code": "shared/verification"},
            ". Correct or extend a copy with the editions you have at hand, and let ",
            {"code": "calcpack verification --tables DIR"},
            " compare it; the exit status is 1 when a value does not hold.",
        ),
    ]  # fmt: skip


def _deviations(found: Findings) -> list[Data]:
    return [
        text(
            "Where the program follows a rule of practice, its distance from a better theory or from a code's"
            " table is stated here and compared as the published values are: ", {"strong": "stated"},
            " is what this manual and the program's papers say.",
        ),
        _drawn(
            plate_figure(),
            "Left: what arrives along the long side of a panel 1 by 2. Right: the largest moment of a simple"
            " beam under either side, by the 45° rule over that by the elastic plate on unyielding sides.",
        ),
        *deviation_blocks(found),
        heading("Approximations in the clauses"),
        listing(
            "Critical moments and diagram factors of steel beams come from closed approximations: beside"
            " the eigenvalues above they err to the safe side but for a few hundredths; cases beyond"
            " those tabulated stand in the templates' assumptions.",
            "Rolled sections follow from nominal dimensions: areas and moduli differ from printed ones by"
            " the rounding of those.",
            "Hogging moments of a continuous beam use a constant stiffness; cracking does not move moments.",
        ),
    ]  # fmt: skip


def _audit() -> list[Data]:
    return [
        text("Nobody has to trust the program that made a sheet. From a pack or its folder:"),
        {
            "type": "plain",
            "text": COMMANDS,
        },
        text(
            "The audit shares no arithmetic with what it audits: formulas are worked out in thirty digits by"
            " an evaluator of its own, beams are solved again by finite elements, panels are divided again. A"
            " line can also be followed by hand: each shows its formula, the numbers in it with their units,"
            " the result, its clause and the lines it draws on."
        ),
        text(
            "The same input gives the same bytes on any day and in any folder, so that a reviewer with the"
            " same version can build the pack again and compare it file by file with its manifest."
        ),
    ]


def _responsibility() -> list[Data]:
    return [
        text({"strong": LOCAL}, role="caution"),
        listing(
            "The engineer in responsible charge chooses the model, the loads, the codes and their national"
            " parameters, checks input and output, and answers for the calculation.",
            "The codes in force where the building stands govern, in the edition the authority has adopted,"
            " with its amendments; national choices differ from the recommended values used here.",
            "A comparison that holds shows that the program does what the source does in that case. It does"
            " not show that the case is yours.",
            "Whoever changes the program, its shared data or its templates runs its tests and makes this"
            " manual again; its hashes then tell the two apart.",
        ),
    ]


# ---- the whole -----------------------------------------------------------------------------------------


def sections(found: Findings) -> list[Section]:
    """All sections in order."""
    templates = shipped_templates()
    topics = [
        Section(topic.key, topic.name, topic_blocks(found, topic), fresh=number == 0)
        for number, topic in enumerate(found.topics)
    ]
    return [
        Section("summary", "Summary", _summary(found), fresh=True),
        Section("identification", "Identification", _identification(), fresh=True),
        Section("asked", "What authorities ask of a program", _asked(found)),
        Section("scope", "Scope", scope(refer("validity"))),
        Section("theory", "Theory in brief", theory(templates, refer("deviations"))),
        Section("validity", "Limits of validity", validity(templates)),
        Section("reading", "How to read the comparisons", _reading()),
        *topics,
        Section("deviations", "Known deviations", _deviations(found), fresh=True),
        Section("audit", "How any number is found again", _audit()),
        Section("responsibility", "Responsibility", _responsibility()),
    ]


def _settled(data: Any, numbers: Mapping[str, int]) -> Any:
    """References put into words."""
    if isinstance(data, list | tuple):
        return [_settled(each, numbers) for each in data]
    if not isinstance(data, dict):
        return data
    if "refer" in data:
        return {"line": data.get("words") or f"section {numbers[data['refer']]}"}
    return {key: _settled(each, numbers) for key, each in data.items()}


def _numbered(blocks: Sequence[Data], number: int) -> list[Data]:
    count = 0
    found = []
    for block in blocks:
        if block["type"] == "heading":
            count += 1
            block = {**block, "number": f"{number}.{count}"}
        found.append(block)
    return found


def _kept(blocks: list[Data]) -> list[Data]:
    """Words before a table kept with it."""
    following = ""
    for block in reversed(blocks):
        if block["type"] == "text" and following in ("table", "list", "plain"):
            block["sticky"] = True
        else:
            following = block["type"]
    return blocks


def manual_data(found: Findings, paper_size: Literal["A4", "Letter"] = "A4") -> tuple[Data, Paper]:
    """What the page design reads."""
    parts_of = sections(found)
    numbers = {section.key: number for number, section in enumerate(parts_of, 1)}
    elsewhere = {f"section {number}": f"section/{key}" for key, number in numbers.items()}
    elsewhere |= {topic.name: f"section/{topic.key}" for topic in found.topics}
    mathematics = Mathematics()
    paper = Paper(mathematics)
    revised = max(topic.revised for topic in found.topics)
    whole = found.whole
    front: list[Data] = [
        {"type": "facts", "rows": [
            ["program", version()],
            ["tables revised", shown_date(revised)],
            ["compared", f"{whole.comparisons} published values, {whole.from_memory} of them from memory;"
             f" {whole.methods} other methods"],
            ["result", "every comparison holds" if found.holds else f"{whole.failing} do not hold"],
        ]},
        text({"strong": LOCAL + " " + CAUTION}, role="caution"),
    ]  # fmt: skip
    settled = [_settled(_numbered(section.blocks, numbers[section.key]), numbers) for section in parts_of]
    read = [read_blocks(blocks) for blocks in settled]
    data: Data = {
        "paper": PAPERS[paper_size],
        "title": TITLE,
        "description": "Theory, limits of validity and every comparison with published values",
        "authors": [],
        "keywords": [version(), "verification"],
        "date": [revised.year, revised.month, revised.day],
        "program": version(),
        "foot": with_known_letters(CAUTION),
        "front": paper.part("front", read_blocks(front)),
        "sections": [
            {
                "number": str(numbers[section.key]),
                "title": with_known_letters(section.title),
                "label": f"section/{section.key}",
                "fresh": section.fresh,
                "blocks": _kept(paper.part(section.key, blocks, elsewhere=elsewhere)),
            }
            for section, blocks in zip(parts_of, read, strict=True)
        ],
    }
    return {**data, "maths": paper.formulas}, paper


def manual_pdf(found: Findings, paper_size: Literal["A4", "Letter"] = "A4") -> bytes:
    """Set the manual.

    Parameters
    ----------
    found : Findings
    paper_size : str
        "A4" or "Letter".

    Returns
    -------
    bytes
        Equal for equal findings; the date is that of the tables.
    """
    data, paper = manual_data(found, paper_size)
    revised = max(topic.revised for topic in found.topics)
    return typeset(Setting("verification.typ", data, revised, files=paper.pictures)).pdf
