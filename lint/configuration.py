"""The file `pwmlint.toml`: what a team always asks for, so that nobody has to say it again.

The file may come with a change that nobody has read yet. So nothing in it leads out of its own folder, or
runs a program, and a report that it names replaces nothing but a report.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Generic, TypeVar

from ..grammar.errors import NetlistError
from ..grammar.netlist import Place
from .confined_path import EXPECTED, PathRefusedError, confined
from .estimate import Method
from .report import FORMATS, GATES
from .report.delivery import STANDARD_OUTPUT, Target
from .toml_document import Table, TomlDocument
from .verdict import Level
from .wording import one_of

OFF = "off"
LEVELS = (*(level.value for level in Level), OFF)

_KEYS = (
    "gate",
    "strict",
    "worst_case",
    "brief",
    "parts_list",
    "deviations",
    "allow_include",
    "rules",
    "reports",
    "topics",
    "levels",
)

_ENDINGS = (".txt", ".log", ".json", ".sarif", ".xml", ".md", ".html")
_EXPECTED_OUTPUT = f'"-", or a file with "report" in its name that ends in {one_of(_ENDINGS)}'

_Value = TypeVar("_Value")
_Value_co = TypeVar("_Value_co", covariant=True)


class ConfigurationError(NetlistError):
    """A configuration that cannot be read, or that asks for what it may not."""


@dataclass(frozen=True, slots=True)
class Setting(Generic[_Value_co]):
    """A value and where it comes from: in words, and as a place where that is a file."""

    value: _Value_co
    source: str
    place: Place | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Configuration:
    """The settings of one file; None where it does not tell.

    gate:      one of GATES; worst_case: one of the methods
    brief, parts_list, deviations, allow_include, rules: paths, all below the folder of the file
    reports:   what is written, and where to
    topics:    topic to one of LEVELS; rules by id: `levels`. Neither is checked against the rules yet
    document:  the file, for mistakes that only the rules can tell
    """

    file: str
    document: TomlDocument
    gate: Setting[str] | None = None
    strict: Setting[bool] | None = None
    worst_case: Setting[str] | None = None
    brief: Setting[Path] | None = None
    parts_list: Setting[Path] | None = None
    deviations: Setting[Path] | None = None
    allow_include: Setting[tuple[Path, ...]] | None = None
    rules: Setting[Path] | None = None
    reports: Setting[tuple[Target, ...]] | None = None
    topics: Mapping[str, Setting[str]] = field(default_factory=dict[str, Setting[str]])
    levels: Mapping[str, Setting[str]] = field(default_factory=dict[str, Setting[str]])


def read_configuration(path: str | Path) -> Configuration:
    """Read a configuration; raise ConfigurationError, with every mistake in it, where it cannot be used."""
    document = TomlDocument(path, ConfigurationError)
    root = document.root
    root.know(_KEYS)
    folder = Path(path).parent
    configuration = Configuration(
        file=document.file,
        document=document,
        gate=_set(root, "gate", root.choice("gate", GATES)),
        strict=_set(root, "strict", root.flag("strict")),
        worst_case=_set(root, "worst_case", root.choice("worst_case", [method.value for method in Method])),
        brief=_set(root, "brief", _file(root, "brief", folder)),
        parts_list=_set(root, "parts_list", _file(root, "parts_list", folder)),
        deviations=_set(root, "deviations", _file(root, "deviations", folder)),
        allow_include=_set(root, "allow_include", _folders(root, "allow_include", folder)),
        rules=_set(root, "rules", _folder(root, "rules", root.text("rules"), folder)),
        reports=_set(root, "reports", _reports(root.table("reports"), folder)),
        topics=_topics(root.table("topics"), document),
        levels=_levels(root.table("levels"), document),
    )
    document.finish()
    return configuration


def _set(table: Table, key: str, value: _Value | None) -> Setting[_Value] | None:
    """Return a setting with its place, or None where there is no value."""
    if value is None:
        return None
    place = table.value_place(key)
    return Setting(value, f"{place.file}:{place.line}", place)


def _file(table: Table, key: str, folder: Path) -> Path | None:
    return _path(table, key, table.text(key), folder, Path.is_file, "file")


def _folder(table: Table, key: str, text: str | None, folder: Path) -> Path | None:
    return _path(table, key, text, folder, Path.is_dir, "folder")


def _folders(table: Table, key: str, folder: Path) -> tuple[Path, ...] | None:
    texts = table.texts(key, 'a list of folders such as ["models", "library/diodes"]')
    if texts is None:
        return None
    return tuple(filter(None, (_folder(table, key, text, folder) for text in texts)))


def _path(
    table: Table, key: str, text: str | None, folder: Path, is_there: Callable[[Path], bool], kind: str
) -> Path | None:
    """Return the path of a file or folder that is there, or None where a mistake is noted."""
    path = _confined(table, key, text, folder)
    if path is not None and not is_there(path):
        table.mistake(key, f'there is no {kind} "{text}" beside this file', remedy="check the path")
        return None
    return path


def _confined(table: Table, key: str, text: str | None, folder: Path) -> Path | None:
    if text is None:
        return None
    try:
        return confined(folder, text)
    except PathRefusedError as refusal:
        remedy = "name a path below this file, or give it on the command line"
        table.mistake(key, f'the path "{text}" {refusal}', expected=EXPECTED, remedy=remedy)
        return None


def _reports(table: Table, folder: Path) -> tuple[Target, ...] | None:
    """Return the reports in the order of the file: each format has one output."""
    table.know(tuple(FORMATS))
    targets: list[Target] = []
    for key in (key for key in table.keys if key in FORMATS):
        output = _output(table, key, folder)
        if output is None:
            continue
        if output in [target.output for target in targets]:
            table.mistake(key, "two reports would go to one place", remedy="give each its own file")
        targets.append(Target(key, output))
    return tuple(targets) or None


def _output(table: Table, key: str, folder: Path) -> str | None:
    """Return where a report goes; a name that might be anything but a report's is a mistake."""
    text = table.text(key, _EXPECTED_OUTPUT)
    if text is None or text == STANDARD_OUTPUT:
        return text
    path = _confined(table, key, text, folder)
    if path is None:
        return None
    for name in (path.name, path.resolve().name):  # a link must not lead to another kind of file
        if "report" not in name or not name.endswith(_ENDINGS):
            remedy = f'such as "board.report.{key}", or give --format and --output on the command line'
            table.mistake(key, f'"{text}" is no name of a report', expected=_EXPECTED_OUTPUT, remedy=remedy)
            return None
    if path.exists() and not path.is_file():
        table.mistake(key, f'"{text}" is there and no file', expected=_EXPECTED_OUTPUT)
        return None
    return str(path)


def _topics(table: Table, document: TomlDocument) -> dict[str, Setting[str]]:
    return _words([(key, table, key) for key in table.keys], document)


def _levels(table: Table, document: TomlDocument) -> dict[str, Setting[str]]:
    """Return rule ids with their levels: `"dead-time.range" = "off"`, or without the quotes."""
    rows: list[tuple[str, Table, str]] = []
    for key in table.keys:
        inner = table.table(key) if table.is_table(key) else None
        rows += [(f"{key}.{last}", inner, last) for last in inner.keys] if inner else [(key, table, key)]
    return _words(rows, document)


def _words(rows: Iterable[tuple[str, Table, str]], document: TomlDocument) -> dict[str, Setting[str]]:
    """Return names with their levels; a row is the name, the table that it stands in, and its key there."""
    found: dict[str, Setting[str]] = {}
    for name, table, key in rows:
        if document.has_enough:
            break
        setting = _set(table, key, table.choice(key, LEVELS))
        if name in found:
            document.mistake(f'"{name}" is told twice', table.value_place(key), remedy="remove one of them")
        elif setting is not None:
            found[name] = setting
    return found
