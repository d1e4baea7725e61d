"""Output stage: the controller's output transistors, their path, current, voltage and heat."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import replace
from functools import partial
from operator import eq

from ..lint import needs
from ..lint.circuit.conduction import Path, path
from ..lint.circuit.controllers import Controller
from ..lint.circuit.diodes import diode_nets, zener_voltage
from ..lint.circuit.outputs import OutputTransistor
from ..lint.circuit.parts import defaults
from ..lint.circuit.potentials import Potential
from ..lint.controllers import Profile
from ..lint.design import Design
from ..lint.estimate import Estimate, Unsolved
from ..lint.judge import judge, unsolved
from ..lint.quantity import Spread, engineering
from ..lint.rule import rule
from ..lint.verdict import Limit, Outcome, Verdict

_TOPIC = "output stage"


@rule("output-stage.path", level="error", topic=_TOPIC)
def complete_path(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Has each used output transistor a complete path for its current?

    What:
        Common emitter: the emitter returns to ground, and the collector is fed from a supply through a
        load or a pull-up. Follower: the collector stands on a supply, and the emitter leads to ground
        through a load or a pull-down. Whatever conducts counts as a path; whether a part of which nothing
        is known does is for a person to judge.
    Why:
        The outputs are bare transistors: they pull one way only. An open collector without a pull-up
        never rises, an open emitter without a pull-down never falls, and a gate on it stays charged.
    Formula:
        none: the path is looked for in the graph
    Source:
        SLVS074 p.5 (common emitter and follower are the two ways the outputs are specified in)
    Remedy:
        Add the pull-up or pull-down, or the load that is missing.
    Fails:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 VCC E1 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        M1 SW E1 0 0 NMOS
    Passes:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 VCC E1 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        M1 SW E1 0 0 NMOS
        R1 E1 0 1k
    """
    for output in _live(controller, design):
        for net, wanted in _sides(output):
            yield _path_verdict(controller, design, output, net, wanted)


def _live(controller: Controller, design: Design) -> list[OutputTransistor]:
    return [output for output in design.output_drive(controller).drive.outputs if output.live]


def _sides(output: OutputTransistor) -> Iterator[tuple[str, str]]:
    """Yield the nets that an output drives, each with where its current must be able to go."""
    if output.use in ("common emitter", "floating"):
        yield output.collector, "a supply"
    if output.use in ("follower", "floating"):
        yield output.emitter, "ground"


def _path_verdict(
    controller: Controller, design: Design, output: OutputTransistor, net: str, wanted: str
) -> Verdict:
    found = _path(controller, design, net, wanted)
    end = "collector" if net == output.collector else "emitter"
    says = f"output {output.number}, {output.use}: a path from its {end} to {wanted}"
    part = "pull-up" if wanted == "a supply" else "pull-down"
    outcome, how = _FOUND[found]
    return Verdict(
        outcome=outcome,
        message=f"{says}{how}",
        nets=(net,),
        pins=(f"output {output.number} {end}",),
        source="SLVS074 p.5",
        remedy="" if found is Path.YES else f"add a {part} or a load from {net} to {wanted}",
    )


_FOUND = {
    Path.YES: (Outcome.PASS, ""),
    Path.NO: (Outcome.FAIL, " is missing"),
    Path.UNKNOWN: (Outcome.REVIEW, " is there only if a part whose inside is not known makes it"),
}


def _path(controller: Controller, design: Design, net: str, wanted: str) -> Path:
    supply = controller.net("supply")

    def is_supply(other: str) -> bool:
        return other == supply or (design.potential(other) is not None and not design.is_ground(other))

    def is_stiff(other: str) -> bool:
        return is_supply(other) or design.is_ground(other)

    if is_supply(net) and wanted == "ground":
        return Path.NO  # an emitter on a supply falls to nothing
    arrives = is_supply if wanted == "a supply" else design.is_ground
    transistors = design.output_drive(controller).drive.transistors
    return path(design.circuit, transistors, net, arrives, controller.reference, is_stiff)


@rule("output-stage.current", level="error", topic=_TOPIC)
def current(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does each output transistor carry less current than it may?

    What:
        Solves the network round a conducting output, its saturation voltage from nothing to the printed
        maximum, the bases of bipolar drivers as junctions. Two joined outputs share, and may carry twice
        the current. Direct current only: the peak that charges a gate is short, and not counted.
    Why:
        Above the recommended current an output no longer saturates, above the absolute one it is
        destroyed; a pull-up or a base resistor a decade too small does it.
    Formula:
        I [A] by nodal analysis; for a plain pull-up I = (V(supply) - V(sat)) [V] / R [ohm]
    Source:
        0.2 A recommended: three second sources' data sheets; 0.25 A absolute: SLVS074 design example;
        V(sat): SLVS074 p.5
    Remedy:
        Raise the resistance in the output's path, or put a transistor in between.
    Fails:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 0 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        V1 VCC 0 12
        R1 VCC C1 47
    Passes:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 0 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        V1 VCC 0 12
        R1 VCC C1 470
    """
    for outputs in _groups(_live(controller, design)):
        yield _current_verdict(controller, design, outputs)


def _groups(live: list[OutputTransistor]) -> list[list[OutputTransistor]]:
    """Return the outputs, two that are joined at both ends as one group."""
    if len(live) == 2 and (live[0].collector, live[0].emitter) == (live[1].collector, live[1].emitter):
        return [live]
    return [[output] for output in live]


def _named(outputs: list[OutputTransistor]) -> str:
    if len(outputs) == 1:
        return f"output {outputs[0].number}"
    return "the joined outputs"


def _current_verdict(controller: Controller, design: Design, outputs: list[OutputTransistor]) -> Verdict:
    names = _named(outputs)
    pins = tuple(pin for output in outputs for pin in output.pins)
    drive = design.output_drive(controller)
    figure = controller.profile.figure("output.current")
    assert figure.maximum is not None
    limit = Limit(None, figure.maximum * len(outputs), "A")
    found = drive.current(outputs[0])
    if isinstance(found, Unsolved):
        # What a circuit draws comes on top of what the other parts do: that alone may be too much.
        least = drive.current(outputs[0], strangers=False)
        if isinstance(least, Unsolved) or limit.holds(least.spread.nominal):
            return unsolved(found, f"current of {names}", pins=pins)
        found = least
    says = f"{names} {'carry' if len(outputs) == 2 else 'carries'} {found.spread} when conducting"
    remedy = "raise the resistance in the path, or put a driver transistor in between"
    return judge(found, limit, says, source=figure.source, rating=True, pins=pins, remedy=remedy)


@rule("output-stage.voltage", level="error", topic=_TOPIC)
def voltage(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Do the output transistors stand the voltage that they switch?

    What:
        Takes the highest potential that can reach a resting collector: the greatest of the supplies that
        feed it. A winding on the collector itself throws it above the supply: a diode that clamps it is
        looked for, and without one a person must judge.
    Why:
        Above its limit the output transistor breaks down, at the end of every pulse.
    Formula:
        V(collector) [V] <= greatest supply in its path; with a winding, that of the clamp
    Source:
        40 V recommended: three second sources' data sheets; 41 V absolute: SLVS074, from memory
    Remedy:
        Feed the output from a lower rail, or put a transistor of enough voltage in between.
    Fails:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 0 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        V1 VIN 0 48
        R1 VIN C1 4.7k
    Passes:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 0 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        V1 VIN 0 24
        R1 VIN C1 4.7k
    """
    for outputs in _groups(_live(controller, design)):
        collector = outputs[0].collector
        # On the controller's own supply the collector of a follower switches nothing.
        winding = _winding(design, collector) if collector != controller.net("supply") else ""
        if winding and not _clamped(design, collector):
            yield _unclamped(outputs, winding)
            continue
        found = (_clamp(design, collector) if winding else None) or _highest(controller, design, collector)
        if found is not None:
            yield _voltage_verdict(controller, outputs, found)
        elif _path(controller, design, collector, "a supply") is Path.YES:
            need = needs.rail(controller.net("supply") or "")
            message = f"voltage at the collector of {_named(outputs)}: its supply is not known"
            yield Verdict(outcome=Outcome.OPEN, message=message, nets=(collector,), needs=(need,))


def _voltage_verdict(controller: Controller, outputs: list[OutputTransistor], found: Estimate) -> Verdict:
    figure = controller.profile.figure("output.collector-voltage")
    says = f"the collector of {_named(outputs)} sees up to {engineering(found.spread.maximum, 'V')}"
    return judge(
        found,
        Limit(None, figure.maximum, "V"),
        says,
        source=figure.source,
        rating=True,
        pins=tuple(output.pins[0] for output in outputs),
        remedy="feed it from a lower rail, or put a transistor in between",
    )


def _winding(design: Design, net: str) -> str:
    """Return an inductor, transformer or relay coil straight on a net, empty for none."""
    if design.potential(net) is not None:
        return ""
    kinds = ("inductor", "transformer", "relay")
    parts = (connection.part for connection in design.circuit.connections(net))
    return next((part.reference for part in parts if design.circuit.kind(part) in kinds), "")


def _clamped(design: Design, net: str) -> bool:
    """Tell whether a diode leads from a net to somewhere: a clamp, a rectifier, or a zener to ground."""
    parts = (connection.part for connection in design.circuit.connections(net))
    return any(design.circuit.kind(part) == "diode" for part in parts)


def _clamp(design: Design, net: str) -> Estimate | None:
    """Return the voltage at which a diode clamps a net: a zener from ground, or one to a rail."""
    for part in (connection.part for connection in design.circuit.connections(net)):
        if design.circuit.kind(part) != "diode" or len(part.pins) != 2:
            continue
        anode, cathode = diode_nets(part)
        volts, rail = zener_voltage(part), design.potential(cathode)
        if cathode == net and design.is_ground(anode) and volts is not None:
            most = volts * (1 + float(defaults()["tolerance"]["zener"]["ratio"]))
            spread = Spread(0.0, volts, most, "V")
            return Estimate(spread, spread, parts=(part.reference,), nets=(net,))
        if anode == net and rail is not None and rail.spread.minimum > 0:
            return Estimate(rail.spread, rail.spread, parts=(part.reference,), nets=(net, cathode))
    return None


def _unclamped(outputs: list[OutputTransistor], winding: str) -> Verdict:
    return Verdict(
        outcome=Outcome.REVIEW,
        message=f"{winding} on the collector of {_named(outputs)} flies back unclamped",
        parts=(winding,),
        nets=(outputs[0].collector,),
        pins=tuple(output.pins[0] for output in outputs),
        source="common practice, no source",
        remedy=f"clamp {outputs[0].collector} with a diode, or show that the winding cannot fly back",
    )


def _highest(controller: Controller, design: Design, collector: str) -> Estimate | None:
    """Return the greatest known potential above ground that direct current can bring to a collector."""
    own = design.potential(collector)
    if own is not None or collector == controller.net("supply"):
        return _at(own, collector) if own is not None else None  # nothing lifts it above its own supply
    transistors = design.output_drive(controller).drive.transistors

    def is_known(net: str) -> bool:
        return design.potential(net) is not None

    best: Estimate | None = None
    for net, potential in design.known.items():
        if design.is_ground(net) or (best is not None and potential.spread.maximum <= best.spread.maximum):
            continue
        arrives = partial(eq, net)
        way = path(design.circuit, transistors, collector, arrives, controller.reference, is_known)
        if way is Path.YES:
            best = _at(potential, collector)
    return best


def _at(potential: Potential, collector: str) -> Estimate:
    """Return a potential that arrives at a collector."""
    assumptions = (potential.assumption,) if potential.assumption else ()
    nets = tuple(dict.fromkeys((collector, potential.net)))
    return Estimate(potential.spread, potential.spread, nets=nets, assumptions=assumptions)


@rule("output-stage.dissipation", level="error", topic=_TOPIC)
def dissipation(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the controller stay cool enough at the highest ambient temperature?

    What:
        Adds what the outputs turn into heat, conducting for the longest duty, to the supply current times
        the supply voltage, and holds the sum against the package's rating at the brief's ambient.
    Why:
        At 40 V the supply current alone makes more than half a watt; two outputs at full current double
        it, and the plastic package stands one watt.
    Formula:
        P [W] = V(sat) [V] x I [A] x (1 - least dead time) + V(supply) [V] x I(supply) [A];
        allowed: 1 W up to 45 degC, from there falling to nothing at 125 degC
    Source:
        SLVS074 p.5 (saturation voltage, supply current); a second source's data sheet (1 W up to 45 degC,
        80 K/W, junction up to 125 degC)
    Remedy:
        Lower the supply of the controller, or the output current.
    Fails:
        V1 VCC 0 36
        [design] ambient = "-10 degC .. 85 degC"
    Passes:
        V1 VCC 0 24
        [design] ambient = "-10 degC .. 85 degC"
    """
    supply = controller.net("supply")
    potential = design.potential(supply) if supply else None
    if potential is None or potential.spread.minimum < 0:
        return  # supply.range asks for the rail, and says that one below ground is none
    if design.brief is None or design.brief.ambient is None:
        need = 'brief: [design] ambient = "..."'
        yield Verdict(outcome=Outcome.OPEN, message="dissipation against the package", needs=(need,))
        return
    groups = _groups(_live(controller, design))
    found = [design.output_drive(controller).current(outputs[0]) for outputs in groups]
    missing = next((one for one in found if isinstance(one, Unsolved)), None)
    if missing is not None:
        yield unsolved(missing, "dissipation of the outputs")
        return
    currents = [one for one in found if isinstance(one, Estimate)]
    ambient = design.brief.ambient.maximum
    allowed = _allowed(controller.profile, ambient)
    power = _power(controller, potential.spread, groups, currents)
    says = f"the package turns {power.spread} into heat, at up to {engineering(ambient, 'degC')}"
    figure = controller.profile.figure("package.dissipation")
    remedy = "lower the supply of the controller, or the current of its outputs"
    yield judge(power, Limit(None, allowed, "W"), says, source=figure.source, rating=True, remedy=remedy)


def _allowed(profile: Profile, ambient: float) -> float:
    """Return the dissipation (W) that the package stands at an ambient temperature (degC)."""
    most = profile.figure("package.dissipation").maximum
    junction = profile.figure("package.junction-temperature").maximum
    start = profile.figure("package.derating-start").maximum
    assert most is not None
    assert junction is not None
    assert start is not None
    return most * min(1.0, max(0.0, (junction - ambient) / (junction - start)))


def _power(
    controller: Controller, supply: Spread, groups: list[list[OutputTransistor]], currents: list[Estimate]
) -> Estimate:
    """Return the controller's dissipation: outputs that take turns conduct in half the periods each."""
    profile = controller.profile
    duty = (1 - profile.figure("dead-time.least").spread().minimum) / max(1, len(groups))
    quiescent = profile.figure("supply.current").spread()
    drops: list[tuple[float, float]] = []
    for outputs in groups:
        follows = outputs[0].use == "follower"
        figure = "output.saturation-follower" if follows else "output.saturation-common-emitter"
        drop = profile.figure(figure).spread()
        drops.append((drop.nominal, drop.maximum))
    pairs = list(zip(drops, currents, strict=True))
    least = supply.minimum * quiescent.minimum
    nominal = supply.nominal * quiescent.nominal + duty * sum(
        d[0] * max(0.0, c.spread.nominal) for d, c in pairs
    )
    most = supply.maximum * quiescent.maximum + duty * sum(
        d[1] * max(0.0, c.spread.maximum) for d, c in pairs
    )
    spread = Spread(least, nominal, most, "W")
    formula = f"{engineering(supply.maximum, 'V')} x {engineering(quiescent.maximum, 'A')}"
    formula += "".join(
        f" + {engineering(d[1], 'V')} x {engineering(c.spread.maximum, 'A')} x {duty:.2f}" for d, c in pairs
    )
    whole = Estimate(
        spread, spread, assumptions=tuple(dict.fromkeys(a for c in currents for a in c.assumptions))
    )
    parts = tuple(dict.fromkeys(part for c in currents for part in c.parts))
    return replace(whole.because(f"{formula} = {engineering(most, 'W')}"), parts=parts)
