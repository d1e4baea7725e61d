"""Error amplifiers: their inputs, their polarity, their feedback, and what is left unused."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from ..lint import needs
from ..lint.circuit.amplifiers import Amplifier
from ..lint.circuit.controllers import Controller
from ..lint.circuit.regimes import Regime
from ..lint.design import Design
from ..lint.estimate import Estimate, Unsolved
from ..lint.judge import judge, missing, unsolved
from ..lint.quantity import Spread, engineering
from ..lint.rule import rule
from ..lint.verdict import Level, Limit, Outcome, Verdict


def input_roles(amplifier: Amplifier) -> tuple[str, str]:
    """Return the roles of both inputs, in+ first."""
    return f"amplifier {amplifier.number} in+", f"amplifier {amplifier.number} in-"


def _inputs(amplifier: Amplifier) -> tuple[tuple[str, str], ...]:
    """Return the role and the net of both inputs."""
    plus, minus = input_roles(amplifier)
    return (plus, amplifier.plus), (minus, amplifier.minus)


def _driven(amplifier: Amplifier, design: Design) -> bool:
    """Tell whether both inputs have a direct-current path: amplifier.input-open speaks of those without."""
    return design.has_path(amplifier.plus) and design.has_path(amplifier.minus)


def mapped(controller: Controller, design: Design) -> list[Amplifier]:
    """Return the amplifiers both of whose inputs are mapped and on a net."""
    return [a for a in design.amplifiers(controller) if a.use != "unmapped"]


@rule("amplifier.input-open", level="error", topic="error amplifier")
def input_open(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does every amplifier input have a direct-current path?

    What:
        Looks for a path through resistive parts from each input to ground, the reference, a rail or the
        power path. An input with capacitors only, or with nothing, has none.
    Why:
        An input without a path drifts on its own bias current, and the amplifier it belongs to can hold
        the outputs off, or fail to.
    Formula:
        none: connectivity
    Source:
        SLVS074 p.4 (input bias current); common practice, no source (the rule)
    Remedy:
        Tie the input: in+ of an unused amplifier to ground, its in- to the reference.
    Fails:
        U1 0 REF FEEDBACK DTC CT RT 0 C1 E1 E2 C2 VCC OUTCTRL REF 2IN- 0 494
        C1 REF 2IN- 100n
    Passes:
        U1 0 REF FEEDBACK DTC CT RT 0 C1 E1 E2 C2 VCC OUTCTRL REF 2IN- 0 494
        R1 REF 2IN- 1k
    """
    inputs = {role: net for a in mapped(controller, design) for role, net in _inputs(a)}
    adrift = {
        role: net
        for role, net in inputs.items()
        if not design.has_path(net) and not _follows(controller, design, role, net)
    }
    if inputs and not adrift:
        yield Verdict(
            outcome=Outcome.PASS,
            message="every amplifier input has a direct-current path",
            pins=tuple(inputs),
        )
    for role, net in adrift.items():
        yield Verdict(
            outcome=Outcome.FAIL,
            message=f"{controller.pins[role].name} has no direct-current path on net {net}",
            nets=(net,),
            pins=(role,),
            places=(controller.pins[role].place,),
            source=controller.profile.figure("amplifier.bias-current").source,
            remedy=f"join {net} to a defined potential by a resistor",
        )


def _follows(controller: Controller, design: Design, role: str, net: str) -> bool:
    """Tell whether an in- hangs on FEEDBACK by resistors: a follower, whose own output drives it."""
    feedback = controller.net("feedback")
    return role.endswith("in-") and feedback in design.reach(controller, net).nets


@rule("amplifier.unused", level="error", topic="error amplifier")
def unused(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is an amplifier that is not used tied off so that its output stays off?

    What:
        Computes how far in- stands above in+ on an amplifier that senses neither an output nor a current. One
        that follows a signal must have a threshold above ground.
    Why:
        The amplifiers share one output, and the one that asks for the shorter pulse wins. An unused one
        whose inputs are joined, or nearly equal, is decided by its own offset: some boards run, some
        never start.
    Formula:
        V(in-) - V(in+) [V] by nodal analysis, at least five times the greatest offset
    Source:
        SLVS074 p.4 (offset 10 mV); the margin is common practice, no source
    Remedy:
        Tie in+ to ground and in- to the reference.
    Fails:
        R1 2IN+ 0 1k
        R2 2IN- 0 1k
    Passes:
        R1 2IN+ 0 1k
        R2 2IN- REF 1k
    """
    least = controller.profile.practice("amplifier.unused-difference")
    for amplifier in mapped(controller, design):
        if amplifier.use == "signal" and _rests_at_ground(controller, design, amplifier):
            yield _decided_by_offset(controller, amplifier)
        if amplifier.use != "unused" or not _driven(amplifier, design):
            continue
        found = design.difference(amplifier.minus, amplifier.plus)
        if isinstance(found, Unsolved):
            yield unsolved(
                found, f"tie-off of unused amplifier {amplifier.number}", pins=input_roles(amplifier)
            )
            continue
        yield judge(
            found,
            least.limit(),
            f"unused amplifier {amplifier.number}: in- stands {found.spread} above in+",
            source=f"{controller.profile.figure('amplifier.offset').source}; {least.source}",
            rating=True,
            pins=input_roles(amplifier),
            remedy=f"tie {controller.pins[input_roles(amplifier)[0]].name} to ground and "
            f"{controller.pins[input_roles(amplifier)[1]].name} to the reference",
        )


def _rests_at_ground(controller: Controller, design: Design, amplifier: Amplifier) -> bool:
    """Tell whether in- of an amplifier stands at ground, and a resistor to ground is on its in+."""
    minus = design.reach(controller, amplifier.minus).ends
    plus = design.reach(controller, amplifier.plus).ends
    return bool(minus) and all(map(design.is_ground, minus)) and any(map(design.is_ground, plus))


def _decided_by_offset(controller: Controller, amplifier: Amplifier) -> Verdict:
    plus, minus = (controller.pins[role].name for role in input_roles(amplifier))
    return Verdict(
        outcome=Outcome.REVIEW,
        message=f"{minus} stands at ground, and so does {plus} while nothing drives it: the offset decides",
        nets=(amplifier.plus, amplifier.minus),
        pins=input_roles(amplifier),
        source=controller.profile.figure("amplifier.offset").source,
        remedy=f"put {minus} at a positive threshold",
    )


_REGIMES = (
    Regime.START_UP,
    Regime.LOWEST_INPUT,
    Regime.HIGHEST_INPUT,
    Regime.NO_LOAD,
    Regime.CURRENT_LIMIT,
    Regime.SHORT_CIRCUIT,
)


@rule("amplifier.common-mode", level="error", topic="error amplifier")
def common_mode(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Do both inputs of each amplifier stay where the amplifier works, in every regime?

    What:
        Computes both inputs at start-up, in regulation at the lowest and highest supply, without load,
        in current limit and into a short circuit, and holds the extremes against the common-mode range
        at the lowest supply.
    Why:
        Outside the range the amplifier's output may turn over: a loop that regulates on the bench latches
        at start-up or in a short circuit.
    Formula:
        -0.3 V <= V(in) <= V(supply, lowest) - 2 V
    Source:
        SLVS074 p.4 (common-mode input range)
    Remedy:
        Divide the input down, or sense on the low side.
    Fails:
        V1 VCC 0 12
        R1 VCC 1IN+ 1k
        R2 1IN+ 0 10k
    Passes:
        V1 VCC 0 12
        R1 VCC 1IN+ 10k
        R2 1IN+ 0 10k
    """
    supply = controller.net("supply")
    voltage = design.voltage(supply) if supply else None
    if voltage is None:
        return
    if isinstance(voltage, Unsolved):
        yield missing(needs.rail(supply or ""), "common-mode range of the amplifiers")
        return
    low = controller.profile.figure("amplifier.common-mode-low")
    headroom = controller.profile.figure("amplifier.common-mode-headroom").minimum or 0.0
    least, most = low.minimum or 0.0, voltage.spread.minimum - headroom
    if most < least:
        return  # supply.range speaks of a supply that leaves no range at all
    limit = Limit(least, most, "V")
    for amplifier in mapped(controller, design):
        # One that is tied off stays off above the range as well, only without the maker's word for it.
        level = Level.WARNING if amplifier.use == "unused" else None
        for role, net in _inputs(amplifier):
            if design.has_path(net):
                verdict = _within(controller, design, role, net, limit, low.source)
                yield replace(verdict, level=level) if verdict.outcome is Outcome.FAIL else verdict


def _within(
    controller: Controller, design: Design, role: str, net: str, limit: Limit, source: str
) -> Verdict:
    found = {regime: design.voltage_in(regime, controller, net) for regime in _REGIMES}
    lost = [answer for answer in found.values() if isinstance(answer, Unsolved)]
    if lost:
        return unsolved(lost[0], f"range of {controller.pins[role].name}", pins=(role,))
    solved = {regime: answer for regime, answer in found.items() if isinstance(answer, Estimate)}
    # Rounded, so that of regimes that are equal the first one is named on every machine.
    least = min(solved, key=lambda regime: round(solved[regime].spread.minimum, 9))
    most = max(solved, key=lambda regime: round(solved[regime].spread.maximum, 9))
    everywhere = _over(solved[least], solved[most], solved[Regime.NO_LOAD])
    where = f"lowest at {least}, highest at {most}" if least is not most else f"both ends at {least}"
    return judge(
        everywhere,
        limit,
        f"{controller.pins[role].name} {everywhere.spread}: {where}",
        source=source,
        rating=True,
        pins=(role,),
        remedy=f"divide {net} down, or sense on the low side",
    )


def _over(least: Estimate, most: Estimate, usual: Estimate) -> Estimate:
    """Return an estimate from the least to the most of several regimes, nominal as in the usual one."""

    def joined(low: Spread, high: Spread) -> Spread:
        nominal = min(max(usual.spread.nominal, low.minimum), high.maximum)
        return Spread(low.minimum, nominal, high.maximum, "V")

    return replace(
        usual,
        spread=joined(least.spread, most.spread),
        statistical=joined(least.statistical, most.statistical),
        assumptions=tuple(dict.fromkeys((*least.assumptions, *most.assumptions))),
    )


@rule("amplifier.polarity", level="error", topic="error amplifier")
def polarity(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does more output, or more current, shorten the pulse?

    What:
        Computes the difference of the inputs with the output shorted (voltage amplifier) or without load
        (current amplifier). There the amplifier must ask for the longest pulse: in+ below in-.
    Why:
        In this class a high amplifier output shortens the pulse, the reverse of other families. With the
        inputs exchanged the loop drives the output up to the rail instead of holding it.
    Formula:
        V(in+) - V(in-) [V] < 0 with the output at 0 V, or with no current in the sense resistor
    Source:
        SLVS074 p.4 and its block diagram (the amplifiers' outputs raise FEEDBACK)
    Remedy:
        Exchange the two inputs: sensed quantity to in+, reference to in-.
    Fails:
        R1 REF 1IN+ 1k
        R2 VOUT 1IN- 14k
        R3 1IN- 0 10k
        [controllers.U1] output = "VOUT"
    Passes:
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 14k
        R3 1IN+ 0 10k
        [controllers.U1] output = "VOUT"
    """
    for amplifier in mapped(controller, design):
        regime = {"voltage": Regime.SHORT_CIRCUIT, "current": Regime.NO_LOAD}.get(amplifier.use)
        if regime is None or not _driven(amplifier, design):
            continue
        plus = design.voltage_in(regime, controller, amplifier.plus)
        minus = design.voltage_in(regime, controller, amplifier.minus)
        if isinstance(plus, Unsolved) or isinstance(minus, Unsolved):
            continue  # amplifier.common-mode names what stands in the way
        yield _direction(controller, amplifier, regime, plus, minus)


def _direction(
    controller: Controller, amplifier: Amplifier, regime: Regime, plus: Estimate, minus: Estimate
) -> Verdict:
    names = [controller.pins[role].name for role in input_roles(amplifier)]
    right = plus.spread.nominal < minus.spread.nominal
    values = f"{engineering(plus.spread.nominal, 'V')} against {engineering(minus.spread.nominal, 'V')}"
    more = "output voltage" if amplifier.use == "voltage" else "current"
    does = "shortens" if right else "lengthens"
    return Verdict(
        outcome=Outcome.PASS if right else Outcome.FAIL,
        message=f"at {regime} {names[0]} stands at {values} on {names[1]}: more {more} {does} the pulse",
        parts=tuple(dict.fromkeys((*plus.parts, *minus.parts))),
        nets=(amplifier.plus, amplifier.minus),
        pins=input_roles(amplifier),
        source="SLVS074 p.4",
        remedy="" if right else f"exchange {names[0]} and {names[1]}",
    )
