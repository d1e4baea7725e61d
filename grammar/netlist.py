"""What is written in a netlist, and where.

Nothing electrical is decided here: a part has a reference designator, pins on nets and the text of its
value; what the text means in ohms and which net is ground is for the floor above.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import NamedTuple


class Place(NamedTuple):
    """Where something stands in a file: `line` and `column` count from 1; 0 means the file as a whole."""

    file: str
    line: int
    column: int

    def __str__(self) -> str:
        """Return `file:line:column`, the form that editors and CI logs follow."""
        return f"{self.file}:{self.line}:{self.column}"


class Pin(NamedTuple):
    """One pin of a part and the net it is on.

    `number` is the package's pin number where the file tells it, else the position in the file's own node
    list counted from 1. `name` is the pin's name where the file tells one, else empty. `net` is the key of
    the net in `Netlist.nets`, or empty for a pin that the file leaves unconnected.
    """

    number: str
    name: str
    net: str
    place: Place


@dataclass(slots=True)
class Part:
    """One part as the file describes it.

    reference:  reference designator with its path in the hierarchy, such as `R7` or `psu/U1`
    element:    the element letter of a SPICE-style list, upper case; empty where the format has none
    value:      text of the value as written, empty where there is none
    model:      library cell, model or subcircuit name as written, empty where there is none
    pins:       in the order of the file: a tuple, or a sequence that makes its pins when first asked (the
                SPICE-style reader's: seeking columns that nobody asks for would double the reading time)
    attributes: name (casefolded) to text, everything else that the file says of the part
    pins_known: how the numbers and names of the pins were learnt: "numbers" (the file states package pin
                numbers), "names" (formal or port names), "positions" (only the order of the nodes)
    fitted:     False where the file says that the part is not populated
    """

    reference: str
    element: str
    value: str
    model: str
    pins: Sequence[Pin]
    place: Place
    attributes: Mapping[str, str] = field(default_factory=dict[str, str])
    pins_known: str = "positions"
    fitted: bool = True


@dataclass(slots=True)
class Net:
    """One net: its name as written first, and the pins on it as (part reference, index into its pins)."""

    name: str
    place: Place
    pins: list[tuple[str, int]] = field(default_factory=list[tuple[str, int]])


class Note(NamedTuple):
    """Something the reader assumed, skipped or found odd; no error, but never passed over in silence.

    `kind` is one of `NOTE_KINDS`; `subject` is the part, net or card it is about.
    """

    kind: str
    message: str
    place: Place
    subject: str = ""


NOTE_KINDS = frozenset(
    {
        "assumption",  # the file leaves it open and the reader chose: the message says what
        "title-line",  # the first line of a list reads as an element, and was taken as the title
        "value-ambiguous",  # a simulator and the marking standard read the value differently
        "name-collision",  # two names differ by letter case only
        "duplicate-reference",  # one reference designator was written twice; the first is kept under it
        "not-fitted",  # the part is not populated, and left out of the circuit
        "skipped",  # a card, block or form without meaning for a netlist
        "missing-library",  # an included file or a library definition is not at hand
        "pin-mismatch",  # the number of nodes does not fit the definition
    }
)


@dataclass(slots=True)
class Netlist:
    """A whole design as read: parts and nets by name, in the order of the file.

    file:     the path as given by the caller
    format:   "EDIF 2 0 0" or "SPICE list"
    name:     the design's own name or title, may be empty
    parts:    reference designator to Part; two parts with one reference get `R1`, `R1#2` and a note
    nets:     net name to Net; where the format folds case, the key is the spelling met first
    notes:    what the reader assumed or skipped
    models:   SPICE `.model` name (casefolded) to its type (casefolded), such as "npn" or "d"
    files:    every file that was read, the first one included
    """

    file: str
    format: str
    name: str = ""
    parts: dict[str, Part] = field(default_factory=dict[str, Part])
    nets: dict[str, Net] = field(default_factory=dict[str, Net])
    notes: list[Note] = field(default_factory=list[Note])
    models: dict[str, str] = field(default_factory=dict[str, str])
    files: list[str] = field(default_factory=list[str])
