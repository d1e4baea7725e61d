"""No board, however odd, ends a review in a traceback: every part gone or zero, every pin on a wrong net."""

from __future__ import annotations

import re
from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Review

ReviewText = Callable[..., Review]
Board = Callable[..., str]

NODES = [
    "FB",
    "SET",
    "COMP",
    "DTC",
    "CT",
    "RT",
    "0",
    "DRN",
    "0",
    "0",
    "DRN",
    "VBAT",
    "0",
    "REF",
    "LIM",
    "SNS",
]
PARTS = [*(f"R{n}" for n in range(1, 15)), *(f"C{n}" for n in range(1, 5)), "M1", "D1", "L1", "J1", "J2"]
BRIEF = """
[rails.VBAT]
voltage = "20 V .. 28 V"
[controllers.U1]
topology = "single-ended"
switching_frequency = "9 kHz .. 11 kHz"
dead_time = "1 us .. 30 us"
soft_start = "1 ms .. 10 ms"
current_limit = "4 A .. 6 A"
"""


LOOPS = ("dead time", "soft start", "feedback", "error amplifier", "current limit")


@pytest.mark.parametrize("brief", ["", BRIEF])
def test_the_board_itself_is_sound(review_text: ReviewText, pump: Board, brief: str) -> None:
    found = review_text(pump(), brief=brief, parts="reference,power\nR12,5 W\n")
    verdicts = [verdict for verdict in found.verdicts if verdict.topic in LOOPS]
    assert [verdict.rule for verdict in verdicts if verdict.outcome is Outcome.FAIL] == []
    judged = {verdict.rule for verdict in verdicts if verdict.outcome is Outcome.REVIEW}
    assert judged == {"feedback.single-fault"}  # nothing clamps the pump's 12 V


def lines_of(board: str) -> dict[str, str]:
    """Return the lines of a list by reference designator."""
    return {line.partition(" ")[0]: line.partition(" ")[2] for line in board.splitlines()}


@pytest.mark.parametrize("part", PARTS)
def test_a_part_gone(review_text: ReviewText, pump: Board, part: str) -> None:
    assert review_text(pump(**{part: None}), brief=BRIEF).verdicts


@pytest.mark.parametrize("value", ["0", "", "1e-30", "1e16", "1e300", "1u"])
@pytest.mark.parametrize("part", [part for part in PARTS if part[0] in "RC"])
def test_a_value_that_no_part_has(review_text: ReviewText, pump: Board, part: str, value: str) -> None:
    first, second = lines_of(pump())[part].split()[:2]
    assert review_text(pump(**{part: f"{first} {second} {value}"}), brief=BRIEF).verdicts


@pytest.mark.parametrize("net", ["0", "REF", "OPEN"])
@pytest.mark.parametrize("pin", range(1, 17))
def test_a_pin_on_another_net(review_text: ReviewText, pump: Board, pin: int, net: str) -> None:
    nodes = [net if number == pin else node for number, node in enumerate(NODES, 1)]
    assert review_text(pump(U1=" ".join([*nodes, "494"])), brief=BRIEF).verdicts


@pytest.mark.parametrize(
    "net", ["FB", "SET", "COMP", "DTC", "LIM", "SNS", "RTN", "CT", "RT", "SW", "GATE", "DRN"]
)
@pytest.mark.parametrize("other", ["0", "REF", "VOUT"])
def test_two_nets_joined(review_text: ReviewText, pump: Board, net: str, other: str) -> None:
    assert review_text(re.sub(rf"\b{net}\b", other, pump()), brief=BRIEF).verdicts


def test_a_reference_shorted_to_ground_is_told(review_text: ReviewText, pump: Board) -> None:
    found = review_text(pump().replace("REF", "0"))
    assert any(v.rule == "reference.back-fed" and v.outcome is Outcome.FAIL for v in found.verdicts)


@pytest.mark.parametrize(
    "nodes",
    [
        pytest.param(" ".join(str(number) for number in range(1, 17)), id="alone"),
        pytest.param(" ".join(["0"] * 16), id="all at ground"),
        pytest.param(" ".join(["A"] * 16), id="all joined"),
        pytest.param("A B C", id="three pins"),
    ],
)
def test_a_controller_and_nothing_else(review_text: ReviewText, nodes: str) -> None:
    assert review_text(f"weather mast\nU1 {nodes} 494\n.end\n").verdicts


def test_two_controllers_on_the_same_nets(review_text: ReviewText, pump: Board) -> None:
    found = review_text(pump("U2 FB SET COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF LIM SNS 494"), brief=BRIEF)
    assert {verdict.controller for verdict in found.verdicts} >= {"U1", "U2"}
