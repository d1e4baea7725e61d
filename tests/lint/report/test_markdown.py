from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from io import BytesIO, TextIOWrapper

import pytest
from pwmlint.grammar.netlist import Place
from pwmlint.lint.report import Gate, writer
from pwmlint.lint.report.markdown_parts import MOST
from pwmlint.lint.report.markdown_text import code, inline
from pwmlint.lint.verdict import Level, Outcome, Review, Verdict

Written = Callable[..., str]


def table(text: str) -> list[str]:
    return [line for line in text.splitlines() if line.startswith("| ")][2:]


def test_the_answer_and_the_findings_come_first(written: Written, faulty: Review) -> None:
    lines = written("markdown", faulty).splitlines()
    assert lines[:7] == [
        "### pwmlint: `orchard/frost-fan-b.cir`",
        "",
        "Design: orchard frost-fan drive, revision B",
        "",
        "**Gate error: not passed**; 2 error, 1 warning, 1 review, 4 open, 1 info, 7 pass",
        "",
        "| verdict | finding | rule | at |",
    ]
    assert lines[8] == (
        "| error | The reference pin delivers 11.4 mA (10.8 mA .. 12.1 mA); it can deliver 10.0 mA. "
        "| `reference.load` U1 | 21:1 |"
    )
    assert [row.split(" ")[1] for row in lines[8:12]] == ["error", "error", "warning", "review"]


def test_the_rest_is_folded(written: Written, faulty: Review) -> None:
    text = written("markdown", faulty)
    assert text.count("<details>\n<summary>") == text.count("\n\n</details>\n") == 3
    figures, unchecked, cautions = text.split("</details>")[:3]
    assert "<summary>Findings with their figures (4)</summary>\n\n" in figures
    assert "  - margin: -21 %" in figures
    assert "  - formula: `VOUT = 2.50 V (1 + R1 / R2) = 2.50 V (1 + 40.2 kΩ / 10.0 kΩ)`" in figures
    assert "<summary>Could not be checked (4)</summary>\n\n" in unchecked
    assert '  - needs: `brief: [controllers.U1] dead_time = "..."`' in unchecked
    assert "A frost-fan drive can start without warning" in cautions


def test_what_is_accepted_stands_apart_with_its_reason(written: Written, accepted: Review) -> None:
    text = written("markdown", accepted)
    assert "3 info, 66 pass, 1 accepted" in text
    assert not any("feedback.output-voltage" in row for row in table(text))
    folded = text.partition("<summary>Accepted (1)</summary>")[2]
    assert (
        "- **error** `feedback.output-voltage` U1: no voltage of VOUT is within reach of RV1 on every unit\n"
        "  - accepted by the pressing hall's electrician, until 2031-09-30: "
        "RV1 is chosen on the bench, unit by unit\n"
    ) in folded


def test_a_board_without_findings_is_short(written: Written, sound: Review) -> None:
    assert written("markdown", sound) == (
        "### pwmlint: `orchard/hive-scale.edf`\n\n**Gate error: passed**; 1 pass\n"
    )


def test_several_netlists_are_counted(written: Written, faulty: Review, sound: Review) -> None:
    text = written("markdown", faulty, sound, gate=Gate(Level.WARNING))
    assert text.startswith("**pwmlint: 2 netlists, 1 passed the gate (warning)**\n\n### pwmlint: ")
    assert text.count("\n### ") == 2


def test_a_comment_stays_short(written: Written, sound: Review) -> None:
    failed = Verdict(outcome=Outcome.FAIL, level=Level.ERROR, message="leaks " * 1000, rule="press.oil")
    text = written("markdown", replace(sound, verdicts=(failed,) * (MOST + 7)))
    assert len(table(text)) == MOST
    assert text.count("and 7 more; `--format json` tells all") == 2
    assert len(text) < 65_536


def test_places(written: Written, sound: Review) -> None:
    failed = Verdict(outcome=Outcome.FAIL, level=Level.ERROR, message="leaks", rule="press.oil")
    verdicts = (
        replace(failed, places=(Place(sound.netlist, 4, 2),)),
        replace(failed, places=(Place("oil.inc", 7, 1),)),
        replace(failed, places=(Place(sound.netlist, 0, 0),)),
        failed,
    )
    rows = table(written("markdown", replace(sound, verdicts=verdicts)))
    assert [row.split("|")[4].strip() for row in rows] == ["4:2", "`oil.inc:7:1`", "", ""]


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("R13 takes 3.26 W (2.50 .. 4.13 W), -52 % of 3.00 W", None),
        ("the brief's figure: E24: 27.0 kΩ makes 40.7 kHz", None),
        ("VOUT_SENSE", r"VOUT\_SENSE"),
        ("net @foreman floats", "net `@foreman` floats"),
        ("#12 !3 ~a $x$", "`#12 !3 ~a $x$`"),
        ("GH-12", "`GH-12`"),
        ("[x](http://orchard.example) y", "`[x](http://orchard.example)` y"),
        ("www.orchard.example", "`www.orchard.example`"),
        ("*bold* _thin_", r"`*bold*` \_thin\_"),
        ("<img src=x>", "`<img src=x>`"),
        ("a`b|c", r"`a\x60b\x7cc`"),
        (":skull:", "`:skull:`"),
        ("D<3> D[3]", "`D<3> D[3]`"),
        ("a\\b", "`a\\b`"),
        ("a\x1b[0m\u202e", r"`a\x1b[0m\u202e`"),
        ("deadbeef1", "`deadbeef1`"),
        ("a  b", "a  b"),
        ("", ""),
    ],
)
def test_a_suspicious_word_becomes_code(text: str, shown: str | None) -> None:
    assert inline(text) == (text if shown is None else shown)


def test_code_holds_neither_a_backtick_nor_a_pipe() -> None:
    assert code("a`|\n") == r"`a\x60\x7c\n`"
    assert code("") == ""


def test_a_stream_of_few_characters(faulty: Review) -> None:
    raw = BytesIO()
    stream = TextIOWrapper(raw, encoding="ascii", newline="\n")
    writer("markdown")([faulty], stream, Gate())
    stream.flush()
    assert "40.2 kohm / 10.0 kohm" in raw.getvalue().decode("ascii")
