"""The forms of EDIF that make a netlist, as the file nests them: library, cell, view, instance, net."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from decimal import Decimal
from typing import NamedTuple, TypeVar

from .edif_names import Name

_Item = TypeVar("_Item")


def merged(one: list[_Item], other: list[_Item]) -> list[_Item]:
    """Return the items of both lists; the longer one is kept and grows, so that deep nesting is cheap."""
    longer, shorter = (one, other) if len(one) >= len(other) else (other, one)
    longer += shorter
    return longer


class JoinedRun(NamedTuple):
    """A span of the text that is a run of `(portRef port (instanceRef instance))`; see edif_runs.py."""

    start: int
    end: int


class InstanceRun(NamedTuple):
    """A span of the text that holds the items of an instance behind its view; see edif_runs.py."""

    start: int
    end: int


class Member(NamedTuple):
    """A reference to a name, or to one bit of the array of that name, counted from 0."""

    identifier: str
    bit: int | None
    offset: int


class PortRef(NamedTuple):
    """A port of the instance at the end of `path`, outermost first; of the cell itself where it is empty."""

    port: Member
    path: Sequence[Member] = ()


class Path(NamedTuple):
    """Instances one inside the other, outermost first; it grows while the forms around it are made."""

    steps: list[Member]


class GlobalRef(NamedTuple):
    """A port that is the same net in every cell that names it."""

    port: Member


class PortList(NamedTuple):
    """Ports in order, each for one bit of the net that joins the list."""

    ports: tuple[PortRef, ...]


class Joined(NamedTuple):
    """What a `joined` form ties together, where it was written in other than the usual way."""

    references: tuple[PortRef | GlobalRef | PortList, ...]


class Unit(NamedTuple):
    """The unit of a number, such as RESISTANCE."""

    kind: str


class Property(NamedTuple):
    """A property with its value as text or as a number with a unit."""

    name: str
    value: str | Decimal
    unit: str = ""


class Designator(NamedTuple):
    """A reference designator, or the number of a pin."""

    text: str


class PinNumber(NamedTuple):
    """The package's pin number of one port of an instance."""

    port: str
    number: str


class LibraryRef(NamedTuple):
    """The library in which a cell is to be found."""

    identifier: str


class CellRef(NamedTuple):
    """The cell that an instance is made of; an empty library or view leaves the choice open."""

    cell: str
    library: str
    view: str


class CellKind(NamedTuple):
    """What a cell is for: GENERIC, TIE or RIPPER."""

    text: str


class ViewKind(NamedTuple):
    """What a view shows: NETLIST, SCHEMATIC, GRAPHIC and others."""

    text: str


class Scales(NamedTuple):
    """For each kind of unit what one unit of the file is in the SI."""

    factors: dict[str, Decimal]


class Version(NamedTuple):
    """The version of EDIF that the file says it is written in."""

    words: tuple[str, ...]
    offset: int


class KeywordLevel(NamedTuple):
    """The level of keywords; above 0 a file may define keywords of its own."""

    words: tuple[str, ...]
    offset: int


@dataclass(slots=True)
class Port:
    """A port of a cell; a bundle has members, an array has sizes in its name."""

    name: Name
    designator: str = ""
    properties: list[Property] = field(default_factory=list[Property])
    members: list[Port] = field(default_factory=list["Port"])


class PortGroup(NamedTuple):
    """The ports in a bundle."""

    ports: list[Port]


@dataclass(slots=True)
class Instance:
    """One use of a cell, and what is said of it."""

    name: Name
    cell: CellRef | None
    items: InstanceRun | tuple[Property | Designator | PinNumber, ...]


@dataclass(slots=True)
class Net:
    """One net form and what it joins."""

    name: Name
    joined: list[JoinedRun | Joined] = field(default_factory=list[JoinedRun | Joined])
    instances: list[Instance] = field(default_factory=list[Instance])


@dataclass(slots=True)
class Contents:
    """The instances, nets and off-page connectors of a view, those of all its pages together."""

    instances: list[Instance] = field(default_factory=list[Instance])
    nets: list[Net] = field(default_factory=list[Net])
    off_page: list[Port] = field(default_factory=list[Port])

    def add(self, other: Contents) -> None:
        """Take in what a page, a section or a bundle holds."""
        self.instances = merged(self.instances, other.instances)
        self.nets = merged(self.nets, other.nets)
        self.off_page = merged(self.off_page, other.off_page)


@dataclass(slots=True)
class View:
    """One view of a cell: ports outside, contents inside. `kind` is NETLIST, SCHEMATIC or another."""

    name: Name
    kind: str = ""
    ports: Sequence[Port] = ()
    joined: Sequence[JoinedRun | Joined] = ()
    contents: Contents | None = None
    properties: Sequence[Property] = ()
    prefix: str = ""

    def is_filled(self) -> bool:
        """Say whether the view shows how the cell is made."""
        return self.contents is not None

    def all_ports(self) -> Iterator[Port]:
        """Yield the ports, those of bundles one by one, in the order of the file."""
        waiting = [*reversed(self.ports)]
        while waiting:
            port = waiting.pop()
            if port.members:
                waiting += port.members[::-1]
            else:
                yield port


@dataclass(slots=True)
class Cell:
    """A cell: a part, a symbol, or a circuit with contents. `kind` is GENERIC, TIE or RIPPER."""

    name: Name
    kind: str = "GENERIC"
    views: list[View] = field(default_factory=list[View])
    properties: list[Property] = field(default_factory=list[Property])


@dataclass(slots=True)
class Library:
    """A library; `scales` gives the value of one unit of the file for each kind of unit."""

    name: Name
    cells: list[Cell] = field(default_factory=list[Cell])
    scales: dict[str, Decimal] = field(default_factory=dict[str, Decimal])


@dataclass(slots=True)
class Design:
    """The entry into the file: the cell that is the whole circuit."""

    name: Name
    cell: CellRef | None = None


@dataclass(slots=True)
class Edif:
    """The whole file."""

    name: Name
    version: Version | None = None
    keyword_level: KeywordLevel | None = None
    libraries: list[Library] = field(default_factory=list[Library])
    designs: list[Design] = field(default_factory=list[Design])
