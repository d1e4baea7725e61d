"""Runs the rules over a design: every rule once per controller, or once per netlist."""

from __future__ import annotations

import sys
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import replace
from datetime import date
from pathlib import Path
from typing import NamedTuple

from ..grammar import Netlist, Place, read, read_bytes
from .brief import Brief, read_brief
from .circuit.controllers import Controller
from .controllers import generic_number
from .design import Design
from .deviations import Applied, Deviations, apply, fits, read_deviations
from .estimate import Method
from .found_files import BRIEF, DEVIATIONS, PARTS_LIST, STANDARD_INPUT, beside
from .house_rules import crash, is_of_house
from .parts_list import PartsList, read_parts_list
from .pin_table import controller_review
from .policy import CAUTIONING, Policy
from .rule import Rule, load_rules
from .untold import left_to_judge, on_untold_tolerances
from .verdict import Outcome, Review, SwitchedOff, Verdict


def review(
    netlist: str | Path,
    *,
    brief: str | Path | None = None,
    parts_list: str | Path | None = None,
    deviations: str | Path | None = None,
    allow_include: Sequence[Path] = (),
    method: Method = Method.EXTREME,
    rules: Iterable[Rule] | None = None,
    policy: Policy | None = None,
    today: date | None = None,
) -> Review:
    """Review a netlist file and return everything that was found.

    netlist:    a path, or "-" for standard input
    brief:      the design intent (TOML); by default `board.brief.toml` beside `board.edf`, where it exists
    parts_list: the ratings (CSV); by default `board.parts.csv` beside `board.edf`, where it exists
    deviations: the accepted verdicts (TOML); by default `board.deviations.toml` beside `board.edf`
    allow_include: folders besides the netlist's own from which a SPICE-style list may include
    method:     the worst-case analysis that decides
    rules:      the rules that are asked; all installed ones unless given
    policy:     which of them are switched off, and what a failed verdict of the others counts as
    today:      the day on which a deviation may have expired, by default this one
    Raises NetlistError, or its kinds BriefError, PartsListError and DeviationsError, for an input that cannot
    be read, and HouseRuleError where a house's own rule crashes.
    """
    read, told, listed, accepted = read_inputs(
        netlist, brief=brief, parts_list=parts_list, deviations=deviations, allow_include=allow_include
    )
    return review_netlist(read, told, listed, rules, method, policy, accepted, today)


class Inputs(NamedTuple):
    """What a review is made of, as read: the netlist, and what was given or found beside it."""

    netlist: Netlist
    brief: Brief | None
    parts_list: PartsList | None
    deviations: Deviations | None


def read_inputs(
    netlist: str | Path,
    *,
    brief: str | Path | None = None,
    parts_list: str | Path | None = None,
    deviations: str | Path | None = None,
    allow_include: Sequence[Path] = (),
) -> Inputs:
    """Read a netlist and what belongs to it; the arguments and errors are those of `review`."""
    brief_path = brief if brief is not None else beside(netlist, BRIEF)
    parts_path = parts_list if parts_list is not None else beside(netlist, PARTS_LIST)
    deviations_path = deviations if deviations is not None else beside(netlist, DEVIATIONS)
    told = read_brief(brief_path) if brief_path is not None else None
    listed = read_parts_list(parts_path) if parts_path is not None else None
    accepted = read_deviations(deviations_path) if deviations_path is not None else None
    return Inputs(read_netlist(netlist, allow_include), told, listed, accepted)


def review_netlist(
    netlist: Netlist,
    brief: Brief | None = None,
    parts_list: PartsList | None = None,
    rules: Iterable[Rule] | None = None,
    method: Method = Method.EXTREME,
    policy: Policy | None = None,
    deviations: Deviations | None = None,
    today: date | None = None,
) -> Review:
    """Review a netlist that is already read; `rules` are all installed ones unless given."""
    design = Design(netlist, brief, parts_list, method)
    known = load_rules() if rules is None else tuple(rules)
    policy = policy or Policy()
    asked = [one for one in known if one.id not in policy.off]
    verdicts = tuple(verdict for one in asked for verdict in _answers(one, design))
    if hinging := on_untold_tolerances(verdicts, design):
        close = Design(netlist, brief, parts_list, method, close=True)
        again = (one for one in asked if one.id in {verdict.rule for verdict in hinging})
        passing = (verdict for one in again for verdict in _answers(one, close))
        verdicts = left_to_judge(verdicts, hinging, passing)
    verdicts = tuple(map(policy.judged, verdicts))
    if deviations is not None:
        ids = [one.id for one in known]
        verdicts, applied = apply(
            deviations, verdicts, today or date.today(), lambda pattern: _is_asked(pattern, ids, policy)
        )
        about = (verdict for one in asked for verdict in _answers(one, design, applied))
        verdicts += tuple(map(policy.judged, about))
    return Review(
        netlist=netlist.file,
        format=netlist.format,
        name=brief.name if brief is not None and brief.name else netlist.name,
        brief=brief.file if brief is not None else None,
        parts_list=parts_list.file if parts_list is not None else None,
        controllers=tuple(controller_review(one, design, verdicts) for one in design.controllers),
        verdicts=verdicts,
        cautions=_cautions(verdicts),
        deviations=deviations.file if deviations is not None else None,
        configuration=policy.file,
        switched_off=tuple(SwitchedOff(one.id, policy.off[one.id]) for one in known if one.id in policy.off),
    )


def _is_asked(pattern: str, known: Sequence[str], policy: Policy) -> bool:
    """Tell whether every rule that the pattern of a deviation fits was asked, as far as one can know."""
    meant = [one for one in known if fits(one, pattern)]
    return not any(one in policy.off for one in meant) and (policy.complete or bool(meant))


def _cautions(verdicts: Iterable[Verdict]) -> tuple[str, ...]:
    """Return what the report must caution of, each once."""
    return tuple(dict.fromkeys(v.message for v in verdicts if v.rule == CAUTIONING))


def read_netlist(netlist: str | Path, allow_include: Sequence[Path] = ()) -> Netlist:
    """Read a netlist file, or standard input for "-", as a review does; raise NetlistError."""
    if str(netlist) == STANDARD_INPUT:
        return read_bytes(sys.stdin.buffer.read(), "<standard input>", keep=_is_controller)
    return read(netlist, keep=_is_controller, allow_include=allow_include)


def _is_controller(name: str) -> bool:
    return generic_number(name) is not None


def _answers(one: Rule, design: Design, applied: Applied | None = None) -> tuple[Verdict, ...]:
    """Return the verdicts of a rule: on the design, or else on the deviations that were applied to it.

    A house's own rule that crashes is told as such, with its file.
    """
    try:
        return tuple(_ask(one, design) if applied is None else _ask_deviations(one, applied, design))
    except (Exception, SystemExit) as problem:
        if is_of_house(one):
            raise crash(one, problem, design.netlist.file) from problem
        raise


def _ask(one: Rule, design: Design) -> Iterator[Verdict]:
    if one.of_netlist is not None:
        for verdict in one.of_netlist(design):
            yield _complete(verdict, one, design, None)
    if one.of_controller is not None:
        for controller in design.controllers:
            for verdict in _ask_controller(one, controller, design):
                yield _complete(verdict, one, design, controller)


def _ask_deviations(one: Rule, applied: Applied, design: Design) -> Iterator[Verdict]:
    if one.of_deviations is not None:
        for verdict in one.of_deviations(applied):
            yield _complete(verdict, one, design, None)


def _ask_controller(one: Rule, controller: Controller, design: Design) -> Iterable[Verdict]:
    """Ask a rule of a controller, unless an input that it needs is missing: then the engine says which."""
    needs = tuple(filter(None, (design.missing(controller, need) for need in one.needs)))
    if needs:
        return (Verdict(outcome=Outcome.OPEN, message=one.question, needs=needs),)
    assert one.of_controller is not None
    return one.of_controller(controller, design)


def _complete(verdict: Verdict, one: Rule, design: Design, controller: Controller | None) -> Verdict:
    """Fill in what the rule leaves to the engine: its own name, the subject, the places."""
    subject = verdict.subject or (controller.reference if controller is not None else "")
    level = (verdict.level or one.level) if verdict.outcome is Outcome.FAIL else None
    return replace(
        verdict,
        rule=one.id,
        topic=one.topic,
        subject=subject,
        controller=controller.reference if controller is not None else "",
        level=level,
        places=verdict.places or _places(verdict, subject, design),
    )


def _places(verdict: Verdict, subject: str, design: Design) -> tuple[Place, ...]:
    """Return where the verdict's parts stand, else its subject, else the netlist as a whole."""
    parts = design.netlist.parts
    named = [parts[reference].place for reference in verdict.parts if reference in parts]
    if not named and subject in parts:
        named = [parts[subject].place]
    return tuple(named) or (Place(design.netlist.file, 0, 0),)
