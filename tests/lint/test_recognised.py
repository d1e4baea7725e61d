"""Which facts a brief may state: those that change no verdict, found with few reviews."""

from __future__ import annotations

from collections.abc import Sequence

import pytest
from pwmlint.grammar import read_bytes
from pwmlint.lint import recognised
from pwmlint.lint.design import Design
from pwmlint.lint.recognised import Fact, Trial, facts
from pwmlint.lint.review import review_netlist
from pwmlint.lint.toml_text import toml_key

# +5V is regulated: stated, its name is a limit. The sources and -12V are rails like any other.
LIST = """hen house
V1 RAW 0 DC 24
V2 LAMP 0 DC 6
R1 +5V 1IN+ 10k
R2 1IN+ 0 10k
R3 REF 1IN- 1k
R4 1IN- FB 100k
R5 -12V DTC 1k
R6 RAW VCC 10
R7 LAMP 0 1k
U1 1IN+ 1IN- FB DTC CT RT 0 C1 0 0 C2 VCC 0 REF 2IN- 2IN+ 494
"""


@pytest.fixture
def design() -> Design:
    return Design(read_bytes(LIST.encode(), "hen-house.cir"))


class Asked:
    """Writes a brief of some facts, and keeps what was asked."""

    def __init__(self) -> None:
        self.asked: list[tuple[Fact, ...]] = []

    def __call__(self, stated: Sequence[Fact]) -> str:
        self.asked.append(tuple(stated))
        lines = [(".".join(map(toml_key, fact.table)), value) for fact in stated for value in fact.values]
        return "\n".join(f"{table}.{key} = {value}" for table, (key, value) in lines)


def names(found: Sequence[Fact]) -> list[str]:
    return [fact.table[-1] for fact in found]


def trial_of(design: Design) -> tuple[Trial, Asked]:
    asked = Asked()
    return Trial(design, review_netlist(design.netlist).verdicts, asked), asked


def test_the_facts(design: Design) -> None:
    found = facts(design)
    assert names(found) == ["design", "RAW", "LAMP", "+5V", "-12V", "U1"]
    assert found[0].values == (("name", '"hen house"'),)
    assert found[2] == Fact(("rails", "LAMP"), (("voltage", '"6 V"'),), ("V2 makes it",))
    assert found[3].values == (("voltage", '"5 V"'), ("tolerance", '"5 %"'))
    assert found[5].values == (("output", '"+5V"'),)


def test_only_what_changes_a_verdict_is_left_out(design: Design) -> None:
    trial, asked = trial_of(design)
    idle = trial.idle(facts(design))
    assert names(idle) == ["design", "RAW", "LAMP", "-12V", "U1"]
    ((fact, rules),) = trial.changes.items()
    assert names([fact]) == ["+5V"]
    assert "feedback.output-voltage" in rules
    # All at once, then by halves: far fewer than each by itself where most are idle.
    assert len(asked.asked[0]) == 6
    assert asked.asked[-1] == idle


def test_where_nothing_changes_one_review_is_enough(design: Design) -> None:
    trial, asked = trial_of(design)
    candidates = [fact for fact in facts(design) if fact.table[-1] != "+5V"]
    assert trial.idle(candidates) == tuple(candidates)
    assert len(asked.asked) == 1
    assert trial.idle(()) == ()
    assert len(asked.asked) == 1


def test_what_is_not_tried_is_not_stated(design: Design, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(recognised, "_MOST_TRIALS", 2)
    trial, asked = trial_of(design)
    idle = trial.idle(facts(design))
    assert len(asked.asked) == 2
    assert names(idle) == ["design", "RAW", "LAMP"]
    assert names(list(trial.changes)) == ["+5V", "-12V", "U1"]
    assert set(trial.changes.values()) == {()}


def test_what_no_brief_can_hold_is_not_stated(design: Design) -> None:
    trial, _ = trial_of(design)
    assert trial.idle([Fact(("rails", "RAW"), (("voltage", '"1e300 V"'),))]) == ()
    assert trial.idle([Fact(("rails", "nowhere"), (("voltage", '"1 V"'),))]) == ()
