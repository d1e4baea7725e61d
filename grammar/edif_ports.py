"""The ports of a cell, one by one: arrays and bundles taken apart into single bits."""

from __future__ import annotations

from math import prod
from typing import NamedTuple

from .edif_budget import Budget
from .edif_forms import Port, View
from .edif_names import Name, bit_names
from .property_names import symbol_words

_LONGEST_NUMBER = 6


class PortBit(NamedTuple):
    """One pin of a cell. `key` is the port's identifier, with `[3]` behind it for member 3 of an array."""

    key: str
    display: str
    number: str
    is_implicit: bool
    offset: int


def is_number(text: str) -> bool:
    """Say whether a port's name is a pin number, as far as a package has pins."""
    return len(text) <= _LONGEST_NUMBER and text.isascii() and text.isdecimal()


def width(name: Name, budget: Budget) -> int:
    """Return the number of bits of a port, net or instance; 1 where it is no array."""
    if not name.sizes:
        return 1
    size = max(0, prod(name.sizes))
    budget.spend(size, name.offset)
    return size


class PortTable:
    """The ports of one view by identifier, display name and pin number."""

    def __init__(self, view: View, budget: Budget) -> None:
        self.bits: list[PortBit] = []
        self._keys: dict[str, tuple[str, ...]] = {}
        for port in view.all_ports():
            self._add(port, budget)
        self._by_key = {bit.key: bit for bit in self.bits}
        self._add_bundles(view, budget)
        self._others = self._other_names()

    def _add(self, port: Port, budget: Budget) -> None:
        name = port.name
        size = width(name, budget)
        displays = bit_names(name.display, size) if name.sizes else [name.display]
        keys = tuple(f"{name.identifier}[{i}]" for i in range(size)) if name.sizes else (name.identifier,)
        if name.identifier in self._keys:
            return
        self._keys[name.identifier] = keys
        implicit = _is_implicit(port)
        for key, display in zip(keys, displays, strict=True):
            number = port.designator or next(filter(is_number, (display, key)), "")
            self.bits.append(PortBit(key, display, number, implicit, name.offset))

    def _add_bundles(self, view: View, budget: Budget) -> None:
        """Give each bundle the bits of its members, in order; the innermost come last on the list."""
        bundles: list[Port] = []
        waiting = [port for port in view.ports if port.members]
        while waiting:
            bundle = waiting.pop()
            bundles.append(bundle)
            waiting += [port for port in bundle.members if port.members]
        for bundle in reversed(bundles):
            keys = tuple(key for port in bundle.members for key in self._keys.get(port.name.identifier, ()))
            budget.spend(len(keys), bundle.name.offset)
            self._keys.setdefault(bundle.name.identifier, keys)

    def _other_names(self) -> dict[str, tuple[str, ...]]:
        """Return the ports by other names than their exact identifier, the nearest to it first."""
        others: dict[str, tuple[str, ...]] = {}
        for identifier, keys in self._keys.items():
            others.setdefault(identifier.casefold(), keys)
        for bit in self.bits:
            others.setdefault(bit.display.casefold(), (bit.key,))
        for bit in self.bits:
            others.setdefault(bit.number.casefold(), (bit.key,))
        return others

    def keys(self, port: str) -> tuple[str, ...]:
        """Return the keys of the bits of a port; none where no port has this identifier, name or number."""
        found = self._keys.get(port)
        return found if found is not None else self._others.get(port.casefold(), ())

    def bit(self, key: str) -> PortBit | None:
        """Return the bit of this key."""
        return self._by_key.get(key)


def _is_implicit(port: Port) -> bool:
    """Say whether a port stands for a global net, such as a supply that no symbol has a pin for."""
    words = symbol_words().power_properties
    return any(entry.name.casefold() in words for entry in port.properties)
