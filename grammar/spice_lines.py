"""Physical lines of a SPICE-style list to logical lines, without losing where anything stands.

Comments are overwritten with blanks and continuation lines are joined in place: the cleaned text is as long
as the original, character for character, and a line end that was joined becomes a carriage return, which is
white space to every later step. So an offset is a place in both texts and no table of positions is kept.
"""

from __future__ import annotations

import re
from bisect import bisect_right
from collections.abc import Iterable, Iterator
from functools import cached_property
from itertools import accumulate
from typing import NamedTuple

from .errors import NetlistError
from .netlist import Place

JOINED = "\r"
"""Stands for the line end before a continuation line; the reader has removed all others before."""

LONGEST_LINE = 1_000_000
"""Characters of a logical line. A real card is far shorter; long tables belong into files of their own."""

_BEHIND_CARET = 200

_COMMENT_LINE = re.compile(r"\n[^\S\n]*(?:[*#]|//)[^\n]*")
_CONTINUATION = re.compile(r"\n[^\S\n]*\+")
_QUOTED_OR_COMMENT = re.compile(
    r"""
      "[^"\n]*"
    | (?<![^\s=(,]) '[^'\n]*'           # an apostrophe inside a name, as in in1', opens nothing
    | \{ [^{}\n]* (?:\{[^{}\n]*\}[^{}\n]*)* \}
    | (?P<semicolon> ; )
    | (?<![^\s,]) (?P<slashes> // )
    | (?<![^\s,]) (?P<dollar> \$ )
    """,
    re.VERBOSE,
)
# The names that one family of simulators generates; where they occur a dollar sign begins a name.
_DOLLAR_NAME = re.compile(r"(?<![^\s,(])\$[A-Za-z]+_\w")


class Line(NamedTuple):
    """A logical line: its cleaned text, and the source and line number where it begins."""

    source: Source
    number: int
    text: str

    def place(self, index: int) -> Place:
        """Return the place of the character at `index` of the text, on whichever physical line it stands."""
        if JOINED not in self.text:
            return Place(self.source.file, self.number, index + 1)
        before = self.text.count(JOINED, 0, index)
        return Place(self.source.file, self.number + before, index - self.text.rfind(JOINED, 0, index))

    def places(self, indexes: Iterable[int]) -> Iterator[Place]:
        """Yield the place of each of the rising `indexes`, in one pass over the text."""
        number, start, done = self.number, 0, 0
        for index in indexes:
            joined = self.text.count(JOINED, done, index)
            if joined:
                number += joined
                start = self.text.rindex(JOINED, done, index) + 1
            done = index
            yield Place(self.source.file, number, index - start + 1)

    def error(self, index: int, message: str, expected: str, remedy: str) -> NetlistError:
        """Return the error `message` at `index`, with the physical line as excerpt."""
        return self.source.error(self.place(index), message, expected, remedy)


class Source:
    """The text of one file and its cleaned twin.

    titled:       the first logical line is a title, and blank in the cleaned text
    dollar_names: `$` begins names here; otherwise it begins a comment after a blank
    doubtful_comment: place of the first comment that might be such a name, None where there is none
    """

    def __init__(self, text: str, file: str, *, titled: bool) -> None:
        if "\r" in text:
            text = text.replace("\r\n", "\n").replace("\r", "\n")
        self.file = file
        self.text = text
        self.dollar_names = "$" in text and _DOLLAR_NAME.search(text) is not None
        self.title = Line(self, 1, "")
        cleaned, doubtful = _without_comments(text, dollar_names=self.dollar_names)
        self.doubtful_comment = Place(file, *doubtful) if doubtful else None
        self.clean = _joined(cleaned) + "\n"
        if titled:
            end = self.clean.index("\n")
            self.title = Line(self, 1, self.clean[:end])
            self.clean = _blank(self.clean[:end]) + self.clean[end:]

    @cached_property
    def starts(self) -> list[int]:
        """Offset of the first character of each physical line."""
        return list(accumulate((len(line) + 1 for line in self.text.split("\n")), initial=0))[:-1]

    def line(self, number: int) -> Line:
        """Return the logical line that begins on the physical line `number`."""
        start = self.starts[number - 1]
        return Line(self, number, self.clean[start : self.clean.index("\n", start)])

    def lines(self, start: int, end: int) -> Iterator[Line]:
        """Yield the logical lines between two offsets, blank ones left out; `start` begins a line."""
        number = bisect_right(self.starts, start)
        for text in self.clean[start:end].split("\n"):
            if text and not text.isspace():
                yield Line(self, number, text)
            number += 1 + (text.count(JOINED) if JOINED in text else 0)

    def place(self, offset: int) -> Place:
        """Return the place of the character at `offset`."""
        number = bisect_right(self.starts, offset)
        return Place(self.file, number, offset - self.starts[number - 1] + 1)

    def error(self, place: Place, message: str, expected: str, remedy: str) -> NetlistError:
        """Return the error `message` at `place`, with the physical line there as excerpt."""
        start = self.starts[place.line - 1]
        end = self.text.find("\n", start)
        # An excerpt shows what is round the caret; a line of megabytes need not be kept for it.
        end = min(len(self.text) if end < 0 else end, start + place.column + _BEHIND_CARET)
        excerpt = self.text[start:end]
        return NetlistError(message, place, excerpt=excerpt, expected=expected, remedy=remedy)


def indent(line: Line) -> int:
    """Return the index of the first character of a line that is not blank."""
    return len(line.text) - len(line.text.lstrip())


def _blank(text: str) -> str:
    """Return as many blanks as `text` has characters, its joined line ends kept."""
    if JOINED not in text:
        return " " * len(text)
    return JOINED.join(" " * len(piece) for piece in text.split(JOINED))


def _without_comments(text: str, *, dollar_names: bool) -> tuple[str, tuple[int, int] | None]:
    """Overwrite comments with blanks: whole lines, and the rest of a line after `;`, `//` or `$`.

    Return the text, and line and column of the first comment that reads as a name, as $x does, if any.
    """
    doubtful = None
    if "*" in text or "#" in text or "//" in text:
        # With a line end before it the first line is like any other.
        text = _COMMENT_LINE.sub(lambda match: "\n" + " " * (len(match[0]) - 1), "\n" + text)[1:]
    marks = [mark for mark in (";", "//", "$") if mark in text]
    if marks:
        lines = text.split("\n")
        for index, line in enumerate(lines):
            if any(mark in line for mark in marks):
                start = _comment_start(line, dollar_names=dollar_names)
                lines[index] = line[:start] + " " * (len(line) - start)
                if (
                    doubtful is None
                    and line[start : start + 1] == "$"
                    and line[start + 1 : start + 2].isalpha()
                ):
                    doubtful = (index + 1, start + 1)
        text = "\n".join(lines)
    return text, doubtful


def _comment_start(line: str, *, dollar_names: bool) -> int:
    """Return the index of the comment on a line, or the line's length."""
    for match in _QUOTED_OR_COMMENT.finditer(line):
        if match.lastgroup is None:
            continue
        followed = line[match.end() : match.end() + 1]
        if match.lastgroup != "dollar" or not dollar_names or followed.isspace():
            return match.start()
    return len(line)


def _joined(text: str) -> str:
    """Overwrite the line end and the `+` of each continuation line, and the blank lines before it."""
    if "\\\\\n" in text:
        text = text.replace("\\\\\n", "  " + JOINED)
    pieces: list[str] = []
    done = 0
    for match in _CONTINUATION.finditer(text):
        piece = text[done : match.start()]
        content = piece.rstrip()
        if not content and not pieces:
            continue  # nothing comes before it; the reader of elements says so
        gap = text[done + len(content) : match.end() - 1]
        pieces += [content, gap.replace("\n", JOINED), " "]
        done = match.end()
    pieces.append(text[done:])
    return "".join(pieces)
