"""From the scopes of a SPICE-style list to one flat netlist with readable paths."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Sequence

from .errors import NetlistError
from .netlist import Netlist, Part
from .property_names import leaves_out
from .spice_blocks import Body, Definition, Item
from .spice_element import Element
from .spice_elements import read_element
from .spice_evaluate import evaluated, given_parameters
from .spice_files import COST_OF_ITEM, Files
from .spice_lines import Line
from .spice_names import recovered, sheet_name
from .spice_nets import Level, Nets
from .spice_parameters import Written
from .spice_pins import ListedPins
from .spice_problems import Run
from .spice_scope import Scope

DEEPEST = 50
"""Levels of subcircuits in subcircuits."""

MOST_DUPLICATES = 1000

_VALUED = frozenset("RCL")

# Bytes, measured and rounded up, that a part without pins, a net and an empty instance take.
_COST_OF_PART = 500
_COST_OF_NET = 600
_COST_OF_INSTANCE = 1500


class Expansion:
    """Fills a netlist from the scopes, level by level.

    keep: tells of a model's name whether its instances stay parts
    """

    def __init__(self, netlist: Netlist, files: Files, run: Run, keep: Callable[[str], bool]) -> None:
        self._netlist = netlist
        self._files = files
        self._run = run
        self._keep = keep
        self._elements: dict[Body, list[Element]] = {}
        self._nets = Nets(netlist, run.notes)
        self._references: set[str] = set()
        self._copies: Counter[str] = Counter()
        self._duplicates = 0
        self._missing: set[str] = set()

    def expand(self, level: Level, items: list[Item]) -> None:
        """Add the parts of one level and of everything below it."""
        bodies = level.scope.bodies(items)
        elements = [element for body in bodies for element in self._read(body)]
        level.names, clashes = recovered([element.reference for element in elements])
        instances: dict[int, tuple[Definition, Scope]] = {}
        for index, element in enumerate(elements):
            if element.letter == "X" and not self._keep(element.model):
                found = self._definition(level, element)
                if found is not None:
                    instances[index] = found
                    level.sheets[element.reference.casefold()] = element
        for index, element in enumerate(elements):
            if element.reference in clashes:
                self._note_clash(element, clashes[element.reference])
            if index in instances:
                self._instance(level, element, *instances[index])
            else:
                self._part(level, element)

    def _read(self, body: Body) -> list[Element]:
        """Return the elements of a run of lines, read once however often it is instantiated."""
        elements = self._elements.get(body)
        if elements is None:
            elements = self._elements[body] = []
            known = self._files.known
            for line in body.source.lines(body.start, body.end):
                try:
                    elements.append(read_element(line, known))
                except NetlistError as error:
                    self._run.problems.add(error)
        return elements

    def _note_clash(self, element: Element, wanted: str) -> None:
        self._run.notes.add(
            "assumption",
            f"{element.reference} keeps its name: {wanted} is another part's",
            element.place,
            element.reference,
        )

    # Instances of subcircuits

    def _definition(self, level: Level, element: Element) -> tuple[Definition, Scope] | None:
        """Return the definition that the element is an instance of, where one is at hand and fits."""
        found = level.scope.find(element.model.casefold())
        if found is None:
            if element.model.casefold() not in self._missing:
                self._missing.add(element.model.casefold())
                message = f"the subcircuit {element.model} is in no file read: its instances stay parts"
                self._run.notes.add("missing-library", message, element.place, element.model)
            return None
        return found if self._fits(element, found[0]) else None

    def _fits(self, element: Element, definition: Definition) -> bool:
        least = len(definition.formals)
        if least <= len(element.nodes) <= least + len(definition.optional):
            return True
        message = (
            f"{element.reference} has {len(element.nodes)} nodes, the subcircuit {definition.name} {least}"
        )
        self._run.notes.add("pin-mismatch", f"{message}: it stays a part", element.place, element.reference)
        return False

    def _instance(self, level: Level, element: Element, definition: Definition, outer: Scope) -> None:
        """Expand one instance: a level of its own, its formal nodes connected."""
        if definition in level.chain or len(level.chain) >= DEEPEST:
            self._run.problems.add(_too_deep(element, definition, level.chain))
            return
        path = f"{level.path}{self._sheet_name(level, element)}/"
        line = element.line
        self._run.budget.spend(_COST_OF_INSTANCE + len(path) + 200 * len(element.nodes), line)
        self._run.budget.spend(COST_OF_ITEM * len(definition.parameters), line)
        scope = self.scope_of(definition, outer, given_parameters(element, level), line)
        formals = [*definition.formals, *(pair.key for pair in definition.optional)]
        connected = zip(formals, range(len(element.nodes)), strict=False)
        nets = {formal.casefold(): self._nets.of(level, element, at) for formal, at in connected}
        for pair in definition.optional:
            if pair.key not in nets:
                nets[pair.key] = self._nets.default(level, pair.value, element)
        self.expand(Level(scope, path, nets, (*level.chain, definition)), definition.items)

    def scope_of(
        self, definition: Definition, outer: Scope, given: dict[str, float | None], instance: Line
    ) -> Scope:
        """Return the scope of one instance, its parameters those `given` and the definition's others."""
        scope = Scope(self._run, self._files, outer, given, instance)
        for pair in definition.parameters:
            scope.parameters.define(pair.key, Written(definition.line, pair.value, pair.start))
        return scope

    def _sheet_name(self, level: Level, element: Element) -> str:
        name = level.names.get(element.reference) or sheet_name(element.reference)
        return self._unique(element, f"{level.path}{name}/")[len(level.path) : -1]

    # Parts and nets

    def _part(self, level: Level, element: Element) -> None:
        """Add one part with its nets."""
        nodes = element.nodes
        known = level.nets
        count = len(self._netlist.nets)
        nets = tuple([known.get(node) or self._nets.of(level, element, at) for at, node in enumerate(nodes)])
        if level.chain:
            new = len(self._netlist.nets) - count
            names = 8 * len(level.path) * (1 + new)
            self._run.budget.spend(
                _COST_OF_PART + 100 * len(nodes) + _COST_OF_NET * new + names, element.line
            )
        reference = element.reference
        if level.names or level.path:
            reference = level.path + level.names.get(reference, reference)
        reference = self._unique(element, reference)
        for at, net in enumerate(nets):
            net.pins.append((reference, at))
        if element.assumption:
            self._run.notes.add("assumption", f"{reference}: {element.assumption}", element.place, reference)
        pins_known, names = "positions", ()
        if element.model.casefold() in self._files.subcircuits:
            pins_known, names = self._pin_names(level, element)
        value, attributes = element.value, element.attributes
        if attributes or not value[:1].isdecimal():
            value, attributes = evaluated(element, level)
        fitted = element.fitted
        if element.letter in _VALUED and (not value[:1].isdecimal() or " " in value):
            fitted = fitted and not leaves_out(value)
        if not fitted:
            message = f"{reference} is marked as not fitted, and left out of the circuit"
            self._run.notes.add("not-fitted", message, element.place, reference)
        self._netlist.parts[reference] = Part(
            reference,
            element.letter,
            value,
            element.model,
            ListedPins(element, nets, names, numbered=pins_known == "numbers"),
            element.place,
            attributes,
            pins_known,
            fitted,
        )

    def _unique(self, element: Element, reference: str) -> str:
        """Return a reference that no part or path has: a number is added to one that is taken."""
        folded = reference.upper()
        if folded == reference:
            folded = reference  # one object for both: most references are in capitals already
        if folded not in self._references:
            self._references.add(folded)
            return reference
        self._copies[folded] += 1
        self._duplicates += 1
        if self._duplicates > MOST_DUPLICATES:
            raise element.line.error(
                0,
                f"more than {MOST_DUPLICATES} parts bear the reference of another",
                "a reference of its own for each part",
                "check that this is the list of one board",
            )
        slash = "/" if reference.endswith("/") else ""
        new = f"{reference.removesuffix('/')}#{self._copies[folded] + 1}{slash}"
        message = f"{reference} is written more than once: this one is called {new}"
        self._run.notes.add("duplicate-reference", message, element.place, reference)
        return self._unique(element, new)

    def _pin_names(self, level: Level, element: Element) -> tuple[str, Sequence[str]]:
        """Return how the pins of a part are known, and the formal nodes of its subcircuit if at hand.

        Formal nodes that are numbers are pin numbers only where they are 1 to N in whatever order; with one
        left out or beyond they may as well be the library's internal nodes.
        """
        found = level.scope.find(element.model.casefold())
        if found is None:
            return "positions", ()
        formals = found[0].formals
        if len(formals) != len(element.nodes):
            if element.letter != "X" or self._keep(element.model):
                self._fits(element, found[0])
            return "positions", ()
        if not all(formal.isdecimal() for formal in formals):
            return "names", formals
        numbers = sorted(formals, key=lambda formal: (len(formal), formal))
        whole = numbers == [str(number) for number in range(1, len(formals) + 1)]
        return ("numbers" if whole else "positions"), formals


def _too_deep(element: Element, definition: Definition, chain: Sequence[Definition]) -> NetlistError:
    if definition in chain:
        loop = [*chain[chain.index(definition) :], definition]
        message = f"the subcircuit {definition.name} contains itself"
        if len(loop) > 2:
            message += ": " + " -> ".join(inner.name for inner in loop[:12])
        return element.line.error(
            0, message, "a subcircuit that ends in parts", "remove one of the instances that form the loop"
        )
    return element.line.error(
        0,
        f"subcircuits nested deeper than {DEEPEST} levels",
        "a hierarchy of sheets",
        "give the list of the board with fewer levels",
    )
