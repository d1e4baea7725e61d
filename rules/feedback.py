"""Feedback: the output voltage that the divider, the reference and the amplifier make."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace

from ..grammar.netlist import Part
from ..lint.brief import Rail
from ..lint.circuit.amplifiers import Amplifier
from ..lint.circuit.controllers import Controller
from ..lint.circuit.converter import NoLoop
from ..lint.circuit.loops import Regulation
from ..lint.design import Design
from ..lint.estimate import Estimate, Unsolved
from ..lint.judge import judge, reports, unsolved
from ..lint.preferred import is_a_size, nearest, nearest_pair
from ..lint.quantity import Spread, engineering, percent
from ..lint.rule import rule
from ..lint.verdict import Limit, Outcome, Verdict


@rule("feedback.output-voltage", level="error", topic="feedback")
def output_voltage(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the output stay in its band, whatever the reference and the resistors are worth?

    What:
        Solves for the output voltage at which the voltage amplifier's inputs are equal, for whatever
        resistor network stands round it, over the tolerances of resistors and reference, the amplifier's
        offset and bias currents, and its output anywhere in the control range. Where a trimmer is part of
        it, the question is whether every unit can be set to the nominal voltage.
    Why:
        The load sees this voltage. A divider that is right on paper with nominal parts may leave the band
        with the reference at one end and the resistors at the other.
    Formula:
        V(in+) - V(in-) = offset [V], solved for the output [V] by nodal analysis; for the plain divider
        output = V(in-) x (1 + top / bottom)
    Source:
        the brief (band); SLVS074 p.4 (reference spread, offset, bias current)
    Remedy:
        Take the pair of preferred values printed, tighter resistors, or a trimmer; a reference spread
        that alone fills the band needs a part with a tighter reference.
    Fails:
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 10k 1%
        R3 1IN+ 0 10k 1%
        [controllers.U1] output = "VOUT"
        [rails.VOUT] voltage = "12 V"; tolerance = "10 %"
    Passes:
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 14k 1%
        R3 1IN+ 0 10k 1%
        [controllers.U1] output = "VOUT"
        [rails.VOUT] voltage = "12 V"; tolerance = "10 %"
    """
    found = design.regulation(controller)
    if isinstance(found, NoLoop):
        return  # feedback.complete speaks of it
    amplifier = _voltage_amplifier(controller, design)
    pins = _pins(amplifier)
    if isinstance(found, Unsolved):
        yield unsolved(found, "output voltage", pins=pins)
        return
    rail = design.rail(amplifier.output)
    found = replace(found, output=found.output.because(_formula(design, amplifier, found)))
    says = f"{amplifier.output} regulates to {found.output.spread.text(4)}"
    band = _band(rail)
    if rail is None or band is None:
        swept = f", {', '.join(found.trimmers)} swept end to end" if found.trimmers else ""
        yield reports(found.output, says + swept, pins=pins)
    elif found.settable is not None:
        yield _settable(found, rail, amplifier.output, pins)
    else:
        remedy = _pair(design, amplifier, found, rail)
        yield judge(found.output, band, says, source=_brief_band(rail), pins=pins, remedy=remedy)


def _formula(design: Design, amplifier: Amplifier, found: Regulation) -> str:
    """Return the formula with its numbers: of the plain divider, or what was solved for."""
    divider = design.divider(amplifier)
    output = engineering(found.output.spread.nominal, "V", 4)
    set_point = engineering(found.inputs.spread.nominal, "V", 4)
    if divider is None:
        return (
            f"{amplifier.output} = {output} where {amplifier.plus} and {amplifier.minus} meet at {set_point}"
        )
    top, bottom = (engineering(design.nominal(part) or 0.0, "ohm") for part in divider)
    names = f"{divider[0].reference} / {divider[1].reference}"
    return f"{set_point} x (1 + {names}) = {set_point} x (1 + {top} / {bottom}) = {output}"


def _voltage_amplifier(controller: Controller, design: Design) -> Amplifier:
    amplifier = design.regulating(controller)
    assert amplifier is not None  # the caller has its regulation
    return amplifier


def _pins(amplifier: Amplifier) -> tuple[str, ...]:
    return (f"amplifier {amplifier.number} in+", f"amplifier {amplifier.number} in-")


def _band(rail: Rail | None) -> Limit | None:
    """Return the band that the brief allows a rail, None where it tells only a nominal voltage."""
    if rail is None or rail.band.minimum == rail.band.maximum:
        return None
    return Limit(rail.band.minimum, rail.band.maximum, "V")


def _brief_band(rail: Rail) -> str:
    width = f" ±{percent(rail.tolerance)}" if rail.tolerance is not None else ""
    return f"brief: {rail.net} {rail.voltage}{width}"


def _settable(found: Regulation, rail: Rail, output: str, pins: tuple[str, ...]) -> Verdict:
    """Judge a trimmed output: the nominal voltage must lie in the range that every unit can be set to."""
    assert found.settable is not None
    wanted = engineering(rail.voltage.nominal, "V")
    low, high = found.settable
    inside = low <= rail.voltage.nominal <= high
    trimmers = ", ".join(found.trimmers)
    says = f"{trimmers} sets {output} from {engineering(low, 'V')} to {engineering(high, 'V')} on every unit"
    if low > high:
        says = f"no voltage of {output} is within reach of {trimmers} on every unit"
    set_up = f"{trimmers} set on the bench so that {output} is {wanted}"
    verdict = reports(found.output, says, pins=pins, source=_brief_band(rail))
    if inside:
        return replace(
            verdict, outcome=Outcome.PASS, measured=None, assumptions=(*verdict.assumptions, set_up)
        )
    remedy = f"choose the fixed resistors so that {wanted} lies within reach of every unit"
    return replace(verdict, outcome=Outcome.FAIL, remedy=remedy)


def _pair(design: Design, amplifier: Amplifier, found: Regulation, rail: Rail) -> str:
    """Return the pairs of preferred values that make the wanted voltage with a plain divider."""
    divider = design.divider(amplifier)
    wanted, set_point = rail.voltage.nominal, found.inputs.spread.nominal
    values = [design.nominal(part) or 0.0 for part in divider or ()]
    ratio = wanted / set_point - 1 if 0 < set_point < wanted else 0.0
    if divider is None or not all(map(is_a_size, (*values, ratio * values[1]))):
        return f"change the network so that {engineering(wanted, 'V')} makes the amplifier's inputs equal"
    top = nearest(ratio * values[1], "E96")
    makes = engineering(set_point * (1 + top / values[1]), "V", 4)
    alone = f"{divider[0].reference} {engineering(top, 'ohm')} (E96) alone makes {makes}"
    pairs = (_pair_of(series, divider, ratio, set_point, sum(values)) for series in ("E24", "E96"))
    return "; ".join((alone, *pairs))


def _pair_of(series: str, divider: tuple[Part, Part], ratio: float, set_point: float, total: float) -> str:
    top, bottom = nearest_pair(ratio, series, total)
    makes = engineering(set_point * (1 + top / bottom), "V", 4)
    values = (f"{p.reference} {engineering(v, 'ohm')}" for p, v in zip(divider, (top, bottom), strict=True))
    return f"{series}: {' and '.join(values)} make {makes}"


@rule("feedback.divider-ratio", level="warning", topic="feedback")
def divider_ratio(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the divider's ratio the one that the output voltage needs, before any tolerance?

    What:
        Compares the nominal ratio from the output to the amplifier's input with the ratio wanted: the
        set point at the other input over the nominal output of the brief. Without a brief the ratios
        are reported.
    Why:
        A wrong decade or the neighbouring value of the series shows here as a plain number, apart from
        the spread that `feedback.output-voltage` adds.
    Formula:
        error = output(nominal) / output(wanted) - 1
    Source:
        common practice, no source: the choice of values may use up half of the output's tolerance
    Remedy:
        Take the pair of preferred values that `feedback.output-voltage` prints.
    Fails:
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 1.4k
        R3 1IN+ 0 10k
        [controllers.U1] output = "VOUT"
        [rails.VOUT] voltage = "12 V"; tolerance = "10 %"
    Passes:
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 14k
        R3 1IN+ 0 10k
        [controllers.U1] output = "VOUT"
        [rails.VOUT] voltage = "12 V"; tolerance = "10 %"
    """
    found = design.regulation(controller)
    if not isinstance(found, Regulation):
        return  # feedback.output-voltage or feedback.complete speaks of it
    amplifier = _voltage_amplifier(controller, design)
    actual, set_point = found.output.spread.nominal, found.inputs.spread.nominal
    if actual == 0:
        return  # a loop that regulates to nothing has no ratio
    says = (
        f"set point {engineering(set_point, 'V')} at the inputs, "
        f"ratio {engineering(set_point / actual, '', 4)} from {amplifier.output}"
    )
    rail = design.rail(amplifier.output)
    allowed = rail.deviation if rail is not None else None
    if rail is None or allowed is None or found.settable is not None:
        yield replace(reports(found.inputs, says, pins=_pins(amplifier)), measured=None)
        return
    error = actual / rail.voltage.nominal - 1
    verdict = judge(
        Estimate(Spread.exact(error, ""), Spread.exact(error, ""), parts=found.output.parts),
        Limit(allowed[0] / 2, allowed[1] / 2, ""),
        f"{says}: {percent(error)} from the wanted {engineering(rail.voltage.nominal, 'V')}",
        source="common practice, no source: half of the output's tolerance",
        pins=_pins(amplifier),
        remedy=_pair(design, amplifier, found, rail),
    )
    yield replace(verdict, assumptions=())


@rule("feedback.complete", level="error", topic="feedback")
def complete(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the output reach an amplifier's input through a whole divider?

    What:
        Looks for an amplifier whose input is joined by resistors to the converter's output and to ground.
        A missing half, or one that stands behind a capacitor or off the pin, leaves it incomplete. An
        output equal to the set point needs no lower half. An input that another part drives, such as an
        opto-coupler, is for a person to judge; amplifiers that are tied off regulate nothing.
    Why:
        Without the upper half the amplifier never sees the output and the duty runs to its end; without
        the lower half the output settles at the set point itself.
    Formula:
        none: connectivity
    Source:
        common practice, no source
    Remedy:
        Join the input pin to the output through one resistor and to ground through another.
    Fails:
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 14k
        [controllers.U1] output = "VOUT"
        [rails.VOUT] voltage = "12 V"; tolerance = "10 %"
    Passes:
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 14k
        R3 1IN+ 0 10k
        [controllers.U1] output = "VOUT"
        [rails.VOUT] voltage = "12 V"; tolerance = "10 %"
    """
    voltage = [a for a in design.amplifiers(controller) if a.use == "voltage"]
    if voltage:
        yield from (_whole(controller, design, amplifier) for amplifier in voltage)
        return
    mapped = [a for a in design.amplifiers(controller) if a.use != "unmapped"]
    if not mapped:
        return  # connections.controller-found speaks of it
    following = [a for a in mapped if any(name in design.netlist.parts for name in a.driven_by)]
    halves = [half for half in (_lone_half(controller, design, a) for a in mapped) if half is not None]
    need = design.missing(controller, "output")
    if following:
        yield from (_follows(amplifier) for amplifier in following)
    elif halves:
        yield halves[0]
    elif need and all(a.use == "current" or _is_tied_off(controller, design, a) for a in mapped):
        message = f"no amplifier of {controller.reference} is meant to regulate a voltage"
        yield Verdict(outcome=Outcome.INFORMATIONAL, message=message)
    elif need:
        yield Verdict(
            outcome=Outcome.OPEN,
            message=f"no amplifier of {controller.reference} is joined by resistors to an output",
            needs=(need,),
        )
    else:
        yield _unreached(controller, design, mapped)


def _follows(amplifier: Amplifier) -> Verdict:
    """Leave an amplifier whose input another part drives to a person: the loop through it is not computed."""
    drivers = ", ".join(amplifier.driven_by)
    return Verdict(
        outcome=Outcome.REVIEW,
        message=f"amplifier {amplifier.number} follows {drivers}: what is regulated there is not computed",
        parts=amplifier.driven_by,
        nets=(amplifier.plus, amplifier.minus),
        pins=_pins(amplifier),
        remedy=f"work out the loop through {drivers} by hand, its polarity included",
    )


def _is_tied_off(controller: Controller, design: Design, amplifier: Amplifier) -> bool:
    """Tell whether in+ of an unused amplifier stands at ground; amplifier.unused judges its in-."""
    ends = design.reach(controller, amplifier.plus).ends
    return amplifier.use == "unused" and bool(ends) and all(design.is_ground(end) for end in ends)


def _unreached(controller: Controller, design: Design, amplifiers: Sequence[Amplifier]) -> Verdict:
    """Judge amplifiers none of which is joined to the output that the brief names."""
    told = design.told(controller)
    output = told.output if told is not None and told.output else "the output"
    inputs = [net for a in amplifiers if a.use != "current" for net in (a.plus, a.minus)]
    ends = dict.fromkeys(end for net in inputs for end in design.reach(controller, net).ends)
    reached = [end for end in ends if design.potential(end) is None]
    only = f", but to {', '.join(reached)}" if reached else ""
    return Verdict(
        outcome=Outcome.REVIEW,
        message=f"no amplifier of {controller.reference} is joined by resistors to {output}{only}",
        nets=tuple(reached),
        remedy=f"join an input to {output} by a divider, or say in the brief which net it senses",
    )


def _whole(controller: Controller, design: Design, amplifier: Amplifier) -> Verdict:
    """Judge an amplifier that sees the output: does a resistor take its input to ground as well?"""
    net = amplifier.plus if amplifier.sensed_by == "in+" else amplifier.minus
    pins = (f"amplifier {amplifier.number} {amplifier.sensed_by}",)
    reach = design.reach(controller, net)
    seen = " or ".join(amplifier.outputs)
    if any(design.is_ground(end) for end in reach.ends):
        message = f"{controller.pins[pins[0]].name} stands on a divider from {seen} to ground"
        return Verdict(outcome=Outcome.PASS, message=message, parts=reach.parts, nets=(net,), pins=pins)
    verdict = Verdict(
        outcome=Outcome.PASS,
        message=f"{controller.pins[pins[0]].name} sees {seen} itself, which regulates to the set point",
        parts=reach.parts,
        nets=(net,),
        pins=pins,
    )
    rail = design.rail(amplifier.output)
    found = design.regulation(controller)
    band = _band(rail)
    if band is not None and isinstance(found, Regulation) and band.holds(found.output.spread.nominal):
        return verdict
    message = f"{controller.pins[pins[0]].name} sees {seen} but no resistor takes it to ground"
    remedy = f"add the lower resistor of the divider from {net} to ground"
    if net in amplifier.outputs:
        remedy = f"put a divider between {net} and the pin"
    if band is None:
        # Nobody told the output's voltage: the set point itself may be what is wanted.
        message += f", so that {seen} regulates to the set point"
        return replace(verdict, outcome=Outcome.REVIEW, message=message, remedy=remedy)
    return replace(verdict, outcome=Outcome.FAIL, message=message, remedy=remedy)


def _lone_half(controller: Controller, design: Design, amplifier: Amplifier) -> Verdict | None:
    """Return the verdict on an input that only the lower half of a divider is left on."""
    feedback = controller.net("feedback")
    if not feedback or design.compensation(feedback, amplifier.minus) is None:
        return None  # nothing that regulates: tied off by a resistor
    for net, name in ((amplifier.plus, "in+"), (amplifier.minus, "in-")):
        if design.is_ground(net):
            continue  # tied off
        role = f"amplifier {amplifier.number} {name}"
        resistors = [
            c.part for c in design.circuit.connections(net) if design.circuit.kind(c.part) == "resistor"
        ]
        ends = {end for part in resistors for end in design.circuit.other_nets(part, net)}
        if ends and all(design.is_ground(end) for end in ends):
            return Verdict(
                outcome=Outcome.FAIL,
                message=f"{controller.pins[role].name} has a resistor to ground, none to the output",
                parts=tuple(part.reference for part in resistors),
                nets=(net,),
                pins=(role,),
                remedy=f"add the upper resistor of the divider from the output to {net}",
            )
    return None
