"""Oscillator: the timing parts, their range, and what they are made of. The frequency is in `frequency`."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import replace

from ..lint.circuit.controllers import Controller
from ..lint.circuit.timing import Timing
from ..lint.circuit.timing_nets import TimingNet, TimingNets
from ..lint.controllers import Profile
from ..lint.design import Design
from ..lint.estimate import Unsolved
from ..lint.judge import judge, unsolved
from ..lint.preferred import nearest
from ..lint.quantity import engineering
from ..lint.rule import rule
from ..lint.verdict import Limit, Outcome, Verdict

_RESISTOR = ("timing resistor",)
_CAPACITOR = ("timing capacitor",)
TIMING_PINS = (*_RESISTOR, *_CAPACITOR)


@rule("oscillator.timing-parts", level="error", topic="oscillator")
def timing_parts(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Are the timing resistor and the timing capacitor there, each from its pin to ground?

    What:
        Looks at the two timing pins: resistive parts from the one to ground, capacitors from the other to
        ground, and nothing else on these nets. A timing resistor pin tied to the reference stops the
        oscillator on purpose: another one then drives the timing capacitor's pin.
    Why:
        The resistor sets the current that charges the capacitor. Without it, or with the two swapped,
        nothing oscillates; whatever else hangs on these pins shifts the frequency.
    Formula:
        I(charge) [A] = 3 V / RT [ohm]; period [s] = 3 V x CT [F] / I(charge) [A]
    Source:
        SLVS074 p.11 (both parts to ground), p.1 (timing resistor pin at the reference)
    Remedy:
        Connect the timing resistor and the timing capacitor from their pins to ground, and nothing else.
    Fails:
        R1 CT 0 12k
        C1 RT 0 10n
    Passes:
        R1 RT 0 12k
        C1 CT 0 10n
    """
    if not all(controller.pin(role) for role in TIMING_PINS):
        return  # connections.controller-found speaks of pins that are not mapped
    if _is_stopped(controller, design):
        name = controller.pins["timing resistor"].name
        yield Verdict(
            outcome=Outcome.INFORMATIONAL,
            message=f"{name} is at the reference: the oscillator stands still and is driven from outside",
            pins=TIMING_PINS,
            nets=_nets(controller),
        )
        return
    nets = _timing_nets(controller, design)
    yield _where(controller, design, nets.resistor(), "timing resistor")
    yield _where(controller, design, nets.capacitor(), "timing capacitor")


def _timing_nets(controller: Controller, design: Design) -> TimingNets:
    return TimingNets(design.circuit, design.known, design.controllers, controller)


def _nets(controller: Controller) -> tuple[str, ...]:
    return tuple(net for role in TIMING_PINS if (net := controller.net(role)))


def _is_stopped(controller: Controller, design: Design) -> bool:
    """Tell whether the timing resistor's pin is tied to the reference, which stops the oscillator."""
    net = controller.net("timing resistor")
    potential = design.potential(net) if net else None
    return potential is not None and potential.origin == "reference"


def _where(controller: Controller, design: Design, found: TimingNet, role: str) -> Verdict:
    """Return the verdict on what hangs on one timing pin."""
    fault = _fault(design, found, role)
    pin = controller.pins[role]
    outcome, message, remedy = Outcome.PASS, f"{', '.join(found.parts)} from {pin.name} to ground", ""
    if fault:
        outcome, message = Outcome.FAIL, f"{pin.name}: {fault}"
        remedy = f"connect a {role} from {pin.name} to ground"
    elif found.others or any(end not in design.known for end in found.ends):
        outcome, message = Outcome.REVIEW, f"{pin.name}: {_beside(design, found)}"
        remedy = f"leave nothing but the {role} on {pin.name}, unless the shift in frequency is wanted"
    return Verdict(
        outcome=outcome,
        message=message,
        parts=found.parts,
        nets=(found.net,) if found.net else (),
        pins=(role,),
        places=() if found.parts else (pin.place,),
        source=_WHERE if outcome is Outcome.FAIL else "",
        remedy=remedy,
    )


_WHERE = "SLVS074 p.11"


def _fault(design: Design, found: TimingNet, role: str) -> str:
    """Return what keeps a timing pin from working, empty where nothing does."""
    if not found.parts:
        instead = f", only {', '.join(found.others)}" if found.others else ""
        return f"no {role} on the pin{instead}"
    wrong = [end for end in found.ends if end in design.known and not design.is_ground(end)]
    if wrong:
        return f"{', '.join(found.parts)} leads to {', '.join(wrong)}, not to ground alone"
    return "" if found.ends else f"{', '.join(found.parts)} leads nowhere"


def _beside(design: Design, found: TimingNet) -> str:
    """Return what else shifts the frequency: strangers on the net, or a part between it and ground."""
    if found.others:
        return f"{', '.join(found.others)} hangs on it as well and shifts the frequency"
    unknown = [end for end in found.ends if end not in design.known]
    return f"{', '.join(found.parts)} leads to {', '.join(unknown)} instead of straight to ground"


def timing_of(controller: Controller, design: Design) -> Timing | Unsolved | None:
    """Return the timing, or None where oscillator.timing-parts says why there is none."""
    if not all(_nets(controller)) or _is_stopped(controller, design):
        return None
    nets = _timing_nets(controller, design)
    sides = ((nets.resistor(), "timing resistor"), (nets.capacitor(), "timing capacitor"))
    return None if any(_fault(design, found, role) for found, role in sides) else design.timing(controller)


@rule("oscillator.timing-range", level="error", topic="oscillator")
def timing_range(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Are the timing resistor and the timing capacitor inside the range that the controller is made for?

    What:
        Holds the resistance from the timing resistor's pin to ground and the capacitance on the timing
        capacitor's pin against the recommended ranges, over tolerances and at every trimmer position.
    Why:
        Below the least resistance the charging current leaves the range in which it is a mirror of the
        resistor's; above the greatest, leakage takes its share. A capacitor too small is lost among the
        strays, and one too large is not emptied within the dead time.
    Formula:
        R [ohm] between the pin and ground by nodal analysis; C [F] = sum of the capacitors to ground
    Source:
        1.8 kohm .. 500 kohm: three second sources' data sheets; 0.47 nF .. 10 uF: two of them
    Remedy:
        Take the pair of preferred values printed, which keeps the frequency; a trimmer needs a fixed
        resistor in series.
    Fails:
        R1 RT 0 1.2k
        C1 CT 0 10n
    Passes:
        R1 RT 0 12k
        C1 CT 0 10n
    """
    found = timing_of(controller, design)
    if found is None:
        return
    if isinstance(found, Unsolved):
        yield unsolved(found, "timing resistance and capacitance", pins=TIMING_PINS)
        return
    profile = controller.profile
    remedy = timing_pair(profile, found.resistance.spread.nominal * found.capacitance.spread.nominal)
    kinds = {part: design.circuit.kind(design.part(part)) for part in found.frequency.parts}
    resistive = tuple(part for part, kind in kinds.items() if kind != "capacitor")
    for estimate, role, parts in (
        (found.resistance, "timing resistor", resistive),
        (found.capacitance, "timing capacitor", tuple(p for p in kinds if p not in resistive)),
    ):
        net = controller.pins[role].net
        figure = profile.figure(f"oscillator.{role.replace(' ', '-')}")
        yield judge(
            replace(estimate, parts=parts),
            figure.limit(),
            f"{estimate.spread} at {controller.pins[role].name}",
            source=figure.source,
            pins=(role,),
            nets=(net,),
            remedy=remedy,
        )


def middle(limit: Limit) -> float:
    """Return the geometric middle of a limit with two sides."""
    assert limit.minimum is not None
    assert limit.maximum is not None
    return (limit.minimum * limit.maximum) ** 0.5


def timing_pair(profile: Profile, product: float) -> str:
    """Return preferred timing parts, well inside their ranges, whose RT x CT is nearest to `product` (s)."""
    resistance_range = profile.limit("oscillator.timing-resistor")
    capacitance_range = profile.limit("oscillator.timing-capacitor")
    assert capacitance_range.minimum is not None
    assert capacitance_range.maximum is not None
    ideal = product / middle(resistance_range)
    within = min(max(ideal, capacitance_range.minimum), capacitance_range.maximum)
    capacitance = nearest(within, "E6")
    if not resistance_range.holds(product / capacitance):
        return "choose a frequency inside the recommended range"
    resistance = nearest(product / capacitance, "E24")
    return (
        f"{engineering(resistance, 'ohm')} and {engineering(capacitance, 'F')} make the same product of "
        f"{engineering(resistance * capacitance, 's')}"
    )


# How the parts list names what a capacitor is made of. Class 1 ceramic and film keep their value; class 2
# and 3 ceramic lose a good part of it over temperature and voltage, an electrolytic over temperature and age.
_STEADY = re.compile(
    r"C0G|COG|NP0|NPO|U2J|1B|CG|CLASS ?1|FILM|PP|PPS|PS|PET|PEN|MK[PTSNIC]|MICA"
    r"|POLY(?:PROPYLENE|ESTER|STYRENE|CARBONATE)"
)
_DRIFTING = re.compile(
    r"[XYZ][2-9][PRSTUV]|2[BCDEFRX][14]|CLASS ?[23]|(?:[A-Z]+ )?ELECTROLYTIC|ALUMINI?UM|TANT(?:ALUM)?|POLYMER"
)


@rule("oscillator.dielectric", level="warning", topic="oscillator")
def dielectric(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the timing capacitor made of something that keeps its value?

    What:
        Reads the dielectric of each timing capacitor from the parts list or the netlist's attributes.
        Class 2 and class 3 ceramic, and electrolytics, are named.
    Why:
        The frequency follows the capacitance one to one: X7R moves by up to 15 % over temperature, and
        more with voltage and age; an electrolytic starts with a tolerance of 20 %.
    Formula:
        change of frequency = -change of capacitance (to first order)
    Source:
        IEC 60384-21 (class 1) and IEC 60384-22 (class 2), from memory; that a timing capacitor wants
        class 1 or film: common practice, no source
    Remedy:
        Fit class 1 ceramic (C0G) or film: polypropylene or polyester.
    Fails:
        C1 CT 0 10n
        parts: C1, dielectric X7R
    Passes:
        C1 CT 0 10n
        parts: C1, dielectric C0G
    """
    if _is_stopped(controller, design):
        return
    for reference in _timing_nets(controller, design).capacitor().parts:
        text = design.circuit.reader.attribute(design.part(reference), "dielectric").strip()
        yield _made_of(controller, reference, text)


def _made_of(controller: Controller, reference: str, text: str) -> Verdict:
    name = text.upper()
    nets = (controller.pins["timing capacitor"].net,)
    if _STEADY.fullmatch(name):
        message = f"timing capacitor {reference} is {text}, which keeps its value"
        return Verdict(outcome=Outcome.PASS, message=message, parts=(reference,), nets=nets, pins=_CAPACITOR)
    if _DRIFTING.fullmatch(name):
        return Verdict(
            outcome=Outcome.FAIL,
            message=f"timing capacitor {reference} is {text}: the frequency drifts with it",
            parts=(reference,),
            nets=nets,
            pins=_CAPACITOR,
            source="common practice, no source",
            remedy=f"fit {reference} as class 1 ceramic (C0G) or film",
        )
    told = f"{text!r} tells nothing here" if text else "not told"
    return Verdict(
        outcome=Outcome.OPEN,
        message=f"dielectric of timing capacitor {reference}: {told}",
        parts=(reference,),
        nets=nets,
        pins=_CAPACITOR,
        needs=(f"parts list: {reference} dielectric, such as C0G or film",),
    )
