"""Reference: what it is asked to deliver, what holds it still, and whether it is exact enough."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from ..grammar.netlist import Part
from ..lint import needs
from ..lint.brief import Rail
from ..lint.circuit.controllers import Controller
from ..lint.circuit.potentials import named_voltage
from ..lint.circuit.reference_load import ReferenceLoad
from ..lint.design import Design
from ..lint.estimate import Estimate, Unsolved
from ..lint.judge import judge, unsolved
from ..lint.preferred import is_a_size, neighbours
from ..lint.quantity import Spread, engineering
from ..lint.rule import rule
from ..lint.verdict import Limit, Outcome, Verdict
from .bypass import bypass_verdict

_PIN = ("reference",)


@rule("reference.load", level="error", topic="reference")
def load(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the reference asked for no more current than it can deliver?

    What:
        Solves everything that hangs on the reference pin, trimmers at their worst, the output-control pin
        included where it is tied there, and adds up the branches. What other parts draw (an integrated
        circuit, a connector) is taken from `load` of the rail in the brief; untold it leaves the question
        open, unless the rest is too much already.
    Why:
        Beyond its limit the reference sags, and the output voltage, the dead time and the current limit
        move with it; the part also heats up.
    Formula:
        I [A] = sum of the branch currents, each by nodal analysis at the highest reference voltage
    Source:
        7500 class data sheet of a second source (10 mA); SLVS074 p.5 (3.5 mA into the output-control pin)
    Remedy:
        Raise the resistance of the greatest branch to the printed value, or feed it from the supply.
    Fails:
        R1 REF DTC 470
        R2 DTC 0 47
    Passes:
        R1 REF DTC 4.7k
        R2 DTC 0 470
    """
    net = controller.net("reference")
    if not net:
        return
    found = design.reference_load(controller)
    if isinstance(found, Unsolved):
        yield unsolved(found, "load of the reference", pins=_PIN)
        return
    total, unknown = _with_told(found, design.rail(net))
    figure = controller.profile.figure("reference.load")
    assert figure.maximum is not None  # the profile's own tests ask for it
    says = f"{net} delivers {total.spread}{_listed(found)}"
    remedy = _less(found, design, net, figure.maximum)
    verdict = judge(total, figure.limit(), says, source=figure.source, rating=True, pins=_PIN, remedy=remedy)
    certain, _ = _with_told(replace(found, total=found.certain), design.rail(net))
    if verdict.outcome is Outcome.FAIL and found.bounded and figure.limit().contains(certain.spread):
        yield replace(_as_it_may_be(verdict, found, says), outcome=Outcome.OPEN)
        return
    if unknown and verdict.outcome is Outcome.PASS:
        need = needs.rail(net, "load", declared=design.rail(net) is not None)
        message = f"{says}; {'; '.join(unknown)}"
        verdict = replace(verdict, outcome=Outcome.OPEN, message=message, needs=(need,))
    yield verdict


def _as_it_may_be(verdict: Verdict, found: ReferenceLoad, says: str) -> Verdict:
    """Say that the load passes the limit only if something unknown draws what the resistors let it."""
    nets = ", ".join(found.bounded)
    return replace(
        verdict,
        message=f"{says}; the most only if something pulls {nets} to ground",
        needs=tuple(needs.rail(net) for net in found.bounded),
    )


def _with_told(found: ReferenceLoad, rail: Rail | None) -> tuple[Estimate, tuple[str, ...]]:
    """Return the total, with what the brief tells of parts that cannot be solved, and what is untold."""
    total = found.total.because(f"{_added(found)} = {found.total.spread}")
    if not found.unknown or rail is None or rail.load is None:
        return total, found.unknown
    more = rail.load
    told = f"the brief's load of {rail.net}, {more}, is what parts other than resistors draw"
    return replace(
        total,
        spread=_sum(total.spread, more),
        statistical=_sum(total.statistical, more),
        assumptions=(*total.assumptions, told),
        formula=f"{total.formula} + {more} by the brief",
    ), ()


def _added(found: ReferenceLoad) -> str:
    """Return the branches as a sum."""
    return " + ".join(f"{name} {current.spread.text(2)}" for name, current in found.branches) or "nothing"


def _sum(one: Spread, other: Spread) -> Spread:
    ends = (one.minimum + other.minimum, one.nominal + other.nominal, one.maximum + other.maximum)
    return Spread(*ends, "A")


_MOST_LISTED = 4


def _listed(found: ReferenceLoad) -> str:
    """Return the greatest branches, each at its worst."""
    greatest = [
        f"{name} {engineering(i.spread.maximum, 'A', 2)}" for name, i in found.branches[:_MOST_LISTED]
    ]
    return f"; at most {', '.join(greatest)}" if greatest else ""


def _less(found: ReferenceLoad, design: Design, net: str, limit: float) -> str:
    """Return the resistor value that brings the load under its limit."""
    excess = found.total.spread.maximum - limit
    for name, current in found.branches:
        part = design.netlist.parts.get(name)
        left = current.spread.maximum - excess
        if part is not None and left > 0 and _can_be_raised(part, current.spread.maximum / left, design):
            return _raised(part, current.spread.maximum / left, design, net)
    factor = found.total.spread.maximum / limit
    return f"raise the resistances of all branches {engineering(factor)} times, or feed some from the supply"


# Less is a link, and no other value of it would limit a current (common practice, no source).
_LINK = 1e-3


def _can_be_raised(part: Part, factor: float, design: Design) -> bool:
    value = design.nominal(part) or 0.0
    return design.circuit.kind(part) == "resistor" and value > _LINK and is_a_size(value * factor)


def _raised(part: Part, factor: float, design: Design, net: str) -> str:
    """Return one resistor at the next preferred value above `factor` times its own."""
    value = design.nominal(part)
    assert value is not None  # it has a branch current
    _, above = neighbours(value * factor, "E24")
    remedy = f"raise {part.reference} from {engineering(value, 'ohm')} to {engineering(above, 'ohm')} (E24)"
    nets = [other for other in design.circuit.other_nets(part, net) if not design.is_ground(other)]
    rest = [connection.part for other in nets for connection in design.circuit.connections(other)]
    more = [p.reference for p in rest if p is not part and design.circuit.kind(p) in ("resistor", "trimmer")]
    return f"{remedy}, and {', '.join(more)} in the same ratio" if more else remedy


@rule("reference.bypass", level="warning", topic="reference")
def bypass(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the reference pin bypassed to ground by a capacitor of the usual size?

    What:
        Adds up the capacitors that stand straight between the reference net and ground, electrolytic ones
        left out; one without a marked dielectric counts up to 10 uF. More than usual is for a person to
        judge.
    Why:
        Every threshold comes from this pin: what couples into it becomes jitter of the pulses. A very
        large capacitor delays the reference at switch-on, while the supply is up already.
    Formula:
        100 nF <= sum of C [F] <= 10 uF
    Source:
        common practice, no source
    Remedy:
        Put 100 nF to 1 uF, ceramic, from the reference pin to the ground pin.
    Fails:
        C1 VCC 0 100n
    Passes:
        C1 VCC 0 100n
        C2 REF 0 100n
    """
    net = controller.net("reference")
    if not net or design.is_ground(net):
        return
    practice = controller.profile.practice("reference.bypass")
    assert practice.minimum is not None  # the profile's own tests ask for both
    assert practice.maximum is not None
    remedy = f"put {engineering(practice.minimum, 'F')} to 1 µF, ceramic, from the reference pin to ground"
    verdict = bypass_verdict(controller, design, "reference", practice, practice.maximum, remedy=remedy)
    large = verdict.measured is not None and verdict.measured.nominal > practice.maximum
    yield replace(verdict, outcome=Outcome.REVIEW, level=None) if large else verdict


@rule("reference.back-fed", level="error", topic="reference")
def back_fed(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does anything but the controller drive its reference?

    What:
        Looks for ground, a source, another controller's reference or the supply pin on the reference net,
        straight or through a link, and for resistors that feed more current into the net than what hangs
        on it takes away.
    Why:
        The reference can deliver current but not take any. Lifted from outside, it moves every threshold
        with the foreign rail; shorted, it delivers its short-circuit current until the part is too hot.
    Formula:
        current out of the pin [A], by nodal analysis, not below -0.1 mA in any corner
    Source:
        SLVS074 p.4 (short circuit of the reference: one second at most); the 0.1 mA that the controller's
        inside takes up: common practice, no source
    Remedy:
        Take the foreign rail off the net; feed pull-ups to it from the reference itself.
    Fails:
        V1 VCC 0 12
        R1 VCC REF 1k
        R2 REF DTC 10k
        R3 DTC 0 1k
    Passes:
        V1 VCC 0 12
        R2 REF DTC 10k
        R3 DTC 0 1k
    """
    net = controller.net("reference")
    if not net:
        return
    foreign = _foreign(controller, design, net)
    for what, parts, nets in foreign:
        yield Verdict(
            outcome=Outcome.FAIL,
            message=f"the reference net {net} {what}",
            parts=parts,
            nets=nets,
            pins=_PIN,
            source=controller.profile.figure("reference.short-circuit").source,
            remedy=f"take it off {net}: the controller alone drives this net",
        )
    if foreign:
        return
    found = design.reference_load(controller)
    if not isinstance(found, Unsolved):  # else reference.load speaks of it
        yield _fed_by_resistors(found, net)


# What the circuits inside a controller take from its reference at least.
_TAKEN_UP = -100e-6


def _fed_by_resistors(found: ReferenceLoad, net: str) -> Verdict:
    feeding = [name for name, current in found.branches if current.spread.minimum < _TAKEN_UP]
    total = found.total.because(f"{_added(found)} = {found.total.spread}")
    limit = Limit(_TAKEN_UP, None, "A")
    says = f"nothing drives {net} but the controller"
    if not limit.contains(total.spread):
        says = f"{', '.join(feeding)} can feed current into {net}: {total.spread} out of the pin"
    return judge(
        total,
        limit,
        says,
        source="common practice, no source",
        rating=True,
        pins=_PIN,
        remedy=f"feed {', '.join(feeding)} from {net} itself, or raise its resistance",
    )


_Foreign = tuple[str, tuple[str, ...], tuple[str, ...]]

# Parts that join two nets into one, as far as direct current is concerned.
_LINKS = frozenset({"jumper", "fuse", "inductor"})


def _foreign(controller: Controller, design: Design, net: str) -> list[_Foreign]:
    """Return what else drives the reference net: how, the parts and the nets."""
    if design.is_ground(net):
        return [("is shorted to ground", (), (net,))]
    found: list[_Foreign] = []
    if net == controller.net("supply"):
        found.append(("is the supply net as well", (), (net,)))
    for other in design.controllers:
        if other is not controller and other.net("reference") == net:
            found.append((f"is the reference of {other.reference} as well", (other.reference,), (net,)))
    found += _other_voltage(controller, design, net)
    for connection in design.circuit.connections(net):
        part = connection.part
        # A source towards a net of unknown potential is an ammeter of the simulation.
        ends = [other for other in design.circuit.other_nets(part, net) if design.potential(other)]
        joint = _joint(design, part)
        if joint:
            found += [(f"{joint} {end} by {part.reference}", (part.reference,), (net, end)) for end in ends]
    return found


def _other_voltage(controller: Controller, design: Design, net: str) -> list[_Foreign]:
    """Return the voltage that the brief or the net's own name gives the reference net, where it differs."""
    reference = controller.profile.figure("reference.voltage").spread()
    rail, volts = design.rail(net), named_voltage(net)
    told = rail.band if rail is not None else None
    if told is None and volts is not None:
        told = Spread.exact(volts, "V")
    if told is None or (told.minimum <= reference.maximum and told.maximum >= reference.minimum):
        return []
    return [(f"is {told} by {'the brief' if rail is not None else 'its name'}", (), (net,))]


def _joint(design: Design, part: Part) -> str:
    """Return how a part binds the potentials of its two nets, empty where it does not."""
    kind = design.circuit.kind(part)
    if len(part.pins) != 2:
        return ""
    if kind in ("voltage source", "battery"):
        return "is driven against"
    link = kind in _LINKS or (kind == "resistor" and design.nominal(part) == 0)
    return "is linked to" if link else ""
