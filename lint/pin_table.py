"""The controller's pins as a table: what each is on, at which voltage, and what the review says of it."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from .circuit.controllers import Controller, ControllerPin
from .circuit.loops import Regulation
from .circuit.power_stage import NotRecognised
from .design import Design
from .estimate import Unsolved
from .verdict import ControllerReview, Level, Outcome, PinRow, Verdict

# From the one that most wants a reader's eye to the one that least does.
_WORST_FIRST = (
    Outcome.FAIL,
    Outcome.REVIEW,
    Outcome.OPEN,
    Outcome.PASS,
    Outcome.INFORMATIONAL,
    Outcome.NOT_APPLICABLE,
)

_SWITCHING = ("output 1 collector", "output 1 emitter", "output 2 collector", "output 2 emitter")


def controller_review(
    controller: Controller, design: Design, verdicts: Sequence[Verdict]
) -> ControllerReview:
    """Return the head of a controller's report: who it is, and its pins in the order of the package."""
    stage, evidence = _power_stage(controller, design)
    return ControllerReview(
        part=controller.reference,
        family=controller.profile.family,
        model=controller.part.model or controller.part.value,
        place=controller.part.place,
        pins=tuple(_rows(controller, design, verdicts)),
        assumptions=controller.assumptions,
        power_stage=stage,
        evidence=evidence,
    )


def _power_stage(controller: Controller, design: Design) -> tuple[str, tuple[str, ...]]:
    """Return the power stage in a few words and what says so, or nothing and the reason."""
    stage = design.power_stage(controller)
    if isinstance(stage, NotRecognised):
        return "", (stage.reason,)
    ends = f" from {stage.input}" if stage.input else ""
    ends += f" to {stage.output}" if stage.output else ""
    return f"{stage.topology}{ends}", stage.evidence


def _rows(controller: Controller, design: Design, verdicts: Sequence[Verdict]) -> Iterable[PinRow]:
    about = [v for v in verdicts if v.controller == controller.reference and v.deviation is None]
    for description in controller.profile.pins:
        worst = _worst([v for v in about if description.role in v.pins])
        pin = controller.pin(description.role)
        yield PinRow(
            number=description.number,
            function=description.name,
            net=pin.net if pin is not None else "",
            state=_state(controller, pin, design),
            outcome=worst.outcome if worst is not None else None,
            level=worst.level if worst is not None else None,
        )


def _worst(verdicts: Iterable[Verdict]) -> Verdict | None:
    levels = tuple(Level)
    return min(
        verdicts,
        key=lambda v: (_WORST_FIRST.index(v.outcome), levels.index(v.level) if v.level else len(levels)),
        default=None,
    )


def _state(controller: Controller, pin: ControllerPin | None, design: Design) -> str:
    """Return the pin's voltage or condition in words."""
    if pin is None:
        return "not mapped"
    if not pin.net:
        return "not connected"
    if design.is_ground(pin.net):
        return "ground"
    if pin.role in _SWITCHING and design.potential(pin.net) is None:
        return "switched"
    if pin.role in ("timing capacitor", "timing resistor"):
        return "oscillator"
    if pin.role == "feedback":
        return "set by the loop"
    return _voltage(controller, pin.net, design)


def _voltage(controller: Controller, net: str, design: Design) -> str:
    regulation = design.regulation(controller)
    if isinstance(regulation, Regulation):
        amplifier = design.regulating(controller)
        if amplifier is not None and net in (amplifier.plus, amplifier.minus):
            return str(regulation.inputs.spread)
    for amplifier in design.amplifiers(controller):
        if amplifier.sense is not None and net in (amplifier.plus, amplifier.minus):
            reach = design.reach(controller, net)
            if amplifier.sense.near in (*reach.nets, *reach.ends):
                return "follows the current"
    voltage = design.voltage(net)
    return "not computed" if isinstance(voltage, Unsolved) else str(voltage.spread)
