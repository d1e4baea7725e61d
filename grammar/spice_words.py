"""A logical line of a SPICE-style list to words: positional ones first, then `name = value` pairs."""

from __future__ import annotations

import re
from collections.abc import Iterator
from itertools import zip_longest
from typing import NamedTuple

from .errors import NetlistError
from .spice_lines import LONGEST_LINE, Line

LONGEST_NAME = 255
"""Characters of a name of a part or net: more is no name, and flattening would repeat it in every path."""

MOST_WORDS = 100_000
"""Words of one line: far more than the points of any waveform that is written out."""

# A line without any of these is split at its blanks, which is several times faster; a colon ends PARAMS:
_SPECIAL = re.compile(r"""[,()={}"':]""")

# Parentheses with no blank inside belong to the word they follow, as in Net-(C1-Pad1) and NAND(2).
_WORD = re.compile(
    r"""
      [{] | "[^"]*" | '[^']*'
    | [=<>!]= | [=()]
    | ["'}]
    | [^\s,(){}="'] [^\s,(){}=]*+ (?> \( [^\s,(){}=]* \) [^\s,(){}=]*+ )*+
    """,
    re.VERBOSE,
)
_BRACE = re.compile(r"[{}]")
_NAME = re.compile(r"[^\W\d][\w.:]*")
_GROUP = re.compile(r"(?<![=\s]) (\s*) \{ (\s*\w+\s*=(?!=)[^{}]*) \}", re.VERBOSE)
_SECTIONS = {"params:": "", "param:": "", "optional:": "optional", "text:": "text"}


class Assignment(NamedTuple):
    """`key = value` at the end of a line; `start` is where the value begins in the line's text."""

    key: str
    value: str
    start: int
    section: str = ""


class _Key(NamedTuple):
    """The name before an equals sign, its start and the end of the sign; for `PARAMS:` the name is empty."""

    name: str
    start: int
    end: int
    section: str


class Words(NamedTuple):
    """The words of one line.

    texts:       the positional words, the first one included; quotes and braces are kept
    indexes:     where each of them begins in the line's text; empty for a line split at its blanks
    assignments: the pairs after them, in order
    """

    line: Line
    texts: list[str]
    indexes: list[int]
    assignments: list[Assignment]


def is_plain(text: str) -> bool:
    """Return whether the words of a line are what stands between its blanks."""
    return _SPECIAL.search(text) is None


def split(line: Line, *, exact: bool = False) -> Words:
    """Return the words of `line`; `exact` asks for their indexes.

    Blanks, commas and parentheses separate words. A name followed by `=` begins the pairs, and so does
    `PARAMS:`; a value runs up to the next name.
    """
    text = line.text
    if len(text) > LONGEST_LINE:
        raise line.error(
            0,
            f"a line of {len(text)} characters",
            f"at most {LONGEST_LINE} characters with all its continuation lines",
            "put a long table into a file of its own, or check that this is a netlist",
        )
    if not exact and is_plain(text):
        texts = text.split()
        indexes: list[int] = []
        assignments: list[Assignment] = []
    else:
        texts, indexes, assignments = _scan(line)
    if len(texts) > MOST_WORDS:
        raise _too_many_words(line)
    if len(text) > LONGEST_NAME:
        _refuse_long_names(line, texts)
    return Words(line, texts, indexes, assignments)


def _scan(line: Line) -> tuple[list[str], list[int], list[Assignment]]:
    text = line.text
    if "{" in text:
        # Some exporters put the pairs into braces: {FS=100K L=100U}.
        text = _GROUP.sub(r"\1 \2 ", text)
    texts: list[str] = []
    indexes: list[int] = []
    keys: list[_Key] = []
    section = ""
    depth = 0
    before, before_start = "", 0
    for word, start in _tokens(line, text):
        if word in ("(", ")"):
            depth += 1 if word == "(" else -1
        elif word == "=":
            if depth <= 0 and _NAME.fullmatch(before):
                if not keys:
                    del texts[-1], indexes[-1]
                keys.append(_Key(before.casefold(), before_start, start + 1, section))
        elif word.casefold() in _SECTIONS:
            section = _SECTIONS[word.casefold()]
            keys.append(_Key("", start, start + len(word), section))
        elif not keys:
            texts.append(word)
            indexes.append(start)
        before, before_start = word, start
        if len(texts) + len(keys) > MOST_WORDS:
            raise _too_many_words(line)
    return texts, indexes, _assignments(text, keys)


def _tokens(line: Line, text: str) -> Iterator[tuple[str, int]]:
    """Yield each word, bracket and sign of `text` with its index; `line` is for errors."""
    position = 0
    while match := _WORD.search(text, position):
        word, start, position = match[0], match.start(), match.end()
        if word == "{":
            position = _closing_brace(line, text, start)
            word = text[start:position]
        elif word in ("'", '"', "}"):
            raise _unbalanced(line, start)
        yield word, start


def _assignments(text: str, keys: list[_Key]) -> list[Assignment]:
    """Return the pairs: each value runs from its equals sign to the next name."""
    found: list[Assignment] = []
    for key, following in zip_longest(keys, keys[1:]):
        if key.name and key.section != "text":
            value = text[key.end : following.start if following else len(text)].strip(" \t\r,")
            found.append(Assignment(key.name, value, text.find(value, key.end), key.section))
    return found


def _closing_brace(line: Line, text: str, start: int) -> int:
    """Return the offset after the brace that closes the one at `start`."""
    depth = 0
    for match in _BRACE.finditer(text, start):
        depth += 1 if match[0] == "{" else -1
        if depth == 0:
            return match.end()
    raise _unbalanced(line, start)


def _unbalanced(line: Line, index: int) -> NetlistError:
    mark = line.text[index]
    if mark == "}":
        return line.error(index, "`}` closes nothing", "`{` before it", "add the `{`, or take the `}` away")
    wanted = "}" if mark == "{" else mark
    return line.error(
        index,
        f"`{mark}` is never closed",
        f"`{wanted}` later on the line or on its continuation lines",
        f"add the `{wanted}` where the text ends",
    )


def _too_many_words(line: Line) -> NetlistError:
    return line.error(
        0,
        f"a line of more than {MOST_WORDS} words",
        "a part with its nodes and its value",
        "put a long table into a file of its own, or check that this is a netlist",
    )


def _refuse_long_names(line: Line, texts: list[str]) -> None:
    for word in texts:
        if len(word) > LONGEST_NAME and word[0] not in "{\"'":
            raise line.error(
                line.text.find(word),
                f"a name of {len(word)} characters",
                f"at most {LONGEST_NAME} characters",
                "shorten the name, or check that this is a netlist",
            )
