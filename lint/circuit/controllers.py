"""Finds the controllers of a netlist and tells which of their pins does what.

A library is free in the order, the names and the numbers of a part's pins. So the pins are mapped by the
best that is known of them: the brief's own list, the names, the package's numbers, and only then the
position in the node list. Whatever had to be guessed is an assumption that the report prints.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from types import MappingProxyType

from ...grammar.netlist import Netlist, Part, Place
from ..controllers import Profile, generic_number, load, plain_name
from ..toml_text import toml_key

# A part with fewer pins (a resistor of value 494) is no controller, whatever its name.
_LEAST_PINS = 8

_NO_PINS: Mapping[str, tuple[str, ...]] = MappingProxyType({})

# How a brief says that a node of the part is none of the controller's pins.
_NOT_A_PIN = frozenset({"", "-", "nc"})


@dataclass(frozen=True, slots=True)
class ControllerPin:
    """One pin of a controller on the board.

    name, number: as the data sheet and the package have them
    net:          the net's name, empty for a pin left unconnected
    index:        position in `Part.pins`, counted from 0
    """

    role: str
    name: str
    number: str
    net: str
    place: Place
    index: int


@dataclass(frozen=True, slots=True)
class Controller:
    """A controller of the board.

    pins:        role to pin, only those that could be mapped
    unmapped:    the roles without a pin, in the order of the package
    assumptions: what was taken for granted while mapping, each a sentence
    problem:     empty, or why pins could not be mapped, with the lines to add to the brief
    """

    part: Part
    profile: Profile
    generic_number: str
    pins: Mapping[str, ControllerPin]
    unmapped: tuple[str, ...]
    assumptions: tuple[str, ...]
    problem: str

    @property
    def reference(self) -> str:
        """Return the part's reference designator."""
        return self.part.reference

    def pin(self, role: str) -> ControllerPin | None:
        """Return the pin with this role, None where it could not be mapped."""
        return self.pins.get(role)

    def net(self, role: str) -> str | None:
        """Return the net on the pin with this role: empty when it hangs open, None when it is not mapped."""
        pin = self.pins.get(role)
        return None if pin is None else pin.net

    def role_of(self, index: int) -> str | None:
        """Return the role of the pin at this position in `Part.pins`, None where it has none."""
        return next((pin.role for pin in self.pins.values() if pin.index == index), None)


@dataclass(frozen=True, slots=True)
class _Reading:
    """One way to read the pins of a part: a role for each, None where it tells nothing."""

    roles: tuple[str | None, ...]
    assumptions: tuple[str, ...] = ()

    @property
    def tells(self) -> bool:
        """Tell whether any pin got a role."""
        return any(role is not None for role in self.roles)


def find_controllers(
    netlist: Netlist, pins_by_reference: Mapping[str, tuple[str, ...]] = _NO_PINS
) -> tuple[Controller, ...]:
    """Return the controllers of a netlist, in the order of the file.

    A controller is a fitted part whose model or value holds a family's generic number, and which has at
    least eight pins or an entry in the brief.
    pins_by_reference: the brief's `pins`, names or numbers in the order of the part's nodes
    """
    listed = {reference.casefold(): pins for reference, pins in pins_by_reference.items()}
    found: list[Controller] = []
    for part in netlist.parts.values():
        pins = listed.get(part.reference.casefold())
        if not part.fitted or (pins is None and len(part.pins) < _LEAST_PINS):
            continue
        if named := generic_number(part.model) or generic_number(part.value):
            found.append(_controller(part, *named, pins))
    return tuple(found)


def _controller(part: Part, family: str, number: str, listed: tuple[str, ...] | None) -> Controller:
    profile = load(family, number)
    mapping = _Mapping(part, profile)
    if listed is None:
        mapping.read()
    else:
        mapping.read_list(listed)
    return Controller(
        part=part,
        profile=profile,
        generic_number=number,
        pins=MappingProxyType(mapping.pins),
        unmapped=mapping.unmapped(),
        assumptions=tuple(mapping.assumptions),
        problem=mapping.problem(),
    )


class _Mapping:
    """The pins of one part while they are being mapped."""

    def __init__(self, part: Part, profile: Profile) -> None:
        self._part = part
        self._profile = profile
        self._names = profile.roles_by_name()
        self._numbers = profile.roles_by_number()
        self._complaints: list[str] = []
        # Whether a pin that is missing was left out by the exporter: no list in the brief can mend that.
        self._left_out = False
        self.pins: dict[str, ControllerPin] = {}
        self.assumptions: list[str] = []

    # ------------------------------------------------------------------------------- ways to read pins

    def read(self) -> None:
        """Map the pins by the first way that tells anything; see the module's description."""
        names, numbers, positions = self._by_name(), self._by_number(), self._by_position()
        numbered = self._part.pins_known == "numbers"
        ways = (numbers, names) if numbered else (names, numbers, positions)
        reading = next((way for way in ways if way.tells), None)
        if reading is None:
            self._complaints.append(
                f"neither names nor numbers of its {len(self._part.pins)} pins fit the "
                f"{self._profile.family} class of {self._profile.package_pins} pins"
            )
            return
        self.assumptions += reading.assumptions
        if reading is numbers:
            self._left_out = numbered
            self._compare(numbers, names)
        self._take(reading)

    def read_list(self, listed: tuple[str, ...]) -> None:
        """Map the pins by the brief's list, which must have one entry for each node of the part."""
        if len(listed) != len(self._part.pins):
            self._complaints.append(
                f"the brief lists {len(listed)} pins, the netlist has {len(self._part.pins)} nodes"
            )
            return
        roles = tuple(
            self._numbers.get(entry.strip()) or role
            for entry, role in zip(listed, self._roles_of(listed), strict=True)
        )
        for entry, role in zip(listed, roles, strict=True):
            if role is None and plain_name(entry) not in _NOT_A_PIN:
                self._complaints.append(
                    f"the brief's {entry!r} is no pin of the {self._profile.family} class"
                )
        self._take(_Reading(roles), remark_rest=False)

    def _by_name(self) -> _Reading:
        return _Reading(self._roles_of([pin.name for pin in self._part.pins]))

    def _roles_of(self, names: Iterable[str]) -> tuple[str | None, ...]:
        """Return the role of each name.

        A name without a sign is the non-inverting input where its partner with a minus sign is the
        inverting one and no other name has the plus: `IN1` beside `-IN1`. Alone it would tell nothing.
        """
        plain = [plain_name(name) for name in names]
        roles = {name: self._names.get(name) for name in plain}
        for name in plain:
            role, partner = roles[name], name.replace("-", "")
            if role is None or not role.endswith(" in-") or partner == name:
                continue
            plus = role.removesuffix("-") + "+"
            if partner in roles and roles[partner] is None and plus not in roles.values():
                roles[partner] = plus
        return tuple(roles[name] for name in plain)

    def _by_number(self) -> _Reading:
        """Read package pin numbers, as the file states them or as a library uses them for names."""
        pins = self._part.pins
        stated = self._part.pins_known == "numbers"
        if stated and not self._part.element:
            return _Reading(tuple(self._numbers.get(pin.number) for pin in pins))
        # A SPICE-style list has no package pins, only a library's own words that happen to be numbers. They
        # may be its inner nodes; that they all fit the package is the least to ask.
        numbers = [pin.number if stated else pin.name for pin in pins]
        if self._part.pins_known == "positions" or not all(number in self._numbers for number in numbers):
            return _Reading((None,) * len(pins))
        return _Reading(
            tuple(self._numbers[number] for number in numbers),
            (
                f"{self._part.reference}: the library's pin numbers are taken as pin numbers of the package; "
                "nothing in the file proves it",
            ),
        )

    def _by_position(self) -> _Reading:
        pins = self._part.pins
        if len(pins) != self._profile.package_pins:
            return _Reading((None,) * len(pins))
        return _Reading(
            tuple(self._numbers[str(position)] for position in range(1, len(pins) + 1)),
            (
                f"{self._part.reference}: pins taken by position, first node = pin 1, because the netlist "
                f"tells neither their names nor their numbers; if the order is another, {self._remedy()}",
            ),
        )

    # ------------------------------------------------------------------------------- what came of it

    def _compare(self, numbers: _Reading, names: _Reading) -> None:
        """Note where a symbol's pin name contradicts the pin number that is followed."""
        for pin, by_number, by_name in zip(self._part.pins, numbers.roles, names.roles, strict=True):
            if by_number and by_name and by_number != by_name:
                sheet = self._profile.pin(by_number)
                self.assumptions.append(
                    f"{self._part.reference}: pin {sheet.number} is called {pin.name} in the netlist, "
                    f"the data sheet has {sheet.name} there; the number is followed"
                )

    def _take(self, reading: _Reading, *, remark_rest: bool = True) -> None:
        """Give every role its pin, and remark on the pins that got none."""
        candidates: dict[str, list[int]] = {}
        rest: list[str] = []
        for index, (pin, role) in enumerate(zip(self._part.pins, reading.roles, strict=True)):
            if role is None:
                rest.append(pin.name or pin.number)
            else:
                candidates.setdefault(role, []).append(index)
        for role, indices in candidates.items():
            self._choose(role, indices)
        if rest and remark_rest:
            self.assumptions.append(
                f"{self._part.reference}: {_listed(rest)} read as no pin of the {self._profile.family} class "
                "and left out"
            )

    def _choose(self, role: str, indices: list[int]) -> None:
        """Take the one pin with this role; of several, the one that is connected if that settles it."""
        pins = self._part.pins
        sheet = self._profile.pin(role)
        nets = {pins[index].net for index in indices} - {""}
        if len(nets) > 1:
            names = _listed([pins[index].name or pins[index].number for index in indices])
            self._complaints.append(f"{names} all read as {sheet.name}, on different nets")
            return
        index = next((index for index in indices if pins[index].net in nets), indices[0])
        if len(indices) > 1:
            self.assumptions.append(
                f"{self._part.reference}: {len(indices)} pins read as {sheet.name}; taken as one"
            )
        pin = pins[index]
        self.pins[role] = ControllerPin(role, sheet.name, sheet.number, pin.net, pin.place, index)

    def unmapped(self) -> tuple[str, ...]:
        """Return the roles without a pin, in the order of the package."""
        return tuple(pin.role for pin in self._profile.pins if pin.role not in self.pins)

    def problem(self) -> str:
        """Return what keeps pins from being mapped and how to mend it, empty where all are mapped."""
        reasons = list(self._complaints)
        remedy = self._remedy()
        if missing := [self._profile.pin(role) for role in self.unmapped()]:
            reasons.append(f"no pin found for {_listed([f'{pin.name} ({pin.number})' for pin in missing])}")
            if self._left_out and not self._complaints:
                remedy = "let the exporter write every pin of the part, connected or not"
        return f"{self._part.reference}: {'; '.join(reasons)}; {remedy}" if reasons else ""

    def _remedy(self) -> str:
        first, second, *_ = self._profile.pins
        return (
            f"add to the brief, under [controllers.{toml_key(self._part.reference)}]: "
            f'pins = ["{first.name}", "{second.name}", ...] with one name or number for each of the '
            f"{len(self._part.pins)} nodes, in the netlist's order"
        )


def _listed(names: list[str]) -> str:
    """Return names as a sentence lists them: "A, B and C"."""
    *first, last = names
    return f"{', '.join(first)} and {last}" if first else last
