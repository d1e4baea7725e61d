"""What one rule says of one subject, and what a whole review says.

Nothing here computes a circuit or prints a report: these are the values that the engine hands to a
reporter, to the gate and to Python callers.
"""

from __future__ import annotations

import hashlib
from collections import Counter
from dataclasses import dataclass
from datetime import date
from enum import StrEnum

from ..grammar.netlist import Place
from .quantity import Spread

# What rules are about, in the order in which one walks round the board. A house's own topics come after
# these, in alphabetical order.
TOPICS = (
    "connections",
    "supply",
    "reference",
    "oscillator",
    "dead time",
    "soft start",
    "output mode",
    "output stage",
    "gate drive",
    "error amplifier",
    "feedback",
    "current limit",
    "ratings",
    "safety",
    "deviations",
)


class Outcome(StrEnum):
    """The result kinds of SARIF 2.1.0 (section 3.27.9)."""

    PASS = "pass"
    FAIL = "fail"
    REVIEW = "review"
    OPEN = "open"
    NOT_APPLICABLE = "notApplicable"
    INFORMATIONAL = "informational"


class Level(StrEnum):
    """The levels of SARIF 2.1.0 (section 3.27.10); only a failed verdict has one."""

    ERROR = "error"
    WARNING = "warning"
    NOTE = "note"


@dataclass(frozen=True, slots=True)
class Limit:
    """What a quantity is held against, in its own unit; None on a side that has no limit."""

    minimum: float | None
    maximum: float | None
    unit: str

    def __post_init__(self) -> None:
        """Refuse a limit without sides or with sides crossed: a rule's mistake, never the user's."""
        if self.minimum is None and self.maximum is None:
            raise ValueError("a limit needs a side")
        if self.minimum is not None and self.maximum is not None and self.minimum > self.maximum:
            raise ValueError(f"limit crossed: {self.minimum} .. {self.maximum} {self.unit}")

    def holds(self, value: float) -> bool:
        """Tell whether `value` lies inside, ends included."""
        low = self.minimum is None or value >= self.minimum
        return low and (self.maximum is None or value <= self.maximum)

    def contains(self, spread: Spread) -> bool:
        """Tell whether the whole spread lies inside."""
        return self.holds(spread.minimum) and self.holds(spread.maximum)

    def margin(self, spread: Spread) -> float:
        """Return the room left on the tighter side, as a share of that limit; negative is outside.

        A limit of zero has no share of its own: there the span between the sides, or else 1, is the scale.
        """
        span = 1.0
        if self.minimum is not None and self.maximum is not None and self.maximum > self.minimum:
            span = self.maximum - self.minimum
        rooms: list[float] = []
        if self.minimum is not None:
            rooms.append((spread.minimum - self.minimum) / (abs(self.minimum) or span))
        if self.maximum is not None:
            rooms.append((self.maximum - spread.maximum) / (abs(self.maximum) or span))
        return min(rooms)


@dataclass(frozen=True, slots=True, kw_only=True)
class Deviation:
    """An accepted verdict: somebody answers for it with a reason (term: deviation permit, ISO 9000).

    rule, subject: patterns as written, "*" stands for any text and "?" for a character
    reason, owner: why it is accepted, and who answers for it
    parts, nets:   the parts or nets of the verdict, all of them; None: whichever
    expires:       the last day on which it counts; None: until it is taken back
    accepted:      the value that was accepted, or the range of it; a worse one is not; None: any
    place:         where it stands in the file of deviations
    """

    rule: str
    subject: str
    reason: str
    owner: str
    parts: tuple[str, ...] | None = None
    nets: tuple[str, ...] | None = None
    expires: date | None = None
    accepted: Spread | None = None
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Verdict:
    """What one rule says of one subject, with everything that a reader needs to check it.

    rule, topic, subject, controller, level: filled in by the engine from the rule and its subject
    message:     one sentence with the figures in it
    measured, limit, margin: None where the question is not one of numbers
    pins:        roles of the controller's pins it is about, such as "dead time"
    formula:     the formula with the numbers in it
    contributions: (parameter, share of the spread 0..1), the greatest first
    assumptions: what was taken for granted, each a sentence
    source:      where the limit comes from
    needs:       the inputs that are missing (an open verdict), each as the reader would write it
    remedy:      what to do about it, values to the preferred series
    deviation:   filled in by the engine where the verdict fails, is open or for a person to judge, and is
                 accepted: it then stops no gate
    """

    outcome: Outcome
    message: str
    rule: str = ""
    topic: str = ""
    subject: str = ""
    controller: str = ""
    level: Level | None = None
    measured: Spread | None = None
    limit: Limit | None = None
    margin: float | None = None
    parts: tuple[str, ...] = ()
    nets: tuple[str, ...] = ()
    pins: tuple[str, ...] = ()
    places: tuple[Place, ...] = ()
    formula: str = ""
    contributions: tuple[tuple[str, float], ...] = ()
    assumptions: tuple[str, ...] = ()
    source: str = ""
    needs: tuple[str, ...] = ()
    remedy: str = ""
    deviation: Deviation | None = None

    @property
    def fingerprint(self) -> str:
        """Return a name that stays the same while values and lines change: rule, subject, parts and nets."""
        identity = "\x1f".join([self.rule, self.subject, *sorted(self.parts), "\x1e", *sorted(self.nets)])
        return hashlib.sha256(identity.encode(errors="surrogatepass")).hexdigest()[:16]


@dataclass(frozen=True, slots=True)
class PinRow:
    """One line of a controller's pin table.

    function: the pin's data-sheet name ("DTC"); state: its computed voltage or condition in words
    outcome:  the worst outcome of the verdicts about this pin, or None where no verdict is about it
    """

    number: str
    function: str
    net: str
    state: str
    outcome: Outcome | None
    level: Level | None = None


@dataclass(frozen=True, slots=True)
class ControllerReview:
    """One controller: reference designator, generic family number, the model name as written, its pins.

    power_stage: what its outputs drive ("buck from VBAT to VOUT"), empty where that was not recognised
    evidence:    what the recognition rests on, or why there is none, each a sentence
    """

    part: str
    family: str
    model: str
    place: Place
    pins: tuple[PinRow, ...]
    assumptions: tuple[str, ...] = ()
    power_stage: str = ""
    evidence: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class SwitchedOff:
    """A rule that was not asked because a configuration says so, and where it says it."""

    rule: str
    place: Place

    @property
    def where(self) -> str:
        """Return file and line of where it is written."""
        return f"{self.place.file}:{self.place.line}"


@dataclass(frozen=True, slots=True)
class Review:
    """Everything one review found. `verdicts` are in a fixed order: same input, same order."""

    netlist: str
    format: str
    name: str
    brief: str | None
    parts_list: str | None
    controllers: tuple[ControllerReview, ...]
    verdicts: tuple[Verdict, ...]
    cautions: tuple[str, ...] = ()
    deviations: str | None = None
    configuration: str | None = None
    switched_off: tuple[SwitchedOff, ...] = ()

    @property
    def counts(self) -> dict[str, int]:
        """Return how many verdicts had each outcome, every outcome named; accepted ones are counted too."""
        found = Counter(verdict.outcome for verdict in self.verdicts)
        return {outcome.value: found[outcome] for outcome in Outcome}

    @property
    def accepted(self) -> int:
        """Return how many verdicts a deviation accepts."""
        return sum(verdict.deviation is not None for verdict in self.verdicts)

    def passes(self, gate: Level | None, *, strict: bool = False) -> bool:
        """Tell whether the gate passes.

        gate:   the least level of a failed verdict that stops it; None lets every verdict through
        strict: verdicts that are open or for a person to judge stop it as well

        An accepted verdict stops no gate.
        """
        if gate is None:
            return True
        levels = tuple(Level)
        stopping = levels[: levels.index(gate) + 1]
        for verdict in self.verdicts:
            if verdict.deviation is not None:
                continue
            if verdict.outcome is Outcome.FAIL and verdict.level in stopping:
                return False
            if strict and verdict.outcome in (Outcome.OPEN, Outcome.REVIEW):
                return False
        return True
