"""Everything that can be set for a review, and where each value comes from.

The command line stands above `pwmlint.toml`, and that above what is found beside the netlist or holds by
default. What belongs to a netlist is settled for each apart; a run has its reports once (`shared_reports`).
"""

from __future__ import annotations

import os
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TypeVar

from ..grammar.errors import NetlistError
from .configuration import Configuration, ConfigurationError, Setting, read_configuration
from .configuration_search import find_configuration
from .estimate import Method
from .found_files import BRIEF, DEVIATIONS, PARTS_LIST, beside
from .house_rules import load_folder
from .policy import Policy, policy_of
from .report import NEVER, Gate
from .report.delivery import STANDARD_OUTPUT, Target
from .rule import Rule, load_rules
from .verdict import Level, Review

COMMAND_LINE, DEFAULT, BESIDE, FOUND = "command line", "default", "beside the netlist", "found by itself"

_Value = TypeVar("_Value")


@dataclass(frozen=True, slots=True, kw_only=True)
class Given:
    """What the command line says; None where it says nothing.

    config, no_config: the configuration to take, or that none is to be
    trust_config:      the house rules that the configuration names may be loaded
    """

    gate: str | None = None
    strict: bool | None = None
    worst_case: str | None = None
    brief: str | None = None
    parts_list: str | None = None
    deviations: str | None = None
    allow_include: tuple[Path, ...] | None = None
    rules: str | None = None
    reports: tuple[Target, ...] | None = None
    config: str | None = None
    no_config: bool = False
    trust_config: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Settings:
    """What holds for one netlist.

    configuration: the file that was taken, None where there is none
    rules:         the folder of house rules
    asked:         the rules that are loaded: the installed ones, and those of the folder where it is trusted
    policy:        which rules are off and at which level others count
    topics, levels: the words that the configuration has for topics, and for rules
    untrusted:     what to tell the user where house rules that the configuration names are not loaded
    """

    configuration: Setting[str | None]
    gate: Setting[str]
    strict: Setting[bool]
    worst_case: Setting[str]
    brief: Setting[str | Path | None]
    parts_list: Setting[str | Path | None]
    deviations: Setting[str | Path | None]
    allow_include: Setting[tuple[Path, ...]]
    rules: Setting[str | Path | None]
    reports: Setting[tuple[Target, ...]]
    asked: tuple[Rule, ...]
    policy: Policy
    topics: Mapping[str, Setting[str]]
    levels: Mapping[str, Setting[str]]
    untrusted: ConfigurationError | None = None

    @property
    def method(self) -> Method:
        """Return the worst-case analysis that decides."""
        return Method(self.worst_case.value)

    @property
    def own_gate(self) -> Gate:
        """Return the gate of this netlist."""
        word = self.gate.value
        return Gate(None if word == NEVER else Level(word), self.strict.value)

    @property
    def inputs(self) -> tuple[str, ...]:
        """Return the files besides the netlist that are read."""
        paths = (self.configuration.value, self.brief.value, self.parts_list.value, self.deviations.value)
        return tuple(str(path) for path in paths if path)


@dataclass(frozen=True, slots=True)
class _Told:
    """What a configuration says to every netlist below it, with the rules that it is held against."""

    configuration: Configuration | None
    folder: Setting[str | Path | None]
    asked: tuple[Rule, ...]
    policy: Policy
    untrusted: ConfigurationError | None


class Settler:
    """Settles what holds for each netlist of a run; each configuration and folder of rules is read once."""

    def __init__(self, given: Given) -> None:
        self._given = given
        self._told: dict[Path | None, _Told | NetlistError] = {}
        self._rules: dict[str | Path | None, tuple[Rule, ...]] = {}

    def settle(self, netlist: str | Path) -> Settings:
        """Return what holds for a netlist, or for one that would lie in the folder given.

        Raises ConfigurationError or HouseRuleError: the same object for each netlist that it concerns.
        """
        given = self._given
        found, source = self._found(netlist)
        told = self._read_once(found)
        file = told.configuration
        return Settings(
            configuration=Setting(file.file if file else None, source),
            gate=_chosen(given.gate, file and file.gate, Level.ERROR.value),
            strict=_chosen(given.strict, file and file.strict, default=False),
            worst_case=_chosen(given.worst_case, file and file.worst_case, Method.EXTREME.value),
            brief=_input(given.brief, file and file.brief, netlist, BRIEF),
            parts_list=_input(given.parts_list, file and file.parts_list, netlist, PARTS_LIST),
            deviations=_input(given.deviations, file and file.deviations, netlist, DEVIATIONS),
            allow_include=_chosen(given.allow_include, file and file.allow_include, ()),
            rules=told.folder,
            reports=_chosen(given.reports, file and file.reports, (Target(),)),
            asked=told.asked,
            policy=told.policy,
            topics=file.topics if file else {},
            levels=file.levels if file else {},
            untrusted=told.untrusted,
        )

    def _found(self, netlist: str | Path) -> tuple[Path | None, str]:
        """Return the configuration of a netlist, and who named it."""
        if self._given.config is not None:
            return Path(self._given.config), COMMAND_LINE
        if self._given.no_config:
            return None, COMMAND_LINE
        found = find_configuration(netlist)
        return found, DEFAULT if found is None else FOUND

    def _read_once(self, path: Path | None) -> _Told:
        if path not in self._told:
            try:
                self._told[path] = self._read(path)
            except NetlistError as error:
                self._told[path] = error
        told = self._told[path]
        if isinstance(told, NetlistError):
            raise told
        return told

    def _read(self, path: Path | None) -> _Told:
        configuration = read_configuration(path) if path is not None else None
        folder = _chosen(self._given.rules, configuration and configuration.rules, None)
        loaded = folder.place is None or self._given.trust_config
        asked = self._all_rules(folder.value if loaded else None)
        named = configuration.rules if configuration else None
        complete = named is None or (loaded and folder == named)
        policy = policy_of(configuration, asked, complete=complete) if configuration else Policy()
        return _Told(configuration, folder, asked, policy, None if loaded else _untrusted(folder))

    def _all_rules(self, folder: str | Path | None) -> tuple[Rule, ...]:
        if folder not in self._rules:
            installed = load_rules()
            self._rules[folder] = (*installed, *(load_folder(folder, installed) if folder else ()))
        return self._rules[folder]


def shared_reports(settled: Sequence[Settings]) -> Setting[tuple[Target, ...]]:
    """Return the reports of a run: its netlists must not ask for different ones. `settled` is not empty."""
    first = settled[0].reports
    for other in settled[1:]:
        if other.reports.value != first.value:
            place = other.reports.place or first.place
            assert place is not None
            raise ConfigurationError(
                f"the netlists ask for different reports: {first.source} and {other.reports.source}",
                place,
                expected="one list of reports for all netlists",
                remedy="give --format and --output on the command line, or review the netlists apart",
            )
    return first


def gate_of(reviewed: Sequence[tuple[Review, Settings]]) -> Gate:
    """Return the gate of a run, which may hold each netlist to one of its own."""
    gates = {review.netlist: settings.own_gate for review, settings in reviewed}
    if len(set(gates.values())) == 1:
        return next(iter(gates.values()))
    return Gate(own=gates)


def overwritten(targets: Iterable[Target], inputs: Iterable[str]) -> str | None:
    """Return the output that is one of the files that are read, None where no report would destroy one."""
    read = list(inputs)
    for output in (target.output for target in targets if target.output != STANDARD_OUTPUT):
        if any(_same_file(output, path) for path in read):
            return output
    return None


def _same_file(one: str, other: str) -> bool:
    """Tell whether two paths lead to one file; what does not exist yet is no other's file."""
    return os.path.exists(one) and os.path.exists(other) and os.path.samefile(one, other)


def _chosen(given: _Value | None, told: Setting[_Value] | None, default: _Value) -> Setting[_Value]:
    if given is not None:
        return Setting(given, COMMAND_LINE)
    return told or Setting(default, DEFAULT)


def _input(
    given: str | None, told: Setting[Path] | None, netlist: str | Path, ending: str
) -> Setting[str | Path | None]:
    """Return a file that is read besides the netlist: as given, as told, or where it is found by itself."""
    if given is None and told is None:
        found = beside(netlist, ending)
        return Setting(found, BESIDE if found is not None else DEFAULT)
    return _chosen(given, told, None)


def _untrusted(folder: Setting[str | Path | None]) -> ConfigurationError:
    """Return what to tell of house rules that are named in a file and not loaded."""
    assert folder.place is not None
    return ConfigurationError(
        f"the house rules in {folder.value} are not loaded: they are programs, and this file cannot vouch "
        "for them",
        folder.place,
        remedy=f"give --trust-config where you do, or --rules {folder.value}",
    )
