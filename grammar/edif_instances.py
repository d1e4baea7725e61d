"""What an instance says of itself: its properties, its reference designator, and whether it is a symbol."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Mapping
from decimal import Decimal
from typing import NamedTuple

from .edif_forms import Instance, Property
from .edif_library import Source
from .edif_names import quantity
from .edif_runs import PropertyRun
from .property_names import fold, meaning, symbol_words

_TEXT_FIELD = re.compile(r"field[0-9]+value", re.IGNORECASE)
_LONGEST_SECTION = 2  # letters of a section: U5A .. U5Z, U5AA ..


class Symbol(NamedTuple):
    """A symbol that is a sign on a net: the net's name, and whether that holds for all sheets."""

    name: str
    is_global: bool


class Reference(NamedTuple):
    """A reference designator, the section of a package with several, and whether the file states it."""

    text: str
    section: str
    is_stated: bool


def property_pairs(
    properties: Iterable[PropertyRun | Property], scales: Mapping[str, Decimal]
) -> Iterator[tuple[str, str]]:
    """Yield names and values as text, numbers with their unit in the SI; `scales` is of the library."""
    for entry in properties:
        if isinstance(entry, PropertyRun):
            for name, text in entry.pairs():
                yield _named_inside(name, text) if "=" in text else (name, text)
        elif isinstance(entry.value, Decimal):
            yield entry.name, quantity(entry.value * scales.get(entry.unit, Decimal(1)), entry.unit)
        else:
            yield entry.name, entry.value


def _named_inside(name: str, text: str) -> tuple[str, str]:
    """Return name and value of a text field that holds both, such as `TOL=1%` in the property Field3Value."""
    inner, _, value = text.partition("=")
    if fold(inner) == fold(name) or (_TEXT_FIELD.fullmatch(name) and meaning(inner)):
        return inner, value
    return name, text


def names_itself(instance: Instance) -> bool:
    """Say whether an instance has a reference designator of its own."""
    return any(text.strip() for text in instance.designators)


def reference_of(instance: Instance, properties: Mapping[str, str]) -> Reference:
    """Return the reference designator: of the instance, else of a property, else its display name.

    Of two designators such as U5C and U5 the second is the package and C the section in it.
    """
    stated = [text.strip() for text in instance.designators if text.strip()]
    section = properties.get("section", "")
    if stated:
        first, last = stated[0], stated[-1]
        package, whole = (first, last) if len(first) < len(last) else (last, first)
        letters = whole[len(package) :]
        if whole.startswith(package) and letters.isalpha() and len(letters) <= _LONGEST_SECTION:
            return Reference(package, letters, True)
        return Reference(first, section, True)
    stated_by_property = properties.get("reference", "")
    return Reference(stated_by_property or instance.name.display, section, bool(stated_by_property))


def symbol_of(instance: Instance, source: Source | None) -> Symbol | None:
    """Return what a power symbol or an off-page symbol says, None for any other instance.

    Both have one pin at most. Exporters mark them by a property of the port or by the name of the cell.
    """
    if source is None or len(source.ports.bits) > 1:
        return None
    words = symbol_words()
    title = f"{source.library.name.display} {source.cell.name.display}".casefold()
    is_power = any(bit.is_implicit for bit in source.ports.bits) or any(w in title for w in words.power_words)
    is_off_page = any(word in title for word in words.off_page_words)
    if not (is_power or is_off_page):
        return None
    name = _symbol_name(instance, source, is_power=is_power and not is_off_page)
    return Symbol(name, is_power and not is_off_page) if name else None


def _symbol_name(instance: Instance, source: Source, *, is_power: bool) -> str:
    stated = {fold(name): text.strip() for name, text in property_pairs(instance.properties, {})}
    for name in symbol_words().name:
        if stated.get(fold(name)):
            return stated[fold(name)]
    if not is_power:
        return ""
    ports = [bit.display for bit in source.ports.bits if not bit.display.isdecimal()]
    return ports[0] if ports else source.cell.name.display
