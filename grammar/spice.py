"""The reader of SPICE-style lists: simulator decks, exporters' netlists and plain lists of parts.

A list is read in four steps: physical lines to logical ones (`spice_lines`); the structure of cards and
blocks by the grammar `spice.lark` (`spice_blocks`); element lines by their letter (`spice_words`,
`spice_elements`, `spice_semiconductors`, `spice_sources`); and the levels of subcircuits to one flat netlist
(`spice_scope` takes in the cards of a level, `spice_hierarchy` its parts, `spice_nets` its nets).
"""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from pathlib import Path

from .collector import collector_paused
from .errors import NetlistError
from .netlist import Netlist, Place
from .spice_blocks import Definition
from .spice_element import is_value
from .spice_elements import read_element
from .spice_files import Files
from .spice_hierarchy import Expansion
from .spice_lines import Line, Source, indent
from .spice_nets import Level
from .spice_problems import Notes, Run
from .spice_scope import Scope
from .text import refuse_binary

FORMAT = "SPICE list"

_DESIGNATOR = re.compile(r"[A-Za-z]{1,4}(?:[_§][A-Za-z]+)?\d+[A-Za-z]?")


def read_spice(
    text: str,
    file: str,
    *,
    include_root: Path | None = None,
    allow_include: Sequence[Path] = (),
    keep: Callable[[str], bool] | None = None,
) -> Netlist:
    """Return the netlist of a SPICE-style list.

    text:          the whole list; its first line is the title, whatever it holds
    file:          the path for messages, and the folder that relative inclusions begin at
    include_root:  included files are read only in this folder's tree; None: none are
    allow_include: further trees that files may be included from
    keep:          tells of a subcircuit's name whether its instances stay parts, with the formal nodes as pin
                   names; all others whose subcircuit is at hand are flattened

    Raises NetlistError, the first error with up to 19 others beside it, where the list cannot be read.
    """
    refuse_binary(text, file)
    with collector_paused():
        return _read(text, file, include_root, allow_include, keep or (lambda _: False))


def _read(
    text: str, file: str, root: Path | None, allowed: Sequence[Path], keep: Callable[[str], bool]
) -> Netlist:
    run = Run(file, len(text))
    netlist = Netlist(file, FORMAT)
    source = Source(text, file, titled=True)
    files = Files(file, root, allowed, run)
    scope = Scope(run, files)
    expansion = Expansion(netlist, files, run, keep)
    try:
        items = files.parse(source)
        expansion.expand(Level(scope), items)
        run.problems.raise_any()
        if not netlist.parts and scope.definitions:
            _expand_last(scope, expansion, run.notes)
    except NetlistError as error:
        run.problems.add(error)
    run.problems.raise_any()
    if not netlist.parts:
        raise _no_parts(source)
    netlist.name = scope.title or _title(source)
    _note_title(source.title, files, run.notes)
    netlist.notes = run.notes.all(file)
    netlist.models = files.models
    netlist.files = files.read
    return netlist


def _expand_last(scope: Scope, expansion: Expansion, notes: Notes) -> None:
    """Take the last subcircuit for the board: exporters of hierarchies write nothing outside of them."""
    definition: Definition = list(scope.definitions.values())[-1]
    message = f"no part stands outside a subcircuit: {definition.name}, the last one, is taken as the board"
    notes.add("assumption", message, definition.line.place(0), definition.name)
    expansion.expand(Level(expansion.scope_of(definition, scope, {}, definition.line)), definition.items)


def _title(source: Source) -> str:
    """Return the title without the asterisk or keyword that exporters write before it."""
    text = source.text.partition("\n")[0].strip("* \t")
    return text[len(".title") :].strip() if text.casefold().startswith(".title") else text


def _note_title(title: Line, files: Files, notes: Notes) -> None:
    """Note a first line that reads as an element or a card: it may be a part that was meant to count."""
    first = title.text.split(maxsplit=1)[:1]
    if not first:
        return
    if first[0].casefold() == ".title":
        return
    if first[0].startswith(".") and first[0][1:].isalpha():
        message, subject = "the first line is the title, so this card is not read", first[0]
    elif _DESIGNATOR.fullmatch(first[0]) and _is_element(title, files):
        message, subject = f"the first line is the title, so {first[0]} is no part of the netlist", first[0]
    else:
        return
    notes.add("title-line", message, title.place(indent(title)), subject)


def _is_element(line: Line, files: Files) -> bool:
    try:
        element = read_element(line, files.known)
    except NetlistError:
        return False
    # "Rev2 of the fan" has the shape of a resistor, but no value.
    return element.letter not in ("R", "C", "L") or is_value(element.value or "0")


def _no_parts(source: Source) -> NetlistError:
    if not source.text.strip():
        return NetlistError(
            "the file is empty",
            Place(source.file, 0, 0),
            expected="a SPICE-style list: a title line, then one part a line",
            remedy="export the netlist again",
        )
    return NetlistError(
        "the list holds no part",
        Place(source.file, 0, 0),
        expected="below the title line, one part a line: its reference, its nodes, its value or model",
        remedy="check that the export wrote the parts; the first line is the title and is never a part",
    )
