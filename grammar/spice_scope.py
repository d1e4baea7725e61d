"""One scope of a SPICE-style list: the deck itself, or the inside of one instance of a subcircuit."""

from __future__ import annotations

import re
from collections.abc import Iterator

from .errors import NetlistError
from .expression import Function
from .netlist import Place
from .spice_blocks import Body, Branch, Card, Conditional, Definition, Item
from .spice_files import COST_OF_ITEM, Files
from .spice_lines import Line, indent
from .spice_parameters import Parameters, Written
from .spice_problems import Run
from .spice_words import split

# Cards that steer a simulation and say nothing of the circuit; every other card that is skipped is noted.
_ANALYSES = frozenset(
    (
        *("ac", "dc", "disto", "four", "fourier", "hb", "mc", "noise", "op", "pss", "pz", "sens", "sp", "tf"),
        *("autostop", "distribution", "meas", "measure", "plot", "print", "probe", "save", "text", "tran"),
        *("backanno", "csparam", "ic", "nodeset", "opt", "option", "options", "preprocess", "temp", "wave"),
        *("prot", "protect", "unprot", "unprotect", "wcase", "width"),
    )
)
_FUNCTION = re.compile(r"\s*\.\w+\s+([^\W\d]\w*)\s*\(([^()]*)\)\s*=?\s*")
_LIKE_FUNCTION = re.compile(r"\s*\.\w+\s+[^\W\d]\w*\s*\([^()]*\)\s*=", re.IGNORECASE)


class Scope:
    """What is defined at one level, and what the level around it defines.

    definitions: subcircuits by casefolded name
    parameters:  those of this scope
    globals:     net names, casefolded, that mean the same at every level; shared by all scopes
    aliases:     casefolded net name to the one it is connected to by `.connect`
    instance:    the line that brings the scope in, None for the deck
    title:       text of a `.title` card, None where there is none
    """

    def __init__(
        self,
        run: Run,
        files: Files,
        outer: Scope | None = None,
        given: dict[str, float | None] | None = None,
        instance: Line | None = None,
    ) -> None:
        self._run = run
        self._files = files
        self._outer = outer
        self._instance = instance
        self.definitions: dict[str, Definition] = {}
        self.parameters = Parameters(run.problems, outer.parameters if outer else None, given)
        self.globals: set[str] = outer.globals if outer else set()
        self.aliases: dict[str, str] = {}
        self.title: str | None = None

    def find(self, name: str) -> tuple[Definition, Scope] | None:
        """Return the subcircuit of a casefolded name and the scope that defines it."""
        scope: Scope | None = self
        while scope is not None:
            if name in scope.definitions:
                return scope.definitions[name], scope
            scope = scope._outer
        return None

    def bodies(self, items: list[Item]) -> list[Body]:
        """Take in every card and definition of `items`, and return its runs of element lines in order.

        Inclusions are followed. Conditions are decided when all unconditional parameters are known, so a
        condition may ask for a parameter that is written later.
        """
        found: list[Body] = []
        waiting = [iter(self._gathered(items))]
        while waiting:
            item = next(waiting[-1], None)
            if item is None:
                waiting.pop()
            elif isinstance(item, Body):
                found.append(item)
            else:
                waiting.append(iter(self._gathered(self._chosen(item.branches))))
        self.parameters.settle_all()
        return found

    def _chosen(self, branches: list[Branch]) -> list[Item]:
        """Return the items of the first branch whose condition is not zero."""
        for branch in branches:
            condition = branch.condition.strip()
            if not condition:
                return branch.items
            index = branch.line.text.index(condition)
            if self.parameters.number(Written(branch.line, branch.condition.strip(), index)):
                return branch.items
        return []

    def _gathered(self, items: list[Item]) -> list[Body | Conditional]:
        """Take in cards and definitions; return what holds or may hold element lines."""
        found: list[Body | Conditional] = []
        opened: dict[str, Iterator[Item]] = {"": iter(items)}
        while opened:
            key = next(reversed(opened))
            item = next(opened[key], None)
            if item is None:
                del opened[key]
                continue
            self._spend()
            if isinstance(item, (Body, Conditional)):
                found.append(item)
            elif isinstance(item, Definition):
                self._define(item)
            elif isinstance(item, Card):
                if item.keyword in ("include", "inc", "incl", "lib"):
                    inclusion = self._files.include(item, opened)
                    if inclusion is not None:
                        opened[inclusion.key] = iter(inclusion.items)
                else:
                    self._try_to_take(item)
            else:
                self._note_skipped(item.line.place(0), f".lib {item.name}", "a section that nothing includes")
        return found

    def _spend(self) -> None:
        """Count an item that an instance takes in; the deck's own are bounded by its length."""
        if self._instance is not None:
            self._run.budget.spend(COST_OF_ITEM, self._instance)

    def _define(self, definition: Definition) -> None:
        name = definition.name.casefold()
        if name in self.definitions and self.definitions[name] is not definition:
            self._run.notes.add(
                "assumption",
                f"the subcircuit {definition.name} is defined twice: the first definition holds",
                definition.line.place(0),
                definition.name,
            )
        self.definitions.setdefault(name, definition)

    def _try_to_take(self, card: Card) -> None:
        try:
            self._take(card)
        except NetlistError as error:
            self._run.problems.add(error)

    def _take(self, card: Card) -> None:
        line = card.line
        match card.keyword:
            case "param" | "params" | "parameter":
                self._parameters(card)
            case "func" | "function":
                self._function(card)
            case "step":
                self._step(card)
            case "global":
                self.globals.update(word.casefold() for word in split(line).texts[1:])
            case "connect":
                self._connect(split(line).texts[1:])
            case "title":
                self.title = " ".join(line.text.split()[1:])
            case "model" | "end":
                pass  # a model was taken in with its file
            case "alter":
                self._note_skipped(line.place(0), ".alter", "a second list, with what follows it")
            case keyword if keyword not in _ANALYSES:
                self._note_skipped(line.place(0), f".{keyword}", "a card without meaning for a netlist")
            case _:
                pass

    def _parameters(self, card: Card) -> None:
        if _LIKE_FUNCTION.match(card.line.text):
            self._function(card)
            return
        for pair in split(card.line).assignments:
            self.parameters.define(pair.key, Written(card.line, pair.value, pair.start))

    def _function(self, card: Card) -> None:
        text = card.line.text
        match = _FUNCTION.match(text)
        body = text[match.end() :].strip() if match else ""
        if match is None or not body:
            self._run.problems.add(
                card.line.error(
                    indent(card.line),
                    "a function without arguments or without a body",
                    "`.func name(x, y) {expression}`",
                    "complete the card, or remove it",
                )
            )
            return
        arguments = tuple(word.strip().casefold() for word in match[2].split(",") if word.strip())
        self.parameters.functions[match[1].casefold()] = Function(arguments, body.strip("{}'\" "))

    def _step(self, card: Card) -> None:
        """Take the first value of a stepped parameter, unless it has a value of its own."""
        words = [
            word
            for word in split(card.line).texts[1:]
            if word.casefold() not in ("param", "dec", "oct", "lin")
        ]
        numbers = [word for word in words[1:] if word.casefold() != "list"]
        if not numbers or self.parameters.has(words[0].casefold()):
            return
        index = card.line.text.find(numbers[0])
        self.parameters.define(words[0].casefold(), Written(card.line, numbers[0], index))
        message = f"{words[0]} is stepped: its first value, {numbers[0]}, is taken"
        self._run.notes.add("assumption", message, card.line.place(index), words[0])

    def _connect(self, names: list[str]) -> None:
        roots = [self.root(name.casefold()) for name in names]
        for other in roots[1:]:
            if other != roots[0]:
                self.aliases[other] = roots[0]

    def root(self, name: str) -> str:
        """Return the casefolded net name that stands for `name` after all `.connect` cards."""
        while name in self.aliases:
            above = self.aliases[name]
            self.aliases[name] = self.aliases.get(above, above)  # halves the path for the next to ask
            name = above
        return name

    def _note_skipped(self, place: Place, subject: str, why: str) -> None:
        self._run.notes.add("skipped", f"{subject} is skipped: {why}", place, subject)
