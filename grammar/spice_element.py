"""An element of a SPICE-style list as written, and the steps that the readers of all letters share."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache
from types import MappingProxyType
from typing import NoReturn

from .netlist import Place
from .spice_lines import Line, Source, indent
from .spice_words import Words, is_plain, split

NOTHING: Mapping[str, str] = MappingProxyType({})
"""The attributes of a part that has none; shared, for most parts have none."""


@dataclass(slots=True)
class Element:
    """An element line as written; nothing is evaluated and no name is looked up.

    reference:  as written, an exporter's prefix included
    letter:     upper case; empty for a part that has no letter's shape
    nodes:      in the order of the line
    value:      text, an expression with its braces
    model:      name of a model or subcircuit
    attributes: the pairs at the end of the line, and what the letter adds
    place:      of the reference; the text of its line is looked up in `source` for the places of nodes, since
                a copy for each of many parts would be the largest thing kept of them
    first:      index among the line's positional words of the first node
    assumption: what the line leaves open and was decided here, else empty
    fitted:     False where the last word of the line says that the part is left out, as DNP does
    places:     of the nodes, once they were sought for a long line
    """

    reference: str
    letter: str
    nodes: tuple[str, ...]
    value: str
    model: str
    attributes: Mapping[str, str]
    place: Place
    source: Source
    first: int = 1
    assumption: str = ""
    places: list[Place] | None = None
    fitted: bool = True

    @property
    def line(self) -> Line:
        """Return the logical line of the element; for a code model without the marks of its ports."""
        line = self.source.line(self.place.line)
        return without_port_marks(line) if self.letter == "A" else line

    def node_places(self) -> list[Place]:
        """Return the place of each node."""
        if self.places is not None:
            return self.places
        line = self.line
        indexes = split(line, exact=True).indexes[self.first : self.first + len(self.nodes)]
        return list(line.places(indexes))

    def node_place(self, at: int) -> Place:
        """Return the place of one node."""
        word = at + self.first
        if word < _FEW:
            line = self.line
            if is_plain(line.text):
                return line.place(len(line.text) - len(line.text.split(None, word)[word]))
        # A long line is asked for one node after the other: their places are sought once, and all together.
        self.places = self.node_places()
        return self.places[at]

    def index_of(self, text: str) -> int:
        """Return where `text` stands on the line, behind the nodes: the place for an error about it."""
        line = self.line
        indexes = split(line, exact=True).indexes
        behind = indexes[min(self.first + len(self.nodes), len(indexes)) - 1]
        return max(0, line.text.find(text, behind))


_FEW = 8
_PORT_MARKS = re.compile(r"[\[\]~]|%\w+")
_VALUE = re.compile(
    r"""
      (?! [1-4][NS]\d{2,} )                    # a type number of JEDEC or JIS: 1N4148 is not in nano
      (?: [+-]? (?:\d+\.?\d*|\.\d+) (?:[eEdD][+-]?\d+)? [a-zA-ZµμΩΩ%]*
        | \d+ [a-zA-ZµμΩΩ]{1,3} \d{1,3} [A-Z]?  # a marking code: 4k7
        | [RKMGTLpnuµμ] \d{1,3} [A-Z]?           # R47
      )
    | [{'] .*                                  # an expression
    """,
    re.VERBOSE | re.DOTALL,
)
_PREFIX = re.compile(r"[^\W\d_]+(?=\d+[A-Za-z]?$)")

# Reference prefixes of common practice whose first letter is another element's, to the letter that holds.
PREFIXES = {
    "LED": "D",
    "CR": "D",
    "ZD": "D",
    "IC": "U",
    **dict.fromkeys(("BAT", "BR", "BT", "CN", "CON", "DS", "DSP", "FB", "FID", "FL", "FU", "HS", "ISO"), ""),
    **dict.fromkeys(("JP", "KL", "LS", "MH", "MOV", "MT", "OC", "OK", "OPT", "PC", "RL", "RN"), ""),
    **dict.fromkeys(("SW", "TP", "TR"), ""),
}
_ONE_NODE = frozenset(("TP", "MH", "MT", "MP", "H", "FID", "HS"))

_SHAPES = {
    "D": "anode, cathode and a model",
    "Q": "collector, base, emitter and a model",
    "M": "drain, gate, source, perhaps bulk, and a model",
    "Z": "three nodes and a model",
    "X": "the nodes and the name of a subcircuit",
    "K": "two inductors or more and a coefficient",
}


@lru_cache(maxsize=4096)
def is_value(word: str) -> bool:
    """Return whether `word` reads as a value: a number with its unit, a marking code or an expression.

    Remembered, for a board has few values and many parts.
    """
    return _VALUE.fullmatch(word) is not None


def without_port_marks(line: Line) -> Line:
    """Return the line of a code model with blanks for the brackets, inversions and types of its ports."""
    blanked = _PORT_MARKS.sub(lambda match: " " * len(match[0]), line.text)
    return Line(line.source, line.number, blanked)


def prefix_of(words: Words) -> str:
    """Return the letters before the number of a reference, in capitals; empty where it has no number."""
    match = _PREFIX.match(words.texts[0])
    return match[0].upper() if match else ""


def attributes_of(words: Words) -> dict[str, str]:
    """Return the pairs at the end of a line; of two with one name the last counts."""
    return {pair.key: unquoted(pair.value) for pair in words.assignments}


def unquoted(text: str) -> str:
    """Return `text` without the double quotes around it, if it has any."""
    return text[1:-1] if len(text) >= 2 and text[0] == text[-1] == '"' else text


def too_few(words: Words, letter: str, shape: str = "") -> NoReturn:
    """Raise the error for a line that is too short for its letter; `shape` tells what belongs on it."""
    shape = shape or _SHAPES.get(letter, "at least one node and a model")
    count = len(words.texts) - 1
    raise words.line.error(
        indent(words.line),
        f"{words.texts[0]} has too few nodes: {count} {'word follows' if count == 1 else 'words follow'}",
        f"{shape} after the name",
        "add what is missing; a line may be continued with `+` as the first character of the next",
    )


def made(
    words: Words,
    letter: str,
    nodes: int,
    value: str = "",
    model: str = "",
    extra: Mapping[str, str] = NOTHING,
    assumption: str = "",
) -> Element:
    """Return the element whose first `nodes` words behind the reference are its nodes."""
    attributes: Mapping[str, str] = NOTHING
    if words.assignments or extra:
        attributes = attributes_of(words) | dict(extra)
    line = words.line
    texts = words.texts
    there = tuple(texts[1 : 1 + nodes])
    place = line.place(indent(line) if line.text[0].isspace() else 0)
    return Element(texts[0], letter, there, value, model, attributes, place, line.source, 1, assumption)


def has_one_node(words: Words) -> bool:
    """Return whether the line is that of a test point, a hole or the like: one node, and perhaps a model."""
    return len(words.texts) in (2, 3) and prefix_of(words) in _ONE_NODE


def part(words: Words, letter: str = "") -> Element:
    """Read a part of any kind: its nodes, then its model, or its value where it has no letter."""
    texts = words.texts
    one = has_one_node(words)
    if one and len(texts) == 2:
        return made(words, letter, 1)
    if len(texts) < 3:
        too_few(words, letter)
    if len(texts) == 3 and not one and letter != "A":
        return made(words, letter, 2, assumption="two words: taken as two nodes, without a model")
    last = texts[-1]
    if not letter and is_value(last):
        return made(words, letter, len(texts) - 2, value=last)
    return made(words, letter, len(texts) - 2, model=unquoted(last))
