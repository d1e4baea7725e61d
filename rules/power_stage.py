"""Power stage: is what the outputs drive whole, and what the brief tells? The topic is output mode."""

from __future__ import annotations

from collections.abc import Iterable

from ..lint import needs
from ..lint.circuit.controllers import Controller
from ..lint.circuit.diodes import diode_nets
from ..lint.circuit.power_stage import NotRecognised, PowerStage
from ..lint.design import Design
from ..lint.rule import rule
from ..lint.verdict import Outcome, Verdict


@rule("output-mode.power-stage", level="error", topic="output mode")
def power_stage(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the power stage behind the outputs whole, and the one that the brief tells?

    What:
        Follows the outputs to the switches, and from these to windings, rectifiers and the output, and
        compares what is recognised with the topology and the output of the brief, where it tells them. A
        stage that fits no pattern wholly is for a person to judge: a diode turned round, a winding off its
        net, one rectifier where two should take turns, or a topology that this review does not know.
    Why:
        A catch diode turned round shorts the supply at the first pulse. And whatever rests on the power
        stage, such as the duty that it needs, is not asked where none is recognised.
    Formula:
        none: connectivity
    Source:
        common practice, no source
    Remedy:
        Hold the switches, windings and diodes against the topology, and the brief against the drawing.
    Fails:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 0 E2 C2 VCC 0 REF 2IN- 2IN+ 494
        R1 VCC GATE 470
        R2 GATE C1 47
        M1 SW GATE VCC VCC PMOS
        D1 SW 0 DIODE
        L1 SW VOUT 100u
        [controllers.U1] topology = "single-ended"; output = "VOUT"
    Passes:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 0 E2 C2 VCC 0 REF 2IN- 2IN+ 494
        R1 VCC GATE 470
        R2 GATE C1 47
        M1 SW GATE VCC VCC PMOS
        D1 0 SW DIODE
        L1 SW VOUT 100u
        [controllers.U1] topology = "single-ended"; output = "VOUT"
    """
    told, stage = design.told(controller), design.power_stage(controller)
    topology, output = (told.topology, told.output) if told is not None else (None, None)
    if isinstance(stage, NotRecognised):
        if topology is not None:
            yield _doubtful(f"no {topology} power stage is recognised: {stage.reason}")
            return
        need = needs.controller(controller.reference, "topology")
        message = f"no power stage is recognised: {stage.reason}"
        yield Verdict(outcome=Outcome.OPEN, message=message, needs=(need,))
        return
    ends = f"{stage.input or 'a supply not seen'} to {stage.output or 'several outputs'}"
    recognised = f"the power stage is recognised as {stage.topology}, from {ends}"
    if topology is not None and stage.family != topology:
        yield _doubtful(f"{recognised}; the brief tells {topology}", stage.evidence)
    elif output is not None and stage.output != output:
        yield _doubtful(f"{recognised}; the brief's output is {output}", stage.evidence)
    elif odd := _odd(design, stage):
        yield _doubtful(f"{recognised}; {odd}", stage.evidence)
    else:
        yield Verdict(outcome=Outcome.PASS, message=recognised, assumptions=stage.evidence)


def _odd(design: Design, stage: PowerStage) -> str:
    """Return what does not fit in a stage that is recognised, empty for nothing."""
    if stage.input == stage.output:
        return "what feeds it is its own output"
    if stage.family == "single-ended" or not stage.transformer:
        return ""
    rectifiers = [design.part(name) for name in stage.rectifiers]
    if sum(len(part.pins) - 1 for part in rectifiers) < 2:  # three pins are two diodes in one body
        only = ", ".join(stage.rectifiers)
        return f"{only} alone rectifies what {stage.transformer} delivers in both directions"
    cathodes = {diode_nets(part)[1] for part in rectifiers if len(part.pins) == 2}
    if stage.inductor and len(cathodes) > 1 and stage.output in cathodes:
        return f"a rectifier leads to {stage.output} past {stage.inductor}"
    return ""


def _doubtful(message: str, evidence: tuple[str, ...] = ()) -> Verdict:
    return Verdict(
        outcome=Outcome.REVIEW,
        message=message,
        assumptions=evidence,
        source="common practice, no source",
        remedy="hold switches, windings and diodes against the topology, and the brief against the drawing",
    )
