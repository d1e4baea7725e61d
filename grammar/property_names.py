"""The meaning of a part's properties, by the table of names in property_names.toml."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterable, Mapping
from functools import cache, lru_cache
from pathlib import Path
from typing import NamedTuple, cast

_ENTRY = re.compile(r"[,;/|]")
_UNIT_WITHOUT_NUMBER = re.compile(r"[+-]?[0-9.]+")
_SIZE_AND_STATE = re.compile(r"[0-9]+-(.+)")

_SHORT = 200  # characters
_KEPT = 4096


class Meaning(NamedTuple):
    """What a property says: the name that this program uses, and the rank among the names of one meaning."""

    key: str
    rank: int


class FitWords(NamedTuple):
    """Words about whether a part is fitted; see property_names.toml. `single`: those of `anywhere` alone."""

    single: frozenset[str]
    anywhere: re.Pattern[str]
    alone: frozenset[str]
    yes: frozenset[str]
    no: frozenset[str]


class SymbolWords(NamedTuple):
    """Words that tell power symbols and off-page symbols; see property_names.toml."""

    power_properties: frozenset[str]
    power_words: tuple[str, ...]
    off_page_words: tuple[str, ...]
    name: tuple[str, ...]


@cache
def _table() -> dict[str, dict[str, list[str]]]:
    text = Path(__file__).with_suffix(".toml").read_text(encoding="utf-8")
    return cast(dict[str, dict[str, list[str]]], tomllib.loads(text))


def fold(name: str) -> str:
    """Return the letters and digits of a name, casefolded: what two names are compared by."""
    return "".join(filter(str.isalnum, name.casefold()))


@cache
def _meanings() -> dict[str, Meaning]:
    return {
        fold(alias): Meaning(key, rank)
        for key, aliases in _table()["names"].items()
        for rank, alias in enumerate(aliases)
    }


def meaning(name: str) -> Meaning | None:
    """Return what a property of this name says, None where the table does not know the name."""
    return _meanings().get(fold(name))


@cache
def fit_words() -> FitWords:
    """Return the words about whether a part is fitted."""
    table = _table()["fit"]
    anywhere = "|".join(r"\s+".join(map(re.escape, words.split())) for words in table["anywhere"])
    return FitWords(
        frozenset(words for words in table["anywhere"] if " " not in words),
        re.compile(rf"(?<![^\W_])(?:{anywhere})(?![^\W_])", re.IGNORECASE),
        frozenset(table["alone"]),
        frozenset(table["yes"]),
        frozenset(table["no"]),
    )


@cache
def symbol_words() -> SymbolWords:
    """Return the words that tell power symbols and off-page symbols."""
    table = _table()["symbols"]
    return SymbolWords(
        frozenset(table["power_properties"]),
        tuple(table["power_words"]),
        tuple(table["off_page_words"]),
        tuple(table["name"]),
    )


def read_properties(pairs: Iterable[tuple[str, str]]) -> dict[str, str]:
    """Return the properties of a part by meaning, the others under their own name, casefolded.

    pairs: names as displayed and values as decoded, in the order of the file; empty values say nothing.
    """
    properties: dict[str, str] = {}
    ranks: dict[str, int] = {}
    for name, text in pairs:
        text = text.strip()
        if not text:
            continue
        key, rank = _known_name(name)
        if rank < ranks.get(key, rank + 1):
            properties[key], ranks[key] = text, rank
    return properties


def _known_name(name: str) -> tuple[str, int]:
    found = _short_meaning(name) if len(name) <= _SHORT else None
    return (found.key, found.rank) if found else (name.casefold(), 0)


def is_fitted(value: str, properties: Mapping[str, str]) -> bool:
    """Say whether a part is fitted, by its value and by its properties of the meanings `fit` to `state`."""
    words = fit_words()
    fit = properties.get("fit", "").casefold()
    if fit in words.no or properties.get("not fit", "").casefold() in words.yes:
        return False
    return not any(map(leaves_out, (value, fit, properties.get("state", ""))))


def leaves_out(text: str) -> bool:
    """Say whether a value such as `10K,1%,DNI` says that the part is left out."""
    return _short_leaves_out(text) if len(text) <= _SHORT else _leaves_out(text)


def _leaves_out(text: str) -> bool:
    words = fit_words()
    if words.anywhere.search(text):
        return True
    return any(_entry_leaves_out(entry.split(), words.alone) for entry in _ENTRY.split(text.casefold()))


# Boards say the same a thousand times; but what is kept must be bounded, as it comes from the file.
_short_leaves_out = lru_cache(maxsize=_KEPT)(_leaves_out)
_short_meaning = lru_cache(maxsize=_KEPT)(meaning)


def _entry_leaves_out(entry: list[str], alone: frozenset[str]) -> bool:
    if not entry:
        return False
    last = entry[-1]
    if len(entry) == 1:
        state = _SIZE_AND_STATE.fullmatch(last)
        return (state[1] if state else last) in alone
    # `10K NC` is a value and a state, `100 NF` a number and its unit
    return last in alone - {"open"} and not _UNIT_WITHOUT_NUMBER.fullmatch(entry[-2])
