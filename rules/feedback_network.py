"""Feedback: where the network senses, how stiff it is, and what one failed resistor does."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from math import inf, isinf

from ..grammar.netlist import Part
from ..lint.circuit.amplifiers import Amplifier
from ..lint.circuit.controllers import Controller
from ..lint.circuit.diodes import zener_voltage
from ..lint.circuit.loops import Fault, Regulation
from ..lint.circuit.power_stage import PowerStage
from ..lint.design import Design
from ..lint.estimate import Unsolved
from ..lint.judge import judge
from ..lint.quantity import engineering
from ..lint.rule import rule
from ..lint.verdict import Outcome, Verdict

_TOPIC = "feedback"

# From this factor of the regulated voltage on, a fault counts as over-voltage (common practice, no source).
_OVER_VOLTAGE = 1.2


def _voltage_amplifiers(controller: Controller, design: Design) -> list[Amplifier]:
    return [a for a in design.amplifiers(controller) if a.use == "voltage"]


def _sensing(amplifier: Amplifier) -> tuple[str, str]:
    """Return the role and the net of the input that sees the output."""
    net = amplifier.plus if amplifier.sensed_by == "in+" else amplifier.minus
    return f"amplifier {amplifier.number} {amplifier.sensed_by}", net


@rule("feedback.sense-point", level="error", topic=_TOPIC)
def sense_point(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the divider sense the converter's output, and not its supply or its switching node?

    What:
        Compares the net at the top of the divider with the output of the recognised power stage, its
        input and the controller's supply.
    Why:
        A divider on the supply regulates nothing: the duty runs to one end. One before the filter sees
        pulses that the amplifier cannot follow.
    Formula:
        none: connectivity
    Source:
        common practice, no source
    Remedy:
        Take the top of the divider to the output, behind the filter.
    Fails:
        V1 VCC 0 24
        R1 VCC 1IN+ 14k
        R2 1IN+ 0 10k
        [controllers.U1] output = "VOUT"
    Passes:
        V1 VCC 0 24
        R1 VOUT 1IN+ 14k
        R2 1IN+ 0 10k
        [controllers.U1] output = "VOUT"
    """
    found = design.power_stage(controller)
    stage = found if isinstance(found, PowerStage) else None
    # Beside an amplifier that regulates, the other may watch the input: a panel's voltage, a limit to it.
    meant = ("voltage", "unused") if _voltage_amplifiers(controller, design) else ("signal", "unused")
    for amplifier in design.amplifiers(controller):
        if amplifier.use not in meant:
            continue
        wrong = _wrong_point(controller, design, amplifier, stage)
        if wrong:
            yield wrong
        elif amplifier.output:
            role, net = _sensing(amplifier)
            message = f"{controller.pins[role].name} senses {amplifier.output}"
            yield Verdict(outcome=Outcome.PASS, message=message, nets=(net, amplifier.output), pins=(role,))


def _wrong_point(
    controller: Controller, design: Design, amplifier: Amplifier, stage: PowerStage | None
) -> Verdict | None:
    """Return the failed verdict on an input that senses what is no output, None where it does not."""
    for name, net in (("in+", amplifier.plus), ("in-", amplifier.minus)):
        if not net or design.potential(net) is not None:
            continue
        ends = design.reach(controller, net).ends
        output = stage.output if stage is not None else amplifier.output
        if output and output in ends:
            continue
        bad = {controller.net("supply") or "": "the controller's supply"}
        if stage is not None:
            bad[stage.input] = "the converter's input"
            bad.update({switch.node: "the switching node" for switch in stage.switches})
            bad.update(dict.fromkeys(_before_filter(design, stage), "the pulses before the filter"))
        found = next((end for end in ends if end in bad and end), None)
        if found is not None:
            role = f"amplifier {amplifier.number} {name}"
            return Verdict(
                outcome=Outcome.FAIL,
                message=f"{controller.pins[role].name} senses {found}, {bad[found]}",
                nets=(net, found),
                pins=(role,),
                source="common practice, no source",
                remedy="take the top of the divider to the output, behind the filter",
            )
    return None


def _before_filter(design: Design, stage: PowerStage) -> list[str]:
    """Return the nets on which a transformer's rectifiers meet the filter's inductor."""
    if not stage.transformer or stage.inductor not in design.netlist.parts:
        return []
    nets = (pin.net for reference in stage.rectifiers for pin in design.part(reference).pins)
    filtered = {pin.net for pin in design.part(stage.inductor).pins}
    return [net for net in nets if net in filtered and net != stage.output and not design.is_ground(net)]


@rule("feedback.impedance", level="note", topic=_TOPIC)
def impedance(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the divider stiff enough against noise and bias current?

    What:
        Computes the resistance that drives the sensing input, every source standing still.
    Why:
        Above some 100 kilo-ohms the summing node picks up the switching noise beside it, and the bias
        current moves the set point.
    Formula:
        R [ohm] = V / I of a test current into the input's net (Thevenin)
    Source:
        common practice, no source
    Remedy:
        Scale both resistors of the divider down.
    Fails:
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 1.4MEG
        R3 1IN+ 0 1MEG
        [controllers.U1] output = "VOUT"
    Passes:
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 14k
        R3 1IN+ 0 10k
        [controllers.U1] output = "VOUT"
    """
    practice = controller.profile.practice("feedback.thevenin")
    for amplifier in _voltage_amplifiers(controller, design):
        role, net = _sensing(amplifier)
        found = design.source_resistance(controller, net)
        if not isinstance(found, Unsolved):
            yield judge(
                found,
                practice.limit(),
                f"{controller.pins[role].name} is driven from {found.spread}",
                source=practice.source,
                pins=(role,),
                remedy="scale both resistors of the divider down",
            )


@rule("feedback.single-fault", level="warning", topic=_TOPIC)
def single_fault(controller: Controller, design: Design) -> Iterable[Verdict]:
    """What does the output do when one resistor of the feedback opens or shorts?

    What:
        Fails every resistor of the regulating network in turn, open and shorted, and solves the loop
        again. Where the output then rises well above its voltage, looks for a zener, a suppressor or a
        thyristor across it.
    Why:
        One cracked resistor may put the whole input voltage on the load. Whether that matters is for a
        person to judge; that it happens is not.
    Formula:
        V(in+) - V(in-) = 0 with the resistor at infinity or at zero, solved for the output [V]
    Source:
        common practice, no source (above 1.2 x the regulated voltage counts)
    Remedy:
        Put a suppressor or a crowbar across the output, or sense it a second time.
    Fails:
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 14k
        R3 1IN+ 0 10k
        [controllers.U1] output = "VOUT"
    Passes:
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 14k
        R3 1IN+ 0 10k
        D1 0 VOUT 15V
        [controllers.U1] output = "VOUT"
    """
    found = design.regulation(controller)
    if not isinstance(found, Regulation):
        return
    amplifier = design.regulating(controller)
    assert amplifier is not None  # it is the one that regulates
    regulated = found.output.spread.nominal
    sign = -1.0 if regulated < 0 else 1.0
    threshold = _OVER_VOLTAGE * abs(regulated)
    resistors = [p for p in found.output.parts if design.circuit.kind(design.part(p)) == "resistor"]
    faults = [Fault(part, shorted) for part in resistors for shorted in (False, True)]
    rising = {fault: design.output_after(controller, fault) for fault in faults}
    over = {fault: volts for fault, volts in rising.items() if volts > threshold}
    clamps = _clamps(design, amplifier.output, min(over.values(), default=inf))
    across = [part.reference for part in _across(design, amplifier.output)]
    if not over:
        does = "lifts {} above" if sign > 0 else "pulls {} below"
        limit = engineering(sign * threshold, "V")
        message = f"no single resistor {does.format(amplifier.output)} {limit}"
        yield Verdict(outcome=Outcome.PASS, message=message, parts=tuple(resistors))
        return
    said = "; ".join(_told(fault, sign * volts) for fault, volts in over.items())
    goes = "rises" if sign > 0 else "falls"
    clamped = f"; {', '.join(clamps)} across {amplifier.output} takes it" if clamps else ""
    if not clamps and across:
        clamped = f"; whether {', '.join(across)} across {amplifier.output} is to take it is not seen"
    verdict = Verdict(
        outcome=Outcome.PASS if clamps else Outcome.REVIEW,
        message=f"{amplifier.output} {goes} with {said}{clamped}",
        parts=(*dict.fromkeys(fault.part for fault in over), *clamps),
        nets=(amplifier.output,),
        source="common practice, no source",
    )
    yield replace(
        verdict, remedy="" if clamps else f"put a suppressor or a crowbar across {amplifier.output}"
    )


def _told(fault: Fault, volts: float) -> str:
    how = "shorted" if fault.shorted else "open"
    where = "as far as the duty goes" if isinf(volts) else f"to {engineering(volts, 'V')}"
    return f"{fault.part} {how} {where}"


def _clamps(design: Design, output: str, below: float) -> tuple[str, ...]:
    """Return the zeners and suppressors across the output that conduct below a voltage (V)."""
    voltages = {part.reference: zener_voltage(part) for part in _across(design, output)}
    return tuple(name for name, volts in voltages.items() if volts is not None and volts < below)


def _across(design: Design, output: str) -> list[Part]:
    """Return the diodes and varistors from the output to ground."""
    return [
        connection.part
        for connection in design.circuit.connections(output)
        if design.circuit.kind(connection.part) in ("diode", "varistor")
        and any(design.is_ground(net) for net in design.circuit.other_nets(connection.part, output))
    ]
