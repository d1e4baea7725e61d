"""Errors for the user: where, the offending text under a caret, what was expected, how to mend it."""

from __future__ import annotations

from .netlist import Place

_TAB_STOP = 4
_EXCERPT_WIDTH = 76


class NetlistError(Exception):
    """An input that cannot be read.

    message:  one sentence, no full stop
    place:    file, line and column; line 0 where the file as a whole is meant
    excerpt:  the offending line of text, as read (empty where there is none)
    expected: what would have been right there
    remedy:   what the user can do about it
    also:     further errors of the same run, in the order of the file
    """

    def __init__(
        self,
        message: str,
        place: Place,
        *,
        excerpt: str = "",
        expected: str = "",
        remedy: str = "",
        also: tuple[NetlistError, ...] = (),
    ) -> None:
        super().__init__(message)
        self.message = message
        self.place = place
        self.excerpt = excerpt
        self.expected = expected
        self.remedy = remedy
        self.also = also

    def __str__(self) -> str:
        """Return the whole message as printed on standard error, with the excerpt and its caret."""
        return "\n".join([_describe(self), *(_describe(error) for error in self.also)])


def _describe(error: NetlistError) -> str:
    where = error.place.file if error.place.line == 0 else str(error.place)
    lines = [no_command(f"{printable(where)}: {printable(error.message)}")]
    if error.excerpt:
        lines += _excerpt(error.excerpt, error.place.column)
    if error.expected:
        lines.append(f"  expected: {printable(error.expected)}")
    if error.remedy:
        lines.append(f"  remedy:   {printable(error.remedy)}")
    return "\n".join(lines)


def _excerpt(text: str, column: int) -> list[str]:
    """Return the part of `text` around `column` (from 1) and a caret below it, at most 76 columns wide."""
    index = max(0, min(column - 1, len(text)))
    start = max(0, index - _EXCERPT_WIDTH // 2)
    before = printable(text[start:index].replace("\t", " " * _TAB_STOP))
    after = printable(text[index : start + _EXCERPT_WIDTH].replace("\t", " " * _TAB_STOP))
    lead = "..." if start else ""
    return [f"  | {lead}{before}{after}", f"  | {' ' * (len(lead) + len(before))}^"]


def printable(text: str) -> str:
    r"""Return `text` with every character that could steer a terminal written as an escape, `\x1b` style."""
    return "".join(c if c.isprintable() else c.encode("unicode_escape").decode("ascii") for c in text)


# What CI servers take for a command of theirs when a line of a log begins with it, blanks apart.
_COMMANDS = ("::", "##")


def no_command(line: str) -> str:
    """Return `line`, with a backslash before it where a CI server would take it for a command."""
    return f"\\{line}" if line.lstrip().startswith(_COMMANDS) else line
