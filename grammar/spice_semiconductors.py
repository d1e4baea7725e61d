"""Diodes and transistors of a SPICE-style list: how many nodes come before the model."""

from __future__ import annotations

from collections.abc import Collection

from .spice_element import NOTHING, PREFIXES, Element, is_value, made, part, prefix_of, too_few
from .spice_words import Words


def diode(words: Words, models: Collection[str]) -> Element:
    """Read a diode; one of three nodes or more is a pair or a bridge."""
    texts = words.texts
    if len(texts) < 4:
        if PREFIXES.get(prefix_of(words)) == "" and len(texts) == 3:
            return part(words)
        too_few(words, "D")
    if len(texts) == 4 or texts[3].casefold() in models or is_size(texts[4]):
        return _with_size(words, "D", 2)
    element = part(words, PREFIXES.get(prefix_of(words), "D"))
    element.assumption = f"taken as {len(element.nodes)} nodes and the model {element.model}"
    return element


def is_size(word: str) -> bool:
    """Return whether `word` is what may follow the model: a relative area or the initial state."""
    return word.casefold() in ("off", "on") or is_value(word)


def _with_size(words: Words, letter: str, nodes: int, assumption: str = "") -> Element:
    """Make a semiconductor from its node count; what follows the model is its area or initial state."""
    texts = words.texts
    extra = {"area": " ".join(texts[nodes + 2 :])} if len(texts) > nodes + 2 else NOTHING
    return made(words, letter, nodes, model=texts[nodes + 1], extra=extra, assumption=assumption)


def transistor(words: Words, models: Collection[str]) -> Element:
    """Read a transistor of three nodes or more: the first known model behind them ends them."""
    texts = words.texts
    letter = texts[0][0].upper()
    if len(texts) < 5:
        if prefix_of(words) in PREFIXES or (letter == "Z" and len(texts) == 4):
            return part(words, PREFIXES.get(prefix_of(words), ""))
        too_few(words, letter)
    for index in range(4, len(texts)):
        if texts[index].casefold() in models:
            return _with_size(words, letter, index - 1)
    last = len(texts) - 1
    while last > 4 and letter != "M" and is_size(texts[last]):
        last -= 1
    fixed = last == 4 or (letter == "M" and last == 5)
    taken = f"taken as {last - 1} nodes and the model {texts[last]}, which is not at hand"
    return _with_size(words, letter, last - 1, "" if fixed else taken)


def junction_transistor(words: Words, models: Collection[str]) -> Element:
    """Read a JFET, or a connector: both go by J."""
    texts = words.texts
    if len(texts) > 5 and (texts[4].casefold() in models or (len(texts) == 6 and is_size(texts[5]))):
        return _with_size(words, "J", 3)
    return part(words, "J" if len(texts) == 5 else "")
