"""Reading a file of deviations, and what they do to verdicts."""

from __future__ import annotations

import time
from collections.abc import Callable
from datetime import date
from math import inf
from pathlib import Path

import pytest
from pwmlint.lint.deviations import DeviationsError, apply, read_deviations, to_accept
from pwmlint.lint.quantity import Spread
from pwmlint.lint.verdict import Limit, Outcome, Verdict

TODAY = date(2026, 5, 4)

ENTRY = """\
[[deviation]]
rule = "reference.load"
subject = "U1"
reason = "the sorting line's lamp is fed from it, for a season"
owner = "the orchard's workshop"
"""

Write = Callable[[str], Path]


@pytest.fixture
def write(tmp_path: Path) -> Write:
    def _write(text: str) -> Path:
        path = tmp_path / "sorter.deviations.toml"
        path.write_text(text, encoding="utf-8")
        return path

    return _write


def load(maximum: float, outcome: Outcome = Outcome.FAIL, **more: object) -> Verdict:
    """Return a verdict on the reference's load, against 10 mA (SLVS074, recommended conditions)."""
    found = Verdict(
        outcome=outcome,
        message="the reference is loaded",
        rule="reference.load",
        subject="U1",
        measured=Spread(maximum * 0.9, maximum * 0.95, maximum, "A"),
        limit=Limit(None, 0.010, "A"),
        parts=("R4", "R5"),
        nets=("REF",),
    )
    return replace_all(found, **more)


def replace_all(verdict: Verdict, **more: object) -> Verdict:
    from dataclasses import replace

    return replace(verdict, **more)  # pyright: ignore[reportArgumentType]


class TestReading:
    def test_an_entry(self, write: Write) -> None:
        text = ENTRY + 'parts = ["R4"]\nnets = ["REF"]\nexpires = 2026-12-31\naccepted = "12 mA"\n'
        (entry,) = read_deviations(write(text)).entries
        assert (entry.rule, entry.subject) == ("reference.load", "U1")
        assert entry.owner == "the orchard's workshop"
        assert (entry.parts, entry.nets) == (("R4",), ("REF",))
        assert entry.expires == date(2026, 12, 31)
        assert entry.accepted == Spread.exact(0.012, "A")
        assert (entry.place.line, entry.place.column) == (1, 3)

    def test_a_range_and_a_day_in_quotes(self, write: Write) -> None:
        text = ENTRY + 'expires = "2026-12-31"\naccepted = "10 .. 12 V"\n'
        (entry,) = read_deviations(write(text)).entries
        assert entry.expires == date(2026, 12, 31)
        assert entry.accepted == Spread(10, 11, 12, "V")

    def test_every_entry_has_its_own_place(self, write: Write) -> None:
        entries = read_deviations(write(f"# the sorting line\n{ENTRY}\n{ENTRY}")).entries
        assert [entry.place.line for entry in entries] == [2, 8]

    def test_an_empty_file_accepts_nothing(self, write: Write) -> None:
        found = read_deviations(write(""))
        assert not found.entries
        assert not found.malformed

    @pytest.mark.parametrize(
        ("line", "message", "where"),
        [
            ('reason = ""', '"reason" is empty', (4, 10)),
            ('reason = "  "', '"reason" is empty', (4, 10)),
            ("reason = 3", '"reason" is not what belongs there', (4, 10)),
            ('because = "it is so"', 'unknown key "because" in [[deviation]]', (4, 1)),
        ],
    )
    def test_an_entry_without_a_reason_does_not_count(
        self, write: Write, line: str, message: str, where: tuple[int, int]
    ) -> None:
        lines: list[str] = [*ENTRY.splitlines()]
        lines[3] = line
        found = read_deviations(write("\n".join(lines)))
        assert not found.entries
        first = found.malformed[0]
        assert (first.message, (first.place.line, first.place.column)) in [
            (message, where),
            ("a deviation without reason does not count", (1, 3)),
        ]
        assert message in [mistake.message for mistake in found.malformed]

    @pytest.mark.parametrize("key", ["rule", "reason", "owner"])
    def test_what_an_entry_needs(self, write: Write, key: str) -> None:
        text = "\n".join(line for line in ENTRY.splitlines() if not line.startswith(key))
        (mistake,) = read_deviations(write(text)).malformed
        assert mistake.message == f"a deviation without {key} does not count"
        assert mistake.expected == f'{key} = "..."'

    @pytest.mark.parametrize(
        "line",
        [
            'expires = "next spring"',
            "expires = 2026-12-31T10:00:00",
            "expires = 31",
            'accepted = "12 parsec"',
            'accepted = "12"x',
            "accepted = 12",
            "parts = []",
            'parts = "R4"',
            'subject = ""',
            'unless = "it rains"',
        ],
    )
    def test_any_other_mistake(self, write: Write, line: str) -> None:
        text = "\n".join(one for one in ENTRY.splitlines() if not one.startswith(line.split()[0]))
        if line.endswith("x"):  # no TOML at all: then no entry can be told from another
            with pytest.raises(DeviationsError):
                read_deviations(write(f"{text}\n{line}\n"))
            return
        found = read_deviations(write(f"{text}\n{line}\n{ENTRY}"))
        assert len(found.entries) == 1, "the entry after it counts"
        (mistake,) = found.malformed
        assert mistake.place.line == text.count("\n") + 2

    def test_a_misspelt_heading_is_no_empty_file(self, write: Write) -> None:
        found = read_deviations(write(ENTRY.replace("deviation", "deviations")))
        (mistake,) = found.malformed
        assert mistake.remedy == 'did you mean "deviation"?'
        assert read_deviations(write('deviation = "none"')).malformed
        assert read_deviations(write("deviation = [1]")).malformed

    def test_after_many_mistakes_an_unknown_key_still_spoils_its_entry(self, write: Write) -> None:
        found = read_deviations(write("\n".join(f"{ENTRY}only_if = {number}\n" for number in range(40))))
        assert not found.entries

    def test_there_is_a_limit(self, write: Write) -> None:
        with pytest.raises(DeviationsError, match="2001 deviations"):
            read_deviations(write('[[deviation]]\nrule="*"\nreason="a"\nowner="b"\n' * 2001))


def applied(write: Write, more: str, *verdicts: Verdict) -> list[bool]:
    """Return for each verdict whether it is accepted by ENTRY and `more`."""
    found, _ = apply(read_deviations(write(ENTRY + more)), verdicts, TODAY)
    return [verdict.deviation is not None for verdict in found]


class TestApplying:
    def test_rule_and_subject(self, write: Write) -> None:
        other = (load(0.012, rule="reference.bypass"), load(0.012, subject="U2"), load(0.012, subject="U10"))
        assert applied(write, "", load(0.012), *other) == [True, False, False, False]

    @pytest.mark.parametrize(
        ("outcome", "accepted"),
        [("fail", True), ("review", True), ("open", True), ("pass", False), ("informational", False)],
    )
    def test_only_what_asks_for_something_is_accepted(
        self, write: Write, outcome: str, accepted: bool
    ) -> None:
        assert applied(write, "", load(0.012, Outcome(outcome))) == [accepted]

    @pytest.mark.parametrize(
        ("pattern", "subject", "fits"),
        [
            ("U*", "U12", True),
            ("U?", "U12", False),
            ("*", "", True),
            ("bus[3]", "bus[3]", True),
            ("bus[3]", "bus3", False),
            ("bus[*", "bus[3]", True),
            ("u1", "U1", False),
            ("a*b*c*d*e*f*g*h", "a" * 5_000, False),
        ],
    )
    def test_patterns(self, write: Write, pattern: str, subject: str, fits: bool) -> None:
        text = ENTRY.replace('"U1"', f'"{pattern}"')
        start = time.process_time()
        found, _ = apply(read_deviations(write(text)), [load(0.012, subject=subject)], TODAY)
        assert (found[0].deviation is not None) is fits
        assert time.process_time() - start < 1.0

    def test_parts_and_nets_are_those_of_the_verdict_all_of_them(self, write: Write) -> None:
        fewer, none = load(0.012, parts=("R4",)), load(0.012, parts=())
        assert applied(write, 'parts = ["R5", "R4"]', load(0.012), fewer, none) == [True, False, False]
        assert applied(write, 'nets = ["REF"]', load(0.012), load(0.012, nets=("SET",))) == [True, False]

    @pytest.mark.parametrize(
        ("expires", "accepted"), [("2026-05-03", False), ("2026-05-04", True), ("2026-05-05", True)]
    )
    def test_it_counts_through_its_last_day(self, write: Write, expires: str, accepted: bool) -> None:
        assert applied(write, f"expires = {expires}", load(0.012)) == [accepted]

    @pytest.mark.parametrize(
        ("value", "accepted"),
        [("12 mA", True), ("11.995 mA", True), ("11.9 mA", False), ("1 A", True), ("12 mV", False)],
    )
    def test_a_worse_value_is_not_accepted(self, write: Write, value: str, accepted: bool) -> None:
        assert applied(write, f'accepted = "{value}"', load(0.012)) == [accepted]

    def test_below_a_limit_less_is_worse(self, write: Write) -> None:
        low = load(0.012, limit=Limit(0.011, 0.020, "A"))  # 10.8 mA at least, 11 mA wanted
        assert applied(write, 'accepted = "10.8 mA"', low) == [True]
        assert applied(write, 'accepted = "10.9 mA"', low) == [False]

    def test_a_figure_that_counts_at_both_ends_must_lie_inside(self, write: Write) -> None:
        both = load(0.012, limit=Limit(0.011, 0.0115, "A"))
        assert applied(write, 'accepted = "10 mA .. 13 mA"', both) == [True]
        assert applied(write, 'accepted = "11 mA .. 13 mA"', both) == [False]
        assert applied(write, 'accepted = "12 mA"', both) == [False]

    def test_without_a_figure_no_value_is_accepted(self, write: Write) -> None:
        assert applied(write, 'accepted = "12 mA"', load(0.012, measured=None, limit=None)) == [False]
        endless = Spread(0.0, 0.012, inf, "A")
        assert applied(write, 'accepted = "12 mA"', load(0.012, measured=endless)) == [False]

    def test_what_became_of_each(self, write: Write) -> None:
        text = "\n".join(
            [
                ENTRY + 'accepted = "11 mA"',
                ENTRY + "expires = 2020-01-01",
                ENTRY.replace("reference.load", "dead-time.range"),
                ENTRY.replace("reference.load", "supply.*"),
            ]
        )
        deviations = read_deviations(write(text))
        outgrown, expired, unused, used = deviations.entries
        verdicts = [load(0.012), load(0.012, rule="supply.range")]
        found, became = apply(deviations, verdicts, TODAY)
        assert [verdict.deviation for verdict in found] == [None, used]
        assert became.used == (used,)
        assert became.expired == (expired,)
        assert became.unused == (unused,)
        assert became.outgrown == ((outgrown, verdicts[0]),)

    def test_of_a_rule_that_was_not_asked_nobody_can_know(self, write: Write) -> None:
        deviations = read_deviations(write(ENTRY + ENTRY.replace("reference.load", "dead-time.*")))
        _, became = apply(deviations, [], TODAY, lambda pattern: pattern != "dead-time.*")
        assert (became.unused, became.unasked) == (deviations.entries[:1], deviations.entries[1:])

    def test_a_file_of_long_patterns_costs_little(self, write: Write) -> None:
        text = "".join(ENTRY.replace("reference.load", f"*{number}" + "*?a" * 90) for number in range(400))
        deviations = read_deviations(write(text))
        verdicts = [load(0.012), load(0.012, rule="a" * 400)] * 50
        began = time.process_time()
        apply(deviations, verdicts, TODAY)
        assert time.process_time() - began < 5.0  # about 1 s; compiled anew for each verdict, two minutes

    def test_the_first_that_covers_it_accepts_it(self, write: Write) -> None:
        text = ENTRY + 'accepted = "11 mA"\n' + ENTRY + ENTRY
        deviations = read_deviations(write(text))
        (found,), became = apply(deviations, [load(0.012)], TODAY)
        assert found.deviation == deviations.entries[1]
        assert became.unused == (deviations.entries[0], deviations.entries[2])


class TestWhatThereIsToAccept:
    def test_the_end_beyond_the_limit(self) -> None:
        assert to_accept(load(0.012)) == Spread.exact(0.012, "A")
        assert to_accept(load(0.012, limit=Limit(0.02, None, "A"))) == Spread.exact(0.9 * 0.012, "A")

    def test_else_the_whole_figure(self) -> None:
        assert to_accept(load(0.009)) == load(0.009).measured
        assert to_accept(load(0.012, limit=None)) == load(0.012).measured

    def test_no_figure_or_an_endless_one(self) -> None:
        assert to_accept(load(0.012, measured=None)) is None
        assert to_accept(load(0.012, measured=Spread(0, 1, inf, "A"))) is None
