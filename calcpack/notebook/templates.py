"""Sheet templates: a folder with a notebook, and what a job may set in it."""

from __future__ import annotations

import hashlib
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass, replace
from pathlib import Path
from types import MappingProxyType
from typing import Any, Literal

import nbformat
from pydantic import Field, ValidationError

from calcpack.job.errors import CalcpackError, Problem, nearest
from calcpack.job.house import house_folder
from calcpack.job.model import DataFile, Frozen
from calcpack.job.units import parse_quantity

NOTEBOOK = "notebook.ipynb"
SETTINGS = "template.toml"


class TemplateStamp(Frozen):
    """Which template made a sheet."""

    name: str
    version: str
    sha256: str
    title: str
    assumptions: tuple[str, ...] = ()
    not_covered: tuple[str, ...] = ()


class Parameter(Frozen):
    """A key that a job may put under ``[beam.design]``."""

    says: str
    type: Literal["number", "integer", "text", "choice", "true or false", "table", "quantity", "data file"]
    of: str = ""  # for a quantity its kind: "length", "stress", ...
    choices: tuple[str, ...] = ()  # for a number: words that may stand in its place
    keys: dict[str, Parameter] = Field(default_factory=dict)  # of a table, or of what a data file holds
    keys_of: str = ""  # a table parameter of the template whose keys it has as well
    required: bool = False  # in a data file
    minimum: float | None = None
    maximum: float | None = None
    default: Any = None


class TemplateSettings(Frozen):
    """What template.toml says."""

    name: str
    version: str
    title: str
    says: str
    codes: tuple[str, ...] = ()
    needs: tuple[Literal["section", "material"], ...] = ()
    assumptions: tuple[str, ...] = ()
    not_covered: tuple[str, ...] = ()
    appendix: bool = False  # made once a pack, not for a beam
    parameters: dict[str, Parameter] = Field(default_factory=dict)


@dataclass(frozen=True)
class Template:
    """A sheet template, read and stamped.

    Parameters
    ----------
    folder : Path
    settings : TemplateSettings
    notebook : str
        The notebook's text as shipped.
    sha256 : str
        Over the notebook and the settings.
    """

    folder: Path
    settings: TemplateSettings
    notebook: str
    sha256: str

    @property
    def stamp(self) -> TemplateStamp:
        """What a sheet says of its template."""
        return TemplateStamp(
            name=self.settings.name,
            version=self.settings.version,
            sha256=self.sha256,
            title=self.settings.title,
            assumptions=self.settings.assumptions,
            not_covered=self.settings.not_covered,
        )

    def settle(
        self, design: Mapping[str, Any], mark: str, files: Mapping[str, DataFile] = MappingProxyType({})
    ) -> dict[str, Any]:
        """Check a beam's design keys against the template's, and fill in the defaults.

        Parameters
        ----------
        design : mapping
            As the job gives them.
        mark : str
        files : mapping
            The job's data files by name; a key that names one gets what it holds.

        Raises
        ------
        CalcpackError
            Every key that is unknown or does not fit, with what would be right.
        """
        problems: list[Problem] = []
        settled = _settle(design, self.settings.parameters, f"beam {mark}", "design", problems, files)
        if problems:
            raise CalcpackError(*problems)
        return settled


def template_names() -> tuple[str, ...]:
    """Names of the templates that come with the program."""
    folder = house_folder("report_templates")
    return tuple(sorted(path.parent.name for path in folder.glob(f"*/{SETTINGS}")))


def find_template(name: str, job_folder: Path) -> Template:
    """Find a template by name among the shipped ones, or as a folder beside the job.

    Raises
    ------
    CalcpackError
        No such template, or one that cannot be read.
    """
    shipped = house_folder("report_templates") / name if name in template_names() else None
    folder = shipped or (job_folder / name)
    if not shipped and not (folder / SETTINGS).is_file():
        raise CalcpackError(
            f"no template '{name}'",
            remedy=f"{nearest(name, template_names())}, or a path to a folder with {NOTEBOOK} and {SETTINGS}",
            key="template",
        )
    return read_template(folder)


def read_template(folder: Path) -> Template:
    """Read a template's two files."""
    try:
        notebook = (folder / NOTEBOOK).read_bytes()
        settings_text = (folder / SETTINGS).read_bytes()
        settings = TemplateSettings.model_validate(tomllib.loads(settings_text.decode("utf-8")))
        nbformat.reads(notebook.decode("utf-8"), as_version=4)  # type: ignore[no-untyped-call]
    except ValidationError as error:
        first = error.errors()[0]
        key = ".".join(str(part) for part in first["loc"])
        raise CalcpackError(first["msg"], file=f"{folder.name}/{SETTINGS}", key=key) from None
    except (OSError, ValueError) as error:
        detail = error.strerror if isinstance(error, OSError) else "it is not a readable template"
        raise CalcpackError(f"the template '{folder.name}' cannot be read: {detail}") from None
    digest = hashlib.sha256(notebook + settings_text).hexdigest()
    return Template(folder, _shared_keys(settings), notebook.decode("utf-8"), digest)


def _shared_keys(settings: TemplateSettings) -> TemplateSettings:
    """The settings with every ``keys_of`` followed."""

    def followed(parameter: Parameter) -> Parameter:
        keys = {key: followed(each) for key, each in parameter.keys.items()}
        if parameter.keys_of in settings.parameters:
            keys = {**settings.parameters[parameter.keys_of].keys, **keys}
        return parameter.model_copy(update={"keys": keys})

    return settings.model_copy(
        update={"parameters": {key: followed(each) for key, each in settings.parameters.items()}}
    )


def _settle(
    given: Mapping[str, Any],
    known: Mapping[str, Parameter],
    mark: str,
    prefix: str,
    problems: list[Problem],
    files: Mapping[str, DataFile],
) -> dict[str, Any]:
    settled = {}
    for key in given:
        if key not in known:
            problems.append(
                Problem("there is no such key", nearest(key, known), mark=mark, key=_joined(prefix, key))
            )
    for key, parameter in known.items():
        path = _joined(prefix, key)
        if key not in given:
            if parameter.required:
                problems.append(
                    Problem("this key is missing", f"it says {parameter.says}", mark=mark, key=path)
                )
            table = parameter.type == "table"
            settled[key] = (
                _settle({}, parameter.keys, mark, path, problems, files) if table else parameter.default
            )
            continue
        try:
            settled[key] = _value(given[key], parameter, mark, path, problems, files)
        except CalcpackError as error:
            problems += [problem.at(mark=mark, key=path) for problem in error.problems]
        except ValueError as error:
            problems.append(Problem(str(error), f"it is the {parameter.says}", mark=mark, key=path))
    return settled


def _joined(prefix: str, key: str) -> str:
    return f"{prefix}.{key}" if prefix else key


def _value(
    given: Any,
    parameter: Parameter,
    mark: str,
    path: str,
    problems: list[Problem],
    files: Mapping[str, DataFile],
) -> Any:
    match parameter.type:
        case "table":
            if not isinstance(given, Mapping):
                raise ValueError(f"a table of {', '.join(parameter.keys)} is expected")
            return _settle(given, parameter.keys, mark, path, problems, files)
        case "data file":
            if not isinstance(given, str):
                raise ValueError("the name of a set, or of a file beside the job file, is expected")
            return _held(files[given], parameter, problems) if given in files else given
        case "quantity":
            return parse_quantity(given, parameter.of)
        case "true or false":
            if not isinstance(given, bool):
                raise ValueError("true or false is expected")
            return given
        case "choice":
            if given not in parameter.choices:
                raise ValueError(f"'{given}' is not known; {nearest(str(given), parameter.choices)}")
            return given
        case "text":
            if not isinstance(given, str):
                raise ValueError("a text is expected")
            return given
    if isinstance(given, str) and given in parameter.choices:
        return given
    return _number(given, parameter)


def _held(file: DataFile, parameter: Parameter, problems: list[Problem]) -> dict[str, Any]:
    """What a data file holds, checked like the design keys themselves; each problem with its own line."""
    found: list[Problem] = []
    held = _settle(file.data, parameter.keys, "", "", found, {})
    for each in found:
        key = each.key or ""
        while key and key not in file.lines:
            key = key.rpartition(".")[0]
        problems.append(replace(each, file=file.name, line=file.lines.get(key, 1)))
    return {"file": file.name, "sha256": file.sha256, **held}


def _number(given: Any, parameter: Parameter) -> float | int:
    if isinstance(given, bool) or not isinstance(given, (int, float)):
        raise ValueError(f"a plain number is expected, not '{given}'")
    if parameter.type == "integer" and not isinstance(given, int):
        raise ValueError(f"a whole number is expected, not {given}")
    if parameter.minimum is not None and not given >= parameter.minimum:
        raise ValueError(f"{given} is below the least value {parameter.minimum:g}")
    if parameter.maximum is not None and not given <= parameter.maximum:
        raise ValueError(f"{given} is above the largest value {parameter.maximum:g}")
    return given
