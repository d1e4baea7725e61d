"""What a netlist tells of its own brief, and what stating it would change.

A rail by its name or its source, a topology, an output: the review takes them from the netlist already. In a
brief they are statements of the engineer's, and some verdicts count those for more. Only a review can tell
which, so each fact is tried.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass

from .brief import BriefError, read_brief
from .circuit.controllers import Controller
from .circuit.potentials import Potential
from .circuit.power_stage import NotRecognised
from .design import Design
from .quantity import Spread
from .review import review_netlist
from .toml_text import is_statable, toml_key, toml_text
from .verdict import Limit, Verdict

# Beyond these a netlist is odd, and a brief that lists everything would be no help.
_LONGEST_NAME = 200
MOST_RAILS = 60
MOST_CONTROLLERS = 20

# One trial is one review; what is left untried is left for the engineer to state.
_MOST_TRIALS = 50


@dataclass(frozen=True, slots=True)
class Fact:
    """Something that the netlist tells of its brief.

    table:    the path of the table, such as ("rails", "+12V")
    values:   key and value, the value as TOML writes it
    evidence: what it rests on, each a sentence
    """

    table: tuple[str, ...]
    values: tuple[tuple[str, str], ...]
    evidence: tuple[str, ...] = ()


def facts(design: Design) -> tuple[Fact, ...]:
    """Return what the netlist tells, in the order of a brief."""
    named = design.netlist.name
    found = [Fact(("design",), (("name", toml_text(named)),))] if named.strip() and fits(named) else []
    found += [_rail(design, net) for net in known_rails(design)[:MOST_RAILS]]
    for controller in design.controllers[:MOST_CONTROLLERS]:
        if fits(controller.reference):
            found += _of_controller(design, controller)
    return tuple(found)


def fits(name: str) -> bool:
    """Tell whether a brief can hold a name."""
    return is_statable(name) and len(toml_key(name)) <= _LONGEST_NAME


def known_rails(design: Design) -> list[str]:
    """Return the nets whose voltage the netlist tells by a source or a name."""
    known = design.known.values()
    return [one.net for one in known if one.origin in ("source", "name") and fits(one.net)]


def _rail(design: Design, net: str) -> Fact:
    potential = design.known[net]
    evidence = potential.assumption or f"{potential.label} makes it"
    return Fact(("rails", net), tuple(_voltage(potential)), (evidence,))


def _voltage(potential: Potential) -> Iterator[tuple[str, str]]:
    """Yield the voltage as a brief says it: a name's as nominal value and tolerance, else as it is."""
    s = potential.spread
    if potential.origin == "name" and s.nominal:
        yield "voltage", f'"{s.nominal:.10g} V"'
        yield "tolerance", f'"{100 * (s.maximum - s.nominal) / abs(s.nominal):.6g} %"'
    elif s.minimum == s.maximum:
        yield "voltage", f'"{s.nominal:.10g} V"'
    else:
        yield "voltage", f'"{s.minimum:.10g} V .. {s.maximum:.10g} V"'


def _of_controller(design: Design, controller: Controller) -> Iterator[Fact]:
    table = ("controllers", controller.reference)
    stage = design.power_stage(controller)
    if not isinstance(stage, NotRecognised):
        yield Fact(table, (("topology", toml_text(stage.family)),), stage.evidence)
    output = design.converter(controller).output
    if output and fits(output):
        amplifier = design.regulating(controller)
        assert amplifier is not None
        evidence = f"amplifier {amplifier.number} of {controller.reference} senses it"
        yield Fact(table, (("output", toml_text(output)),), (evidence,))


class Trial:
    """Tries which facts a brief may state without changing a verdict.

    text: gives the brief that states some of the facts
    """

    def __init__(
        self, design: Design, verdicts: Iterable[Verdict], text: Callable[[Sequence[Fact]], str]
    ) -> None:
        self._design = design
        self._text = text
        self._untold = Counter(map(_says, verdicts))
        self._left = _MOST_TRIALS
        self.changes: dict[Fact, tuple[str, ...]] = {}

    def idle(self, candidates: Sequence[Fact], stated: Sequence[Fact] = ()) -> tuple[Fact, ...]:
        """Return those of `candidates` that change nothing, all stated together and on top of `stated`.

        `changes` then holds the others, each with the rules whose verdicts it would change.
        """
        if not candidates:
            return ()
        changed = self._changed([*stated, *candidates])
        if changed is not None and not changed:
            return tuple(candidates)
        if len(candidates) == 1:
            self.changes[candidates[0]] = changed or ()
            return ()
        half = len(candidates) // 2
        first = self.idle(candidates[:half], stated)
        return first + self.idle(candidates[half:], [*stated, *first])

    def _changed(self, stated: Sequence[Fact]) -> tuple[str, ...] | None:
        """Return the rules whose verdicts change; None where the brief is refused, or too much was tried."""
        if self._left == 0:
            return None
        self._left -= 1
        netlist = self._design.netlist
        try:
            brief = read_brief("the brief", self._text(stated))
            told = Counter(map(_says, review_netlist(netlist, brief, self._design.parts_list).verdicts))
        except BriefError:
            return None
        differing = [*(told - self._untold), *(self._untold - told)]
        return tuple(sorted({rule for rule, *_ in differing}))


def _says(verdict: Verdict) -> tuple[str, ...]:
    """Return what a verdict says: rule, subject, outcome and figures, without the words."""
    margin = "" if verdict.margin is None else _number(verdict.margin)
    figures = (_figures(verdict.measured), _figures(verdict.limit), margin)
    return (verdict.rule, verdict.subject, verdict.outcome, verdict.level or "", *figures)


def _figures(found: Spread | Limit | None) -> str:
    if found is None:
        return ""
    ends = (found.minimum, getattr(found, "nominal", None), found.maximum)
    return f"{' '.join('-' if end is None else _number(end) for end in ends)} {found.unit}"


def _number(value: float) -> str:
    """Return a number without the last digits, in which two ways to write a voltage differ."""
    return f"{value + 0.0:.9g}"
