"""Current limit: whether there is one, and whether what it senses suits it."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from ..lint.circuit.amplifiers import SenseResistor
from ..lint.circuit.controllers import Controller
from ..lint.circuit.loops import Trip
from ..lint.circuit.power_stage import PowerStage
from ..lint.design import Design
from ..lint.judge import judge
from ..lint.quantity import engineering, percent
from ..lint.rule import rule
from ..lint.verdict import Limit, Outcome, Verdict

_TOPIC = "current limit"


@rule("current-limit.present", level="warning", topic=_TOPIC)
def present(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the current limited at all?

    What:
        Looks for an amplifier whose inputs stand on a current-sense resistor, and for a part that can send
        the load's current through that resistor.
    Why:
        Without a limit the first short circuit, or a load that starts hard, takes the switch with it.
        A fuse saves the wiring, not the switch.
    Formula:
        none: connectivity
    Source:
        common practice, no source
    Remedy:
        Put a sense resistor into the output's return and compare its voltage on the second amplifier.
    Fails:
        R1 REF 2IN- 1k
        R2 0 2IN+ 1k
    Passes:
        R1 REF 2IN- 1k
        R2 RTN 2IN+ 1k
        R3 RTN 0 0.1
        J1 VOUT RTN PUMP
    """
    amplifiers = [a for a in design.amplifiers(controller) if a.use != "unmapped"]
    if not amplifiers:
        return  # connections.controller-found speaks of it
    sensing = next((a for a in amplifiers if a.sense is not None), None)
    if sensing is None or sensing.sense is None:
        following = [a for a in amplifiers if a.use == "signal"]
        yield Verdict(
            outcome=Outcome.REVIEW,
            message=f"no amplifier of {controller.reference} stands on a current-sense resistor"
            + "".join(f"; amplifier {a.number} follows {', '.join(a.driven_by)}" for a in following),
            remedy="limit the current, or tell what else does",
        )
        return
    sense = sensing.sense
    if not _carries(controller, design, sense):
        yield Verdict(
            outcome=Outcome.REVIEW,
            message=f"nothing on {sense.near} but the amplifier's own parts: no load current flows in "
            f"{sense.part.reference}",
            parts=(sense.part.reference,),
            nets=(sense.near,),
            remedy=f"take the load's return to {sense.near}",
        )
        return
    yield Verdict(
        outcome=Outcome.PASS,
        message=f"amplifier {sensing.number} looks at {sense.part.reference} from {sense.near} to {sense.far}"
        + _what_flows(controller, design),
        parts=(sense.part.reference,),
        nets=(sense.near, sense.far),
        pins=(f"amplifier {sensing.number} in+", f"amplifier {sensing.number} in-"),
    )


def _carries(controller: Controller, design: Design, sense: SenseResistor) -> bool:
    """Tell whether anything can send a load's current through a sense resistor.

    That is a part of the power path, or a resistor from the output or a rail other than the reference.
    """
    for connection in design.circuit.connections(sense.near):
        part = connection.part
        if part is sense.part or part.reference == controller.reference:
            continue
        kind = design.circuit.kind(part)
        if kind not in ("resistor", "trimmer", "capacitor", "test point"):
            return True
        far = [net for net in design.circuit.other_nets(part, sense.near) if net != sense.far]
        outputs = [amplifier.output for amplifier in design.amplifiers(controller)]
        if kind == "resistor" and any(net in outputs or _is_rail(design, net) for net in far):
            return True
    return False


def _is_rail(design: Design, net: str) -> bool:
    potential = design.potential(net)
    return potential is not None and potential.origin not in ("ground", "reference")


def _what_flows(controller: Controller, design: Design) -> str:
    stage = design.power_stage(controller)
    sensed = stage.sensed if isinstance(stage, PowerStage) else ""
    return f", which carries the {sensed} current" if sensed else ""


@rule("current-limit.sense-voltage", level="warning", topic=_TOPIC)
def sense_voltage(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the sense voltage high enough for the amplifier and low enough for the output?

    What:
        Compares the amplifier's greatest offset with the threshold across the sense resistor, and tells
        what share of the output voltage the resistor takes at full load.
    Why:
        A threshold of a few offsets makes a limit that varies from unit to unit; a high one wastes power
        and, in the output's return, takes from the load's voltage.
    Formula:
        share = offset [V] / threshold [V]; drop = I(full load) [A] x R [ohm] / V(output) [V]
    Source:
        SLVS074 p.4 (offset 10 mV); the limit of 5 % is common practice, no source
    Remedy:
        Raise threshold and sense resistance together.
    Fails:
        R1 REF 2IN- 100k
        R2 2IN- 0 1k
        R3 RTN 2IN+ 1k
        R4 RTN 0 0.01
    Passes:
        R1 REF 2IN- 9.1k
        R2 2IN- 0 1k
        R3 RTN 2IN+ 1k
        R4 RTN 0 0.1
    """
    found = design.trip(controller)
    if not isinstance(found, Trip):
        return
    practice = controller.profile.practice("current-limit.offset-share")
    offset = controller.profile.figure("amplifier.offset").maximum or 0.0
    threshold = found.threshold.spread
    least = offset / (practice.maximum or 1.0)
    some = threshold.nominal > 0 and threshold.nominal >= offset
    share = percent(offset / threshold.nominal) if some else "more than all"
    message = (
        f"offset of {engineering(offset, 'V')} is {share} of the threshold "
        f"{engineering(threshold.nominal, 'V')}{_drop(controller, design)}"
    )
    verdict = judge(
        found.threshold,
        Limit(least, None, "V"),
        message,
        source=practice.source,
        remedy=f"raise the threshold to {engineering(least, 'V')} or more, and the sense resistor with it",
    )
    inside = threshold.nominal >= least
    yield replace(verdict, outcome=Outcome.PASS if inside else Outcome.REVIEW, level=None)


def _drop(controller: Controller, design: Design) -> str:
    load = design.full_load(controller)
    amplifier = next(a for a in design.amplifiers(controller) if a.use == "current")
    output = next((a.output for a in design.amplifiers(controller) if a.output), "")
    rail = design.rail(output)
    if load is None or rail is None or rail.voltage.nominal <= 0 or amplifier.sense is None:
        return ""
    resistance = design.nominal(amplifier.sense.part) or 0.0
    return f"; at full load it takes {percent(load * resistance / rail.voltage.nominal)} of {output}"


@rule("current-limit.sense-polarity", level="error", topic=_TOPIC)
def sense_polarity(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the current flow through the sense resistor in the direction that trips the limit?

    What:
        Solves for the current that makes the amplifier's inputs equal and compares its direction with the
        one in which the recognised power stage drives it.
    Why:
        With the wrong direction the sense voltage falls as the current rises, and the limit never takes
        over; below ground it also leaves the common-mode range.
    Formula:
        sign of the current that solves V(in+) - V(in-) = 0
    Source:
        SLVS074 p.4 (polarity, common-mode range down to -0.3 V)
    Remedy:
        Exchange the ends of the sense resistor, or the amplifier's inputs.
    Fails:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 VCC E1 E2 C2 VCC OUTCTRL REF LIM RTN 494
        M1 SW E1 0 0 NMOS
        L1 VCC SW 100u
        D1 SW VOUT DIODE
        J1 VCC RTN BATTERY
        R1 RTN 0 0.1
        R2 REF LIM 9.1k
        R3 LIM 0 1k
    Passes:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 VCC E1 E2 C2 VCC OUTCTRL REF LIM RTN 494
        M1 SW E1 0 0 NMOS
        L1 VCC SW 100u
        D1 SW VOUT DIODE
        J1 VOUT RTN PUMP
        R1 RTN 0 0.1
        R2 REF LIM 9.1k
        R3 LIM 0 1k
    """
    found, stage = design.trip(controller), design.power_stage(controller)
    if not isinstance(found, Trip) or not isinstance(stage, PowerStage) or not stage.sensed:
        return
    amplifier = next(a for a in design.amplifiers(controller) if a.use == "current")
    assert amplifier.sense is not None
    sense = amplifier.sense
    # Where the current enters at the far end, as from a supply, the near end is the lower one.
    far = design.potential(sense.far)
    from_supply = far is not None and far.spread.minimum > 0
    right = found.reversed == (stage.sensed == "input" or (stage.sensed == "switch" and from_supply))
    does = "brings the amplifier's inputs together" if right else "drives the amplifier's inputs apart"
    yield Verdict(
        outcome=Outcome.PASS if right else Outcome.FAIL,
        message=f"{stage.sensed} current in {sense.part.reference} {does}",
        parts=(sense.part.reference,),
        nets=(sense.near, sense.far),
        source="SLVS074 p.4",
        remedy="" if right else f"exchange the ends of {sense.part.reference}, or the amplifier's inputs",
    )


@rule("current-limit.pulse-by-pulse", level="warning", topic=_TOPIC)
def pulse_by_pulse(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is an error amplifier taken for a pulse-by-pulse limit?

    What:
        Finds a limit whose sense resistor carries the switch's pulsed current while an error amplifier
        compares it: the switch's own, or that of an input whose capacitor stands ahead of the resistor.
    Why:
        The amplifiers settle over many cycles, and the outputs are not latched within one: the output
        restarts as soon as the signal is gone. Such a limit follows an average, not the peak that
        saturates a transformer or kills a switch.
    Formula:
        none: what flows in the sense resistor
    Source:
        common practice, no source (no latch within a cycle)
    Remedy:
        Sense the averaged output current, or add a comparator with a latch on the dead-time pin.
    Fails:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 VCC E1 E2 C2 VCC OUTCTRL REF LIM SENSE 494
        M1 SW E1 SENSE SENSE NMOS
        L1 VCC SW 100u
        D1 SW VOUT DIODE
        J1 VOUT 0 PUMP
        R1 SENSE 0 0.1
    Passes:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 VCC E1 E2 C2 VCC OUTCTRL REF LIM SENSE 494
        M1 SW E1 0 0 NMOS
        L1 VCC SW 100u
        D1 SW VOUT DIODE
        J1 VOUT SENSE PUMP
        R1 SENSE 0 0.1
    """
    stage = design.power_stage(controller)
    amplifier = next((a for a in design.amplifiers(controller) if a.use == "current"), None)
    if amplifier is None or amplifier.sense is None or not isinstance(stage, PowerStage):
        return
    if not stage.sensed:
        return
    pulsed = stage.sensed == "switch" or _chopped(design, stage, amplifier.sense)
    reference = amplifier.sense.part.reference
    yield Verdict(
        outcome=Outcome.REVIEW if pulsed else Outcome.PASS,
        message=f"{reference} carries the {stage.sensed} current"
        + (
            ": an error amplifier follows its average, not its peaks"
            if pulsed
            else ", which has no pulses to miss"
        ),
        parts=(reference,),
        source="common practice, no source",
        remedy="sense the output current, or add a comparator with a latch" if pulsed else "",
    )


def _chopped(design: Design, stage: PowerStage, sense: SenseResistor) -> bool:
    """Tell whether a buck's input current is sensed behind the input capacitor, where it comes in pulses."""
    if stage.sensed != "input" or stage.topology != "buck":
        return False
    diodes = {pin.net for name in stage.rectifiers for pin in design.part(name).pins}
    behind = [net for net in (sense.near, sense.far) if net in diodes and net != stage.input]
    between = [part for net in behind for part in design.circuit.between(stage.input, net)]
    return bool(behind) and not any(design.circuit.kind(part) == "capacitor" for part in between)
