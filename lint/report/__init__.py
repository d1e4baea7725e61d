"""Reports: one module per format, each with `write(reviews, stream, gate)`.

A new format is a module here and a line in `FORMATS`. A report computes nothing of a circuit: it prints what
the review says, and what the gate says could not be reviewed. The formats of a comparison have a table of
their own, and `write(comparison, stream, gate)`.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from importlib import import_module
from typing import TYPE_CHECKING, NamedTuple, Protocol, TextIO

from ...grammar.errors import NetlistError
from ...grammar.netlist import Place
from ..verdict import Level, Review, Verdict

if TYPE_CHECKING:
    from ..compare.comparison import Comparison

# Name on the command line -> module; loaded only when asked for, so that a JSON report needs no rich.
FORMATS = {
    "text": ".text",
    "json": ".json",
    "sarif": ".sarif",
    "sarif-alerts": ".sarif.alerts",
    "junit": ".junit",
    "markdown": ".markdown",
    "annotations": ".annotations",
}

# The same for what changed between two revisions.
COMPARISON_FORMATS = {"text": ".compare_text", "markdown": ".compare_markdown", "json": ".compare_json"}

NEVER = "never"
GATES = (*(level.value for level in Level), NEVER)
"""The words for the level of a gate, in a configuration and on the command line."""


class Unread(NamedTuple):
    """A netlist that could not be reviewed: its name as given, why, where, and how to mend that."""

    netlist: str
    message: str
    place: Place
    remedy: str = ""

    @classmethod
    def of(cls, netlist: str, error: NetlistError) -> Unread:
        """Return what `error`, the first of its file where there are several, says of `netlist`."""
        return cls(netlist, error.message, error.place, error.remedy)

    @property
    def where(self) -> str:
        """Return the place in words, empty where it says no more than the name of the netlist."""
        if self.place.line > 0:
            return str(self.place)
        return self.place.file if self.place.file != self.netlist else ""


@dataclass(frozen=True, slots=True)
class Gate:
    """What stops a build.

    level:  the least level of a failed verdict that does; None: none does
    strict: whether `open` and `review` verdicts do as well
    own:    by netlist the gates of those that have one of their own, where the netlists of a run differ
    unread: the netlists that could not be reviewed: a run with one does not pass, whatever the gate is
    """

    level: Level | None = Level.ERROR
    strict: bool = False
    own: Mapping[str, Gate] = field(default_factory=dict[str, "Gate"], hash=False)
    unread: tuple[Unread, ...] = ()

    def of(self, review: Review) -> Gate:
        """Return the gate that `review` is held to."""
        return self.own.get(review.netlist, self)

    def passes(self, review: Review) -> bool:
        """Tell whether `review` passes."""
        gate = self.of(review)
        return review.passes(gate.level, strict=gate.strict)

    def passes_all(self, reviews: Iterable[Review]) -> bool:
        """Tell whether a run passes: every netlist could be reviewed, and every review passes."""
        return not self.unread and all(self.passes(review) for review in reviews)

    def stops(self, verdict: Verdict, review: Review) -> bool:
        """Tell whether `verdict`, one of `review`, stops the gate by itself."""
        return not self.passes(replace(review, verdicts=(verdict,)))

    def __str__(self) -> str:
        """Return the gate as asked for on the command line, such as "error, strict"."""
        if self.own:
            return "of each netlist"
        return (self.level.value if self.level else NEVER) + (", strict" if self.strict else "")


class Writer(Protocol):
    """Writes `reviews` to `stream` in one format."""

    def __call__(self, reviews: Sequence[Review], stream: TextIO, gate: Gate) -> None:
        """Write everything; raise OSError where the stream does."""
        ...


def writer(name: str) -> Writer:
    """Return the writer of the format `name`, a key of `FORMATS`."""
    write: Writer = import_module(FORMATS[name], __package__).write
    return write


class ComparisonWriter(Protocol):
    """Writes a comparison to `stream` in one format."""

    def __call__(self, comparison: Comparison, stream: TextIO, gate: Gate) -> None:
        """Write everything; raise OSError where the stream does."""
        ...


def comparison_writer(name: str) -> ComparisonWriter:
    """Return the writer of the format `name`, a key of `COMPARISON_FORMATS`."""
    write: ComparisonWriter = import_module(COMPARISON_FORMATS[name], __package__).write
    return write
