"""Soft start: whether the pulses grow from nothing, how long that takes, and what it leaves."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from math import inf, log

from ..grammar.netlist import Part
from ..lint.circuit.controllers import Controller
from ..lint.design import Design
from ..lint.estimate import Estimate, Unsolved
from ..lint.judge import judge, reports, unsolved
from ..lint.quantity import Spread, engineering
from ..lint.rule import rule
from ..lint.verdict import Limit, Outcome, Verdict

_PIN = ("dead time",)


def _capacitors(controller: Controller, design: Design, role: str) -> list[Part]:
    """Return the capacitors straight between the dead-time pin and the net of another role."""
    net, other = controller.net("dead time"), controller.net(role)
    if not net or not other or net == other:
        return []
    return [part for part in design.circuit.between(net, other) if design.circuit.kind(part) == "capacitor"]


@rule("soft-start.present", level="note", topic="soft start")
def present(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is there a soft start at all?

    What:
        Looks for a capacitor between the reference and the dead-time pin.
    Why:
        Without one the first pulses are as wide as the dead time allows: the output capacitors are charged
        with all the current that the limit lets pass, and the transformer may saturate.
    Formula:
        none: connectivity
    Source:
        SLVA001, soft start, from memory.
    Remedy:
        Put a capacitor from the reference to the dead-time pin, with a resistor from the pin to ground.
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
        Finds capacitors from the dead-time pin to ground where none goes to the reference, and soft-start
        capacitors without a resistor that discharges the pin.
    Why:
        The pin must start high (outputs off) and fall. A capacitor to ground makes it start low: full
        pulses at once, and later a slow pin. Other families want the capacitor to ground; this one is
        where the habit fails.
    Formula:
        none: connectivity
    Source:
        SLVA001, soft start, from memory.
    Remedy:
        Move the capacitor's other end from ground to the reference.
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
        parts = tuple(part.reference for part in to_ground)
        yield Verdict(
            outcome=Outcome.FAIL,
            message=f"{', '.join(parts)} holds {name} low while it charges: the first pulses are full width",
            parts=parts,
            pins=_PIN,
            source="SLVA001, from memory",
            remedy=f"move {parts[0]} from ground to the reference",
        )


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
        tau [s] = R [ohm] x C [F]; t [s] = tau x ln((V(REF) - V(end)) / (V(duty) - V(end)))
    Source:
        the brief; SLVA001, from memory (25 to 100 cycles).
    Remedy:
        Change the capacitor in the same ratio.
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
    if told is not None and told.soft_start is not None:
        wanted = told.soft_start
        measured, what = (
            (constant, "time constant") if to_duty is None else (to_duty, "until the working duty")
        )
        yield judge(
            measured,
            Limit(wanted.minimum, wanted.maximum if wanted.maximum > wanted.minimum else None, "s"),
            f"soft start {measured.spread} {what}",
            source="brief: soft_start",
            pins=_PIN,
            remedy=_capacitor_for(measured, wanted, capacitors[0], design),
        )
        return
    yield _in_cycles(controller, design, constant, to_duty)


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
    controller: Controller, design: Design, constant: Estimate, to_duty: Estimate | None
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
    verdict = judge(
        constant,
        Limit(least, most, "s"),
        f"{says}: {cycles:.0f} cycles",
        source=practice.source,
        pins=_PIN,
    )
    if verdict.outcome is Outcome.PASS:
        return verdict
    # A custom, not a limit. Too short a start strains parts, and a person judges; a long one only takes time.
    short = constant.spread.nominal < least
    outcome = Outcome.REVIEW if short else Outcome.INFORMATIONAL
    return replace(verdict, outcome=outcome, level=None)


def _capacitor_for(measured: Estimate, wanted: Spread, capacitor: Part, design: Design) -> str:
    value = design.nominal(capacitor)
    if value is None or measured.spread.nominal <= 0:
        return ""
    needed = value * wanted.nominal / measured.spread.nominal
    return (
        f"about {engineering(needed, 'F')} as {capacitor.reference} makes {engineering(wanted.nominal, 's')}"
    )
