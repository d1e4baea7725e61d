"""The two small netlists in every rule's docstring do what they say.

An example is a SPICE-style list without its title line; one that ends in `.end` is a whole file. Unless it
has a U1 of its own, U1 is a 494 with each pin on a net of the pin's name (ground on 0), and whatever an
example leaves out stays open. A line such as `[rails.VOUT] voltage = "12 V"; tolerance = "2 %"` belongs to
the brief, one such as `parts: R13, power 1 W, tolerance 1 %` to the parts list, and one that begins with
`[[deviation]]` is an entry of the file of deviations: then all rules are asked.
"""

from __future__ import annotations

import csv
from io import StringIO
from pathlib import Path

import pytest
from pwmlint.grammar import Netlist, read_bytes
from pwmlint.lint import Outcome, Verdict, read_brief, read_parts_list, review_netlist
from pwmlint.lint.controllers import generic_number
from pwmlint.lint.deviations import read_deviations
from pwmlint.lint.rule import EXAMPLES, Rule, load_rules

CONTROLLER = "U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 E1 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494"
END = ".end"
BRIEF = "["
DEVIATIONS = "[["
PARTS_LIST = "parts: "

RULES = load_rules()

# A rule speaks by failing or by asking a person to look, but for two: without a controller nothing can be
# asked, and a caution blames nobody; where there is nothing to caution of, it is not given.
FINDINGS = frozenset({Outcome.FAIL, Outcome.REVIEW})
OTHER_FINDINGS = {
    "connections.controller-found": frozenset({Outcome.OPEN}),
    "safety.scope": frozenset({Outcome.INFORMATIONAL}),
}
CAUTIONS = ("safety.scope",)


def verdicts(rule: Rule, example: str, folder: Path) -> list[Verdict]:
    lines = example.splitlines()
    accepted = [line for line in lines if line.startswith(DEVIATIONS)]
    told = [line for line in lines if line.startswith(BRIEF) and line not in accepted]
    listed = [line.removeprefix(PARTS_LIST) for line in lines if line.startswith(PARTS_LIST)]
    drawn = [line for line in lines if not line.startswith((BRIEF, PARTS_LIST))]
    brief = parts_list = deviations = None
    if told:
        path = folder / "example.brief.toml"
        path.write_text("\n".join(map(as_toml, told)), encoding="utf-8")
        brief = read_brief(path)
    if listed:
        path = folder / "example.parts.csv"
        path.write_text(as_csv(listed), encoding="utf-8")
        parts_list = read_parts_list(path)
    if accepted:
        path = folder / "example.deviations.toml"
        path.write_text("\n".join(map(as_toml, accepted)), encoding="utf-8")
        deviations = read_deviations(path)
    asked = RULES if accepted else [rule]
    found = review_netlist(as_netlist(drawn), brief, parts_list, asked, deviations=deviations)
    return [verdict for verdict in found.verdicts if verdict.rule == rule.id]


def as_netlist(lines: list[str]) -> Netlist:
    """Return the netlist of an example's lines, with what it leaves out of a whole file."""
    if END not in lines:
        controller = [] if any(line.startswith("U1 ") for line in lines) else [CONTROLLER]
        lines = ["example", *controller, *lines, END]
    text = "\n".join([*lines, ""])
    return read_bytes(text.encode(), "example.cir", keep=lambda name: generic_number(name) is not None)


def as_toml(line: str) -> str:
    """Return `[table] key = "value"; key = "value"` as TOML."""
    table, _, keys = line.partition("] ")
    return "\n".join([f"{table}]", *keys.split("; ")])


def as_csv(lines: list[str]) -> str:
    """Return lines of `R13, power 1 W, tolerance 1 %` as a parts list."""
    rows: list[dict[str, str]] = []
    for reference, *cells in (line.split(", ") for line in lines):
        told = (cell.partition(" ") for cell in cells)
        rows.append({"reference": reference} | {heading: text for heading, _, text in told})
    table = StringIO()
    writer = csv.DictWriter(table, dict.fromkeys(heading for row in rows for heading in row))
    writer.writeheader()
    writer.writerows(rows)
    return table.getvalue()


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_every_rule_has_an_example_that_fails_and_one_that_passes(rule: Rule) -> None:
    assert [name for name in rule.sections if name in EXAMPLES] == list(EXAMPLES)


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_the_failing_example_is_spoken_of(rule: Rule, tmp_path: Path) -> None:
    found = verdicts(rule, rule.sections["Fails"], tmp_path)
    findings = OTHER_FINDINGS.get(rule.id, FINDINGS)
    assert findings & {verdict.outcome for verdict in found}, [(v.outcome, v.message) for v in found]


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_the_passing_example_passes(rule: Rule, tmp_path: Path) -> None:
    found = verdicts(rule, rule.sections["Passes"], tmp_path)
    outcomes = {verdict.outcome for verdict in found}
    said = [(verdict.outcome, verdict.message) for verdict in found]
    assert Outcome.PASS in outcomes or rule.id in CAUTIONS, said
    assert not outcomes - {Outcome.PASS, Outcome.INFORMATIONAL}, said
    assert not outcomes & OTHER_FINDINGS.get(rule.id, FINDINGS), said
