"""A brief begun from the netlist: what it tells, and every other key explained, with a place to fill in.

A line that states something is one that changes no verdict (see `recognised`). What would change one, such as
a limit, is the engineer's to state: it stands as a comment.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from textwrap import wrap

from ..grammar.errors import printable
from ..grammar.netlist import Netlist
from .brief_keys import CONTROLLER_KEYS, DESIGN_KEYS, RAIL_KEYS, Key
from .circuit.controllers import Controller
from .circuit.power_stage import NotRecognised
from .design import Design
from .needs import rail_asked_for
from .parts_list import PartsList
from .recognised import MOST_CONTROLLERS, MOST_RAILS, Fact, Trial, facts, fits, known_rails
from .review import review_netlist
from .toml_text import toml_key
from .verdict import Outcome, Review, Verdict

_WIDTH = 100
_LONGEST_COMMENT = 600
_MOST_EVIDENCE = 8

# Where potentials come from that no brief need tell.
_NO_RAILS = ("ground", "reference")

_HEAD = (
    'A line without "#" states what the netlist tells; it was tried, and changes no verdict.',
    'A line "# key = ..." is yours: write what the design must do, and take the "#" away.',
    'After "recognised": told by the netlist too, but it counts for more once you state it.',
    'After "computed": what the circuit does as drawn, which need not be what it must do.',
    'Every quantity is a text with its unit, a range reads "10 V .. 15 V".',
)


def brief_text(netlist: Netlist, parts_list: PartsList | None = None) -> str:
    """Return a brief for a netlist in TOML. Read back as it is, it changes no verdict of the review."""
    design = Design(netlist, None, parts_list)
    review = review_netlist(netlist, None, parts_list)
    page = _Page(design, review)
    trial = Trial(design, review.verdicts, page.text)
    return page.text(trial.idle(page.facts), trial.changes)


class _Page:
    """The text of one brief, for any choice of the facts that it states."""

    def __init__(self, design: Design, review: Review) -> None:
        self.facts = facts(design)
        self._design = design
        self._verdicts = review.verdicts
        self._outputs = {one.reference: design.converter(one).output for one in design.controllers}
        self._rails = _rails(design, review.verdicts)
        self._stated: frozenset[Fact] = frozenset()
        self._changes: Mapping[Fact, tuple[str, ...]] = {}

    def text(self, stated: Iterable[Fact], changes: Mapping[Fact, tuple[str, ...]] | None = None) -> str:
        """Return the brief that states some of the facts, and says what the others would change."""
        self._stated, self._changes = frozenset(stated), changes or {}
        lines = [*self._head(), *self._design_table(), *self._rail_tables(), *self._controller_tables()]
        return "\n".join(lines) + "\n"

    def _head(self) -> Iterator[str]:
        yield from _comment(f"The brief of {self._design.netlist.file}, begun from the netlist.")
        yield "#"
        for sentence in _HEAD:
            yield from _comment(sentence)

    # The tables

    def _design_table(self) -> Iterator[str]:
        yield from _explanations("the design", DESIGN_KEYS)
        yield ""
        yield "[design]"
        for key in DESIGN_KEYS:
            yield from self._line(("design",), key)

    def _rail_tables(self) -> Iterator[str]:
        yield from _explanations("rails: nets that feed, are regulated or are loaded, by name", RAIL_KEYS)
        yield from _comment('NET.key under [rails] is the same as "key" under [rails.NET].')
        known = [one for one in self._design.known.values() if one.origin in _NO_RAILS]
        named = ", ".join(f"{one.net} ({one.label or one.origin})" for one in known)
        yield from _comment(f"known without a brief: {named or 'no net, not even ground'}")
        yield ""
        yield "[rails]"
        for net, roles in self._rails.items():
            about = [v for v in self._verdicts if self._outputs.get(v.controller) == net]
            yield ""
            yield from _comment(f"{net}: {'; '.join(roles)}" if roles else net)
            for key in RAIL_KEYS:
                yield from self._computed(key, about)
                yield from self._line(("rails", net), key, f"{toml_key(net)}.")
        yield from _left_out(known_rails(self._design), self._rails, "nets of known voltage")

    def _controller_tables(self) -> Iterator[str]:
        yield from _explanations("controllers, by reference designator", CONTROLLER_KEYS)
        shown = [one for one in self._design.controllers[:MOST_CONTROLLERS] if fits(one.reference)]
        for controller in shown:
            yield from self._controller_table(controller)
        references = [one.reference for one in self._design.controllers]
        yield from _left_out(references, {one.reference for one in shown}, "controllers")
        if not references:
            yield ""
            yield from _comment("no controller is found in the netlist")

    def _controller_table(self, controller: Controller) -> Iterator[str]:
        stage = self._design.power_stage(controller)
        about = [v for v in self._verdicts if v.controller == controller.reference]
        yield ""
        for sentence in (*controller.assumptions, controller.problem):
            yield from _comment(sentence)
        yield f"[controllers.{toml_key(controller.reference)}]"
        if isinstance(stage, NotRecognised):
            yield from _comment(stage.reason)
        for key in CONTROLLER_KEYS:
            yield from self._computed(key, about)
            yield from self._line(("controllers", controller.reference), key)

    # One key

    def _line(self, table: tuple[str, ...], key: Key, before: str = "") -> Iterator[str]:
        """Yield the line of a key: stated, recognised but left to the engineer, or to fill in."""
        for fact in self.facts:
            value = dict(fact.values).get(key.name)
            if fact.table != table or value is None:
                continue
            if fact.values[0][0] == key.name:
                yield from self._evidence(fact)
            yield f"{'' if fact in self._stated else '# '}{before}{key.name} = {value}"
            return
        yield f"# {before}{key.name} = {key.blank}"

    def _evidence(self, fact: Fact) -> Iterator[str]:
        for sentence in fact.evidence[:_MOST_EVIDENCE]:
            yield from _comment(sentence)
        if len(fact.evidence) > _MOST_EVIDENCE:
            yield from _comment(f"and {len(fact.evidence) - _MOST_EVIDENCE} more")
        if fact not in self._stated:
            rules = self._changes.get(fact)
            yield from _comment(
                f"recognised; stated, it counts in {', '.join(rules)}" if rules else "recognised"
            )

    def _computed(self, key: Key, verdicts: Sequence[Verdict]) -> Iterator[str]:
        """Yield what the review says of the circuit in place of a key."""
        for verdict in verdicts:
            if verdict.rule in key.rules and verdict.outcome is not Outcome.OPEN:
                yield from _comment(f"computed: {verdict.message} ({verdict.rule})")


def _rails(design: Design, verdicts: Iterable[Verdict]) -> dict[str, list[str]]:
    """Return the nets that a brief may speak of, each with what it is and who asks for it."""
    found: dict[str, list[str]] = {}
    for controller in design.controllers:
        reference, stage = controller.reference, design.power_stage(controller)
        _add(found, controller.net("supply"), f"supply of {reference}")
        if not isinstance(stage, NotRecognised):
            _add(found, stage.input, f"input of {reference}'s power stage")
            _add(found, stage.output, f"output of {reference}'s power stage")
        _add(found, design.converter(controller).output, f"regulated by {reference}")
    for net in known_rails(design):
        found.setdefault(net, [])
    for net, rules in _asked_for(verdicts).items():
        _add(found, net, f"asked for by {', '.join(rules)}")
    known = {net for net, one in design.known.items() if one.origin in _NO_RAILS}
    usable = [net for net in found if net not in known and net in design.netlist.nets and fits(net)]
    return {net: found[net] for net in usable[:MOST_RAILS]}


def _asked_for(verdicts: Iterable[Verdict]) -> dict[str, list[str]]:
    """Return the nets that open verdicts want to know of, each with the rules that ask."""
    found: dict[str, list[str]] = {}
    for verdict in verdicts:
        for net in filter(None, map(rail_asked_for, verdict.needs)):
            _add(found, net, verdict.rule)
    return found


def _add(found: dict[str, list[str]], net: str | None, role: str) -> None:
    if net and role not in found.setdefault(net, []):
        found[net].append(role)


def _explanations(title: str, keys: Sequence[Key]) -> Iterator[str]:
    yield ""
    yield f"# {f'---- {title} '.ljust(_WIDTH - 2, '-')}"
    for key in keys:
        yield from _comment(f"{key.name}: {key.says}; such as {key.example}")


def _left_out(names: Iterable[str], shown: Iterable[str], what: str) -> Iterator[str]:
    missing = len(set(names) - set(shown))
    if missing:
        yield from _comment(f"{missing} more {what} are left out here")


def _comment(text: str) -> Iterator[str]:
    """Yield a text as lines of a comment, whatever stands in it."""
    if len(text) > _LONGEST_COMMENT:
        text = f"{text[:_LONGEST_COMMENT]} ..."
    lines = wrap(printable(text), _WIDTH - 4, break_on_hyphens=False)
    yield from (f"# {'  ' if number else ''}{line}" for number, line in enumerate(lines))
