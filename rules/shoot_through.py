"""Dead time against the switches: is the one off before the other turns on?"""

from __future__ import annotations

from collections.abc import Iterable

from ..lint.circuit.controllers import Controller
from ..lint.circuit.drive import Driven
from ..lint.circuit.output_drive import OutputDrive
from ..lint.circuit.power_stage import PowerStage
from ..lint.design import Design
from ..lint.estimate import Estimate, Unsolved
from ..lint.quantity import engineering
from ..lint.rule import rule
from ..lint.verdict import Outcome, Verdict

_ALTERNATING = frozenset({"push-pull", "half-bridge", "full-bridge"})

# A gate that a resistor empties is down to a tenth after this many time constants.
_TO_A_TENTH = 2.3

# Gates of power transistors are not smaller than this (common practice, no source).
_SMALL_GATE = 1e-9


@rule("dead-time.shoot-through", level="error", topic="dead time")
def shoot_through(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is each switch off before the other one turns on?

    What:
        In stages whose switches alternate: the greatest gate capacitance that the gate's own resistors
        empty to a tenth within the least dead time. A gate that a driver empties is named, for its time
        is the driver's own.
    Why:
        While both switches conduct, the supply is shorted through them, or the transformer is, once every
        period. Nothing else limits that current in time.
    Formula:
        C [F] = dead time, least [s] / (2.3 x R [ohm])
    Source:
        discharge of a capacitor to a tenth; gates of 1 nF and more are common practice, no source
    Remedy:
        Raise the dead time, lower the gate's discharge resistance, or empty the gate with a transistor.
    Fails:
        U1 1IN+ 1IN- FEEDBACK 0 CT RT 0 VCC E1 E2 VCC VCC REF REF 2IN- 2IN+ 494
        R1 RT 0 12k
        C1 CT 0 1n
        M1 DRAIN1 E1 0 0 NMOS
        M2 DRAIN2 E2 0 0 NMOS
        T1 DRAIN1 VCC DRAIN2 SEC 0 PRESS
        D1 SEC VOUT DIODE
        R2 E1 0 1k
        R3 E2 0 1k
    Passes:
        U1 1IN+ 1IN- FEEDBACK 0 CT RT 0 VCC E1 E2 VCC VCC REF REF 2IN- 2IN+ 494
        R1 RT 0 12k
        C1 CT 0 1n
        M1 DRAIN1 E1 0 0 NMOS
        M2 DRAIN2 E2 0 0 NMOS
        T1 DRAIN1 VCC DRAIN2 SEC 0 PRESS
        D1 SEC VOUT DIODE
        R2 E1 0 47
        R3 E2 0 47
    """
    stage, net = design.power_stage(controller), controller.net("dead time")
    if not isinstance(stage, PowerStage) or stage.topology not in _ALTERNATING or not net:
        return
    voltage = design.voltage(net) if design.has_path(net) else None
    if voltage is None or isinstance(voltage, Unsolved):
        return  # dead-time.driven or dead-time.range speaks of it
    seconds = design.dead_time(controller, voltage).seconds
    if seconds is None:
        return  # oscillator.frequency says what is missing
    for switch in stage.switches:
        yield _off_in_time(controller, design, switch.driven, seconds)


def _off_in_time(controller: Controller, design: Design, driven: Driven, seconds: Estimate) -> Verdict:
    reference, least = driven.transistor.reference, seconds.spread.minimum
    if driven.transistor.field_effect is False:
        message = f"{reference} has {engineering(least, 's')} of dead time to turn off, storage time included"
        return Verdict(outcome=Outcome.INFORMATIONAL, message=message, parts=(reference,))
    within = f"within the least dead time of {engineering(least, 's')}"
    solver = design.output_drive(controller)
    active = solver.discharger(driven)
    if active:
        message = f"{active} has {engineering(least, 's')} of dead time to empty the gate of {reference}"
        return Verdict(outcome=Outcome.INFORMATIONAL, message=message, parts=(active, reference))
    found = solver.discharge(driven)
    between = _transformers(design, found) if _both_ways(solver, driven) else ""
    if between:
        message = f"{between} drives the gate of {reference}: whether it empties it {within} is not computed"
        return Verdict(outcome=Outcome.INFORMATIONAL, message=message, parts=(reference,))
    if isinstance(found, Unsolved) or found.spread.maximum <= 0:
        return Verdict(
            outcome=Outcome.REVIEW,
            message=f"nothing is seen to empty the gate of {reference} {within}",
            parts=(reference,),
            remedy="empty the gate with a resistor to its source, or with a transistor",
        )
    resistance = found.spread.maximum
    capacitance = least / (_TO_A_TENTH * resistance)
    emptied = capacitance >= _SMALL_GATE
    return Verdict(
        outcome=Outcome.PASS if emptied else Outcome.REVIEW,
        message=f"{engineering(resistance, 'ohm')} empties up to {engineering(capacitance, 'F')} of gate of "
        f"{reference} {within}",
        parts=tuple(dict.fromkeys((reference, *found.parts))),
        pins=("dead time",),
        formula=f"{engineering(least, 's')} / (2.3 x {engineering(resistance, 'ohm')})",
        assumptions=found.assumptions,
        source="common practice, no source",
        remedy="" if emptied else "raise the dead time, or lower the gate's discharge resistance",
    )


def _transformers(design: Design, found: Estimate | Unsolved) -> str:
    """Return the transformers that keep a gate's discharge from being solved, empty for none."""
    parts = found.parts if isinstance(found, Unsolved) else ()
    return ", ".join(name for name in parts if design.circuit.kind(design.part(name)) == "transformer")


def _both_ways(solver: OutputDrive, driven: Driven) -> bool:
    """Tell whether a driver has a counterpart that pulls the other way, joined at base and emitter."""
    transistors = solver.drive.transistors
    drivers = [transistors[name] for name in driven.drivers if name in transistors]
    return any(
        (one.control, one.common) == (other.control, other.common) and one.polarity != other.polarity
        for one in drivers
        for other in transistors.values()
    )
