"""Dead time: what a reviewer asks of the dead-time pin."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from ..lint.brief import ControllerBrief
from ..lint.circuit.controllers import Controller
from ..lint.circuit.power_stage import NotRecognised
from ..lint.controllers import Figure
from ..lint.design import Design
from ..lint.estimate import Unsolved
from ..lint.judge import judge, unsolved
from ..lint.quantity import engineering
from ..lint.rule import rule
from ..lint.verdict import Outcome, Verdict

_PIN = ("dead time",)
_BOTH_OUTPUTS = ("push-pull", "half-bridge", "full-bridge")

# Below this the pin is as good as grounded, and only the controller's own dead time is left.
_AT_GROUND = 0.2


@rule("dead-time.driven", level="error", topic="dead time")
def driven(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the dead-time pin held at a defined direct voltage?

    What:
        Looks for a direct-current path from the pin to ground, the reference or a rail. An open pin and
        a pin with capacitors only have none.
    Why:
        The pin's bias current flows out of it and charges a lone capacitor up to the internal supply:
        dead time drifts to 100 % and the outputs stay off, or it depends on leakage and humidity.
    Formula:
        offset [V] = bias current [A] x resistance to the driving point [ohm]
    Source:
        SLVS074 p.5 (input bias current of the dead-time control); common practice, no source (the rule)
    Remedy:
        Tie the pin to ground, or to a divider from the reference pin of a few kilo-ohms.
    Fails:
        C1 DTC 0 1u
    Passes:
        R1 REF DTC 10k
        R2 DTC 0 1k
    """
    net = controller.net("dead time")
    if net is None:
        return
    pin = controller.pins["dead time"]
    if net and design.has_path(net):
        yield Verdict(
            outcome=Outcome.PASS, message=f"{pin.name} has a direct-current path", pins=_PIN, nets=(net,)
        )
        return
    bias = controller.profile.figure("dead-time.bias-current")
    yield Verdict(
        outcome=Outcome.FAIL,
        message=f"{pin.name} has no direct-current path: its bias current of up to "
        f"{engineering(abs(bias.spread().minimum), 'A')} charges whatever hangs on it",
        pins=_PIN,
        nets=(net,) if net else (),
        places=(pin.place,),
        source=bias.source,
        remedy=f"tie {pin.name} to ground, or to a divider from the reference pin",
    )


@rule("dead-time.range", level="error", topic="dead time")
def voltage_range(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the dead-time pin stay where it sets a usable dead time?

    What:
        Computes the pin's voltage over trimmer travel, tolerances, reference spread and bias current, and
        holds it against the useful range and the absolute limits. A trimmer that can lift the pin above
        the range can hold the outputs off: that is for a person to judge, unless the brief says
        `shut_off_by_dead_time = true`.
    Why:
        Above the range no output pulse is left; below ground the input structure conducts.
    Formula:
        V [V] by nodal analysis of the network on the pin, bias current [A] included
    Source:
        SLVS074 p.5 (zero duty at 3 V typical, 3.3 V maximum) and p.11 (0 V to 3.3 V sweep dead time from
        its minimum to 100 %)
    Remedy:
        Choose the divider, or a fixed resistor in series with the trimmer, so that the pin stays in range.
    Fails:
        R1 REF DTC 1k
        R2 DTC 0 10k
    Passes:
        R1 REF DTC 10k
        R2 DTC 0 1k
    """
    net = controller.net("dead time")
    if not net or not design.has_path(net):
        return  # dead-time.driven speaks of it
    voltage = design.voltage(net)
    if isinstance(voltage, Unsolved):
        yield unsolved(voltage, "dead-time voltage", pins=_PIN)
        return
    profile = controller.profile
    name = controller.pins["dead time"].name
    says = f"{name} at {voltage.spread}{_with_switches_on(design, net)}"
    absolute = profile.figure("dead-time.absolute-voltage")
    if not absolute.limit().contains(voltage.spread):
        yield judge(
            voltage,
            absolute.limit(),
            f"{says}, beyond what the pin stands",
            source=absolute.source,
            rating=True,
            pins=_PIN,
            remedy=f"keep {name} between ground and the reference",
        )
        return
    useful = profile.figure("dead-time.useful-voltage")
    remedy = "lower the divider's tap, or add a resistor between the reference and the top of it, until "
    remedy += f"{name} stays below {engineering(_top(useful), 'V')}"
    verdict = judge(voltage, useful.limit(), says, source=useful.source, pins=_PIN, remedy=remedy)
    yield _held_off(verdict, design.told(controller), _top(useful))


def _with_switches_on(design: Design, net: str) -> str:
    """Return where the pin goes when a transistor or switch on its network is on, empty without one."""
    states: list[str] = []
    for switch in design.switches(net):
        found = design.voltage_with(switch, net)
        where = "not computed" if isinstance(found, Unsolved) else f"{found.spread}"
        states.append(f"with {switch} on: {where}")
    return f" ({'; '.join(states)})" if states else ""


def _top(figure: Figure) -> float:
    assert figure.maximum is not None  # the profile's own test asks for it
    return figure.maximum


def _held_off(verdict: Verdict, told: ControllerBrief | None, top: float) -> Verdict:
    """Turn a voltage that only somewhere exceeds the range into what it means: outputs held off there."""
    measured = verdict.measured
    assert measured is not None
    if measured.maximum <= top or measured.nominal > top:
        return verdict
    if told is not None and told.shut_off_by_dead_time:
        message = f"{verdict.message}: the outputs can be held off, as the brief wants"
        return replace(verdict, outcome=Outcome.PASS, message=message, level=None, remedy="")
    message = f"{verdict.message}: above {engineering(top, 'V')} no pulse is left"
    return replace(verdict, outcome=Outcome.REVIEW, message=message, level=None)


@rule("dead-time.source", level="warning", topic="dead time")
def fed_from(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the dead-time pin fed from the reference, and not from something that ripples?

    What:
        Names the nets of known potential that the pin's network leads to, ground and the reference left
        out.
    Why:
        The pin's comparator looks at the ramp directly: ripple on a supply comes out as jitter of every
        pulse, and a supply that rises with the line changes the dead time with it.
    Formula:
        none: connectivity
    Source:
        common practice, no source
    Remedy:
        Take the top of the divider to the reference pin.
    Fails:
        R1 VCC DTC 47k
        R2 DTC 0 1k
        [rails.VCC] voltage = "12 V"
    Passes:
        R1 REF DTC 10k
        R2 DTC 0 1k
    """
    net = controller.net("dead time")
    if not net or not design.has_path(net):
        return  # dead-time.driven speaks of it
    voltage = design.voltage(net)
    reference = controller.net("reference")
    others = [n for n in voltage.nets if n not in (net, reference) and _is_rail(design, n)]
    others += [n for n in design.reach(controller, net).ends if n in _pulsed(controller, design)]
    if not others and isinstance(voltage, Unsolved):
        return  # dead-time.range speaks of it
    name = controller.pins["dead time"].name
    if others:
        yield Verdict(
            outcome=Outcome.REVIEW,
            message=f"{name} is fed from {', '.join(others)}, whose ripple reaches the comparator",
            parts=voltage.parts,
            nets=tuple(others),
            pins=_PIN,
            source="common practice, no source",
            remedy="take the top of the divider to the reference pin",
        )
    else:
        message = f"{name} is fed from nothing but the reference and ground"
        yield Verdict(outcome=Outcome.PASS, message=message, parts=voltage.parts, pins=_PIN)


def _pulsed(controller: Controller, design: Design) -> tuple[str, ...]:
    """Return the nets that the switches pull to and fro."""
    stage = design.power_stage(controller)
    return () if isinstance(stage, NotRecognised) else tuple(switch.node for switch in stage.switches)


def _is_rail(design: Design, net: str) -> bool:
    potential = design.potential(net)
    return potential is not None and potential.origin not in ("ground", "reference")
