from __future__ import annotations

from collections.abc import Iterable
from io import BytesIO, TextIOWrapper

from pwmlint.lint.circuit.controllers import Controller
from pwmlint.lint.controllers import families, load
from pwmlint.lint.design import Design
from pwmlint.lint.report.glyphs import shown
from pwmlint.lint.report.reference import describe_family, describe_rule, list_families, list_rules
from pwmlint.lint.rule import rule
from pwmlint.lint.verdict import Verdict


@rule("pump.prime", level="warning", topic="pump", needs=("topology",))
def primed(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the irrigation pump primed?

    What: looks at the float.
    Why: a dry pump wears out.
    Formula: h = p / (rho g)
        with h in metres
    Source: common practice, no source
    Remedy: prime it.
    """
    del controller, design
    return ()


@rule("mast.guyed", level="error", topic="mast")
def guyed(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the weather mast guyed?

    What: counts the guys.
    """
    del controller, design
    return ()


def test_rules_are_listed_by_topic() -> None:
    listed = list_rules([primed, guyed])
    order = [
        listed.index(text) for text in ("mast\n", "mast.guyed", "pump\n", "pump.prime", "pwmlint rules ID")
    ]
    assert order == sorted(order)
    assert "    Is the irrigation pump primed?" in listed


def test_a_rule_is_told_whole() -> None:
    assert describe_rule(primed) == (
        "pump.prime   warning, topic: pump\n"
        "\n"
        "Is the irrigation pump primed?\n"
        "\n"
        "Needs from the brief: topology\n"
        "\n"
        "What\n  looks at the float.\n"
        "\n"
        "Why\n  a dry pump wears out.\n"
        "\n"
        "Formula\n  h = p / (rho g)\n  with h in metres\n"
        "\n"
        "Source\n  common practice, no source\n"
        "\n"
        "Remedy\n  prime it."
    )
    assert "Needs" not in describe_rule(guyed)


def test_families_are_listed() -> None:
    listed = list_families(load(family) for family in families())
    assert all(line in listed for line in families())


def test_a_family_is_told_with_every_source() -> None:
    for family in families():
        profile = load(family)
        told = " ".join(describe_family(profile).split())
        for pin in profile.pins:
            assert f"{pin.number} {pin.name} {pin.role}" in told
        for name, figure in {**profile.figures, **profile.practices}.items():
            assert f"{name}: " in told
            assert " ".join(f"source: {figure.source}".split()) in told


def test_no_line_is_wider_than_eighty() -> None:
    for family in families():
        assert max(len(line) for line in describe_family(load(family)).splitlines()) <= 80


def test_shown_in_what_the_stream_can_carry() -> None:
    assert shown("4.7 kΩ", TextIOWrapper(BytesIO(), encoding="ascii")) == "4.7 kohm\n"
    assert shown("4.7 kΩ", TextIOWrapper(BytesIO(), encoding="utf-8")) == "4.7 kΩ\n"
