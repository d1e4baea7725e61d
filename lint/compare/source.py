"""Where a revision comes from: a file, standard input, or a git revision as `REV:path`."""

from __future__ import annotations

import re
import sys
import tempfile
from collections.abc import Callable, Generator
from contextlib import contextmanager
from dataclasses import dataclass, fields, is_dataclass, replace
from enum import Enum
from pathlib import Path
from typing import Any, TypeVar, cast

from ...grammar.errors import NetlistError
from ...grammar.netlist import Place
from ..found_files import STANDARD_INPUT
from .git import GitError
from .revision_files import write_folder

_Thing = TypeVar("_Thing")

_DRIVE = re.compile(r"[A-Za-z]:[\\/]")
_REVISION = re.compile(r"(?P<revision>(?:[^:{]|\{[^}]*\})*):(?P<path>.*)", re.DOTALL)


@dataclass(frozen=True, slots=True)
class Source:
    """A netlist file that can be read now.

    path:   where it is
    hidden: the beginning of paths that nobody shall see, empty where there is none
    shown:  what stands for it in reports and messages
    """

    path: str
    hidden: str = ""
    shown: str = ""

    def read(self, reader: Callable[[Source], _Thing]) -> _Thing:
        """Return what `reader` makes of it; an error comes under the name that is shown."""
        try:
            return reader(self)
        except NetlistError as error:
            self.rename(error)
            raise

    def named(self, thing: _Thing) -> _Thing:
        """Return a value with every text in it under the name that is shown."""
        return cast(_Thing, self._named(thing)) if self.hidden else thing

    def _named(self, thing: Any) -> Any:
        if isinstance(thing, str):
            return thing if isinstance(thing, Enum) else thing.replace(self.hidden, self.shown)
        if isinstance(thing, tuple):
            items = [self._named(item) for item in cast("tuple[Any, ...]", thing)]
            return Place(*items) if isinstance(thing, Place) else tuple(items)
        if is_dataclass(thing) and not isinstance(thing, type):
            return replace(
                thing, **{one.name: self._named(getattr(thing, one.name)) for one in fields(thing)}
            )
        return thing

    def rename(self, error: NetlistError) -> None:
        """Put an error under the name that is shown."""
        for one in (error, *error.also):
            one.message, one.place = self.named(one.message), self.named(one.place)
            one.expected, one.remedy = self.named(one.expected), self.named(one.remedy)


@contextmanager
def opened(text: str) -> Generator[Source]:
    """Give the source that `text` names, for as long as it is needed.

    A file that exists is meant as such, whatever its name; so is a path that begins with a drive letter.
    Raises NetlistError where a git revision or its file cannot be had.
    """
    if text == STANDARD_INPUT:
        with _folder() as folder:
            path = folder / "list"
            path.write_bytes(sys.stdin.buffer.read())
            yield Source(str(path), str(path), "<standard input>")
        return
    named = _REVISION.fullmatch(text)
    if named is None or _DRIVE.match(text) or _exists(text):
        yield Source(text)
        return
    with _folder() as folder:
        try:
            path = write_folder(named["revision"], named["path"], folder)
        except GitError as error:
            raise NetlistError(error.message, Place(text, 0, 0), remedy=error.remedy) from None
        yield Source(path.as_posix(), f"{folder.as_posix()}/", f"{named['revision']}:")


def _exists(text: str) -> bool:
    try:
        return Path(text).exists()
    except (OSError, ValueError):
        return False


@contextmanager
def _folder() -> Generator[Path]:
    with tempfile.TemporaryDirectory(prefix="pwmlint-") as folder:
        yield Path(folder).resolve()
