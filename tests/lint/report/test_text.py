from __future__ import annotations

import os
import re
from collections.abc import Callable
from dataclasses import replace
from io import BytesIO, TextIOWrapper
from pathlib import Path

import pytest
from pwmlint.lint.quantity import Spread
from pwmlint.lint.report import Gate, writer
from pwmlint.lint.report.glyphs import ASCII, BOX, Glyphs
from pwmlint.lint.verdict import Level, Limit, Outcome, Review, Verdict

Printed = Callable[..., str]

SNAPSHOTS = Path(__file__).parent / "snapshots"

# With this variable set the snapshots are written instead of compared.
UPDATE = "PWMLINT_UPDATE_SNAPSHOTS"


@pytest.mark.parametrize(
    ("name", "glyphs", "width", "colour"),
    [
        ("plain", BOX, 80, False),
        ("colour", BOX, 80, True),
        ("ascii", ASCII, 80, False),
        ("wide", BOX, 120, False),
    ],
)
def test_snapshot(
    faulty: Review, printed: Printed, name: str, glyphs: Glyphs, width: int, colour: bool
) -> None:
    report = printed(faulty, glyphs=glyphs, width=width, colour=colour)
    snapshot = SNAPSHOTS / f"{name}.txt"
    if os.environ.get(UPDATE):
        snapshot.write_text(report, encoding="utf-8", newline="\n")
    assert report == snapshot.read_text(encoding="utf-8")


def test_what_is_accepted_stands_apart_with_who_answers_for_it(accepted: Review, printed: Printed) -> None:
    report = printed(accepted)
    snapshot = SNAPSHOTS / "accepted.txt"
    if os.environ.get(UPDATE):
        snapshot.write_text(report, encoding="utf-8", newline="\n")
    assert report == snapshot.read_text(encoding="utf-8")
    assert "1 accepted" in report.splitlines()[-2]
    assert report.count("feedback.output-voltage  U1") == 1


def test_no_line_is_wider_than_the_page_or_ends_in_blanks(
    faulty: Review, sound: Review, printed: Printed
) -> None:
    for width in (50, 60, 80, 93, 120):
        for line in printed(faulty, sound, width=width).splitlines():
            assert len(line) <= width
            assert line == line.rstrip()


def test_colour_only_adds_to_the_words(faulty: Review, printed: Printed) -> None:
    assert re.sub(r"\x1b\[[\d;]*m", "", printed(faulty, colour=True)) == printed(faulty)


def test_ascii_is_ascii(faulty: Review, printed: Printed) -> None:
    report = printed(faulty, glyphs=ASCII)
    assert report.isascii()
    assert "940 ohm" in report


def test_pins_stand_in_physical_order(faulty: Review, printed: Printed) -> None:
    table = printed(faulty).partition("pin  function")[2].partition("assumed")[0]
    assert [int(number) for number in re.findall(r"^ +(\d+)  \S", table, re.MULTILINE)] == list(range(1, 17))


def test_topics_follow_the_walk_and_the_worst_comes_first(faulty: Review, printed: Printed) -> None:
    report = printed(faulty)
    topics = re.findall(r"^([a-z][a-z ]*) ─", report, re.MULTILINE)
    assert topics == [
        "connections",
        "supply",
        "reference",
        "oscillator",
        "dead time",
        "output mode",
        "feedback",
        "current limit",
        "could not be checked",
        "taken for granted",
        "cautions",
    ]
    assert report.index("reference.load") < report.index("reference.bypass")
    assert report.index("dead-time.range") < report.index("dead-time.driven")


def test_topics_of_a_house_follow_in_alphabetical_order(sound: Review, printed: Printed) -> None:
    def about(topic: str) -> Verdict:
        return Verdict(outcome=Outcome.PASS, message=f"about {topic}", topic=topic, rule="house.rule")

    review = replace(sound, verdicts=tuple(about(topic) for topic in ("paint", "labels", "safety")))
    report = printed(review)
    assert report.index("about safety") < report.index("about labels") < report.index("about paint")


def test_words_order_by_level(sound: Review, printed: Printed) -> None:
    def failed(level: Level) -> Verdict:
        return Verdict(
            outcome=Outcome.FAIL, level=level, message=f"a {level}.", topic="supply", rule="supply.range"
        )

    review = replace(sound, verdicts=tuple(failed(level) for level in reversed(Level)))
    report = printed(review)
    assert report.index("  error    a error.") < report.index("  warning  a warning.")
    assert report.index("  warning  a warning.") < report.index("  note     a note.")
    assert "supply ─" in report
    assert "1 error, 1 warning, 1 note" in report


def test_open_verdicts_are_grouped_by_the_input_they_lack(sound: Review, printed: Printed) -> None:
    def lacking(rule: str, *needs: str) -> Verdict:
        return Verdict(outcome=Outcome.OPEN, message=f"{rule}?", topic="supply", rule=rule, needs=needs)

    review = replace(
        sound,
        verdicts=(
            lacking("supply.a"),
            lacking("supply.b", "brief: load"),
            lacking("supply.c", "parts list: power of R3"),
            lacking("supply.d", "parts list: power of R3"),
        ),
    )
    report = printed(review).partition("could not be checked")[2]
    assert [line.strip() for line in report.splitlines() if line and "?" not in line][1:8] == [
        "open     parts list: power of R3",
        "supply.c",
        "supply.d",
        "open     brief: load",
        "supply.b",
        "open     no single input opens these; each says what stands in the way",
        "supply.a",
    ]


def test_open_and_inapplicable_verdicts_make_no_topic(sound: Review, printed: Printed) -> None:
    silent = (
        Verdict(outcome=Outcome.OPEN, message="?", topic="supply", rule="supply.range"),
        Verdict(outcome=Outcome.NOT_APPLICABLE, message="-", topic="safety", rule="safety.scope"),
    )
    report = printed(replace(sound, verdicts=silent))
    assert "supply ─" not in report
    assert "safety ─" not in report
    assert "  1 not applicable: safety.scope" in report


def test_several_controllers_have_their_own_verdicts(faulty: Review, printed: Printed) -> None:
    first = faulty.controllers[0]
    second = replace(first, part="U2", assumptions=())
    verdicts = (
        Verdict(outcome=Outcome.PASS, message="of the first", topic="supply", rule="a.b", controller="U1"),
        Verdict(outcome=Outcome.PASS, message="of the second", topic="supply", rule="a.b", controller="U2"),
        Verdict(outcome=Outcome.PASS, message="of the netlist", topic="connections", rule="a.c"),
    )
    report = printed(replace(faulty, controllers=(first, second), verdicts=verdicts))
    order = [
        report.index(text)
        for text in (
            "U1 ━",
            "of the first",
            "U2 ━",
            "of the second",
            "the rest of the board ━",
            "of the netlist",
        )
    ]
    assert order == sorted(order)
    assert "the rest of the board" not in printed(
        replace(faulty, controllers=(first, second), verdicts=verdicts[:2])
    )


@pytest.mark.parametrize(
    ("gate", "answer"),
    [
        (Gate(), "gate error: not passed"),
        (Gate(Level.NOTE), "gate note: not passed"),
        (Gate(None), "gate never: passed"),
    ],
)
def test_the_last_line_is_the_count_and_the_answer(
    faulty: Review, printed: Printed, gate: Gate, answer: str
) -> None:
    last = printed(faulty, gate=gate).splitlines()[-1]
    assert last.startswith("2 error, 1 warning, 1 review, 4 open, 1 info, 7 pass ")
    assert last.endswith(answer)


def test_the_answer_takes_a_line_of_its_own_where_it_must(faulty: Review, printed: Printed) -> None:
    many = replace(faulty, verdicts=faulty.verdicts * 10)
    report = printed(many, gate=Gate(Level.WARNING, strict=True)).splitlines()
    assert report[-2] == "20 error, 10 warning, 10 review, 40 open, 10 info, 70 pass"
    assert report[-1] == "gate warning, strict: not passed"


def test_several_netlists_have_one_answer_more(faulty: Review, sound: Review, printed: Printed) -> None:
    assert printed(sound, faulty).splitlines()[-1].split("  ")[0] == "2 netlists, 1 passed"
    assert printed(sound, sound).endswith("gate error: passed\n")


def test_no_promises(faulty: Review, sound: Review, printed: Printed) -> None:
    report = printed(faulty, sound).casefold()
    assert not re.search(r"\bsafe\b|\bcompliant\b|\bcertified\b", report)


def test_an_unbounded_value_is_drawn_and_named(sound: Review, printed: Printed) -> None:
    measured, limit = Spread(6.1, 7.2, float("inf"), "A"), Limit(6.0, 9.0, "A")
    verdict = Verdict(
        outcome=Outcome.FAIL,
        level=Level.ERROR,
        message="The limit may never trip.",
        measured=measured,
        limit=limit,
        margin=limit.margin(measured),
        topic="current limit",
        rule="current-limit.trip-point",
    )
    report = printed(replace(sound, verdicts=(verdict,)))
    assert "▶" in report
    assert "∞ A" in report


def test_crumbs_and_absurd_margins_are_left_out(sound: Review, printed: Printed) -> None:
    measured, limit = Spread(1, 2, 3, "V"), Limit(None, 0.001, "V")
    verdict = Verdict(
        outcome=Outcome.FAIL,
        level=Level.ERROR,
        message="Far out.",
        measured=measured,
        limit=limit,
        margin=limit.margin(measured),
        contributions=(("R1", 0.97), ("R2", 0.02999), ("R3", 1e-5), ("R4", 0.0)),
        nets=("VOUT",),
        topic="supply",
        rule="supply.range",
    )
    report = printed(replace(sound, verdicts=(verdict,)))
    assert "spread   97 % from R1, 3 % from R2, less from 2 more\n" in report
    assert "margin   < -999 %\n" in report
    assert "nets     VOUT\n" in report
    assert report.count(sound.netlist) == 1
    verdict = replace(verdict, outcome=Outcome.PASS, level=None, limit=Limit(0.001, None, "V"), margin=999.0)
    assert ">999 %\n" in printed(replace(sound, verdicts=(verdict,)))


def test_a_long_rule_leaves_its_line_to_the_bar(sound: Review, printed: Printed) -> None:
    limit = Limit(0, 3.3, "V")
    measured = Spread(1, 2, 3, "V")
    verdict = Verdict(
        outcome=Outcome.PASS,
        message="It is inside.",
        measured=measured,
        limit=limit,
        margin=limit.margin(measured),
        topic="house",
        rule="house.a-question-with-a-rather-long-name-to-ask",
        subject="orchard/pump/U7",
    )
    lines = printed(replace(sound, verdicts=(verdict,))).splitlines()
    at = lines.index("           house.a-question-with-a-rather-long-name-to-ask  orchard/pump/U7")
    assert re.fullmatch(r" +0 V ├─+━+●━+─+┤ 3.30 V +9.1 %", lines[at + 1])


@pytest.mark.parametrize("glyphs", [BOX, ASCII])
@pytest.mark.parametrize("colour", [False, True])
def test_texts_from_files_steer_nothing(
    hostile: Review, printed: Printed, glyphs: Glyphs, colour: bool
) -> None:
    report = printed(hostile, glyphs=glyphs, colour=colour)
    ours = re.sub(r"\x1b\[[\d;]*m", "", report) if colour else report
    assert all(line.isprintable() for line in ours.splitlines())
    assert r"\x1b[31mred" in ours
    assert "[bold red]x[/]" in ours
    assert r"\u202egnp" in ours
    assert ":skull:" in ours
    # Red as the data asks for it never reaches the terminal as red.
    assert "\x1b[31mred" not in report
    report.encode("utf-8")


def test_write_suits_the_stream(faulty: Review, monkeypatch: pytest.MonkeyPatch) -> None:
    for variable in ("NO_COLOR", "FORCE_COLOR", "COLUMNS"):
        monkeypatch.delenv(variable, raising=False)
    for encoding, expected in (("utf-8", "plain"), ("ascii", "ascii"), ("cp1252", "ascii")):
        raw = BytesIO()
        stream = TextIOWrapper(raw, encoding=encoding, newline="\n")
        writer("text")([faulty], stream, Gate())
        stream.flush()
        assert raw.getvalue().decode(encoding) == (SNAPSHOTS / f"{expected}.txt").read_text("utf-8")


def test_the_recognised_power_stage_stands_below_the_pins(faulty: Review, printed: Printed) -> None:
    controller = replace(
        faulty.controllers[0],
        power_stage="buck from VBAT to VOUT",
        evidence=("M1 (P-channel MOSFET) switches SW to VBAT",),
    )
    report = printed(replace(faulty, controllers=(controller,)))
    assert "  drives   buck from VBAT to VOUT\n" in report
    assert "           M1 (P-channel MOSFET) switches SW to VBAT\n" in report
    unknown = replace(controller, power_stage="", evidence=("the outputs drive nothing",))
    report = printed(replace(faulty, controllers=(unknown,)))
    assert "  drives   not recognised\n           the outputs drive nothing\n" in report


@pytest.mark.parametrize("command", ["::error::", "##[error]", "::stop-commands::pears"])
def test_a_name_is_no_command_of_a_ci_server(command: str, sound: Review, printed: Printed) -> None:
    verdict = Verdict(
        outcome=Outcome.REVIEW,
        message=f"{command} {'x' * 60} {command}",
        nets=(command,),
        topic=command,
        rule="a.b",
    )
    report = printed(replace(sound, verdicts=(verdict,), name=command))
    assert not [line for line in report.splitlines() if line.lstrip().startswith(("::", "##"))]
