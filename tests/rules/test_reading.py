"""What the reader left out, skipped or took for granted is told."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]

RULE = "connections.reading"


@pytest.fixture
def told(ask: Ask) -> Callable[[str], dict[str, str]]:
    """Return a function that gives the messages about a list, with the outcome of each."""

    def messages(lines: str) -> dict[str, str]:
        text = f"orchard sorter\nU1 a b c d e f 0 g 0 0 g v 0 r l s 494\n{lines}\n.end\n"
        return {verdict.message: verdict.outcome.value for verdict in ask(RULE, text)}

    return messages


def test_nothing_to_tell(told: Callable[[str], dict[str, str]]) -> None:
    assert told("R1 a b 1k") == {"every part has the pins of its definition": "pass"}


def test_parts_that_are_not_fitted(told: Callable[[str], dict[str, str]]) -> None:
    found = told("R1 a b 1k DNP\nR2 a b 1k\nC3 a b 10n DNF")
    assert found["R1, C3 are marked as not fitted, and left out of the circuit"] == "informational"
    assert "R1 is marked as not fitted, and left out of the circuit" in told("R1 a b 1k DNP")


def test_many_are_counted(told: Callable[[str], dict[str, str]]) -> None:
    (message, _) = told("\n".join(f"R{n} a b 1k DNP" for n in range(1, 12)))
    assert "R7, R8 and 3 more are marked" in message


def test_what_was_skipped(told: Callable[[str], dict[str, str]]) -> None:
    found = told("R1 a b 1k\n.ripen 3\n.press 1\n.ripen 4")
    assert found["without a meaning here, and skipped: .ripen, .press"] == "informational"


def test_a_library_that_is_not_at_hand(told: Callable[[str], dict[str, str]]) -> None:
    assert any("pears.lib is not read" in one for one in told("R1 a b 1k\n.include pears.lib"))


def test_what_was_taken_for_granted(ask: Ask) -> None:
    text = "orchard sorter\n.subckt BELT IN OUT\nR1 IN OUT 1k\n.ends\n.end\n"
    found = {verdict.message: verdict for verdict in ask(RULE, text)}
    assumed = found["the netlist leaves one thing to be assumed"]
    assert assumed.outcome is Outcome.INFORMATIONAL
    assert "BELT" in assumed.assumptions[0]
    assert [place.line for place in assumed.places] == [2]


def test_pins_that_do_not_fit_are_for_a_person_to_judge(told: Callable[[str], dict[str, str]]) -> None:
    found = told("X1 a b 0 CELL\n.subckt CELL A B\nR1 A B 1k\n.ends")
    assert "review" in found.values()
    assert "pass" not in found.values()
