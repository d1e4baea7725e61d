"""What makes a function a rule, and how rules are found."""

from __future__ import annotations

import sys
from collections.abc import Iterable
from importlib.metadata import EntryPoint
from types import ModuleType

import pytest
from pwmlint.lint.circuit.controllers import Controller
from pwmlint.lint.design import Design
from pwmlint.lint.rule import ENTRY_POINT_GROUP, SECTIONS, Rule, load_rules, netlist_rule, rule, rules_in
from pwmlint.lint.verdict import Level, Outcome, Verdict


@rule("bee-hive.heating", level="warning", topic="bee hive", needs=("topology",))
def heating(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the hive heated?

    What: the heater's current.
    Why: bees.

        A block that stays
        as it is.
    Formula: I = V / R
    Source: common practice, no source
    Remedy: a heater
    """
    return (Verdict(outcome=Outcome.PASS, message=f"{controller.reference} {design.netlist.file}"),)


@netlist_rule("bee-hive.scale", level="error", topic="bee hive")
def scale(design: Design) -> Iterable[Verdict]:
    """Is there a scale?"""
    return (Verdict(outcome=Outcome.PASS, message=design.netlist.file),)


def module(*rules: Rule) -> ModuleType:
    found = ModuleType("orchard_rules")
    vars(found).update({f"rule{position}": one for position, one in enumerate(rules)})
    return found


class TestRule:
    def test_of_a_controller(self):
        assert (heating.id, heating.level, heating.topic) == ("bee-hive.heating", Level.WARNING, "bee hive")
        assert heating.needs == ("topology",)
        assert heating.of_netlist is None
        assert heating.function is heating.of_controller

    def test_of_the_netlist(self):
        assert scale.of_controller is None
        assert scale.function is scale.of_netlist
        assert scale.needs == ()

    def test_its_question_is_the_first_line(self):
        assert heating.question == "Is the hive heated?"

    def test_sections_in_their_order(self):
        assert tuple(heating.sections) == SECTIONS
        assert heating.sections["Formula"] == "I = V / R"
        assert heating.sections["Why"].startswith("bees.")

    def test_no_docstring_no_sections(self):
        @netlist_rule("bee-hive.silent", level="note", topic="bee hive")
        def silent(design: Design) -> Iterable[Verdict]:
            return ()

        assert silent.question == ""
        assert silent.sections == {}

    @pytest.mark.parametrize(
        "identity", ["heating", "Bee.heating", "bee hive.x", "a.b.c", "bee.", ".x", "-a.b"]
    )
    def test_an_id_reads_topic_question(self, identity: str):
        with pytest.raises(ValueError, match=r"topic\.question"):
            netlist_rule(identity, level="note", topic="t")(lambda _: ())

    def test_an_unknown_level_is_refused(self):
        with pytest.raises(ValueError, match="severe"):
            netlist_rule("bee.x", level="severe", topic="t")(lambda _: ())


class TestFinding:
    def test_in_the_order_of_the_module(self):
        assert rules_in(module(scale, heating)) == (scale, heating)

    def test_through_the_entry_points_by_name(self, monkeypatch: pytest.MonkeyPatch):
        _install(monkeypatch, b=module(heating), a=module(scale))
        assert load_rules() == (scale, heating)

    def test_the_same_rule_twice_counts_once(self, monkeypatch: pytest.MonkeyPatch):
        _install(monkeypatch, a=module(scale), b=module(scale))
        assert load_rules() == (scale,)

    def test_two_rules_of_one_id_are_refused(self, monkeypatch: pytest.MonkeyPatch):
        twin = netlist_rule("bee-hive.scale", level="note", topic="bee hive")(lambda _: ())
        _install(monkeypatch, a=module(scale), b=module(twin))
        with pytest.raises(ValueError, match=r"two rules are called bee-hive\.scale"):
            load_rules()

    def test_the_built_in_ones_come_the_same_way(self):
        assert "dead-time.range" in [one.id for one in load_rules()]


def _install(monkeypatch: pytest.MonkeyPatch, **modules: ModuleType) -> None:
    """Put modules in the place of what is installed."""

    class Point:
        def __init__(self, name: str) -> None:
            self.name = name

        def load(self) -> ModuleType:
            return modules[self.name]

    def points(group: str) -> list[EntryPoint] | list[Point]:
        assert group == ENTRY_POINT_GROUP
        return [Point(name) for name in modules]

    # The package offers a function by the name of its module, so the module is reached by its full name.
    monkeypatch.setattr(sys.modules["pwmlint.lint.rule"], "entry_points", points)
