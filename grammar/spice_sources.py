"""Sources of a SPICE-style list: independent, controlled and behavioural."""

from __future__ import annotations

import re
from collections.abc import Collection

from .spice_element import NOTHING, PREFIXES, Element, attributes_of, is_value, made, part, prefix_of, too_few
from .spice_words import Words

_WAVEFORM = re.compile(
    r"(?:dc|ac|pulse|sine?|exp|pwl|sffm|am|pat|tbl|trnoise|trrandom|wavefile|distof[12]|external)(?![^\W_])",
    re.IGNORECASE,
)
_DECIMAL_COMMA = re.compile(r",\d+[^\s,]*")
_CONTROLLED = re.compile(r"(?:value|vol|cur|poly|table|laplace|freq|chebyshev|pwl)(?![^\W_])", re.IGNORECASE)
_REGULATOR = re.compile(r"7[89]\d\d|[13]17|337")  # a VR1 with this number is no trimmer of 7805 ohm


def source(words: Words, models: Collection[str]) -> Element:
    """Read a voltage or current source: its DC value, and the rest as its waveform."""
    texts = words.texts
    letter = texts[0][0].upper()
    if len(texts) < 3:
        too_few(words, letter, "two nodes and a value")
    other = _not_a_source(words)
    if other is not None:
        return other
    attributes = attributes_of(words)
    value, at = _dc_value(texts, attributes.pop("dc", ""))
    waveform = [_raw(words, at, to_pairs=True)] if at < len(texts) else []
    if waveform and (comma := _DECIMAL_COMMA.match(waveform[0])) and value.isdigit():
        value += comma[0]  # kept, for who reads the value to say so
        waveform = [waveform[0][comma.end() :].lstrip()] if comma.end() < len(waveform[0]) else []
    if "ac" in attributes:
        waveform.append(f"AC {attributes.pop('ac')}")
    if waveform:
        attributes["waveform"] = " ".join(waveform)
    element = made(words, letter, 2, value)
    element.attributes = attributes or NOTHING
    return element


def _dc_value(texts: list[str], named: str) -> tuple[str, int]:
    """Return the DC value of a source, `named` being that of `DC=`, and the index of the next word."""
    lower = [word.casefold() for word in texts]
    if lower[3:4] == ["dc"] and len(texts) > 4:
        return texts[4], 5
    if len(texts) > 3 and (is_value(texts[3]) or not _WAVEFORM.match(texts[3])):
        return texts[3], 4
    if "dc" in lower[3:-1]:
        return texts[lower.index("dc", 3) + 1], 3
    return named, 3


def _not_a_source(words: Words) -> Element | None:
    """Return a trimmer, regulator or integrated circuit whose reference begins with V or I."""
    texts = words.texts
    prefix = prefix_of(words)
    if len(texts) < 4 or _WAVEFORM.match(texts[3]):
        return None
    if prefix == "VD":
        return None if is_value(texts[3]) else part(words, "D")
    if prefix == "VR" and len(texts) == 5:
        if is_value(texts[4]) and not _REGULATOR.fullmatch(texts[4]):
            return made(words, "R", 3, value=texts[4])
        return part(words, "U")
    if prefix in PREFIXES and (not is_value(texts[3]) or len(texts) > 4):
        return part(words, PREFIXES[prefix])
    if len(texts) > 4 and not words.assignments and not is_value(texts[3]):
        return part(words)
    return None


def _raw(words: Words, at: int, *, to_pairs: bool = False) -> str:
    """Return the text behind the positional word `at` - 1, on one line; optionally up to the pairs."""
    text = words.line.text
    start = words.indexes[at - 1] + len(words.texts[at - 1])
    end = len(text)
    if to_pairs and words.assignments:
        pair = words.assignments[0]
        end = len(text[: text.rfind("=", 0, pair.start)].rstrip()) - len(pair.key)
    raw = text[start:end].strip()
    # Of nodes in parentheses, as in V1 (in 0) 5, the last one leaves its parenthesis behind.
    return " ".join(raw.removeprefix(")").split())


def controlled_source(words: Words, models: Collection[str]) -> Element:
    """Read a controlled source: E and G by a voltage, F and H by the current through a source."""
    texts = words.texts
    letter = texts[0][0].upper()
    if len(texts) < 3:
        too_few(words, letter, "two nodes and what controls the source")
    named = len(texts) > 3 and _CONTROLLED.match(texts[3]) is not None
    if not named and not words.assignments:
        if letter in "EG" and len(texts) == 6:
            return made(words, letter, 4, value=texts[5])
        if letter in "FH" and len(texts) == 5 and texts[3][0] in "Vv":
            return made(words, letter, 2, value=texts[4], extra={"through": texts[3]})
        return part(words)
    return _behavioural(words, letter)


def behavioural_source(words: Words, models: Collection[str]) -> Element:
    """Read a source whose law is an expression, or a part such as a battery whose reference begins with B."""
    if words.assignments and len(words.texts) >= 3:
        return _behavioural(words, "B")
    return part(words)


def _behavioural(words: Words, letter: str) -> Element:
    """Make a source whose law is kept as text."""
    element = made(words, letter, 2)
    element.attributes = {"expression": _raw(words, 3)}
    return element
