"""Soft start: whether the pulses grow from nothing, how long that takes, and what it leaves."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from math import inf, log

from ..grammar.netlist import Part
from ..lint.circuit.controllers import Controller
from ..lint.circuit.diodes import diode_nets
from ..lint.circuit.loops import Regulation, Trip
from ..lint.circuit.power_stage import PowerStage
from ..lint.design import Design
from ..lint.estimate import Estimate, Unsolved
from ..lint.judge import judge, reports, unsolved
from ..lint.preferred import nearest
from ..lint.quantity import Spread, engineering, percent
from ..lint.rule import rule
from ..lint.verdict import Limit, Outcome, Verdict

_PIN = ("dead time",)

# What is sold as a soft-start capacitor (common practice, no source).
_LEAST_CAPACITANCE, _GREATEST_CAPACITANCE = 1e-11, 1e-3


def _capacitors(controller: Controller, design: Design, role: str) -> list[Part]:
    """Return the capacitors between the net of a role and the dead-time pin, or what leads to the pin."""
    net, other = controller.net("dead time"), controller.net(role)
    if not net or not other:
        return []
    between = [
        part for near in _leading_to(controller, design, net) for part in design.circuit.between(near, other)
    ]
    return [part for part in between if design.circuit.kind(part) == "capacitor"]


def _leading_to(controller: Controller, design: Design, net: str) -> tuple[str, ...]:
    """Return the nets joined to the pin's by resistors, or by a diode that conducts towards the pin."""
    nets = dict.fromkeys(design.reach(controller, net).nets)
    for near in tuple(nets):
        for part in (connection.part for connection in design.circuit.connections(near)):
            if design.circuit.kind(part) == "diode" and len(part.pins) == 2:
                anode, cathode = diode_nets(part)
                nets.update(dict.fromkeys(design.reach(controller, anode).nets if cathode == near else ()))
    return tuple(nets)


@rule("soft-start.present", level="note", topic="soft start")
def present(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is there a soft start at all?

    What:
        Looks for a capacitor from the reference to the dead-time pin, be it straight, through a resistor,
        or through a diode that conducts towards the pin.
    Why:
        Without one the first pulses are as wide as the dead time allows: the output capacitors are charged
        with all the current that the limit lets pass, and the transformer may saturate.
    Formula:
        none: connectivity
    Source:
        SLVA001, soft start, from memory
    Remedy:
        Put a capacitor from the reference to the dead-time pin, with a resistor from the pin to ground.
    Fails:
        R1 DTC 0 1k
    Passes:
        R1 DTC 0 1k
        C1 REF DTC 10u
    """
    if not controller.net("dead time"):
        return
    found = _capacitors(controller, design, "reference")
    name = controller.pins["dead time"].name
    parts = tuple(part.reference for part in found)
    if found:
        message = f"{', '.join(parts)} from the reference to {name} starts the pulses from nothing"
        yield Verdict(outcome=Outcome.PASS, message=message, parts=parts, pins=_PIN)
        return
    yield Verdict(
        outcome=Outcome.FAIL,
        message=f"no capacitor from the reference to {name}: the first pulses are full width",
        pins=_PIN,
        source="SLVA001, from memory",
        remedy=f"put a capacitor from the reference to {name}, with a resistor from {name} to ground",
    )


@rule("soft-start.wiring", level="error", topic="soft start")
def wiring(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the soft-start capacitor go to the reference, as this class needs?

    What:
        Finds capacitors from the dead-time pin to ground where none goes to the reference. One that settles
        within a cycle of the oscillator filters noise; one that takes longer, but less than a soft start
        does, is for a person to judge.
    Why:
        The pin must start high (outputs off) and fall. A capacitor to ground makes it start low: full
        pulses at once, and later a slow pin. Other families want the capacitor to ground; this one is
        where the habit fails.
    Formula:
        none: connectivity
    Source:
        SLVA001, soft start, from memory
    Remedy:
        Move the capacitor's other end from ground to the reference.
    Fails:
        R1 REF DTC 10k
        R2 DTC 0 1k
        C1 DTC 0 10u
    Passes:
        R1 REF DTC 10k
        R2 DTC 0 1k
        C1 REF DTC 10u
    """
    if not controller.net("dead time"):
        return
    name = controller.pins["dead time"].name
    to_reference = _capacitors(controller, design, "reference")
    to_ground = _capacitors(controller, design, "ground")
    if to_reference:
        parts = tuple(part.reference for part in to_reference)
        message = f"{', '.join(parts)} lifts {name} at the start and lets it fall"
        yield Verdict(outcome=Outcome.PASS, message=message, parts=parts, pins=_PIN)
    elif to_ground:
        yield _to_ground(controller, design, to_ground)


def _to_ground(controller: Controller, design: Design, capacitors: list[Part]) -> Verdict:
    """Judge capacitors from the dead-time pin to ground by how long they hold the pin low."""
    name = controller.pins["dead time"].name
    parts = tuple(part.reference for part in capacitors)
    cycles = max(_cycles(controller, design, part) for part in capacitors)
    if cycles < 1:
        message = f"{', '.join(parts)} filters {name} within a cycle"
        return Verdict(outcome=Outcome.PASS, message=message, parts=parts, pins=_PIN)
    least = controller.profile.figure("soft-start.cycles").minimum or 0.0
    verdict = Verdict(
        outcome=Outcome.FAIL,
        message=f"{', '.join(parts)} holds {name} low while it charges: the first pulses are full width",
        parts=parts,
        pins=_PIN,
        source="SLVA001, from memory",
        remedy=f"move {parts[0]} from ground to the reference",
    )
    if cycles >= least:
        return verdict
    message = f"{', '.join(parts)} holds {name} low for {engineering(cycles)} cycles: right for a filter only"
    return replace(verdict, outcome=Outcome.REVIEW, message=message)


def _cycles(controller: Controller, design: Design, capacitor: Part) -> float:
    """Return a capacitor's time constant in cycles of the oscillator, infinite where it is not known."""
    constant, timing = design.time_constant(capacitor), design.timing(controller)
    if isinstance(constant, Unsolved) or isinstance(timing, Unsolved):
        return inf
    return constant.spread.nominal * timing.frequency.spread.nominal


@rule("soft-start.time", level="warning", topic="soft start")
def time(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the soft start long enough to spare the parts, and no longer than wanted?

    What:
        Computes the time constant of the soft-start capacitor with the resistance that it sees, in seconds
        and in cycles of the oscillator, and the time until the dead time has shrunk to what the working
        duty leaves. Held against `soft_start` of the brief, else against the customary number of cycles.
    Why:
        Too short, and the current limit does the starting; too long, and a supervisor gives up, or the
        load sees half a voltage for a while.
    Formula:
        tau [s] = R [ohm] x C [F]; t [s] = tau x ln((V(REF) - V(end)) / (V(duty) - V(end)));
        current that charges the output [A] = C [F] x V [V] / t [s]
    Source:
        the brief; SLVA001, from memory (25 to 100 cycles)
    Remedy:
        Change the capacitor in the same ratio.
    Fails:
        R1 DTC 0 1k
        C1 REF DTC 10n
        R2 RT 0 22k
        C2 CT 0 1n
    Passes:
        R1 DTC 0 1k
        C1 REF DTC 1u
        R2 RT 0 22k
        C2 CT 0 1n
    """
    capacitors = _capacitors(controller, design, "reference")
    if not capacitors:
        return
    constant = design.time_constant(capacitors[0])
    if isinstance(constant, Unsolved):
        yield unsolved(constant, "soft-start time", pins=_PIN)
        return
    told = design.told(controller)
    to_duty = _time_to_duty(controller, design, constant)
    measured = constant if to_duty is None else to_duty
    charging = _charging(controller, design, measured.spread.nominal)
    if told is None or told.soft_start is None:
        verdict = _in_cycles(controller, design, constant, to_duty, capacitors[0])
        yield replace(verdict, message=verdict.message + charging)
        return
    wanted = told.soft_start
    what = "as time constant" if to_duty is None else "until the working duty"
    yield judge(
        measured,
        Limit(wanted.minimum, wanted.maximum if wanted.maximum > wanted.minimum else None, "s"),
        f"soft start {measured.spread} {what}{charging}",
        source="brief: soft_start",
        pins=_PIN,
        remedy=_capacitor_for(measured, wanted, capacitors[0], design),
    )


def _charging(controller: Controller, design: Design, seconds: float) -> str:
    """Return what charging the output takes meanwhile, on average, and its share of the current limit."""
    found, farads = design.regulation(controller), design.output_capacitance(controller)
    if not isinstance(found, Regulation) or not farads or seconds <= 0:
        return ""
    current = farads * abs(found.output.spread.nominal) / seconds
    trip = design.trip(controller)
    share = ""
    if isinstance(trip, Trip) and trip.current.spread.nominal > 0:
        share = f", {percent(current / trip.current.spread.nominal)} of the current limit"
    return f"; charging the output's {engineering(farads, 'F')} takes {engineering(current, 'A')}{share}"


def _time_to_duty(controller: Controller, design: Design, constant: Estimate) -> Estimate | None:
    """Return the time until the pin has fallen to where the working duty begins, None if untold."""
    net = controller.net("dead time")
    duty = design.needed_duty(controller)
    end = design.voltage(net) if net else None
    if duty is None or end is None or isinstance(end, Unsolved):
        return None
    start = controller.profile.figure("reference.voltage").spread().nominal
    models = controller.profile.dead_time_models
    reached = sum((1 - duty.nominal - model.at_zero) / model.per_volt for model in models) / len(models)
    final = end.spread.nominal
    if not final < reached < start:
        return None
    return constant.scaled(log((start - final) / (reached - final)))


def _in_cycles(
    controller: Controller, design: Design, constant: Estimate, to_duty: Estimate | None, capacitor: Part
) -> Verdict:
    says = f"soft start with a time constant of {constant.spread}"
    if to_duty is not None:
        says += f", {engineering(to_duty.spread.nominal, 's')} until the working duty"
    timing = design.timing(controller)
    if isinstance(timing, Unsolved):
        return reports(constant, says, pins=_PIN)
    period = 1 / timing.frequency.spread.nominal
    cycles = constant.spread.nominal / period
    practice = controller.profile.figure("soft-start.cycles")
    least, most = (practice.minimum or 0.0) * period, (practice.maximum or inf) * period
    usual = practice.spread().nominal
    verdict = judge(
        constant,
        Limit(least, most, "s"),
        f"{says}: {cycles:.0f} cycles",
        source=practice.source,
        pins=_PIN,
        remedy=_capacitor_for(constant, Spread.exact(usual * period, "s"), capacitor, design),
    )
    if verdict.outcome is Outcome.PASS:
        return verdict
    # A custom, not a limit. Too short a start strains parts, and a person judges; a long one only takes time.
    short = constant.spread.nominal < least
    if short:
        return replace(verdict, outcome=Outcome.REVIEW, level=None)
    return replace(verdict, outcome=Outcome.INFORMATIONAL, level=None, remedy="")


def _capacitor_for(measured: Estimate, wanted: Spread, capacitor: Part, design: Design) -> str:
    """Return the preferred capacitor nearest to the wanted time, and the time that it makes."""
    value, time_now = design.nominal(capacitor), measured.spread.nominal
    if value is None or time_now <= 0:
        return ""
    needed = value * wanted.nominal / time_now
    if not _LEAST_CAPACITANCE <= needed <= _GREATEST_CAPACITANCE:
        return f"no capacitor makes {engineering(wanted.nominal, 's')} here: change the resistors"
    preferred = nearest(needed, "E6")
    makes = engineering(time_now * preferred / value, "s")
    return f"{engineering(preferred, 'F')} as {capacitor.reference} makes {makes} (E6)"


@rule("soft-start.steady-state", level="warning", topic="soft start")
def steady_state(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the soft start let go of the duty once it is over?

    What:
        Takes the pin's voltage after the start as a share of the reference, and the duty that it leaves
        against the duty that the power stage needs at the lowest input.
    Why:
        The resistors that discharge the soft-start capacitor also hold the pin up afterwards. Too high,
        and the converter never reaches its full pulse: it starts, and then fails at the lowest input.
    Formula:
        share = V(end) [V] / V(reference) [V], about 1 to 10 in practice; duty left = 1 - dead time share
    Source:
        SLVA001, from memory (resistors 1 to 10); volt-second balance of the inductor
    Remedy:
        Lower the resistor from the pin to ground, or raise the one from the reference.
    Fails:
        R1 REF DTC 1k
        R2 DTC 0 1k
        C1 REF DTC 1u
    Passes:
        R1 REF DTC 10k
        R2 DTC 0 1k
        C1 REF DTC 1u
    """
    net = controller.net("dead time")
    capacitors = _capacitors(controller, design, "reference")
    end = design.voltage(net) if net and capacitors else None
    if end is None or isinstance(end, Unsolved):
        return
    reference = controller.profile.figure("reference.voltage").spread().nominal
    share, left = end.spread.nominal / reference, design.dead_time(controller, end).share.spread.maximum
    needed = design.needed_duty(controller)
    stage = design.power_stage(controller)
    if needed is None and isinstance(stage, PowerStage) and stage.topology in _LIMITED_DUTY:
        return  # half the period has to be left for the transformer's reset, and the turns ratio is not told
    most = 1 - needed.maximum if needed is not None else _MOST_DEAD_TIME
    fits = left <= most
    against = (
        f"{percent(needed.maximum)} is needed" if needed is not None else f"{percent(1 - most)} is usual"
    )
    yield Verdict(
        outcome=Outcome.PASS if fits else Outcome.REVIEW,
        message=f"after the start {percent(share)} of the reference stays on the pin: "
        f"{percent(1 - left)} of duty is left, {against}",
        parts=(*(part.reference for part in capacitors), *end.parts),
        pins=_PIN,
        source="SLVA001, from memory",
        remedy="" if fits else "lower the resistor from the pin to ground",
    )


# Single switches at a transformer that must empty again within the period.
_LIMITED_DUTY = frozenset({"forward", "flyback"})

# Where no duty is told: more dead time after the start is seldom meant (common practice, no source).
_MOST_DEAD_TIME = 0.5
