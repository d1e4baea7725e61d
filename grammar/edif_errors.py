"""What to tell the user when an EDIF text cannot be read: where, in which form, and what was expected."""

from __future__ import annotations

import re
from typing import Any, cast

from lark import Token, UnexpectedCharacters, UnexpectedInput, UnexpectedToken

from .edif_forms import Edif
from .edif_names import integer
from .edif_places import Places
from .errors import NetlistError

_FIRST = re.compile(r"\S")
_BEGINNING = re.compile(r"\(\s*edif(?![^\s()\"])", re.IGNORECASE | re.ASCII)
_FORM_START = re.compile(r'\(\s*([^\s()"]*)(?:\s*\(\s*rename)?\s*([^\s()"]*)', re.IGNORECASE)
_PARENTHESIS = re.compile(r'"[^"]*"|([()])')
_STRING = re.compile(r'"[^"]*"')
_FORM_IN_STRING = re.compile(r"\)[ \t]*+[\r\n]\s*+\(")
_WORD = re.compile(r'[^\s()"]+')
_LONGEST_NAME = 40
_LONGEST_INDENT = 200


# The terminals of edif.lark in the words of the format.
_EXPECTATIONS = {
    "ATOM": "a name",
    "STRING": 'a string in "quotes"',
    "_CLOSE": "a closing parenthesis",
    "_OPEN": "a form with a keyword",
}


def check_beginning(text: str, places: Places) -> None:
    """Raise NetlistError where the text is empty or no EDIF at all."""
    first = _FIRST.search(text)
    if first is None:
        raise NetlistError(
            "the file is empty",
            places.at(0),
            expected="an EDIF 2 0 0 netlist, which begins with (edif",
            remedy="export the netlist again",
        )
    if not _BEGINNING.match(text, first.start()):
        raise NetlistError(
            "this is not an EDIF file",
            places.at(first.start()),
            excerpt=places.line_at(first.start()),
            expected="(edif name (edifVersion 2 0 0) ... as the first form",
            remedy="export the netlist as EDIF 2 0 0",
        )


def check_dialect(edif: Edif, places: Places) -> None:
    """Raise NetlistError for another version of EDIF, and for a file that defines keywords of its own."""
    version, level = edif.version, edif.keyword_level
    if version and [integer(word) for word in version.words] != [2, 0, 0]:
        raise NetlistError(
            f"EDIF version {' '.join(version.words)} is not read",
            places.at(version.offset),
            excerpt=places.line_at(version.offset),
            expected="(edifVersion 2 0 0)",
            remedy="export the netlist as EDIF 2 0 0",
        )
    if level and [integer(word) for word in level.words] != [0]:
        raise NetlistError(
            f"keyword level {' '.join(level.words)} is not read: the file may define keywords of its own",
            places.at(level.offset),
            excerpt=places.line_at(level.offset),
            expected="(keywordLevel 0)",
            remedy="export the netlist without keyword aliases and macros",
        )


def explain(error: UnexpectedInput, text: str, places: Places) -> NetlistError:
    """Return the error of the parser in the words of the format."""
    at_end = isinstance(error, UnexpectedToken) and cast(Token, cast(Any, error).token).type == "$END"
    offset = len(text) if at_end else error.pos_in_stream or 0
    forms = _open_forms(text, offset)
    if at_end:
        return _cut_off(text, forms, places)
    if not forms:
        return _goes_on(text, offset, places)
    if text.startswith('"', offset) and text.count('"', offset) == 1:
        return _open_string(text, offset, forms, places)
    return _unexpected(error, text, offset, forms, places)


def _cut_off(text: str, forms: list[int], places: Places) -> NetlistError:
    innermost = _title(text, forms[-1], places)
    suspect = _never_closed(text)
    if suspect is None:
        return NetlistError(
            f"the file ends inside {innermost}",
            places.at(len(text.rstrip())),
            excerpt=places.line_at(len(text.rstrip())),
            expected=f"{len(forms)} closing parentheses",
            remedy="the file is cut off or lacks a closing parenthesis: export it again",
        )
    title = _title(text, suspect, places)
    return NetlistError(
        f"the file ends inside {innermost}; by its indentation {title} is never closed",
        places.at(suspect),
        excerpt=places.line_at(suspect),
        expected=f"{len(forms)} more closing parentheses, the first where this form ends",
        remedy="close this form, or export the netlist again",
    )


def _goes_on(text: str, offset: int, places: Places) -> NetlistError:
    closing = text.rfind(")", 0, offset)
    return NetlistError(
        f"the netlist is closed at line {places.at(closing).line}, but the file goes on",
        places.at(offset),
        excerpt=places.line_at(offset),
        expected="the end of the file",
        remedy="remove a closing parenthesis too many before this place, or what follows it",
    )


def _open_string(text: str, offset: int, forms: list[int], places: Places) -> NetlistError:
    message = f"a string inside {_title(text, forms[-1], places)} is never closed"
    return NetlistError(
        message,
        places.at(offset),
        excerpt=places.line_at(offset),
        expected='a closing " before the end of the file',
        remedy=_stray_quote(text, places),
    )


def _stray_quote(text: str, places: Places) -> str:
    """Return where to look for the quote that turned strings inside out: where one runs over a form."""
    for string in _STRING.finditer(text):
        if _FORM_IN_STRING.search(string[0]):
            line = places.at(string.start()).line
            return f'look for a " too many at line {line}, where a string runs on over the next form'
    return "close the string, or export the netlist again"


def _unexpected(
    error: UnexpectedInput, text: str, offset: int, forms: list[int], places: Places
) -> NetlistError:
    return NetlistError(
        f"{_found(text, offset)} inside {_title(text, forms[-1], places)}",
        places.at(offset),
        excerpt=places.line_at(offset),
        expected=_expected(error),
        remedy="mend the form at this place, or export the netlist again",
    )


def _found(text: str, offset: int) -> str:
    if text[offset] == "(":
        keyword = _FORM_START.match(text, offset)
        named = keyword[1] if keyword else ""
        return f"the form ({named[:_LONGEST_NAME]} is out of place" if named else "a ( without a keyword"
    if text[offset] == ")":
        return "a ) too early"
    if text[offset] == '"':
        return "a string is out of place"
    word = _WORD.match(text, offset)
    return f"the word {word[0][:_LONGEST_NAME] if word else text[offset]!r} is out of place"


def _expected(error: UnexpectedInput) -> str:
    """Return what the parser could go on with, in the words of the format."""
    names: set[str] = set()
    if isinstance(error, UnexpectedToken):
        names = set(error.expected)
    elif isinstance(error, UnexpectedCharacters):
        names = set(error.allowed)
    return ", ".join(word for terminal, word in _EXPECTATIONS.items() if terminal in names)


def _open_forms(text: str, end: int) -> list[int]:
    """Return where the forms were opened that are open at `end`, outermost first."""
    forms: list[int] = []
    for token in _PARENTHESIS.finditer(text, 0, end):
        if token[1] == "(":
            forms.append(token.start())
        elif token[1] and forms:
            forms.pop()
    return forms


def _never_closed(text: str) -> int | None:
    """Return the first form that is still open where the next one begins no further right than it.

    Exporters indent by nesting, so this is where a closing parenthesis is missing. None where the file is
    not indented, or only cut off.
    """
    forms: list[tuple[int, int]] = []
    is_indented = False
    for token in _PARENTHESIS.finditer(text):
        if token[1] == "(":
            indent = _indent(text, token.start())
            if indent >= 0 and forms and is_indented and 0 <= indent <= forms[-1][1]:
                return forms[-1][0]
            is_indented = is_indented or (indent > 0 and len(forms) == 1)
            forms.append((token.start(), indent))
        elif token[1] and forms:
            forms.pop()
    return None


def _indent(text: str, offset: int) -> int:
    """Return the blanks before a form that begins its line, -1 where it does not."""
    start = max(0, offset - _LONGEST_INDENT)
    line = text.rfind("\n", start, offset) + 1
    if not line and start:
        return -1
    blanks = text[line:offset]
    return len(blanks.expandtabs()) if not blanks.strip() else -1


def _title(text: str, offset: int, places: Places) -> str:
    """Return a form as `(net VREF, opened at line 41`."""
    found = _FORM_START.match(text, offset)
    keyword, name = found.groups() if found else ("", "")
    title = f"({keyword[:_LONGEST_NAME]} {name[:_LONGEST_NAME]}".rstrip()
    return f"{title}, opened at line {places.at(offset).line}"
