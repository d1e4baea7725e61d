from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from io import BytesIO, TextIOWrapper

import pytest
from pwmlint.grammar.netlist import Place
from pwmlint.lint.report import Gate, writer
from pwmlint.lint.report.annotations import MOST
from pwmlint.lint.verdict import Level, Outcome, Review, Verdict

Written = Callable[..., str]

LOAD = (
    "::error file=orchard/frost-fan-b.cir,line=21,col=1,title=reference.load U1::"
    "The reference pin delivers 11.4 mA (10.8 mA .. 12.1 mA); it can deliver 10.0 mA."
    "%0Aremedy: Raise R4 and R5 to 1.50 kΩ each (E24): 9.35 mA at most."
)


def failed(level: Level, message: str = "leaks") -> Verdict:
    return Verdict(
        outcome=Outcome.FAIL,
        level=level,
        message=message,
        rule="press.oil",
        subject="U1",
        places=(Place("press.edf", 3, 5),),
    )


def test_the_worst_comes_first_and_a_count_last(written: Written, faulty: Review) -> None:
    *commands, summary = written("annotations", faulty).splitlines()
    assert commands[0] == LOAD
    kinds = [command.partition(" ")[0] for command in commands]
    assert kinds == ["::error"] * 2 + ["::warning"] + ["::notice"] * 5
    assert summary == (
        "pwmlint: 2 error, 1 warning, 1 review, 4 open, 1 info, 7 pass; gate error: not passed"
    )


def test_what_has_no_level_says_what_it_is(written: Written, faulty: Review) -> None:
    text = written("annotations", faulty)
    assert "title=connections.pin-open U1::review: Pin 16 (2IN+)" in text
    assert (
        "title=dead-time.minimum U1::open: Is the least dead time as long as the brief asks?"
        '%0Amissing: brief: [controllers.U1] dead_time = "..."'
    ) in text


def test_what_stops_a_strict_gate_is_an_error(written: Written, faulty: Review) -> None:
    *commands, _ = written("annotations", faulty, gate=Gate(strict=True)).splitlines()
    assert sum(command.startswith("::error ") for command in commands) == 2 + 1 + 4
    assert sum(command.startswith("::warning ") for command in commands) == 1


def test_what_is_accepted_is_counted_only(written: Written, accepted: Review, cider_press: Review) -> None:
    assert "feedback.output-voltage" in written("annotations", cider_press)
    text = written("annotations", accepted)
    assert "feedback.output-voltage" not in text
    assert text.endswith("; 1 of them accepted; gate error: not passed\n")


def test_no_more_of_a_kind_than_hosts_show(written: Written, sound: Review) -> None:
    many = tuple(failed(level, f"{level} {number}") for number in range(MOST + 3) for level in Level)
    *commands, summary = written("annotations", replace(sound, verdicts=many)).splitlines()
    for kind in ("error", "warning", "notice"):
        shown = [command for command in commands if command.startswith(f"::{kind} ")]
        assert len(shown) == MOST
        assert [command.endswith("%0A(and 3 more)") for command in shown] == [False] * (MOST - 1) + [True]
    assert "; 9 not shown above; " in summary


def test_as_many_as_hosts_show_are_told_without_a_remark(written: Written, sound: Review) -> None:
    text = written("annotations", replace(sound, verdicts=(failed(Level.ERROR),) * MOST))
    assert "more)" not in text
    assert "not shown" not in text


def test_netlists_share_the_room(written: Written, sound: Review) -> None:
    mild = replace(sound, verdicts=(failed(Level.WARNING),) * 2)
    grave = replace(sound, verdicts=(failed(Level.ERROR),))
    *commands, summary = written("annotations", mild, grave).splitlines()
    assert [command.partition(" ")[0] for command in commands] == ["::error", "::warning", "::warning"]
    assert summary == "pwmlint: 1 error, 2 warning; gate error: not passed"


def test_a_place_without_line_names_the_file_alone(written: Written, sound: Review) -> None:
    verdicts = (
        replace(failed(Level.ERROR), places=(Place("press.edf", 0, 0),)),
        replace(failed(Level.ERROR), places=()),
    )
    first, second, _ = written("annotations", replace(sound, verdicts=verdicts)).splitlines()
    assert first == "::error file=press.edf,title=press.oil U1::leaks"
    assert second == "::error file=orchard/hive-scale.edf,title=press.oil U1::leaks"


@pytest.mark.parametrize(
    ("text", "in_message", "in_title"),
    [
        ("50 % of 3:1, worn", "50 %25 of 3:1, worn", "50 %25 of 3%3A1%2C worn"),
        ("%0A::error::x", "%250A::error::x", "%250A%3A%3Aerror%3A%3Ax"),
        ("a\r\n::error::x", r"a\r\n::error::x", r"a\r\n%3A%3Aerror%3A%3Ax"),
    ],
)
def test_nothing_ends_a_command_or_a_property(
    written: Written, sound: Review, text: str, in_message: str, in_title: str
) -> None:
    verdict = replace(failed(Level.ERROR, text), subject=text)
    command, _ = written("annotations", replace(sound, verdicts=(verdict,))).splitlines()
    assert command == (f"::error file=press.edf,line=3,col=5,title=press.oil {in_title}::{in_message}")


def test_nothing_to_tell(written: Written, sound: Review) -> None:
    assert written("annotations", sound) == "pwmlint: 1 pass; gate error: passed\n"
    assert written("annotations") == "pwmlint: no verdict; gate error: passed\n"


def test_a_stream_of_few_characters(faulty: Review) -> None:
    raw = BytesIO()
    stream = TextIOWrapper(raw, encoding="ascii", newline="\n")
    writer("annotations")([faulty], stream, Gate())
    stream.flush()
    assert "1.50 kohm each" in raw.getvalue().decode("ascii")
