"""Which rules are not asked and what a failed verdict counts as, where a configuration says so."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from difflib import get_close_matches
from typing import TYPE_CHECKING

from ..grammar.netlist import Place
from .verdict import Level, Outcome, Verdict

if TYPE_CHECKING:
    from .configuration import Configuration, Setting
    from .rule import Rule

CAUTIONING = "safety.scope"
"""The rule whose verdicts are no findings but what must be said once of the whole design. Always asked."""


@dataclass(frozen=True, slots=True)
class Policy:
    """What a configuration changes about the rules, by their ids.

    levels: what every failed verdict of a rule counts as. It stands above the rule's own level, and above the
            one that a rule gives to a special case: what is written in the file holds
    off:    the rules that are not asked, and where that is written
    file:   the configuration, None where there is none
    complete: whether all rules are loaded that the configuration may speak of
    """

    levels: Mapping[str, Level] = field(default_factory=dict[str, Level])
    off: Mapping[str, Place] = field(default_factory=dict[str, Place])
    file: str | None = None
    complete: bool = True

    def judged(self, verdict: Verdict) -> Verdict:
        """Return `verdict` at the level that the configuration gives to its rule."""
        level = self.levels.get(verdict.rule) if verdict.outcome is Outcome.FAIL else None
        return replace(verdict, level=level) if level is not None else verdict


def policy_of(configuration: Configuration, rules: Sequence[Rule], *, complete: bool = True) -> Policy:
    """Return what a configuration says of `rules`; what it says of one rule stands above its topic's.

    complete: whether `rules` are all that it may speak of; else a name that is unknown here is let pass
    Raises ConfigurationError for a topic or a rule that does not exist.
    """
    if complete:
        _know(configuration, "topic", configuration.topics, sorted({one.topic for one in rules}))
        _know(configuration, "rule", configuration.levels, sorted(one.id for one in rules))
    _keep_cautions(configuration)
    configuration.document.finish()
    levels: dict[str, Level] = {}
    off: dict[str, Place] = {}
    for one in rules:
        setting = configuration.levels.get(one.id) or configuration.topics.get(one.topic)
        if setting is None:
            continue
        if setting.value in tuple(Level):
            levels[one.id] = Level(setting.value)
        elif one.id != CAUTIONING:
            off[one.id] = setting.place or Place(configuration.file, 0, 0)
    return Policy(levels, off, configuration.file, complete)


def _know(
    configuration: Configuration, kind: str, told: Mapping[str, Setting[str]], known: Sequence[str]
) -> None:
    """Note a mistake for each name that is none of `known`."""
    document = configuration.document
    for name, setting in told.items():
        if name in known or setting.place is None or document.has_enough:
            continue
        near = get_close_matches(name.casefold(), known, n=1)
        document.mistake(
            f'there is no {kind} "{name}"',
            setting.place._replace(column=1),
            expected=f"a {kind} that `pwmlint rules` lists",
            remedy=f'did you mean "{near[0]}"?' if near else "remove it",
        )


def _keep_cautions(configuration: Configuration) -> None:
    """Note a mistake where the cautions would be switched off by name."""
    setting = configuration.levels.get(CAUTIONING)
    if setting is not None and setting.place is not None and setting.value not in tuple(Level):
        remedy = "remove it; what it says cautions the reader and stops no gate"
        configuration.document.mistake(f"{CAUTIONING} cannot be switched off", setting.place, remedy=remedy)
