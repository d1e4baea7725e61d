"""Safety: what a netlist can caution of. It shows neither spacing nor insulation, and judges neither."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from math import inf

from ..lint.circuit.isolation import way_across
from ..lint.circuit.loops import Regulation
from ..lint.design import Design
from ..lint.quantity import engineering
from ..lint.rule import netlist_rule
from ..lint.verdict import Outcome, Verdict

# Direct voltage from which a shock can hurt: SELV and ES1 end here (IEC 60950-1; IEC 62368-1, from memory).
_SHOCKING = 60.0

# Power (VA) from which a short circuit can burn (IEC 60950-1).
_BURNING = 240.0

_CAUTION = (
    "A netlist shows neither spacing, insulation, earthing, fusing nor touch current: hold the board to the "
    "product standard that applies and to the local codes, leave to licensed practice what they ask it for, "
    "and before touching it take the supply off and the charge out"
)


@netlist_rule("safety.scope", level="note", topic="safety")
def scope(design: Design) -> Iterable[Verdict]:
    """Has the board voltages or energies that can hurt someone?

    What:
        Speaks once where a net is declared as mains, a direct voltage exceeds 60 V, or a rail of the brief
        can deliver more than 240 VA. What it says is printed among the report's cautions.
    Why:
        A review of a netlist is no judgement of what can be touched, how far apart it is, or what happens
        in a fault. Whoever reads the report must not take it for one.
    Formula:
        S [VA] = V [V] x I [A], I the greatest load or current limit that the brief tells
    Source:
        IEC 60950-1 (60 V, 240 VA); IEC 62368-1, from memory
    Remedy:
        Follow the product standard and the local codes; leave to licensed practice what they ask it for.
    Fails:
        C1 VIN 0 100u
        [rails.VIN] voltage = "90 V"
    Passes:
        C1 VIN 0 100u
        [rails.VIN] voltage = "24 V"
    """
    reasons = [*_mains_reason(design), *_voltage_reason(design), *_power_reason(design)]
    if reasons:
        yield Verdict(
            outcome=Outcome.INFORMATIONAL,
            message=f"{'; '.join(reasons)}. {_CAUTION}",
            source="IEC 60950-1; IEC 62368-1, from memory",
        )


@netlist_rule("safety.isolation", level="error", topic="safety")
def isolation(design: Design) -> Iterable[Verdict]:
    """Is the secondary circuit kept apart from the primary one?

    What:
        Walks from the nets that the brief declares as mains or primary towards those declared secondary,
        through every part but transformers, opto-couplers and capacitors marked Y1 or Y2. A way of parts
        that conduct direct current fails; a way through others is for a person to judge. Shown is the
        shortest; where that is mended, another may be left.
    Why:
        One part across the barrier, or one ground for both sides, puts the mains on what is touched.
    Formula:
        none: connectivity
    Source:
        IEC 60384-14 (classes of capacitors); common practice, no source (the rule)
    Remedy:
        Take the part out, or put an isolating one in its place.
    Fails:
        R1 HV VOUT 1MEG
        [rails.HV] voltage = "325 V"; circuit = "primary"
        [rails.VOUT] voltage = "12 V"; circuit = "secondary"
    Passes:
        C1 HV VOUT 1n
        parts: C1, dielectric Y1
        [rails.HV] voltage = "325 V"; circuit = "primary"
        [rails.VOUT] voltage = "12 V"; circuit = "secondary"
    """
    primary, secondary = design.declared("mains", "primary"), design.declared("secondary")
    if not primary or not secondary:
        return
    way = way_across(design.circuit, primary, secondary)
    if way is None:
        yield Verdict(
            outcome=Outcome.PASS,
            message="nothing but transformers, opto-couplers and Y capacitors leads from "
            f"{', '.join(primary)} to {', '.join(secondary)}",
            nets=(*primary, *secondary),
        )
        return
    start, *between, end = way.nets
    behind = f" by way of {', '.join(between)}" if between else ""
    yield Verdict(
        outcome=Outcome.FAIL if way.conductive else Outcome.REVIEW,
        message=f"{', '.join(way.parts)} {'lead' if len(way.parts) > 1 else 'leads'} from {start}, primary, "
        f"to {end}, secondary{behind}",
        parts=way.parts,
        nets=way.nets,
        source="common practice, no source",
        remedy="take the part out, or put a transformer, an opto-coupler or a Y capacitor in its place",
    )


def _mains_reason(design: Design) -> Iterator[str]:
    nets = design.declared("mains")
    if nets:
        yield f"{', '.join(nets)} {'carry' if len(nets) > 1 else 'carries'} the mains"


def _voltage_reason(design: Design) -> Iterator[str]:
    volts = {net: potential.spread for net, potential in design.known.items()}
    for controller in design.controllers:
        regulation = design.regulation(controller)
        if isinstance(regulation, Regulation):
            nets = [a.output for a in design.amplifiers(controller) if a.use == "voltage"]
            volts |= {net: regulation.output.spread for net in nets if net not in volts}
    sizes = {net: max(abs(s.minimum), abs(s.maximum)) for net, s in volts.items()}
    high = [f"{net} reaches {engineering(v, 'V')}" for net, v in sizes.items() if _SHOCKING < v < inf]
    if high:
        yield f"{', '.join(high)}: more than {engineering(_SHOCKING, 'V', 2)}"


def _power_reason(design: Design) -> Iterator[str]:
    for net, rail in design.brief.rails.items() if design.brief is not None else ():
        currents = [rail.load.maximum] if rail.load is not None else []
        currents += [
            told.current_limit.maximum
            for controller in design.controllers
            if (told := design.told(controller)) is not None
            and told.output == net
            and told.current_limit is not None
        ]
        power = max(abs(rail.band.minimum), abs(rail.band.maximum)) * max(currents, default=0.0)
        if power > _BURNING:
            yield f"{net} can deliver {power:.0f} VA: more than {_BURNING:.0f} VA"
