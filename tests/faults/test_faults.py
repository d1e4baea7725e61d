"""Every seeded fault is found, in either format, and every sound board passes."""

from __future__ import annotations

from collections import Counter

import pytest
from pwmlint.lint import Level, Outcome
from pwmlint.lint.rule import load_rules

from .board import Board
from .catalogue import FAULTS, OWN, SOUND
from .cider_press import CIDER_PRESS
from .conftest import Tally
from .edits import added, all_of, without
from .explained import EXPLAINED
from .fault import Fault
from .harmless import HARMLESS
from .published import PUBLISHED
from .reviewing import FORMATS, Reviewer, concerns
from .writers import WRITERS


def _parameter(fault: Fault):
    marks = (
        [pytest.mark.xfail(reason=f"expected to be missed: {fault.missed}", strict=True)]
        if fault.missed
        else []
    )
    return pytest.param(fault, id=fault.identity, marks=marks)


@pytest.mark.parametrize("fault", [_parameter(fault) for fault in FAULTS])
def test_the_fault_is_found(fault: Fault, reviewer: Reviewer, tally: Tally) -> None:
    """One of the rules named speaks of the faulty board, in both formats, and does not of the sound one."""
    faulty = fault.edit(fault.board)
    assert faulty != fault.board
    tally.seeded[fault.topic] += 1
    found = {
        form: reviewer.new_concerns(fault.board, faulty, form, fault.rules, told=True) for form in FORMATS
    }
    tally.found[fault.topic] += all(found.values())
    untold = reviewer.new_concerns(fault.board, faulty, FORMATS[0], fault.rules, told=False)
    tally.untold[fault.topic] += bool(untold)
    assert all(found.values()), f"none of {', '.join(fault.rules)} speaks: {found}"


@pytest.mark.parametrize("told", [True, False], ids=["told", "netlist alone"])
@pytest.mark.parametrize("form", FORMATS)
@pytest.mark.parametrize("board", SOUND, ids=lambda board: board.name)
def test_a_sound_board_raises_no_alarm(
    board: Board, form: str, told: bool, reviewer: Reviewer, tally: Tally
) -> None:
    """Nothing fails, and what is left to a person is explained."""
    review = reviewer.sound(board, form, told=told)
    explained = EXPLAINED.get(board.name, {})
    tally.asked.update(verdict.rule.partition(".")[0] for verdict in review.verdicts)
    raised = concerns(review)
    alarms = [verdict for verdict in raised if verdict.rule not in explained]
    tally.alarms.update(verdict.rule.partition(".")[0] for verdict in alarms)
    tally.explained.update(v.rule.partition(".")[0] for v in raised if v.rule in explained)
    assert not [f"{verdict.rule}: {verdict.message}" for verdict in alarms]
    failed = [verdict for verdict in raised if verdict.outcome is Outcome.FAIL]
    assert all(verdict.level is Level.NOTE and board in PUBLISHED for verdict in failed)


@pytest.mark.parametrize("told", [True, False], ids=["told", "netlist alone"])
@pytest.mark.parametrize("board", SOUND, ids=lambda board: board.name)
def test_what_is_open_names_what_it_needs(board: Board, told: bool, reviewer: Reviewer) -> None:
    review = reviewer.sound(board, FORMATS[0], told=told)
    opened = [verdict for verdict in review.verdicts if verdict.outcome is Outcome.OPEN]
    assert not [f"{verdict.rule}: {verdict.message}" for verdict in opened if not verdict.needs]


@pytest.mark.parametrize("board", OWN, ids=lambda board: board.name)
def test_the_brief_closes_what_the_netlist_leaves_open(board: Board, reviewer: Reviewer) -> None:
    """With brief and parts list nothing is open but what a data sheet would have to tell."""
    review = reviewer.sound(board, FORMATS[0], told=True)
    needs = [need for verdict in review.verdicts if verdict.outcome is Outcome.OPEN for need in verdict.needs]
    assert not [need for need in needs if not need.startswith("data sheet")]


@pytest.mark.parametrize("told", [True, False], ids=["told", "netlist alone"])
@pytest.mark.parametrize("board", OWN, ids=lambda board: board.name)
def test_both_formats_say_the_same(board: Board, told: bool, reviewer: Reviewer) -> None:
    one, other = (
        {
            (v.rule, v.outcome, v.subject)
            for v in reviewer.sound(board, form, told=told).verdicts
            if v.controller
        }
        for form in FORMATS
    )
    assert one == other


@pytest.mark.parametrize("board", SOUND, ids=lambda board: board.name)
def test_both_formats_are_written(board: Board) -> None:
    """Every part is in either text, so that nothing passes for want of being there."""
    for write in WRITERS.values():
        text = write(board)
        assert all(part.reference in text for part in board.parts)


def test_the_catalogue_is_in_order() -> None:
    assert len(FAULTS) >= 150
    doubles = [name for name, count in Counter(fault.identity for fault in FAULTS).items() if count > 1]
    assert not doubles
    known = {rule.id for rule in load_rules()}
    assert not {rule for fault in FAULTS for rule in fault.rules} - known
    assert not {rule for rules in EXPLAINED.values() for rule in rules} - known


def test_every_explanation_is_needed(reviewer: Reviewer) -> None:
    for board in SOUND:
        raised = {
            verdict.rule
            for form in FORMATS
            for told in (True, False)
            for verdict in concerns(reviewer.sound(board, form, told=told))
        }
        assert not EXPLAINED.get(board.name, {}).keys() - raised


@pytest.mark.parametrize("change", [pytest.param(change, id=change.identity) for change in HARMLESS])
def test_a_harmless_change_raises_no_alarm(change: Fault, reviewer: Reviewer, tally: Tally) -> None:
    """What the sound board passes it passes with the change as well, told or not."""
    changed = change.edit(change.board)
    for form, told in zip(FORMATS, (True, False), strict=True):
        review = reviewer.review(changed, form, told=told)
        alarms = concerns(review)
        tally.asked.update(verdict.rule.partition(".")[0] for verdict in review.verdicts)
        tally.alarms.update(verdict.rule.partition(".")[0] for verdict in alarms)
        assert not [f"{form}, told {told}: {v.rule}: {v.message}" for v in alarms]


def test_two_diodes_in_one_body_are_two_where_its_pins_have_names(reviewer: Reviewer) -> None:
    """EDIF alone: a list gives the pins of such a part no names, and what is inside it is for a person."""
    dual = all_of(without("D3", "D4"), added("D3", "dual-diode", "SECA SECB RECT", "ULTRAFAST 200V 16A"))
    assert not concerns(reviewer.review(dual(CIDER_PRESS), "EDIF", told=True))
    assert {verdict.rule for verdict in concerns(reviewer.review(dual(CIDER_PRESS), "SPICE", told=True))} == {
        "output-mode.power-stage"
    }
