"""One element line of a SPICE-style list: which words are nodes, which the value, which the model.

The first letter tells, as in any simulator. A plain list however uses any reference prefix (`CN1`, `LED2`,
`F1`), so a letter holds only while the line has that letter's shape; a line that has not is read as a part of
no letter: its nodes, then its model or value.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Collection
from functools import lru_cache

from .errors import NetlistError
from .property_names import fit_words
from .spice_element import (
    NOTHING,
    PREFIXES,
    Element,
    has_one_node,
    is_value,
    made,
    part,
    prefix_of,
    too_few,
    unquoted,
    without_port_marks,
)
from .spice_lines import Line, indent
from .spice_semiconductors import diode, is_size, junction_transistor, transistor
from .spice_sources import behavioural_source, controlled_source, source
from .spice_words import Words, split
from .values import ValueTextError, read_value

_RATING = re.compile(r"[+-]?\d+(?:[.,/]\d+)?(?:%|[a-zA-Z]*W|V|ppm)", re.IGNORECASE)
_APART = re.compile(r"(?:meg|[kmunpµμ])?(?:ohms?|[ΩΩFH])|meg|k", re.IGNORECASE)  # 10 k, 100 uH
_TRIMMER = re.compile(r"(?:RV|VR|P|POT|TRIM)\d", re.IGNORECASE)
_NUMBER_BEGINS = frozenset("0123456789.+-")
_LIBRARY_FILE = re.compile(r".*[.](?:lib|sub|spi|sp|inc|mod|cir|ckt)", re.IGNORECASE)


def read_element(line: Line, models: Collection[str]) -> Element:
    """Return the element that `line` describes; `models` holds the known model names, casefolded.

    Raises NetlistError where the line has no element's shape.
    """
    letter = line.text.lstrip()[0].upper()
    words = split(line, exact=letter in _NEED_INDEXES)
    if not words.texts or not words.texts[0][0].isalpha():
        raise _neither(line)
    last = words.texts[-1].casefold()
    fitted = last not in fit_words().single or last in models
    if not fitted and len(words.texts) > _WITH_VALUE:
        words = words._replace(texts=words.texts[:-1], indexes=words.indexes[:-1])
    if has_one_node(words):
        element = part(words)
    else:
        element = _READERS.get(words.texts[0][0].upper(), _unknown)(words, models)
    element.fitted = fitted
    quantity = _QUANTITIES.get(element.letter)
    if quantity and (unreadable := _unreadable(element.value, quantity)):
        index = max(0, line.text.rfind(element.value.split()[0]))
        raise line.error(index, *unreadable, "correct the value")
    return element


_WITH_VALUE = 4  # words of the shortest line that has a value or a model: a reference and two nodes before it

# What the value of a letter measures.
_QUANTITIES = {"R": "resistance", "C": "capacitance", "L": "inductance"}


@lru_cache(maxsize=4096)
def _unreadable(value: str, quantity: str) -> tuple[str, str] | None:
    """Return why a value that begins as a number is none, and what was expected; None for any other.

    A negative value is one: models of devices have them, and whether a board may is for the rules.
    """
    if value[:1] not in _NUMBER_BEGINS or (value[0] == "-" and value[1:2].isdigit()):
        return None
    try:
        read_value(value, quantity, spice=True)
    except ValueTextError as error:
        return str(error), error.expected
    return None


def _neither(line: Line) -> NetlistError:
    """Return the error for a line that begins with no reference designator."""
    if line.text.lstrip().startswith("+"):
        message, remedy = "`+` continues nothing", "put the line that it continues before it"
    else:
        message = "neither an element nor a card"
        remedy = "begin a comment with `*`; check that this is a netlist"
    expected = "a reference designator that begins with a letter, or a dot card"
    return line.error(indent(line), message, expected, remedy)


def _unknown(words: Words, models: Collection[str]) -> Element:
    """Read a part whose letter has no reader: a trimmer that goes by P, or its nodes and its model."""
    texts = words.texts
    if len(texts) == 5 and _TRIMMER.match(texts[0]) and is_value(texts[4]):
        return made(words, "R", 3, value=texts[4])
    return part(words, texts[0][0].upper())


def _two_nodes(words: Words, models: Collection[str]) -> Element:
    """Read a resistor, capacitor or inductor; a resistor of three nodes is a trimmer."""
    texts = words.texts
    letter = texts[0][0].upper()
    if len(texts) == 4:
        last = texts[3]
        if not words.assignments and is_value(last):
            return made(words, letter, 2, value=last)
        if last.casefold() in models:
            return _valued(words, letter, model=last)
        other = PREFIXES.get(prefix_of(words))
        if other is not None and not is_value(last):
            return part(words, other)
        return _valued(words, letter, value=last)
    if len(texts) < 4:
        if len(texts) < 3 or (is_value(texts[2]) and not texts[2].isdigit()):
            too_few(words, letter, "two nodes and a value")
        return _valued(words, letter)
    return _long_two_nodes(words, letter, models)


def _valued(words: Words, letter: str, value: str = "", model: str = "") -> Element:
    """Make a part whose value may stand as `R=`, `C=`, `L=` or `value=` at the end."""
    element = made(words, letter, 2, value, model)
    for named in (letter.casefold(), "value"):
        if named in element.attributes and not element.value:
            attributes = dict(element.attributes)
            element.value = attributes.pop(named)
            element.attributes = attributes or NOTHING
    return element


def _long_two_nodes(words: Words, letter: str, models: Collection[str]) -> Element:
    texts = words.texts
    third, fourth = texts[3], texts[4]
    rest = " ".join(texts[4:])
    if third.casefold() in models:
        return made(words, letter, 2, value=fourth, model=third)
    if fourth.casefold() in models and is_value(third):
        return made(words, letter, 2, value=third, model=fourth)
    if is_value(third) and (not third.isdigit() or _RATING.fullmatch(fourth)):
        return made(words, letter, 2, value=f"{third} {rest}")
    if third.isdigit() and f" {third},{fourth}" in words.line.text:
        # A decimal comma, between nodes that blanks part: kept, for who reads the value to say so.
        return made(words, letter, 2, value=f"{third},{rest}")
    trimmer = letter == "R" and (is_value(fourth) or _TRIMMER.match(texts[0]))
    if trimmer and all(_RATING.fullmatch(word) for word in texts[5:]):
        assumption = "" if _TRIMMER.match(texts[0]) else "three nodes and a value: taken as a trimmer"
        return made(words, letter, 3, value=rest, assumption=assumption)
    if third.isdigit() and _APART.fullmatch(fourth):
        return made(words, letter, 2, value=f"{third} {rest}")
    if third.isdigit() and len(texts) == 5 and prefix_of(words) == letter:
        assumption = f"{third} is taken as the value, {fourth} as its model or a remark"
        return made(words, letter, 2, value=f"{third} {fourth}", assumption=assumption)
    return part(words, PREFIXES.get(prefix_of(words), ""))


def _switch(words: Words, models: Collection[str]) -> Element:
    """Read a switch: four nodes, two of them its control (S), or two and a controlling source (W)."""
    texts = words.texts
    if texts[0][0] in "Ww" and len(texts) in (5, 6) and texts[3][0] in "Vv":
        extra = {"through": texts[3]}
        return made(words, "W", 2, model=texts[4], extra=extra)
    if texts[0][0] in "Ss" and (len(texts) == 6 or (len(texts) == 7 and is_size(texts[6]))):
        return made(words, "S", 4, model=texts[5])
    return part(words)


def _line_or_transformer(words: Words, models: Collection[str]) -> Element:
    """Read a transmission line (T with its impedance, O with a known model), or a part of many nodes."""
    texts = words.texts
    letter = texts[0][0].upper()
    named = {pair.key for pair in words.assignments}
    if letter == "T" and len(texts) >= 5 and named & {"z0", "zo", "td", "f", "nl"}:
        return made(words, "T", 4)
    if letter == "O" and len(texts) == 6 and texts[5].casefold() in models:
        return made(words, "O", 4, model=texts[5])
    return part(words)


def _coupling(words: Words, models: Collection[str]) -> Element:
    """Read a coupling of inductors, which has no node, or a relay."""
    texts = words.texts
    if len(texts) < 4:
        too_few(words, "K")
    if all(word[0] in "Ll" for word in texts[1:-1]):
        return made(words, "K", 0, value=texts[-1], extra={"couples": " ".join(texts[1:-1])})
    return part(words)


def _package(words: Words, models: Collection[str]) -> Element:
    """Read an integrated circuit: its nodes, then its model; a gate of a library has its type first."""
    texts = words.texts
    if len(texts) > 4 and texts[1].endswith(")") and "(" in texts[1]:
        element = made(words, "U", 0, model=texts[1], extra={"timing": " ".join(texts[-2:])})
        element.nodes = tuple(texts[2:-2])
        element.first = 2
        return element
    return part(words, "U")


def _ports(words: Words, models: Collection[str]) -> Element:
    """Read a code model: ports in brackets, with their types, then the model."""
    unmarked = split(without_port_marks(words.line), exact=True)
    if not unmarked.texts:
        raise _neither(words.line)
    return part(unmarked, "A")


def _instance(words: Words, models: Collection[str]) -> Element:
    """Read a subcircuit's instance: its nodes, then the name; old exports put a file name between."""
    texts = words.texts
    if len(texts) < 2:
        too_few(words, "X")
    extra = NOTHING
    nodes = len(texts) - 2
    if nodes and _LIBRARY_FILE.fullmatch(texts[-2]):
        extra = {"library": texts[-2]}
        nodes -= 1
    return made(words, "X", nodes, model=unquoted(texts[-1]), extra=extra)


_Reader = Callable[[Words, Collection[str]], Element]

_READERS: dict[str, _Reader] = {
    "A": _ports,
    "B": behavioural_source,
    "C": _two_nodes,
    "D": diode,
    "E": controlled_source,
    "F": controlled_source,
    "G": controlled_source,
    "H": controlled_source,
    "I": source,
    "J": junction_transistor,
    "K": _coupling,
    "L": _two_nodes,
    "M": transistor,
    "O": _line_or_transformer,
    "Q": transistor,
    "R": _two_nodes,
    "S": _switch,
    "T": _line_or_transformer,
    "U": _package,
    "V": source,
    "W": _switch,
    "X": _instance,
    "Z": transistor,
}
_NEED_INDEXES = frozenset("VIEFGHBA")
