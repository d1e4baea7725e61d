"""Files that a SPICE-style list includes: found only inside the trees that the caller allows."""

from __future__ import annotations

from collections.abc import Collection, Sequence
from pathlib import Path, PurePath
from typing import NamedTuple

from .errors import NetlistError
from .spice_blocks import Card, Conditional, Definition, Item, Section, parse
from .spice_lines import Source
from .spice_problems import Run
from .text import decode

MOST_INCLUSIONS = 1000
LARGEST_FILE = 64_000_000
"""Bytes of one included file."""


COST_OF_ITEM = 2000
"""For a card or a run of lines that is taken in once more: its time counts, more than its bytes."""

_MISSING = "missing-library"


class Inclusion(NamedTuple):
    """What a card brings in; `key` names the file and section."""

    key: str
    items: list[Item]


class Files:
    """The files of one run, each read once.

    read:   the files, in the order of their first reading
    models: `.model` name to its type, both casefolded, of every file read so far
    known:  the names of models and subcircuits, casefolded; subcircuits: the names of these alone
    """

    def __init__(self, file: str, root: Path | None, allowed: Sequence[Path], run: Run) -> None:
        self.read: list[str] = [file]
        self.models: dict[str, str] = {}
        self.known: set[str] = set()
        self.subcircuits: set[str] = set()
        self._root = root
        self._trees = [tree.resolve() for tree in ([root, *allowed] if root else [])]
        self._run = run
        self._items: dict[Path, list[Item] | None] = {}
        self._inclusions = 0

    def parse(self, source: Source) -> list[Item]:
        """Return the items of a source, and remember its models."""
        items = parse(source, self._run.problems)
        if source.doubtful_comment:
            message = "`$` begins a comment here, though some exporters begin names with it"
            self._run.notes.add("assumption", message, source.doubtful_comment, "$")
        pending: list[Sequence[Item]] = [items]
        while pending:
            for item in pending.pop():
                if isinstance(item, Card) and item.keyword == "model":
                    self._remember_model(item.line.text)
                elif isinstance(item, Definition):
                    self.subcircuits.add(item.name.casefold())
                    pending.append(item.items)
                elif isinstance(item, Section):
                    pending.append(item.items)
                elif isinstance(item, Conditional):
                    pending += [branch.items for branch in item.branches]
        self.known |= self.subcircuits
        return items

    def _remember_model(self, text: str) -> None:
        """Remember `.model NAME TYPE(...)`, or `.model NAME AKO: OTHER TYPE(...)`."""
        words = text.replace("(", " ").split(maxsplit=5)[1:]
        if not words:
            return
        name = words[0].casefold()
        self.known.add(name)
        if len(words) > 1 and words[1].casefold() == "ako:":
            del words[1:3]
        elif len(words) > 1 and words[1].casefold().startswith("ako:"):
            del words[1]
        if len(words) > 1:
            self.models.setdefault(name, words[1].casefold())

    def include(self, card: Card, opened: Collection[str]) -> Inclusion | None:
        """Return what an `.include` or `.lib` card brings in.

        `opened` holds the keys of the inclusions that the card stands in. None where the file is not at hand,
        which is noted, or where the inclusion is an error.
        """
        self._inclusions += 1
        index, readings = _readings(card)
        if not readings:
            self._run.problems.add(
                card.line.error(
                    index, f"`.{card.keyword}` without a file", "the name of a file", "name the file"
                )
            )
            return None
        refusal = ""
        for text, section in readings:
            path, reason = self._find(text, Path(card.line.source.file).parent)
            refusal = refusal or reason
            if path is None:
                continue
            key = f"{path.resolve()} {section}"
            if key in opened or self._inclusions > MOST_INCLUSIONS:
                self._run.problems.add(_endless(card, index, text, looping=key in opened))
                return None
            items = self._load(path, card, index)
            if items is None:
                return None
            if not section:
                return Inclusion(key, items)
            for item in items:
                if isinstance(item, Section) and item.name == section.casefold():
                    return Inclusion(key, item.items)
            refusal = f"{path} has no section {section}"
        text = readings[0][0]
        self._run.notes.add(_MISSING, f"{text} is not read: {refusal}", card.line.place(index), text)
        return None

    def _find(self, text: str, folder: Path) -> tuple[Path | None, str]:
        """Return the file that `text` names, or None and the reason."""
        if self._root is None:
            return None, "no file may be included here"
        name = text.replace("\\", "/")
        outside = False
        # Exporters write the path of the computer they ran on; the file may lie beside the netlist.
        for candidate in [
            folder / name,
            *(tree / name for tree in self._trees),
            folder / PurePath(name).name,
        ]:
            try:
                real = candidate.resolve()
                inside = any(_is_open(real, tree) for tree in self._trees)
                if inside and real.is_file():
                    return candidate, ""
            except (OSError, RuntimeError, ValueError) as error:  # too long, a loop of links, a NUL
                return None, f"no usable file name ({type(error).__name__})"
            outside = outside or not inside
        if outside:
            return None, "it lies outside the netlist's folder, or is hidden; allow its folder to be included"
        return None, "there is no such file"

    def _load(self, path: Path, card: Card, index: int) -> list[Item] | None:
        """Return the items of a file, read at most once."""
        real = path.resolve()
        if real not in self._items:
            self._items[real] = self._read(path, card, index)
            return self._items[real]
        items = self._items[real]
        self._run.budget.spend(COST_OF_ITEM * len(items or ()), card.line)
        return items

    def _read(self, path: Path, card: Card, index: int) -> list[Item] | None:
        try:
            if path.stat().st_size > LARGEST_FILE:
                reason = f"it is larger than {LARGEST_FILE} bytes"
            else:
                text = decode(path.read_bytes(), str(path))
                self.read.append(str(path))
                return self.parse(Source(text, str(path), titled=False))
        except OSError as error:
            reason = error.strerror or "it cannot be opened"
        except NetlistError as error:
            reason = error.message
        self._run.notes.add(_MISSING, f"{path} is not read: {reason}", card.line.place(index), str(path))
        return None


def _is_open(real: Path, tree: Path) -> bool:
    """Tell whether a file lies in a tree, and in nothing hidden there.

    A repository keeps credentials in a hidden folder, and an error quotes the file that it is about.
    """
    return real.is_relative_to(tree) and not any(
        word.startswith(".") for word in real.relative_to(tree).parts
    )


def _readings(card: Card) -> tuple[int, list[tuple[str, str]]]:
    """Return where the file name of an inclusion stands, and what it may mean: pairs of file and section.

    A name may be quoted, and an unquoted one may hold blanks; the last word of `.lib` may be a section.
    """
    text = card.line.text
    begin = text.index(".") + 1 + len(card.keyword)
    argument = text[begin:].strip()
    if not argument:
        return len(text.rstrip()), []
    index = text.index(argument, begin)
    quote = argument[0]
    if quote in "\"'" and quote in argument[1:]:
        name, _, section = argument[1:].partition(quote)
        return index, [(name, section.strip() if card.keyword == "lib" else "")]
    words = argument.rsplit(maxsplit=1)
    readings = [(argument, "")]
    if card.keyword == "lib" and len(words) == 2:
        readings.append((words[0].strip("\"'"), words[1]))
    return index, readings


def _endless(card: Card, index: int, text: str, *, looping: bool) -> NetlistError:
    if looping:
        return card.line.error(
            index,
            f"{text} includes itself",
            "a file that is not being read already",
            "remove one of the inclusions that form the loop",
        )
    return card.line.error(
        index,
        f"more than {MOST_INCLUSIONS} inclusions",
        "files that include each other once",
        "include each library once, from the netlist itself",
    )
