"""The reports of a comparison made by hand: what they say, and that no name steers them."""

from __future__ import annotations

import json
import re
from dataclasses import replace
from importlib.metadata import version
from io import StringIO
from math import inf
from typing import Any

import pytest
from jsonschema import ValidationError
from markdown_it import MarkdownIt
from pwmlint.grammar.netlist import Place
from pwmlint.lint.compare.comparison import (
    Change,
    CircuitChanges,
    Comparison,
    Difference,
    NetChange,
    NetSeen,
    PartChange,
    PartSeen,
    PinMove,
    Unchanged,
    VerdictChange,
)
from pwmlint.lint.quantity import Spread
from pwmlint.lint.report import COMPARISON_FORMATS, Gate, comparison_writer
from pwmlint.lint.report.compare_text import MOST, render
from pwmlint.lint.report.glyphs import ASCII, BOX, Glyphs
from pwmlint.lint.verdict import Deviation, Level, Limit, Outcome, Review, Verdict

from .json_schema import check, schema_of
from .paper import printed_by

PLACE = Place("orchard/frost-fan-b.cir", 21, 1)
LIMIT = Limit(None, 0.010, "A")


def part(reference: str, value: str = "10.0 kΩ", nets: tuple[str, ...] = ("VREF", "FB")) -> PartSeen:
    return PartSeen(reference, "resistor", value, "", nets, True, PLACE)


def net(name: str, *pins: str) -> NetSeen:
    return NetSeen(name, pins, PLACE)


def load(amperes: float, outcome: Outcome = Outcome.FAIL) -> Verdict:
    spread = Spread(0.9 * amperes, amperes, 1.1 * amperes, "A")
    return Verdict(
        outcome=outcome,
        level=Level.ERROR if outcome is Outcome.FAIL else None,
        message=f"The reference pin delivers {amperes} A.",
        rule="reference.load",
        subject="U1",
        measured=spread,
        limit=LIMIT,
        margin=LIMIT.margin(spread),
        places=(PLACE,),
        remedy="Raise R4." if outcome is Outcome.FAIL else "",
    )


def said(outcome: Outcome, rule: str) -> Verdict:
    return Verdict(outcome=outcome, message=f"{rule} is so.", rule=rule, subject="U1")


@pytest.fixture
def comparison(faulty: Review) -> Comparison:
    """Every kind of change between two revisions of the frost fan."""
    accepted = Deviation(rule="*", subject="*", reason="measured", owner="the orchard", place=PLACE)
    return Comparison(
        old=replace(faulty, netlist="HEAD~1:orchard/frost-fan.cir", parts_list="orchard/frost-fan.parts.csv"),
        new=faulty,
        circuit=CircuitChanges(
            parts_added=(part("R17", "220 Ω"), replace(part("R18"), fitted=False)),
            parts_removed=(part("TP1", "", nets=()),),
            parts_changed=(
                PartChange(
                    part("R6", "38.3 kΩ"),
                    part("R6", "3.83 kΩ"),
                    False,
                    (Difference("value", "38.3 kΩ", "3.83 kΩ", 38300.0, 3830.0, "ohm"),),
                    (PinMove("one end", "FB", "SENSE"),),
                ),
                *(
                    PartChange(
                        part(name), part(name), False, (Difference("tolerance", "", "±1 %", None, 0.01),), ()
                    )
                    for name in ("R1", "R2")
                ),
                PartChange(part("R3"), part("R4"), True, (), ()),
                PartChange(
                    part("U1"), part("U1"), False, (), (PinMove("17", None, ""), PinMove("DTC", "DT", None))
                ),
            ),
            nets_added=(net("MODE", "U1.OUTPUT CTRL", "R2"),),
            nets_removed=(net("OLD", *(f"R{number}" for number in range(40))),),
            nets_changed=(
                NetChange(net("FB", "R6"), net("SENSE", "R6", "R7"), True, ("R7",), ()),
                NetChange(net("A", "R1", "R2"), net("B", "R1", "R2"), True, (), ()),
                NetChange(net("VREF", "R1", "R2"), net("VREF", "R1"), False, (), ("R2",)),
            ),
        ),
        verdicts=(
            VerdictChange(Change.NEW, None, said(Outcome.REVIEW, "ratings.power")),
            VerdictChange(Change.NEW, None, said(Outcome.PASS, "connections.title-line")),
            VerdictChange(Change.WORSE, load(0.008, Outcome.PASS), load(0.012)),
            VerdictChange(Change.WORSE, said(Outcome.PASS, "a.open"), said(Outcome.OPEN, "a.open")),
            VerdictChange(Change.GONE, said(Outcome.FAIL, "b.fixed"), None),
            VerdictChange(Change.GONE, said(Outcome.PASS, "b.unasked"), None),
            VerdictChange(Change.BETTER, load(0.012), replace(load(0.011), deviation=accepted)),
            VerdictChange(Change.CHANGED, load(0.001, Outcome.PASS), load(0.002, Outcome.PASS)),
        ),
        unchanged=Unchanged(30, 12, 41),
        assumptions=("the pins of U2 are told by their nets",),
    )


@pytest.fixture
def steering(comparison: Comparison, hostile: Review) -> Comparison:
    """A comparison whose every text tries to steer the terminal, the markup or the reading direction."""
    bad = f"{hostile.netlist} ::error::x -> `|` </details> <img src=x> @orchard #1 https://x.example | \n# h"
    named = replace(part(bad, bad, (bad, bad)), kind=bad, model=bad, reference=bad, place=Place(bad, 1, 1))
    verdict = replace(hostile.verdicts[0], subject=bad, message=bad, remedy=bad)
    crossed = NetSeen(bad, (bad,), Place(bad, 1, 1))
    return replace(
        comparison,
        old=hostile,
        new=hostile,
        circuit=CircuitChanges(
            parts_added=(named,),
            parts_changed=(
                PartChange(named, named, True, (Difference(bad, bad, bad),), (PinMove(bad, bad, bad),)),
            ),
            nets_removed=(crossed,),
            nets_changed=(NetChange(crossed, crossed, True, (bad,), (bad,)),),
        ),
        verdicts=tuple(VerdictChange(change, verdict, verdict) for change in Change),
        assumptions=(bad,),
    )


def printed(
    comparison: Comparison,
    glyphs: Glyphs = BOX,
    width: int = 80,
    *,
    gate: Gate | None = None,
    colour: bool = False,
) -> str:
    return printed_by(lambda console: render(comparison, console, gate or Gate(), glyphs), width, colour)


def written(comparison: Comparison, form: str, gate: Gate | None = None) -> str:
    stream = StringIO()
    comparison_writer(form)(comparison, stream, gate or Gate())
    return stream.getvalue()


class TestText:
    @pytest.mark.parametrize(
        "line",
        [
            "old         HEAD~1:orchard/frost-fan.cir  (SPICE list)",
            "  removed    TP1       resistor",
            "  added      R17       220 Ω resistor on VREF, FB",
            "  added      R18       10.0 kΩ resistor on VREF, FB, not fitted",
            "  renumbered R3 -> R4  10.0 kΩ resistor on VREF, FB",
            "  changed    R6        value 38.3 kΩ -> 3.83 kΩ",
            "                       one end from FB to SENSE",
            "  changed    R1, R2    tolerance none -> ±1 %",
            "  changed    U1        pin 17 is new, on nothing",
            "                       pin DTC is gone, was on DT",
            "  added      MODE         joins U1.OUTPUT CTRL, R2",
            "  renamed    FB -> SENSE  gained R7",
            "  renamed    A -> B       joins R1, R2",
            "  changed    VREF         lost R2",
            "  error      The reference pin delivers 0.012 A.",
            "             reference.load  U1",
            "             outcome  pass -> error",
            "             measured 8.00 mA (7.20 .. 8.80 mA) -> 12.0 mA (10.8 .. 13.2 mA)",
            "             margin   12 % -> -32 %",
            "             remedy   Raise R4.",
            "             outcome  error -> error, accepted",
            "  was        b.fixed is so.",
            "  asked of the old revision only, nothing to do: b.unasked",
            "  assumed    the pins of U2 are told by their nets",
            "2 new, 2 worse, 2 gone, 1 better, 1 changed, 41 unchanged",
            "gate error: not passed",
        ],
    )
    def test_says_what_changed(self, comparison: Comparison, line: str) -> None:
        assert line in printed(comparison).splitlines()

    @pytest.mark.parametrize(
        ("title", "counts"),
        [
            ("parts", "1 removed, 2 added, 1 renumbered, 4 changed, 30 unchanged"),
            ("nets", "1 removed, 1 added, 2 renamed, 1 changed, 12 unchanged"),
            ("verdicts", "2 new, 2 worse, 2 gone, 1 better, 1 changed, 41 unchanged"),
        ],
    )
    def test_headings_count(self, comparison: Comparison, title: str, counts: str) -> None:
        (heading,) = (line for line in printed(comparison).splitlines() if line.startswith(f"{title} ━"))
        assert heading.endswith(f"━ {counts}")

    def test_old_and_new_figures_stand_on_one_scale(self, comparison: Comparison) -> None:
        lines = printed(comparison).splitlines()
        was = next(line for line in lines if line.startswith("         was "))
        now = lines[lines.index(was) + 1]
        assert now.startswith("         now ")
        assert len(was) == len(now)
        assert was.index("●") < was.index("┤") < now.index("●")

    def test_the_gate(self, comparison: Comparison) -> None:
        assert "gate never: passed" in printed(comparison, gate=Gate(None))

    @pytest.mark.parametrize("width", [80, 93, 120])
    def test_no_line_is_wider_than_the_page_or_ends_in_blanks(
        self, comparison: Comparison, width: int
    ) -> None:
        for line in printed(comparison, width=width).splitlines():
            assert len(line) <= width
            assert line == line.rstrip()

    def test_colour_only_adds_to_the_words(self, comparison: Comparison) -> None:
        assert re.sub(r"\x1b\[[\d;]*m", "", printed(comparison, colour=True)) == printed(comparison)

    def test_ascii_is_ascii(self, comparison: Comparison) -> None:
        assert printed(comparison, ASCII).isascii()

    def test_a_long_list_is_cut_and_says_so(self, comparison: Comparison) -> None:
        many = tuple(part(f"R{number}") for number in range(MOST + 7))
        report = printed(replace(comparison, circuit=CircuitChanges(parts_added=many)))
        assert "and 7 more; --format json tells all" in report
        assert f"{MOST + 7} added" in report

    def test_nothing_changed(self, comparison: Comparison) -> None:
        same = replace(comparison, circuit=CircuitChanges(), verdicts=(), assumptions=())
        report = printed(same)
        assert "30 unchanged" in report
        assert "gate error: passed" in report

    @pytest.mark.parametrize("glyphs", [BOX, ASCII])
    def test_no_name_steers_the_terminal(self, steering: Comparison, glyphs: Glyphs) -> None:
        report = printed(steering, glyphs)
        assert all(character.isprintable() or character == "\n" for character in report)
        assert "[bold red]" in report
        for line in report.splitlines():
            assert not line.lstrip().startswith(("::", "##"))


class TestMarkdown:
    def test_says_what_changed(self, comparison: Comparison) -> None:
        report = written(comparison, "markdown")
        assert report.startswith(
            "### pwmlint: from `HEAD~1:orchard/frost-fan.cir` to `orchard/frost-fan-b.cir`\n\n"
            "**Gate error: not passed**; verdicts: 2 new, 2 worse,"
        )
        assert "| worse | error | The reference pin delivers 0.012 A. | `reference.load` U1 |" in report
        assert "- **changed** `R6`: value 38.3 kΩ -> 3.83 kΩ; one end from FB to SENSE\n" in report
        assert "- **renamed** `FB` -> `SENSE`: gained R7\n" in report
        assert "- **better** `reference.load` U1: The reference pin delivers 0.011 A." in report
        assert "connections.title-line" not in report
        assert report.count("<details>") == report.count("</details>") == 5

    def test_renders_as_meant(self, comparison: Comparison) -> None:
        shown = MarkdownIt("commonmark").enable("table").render(written(comparison, "markdown"))
        assert shown.count("<table>") == 1
        assert shown.count("<tr>") == 4  # the heading, one new, two worse
        assert shown.count("<h3>") == 1

    def test_no_name_becomes_markup(self, steering: Comparison) -> None:
        report = written(steering, "markdown")
        shown = MarkdownIt("commonmark").enable("table").render(report)
        assert all(character.isprintable() or character == "\n" for character in report)
        assert "<img" not in shown
        assert "<a " not in shown
        assert shown.count("<h3>") == 1
        assert shown.count("<h1>") == 0
        assert shown.count("<td>") % 5 == 0
        assert report.count("</details>") - report.count("<details>") == shown.count("&lt;/details&gt;")
        for line in report.splitlines():
            assert not line.lstrip().startswith(("::", "##["))


@pytest.fixture(scope="module")
def schema() -> dict[str, Any]:
    return schema_of("compare.schema.json")


class TestJson:
    @staticmethod
    def data(comparison: Comparison) -> dict[str, Any]:
        loaded: dict[str, Any] = json.loads(written(comparison, "json"))
        return loaded

    def test_follows_the_schema(
        self, comparison: Comparison, steering: Comparison, schema: dict[str, Any]
    ) -> None:
        check(schema, self.data(comparison))
        check(schema, self.data(replace(steering, verdicts=())))
        check(schema, self.data(replace(comparison, circuit=CircuitChanges(), verdicts=())))

    def test_the_schema_describes_every_key_and_no_other(
        self, comparison: Comparison, schema: dict[str, Any]
    ) -> None:
        report, known = self.data(comparison), schema["$defs"]
        worse = report["verdicts"][2]
        for found, described in (
            (report, schema),
            (report["old"], known["revision"]),
            (report["parts"]["added"][0], known["part"]),
            (report["parts"]["changed"][0], known["part_change"]),
            (report["nets"]["added"][0], known["net"]),
            (report["nets"]["changed"][0], known["net_change"]),
            (worse, known["verdict_change"]),
            (worse["old"], known["verdict"]),
        ):
            assert list(found) == described["required"]
            assert set(found) == set(described["properties"])

    @pytest.mark.parametrize(
        ("place", "change"),
        [
            (0, {"change": "odd"}),
            (0, {"surprise": 1}),
            (2, {"change": "new"}),
            (2, {"change": "gone"}),
        ],
    )
    def test_the_schema_refuses_what_the_contract_does_not_hold(
        self, comparison: Comparison, schema: dict[str, Any], place: int, change: dict[str, Any]
    ) -> None:
        report = self.data(comparison)
        report["verdicts"][place] |= change
        with pytest.raises(ValidationError):
            check(schema, report)

    def test_the_contract(self, comparison: Comparison) -> None:
        report = self.data(comparison)
        assert report["schema"] == 1
        assert report["tool"] == {"name": "pwmlint", "version": version("pwmlint")}
        assert report["old"]["netlist"] == "HEAD~1:orchard/frost-fan.cir"
        (six,) = (one for one in report["parts"]["changed"] if one["new"]["reference"] == "R6")
        assert six["differences"] == [
            {
                "what": "value",
                "old": "38.3 kΩ",
                "new": "3.83 kΩ",
                "old_number": 38300.0,
                "new_number": 3830.0,
                "unit": "ohm",
            }
        ]
        assert six["pins"] == [{"pin": "one end", "old": "FB", "new": "SENSE"}]
        worse = report["verdicts"][2]
        assert (worse["change"], worse["rule"], worse["subject"]) == ("worse", "reference.load", "U1")
        assert worse["new"]["margin"] == pytest.approx(-0.32)
        assert worse["new"]["accepted"] is False
        assert report["unchanged"] == {"parts": 30, "nets": 12, "verdicts": 41}

    def test_what_has_no_bound_is_null(self, comparison: Comparison, schema: dict[str, Any]) -> None:
        verdict = replace(load(0.012), measured=Spread(1.0, inf, inf, "A"), margin=-inf)
        report = self.data(replace(comparison, verdicts=(VerdictChange(Change.NEW, None, verdict),)))
        check(schema, report)
        assert report["verdicts"][0]["new"]["measured"]["maximum"] is None
        assert report["verdicts"][0]["new"]["margin"] is None

    def test_same_comparison_same_bytes(self, comparison: Comparison) -> None:
        assert written(comparison, "json") == written(comparison, "json")
        assert written(comparison, "json").isascii()


@pytest.mark.parametrize("form", COMPARISON_FORMATS)
def test_every_format_ends_its_last_line(comparison: Comparison, form: str) -> None:
    assert written(comparison, form).endswith("\n")
    assert not written(comparison, form).endswith("\n\n")
