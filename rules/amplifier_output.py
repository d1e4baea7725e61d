"""Error amplifiers: the feedback path, what hangs on their output, and the error of their inputs."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from math import isfinite

from ..lint.circuit.amplifiers import Amplifier
from ..lint.circuit.compensation import Compensation
from ..lint.circuit.controllers import Controller
from ..lint.circuit.loops import Regulation
from ..lint.design import Design
from ..lint.estimate import Estimate, Unsolved
from ..lint.judge import judge, unsolved
from ..lint.quantity import Spread, engineering, percent
from ..lint.rule import rule
from ..lint.verdict import Limit, Outcome, Verdict
from .error_amplifier import input_roles, mapped


@rule("amplifier.compensation", level="warning", topic="error amplifier")
def compensation(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the amplifier that regulates have a feedback path of its own?

    What:
        Looks for resistors and capacitors from FEEDBACK to the inverting input of the voltage amplifier,
        and prints them with the corner frequencies they make.
    Why:
        Without one the amplifier works at its full gain of thousands: with the output filter behind it
        the loop oscillates.
    Formula:
        corner [Hz] = 1 / (2 pi R [ohm] C [F]) of each resistor and capacitor in series
    Source:
        common practice, no source
    Remedy:
        Put a resistor and a capacitor in series from FEEDBACK to in-.
    Fails:
        R1 REF 1IN- 10k
        R2 VOUT 1IN+ 14k
        R3 1IN+ 0 10k
        [controllers.U1] output = "VOUT"
    Passes:
        R1 REF 1IN- 10k
        R2 VOUT 1IN+ 14k
        R3 1IN+ 0 10k
        R4 FEEDBACK N1 47k
        C1 N1 1IN- 10n
        [controllers.U1] output = "VOUT"
    """
    net = controller.net("feedback")
    if not net:
        return
    voltage = [a for a in mapped(controller, design) if a.use == "voltage"]
    paths = [design.compensation(net, amplifier.minus) for amplifier in voltage]
    for amplifier, path in zip(voltage, paths, strict=True):
        verdict = _feedback_path(controller, amplifier, net, path)
        if path is None and any(paths):
            says = f"{verdict.message}, as a limit beside the other amplifier may"
            yield replace(verdict, outcome=Outcome.INFORMATIONAL, message=says, remedy="")
        else:
            yield verdict


def _feedback_path(
    controller: Controller, amplifier: Amplifier, net: str, found: Compensation | None
) -> Verdict:
    pins = ("feedback", input_roles(amplifier)[1])
    names = [controller.pins[role].name for role in pins]
    if found is None:
        return Verdict(
            outcome=Outcome.FAIL,
            message=f"nothing joins {names[0]} to {names[1]}: the loop runs at the amplifier's full gain",
            nets=(net, amplifier.minus),
            pins=pins,
            source="common practice, no source",
            remedy=f"put a resistor and a capacitor in series from {names[0]} to {names[1]}",
        )
    corners = [f"{r} and {c} at {engineering(f, 'Hz')}" for r, c, f in found.corners]
    gain = "finite gain at rest" if found.direct else "integrating"
    return Verdict(
        outcome=Outcome.PASS,
        message=f"{', '.join(found.parts)} from {names[0]} to {names[1]}, {gain}"
        + (f"; corner of {', '.join(corners)}" if corners else ""),
        parts=found.parts,
        nets=(net, amplifier.minus),
        pins=pins,
        source="common practice, no source",
    )


@rule("amplifier.feedback-pin", level="warning", topic="error amplifier")
def feedback_pin(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Can the amplifiers and their inner sink move the feedback pin against what hangs on it?

    What:
        Computes the direct current between the pin and the parts on it, over the whole control range.
    Why:
        The amplifiers can only lift the pin and a small inner sink lowers it. A resistor that feeds more
        into the pin than the sink takes holds the outputs off; one that draws too much to ground keeps
        the amplifiers from shortening the pulse.
    Formula:
        I [A] out of the pin by nodal analysis, the pin anywhere in its control range
    Source:
        7500 class data sheet of a second source (0.3 mA into the pin); SLVS052 p.4 (2 mA out of it)
    Remedy:
        Raise the resistance of what hangs on the pin.
    Fails:
        R1 REF FEEDBACK 4.7k
    Passes:
        R1 REF FEEDBACK 47k
    """
    net = controller.net("feedback")
    if not net:
        return
    found = design.feedback_load(controller)
    if isinstance(found, Unsolved):
        yield unsolved(found, "current at the feedback pin", pins=("feedback",))
        return
    into = controller.profile.figure("feedback.external-sink")
    out = controller.profile.figure("feedback.source")
    verdict = judge(
        found.current,
        Limit(-(into.maximum or 0.0), out.minimum, "A"),
        f"{controller.pins['feedback'].name} delivers {found.current.spread} to what hangs on it",
        source=f"{into.source}; {out.source}",
        rating=True,
        pins=("feedback",),
        remedy="raise the resistances on the pin",
    )
    if found.untold and verdict.outcome is Outcome.PASS:
        message = f"{verdict.message}; {'; '.join(found.untold)}"
        needs = ("a look by hand at what these parts draw from the pin, or feed into it",)
        verdict = replace(verdict, outcome=Outcome.OPEN, message=message, needs=needs)
    yield verdict


@rule("amplifier.input-error", level="note", topic="error amplifier")
def input_error(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Do the bias currents of the amplifier move the output by more than they should?

    What:
        Takes the share of the two bias currents from the spread of the output voltage.
    Why:
        A bias current through unequal source resistances moves the set point, and lower resistances cure
        that. The offset, which no resistor cures, is told beside it.
    Formula:
        error = bias current [A] x difference of the source resistances [ohm] / set point [V]
    Source:
        SLVS074 p.4 (bias current, offset); the limit of 0.5 % is common practice, no source
    Remedy:
        Make the resistance seen by both inputs alike, or lower the divider's resistance.
    Fails:
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 140k
        R3 1IN+ 0 100k
        [controllers.U1] output = "VOUT"
    Passes:
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 14k
        R3 1IN+ 0 10k
        [controllers.U1] output = "VOUT"
    """
    found = design.regulation(controller)
    if not isinstance(found, Regulation):
        return
    amplifier = design.regulating(controller)
    assert amplifier is not None  # it is the one that regulates
    spread = found.output.spread
    if not isfinite(spread.maximum - spread.minimum) or spread.minimum <= 0 <= spread.maximum:
        return  # feedback.output-voltage speaks of a loop that regulates to nothing
    half_width = (spread.maximum - spread.minimum) / 2 / abs(spread.nominal)
    bias = half_width * sum(
        share for label, share in found.output.contributions if label.endswith(" current")
    )
    offset = half_width * sum(
        share for label, share in found.output.contributions if label.endswith(" offset")
    )
    error = Spread(0.0, bias, bias, "")
    practice = controller.profile.practice("amplifier.set-point-error")
    verdict = judge(
        Estimate(error, error, parts=found.output.parts),
        practice.limit(),
        f"bias currents move the output by up to {percent(bias)}, the offset by {percent(offset)}",
        source=practice.source,
        pins=input_roles(amplifier),
        remedy="lower the divider's resistances, or make both inputs see the same",
    )
    yield replace(verdict, measured=None, limit=None) if verdict.outcome is Outcome.PASS else verdict
