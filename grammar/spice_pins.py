"""The pins of a part of a SPICE-style list, made when first asked for."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import overload

from .netlist import Net, Pin
from .spice_element import Element


class ListedPins(Sequence[Pin]):
    """The pins of a part, made when first asked for: their columns must be sought in the text."""

    __slots__ = ("_element", "_names", "_nets", "_numbered", "_pins")

    def __init__(
        self, element: Element, nets: tuple[Net, ...], names: Sequence[str] = (), *, numbered: bool = False
    ) -> None:
        self._element = element
        self._nets = nets
        self._names = names
        self._numbered = numbered
        self._pins: tuple[Pin, ...] | None = None

    def _made(self) -> tuple[Pin, ...]:
        if self._pins is None:
            places = self._element.node_places()
            names = self._names or [""] * len(self._nets)
            self._pins = tuple(
                Pin(name if self._numbered else str(position), name, net.name, place)
                for position, (net, name, place) in enumerate(zip(self._nets, names, places, strict=True), 1)
            )
        return self._pins

    def __len__(self) -> int:
        return len(self._nets)

    @overload
    def __getitem__(self, index: int) -> Pin: ...

    @overload
    def __getitem__(self, index: slice) -> tuple[Pin, ...]: ...

    def __getitem__(self, index: int | slice) -> Pin | tuple[Pin, ...]:
        return self._made()[index]

    def __iter__(self) -> Iterator[Pin]:
        return iter(self._made())

    def __eq__(self, other: object) -> bool:
        return self._made() == (other._made() if isinstance(other, ListedPins) else other)

    def __hash__(self) -> int:
        return hash(self._made())

    def __repr__(self) -> str:
        return repr(self._made())
