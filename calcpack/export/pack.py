"""What a pack is made of: its sheets, the sections around them, the files it names."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from calcpack.export import blocks as kinds
from calcpack.export.blocks import Block, levelled, read_blocks
from calcpack.export.content import SheetContent
from calcpack.export.tables import reaction_blocks, schedule_blocks
from calcpack.export.typesetting import Attached
from calcpack.job.model import Header, Submission


@dataclass(frozen=True)
class Section:
    """A section of the pack that is not a sheet: a title and its blocks."""

    title: str
    blocks: tuple[Block, ...]

    @classmethod
    def of(cls, title: str, blocks: Sequence[Mapping[str, Any]]) -> Section:
        """A section from blocks in their data form."""
        return cls(title, levelled(read_blocks(list(blocks))))


@dataclass(frozen=True)
class PackedFile:
    """A file of the output folder, for the manifest."""

    name: str
    sha256: str
    says: str = ""

    @classmethod
    def of(cls, name: str, data: bytes, says: str = "") -> PackedFile:
        """A file with the hash of its content."""
        return cls(name, hashlib.sha256(data).hexdigest(), says)


@dataclass(frozen=True)
class Pack:
    """All a pack is made of.

    Parameters
    ----------
    header, submission : Header, Submission
    program, input_digest : str
        Program and version; hash of the job's input.
    sheets : tuple of SheetContent
        In the order they are bound.
    supports : mapping
        Column or wall -> case -> load [kN], unfactored.
    key_plan : Figure block or None
        The framing plan.
    front : tuple of Section
        What follows the index: for a resubmission the list of changes and the answers.
    basis : tuple of Section
        The basis of design.
    appendices : tuple of SheetContent
        Bound after the sheets.
    annex : tuple of Section
        What stands at the very end, before the manifest: the input as it was read.
    files : tuple of PackedFile
        The manifest: every other file of the output folder.
    attached : tuple of Attached
        Files carried inside beside the sheets' own; only where attachments are wanted.
    """

    header: Header
    submission: Submission
    program: str
    input_digest: str
    sheets: tuple[SheetContent, ...]
    supports: Mapping[str, Mapping[str, float]] = field(default_factory=dict)
    key_plan: kinds.Figure | None = None
    front: tuple[Section, ...] = ()
    basis: tuple[Section, ...] = ()
    appendices: tuple[SheetContent, ...] = ()
    annex: tuple[Section, ...] = ()
    files: tuple[PackedFile, ...] = ()
    attached: tuple[Attached, ...] = ()

    @property
    def bound(self) -> tuple[SheetContent, ...]:
        """Sheets and appendices in order."""
        return (*self.sheets, *self.appendices)

    @property
    def sections(self) -> list[Section]:
        """All sections between the index and the sheets."""
        system = self.header.units
        sections = [*self.front, *self.basis]
        if self.key_plan is not None:
            sections.append(Section("Framing plan", (self.key_plan,)))
        if self.sheets:
            sections.append(Section("Schedule of beams", schedule_blocks(self.sheets, system)))
        if self.supports:
            sections.append(Section("Reactions", reaction_blocks(self.supports, system)))
        return sections
