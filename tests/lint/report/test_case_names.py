from __future__ import annotations

from dataclasses import replace

from hypothesis import given
from hypothesis import strategies as st
from pwmlint.lint.report.case_names import case_names
from pwmlint.lint.verdict import Outcome, Review, Verdict

PRESS = Verdict(outcome=Outcome.PASS, message="fine", rule="press.flow", subject="U1")


def test_a_name_is_subject_and_pins() -> None:
    first, second = replace(PRESS, pins=("dead time",)), replace(PRESS, pins=("supply", "ground"))
    assert case_names([PRESS, first, second]) == ["U1", "U1: dead time", "U1: supply, ground"]
    assert case_names([replace(PRESS, subject="")]) == ["netlist"]


def test_parts_and_nets_tell_apart_what_pins_do_not() -> None:
    first = replace(PRESS, pins=("supply",), parts=("R1",))
    second = replace(PRESS, pins=("supply",), nets=("VBAT",))
    assert case_names([first, PRESS, second]) == ["U1: supply, R1", "U1", "U1: supply, VBAT"]


def test_the_same_name_under_two_rules_is_no_collision() -> None:
    assert case_names([PRESS, replace(PRESS, rule="press.oil")]) == ["U1", "U1"]


def test_what_nothing_tells_apart_is_numbered() -> None:
    taken = replace(PRESS, subject="U1 (2)")
    assert case_names([PRESS, PRESS, taken, PRESS]) == ["U1", "U1 (3)", "U1 (2)", "U1 (4)"]


def test_a_name_holds_no_figure(cider_press: Review) -> None:
    other = [replace(verdict, message="otherwise", margin=0.5) for verdict in cider_press.verdicts]
    assert case_names(cider_press.verdicts) == case_names(other)


verdicts = st.builds(
    replace,
    st.just(PRESS),
    subject=st.sampled_from(["U1", "U1 (2)", "U1: a", "", "\x1b"]),
    pins=st.lists(st.sampled_from("ab"), max_size=2).map(tuple),
    parts=st.lists(st.sampled_from("ab"), max_size=2).map(tuple),
)


@given(st.lists(verdicts, max_size=8))
def test_names_are_always_unique(found: list[Verdict]) -> None:
    names = case_names(found)
    assert len(set(names)) == len(names)
    assert all(name.isprintable() for name in names)
