"""The reference on the command line: rules from their docstrings, controller families from their data."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from itertools import groupby
from textwrap import fill, indent

from ..controllers import Figure, Profile
from ..quantity import engineering
from ..rule import EXAMPLES, Rule

_WIDTH = 80


def list_rules(rules: Sequence[Rule]) -> str:
    """Return every rule by topic: its id, its level and its question."""
    lines: list[str] = []
    for topic, group in groupby(sorted(rules, key=lambda one: one.topic), key=lambda one: one.topic):
        lines.append(topic)
        for one in group:
            lines.append(f"  {one.id:<40} {one.level}")
            lines.append(_paragraph(one.question, 4))
        lines.append("")
    lines.append("`pwmlint rules ID` tells what a rule computes, from which source, and the remedy.")
    return "\n".join(lines)


def describe_rule(one: Rule) -> str:
    """Return everything that is written of one rule."""
    lines = [f"{one.id}   {one.level}, topic: {one.topic}", "", _paragraph(one.question, 0)]
    if one.needs:
        lines += ["", "Needs from the brief: " + ", ".join(one.needs)]
    for name, text in one.sections.items():
        lines += ["", name, indent(text, "  ")]
    if set(EXAMPLES) & set(one.sections):
        lines += ["", "In the examples U1 is a 494 with each pin on a net of the pin's name, unless written."]
    return "\n".join(lines)


def list_families(profiles: Iterable[Profile]) -> str:
    """Return the controller families that have a profile."""
    lines = [f"{profile.family:<8} {profile.title}" for profile in profiles]
    return "\n".join(
        [*lines, "", "`pwmlint controllers FAMILY` lists its pins and figures with their sources."]
    )


def describe_family(profile: Profile) -> str:
    """Return the pins and every figure of one family, with its source."""
    lines = [
        f"{profile.family} class: {profile.title}",
        f"generic numbers: {', '.join(profile.generic_numbers)}; {profile.package_pins} pins",
        "",
        "pins",
    ]
    for pin in profile.pins:
        lines.append(f"  {pin.number:>3}  {pin.name:<12} {pin.role}")
        lines.append(_paragraph(pin.advice, 7))
    lines += ["", "figures"]
    for name, figure in profile.figures.items():
        lines += _figure(name, figure)
    lines += ["", "dead time over the voltage at the dead-time pin, as a share of the period"]
    for model in profile.dead_time_models:
        lines.append(f"  {model.name}: {model.at_zero:g} {model.per_volt:+g} / V")
        lines.append(_paragraph(f"source: {model.source}", 4))
    lines += ["", "rules of thumb"]
    for name, figure in profile.practices.items():
        lines += _figure(name, figure)
    return "\n".join(lines)


def _figure(name: str, figure: Figure) -> list[str]:
    named = (("minimum", figure.minimum), ("typical", figure.typical), ("maximum", figure.maximum))
    values = ", ".join(
        f"{word} {engineering(value, figure.unit)}" for word, value in named if value is not None
    )
    lines = [f"  {name}: {values}"]
    if figure.conditions:
        lines.append(_paragraph(figure.conditions, 4))
    return [*lines, _paragraph(f"source: {figure.source}", 4)]


def _paragraph(text: str, margin: int) -> str:
    return fill(text, _WIDTH, initial_indent=" " * margin, subsequent_indent=" " * margin)
