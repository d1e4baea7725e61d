"""Parameters of one scope of a SPICE-style list, evaluated when asked for: they may refer forward."""

from __future__ import annotations

from collections.abc import Iterator
from typing import NamedTuple

from .expression import Function, evaluate, names_in
from .expression_grammar import ExpressionError
from .spice_lines import Line
from .spice_problems import Problems

_QUOTES = {"{": "}", "'": "'", '"': '"'}


class Written(NamedTuple):
    """The text of a parameter's value, and where it begins on its line."""

    line: Line
    text: str
    start: int


class Parameters:
    """The parameters that hold in one scope, and behind them those of the scope around it.

    given: values that an instance hands in, which win over the definition's; None where one has no number
    """

    def __init__(
        self,
        problems: Problems,
        outer: Parameters | None = None,
        given: dict[str, float | None] | None = None,
    ) -> None:
        self._problems = problems
        self._outer = outer
        self._given = given or {}
        self._written: dict[str, Written] = {}
        self._values = {name: value for name, value in self._given.items() if value is not None}
        self._unknown = {name for name, value in self._given.items() if value is None}
        self.functions: dict[str, Function] = outer.functions if outer else {}

    def define(self, name: str, written: Written) -> None:
        """Add a parameter; of several definitions the last holds."""
        if name not in self._given:
            self._written[name] = written
            self._values.pop(name, None)
            self._unknown.discard(name)

    def has(self, name: str) -> bool:
        """Return whether a parameter of this name is defined here or further out."""
        here = name in self._given or name in self._written
        return here or (self._outer is not None and self._outer.has(name))

    def settle_all(self) -> None:
        """Evaluate every parameter of this scope, so that each error is told even where nothing asks."""
        for name in self._written:
            self._settle(name)

    def number(self, written: Written) -> float | None:
        """Return the value of an expression, quotes or braces around it allowed.

        None where it has no number: then either an error was reported, here or for a parameter in it, or the
        expression depends on the simulated circuit.
        """
        text, shift = _bare(written.text)
        needed: dict[str, float] = {}
        unknown = False
        for name in names_in(text, self.functions):
            value = self._lookup(name)
            if value is not None:
                needed[name] = value
            elif self.has(name):
                unknown = True
        if unknown:
            return None
        try:
            return evaluate(text, needed, self.functions)
        except ExpressionError as error:
            # A text in double quotes may be any text, such as the name of a model.
            if not error.dynamic and not written.text.startswith('"'):
                index = written.start + shift + error.index
                self._problems.add(written.line.error(index, error.message, error.expected, error.remedy))
            return None

    def _lookup(self, name: str) -> float | None:
        if name in self._values:
            return self._values[name]
        if name in self._written or name in self._unknown:
            self._settle(name)
            return self._values.get(name)
        return self._outer._lookup(name) if self._outer else None

    def _settle(self, name: str) -> None:
        """Evaluate `name`, and before it whatever it needs of this scope; a long chain costs no stack."""
        path: dict[str, Iterator[str]] = {}
        waiting = [name]
        while waiting:
            current = waiting[-1]
            if current in self._values or current in self._unknown:
                waiting.pop()
                path.pop(current, None)
                continue
            if current not in path:
                path[current] = iter(sorted(self._needs(current)))
            following = next((need for need in path[current] if not self._is_settled(need)), None)
            if following is None:
                self._evaluate(current)
            elif following in path:
                self._report_cycle(following, list(path))
            else:
                waiting.append(following)

    def _needs(self, name: str) -> set[str]:
        return {need for need in names_in(self._written[name].text, self.functions) if need in self._written}

    def _is_settled(self, name: str) -> bool:
        return name in self._values or name in self._unknown

    def _evaluate(self, name: str) -> None:
        self._unknown.add(name)
        value = self.number(self._written[name])
        if value is not None:
            self._unknown.remove(name)
            self._values[name] = value

    def _report_cycle(self, name: str, path: list[str]) -> None:
        cycle = path[path.index(name) :]
        written = self._written[name]
        self._problems.add(
            written.line.error(
                written.start,
                f"the parameter {name} depends on itself: {_joined([*cycle, name])}",
                "a value that needs only other parameters",
                "give one of them a number",
            )
        )
        self._unknown.update(cycle)


def _joined(names: list[str]) -> str:
    shown = names if len(names) <= 8 else [*names[:4], "...", *names[-3:]]
    return " -> ".join(shown)


def _bare(text: str) -> tuple[str, int]:
    """Return an expression without the quotes or braces around it, and how many characters went before it."""
    stripped = text.strip()
    shift = text.find(stripped)
    if len(stripped) >= 2 and _QUOTES.get(stripped[0]) == stripped[-1]:
        return stripped[1:-1], shift + 1
    return stripped, shift
