"""A design as a table of parts and nets, with its brief and its parts list."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field

GROUND = "GND"

# What is drawn for a part, and the names of its pins in the order in which the table gives their nets.
SYMBOLS: Mapping[str, tuple[str, ...]] = {
    "resistor": ("1", "2"),
    "trimmer": ("CW", "W", "CCW"),
    "capacitor": ("1", "2"),
    "electrolytic": ("+", "-"),
    "inductor": ("1", "2"),
    "diode": ("A", "K"),
    "dual-diode": ("A1", "A2", "K"),
    "NMOS": ("D", "G", "S"),
    "PMOS": ("D", "G", "S"),
    "NPN": ("C", "B", "E"),
    "PNP": ("C", "B", "E"),
    "connector": ("1", "2"),
    "fuse": ("1", "2"),
    "transformer": ("PA", "PCT", "PB", "SA", "SCT", "SB"),
    "half-bridge-transformer": ("PA", "PB", "SA", "SCT", "SB"),
    "drive-transformer": ("PA", "PCT", "PB", "S1A", "S1B", "S2A", "S2B"),
    "half-bridge-driver": ("VCC", "HIN", "LIN", "COM", "LO", "VS", "HO", "VB"),
    "controller": (
        *("1IN+", "1IN-", "FEEDBACK", "DTC", "CT", "RT", "GND", "C1"),
        *("E1", "E2", "C2", "VCC", "OUTPUT CTRL", "REF", "2IN-", "2IN+"),
    ),
}

COLUMNS = (
    "value",
    "tolerance",
    "power",
    "voltage",
    "current",
    "package",
    "dielectric",
    "drift",
)


@dataclass(frozen=True, slots=True)
class Part:
    """One part: its nets are in the order of its symbol's pins; value may be empty."""

    reference: str
    symbol: str
    nets: tuple[str, ...]
    value: str

    def index(self, pin: str) -> int:
        """Return where the nets hold that of a pin."""
        return SYMBOLS[self.symbol].index(pin)


@dataclass(frozen=True, slots=True)
class Board:
    """A design. Nothing in it is changed in place: an edit returns another board.

    brief:   dotted key -> value, both as TOML writes them
    ratings: reference designator -> column of the parts list -> text
    """

    name: str
    parts: tuple[Part, ...]
    brief: Mapping[str, str] = field(default_factory=dict[str, str])
    ratings: Mapping[str, Mapping[str, str]] = field(default_factory=dict[str, Mapping[str, str]])

    def part(self, reference: str) -> Part:
        """Return a part by its reference designator."""
        return next(part for part in self.parts if part.reference == reference)


def _lines(table: str) -> Iterator[str]:
    lines = (line.partition("#")[0].strip() for line in table.splitlines())
    return (line for line in lines if line)


def parts_of(table: str) -> tuple[Part, ...]:
    """Read a table of parts, one a line: `R1 resistor RT GND 22k`, the value last and free to be empty."""
    found: list[Part] = []
    for line in _lines(table):
        reference, symbol, *rest = line.split()
        pins = len(SYMBOLS[symbol])
        assert len(rest) >= pins, line
        found.append(Part(reference, symbol, tuple(rest[:pins]), " ".join(rest[pins:])))
    return tuple(found)


def brief_of(table: str) -> dict[str, str]:
    """Read a brief, one key a line: `rails.VBAT.voltage = "21 V .. 29 V"`."""
    pairs = (line.partition(" = ") for line in _lines(table))
    return {key.strip(): value.strip() for key, _, value in pairs}


def ratings_of(table: str) -> dict[str, dict[str, str]]:
    """Read ratings, one or more parts a line: `R1-R3 R7: tolerance 1 %; power 0.125 W`."""
    found: dict[str, dict[str, str]] = {}
    for line in _lines(table):
        references, _, cells = line.partition(":")
        row: dict[str, str] = {}
        for cell in cells.split(";"):
            column = next(name for name in COLUMNS if cell.strip().startswith(name))
            row[column] = cell.strip().removeprefix(column).strip()
        for reference in _expanded(references):
            found[reference] = row
    return found


def _expanded(references: str) -> Iterator[str]:
    for word in references.split():
        first, _, last = word.partition("-")
        letters = first.rstrip("0123456789")
        start, end = int(first.removeprefix(letters)), int((last or first).removeprefix(letters))
        yield from (f"{letters}{number}" for number in range(start, end + 1))
