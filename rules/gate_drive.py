"""Gate drive: the switches behind the outputs: which way they are driven, held and emptied."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import replace

from ..grammar.netlist import Part
from ..lint.circuit.controllers import Controller
from ..lint.circuit.drive import Driven
from ..lint.circuit.output_drive import OutputDrive
from ..lint.circuit.outputs import OutputTransistor
from ..lint.circuit.transistors import Transistor
from ..lint.design import Design
from ..lint.estimate import Estimate, Unsolved
from ..lint.judge import reports
from ..lint.quantity import Spread, engineering, percent
from ..lint.rule import rule
from ..lint.verdict import Outcome, Verdict

_TOPIC = "gate drive"
_PRACTICE = "common practice, no source"

# What an enhancement MOSFET's gate stands against its source, and what it needs at the least to conduct
# well (logic-level types); both common practice, no source.
_MOST_GATE_VOLTAGE = 20.0
_LEAST_GATE_VOLTAGE = 4.5

# The input capacitance of a small power MOSFET (common practice, no source).
_SMALL_GATE = 1e-9


def _switches(controller: Controller, design: Design) -> Iterator[tuple[OutputTransistor, Driven]]:
    """Yield the driven power switches, each with the first output that drives it."""
    drive = design.output_drive(controller).drive
    for driven in drive.driven():
        if driven.transistor.control and drive.is_switch(driven.transistor):
            yield drive.outputs[driven.outputs[0] - 1], driven


def _mosfets(controller: Controller, design: Design) -> Iterator[tuple[OutputTransistor, Driven]]:
    found = _switches(controller, design)
    return ((output, driven) for output, driven in found if driven.transistor.field_effect)


def _about(driven: Driven, outcome: Outcome, message: str, remedy: str = "") -> Verdict:
    one = driven.transistor
    return Verdict(
        outcome=outcome,
        message=message,
        parts=(one.reference, *driven.drivers),
        nets=tuple(dict.fromkeys((one.control, one.common))),
        pins=tuple(f"output {n} {end}" for n in driven.outputs for end in ("collector", "emitter")),
        assumptions=(one.assumption,) if one.assumption else (),
        source=_PRACTICE,
        remedy=remedy,
    )


@rule("gate-drive.polarity", level="error", topic=_TOPIC)
def polarity(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does a conducting output turn its switch on, not off?

    What:
        Follows the signal from each output to the switches: a common-emitter output pulls low, a follower
        pulls high, a driver turns it round at its collector and passes it at its emitter. A P-channel or
        PNP switch must be pulled low to conduct, an N-channel or NPN one high. Behind a transformer or a
        driver circuit nothing is said. A MOSFET whose body diode leads out of a supply, or into ground,
        stands the wrong way round.
    Why:
        Dead time, soft start and the limits all act by keeping the output transistors off. With the sense
        turned round, the switch is on when everything says off.
    Formula:
        none: inversions are counted
    Source:
        common practice, no source
    Remedy:
        Use the output the other way (emitter in place of collector), or add or leave out one inverting
        stage; exchange drain and source of a MOSFET that stands the wrong way round.
    Fails:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 0 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        R1 VCC C1 1k
        M1 SW C1 0 0 NMOS
        L1 VCC SW 100u
    Passes:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 VCC E1 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        R1 E1 0 1k
        M1 SW E1 0 0 NMOS
        L1 VCC SW 100u
    """
    for _, driven in _switches(controller, design):
        one = driven.transistor
        if one.field_effect and one.polarity and _body_diode_conducts(controller, design, one):
            says = f"the body diode of {one.reference} ({one.kind}) conducts from {' to '.join(_diode(one))}"
            remedy = f"exchange drain and source of {one.reference}"
            yield _about(driven, Outcome.FAIL, f"{says}: nothing turns it off", remedy)
        if driven.high is None or not one.polarity:
            continue
        way = "up" if driven.high else "down"
        says = f"a conducting output pulls the control terminal of {one.reference} ({one.kind}) {way}"
        if driven.high is (one.polarity == "N"):
            yield _about(driven, Outcome.PASS, says)
        else:
            remedy = "take the signal from the output's other end, or add or leave out an inverting stage"
            yield _about(driven, Outcome.FAIL, f"{says}, which turns it off", remedy)


def _diode(one: Transistor) -> tuple[str, str]:
    """Return the nets of a MOSFET's body diode, the anode's first: the source of an N-channel type."""
    return (one.common, one.output) if one.polarity == "N" else (one.output, one.common)


def _body_diode_conducts(controller: Controller, design: Design, one: Transistor) -> bool:
    """Tell whether a body diode leads out of a supply, or into ground: the wrong way for a switch."""
    anode, cathode = _diode(one)
    high, low = design.potential(anode), design.potential(cathode)
    supplied = high is not None and high.spread.minimum > 0
    return supplied or anode == controller.net("supply") or (low is not None and low.spread.maximum == 0)


@rule("gate-drive.pull-down", level="error", topic=_TOPIC)
def pull_down(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is each gate held at its source while the controller is without supply?

    What:
        Looks for resistors from the gate to the source. A driver that holds it only while it has a supply is
        named for a person to judge, and so is a bipolar follower whose base resistors hold at the source.
    Why:
        A gate that floats at power-up is charged through the switch's own drain capacitance as the input
        rises, and the switch conducts before anything controls it.
    Formula:
        R [ohm] between gate and source by nodal analysis, outputs open
    Source:
        common practice, no source
    Remedy:
        Fit some kilo-ohms from the gate to the source.
    Fails:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 VCC E1 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        M1 SW E1 0 0 NMOS
        L1 VCC SW 100u
    Passes:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 VCC E1 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        M1 SW E1 0 0 NMOS
        L1 VCC SW 100u
        R1 E1 0 1k
    """
    solver = design.output_drive(controller)
    for _, driven in _mosfets(controller, design):
        one = driven.transistor
        found = solver.discharge(driven)
        remedy = f"fit some kilo-ohms from {one.control} to {one.common}"
        if isinstance(found, Estimate):
            says = (
                f"{engineering(found.spread.nominal, 'ohm')} holds the gate of {one.reference} at its source"
            )
            yield _about(driven, Outcome.PASS, says)
        elif found.needs or found.parts:
            continue  # a part of which nothing is known stands between: connections or values speak of it
        elif follower := _holding_follower(solver, driven):
            says = f"no resistor holds the gate of {one.reference}, {follower} does to a junction's drop"
            yield _about(driven, Outcome.REVIEW, says, remedy)
        elif driven.drivers:
            says = (
                f"only {', '.join(driven.drivers)} holds the gate of {one.reference}, while it has a supply"
            )
            yield _about(driven, Outcome.REVIEW, says, remedy)
        else:
            says = f"nothing holds the gate of {one.reference} while the controller is without supply"
            yield _about(driven, Outcome.FAIL, says, remedy)


def _holding_follower(solver: OutputDrive, driven: Driven) -> str:
    """Return the follower that empties a gate without a supply, empty for none.

    Its collector is at the switch's source and resistors hold its base there: a gate that is lifted by more
    than a junction's drop makes it conduct.
    """
    one = driven.transistor
    follower = solver.drive.transistors.get(solver.discharger(driven))
    if follower is None or follower.field_effect is not False or follower.output != one.common:
        return ""
    base = replace(driven, transistor=replace(one, control=follower.control))
    return follower.reference if isinstance(solver.discharge(base), Estimate) else ""


@rule("gate-drive.turn-off", level="error", topic=_TOPIC)
def turn_off(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the gate emptied fast enough when the output lets go?

    What:
        Looks for what empties the gate, since an output pulls one way only: a driver whose emitter is on
        the gate, or resistors. Of resistors, and of one between the driver and the gate, it prints the
        greatest gate capacitance that they empty within the family's share of a period; below 1 nF a person
        must judge.
    Why:
        A gate emptied slowly keeps the switch half on: it heats, and in bridges meets the other switch.
    Formula:
        C [F] = 2 % x period [s] / R [ohm]
    Source:
        common practice, no source
    Remedy:
        Lower the resistor, or add a transistor that empties the gate (emitter to the gate, base to the
        output, a diode across).
    Fails:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 VCC E1 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        M1 SW E1 0 0 NMOS
        L1 VCC SW 100u
        R1 E1 0 1k
        R2 RT 0 22k
        C1 CT 0 1n
    Passes:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 VCC E1 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        M1 SW E1 0 0 NMOS
        L1 VCC SW 100u
        R1 E1 0 220
        R2 RT 0 22k
        C1 CT 0 1n
    """
    solver = design.output_drive(controller)
    timing = design.timing(controller)
    for _, driven in _mosfets(controller, design):
        one = driven.transistor
        active = solver.discharger(driven)
        between = _between(design, active, one) if active else None
        found = solver.discharge(driven)
        if active and (between is None or isinstance(timing, Unsolved)):
            yield _about(driven, Outcome.PASS, f"{active} empties the gate of {one.reference}")
        elif isinstance(timing, Unsolved):
            continue  # oscillator.frequency speaks of it
        elif between is not None:
            resistance = design.nominal(between) or 0.0
            yield _emptied(controller, driven, resistance, (between.reference,), timing.frequency.spread)
        elif isinstance(found, Estimate) and found.spread.nominal > 0:
            yield _emptied(controller, driven, found.spread.nominal, found.parts, timing.frequency.spread)


def _between(design: Design, driver: str, one: Transistor) -> Part | None:
    """Return the resistor between a driver and a gate, None where a wire or a diode is beside it."""
    near = {pin.net for pin in design.part(driver).pins}
    joining = [
        connection.part
        for connection in design.circuit.connections(one.control)
        if not near.isdisjoint(design.circuit.other_nets(connection.part, one.control))
        and one.common not in design.circuit.other_nets(connection.part, one.control)
    ]
    kinds = [design.circuit.kind(part) for part in joining]
    alone = one.control not in near and kinds == ["resistor"]
    return joining[0] if alone and (design.nominal(joining[0]) or 0.0) > 0 else None


def _emptied(
    controller: Controller, driven: Driven, resistance: float, parts: tuple[str, ...], frequency: Spread
) -> Verdict:
    share = controller.profile.practice("gate-drive.turn-off").maximum
    assert share is not None
    capacitance = share / frequency.nominal / resistance
    says = (
        f"{engineering(resistance, 'ohm')} empties up to {engineering(capacitance, 'F')} of gate of "
        f"{driven.transistor.reference} within {percent(share)} of the period"
    )
    outcome = Outcome.PASS if capacitance >= _SMALL_GATE else Outcome.REVIEW
    remedy = (
        "lower the resistor, or add a transistor that empties the gate" if outcome is Outcome.REVIEW else ""
    )
    verdict = _about(driven, outcome, says, remedy)
    return replace(verdict, parts=tuple(dict.fromkeys((*verdict.parts, *parts))))


@rule("gate-drive.voltage", level="error", topic=_TOPIC)
def gate_voltage(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the gate driven hard enough at the lowest supply, and not too hard at the highest?

    What:
        Solves the gate's voltage against the source while the output conducts, over the supply's range
        and the output's saturation voltage. Above 20 V, or below 4.5 V, a person must judge it against
        the switch's data sheet; a diode between gate and source counts as a clamp.
    Why:
        A gate beyond its rating is punched through once and for all; one driven too softly leaves the
        switch in its linear range, and it burns at full load and lowest supply.
    Formula:
        V(gate, source) [V] by nodal analysis, saturation voltage of the output included
    Source:
        common practice, no source: 20 V is the usual rating, 4.5 V what logic-level types are specified at
    Remedy:
        Divide or clamp the drive (a zener from gate to source), or feed it from another rail.
    Fails:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 0 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        V1 VCC 0 28
        R1 VCC GATE 1k
        R2 GATE C1 100
        M1 SW GATE VCC VCC PMOS
        L1 SW VOUT 100u
    Passes:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 0 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        V1 VCC 0 28
        R1 VCC GATE 1k
        R2 GATE C1 1k
        M1 SW GATE VCC VCC PMOS
        L1 SW VOUT 100u
    """
    solver = design.output_drive(controller)
    for output, driven in _mosfets(controller, design):
        found = solver.control(output, driven, conducting=True)
        if isinstance(found, Estimate) and driven.high is not None:
            yield _gate_verdict(design, driven, found, solver)


def _gate_verdict(design: Design, driven: Driven, found: Estimate, solver: OutputDrive) -> Verdict:
    one = driven.transistor
    ends = sorted((abs(found.spread.minimum), abs(found.spread.maximum)))
    says = f"the gate of {one.reference} is driven to {found.spread} against its source"
    clamps = [
        p.reference
        for p in design.circuit.between(one.control, one.common)
        if design.circuit.kind(p) == "diode"
    ]
    verdict = reports(found, says, pins=_about(driven, Outcome.PASS, says).pins, source=_PRACTICE)
    if ends[1] > _MOST_GATE_VOLTAGE and not clamps:
        remedy = f"clamp the gate of {one.reference} with a zener, or divide the drive"
        return replace(
            verdict, outcome=Outcome.REVIEW, message=f"{says}: above the usual 20 V", remedy=remedy
        )
    if ends[0] < _LEAST_GATE_VOLTAGE:
        remedy = f"feed the drive of {one.reference} from a higher rail"
        return replace(
            verdict, outcome=Outcome.REVIEW, message=f"{says}: below the usual 4.5 V", remedy=remedy
        )
    clamp = f", and {', '.join(clamps)} clamps it" if clamps else ""
    return replace(verdict, outcome=Outcome.PASS, message=f"{says}{clamp}")
