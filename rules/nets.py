"""Nets: ends that lead nowhere, names that look alike, and one ground for all. The topic is connections."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Mapping
from itertools import combinations

from ..grammar.netlist import Part, Pin
from ..lint.design import Design
from ..lint.rule import netlist_rule
from ..lint.verdict import Outcome, Verdict

# Parts of two ends, or three for a transistor, of which each must lead somewhere for the part to work.
_USELESS_WITH_LOOSE_END = frozenset(
    {"resistor", "capacitor", "inductor", "diode", "transistor", "thermistor", "fuse", "battery"}
)

# What a simulation needs besides the board: a source may measure or feed a net of its own.
_SIMULATION_ONLY = frozenset({"voltage source", "current source", "controlled source", "coupling"})

_ENDS_MEANT_TO_BE_LOOSE = frozenset({"test point", "connector", "jumper"})


@netlist_rule("connections.single-pin-net", level="warning", topic="connections")
def single_pin_net(design: Design) -> Iterable[Verdict]:
    """Does an end of a part lead nowhere?

    What:
        Names the two-ended parts, and transistors, with a pin that is on no net or alone on one. Pins of
        the controller have their own question; test points, connectors, links and the sources of a
        simulation end nets on purpose. Loose pins of parts with more pins are listed as unused.
    Why:
        A resistor or capacitor with one loose end does nothing: a wire that does not quite meet the pin,
        or a net label written in two ways.
    Formula:
        none: pins are counted, parts that are not fitted included
    Source:
        common practice, no source
    Remedy:
        Join the loose end to its net, or delete the part.
    Fails:
        R1 REF DTC 10k
        R2 DTC GDN 1k
    Passes:
        R1 REF DTC 10k
        R2 DTC 0 1k
    """
    unused: list[tuple[Part, Pin]] = []
    faults = 0
    for part, pin in _loose_ends(design):
        if design.circuit.kind(part) in _USELESS_WITH_LOOSE_END and len(part.pins) <= 3:
            faults += 1
            yield _loose_end(part, pin)
        else:
            unused.append((part, pin))
    if unused:
        yield Verdict(
            outcome=Outcome.INFORMATIONAL,
            message="taken as unused: "
            + ", ".join(f"{part.reference} {_pin_name(pin)}" for part, pin in unused),
            parts=tuple(dict.fromkeys(part.reference for part, _ in unused)),
            nets=tuple(pin.net for _, pin in unused if pin.net),
        )
    elif not faults:
        yield Verdict(outcome=Outcome.PASS, message="every net joins two pins or more")


def _loose_ends(design: Design) -> Iterator[tuple[Part, Pin]]:
    """Yield every pin that leads nowhere, of fitted parts whose kind should lead on."""
    controllers = {controller.reference for controller in design.controllers}
    for reference, index in _single_pins(design):
        part = design.circuit.parts.get(reference)
        if part is None or reference in controllers or len(part.pins) < 2:
            continue  # not fitted, asked about elsewhere, or a mounting hole, a fiducial mark, an aerial
        if design.circuit.kind(part) not in _SIMULATION_ONLY | _ENDS_MEANT_TO_BE_LOOSE:
            yield part, part.pins[index]


def _single_pins(design: Design) -> Iterator[tuple[str, int]]:
    """Yield every pin that is alone on its net, or on none, as (part reference, index into its pins)."""
    for net in design.netlist.nets.values():
        if len(net.pins) == 1:
            yield net.pins[0]
    for part in design.circuit.parts.values():
        # Where only the order of the nodes is known, each pin has its node: no need to look.
        for index, pin in enumerate(part.pins if part.pins_known != "positions" else ()):
            if not pin.net:
                yield part.reference, index


def _loose_end(part: Part, pin: Pin) -> Verdict:
    where = f"alone on net {pin.net}" if pin.net else "not connected"
    return Verdict(
        outcome=Outcome.FAIL,
        message=f"{_pin_name(pin)} of {part.reference} is {where}",
        subject=part.reference,
        parts=(part.reference,),
        nets=(pin.net,) if pin.net else (),
        places=(pin.place,),
        remedy=f"join it to its net, or delete {part.reference}",
    )


def _pin_name(pin: Pin) -> str:
    return f"pin {pin.name or pin.number}"


@netlist_rule("connections.near-names", level="warning", topic="connections")
def near_names(design: Design) -> Iterable[Verdict]:
    """Do two nets have names that look as if one net were meant?

    What:
        Compares the names of all nets without regard to case, punctuation, a leading plus, and a last
        character that is a digit in the one and its look-alike letter in the other (0 and O, 1 and I).
        Numbers and minus signs count: OUT1 and OUT2, 12V and -12V, 3.3V and 33V are different names.
        Names made by a tool, and pairs that the brief lists both as rails, are left alone.
    Why:
        A label written VREF here and V_REF there makes two nets of one, and nothing on the drawing
        shows it.
    Formula:
        none: names are compared, no figure is computed
    Source:
        common practice, no source
    Remedy:
        Give both labels one name, or names that tell them apart.
    Fails:
        R1 VOUT 1IN+ 10k
        C1 V_OUT 0 470u
    Passes:
        R1 VOUT 1IN+ 10k
        C1 VOUT 0 470u
    """
    alike: dict[str, list[str]] = {}
    for name, net in design.netlist.nets.items():
        if net.pins and not _MADE_BY_TOOL.search(name):
            alike.setdefault(_plain(name), []).append(name)
    pairs = [
        (one, other)
        for names in alike.values()
        for one, other in combinations(names, 2)
        if design.rail(one) is None or design.rail(other) is None
    ]
    for one, other in pairs:
        yield Verdict(
            outcome=Outcome.REVIEW,
            message=f"nets {one} and {other} are two nets with names that look like one",
            subject=one,
            nets=(one, other),
            places=(design.netlist.nets[one].place, design.netlist.nets[other].place),
            remedy="give both labels one name, or names that tell them apart",
        )
    if not pairs:
        count = len(design.netlist.nets)
        yield Verdict(outcome=Outcome.PASS, message=f"the names of {count} nets tell them apart")


# Names that no hand has written: N$12, Net-(R1-Pad1), UNNAMED_1_R3.
_MADE_BY_TOOL = re.compile(r"[$(]|unnamed|unconnected|no_?connect", re.IGNORECASE)

# Punctuation within a name, unless it parts two numbers (3.3V, N1_1) or is a sign at an end (IN-).
_PUNCTUATION = re.compile(r"(?<=[^\W_])[_. -]+(?=[^\W\d_])|(?<=[^\W\d_])[_. -]+(?=\d)|^[_.+ ]+|[_. ]+$")

_LOOK_ALIKE = {"o": "0", "i": "1", "l": "1"}


def _plain(name: str) -> str:
    """Return a net's name as it is compared."""
    plain = _PUNCTUATION.sub("", name.casefold())
    return plain[:-1] + _LOOK_ALIKE.get(plain[-1], plain[-1]) if len(plain) > 1 else plain


@netlist_rule("connections.ground", level="error", topic="connections")
def ground(design: Design) -> Iterable[Verdict]:
    """Is there one ground, or are the grounds tied together, and does the controller sit on it?

    What:
        Takes the nets that are ground by their name and those on the controllers' ground pins. Two of
        them are one ground when links, fuses, chokes or small resistors (a current sense among them)
        join them. Without such a tie they are isolated from each other where no resistor, diode,
        transistor or controller joins the two sides, as across a transformer; else the tie is missing.
    Why:
        Without a tie the ground current looks for a way through signal parts: dividers and the current
        sense then measure against a ground that is somewhere else.
    Formula:
        a tie: resistance up to 10 ohm; a side of its own: nothing below 1 Mohm joins it
    Source:
        common practice, no source
    Remedy:
        Join the two grounds at one point, by a link or a common net name.
    Fails:
        R1 REF DTC 10k
        R2 DTC AGND 1k
    Passes:
        R1 REF DTC 10k
        R2 DTC AGND 1k
        R3 AGND 0 0
    """
    grounds = dict.fromkeys(net for net in design.netlist.nets if design.is_ground(net))
    assumed = tuple(
        potential.assumption for net in grounds if (potential := design.potential(net)) is not None
    )
    assumptions = tuple(assumption for assumption in assumed if assumption)
    if not grounds:
        yield Verdict(
            outcome=Outcome.OPEN,
            message="no net is ground: none is called 0, GND, AGND, PGND, 0V or VSS, "
            "and no controller's ground pin is mapped",
            needs=("netlist: a net called GND or 0",),
        )
        return
    first, *others = grounds
    tied = _reached(design, first, _TIES)
    apart = [net for net in others if net not in tied]
    for net in apart:
        yield _untied(design, first, net, assumptions)
    if not apart:
        names = first if not others else f"{', '.join(grounds)}, tied together"
        yield Verdict(
            outcome=Outcome.PASS,
            message=f"one ground: {names}",
            nets=tuple(grounds),
            pins=("ground",),
            assumptions=assumptions,
        )


def _untied(design: Design, one: str, other: str, assumptions: tuple[str, ...]) -> Verdict:
    """Return the verdict on two grounds without a tie: two isolated sides, or a tie that is missing."""
    joined = other in _reached(design, one, _CONDUCTS)
    if not joined:
        return Verdict(
            outcome=Outcome.INFORMATIONAL,
            message=f"{one} and {other} are isolated from each other: only transformers, capacitors, "
            "integrated circuits or connectors join the two sides",
            nets=(one, other),
            assumptions=assumptions,
        )
    return Verdict(
        outcome=Outcome.FAIL,
        message=f"{one} and {other} are both ground, but nothing ties them: only signal parts join the two",
        subject=other,
        nets=(one, other),
        pins=("ground",),
        places=(design.netlist.nets[one].place, design.netlist.nets[other].place),
        assumptions=assumptions,
        remedy=f"join {one} and {other} at one point, by a link or a common net name",
    )


# Resistance in ohm up to which a part of the kind passes: a tie, and a joint of any sort. Ground resistors
# of up to 10 ohm are usual; bleeders across an isolation have 1 Mohm or more. Common practice, no source.
_INFINITE = float("inf")
_TIES: Mapping[str, float] = {
    "resistor": 10.0,
    "jumper": _INFINITE,
    "fuse": _INFINITE,
    "inductor": _INFINITE,
    "switch": _INFINITE,
}
_CONDUCTS: Mapping[str, float] = _TIES | {
    "resistor": 1e6,
    "trimmer": 1e6,
    "diode": _INFINITE,
    "transistor": _INFINITE,
    "thermistor": _INFINITE,
    "controller": _INFINITE,
}


def _reached(design: Design, start: str, passing: Mapping[str, float]) -> set[str]:
    """Return the nets that parts of the passing kinds join to `start`, each up to its resistance."""
    controllers = {controller.reference for controller in design.controllers}
    reached = {start}
    waiting = [start]
    while waiting:
        net = waiting.pop()
        for connection in design.circuit.connections(net):
            part = connection.part
            kind = "controller" if part.reference in controllers else _kind(design, part)
            if kind in passing and _ohms(design, part) <= passing[kind]:
                new = [other for other in design.circuit.other_nets(part, net) if other not in reached]
                reached.update(new)
                waiting.extend(new)
    return reached


def _kind(design: Design, part: Part) -> str:
    """Return the kind of a part, a net tie (NT1) being a link whatever its letters stand for elsewhere."""
    return "jumper" if _NET_TIE.fullmatch(part.reference) else design.circuit.kind(part)


_NET_TIE = re.compile(r"(?:.*/)?NT\d+", re.IGNORECASE)


def _ohms(design: Design, part: Part) -> float:
    """Return the resistance of a part, 0 for one that has none or whose value cannot be read."""
    value = design.circuit.value(part)
    return value.spread.nominal if value is not None and value.spread.unit == "ohm" else 0.0
