"""The two small netlists in every rule's docstring do what they say.

An example is a SPICE-style list without its title line. Unless it has a U1 of its own, U1 is a 494 with each
pin on a net of the pin's name (ground on 0), and whatever an example leaves out stays open. A line such as
`[rails.VOUT] voltage = "12 V"; tolerance = "2 %"` belongs to the brief.
"""

from __future__ import annotations

import pytest
from pwmlint.grammar import read_bytes
from pwmlint.lint import Outcome, Verdict, read_brief, review_netlist
from pwmlint.lint.controllers import generic_number
from pwmlint.lint.rule import EXAMPLES, Rule, load_rules

CONTROLLER = "U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 E1 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494"

RULES = load_rules()


def verdicts(rule: Rule, example: str, tmp_path_factory: pytest.TempPathFactory) -> list[Verdict]:
    lines = example.splitlines()
    told = [line for line in lines if line.startswith("[")]
    parts = [line for line in lines if not line.startswith("[")]
    if not any(line.startswith("U1 ") for line in parts):
        parts.insert(0, CONTROLLER)
    text = "\n".join(["example", *parts, ".end", ""])
    netlist = read_bytes(text.encode(), "example.cir", keep=lambda name: generic_number(name) is not None)
    brief = None
    if told:
        path = tmp_path_factory.mktemp("example") / "example.brief.toml"
        path.write_text("\n".join(map(as_toml, told)), encoding="utf-8")
        brief = read_brief(path)
    return list(review_netlist(netlist, brief, rules=[rule]).verdicts)


def as_toml(line: str) -> str:
    """Return `[table] key = "value"; key = "value"` as TOML."""
    table, _, keys = line.partition("] ")
    return "\n".join([f"{table}]", *keys.split("; ")])


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_every_rule_has_an_example_that_fails_and_one_that_passes(rule: Rule) -> None:
    assert [name for name in rule.sections if name in EXAMPLES] == list(EXAMPLES)


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_the_failing_example_is_spoken_of(rule: Rule, tmp_path_factory: pytest.TempPathFactory) -> None:
    outcomes = [v.outcome for v in verdicts(rule, rule.sections["Fails"], tmp_path_factory)]
    assert {Outcome.FAIL, Outcome.REVIEW} & set(outcomes), outcomes


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)
def test_the_passing_example_passes(rule: Rule, tmp_path_factory: pytest.TempPathFactory) -> None:
    found = verdicts(rule, rule.sections["Passes"], tmp_path_factory)
    outcomes = [verdict.outcome for verdict in found]
    assert Outcome.PASS in outcomes, [(v.outcome, v.message) for v in found]
    assert not {Outcome.FAIL, Outcome.REVIEW, Outcome.OPEN} & set(outcomes), outcomes
