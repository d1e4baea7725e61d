"""Output mode: single-ended or push-pull, as the output-control pin sets it, and who uses the outputs."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace

from ..lint.circuit.controllers import Controller
from ..lint.circuit.outputs import OutputTransistor, output_transistors
from ..lint.circuit.power_stage import NotRecognised
from ..lint.design import Design
from ..lint.estimate import Estimate, Unsolved
from ..lint.judge import missing, unsolved
from ..lint.rule import rule
from ..lint.verdict import Outcome, Verdict

_PIN = ("output control",)
_TIES = frozenset({"ground", "reference"})

# Topologies whose switches take turns: they want the two outputs out of phase.
_TAKE_TURNS = ("push-pull", "half-bridge", "full-bridge")

_FUNCTION_TABLE = "function table of the 494 class, from memory"


@rule("output-mode.wiring", level="error", topic="output mode")
def wiring(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the output-control pin tied to ground or to the reference, as a fixed condition?

    What:
        Looks at the pin's net: ground (outputs in phase, single-ended) or the reference (outputs take
        turns, push-pull), directly or through a small resistor. Anything else is computed, the pin's own
        current included, and named with the voltage it makes.
    Why:
        The pin feeds the gates that steer the pulses and has no pull device of its own. Open or between
        the two states, the mode is left to noise: pulses may come at one output, both, or none.
    Formula:
        V [V] by nodal analysis, pin current of 0 .. 3.5 mA at the reference included
    Source:
        function table of the 494 class, from memory; SLVS074 p.5 (pin current); the 100 ohm up to which a
        resistor counts as a tie: common practice, no source
    Remedy:
        Tie the pin to ground for single-ended, to the reference for push-pull.
    Fails:
        R1 OUTCTRL REF 10k
    Passes:
        R1 OUTCTRL REF 0
    """
    net = controller.net("output control")
    if net is None:
        return
    tied = _tied_to(controller, design, net) if net else None
    if tied is not None:
        yield _tied(controller, design, net, *tied)
        return
    if not net or not design.has_path(net):
        yield _undefined(controller, net, "hangs open: nothing sets the mode")
        return
    voltage = design.voltage(net)
    if isinstance(voltage, Unsolved):
        yield unsolved(voltage, "voltage at the output-control pin", pins=_PIN)
        return
    yield _computed(controller, design, net, voltage)


def _tied_to(controller: Controller, design: Design, net: str) -> tuple[str, str] | None:
    """Return the net that the pin is tied to and the resistor in between ("" for none), or None."""
    potential = design.potential(net)
    if potential is not None:
        return (net, "") if potential.origin in _TIES else None
    most = controller.profile.practice("output-control.series").maximum
    assert most is not None
    for connection in design.circuit.connections(net):
        part = connection.part
        value = design.circuit.value(part)
        small = value is not None and value.spread.nominal <= most
        link = design.circuit.kind(part) in ("jumper", "fuse")
        if link or (design.circuit.kind(part) == "resistor" and small):
            for end in design.circuit.other_nets(part, net):
                known = design.potential(end)
                if known is not None and known.origin in _TIES:
                    return end, part.reference
    return None


def _tied(controller: Controller, design: Design, net: str, end: str, through: str) -> Verdict:
    mode = "single-ended" if design.is_ground(end) else "push-pull"
    way = f" through {through}" if through else ""
    return Verdict(
        outcome=Outcome.PASS,
        message=f"{controller.pins['output control'].name} is tied to {end}{way}: {mode} mode",
        parts=(through,) if through else (),
        nets=tuple(dict.fromkeys((net, end))),
        pins=_PIN,
        source=_FUNCTION_TABLE,
    )


def _undefined(controller: Controller, net: str, what: str) -> Verdict:
    pin = controller.pins["output control"]
    return Verdict(
        outcome=Outcome.FAIL,
        message=f"{pin.name} {what}",
        nets=(net,) if net else (),
        pins=_PIN,
        places=(pin.place,),
        source=_FUNCTION_TABLE,
        remedy=f"tie {pin.name} to ground for single-ended, to the reference for push-pull",
    )


def _computed(controller: Controller, design: Design, net: str, voltage: Estimate) -> Verdict:
    """Judge a pin that is tied to neither: by the state that its voltage makes, if any."""
    name = controller.pins["output control"].name
    mode = design.output_mode(controller)
    says = f"{name} at {voltage.spread}"
    if mode is None:
        verdict = _undefined(controller, net, f"at {voltage.spread} lies between the two states")
    else:
        verdict = Verdict(
            outcome=Outcome.REVIEW,
            message=f"{says} reads as {mode}, but the pin is not tied to ground or to the reference",
            remedy=f"tie {name} straight to {'ground' if mode == 'single-ended' else 'the reference'}",
        )
    return replace(
        verdict,
        measured=voltage.spread,
        parts=voltage.parts,
        nets=tuple(dict.fromkeys((net, *voltage.nets))),
        pins=_PIN,
        formula=voltage.formula,
        contributions=voltage.contributions,
        assumptions=voltage.assumptions,
        source=_FUNCTION_TABLE,
    )


@rule("output-mode.topology", level="error", topic="output mode")
def topology(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the output mode fit the topology?

    What:
        Compares the mode that the output-control pin sets with the topology of the brief, or else with
        the one that is recognised in the netlist: single-ended wants the outputs in phase; push-pull,
        half-bridge and full-bridge want them to take turns. One output alone in push-pull mode is known
        practice where the duty must stay below one half (forward converters): that is for a person to
        judge.
    Why:
        In phase, the two switches of a push-pull stage or of a bridge leg are on together, which shorts
        the supply through the winding or the leg. Taking turns, a single switch gets every other pulse.
    Formula:
        at ground: f(output) = f(oscillator); at the reference: f(output) = f(oscillator) / 2
    Source:
        function table of the 494 class, from memory; SLVS074 p.11 (frequency in push-pull)
    Remedy:
        Tie the output-control pin to the other end.
    Fails:
        R1 OUTCTRL 0 0
        [controllers.U1] topology = "push-pull"
    Passes:
        R1 OUTCTRL REF 0
        [controllers.U1] topology = "push-pull"
    """
    mode = design.output_mode(controller)
    if mode is None:
        return  # output-mode.wiring speaks of it
    found, whose, evidence = _topology(controller, design)
    if not found:
        need = design.missing(controller, "topology")
        yield missing(need, "output mode against the topology, which is not recognised in the netlist")
        return
    verdict = Verdict(
        outcome=Outcome.PASS,
        message=f"{mode} mode, and {whose} is {found}",
        nets=tuple(filter(None, (controller.net("output control"),))),
        pins=_PIN,
        assumptions=evidence,
        source=_FUNCTION_TABLE,
    )
    yield verdict if _fits(mode, found) else _misfit(controller, design, verdict, found)


def _topology(controller: Controller, design: Design) -> tuple[str, str, tuple[str, ...]]:
    """Return the topology in the brief's words ("" for none), whose it is, and the evidence for it."""
    told = design.told(controller)
    if told is not None and told.topology is not None:
        return told.topology, "the brief's topology", ()
    stage = design.power_stage(controller)
    if isinstance(stage, NotRecognised):
        return "", "", ()
    return stage.family, f"the power stage ({stage.topology})", stage.evidence


def _fits(mode: str, topology: str) -> bool:
    return (mode == "push-pull") == (topology in _TAKE_TURNS)


def _misfit(controller: Controller, design: Design, verdict: Verdict, found: str) -> Verdict:
    """Say what a mode does to a topology that it does not fit."""
    name = controller.pins["output control"].name
    if found in _TAKE_TURNS:
        message, remedy = (
            f"{verdict.message}: the switches would be on together",
            f"tie {name} to the reference",
        )
        return replace(verdict, outcome=Outcome.FAIL, message=message, remedy=remedy)
    if len(_live(_outputs(controller, design))) == 1:
        message = f"{verdict.message}: one output gives every other pulse, at a duty below one half"
        remedy = f"tie {name} to ground, unless meant so"
        return replace(verdict, outcome=Outcome.REVIEW, message=message, remedy=remedy)
    message = f"{verdict.message}: pulses take turns"
    return replace(verdict, outcome=Outcome.FAIL, message=message, remedy=f"tie {name} to ground")


def _outputs(controller: Controller, design: Design) -> tuple[OutputTransistor, OutputTransistor]:
    return output_transistors(design.circuit, design.known, controller)


def _live(outputs: Sequence[OutputTransistor]) -> list[OutputTransistor]:
    return [output for output in outputs if output.live]


@rule("output-mode.outputs-used", level="error", topic="output mode")
def outputs_used(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Are the two outputs used as their mode allows?

    What:
        Push-pull: both outputs drive, and drive different nets. Single-ended: one drives and the other is
        left open or tied off, or both are joined, collector to collector and emitter to emitter.
    Why:
        In push-pull mode joined outputs undo the steering, and an unused one loses every other pulse. In
        phase, joined outputs share the current only where both their ends are joined.
    Formula:
        I(joined) [A] <= 2 x 0.2 A
    Source:
        function table of the 494 class, from memory; paralleled outputs: SLVS074, from memory
    Remedy:
        Connect the second output, or join both ends, or tie the output-control pin to the other end.
    Fails:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 0 0 C2 VCC REF REF 2IN- 2IN+ 494
        R1 VCC C1 1k
    Passes:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 0 0 C2 VCC REF REF 2IN- 2IN+ 494
        R1 VCC C1 1k
        R2 VCC C2 1k
    """
    outputs = _outputs(controller, design)
    mode = design.output_mode(controller)
    if mode is None or any(output.use == "unmapped" for output in outputs):
        return  # output-mode.wiring or connections.controller-found speaks of it
    outcome, message, remedy = _use(controller, design, mode, outputs)
    yield Verdict(
        outcome=outcome,
        message=f"{mode} mode: {message}",
        nets=tuple(
            dict.fromkeys(net for output in outputs for net in (output.collector, output.emitter) if net)
        ),
        pins=tuple(pin for output in outputs for pin in output.pins),
        source=_FUNCTION_TABLE,
        remedy=remedy,
    )


def _use(
    controller: Controller, design: Design, mode: str, outputs: Sequence[OutputTransistor]
) -> tuple[Outcome, str, str]:
    live = _live(outputs)
    halves = [output for output in outputs if output.use in ("incomplete", "across")]
    if halves:
        return _half_connected(halves[0], live)
    if not live:
        return Outcome.FAIL, "neither output drives anything", "connect an output to the power stage"
    if mode == "push-pull":
        return _taking_turns(controller, design, live)
    return _in_phase(live)


def _half_connected(output: OutputTransistor, live: Sequence[OutputTransistor]) -> tuple[Outcome, str, str]:
    """Speak of an output transistor that cannot carry a pulse the way it is connected."""
    which = f"output {output.number}"
    if output.use == "across":
        says = f"{which} stands straight between {output.collector} and {output.emitter}"
        return Outcome.FAIL, f"{says}: each pulse shorts them", f"put a load into {which}"
    says = f"the {output.hanging} of {which} hangs open, and its other end drives"
    remedy = f"connect the {output.hanging} of {which}, or leave both its pins open"
    return (Outcome.REVIEW if live else Outcome.FAIL), says, remedy


def _taking_turns(
    controller: Controller, design: Design, live: Sequence[OutputTransistor]
) -> tuple[Outcome, str, str]:
    """Judge push-pull mode: both outputs, each on its own net."""
    if len(live) == 2:
        if not set(live[0].drives).isdisjoint(live[1].drives):
            says = "the two outputs are joined, which undoes the taking of turns"
            return Outcome.FAIL, says, "separate the outputs, or tie the output-control pin to ground"
        return Outcome.PASS, f"the outputs take turns at {_at(live[0])} and {_at(live[1])}", ""
    asked, _, _ = _topology(controller, design)
    says = f"output {live[0].number} alone drives, and every other pulse is lost"
    if asked in _TAKE_TURNS:
        return Outcome.FAIL, says, f"connect output {3 - live[0].number} to the other switch"
    if asked == "single-ended":
        return Outcome.PASS, f"{says}: output-mode.topology judges it", ""
    return Outcome.REVIEW, says, "tie the output-control pin to ground, or connect the second output"


def _in_phase(live: Sequence[OutputTransistor]) -> tuple[Outcome, str, str]:
    """Judge single-ended mode: one output, or both joined at both ends."""
    if len(live) == 1:
        return Outcome.PASS, f"output {live[0].number} drives {_at(live[0])}, the other is not used", ""
    if _joined(live):
        return Outcome.PASS, f"both outputs are joined and drive {_at(live[0])}", ""
    says = f"the outputs pulse together at {_at(live[0])} and {_at(live[1])}"
    return Outcome.REVIEW, says, "join the outputs at both ends, unless two loads are meant to pulse together"


def _joined(outputs: Sequence[OutputTransistor]) -> bool:
    one, other = outputs
    return one.collector == other.collector and one.emitter == other.emitter


def _at(output: OutputTransistor) -> str:
    return " and ".join(output.drives)
