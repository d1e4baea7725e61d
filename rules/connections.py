"""Connections: is there a controller, is every pin driven, and was the drawing read as it was meant?

Nets and grounds are asked about in `nets`, the texts of the values in `values`; the topic is the same.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Iterator

from ..grammar.netlist import Part
from ..lint.circuit.controllers import Controller
from ..lint.circuit.parts import defaults
from ..lint.controllers import PinDescription, families, generic_number, load
from ..lint.design import Design
from ..lint.rule import netlist_rule, rule
from ..lint.verdict import Outcome, Verdict

# Pins that listen and drive nothing: joined to one another they still hang in the air.
_LISTENING = frozenset(
    {f"amplifier {number} in{sign}" for number in (1, 2) for sign in "+-"}
    | {"dead time", "output control", "timing capacitor", "timing resistor"}
)

# Parts of two ends that are of no use with both on one net. Links, switches and connectors may be drawn so.
_USELESS_WHEN_SHORTED = frozenset(
    {
        "resistor",
        "trimmer",
        "capacitor",
        "inductor",
        "diode",
        "thermistor",
        "fuse",
        "battery",
        "voltage source",
    }
)


@netlist_rule("connections.controller-found", level="error", topic="connections")
def controller_found(design: Design) -> Iterable[Verdict]:
    """Is there a controller on the board, and is it known what each of its pins does?

    What:
        Looks through the model and the value of every fitted part for the generic number of a family, on
        a part of at least eight pins or one that the brief names. Its pins are then mapped by the brief's
        list, their names, their numbers, or their order.
    Why:
        Every other question starts at a pin of the controller. A part that is not recognised, or a pin
        taken for another, would make the whole review worthless without a word.
    Formula:
        none: names are compared, no figure is computed
    Source:
        the generic numbers and the pins of each family: `pwmlint controllers`
    Remedy:
        Write the generic number into the part's model or value, and where the library names its pins in
        its own way, list them under `pins` in the brief.
    Fails:
        U1 FB SET COMP DTC CT RT 0 C1 0 0 C2 VCC 0 REF LIM SENSE PWM
    Passes:
        U1 FB SET COMP DTC CT RT 0 C1 0 0 C2 VCC 0 REF LIM SENSE 494
    """
    if not design.controllers:
        yield _none_found(design)
    for controller in design.controllers:
        yield _found(controller)
    yield from _told_in_vain(design)


def _none_found(design: Design) -> Verdict:
    numbers = ", ".join(number for family in families() for number in load(family).generic_numbers)
    parts = design.netlist.parts.values()
    named = [part for part in parts if generic_number(part.model) or generic_number(part.value)]
    near = "".join(f"; {part.reference} has the number but {_lacks(part)}" for part in named)
    return Verdict(
        outcome=Outcome.OPEN,
        message=f"no controller found: none of {len(parts)} parts has one of the numbers {numbers} "
        f"in its model or value, on eight pins or more{near}",
        parts=tuple(part.reference for part in named),
        needs=("netlist: the generic number as the controller's model or value, as in `U1 n1 ... n16 494`",),
    )


def _lacks(part: Part) -> str:
    return f"only {len(part.pins)} pins" if part.fitted else "is not fitted"


def _found(controller: Controller) -> Verdict:
    title = f"{controller.reference} is a {controller.generic_number}, {controller.profile.title}"
    pins = controller.profile.package_pins
    if controller.problem:
        return Verdict(
            outcome=Outcome.OPEN,
            message=f"{title}; {len(controller.unmapped)} of its {pins} pins are not mapped",
            subject=controller.reference,
            assumptions=controller.assumptions,
            needs=(controller.problem,),
        )
    return Verdict(
        outcome=Outcome.PASS,
        message=f"{title}; all {pins} pins mapped",
        subject=controller.reference,
        assumptions=controller.assumptions,
    )


def _told_in_vain(design: Design) -> Iterator[Verdict]:
    """Yield a verdict on every controller of the brief that is none: what is told of it has no effect."""
    found = [controller.reference for controller in design.controllers]
    for reference, told in design.brief.controllers.items() if design.brief is not None else ():
        if reference not in found:
            there_are = (
                f"the controllers found are {', '.join(found)}" if found else "no controller was found"
            )
            yield Verdict(
                outcome=Outcome.OPEN,
                message=f"the brief tells of a controller {reference}; {there_are}",
                subject=reference,
                places=(told.place,),
                needs=(
                    f"netlist: a controller {reference}, or its right name under [controllers] in the brief",
                ),
            )


@rule("connections.pin-open", level="error", topic="connections")
def pin_open(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is every pin driven that may not hang open?

    What:
        Takes each pin that the family's data sheet wants connected. It hangs open where it is on no net,
        or where the net has nothing but test points and inputs of the same controller.
    Why:
        An open input takes whatever voltage leakage and coupling give it: the amplifier, the dead time or
        the output mode then change with humidity, temperature and a finger near the board.
    Formula:
        none: pins are counted, no figure is computed
    Source:
        pin functions of the family's data sheet (494 class: SLVS074, from memory)
    Remedy:
        Connect the pin as the verdict says; an unused amplifier wants both inputs tied off.
    Fails:
        U1 0 REF FEEDBACK DTC CT RT 0 C1 0 0 C2 VCC 0 REF REF 0 494
        V1 VCC 0 12
        R1 RT 0 12k
        C1 CT 0 10n
    Passes:
        U1 0 REF FEEDBACK 0 CT RT 0 C1 0 0 C2 VCC 0 REF REF 0 494
        V1 VCC 0 12
        R1 RT 0 12k
        C1 CT 0 10n
    """
    driven: list[PinDescription] = []
    for description in controller.profile.pins:
        pin = controller.pin(description.role)
        if pin is None or not description.must_connect:
            continue  # connections.controller-found speaks of pins that are not mapped
        if pin.net and _is_driven(controller, description.role, pin.net, design):
            driven.append(description)
            continue
        state = f"is alone on net {pin.net}" if pin.net else "is not connected"
        yield Verdict(
            outcome=Outcome.FAIL,
            message=f"{pin.name} (pin {pin.number}, {pin.role}) {state}",
            nets=(pin.net,) if pin.net else (),
            pins=(pin.role,),
            places=(pin.place,),
            source="pin functions of the data sheet, from memory",
            remedy=description.advice,
        )
    if driven:
        yield Verdict(
            outcome=Outcome.PASS,
            message=f"{', '.join(pin.name for pin in driven)} are connected",
            pins=tuple(pin.role for pin in driven),
        )


def _is_driven(controller: Controller, role: str, net: str, design: Design) -> bool:
    """Tell whether anything besides test points and the controller's own inputs is on the pin's net."""
    for connection in design.circuit.connections(net):
        if connection.part.reference == controller.reference:
            other = controller.role_of(connection.index)
            if other is not None and other != role and other not in _LISTENING:
                return True
        elif design.circuit.kind(connection.part) != "test point":
            return True
    return False


@netlist_rule("connections.duplicate-reference", level="error", topic="connections")
def duplicate_reference(design: Design) -> Iterable[Verdict]:
    """Is every reference designator used once?

    What:
        Repeats what the reader of the netlist found: a reference designator that names two parts.
    Why:
        The parts list, the placement and every verdict name parts by it. With two parts under one name,
        one of them is not bought, or gets the other's value.
    Formula:
        none: names are compared, no figure is computed
    Source:
        common practice, no source
    Remedy:
        Number the parts again in the schematic, and export the netlist anew.
    Fails:
        R1 REF DTC 10k
        R1 DTC 0 1k
    Passes:
        R1 REF DTC 10k
        R2 DTC 0 1k
    """
    doubles = [note for note in design.netlist.notes if note.kind == "duplicate-reference"]
    for note in doubles:
        yield Verdict(
            outcome=Outcome.FAIL,
            message=note.message,
            subject=note.subject,
            parts=(note.subject,) if note.subject in design.netlist.parts else (),
            places=(note.place,),
            remedy="number the parts again in the schematic and export the netlist anew",
        )
    if not doubles:
        count = len(design.netlist.parts)
        yield Verdict(
            outcome=Outcome.PASS, message=f"{count} parts, each with a reference designator of its own"
        )


@netlist_rule("connections.shorted-part", level="error", topic="connections")
def shorted_part(design: Design) -> Iterable[Verdict]:
    """Does a part have all its ends on one net?

    What:
        Takes resistors, capacitors, inductors, diodes and their like, and names those with every pin on
        one net. Links, zero-ohm resistors, switches and connectors may be drawn so on purpose.
    Why:
        Such a part does nothing. Mostly two nets were joined by mistake: a label was copied, or a wire
        drawn across the part, and more than this part is shorted.
    Formula:
        none: nets are compared, no figure is computed
    Source:
        common practice, no source
    Remedy:
        Find the label or the wire that joins the two ends.
    Fails:
        R1 DTC DTC 10k
    Passes:
        R1 REF DTC 10k
    """
    shorted = list(_shorted(design))
    for part, net in shorted:
        ends = "both ends" if len(part.pins) == 2 else f"all {len(part.pins)} pins"
        yield Verdict(
            outcome=Outcome.FAIL,
            message=f"{ends} of {part.reference} are on net {net}",
            subject=part.reference,
            parts=(part.reference,),
            nets=(net,),
            remedy=f"find the label or the wire that joins the ends of {part.reference}",
        )
    if not shorted:
        yield Verdict(outcome=Outcome.PASS, message="no part has all its ends on one net")


def _shorted(design: Design) -> Iterator[tuple[Part, str]]:
    """Yield every part that has all its pins on one net and should not, with the net."""
    for name, net in design.netlist.nets.items():
        for reference, count in Counter(reference for reference, _ in net.pins).items():
            part = design.circuit.parts.get(reference)
            if part is None or count < 2 or count < len(part.pins):
                continue
            if design.circuit.kind(part) in _USELESS_WHEN_SHORTED and not _is_link(part, design):
                yield part, name


def _is_link(part: Part, design: Design) -> bool:
    """Tell whether a resistor is a zero-ohm link: with both pads on one net some tools draw a net tie."""
    value = design.circuit.value(part)
    most = float(defaults()["limits"]["link_up_to"])
    return design.circuit.kind(part) == "resistor" and value is not None and value.spread.nominal <= most


@netlist_rule("connections.title-line", level="warning", topic="connections")
def title_line(design: Design) -> Iterable[Verdict]:
    """Did a part of a SPICE-style list vanish into its title line?

    What:
        The first line of such a list is its title, whatever it says. Where it reads as an element, that
        element may have been meant as a part.
    Why:
        A list written or cut by hand often starts with its first part at once. Simulators skip that line
        without a word, and so the part is missing from the simulation and from this review.
    Formula:
        none: a text is read, no figure is computed
    Source:
        Berkeley SPICE 3 manual: the first line is the title, from memory
    Remedy:
        Put a title line above the first part.
    Fails:
        R1 REF DTC 10k
        R2 DTC 0 1k
        .end
    Passes:
        irrigation pump
        R1 REF DTC 10k
        R2 DTC 0 1k
        .end
    """
    if not design.netlist.format.startswith("SPICE"):
        return
    notes = [note for note in design.netlist.notes if note.kind == "title-line"]
    for note in notes:
        yield Verdict(
            outcome=Outcome.REVIEW,
            message=note.message,
            places=(note.place,),
            remedy="if a part was meant, put a title line above it",
        )
    if not notes:
        yield Verdict(outcome=Outcome.PASS, message="the title line reads as a title")
