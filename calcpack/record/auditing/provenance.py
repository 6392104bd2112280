"""Where a sheet comes from: its template, the input it was made from, the program, the manifest."""

from __future__ import annotations

import functools
import hashlib
import itertools
import tomllib
from collections.abc import Iterator, Mapping
from pathlib import Path
from typing import Any

import calcpack
from calcpack.job.house import house_folder
from calcpack.record.additions import grown_from
from calcpack.record.auditing.confined import READING
from calcpack.record.auditing.files import Target, is_file, leads_out, read_file, stays_below
from calcpack.record.auditing.findings import Finding, Verdict, good, unchecked, wrong
from calcpack.record.auditing.given import Notebook
from calcpack.record.auditing.reading import Record
from calcpack.record.folder import PACK

MOST_TABLES = 6
_GROUP = "provenance"
_SETTINGS = "template.toml"


def audit_provenance(
    record: Record,
    notebook: Notebook | None,
    input_digests: frozenset[str],
    job_folder: Path | None,
    earlier: bool = False,
) -> tuple[Finding, ...]:
    """Hold the stated hashes against the files they are of.

    Parameters
    ----------
    record : Record
    notebook : Notebook or None
    input_digests : set of str
        SHA-256 of the job's input, in whatever order its files were read; empty where it is not at hand.
    job_folder : Path or None
        Where the job's own templates may lie.
    earlier : bool
        The sheet was left as it was at an earlier revision, made from that one's input.
    """
    return (
        *_template(record.data["template"], job_folder),
        *_input(notebook, input_digests, earlier),
        *_program(notebook),
    )


def _template(stated: Mapping[str, Any], job_folder: Path | None) -> Iterator[Finding]:
    name, version, digest = (str(stated.get(key, "")) for key in ("name", "version", "sha256"))
    place = f"template {name[:60]}"
    folders = [house_folder("report_templates")] + ([job_folder] if job_folder else [])
    # A template's name is data: only a plain name, or a path that stays below, is looked up.
    found = [folder / name for folder in folders if stays_below(name) and is_file(folder / name / _SETTINGS)]
    if not found:
        yield unchecked(_GROUP, place, "there is no template of this name here to hold its hash against")
        return
    try:
        notebook = read_file(found[0] / "notebook.ipynb")
        settings = read_file(found[0] / _SETTINGS)
        here = _version(settings)
    except ValueError:
        yield unchecked(_GROUP, place, "the template here cannot be read")
        return
    ours = hashlib.sha256(notebook + settings).hexdigest()
    if ours == digest:
        if here == version:
            yield Finding(_GROUP, place, "hash of the template", digest[:16], ours[:16])
        else:
            yield wrong(
                _GROUP, place, "the hash is that of another version", printed=version[:40], other=here
            )
        return
    if here != version:
        yield unchecked(
            _GROUP,
            place,
            f"the sheet was made with version {version[:40]}, here is version {here}: "
            "the hash cannot be compared",
        )
        return
    yield Finding(
        _GROUP,
        place,
        "hash of the template",
        digest[:16],
        ours[:16],
        "",
        Verdict.WRONG,
        f"version {here} of the template as it is here has another hash",
    )


@functools.lru_cache(maxsize=16)
def _version(settings: bytes) -> str:
    return str(tomllib.loads(settings.decode("utf-8")).get("version", ""))


def input_digests(inputs: Mapping[str, bytes]) -> frozenset[str]:
    """SHA-256 over the job file and then its tables, in every order these may have been read in.

    Examples
    --------
    >>> len(input_digests({"job.toml": b"a", "beams.csv": b"b", "panels.csv": b"c"}))
    2
    """
    if not inputs:
        return frozenset()
    first, *tables = inputs.values()
    if len(tables) > MOST_TABLES:
        return frozenset()
    return frozenset(
        hashlib.sha256(b"".join((first, *order))).hexdigest() for order in itertools.permutations(tables)
    )


def _input(notebook: Notebook | None, digests: frozenset[str], earlier: bool) -> Iterator[Finding]:
    if notebook is None:
        yield unchecked(_GROUP, "input", "no notebook at hand that states the hash of its input")
        return
    stated = str(notebook.metadata.get("input", ""))
    if not digests:
        yield unchecked(_GROUP, "input", "the job file and its tables are not at hand; name them with --job")
    elif earlier:
        yield unchecked(_GROUP, "input", "left as it was at an earlier revision, made from that one's input")
    elif stated in digests:
        yield Finding(_GROUP, "input", "hash of job file and tables", stated[:16], stated[:16])
    else:
        yield wrong(
            _GROUP,
            "input",
            "the job file and its tables have another hash",
            printed=stated[:16],
            other=min(digests)[:16] if len(digests) == 1 else "",
        )


def _program(notebook: Notebook | None) -> Iterator[Finding]:
    if notebook is None:
        return
    made, here = str(notebook.metadata.get("program", "")), f"calcpack {calcpack.__version__}"
    if made == here:
        yield good(_GROUP, "program", here)
    else:
        yield unchecked(_GROUP, "program", f"the sheet was made by '{made[:60]}', this is {here}")


def audit_manifest(target: Target) -> Iterator[Finding]:
    """Every file the manifest names against its hash; and files inside the pack against those beside it."""
    if target.folder is None:
        return
    if target.manifest is None:
        yield unchecked("pack", "manifest.sha256", "there is no manifest")
        return
    only = None
    if not target.whole:
        stems = {sheet.record_name.rsplit(".", 1)[0] for sheet in target.sheets}
        only = {f"sheets/{stem}.{ending}" for stem in stems for ending in ("json", "ipynb", "pdf", "html")}
    for name, digest in target.manifest.items():
        if only is not None and name not in only:
            continue
        path = target.folder / name
        if not stays_below(name) or not is_file(path) or leads_out(path, target.folder):
            yield wrong("pack", name[:120], "the manifest names it, and it is not there")
            continue
        content = read_file(path)
        ours = hashlib.sha256(content).hexdigest()
        if name == PACK and ours != digest and grown_from(content, digest):
            yield good("pack", name, "the file of the manifest, with signatures appended")
        elif ours == digest:
            yield Finding("pack", name, "hash of the file", digest[:16], ours[:16])
        else:
            yield wrong(
                "pack", name, "the file is not the one of the manifest", printed=digest[:16], other=ours[:16]
            )
    for sheet in target.sheets:
        if only is None and f"sheets/{sheet.record_name}" not in target.manifest:
            yield wrong("pack", f"sheets/{sheet.record_name}", "the manifest does not name it")
    pack = target.pack
    attached = READING.attached(read_file(pack), pack.name) if pack is not None else {}
    for name, data in attached.items():
        path = target.folder / "sheets" / name
        if "/" in name or not stays_below(name) or not is_file(path):
            continue
        if read_file(path) == data:
            yield good("pack", f"{name} in the pack", "equals the file")
        else:
            yield wrong("pack", f"{name} in the pack", "the pack carries another file than the folder")
