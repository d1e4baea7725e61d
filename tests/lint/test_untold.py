"""What fails by a tolerance that nobody told is for a person to judge; what anybody told is not."""

from __future__ import annotations

import pytest
from pwmlint.grammar import read_bytes
from pwmlint.lint import Verdict, review_netlist
from pwmlint.lint.rule import load_rules

LIST = """\
orchard sprayer
U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 E1 E2 C2 VCC 0 REF 2IN- 2IN+ 494
R1 REF 0 {first}
R2 REF 0 {second}
.end
"""


def load(first: str, second: str) -> Verdict:
    """Return the verdict on the reference's load: 10 mA at most (SLVS074), from 5 V with its own spread.

    Two of 1.1 kohm draw 9.1 mA; at most 10.1 mA where they are 5 % low, 9.7 mA where they are 1 % low.
    """
    text = LIST.format(first=first, second=second)
    rules = [one for one in load_rules() if one.id == "reference.load"]
    netlist = read_bytes(text.encode(), "sprayer.cir", keep=lambda name: "494" in name)
    (found,) = review_netlist(netlist, rules=rules).verdicts
    return found


def test_told_as_it_was_assumed_it_fails() -> None:
    assert load("1.1k 5%", "1.1k 5%").outcome == "fail"


def test_told_to_be_close_it_passes() -> None:
    assert load("1.1k 1%", "1.1k 1%").outcome == "pass"


def test_untold_it_is_for_a_person_to_judge_who_hears_what_would_settle_it() -> None:
    found = load("1.1k", "1.1k")
    assert (found.outcome, found.level) == ("review", None)
    assert found.measured == load("1.1k 5%", "1.1k 5%").measured, "the figures are the assumed ones"
    assert found.remedy.startswith("tell the tolerance of R1, R2, 5 % is assumed; where it is no closer: ")
    assert "R1: tolerance 5 % assumed" in found.assumptions


def test_only_what_is_untold_is_asked_for() -> None:
    assert load("1.1k 5%", "1.1k").remedy.startswith("tell the tolerance of R2, 5 % is assumed; ")


@pytest.mark.parametrize(("first", "second"), [("1.05k", "1.05k"), ("1k", "1k"), ("910", "910")])
def test_what_close_parts_do_not_mend_fails(first: str, second: str) -> None:
    """A nominal value outside, or one that even the close tolerance carries outside."""
    assert load(first, second).outcome == "fail"
