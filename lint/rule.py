"""What a rule module needs to become part of a review, and no more."""

from __future__ import annotations

import inspect
import re
from collections.abc import Callable, Iterable
from dataclasses import dataclass
from importlib.metadata import entry_points
from types import ModuleType
from typing import TypeAlias

from .circuit.controllers import Controller
from .design import Design
from .deviations import Applied
from .verdict import Level, Verdict

ENTRY_POINT_GROUP = "pwmlint.rules"

SECTIONS = ("What", "Why", "Formula", "Source", "Remedy")

# Two netlists of a few lines each end a rule's docstring: one it speaks of, one it lets pass.
EXAMPLES = ("Fails", "Passes")

_HEADING = re.compile(rf"^({'|'.join((*SECTIONS, *EXAMPLES))}):", re.MULTILINE)

ControllerQuestion: TypeAlias = Callable[[Controller, Design], Iterable[Verdict]]
NetlistQuestion: TypeAlias = Callable[[Design], Iterable[Verdict]]
DeviationQuestion: TypeAlias = Callable[[Applied], Iterable[Verdict]]

_ID = re.compile(r"[a-z0-9]+(?:-[a-z0-9]+)*\.[a-z0-9]+(?:-[a-z0-9]+)*")


@dataclass(frozen=True, slots=True)
class Rule:
    """One question a reviewer asks.

    id:    `topic.question`, never reused
    level: what a failed verdict counts as, unless the verdict itself says otherwise
    topic: the heading it stands under in a report
    needs: inputs without which the question cannot be asked, in the words of `Design.missing`
    of_controller, of_netlist, of_deviations: the question as a function, one of the three: of every
           controller, once of the whole netlist, or of a file of deviations when all else is asked
    """

    id: str
    level: Level
    topic: str
    needs: tuple[str, ...]
    of_controller: ControllerQuestion | None
    of_netlist: NetlistQuestion | None
    of_deviations: DeviationQuestion | None = None

    @property
    def function(self) -> ControllerQuestion | NetlistQuestion | DeviationQuestion:
        """Return the rule's function."""
        function = self.of_controller or self.of_netlist or self.of_deviations
        assert function is not None
        return function

    @property
    def question(self) -> str:
        """Return the first line of the docstring: the question itself."""
        return (inspect.getdoc(self.function) or "").partition("\n")[0]

    @property
    def sections(self) -> dict[str, str]:
        """Return the docstring's sections and examples by name, in the order in which they are written."""
        pieces = _HEADING.split(inspect.getdoc(self.function) or "")[1:]
        return {name: inspect.cleandoc(body) for name, body in zip(pieces[::2], pieces[1::2], strict=True)}


def rule(
    id: str,  # noqa: A002 - the field's word for it, here and in SARIF
    *,
    level: str,
    topic: str,
    needs: tuple[str, ...] = (),
) -> Callable[[ControllerQuestion], Rule]:
    """Make a rule of a function of a controller and the design: it is asked once a controller."""

    def make(function: ControllerQuestion) -> Rule:
        return Rule(_checked(id), Level(level), topic, needs, function, None)

    return make


def netlist_rule(
    id: str,  # noqa: A002 - as above
    *,
    level: str,
    topic: str,
) -> Callable[[NetlistQuestion], Rule]:
    """Make a rule of a function of the design: it is asked once a netlist."""

    def make(function: NetlistQuestion) -> Rule:
        return Rule(_checked(id), Level(level), topic, (), None, function)

    return make


def deviation_rule(
    id: str,  # noqa: A002 - as above
    *,
    level: str,
) -> Callable[[DeviationQuestion], Rule]:
    """Make a rule of a function of what became of the deviations: it is asked last, where there are any."""

    def make(function: DeviationQuestion) -> Rule:
        return Rule(_checked(id), Level(level), "deviations", (), None, None, function)

    return make


def rules_in(module: ModuleType) -> tuple[Rule, ...]:
    """Return the rules of a module in the order in which they are written."""
    return tuple(value for value in vars(module).values() if isinstance(value, Rule))


def load_rules() -> tuple[Rule, ...]:
    """Return every rule of every module that the entry-point group names, sorted by module, then as written.

    Raises ValueError where two rules share an id.
    """
    found: dict[str, Rule] = {}
    for entry in sorted(entry_points(group=ENTRY_POINT_GROUP), key=lambda entry: entry.name):
        for one in rules_in(entry.load()):
            if found.setdefault(one.id, one) is not one:
                raise ValueError(f"two rules are called {one.id}")
    return tuple(found.values())


def _checked(identity: str) -> str:
    if not _ID.fullmatch(identity):
        raise ValueError(f"a rule's id reads topic.question in lower case, not {identity!r}")
    return identity
