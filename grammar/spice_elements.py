"""One element line of a SPICE-style list: which words are nodes, which the value, which the model.

The first letter tells, as in any simulator. A plain list however uses any reference prefix (`CN1`, `LED2`,
`F1`), so a letter holds only while the line has that letter's shape; a line that has not is read as a part of
no letter: its nodes, then its model or value.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Collection, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import NoReturn

from .netlist import Place
from .spice_lines import Line, indent
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
    line:       for places
    first:      index among the line's positional words of the first node
    assumption: what the line leaves open and was decided here, else empty
    """

    reference: str
    letter: str
    nodes: tuple[str, ...]
    value: str
    model: str
    attributes: Mapping[str, str]
    line: Line
    first: int = 1
    assumption: str = ""

    @property
    def place(self) -> Place:
        """Return the place of the reference."""
        return self.line.place(indent(self.line))

    def node_places(self) -> list[Place]:
        """Return the place of each node."""
        indexes = split(self.line, exact=True).indexes[self.first :]
        return [self.line.place(index) for index, _ in zip(indexes, self.nodes, strict=False)]

    def node_place(self, at: int) -> Place:
        """Return the place of one node."""
        text = self.line.text
        word = at + self.first
        if word < 8 and is_plain(text):
            return self.line.place(len(text) - len(text.split(None, word)[word]))
        return self.node_places()[at]

    def index_of(self, text: str) -> int:
        """Return where `text` stands on the line, behind the nodes: the place for an error about it."""
        indexes = split(self.line, exact=True).indexes
        behind = indexes[min(self.first + len(self.nodes), len(indexes)) - 1]
        return max(0, self.line.text.find(text, behind))


_NUMBER = re.compile(r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eEdD][+-]?\d+)?[a-zA-ZµμΩΩ%]*")
_MARKING_CODE = re.compile(r"(?:\d+[a-zA-ZµμΩ]{1,3}\d{1,3}|[RKMGTLpnuµμ]\d{1,3})[A-Z]?")
_TYPE_NUMBER = re.compile(r"[1-4][NS]\d{2,}\w*")  # JEDEC and JIS: 1N4148 is no number of nano
_RATING = re.compile(r"[+-]?\d+(?:[.,/]\d+)?(?:%|[a-zA-Z]*W|V|ppm)", re.IGNORECASE)
_WAVEFORM = re.compile(
    r"(?:dc|ac|pulse|sine?|exp|pwl|sffm|am|pat|tbl|trnoise|trrandom|wavefile|distof[12]|external)(?![^\W_])",
    re.IGNORECASE,
)
_CONTROLLED = re.compile(r"(?:value|vol|cur|poly|table|laplace|freq|chebyshev|pwl)(?![^\W_])", re.IGNORECASE)
_PREFIX = re.compile(r"[^\W\d_]+(?=\d+[A-Za-z]?$)")
_TRIMMER = re.compile(r"(?:RV|VR|P|POT|TRIM)\d", re.IGNORECASE)
_REGULATOR = re.compile(r"7[89]\d\d|[13]17|337")  # a VR1 with this number is no trimmer of 7805 ohm
_LIBRARY_FILE = re.compile(r".*[.](?:lib|sub|spi|sp|inc|mod|cir|ckt)", re.IGNORECASE)
_PORT_MARKS = re.compile(r"[\[\]~]|%\w+")

# Reference prefixes of common practice whose first letter is another element's, to the letter that holds.
_PREFIXES = {
    "LED": "D",
    "CR": "D",
    "ZD": "D",
    "IC": "U",
    **dict.fromkeys(("CN", "CON", "RN", "RL", "LS", "DS", "DSP", "BR", "BT", "BAT", "FB", "FU", "FL", "MOV"), ""),
    **dict.fromkeys(("MH", "MT", "TP", "TR", "SW", "JP", "KL", "OK", "OC", "OPT", "PC", "ISO", "HS", "FID"), ""),
}
_ONE_NODE = ("TP", "MH", "MT", "FID", "HS")

_SHAPES = {
    "D": "anode, cathode and a model",
    "Q": "collector, base, emitter and a model",
    "M": "drain, gate, source, perhaps bulk, and a model",
    "Z": "three nodes and a model",
    "X": "the nodes and the name of a subcircuit",
    "K": "two inductors or more and a coefficient",
}


def read_element(line: Line, models: Collection[str]) -> Element:
    """Return the element that `line` describes; `models` holds the known model names, casefolded.

    Raises NetlistError where the line has no element's shape.
    """
    text = line.text.lstrip()
    letter = text[0].upper()
    words = split(line, exact=letter in _NEED_INDEXES)
    return _READERS.get(letter, _unknown)(words, models)


def is_value(word: str) -> bool:
    """Return whether `word` reads as a value: a number with its unit, a marking code or an expression."""
    if word[0] in "{'":
        return True
    if _NUMBER.fullmatch(word) is None and _MARKING_CODE.fullmatch(word) is None:
        return False
    return _TYPE_NUMBER.fullmatch(word) is None


def _prefix(words: Words) -> str:
    match = _PREFIX.match(words.texts[0])
    return match[0].upper() if match else ""


def _attributes(words: Words) -> dict[str, str]:
    return {pair.key: _unquoted(pair.value) for pair in words.assignments}


def _unquoted(text: str) -> str:
    return text[1:-1] if len(text) >= 2 and text[0] == text[-1] == '"' else text


def _too_few(words: Words, letter: str, shape: str = "") -> NoReturn:
    shape = shape or _SHAPES.get(letter, "at least one node and a model")
    count = len(words.texts) - 1
    raise words.line.error(
        indent(words.line),
        f"{words.texts[0]} has too few nodes: {count} {'word follows' if count == 1 else 'words follow'}",
        f"{shape} after the name",
        "add what is missing; a line may be continued with `+` as the first character of the next",
    )


def _made(
    words: Words,
    letter: str,
    nodes: int,
    value: str = "",
    model: str = "",
    extra: Mapping[str, str] = NOTHING,
    assumption: str = "",
) -> Element:
    attributes: Mapping[str, str] = NOTHING
    if words.assignments or extra:
        attributes = _attributes(words) | dict(extra)
    texts = words.texts
    return Element(
        texts[0], letter, tuple(texts[1 : 1 + nodes]), value, model, attributes, words.line, 1, assumption
    )


def _part(words: Words, letter: str = "") -> Element:
    """Read a part of any kind: its nodes, then its model, or its value where it has no letter."""
    texts = words.texts
    if len(texts) == 2 and _prefix(words) in _ONE_NODE:
        return _made(words, letter, 1)
    if len(texts) < 3:
        _too_few(words, letter)
    last = texts[-1]
    if not letter and is_value(last):
        return _made(words, letter, len(texts) - 2, value=last)
    return _made(words, letter, len(texts) - 2, model=_unquoted(last))


def _unknown(words: Words, models: Collection[str]) -> Element:
    name = words.texts[0] if words.texts else words.line.text.strip()
    letter = name[0].upper()
    if letter.isalpha():
        if len(words.texts) == 5 and _TRIMMER.match(name) and is_value(words.texts[4]):
            return _made(words, "R", 3, value=words.texts[4])
        return _part(words, letter if len(letter) == 1 else "")
    if letter == "+":
        message, remedy = "`+` continues nothing", "put the line that it continues before it"
    else:
        message, remedy = "neither an element nor a card", "begin a comment with `*`; check that this is a netlist"
    raise words.line.error(
        indent(words.line),
        message,
        "a reference designator that begins with a letter, or a dot card",
        remedy,
    )


def _two_nodes(words: Words, models: Collection[str]) -> Element:
    """Read a resistor, capacitor or inductor; a resistor of three nodes is a trimmer."""
    texts = words.texts
    letter = texts[0][0].upper()
    if len(texts) == 4:
        last = texts[3]
        if not words.assignments and is_value(last):
            return _made(words, letter, 2, value=last)
        if last.casefold() in models:
            return _valued(words, letter, model=last)
        other = _PREFIXES.get(_prefix(words))
        if other is not None and not is_value(last):
            return _part(words, other)
        return _valued(words, letter, value=last)
    if len(texts) < 4:
        if len(texts) < 3 or (is_value(texts[2]) and not texts[2].isdigit()):
            _too_few(words, letter, "two nodes and a value")
        return _valued(words, letter)
    return _long_two_nodes(words, letter, models)


def _valued(words: Words, letter: str, value: str = "", model: str = "") -> Element:
    """Make a part whose value may stand as `R=`, `C=` or `L=` at the end."""
    element = _made(words, letter, 2, value, model)
    named = letter.casefold()
    if named in element.attributes and not value:
        attributes = dict(element.attributes)
        element.value = attributes.pop(named)
        element.attributes = attributes or NOTHING
    return element


def _long_two_nodes(words: Words, letter: str, models: Collection[str]) -> Element:
    texts = words.texts
    third, fourth = texts[3], texts[4]
    rest = " ".join(texts[4:])
    if third.casefold() in models:
        return _made(words, letter, 2, value=fourth, model=third)
    if fourth.casefold() in models and is_value(third):
        return _made(words, letter, 2, value=third, model=fourth)
    if is_value(third) and (not third.isdigit() or _RATING.fullmatch(fourth)):
        return _made(words, letter, 2, value=f"{third} {rest}")
    trimmer = letter == "R" and (is_value(fourth) or _TRIMMER.match(texts[0]))
    if trimmer and all(_RATING.fullmatch(word) for word in texts[5:]):
        assumption = "" if _TRIMMER.match(texts[0]) else "three nodes and a value: taken as a trimmer"
        return _made(words, letter, 3, value=rest, assumption=assumption)
    return _part(words, _PREFIXES.get(_prefix(words), ""))


def _diode(words: Words, models: Collection[str]) -> Element:
    texts = words.texts
    if len(texts) < 4:
        if _PREFIXES.get(_prefix(words)) == "" and len(texts) == 3:
            return _part(words)
        _too_few(words, "D")
    if len(texts) == 4 or texts[3].casefold() in models or _is_size(texts[4]):
        return _with_size(words, "D", 2)
    element = _part(words, _PREFIXES.get(_prefix(words), "D"))
    element.assumption = f"taken as {len(element.nodes)} nodes and the model {element.model}"
    return element


def _is_size(word: str) -> bool:
    """Return whether `word` is what may follow the model: a relative area or the initial state."""
    return word.casefold() in ("off", "on") or is_value(word)


def _with_size(words: Words, letter: str, nodes: int, assumption: str = "") -> Element:
    """Make a semiconductor from its node count; what follows the model is its area or initial state."""
    texts = words.texts
    extra = {"area": " ".join(texts[nodes + 2 :])} if len(texts) > nodes + 2 else NOTHING
    return _made(words, letter, nodes, model=texts[nodes + 1], extra=extra, assumption=assumption)


def _transistor(words: Words, models: Collection[str]) -> Element:
    """Read a transistor of three nodes or more: the first word behind them that is a known model ends them."""
    texts = words.texts
    letter = texts[0][0].upper()
    if len(texts) < 5:
        if _prefix(words) in _PREFIXES or (letter == "Z" and len(texts) == 4):
            return _part(words, _PREFIXES.get(_prefix(words), ""))
        _too_few(words, letter)
    for index in range(4, len(texts)):
        if texts[index].casefold() in models:
            return _with_size(words, letter, index - 1)
    last = len(texts) - 1
    while last > 4 and letter != "M" and _is_size(texts[last]):
        last -= 1
    fixed = last == 4 or (letter == "M" and last == 5)
    assumption = "" if fixed else f"taken as {last - 1} nodes and the model {texts[last]}, which is not at hand"
    return _with_size(words, letter, last - 1, assumption)


def _junction_transistor(words: Words, models: Collection[str]) -> Element:
    """Read a JFET, or a connector: both go by J."""
    texts = words.texts
    if len(texts) > 5 and (texts[4].casefold() in models or (len(texts) == 6 and _is_size(texts[5]))):
        return _with_size(words, "J", 3)
    return _part(words, "J" if len(texts) == 5 else "")


def _switch(words: Words, models: Collection[str]) -> Element:
    """Read a switch: four nodes, two of them its control (S), or two and a controlling source (W)."""
    texts = words.texts
    if texts[0][0] in "Ww" and len(texts) in (5, 6) and texts[3][0] in "Vv":
        extra = {"through": texts[3]}
        return _made(words, "W", 2, model=texts[4], extra=extra)
    if texts[0][0] in "Ss" and (len(texts) == 6 or (len(texts) == 7 and _is_size(texts[6]))):
        return _made(words, "S", 4, model=texts[5])
    return _part(words)


def _line_or_transformer(words: Words, models: Collection[str]) -> Element:
    """Read a transmission line (T with its impedance, O with a known model), or a part of many nodes."""
    texts = words.texts
    letter = texts[0][0].upper()
    named = {pair.key for pair in words.assignments}
    if letter == "T" and len(texts) >= 5 and named & {"z0", "zo", "td", "f", "nl"}:
        return _made(words, "T", 4)
    if letter == "O" and len(texts) == 6 and texts[5].casefold() in models:
        return _made(words, "O", 4, model=texts[5])
    return _part(words)


def _coupling(words: Words, models: Collection[str]) -> Element:
    """Read a coupling of inductors, which has no node, or a relay."""
    texts = words.texts
    if len(texts) < 4:
        _too_few(words, "K")
    if all(word[0] in "Ll" for word in texts[1:-1]):
        return _made(words, "K", 0, value=texts[-1], extra={"couples": " ".join(texts[1:-1])})
    return _part(words)


def _source(words: Words, models: Collection[str]) -> Element:
    """Read a voltage or current source: its DC value, and the rest as its waveform."""
    texts = words.texts
    letter = texts[0][0].upper()
    if len(texts) < 3:
        _too_few(words, letter, "two nodes and a value")
    if len(texts) > 3 and not _WAVEFORM.match(texts[3]) and (len(texts) == 5 or not is_value(texts[3])):
        other = _not_a_source(words)
        if other is not None:
            return other
    attributes = _attributes(words)
    value = attributes.pop("dc", "")
    waveform: list[str] = []
    if len(texts) > 3:
        at = 3
        if texts[3].casefold() == "dc" and len(texts) > 4:
            value, at = texts[4], 5
        elif is_value(texts[3]) or len(texts) == 4 and not _WAVEFORM.match(texts[3]):
            value, at = texts[3], 4
        if at < len(texts):
            waveform.append(_raw(words, at, to_pairs=True))
            lower = [word.casefold() for word in texts]
            if not value and "dc" in lower[at:-1]:
                value = texts[lower.index("dc", at) + 1]
    if "ac" in attributes:
        waveform.append(f"AC {attributes.pop('ac')}")
    if waveform:
        attributes["waveform"] = " ".join(waveform)
    return Element(texts[0], letter, tuple(texts[1:3]), value, "", attributes or NOTHING, words.line)


def _not_a_source(words: Words) -> Element | None:
    """Return a trimmer, regulator or integrated circuit whose reference begins with V or I."""
    texts = words.texts
    prefix = _prefix(words)
    last = texts[-1]
    if prefix == "VR" and len(texts) == 5:
        if is_value(last) and not _REGULATOR.fullmatch(last):
            return _made(words, "R", 3, value=last)
        return _part(words, "U")
    if prefix in _PREFIXES and not is_value(texts[3]) or prefix == "IC" and len(texts) > 4:
        return _part(words, _PREFIXES[prefix])
    if len(texts) > 4 and not words.assignments and not is_value(texts[3]):
        return _part(words)
    return None


def _raw(words: Words, at: int, *, to_pairs: bool = False) -> str:
    """Return the line's text from positional word `at` on, on one line; optionally only up to the pairs."""
    text = words.line.text
    if at < len(words.texts):
        start = words.indexes[at]
    else:
        start = words.indexes[-1] + len(words.texts[-1])
    end = len(text)
    if to_pairs and words.assignments:
        pair = words.assignments[0]
        end = text.rfind("=", 0, pair.start)
        end = len(text[:end].rstrip()) - len(pair.key)
    return " ".join(text[start:end].strip(") \t\r" if start < end and text[start] == ")" else None).split())


def _controlled_source(words: Words, models: Collection[str]) -> Element:
    """Read a controlled source: E and G by a voltage, F and H by the current through a source."""
    texts = words.texts
    letter = texts[0][0].upper()
    if len(texts) < 3:
        _too_few(words, letter, "two nodes and what controls the source")
    behavioural = bool(words.assignments) or len(texts) > 3 and _CONTROLLED.match(texts[3]) is not None
    if not behavioural:
        if letter in "EG" and len(texts) == 6:
            return _made(words, letter, 4, value=texts[5])
        if letter in "FH" and len(texts) == 5 and texts[3][0] in "Vv":
            return _made(words, letter, 2, value=texts[4], extra={"through": texts[3]})
        return _part(words)
    return _behavioural(words, letter)


def _behavioural_source(words: Words, models: Collection[str]) -> Element:
    if words.assignments and len(words.texts) >= 3:
        return _behavioural(words, "B")
    return _part(words)


def _behavioural(words: Words, letter: str) -> Element:
    """Make a source whose law is kept as text."""
    texts = words.texts
    extra = {"expression": _raw(words, 3)}
    return Element(texts[0], letter, tuple(texts[1:3]), "", "", extra, words.line)


def _package(words: Words, models: Collection[str]) -> Element:
    """Read an integrated circuit: its nodes, then its model. A gate of a digital library has its type first."""
    texts = words.texts
    if len(texts) > 4 and texts[1].endswith(")") and "(" in texts[1]:
        element = _made(words, "U", 0, model=texts[1], extra={"timing": " ".join(texts[-2:])})
        element.nodes = tuple(texts[2:-2])
        element.first = 2
        return element
    return _part(words, "U")


def _ports(words: Words, models: Collection[str]) -> Element:
    """Read a code model: ports in brackets, with their types, then the model."""
    line = words.line
    blanked = _PORT_MARKS.sub(lambda match: " " * len(match[0]), line.text)
    return _part(split(Line(line.source, line.number, blanked), exact=True), "A")


def _instance(words: Words, models: Collection[str]) -> Element:
    """Read a subcircuit's instance: its nodes, then the name; old exports put a file name between."""
    texts = words.texts
    if len(texts) < 2:
        _too_few(words, "X")
    extra = NOTHING
    nodes = len(texts) - 2
    if nodes and _LIBRARY_FILE.fullmatch(texts[-2]):
        extra = {"library": texts[-2]}
        nodes -= 1
    return _made(words, "X", nodes, model=_unquoted(texts[-1]), extra=extra)


_Reader = Callable[[Words, Collection[str]], Element]

_READERS: dict[str, _Reader] = {
    "A": _ports,
    "B": _behavioural_source,
    "C": _two_nodes,
    "D": _diode,
    "E": _controlled_source,
    "F": _controlled_source,
    "G": _controlled_source,
    "H": _controlled_source,
    "I": _source,
    "J": _junction_transistor,
    "K": _coupling,
    "L": _two_nodes,
    "M": _transistor,
    "O": _line_or_transformer,
    "Q": _transistor,
    "R": _two_nodes,
    "S": _switch,
    "T": _line_or_transformer,
    "U": _package,
    "V": _source,
    "W": _switch,
    "X": _instance,
    "Z": _transistor,
}
_NEED_INDEXES = frozenset("VIEFGHBA")
