"""What an instance says of itself: its properties, its reference designator, and whether it is a symbol."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Mapping
from decimal import Decimal
from typing import NamedTuple

from .edif_forms import Instance, InstanceRun, PinNumber, Property
from .edif_library import Source
from .edif_names import quantity
from .edif_ports import is_number
from .edif_runs import instance_items
from .property_names import fold, meaning, read_properties, symbol_words

_LONGEST_SECTION = 2  # letters of a section: U5A .. U5Z, U5AA ..
_TEXT_FIELD = re.compile(r"field[0-9]+value", re.IGNORECASE)


class Description(NamedTuple):
    """What the items of an instance say.

    designators: those that are not blank
    properties:  by meaning, see property_names.py
    pin_numbers: port to number
    """

    designators: tuple[str, ...]
    properties: dict[str, str]
    pin_numbers: dict[str, str]


def describe(instance: Instance, text: str, scales: Mapping[str, Decimal]) -> Description:
    """Return what an instance says; `scales` are those of the library it is in."""
    items = instance.items
    designators: list[str] = []
    properties: list[Property] = []
    pin_numbers: dict[str, str] = {}
    for item in instance_items(text, items) if isinstance(items, InstanceRun) else items:
        if isinstance(item, Property):
            properties.append(item)
        elif isinstance(item, PinNumber):
            pin_numbers[item.port] = item.number.strip()
        elif item.text.strip():
            designators.append(item.text.strip())
    return Description(tuple(designators), read_properties(property_pairs(properties, scales)), pin_numbers)


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
    properties: Iterable[Property], scales: Mapping[str, Decimal]
) -> Iterator[tuple[str, str]]:
    """Yield names and values as text, numbers with their unit in the SI."""
    for name, value, unit in properties:
        if isinstance(value, Decimal):
            yield name, quantity(value * scales.get(unit, Decimal(1)), unit)
        else:
            yield _named_inside(name, value) if "=" in value else (name, value)


def _named_inside(name: str, text: str) -> tuple[str, str]:
    """Return name and value of a text field that holds both, such as `TOL=1%` in the property Field3Value."""
    inner, _, value = text.partition("=")
    if fold(inner) == fold(name) or (_TEXT_FIELD.fullmatch(name) and meaning(inner)):
        return inner, value
    return name, text


def reference_of(instance: Instance, said: Description) -> Reference:
    """Return the reference designator: of the instance, else of a property, else its display name.

    Of two designators such as U5C and U5 the second is the package and C the section in it.
    """
    section = said.properties.get("section", "")
    if said.designators:
        first, last = said.designators[0], said.designators[-1]
        package, whole = (first, last) if len(first) < len(last) else (last, first)
        letters = whole[len(package) :]
        if whole.startswith(package) and letters.isalpha() and len(letters) <= _LONGEST_SECTION:
            return Reference(package, letters, True)
        return Reference(first, section, True)
    stated = said.properties.get("reference", "")
    return Reference(stated or instance.name.display, section, bool(stated))


def symbol_of(said: Description, source: Source | None) -> Symbol | None:
    """Return what a power symbol or an off-page symbol says, None for any other instance.

    Both have one pin at most and no reference designator, and netlist views have none of them. Exporters mark
    them by a property of the port or by the name of the cell.
    """
    if source is None or len(source.ports.bits) > 1 or said.designators:
        return None
    if source.view.kind == "NETLIST" or source.view.is_filled():
        return None
    words = symbol_words()
    title = f"{source.library.name.display} {source.cell.name.display}".casefold()
    if any(word in title for word in words.off_page_words):
        name = _symbol_name(said)
        return Symbol(name, False) if name else None
    if any(bit.is_implicit for bit in source.ports.bits) or any(word in title for word in words.power_words):
        ports = [bit.display for bit in source.ports.bits if not is_number(bit.display)]
        return Symbol(_symbol_name(said) or (ports[0] if ports else source.cell.name.display), True)
    return None


def _symbol_name(said: Description) -> str:
    return next((said.properties[key] for key in symbol_words().name if key in said.properties), "")
