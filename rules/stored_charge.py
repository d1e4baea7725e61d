"""Stored charge: is it led away once everything is switched off?"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from itertools import combinations
from math import log, sqrt

from ..grammar.netlist import Part
from ..lint.circuit.bleeder import Bleeder, bleeder
from ..lint.design import Design
from ..lint.preferred import is_a_size
from ..lint.quantity import Spread, engineering
from ..lint.rule import netlist_rule
from ..lint.verdict import Limit, Outcome, Verdict

# Direct voltage from which a shock can hurt: SELV and ES1 end here (IEC 60950-1; IEC 62368-1, from memory).
_SHOCKING = 60.0

# Stored energy (J) from which a short circuit can burn (IEC 60950-1, from memory).
_BURNING = 20.0

# A capacitor of no more than this (F) holds too little charge to ask for a bleeder (IEC 60950-1).
_LEAST_CAPACITANCE = 0.1e-6

# Time constants (s) for equipment that is plugged in, and for other (IEC 60950-1 clause 2.1.1.7).
_PLUGGABLE, _FIXED = 1.0, 10.0

# Within so many seconds what is left must be below 60 V (IEC 60204-1).
_WAIT = 5.0

_SOURCE = "IEC 60950-1 clause 2.1.1.7, as quoted in published texts"


@netlist_rule("safety.discharge", level="error", topic="safety")
def discharge(design: Design) -> Iterable[Verdict]:
    """Is what stands across the mains discharged once the plug is out?

    What:
        Adds up the capacitors between two nets that the brief declares as mains, fuses and chokes passed,
        and looks for resistors that discharge them: more than 0.1 uF must fall with a time constant of
        1 s. Up to 10 s, one bleeder alone, or one with more of the mains' peak across it than it stands,
        is for a person to judge.
    Why:
        The pins of a plug just pulled can be touched.
    Formula:
        tau [s] = R [ohm] x C [F], both at their greatest; time to 60 V [s] = tau x ln(peak / 60 V)
    Source:
        IEC 60950-1 clause 2.1.1.7 (1 s for pluggable equipment of type A, 10 s for other), as quoted in
        published texts; IEC 62368-1 asks for the same with one resistor open, from memory
    Remedy:
        Put bleeder resistors across the capacitor, two or more in series.
    Fails:
        C1 L N 470n
        [rails.L] voltage = "230 V"; circuit = "mains"
        [rails.N] voltage = "230 V"; circuit = "mains"
    Passes:
        C1 L N 470n
        R1 L N1 470k
        R2 N1 N 470k
        [rails.L] voltage = "230 V"; circuit = "mains"
        [rails.N] voltage = "230 V"; circuit = "mains"
    """
    groups = _mains(design)
    if len(groups) == 1:
        (name,) = groups
        need = 'brief: [rails.<the other mains net>] circuit = "mains"'
        message = f"{name} is the only mains net that the brief declares"
        yield Verdict(outcome=Outcome.OPEN, message=message, nets=(name,), needs=(need,))
    for one, other in combinations(groups, 2):
        across = _Across.the_mains(design, groups[one], groups[other])
        if across.capacitance.maximum > _LEAST_CAPACITANCE:
            peak = sqrt(2) * max(_rail_voltage(design, one), _rail_voltage(design, other))
            found = bleeder(design.circuit, groups[one], groups[other])
            yield _discharged(design, across, (one, other), found, peak)


@netlist_rule("safety.stored-energy", level="error", topic="safety")
def stored_energy(design: Design) -> Iterable[Verdict]:
    """Is a charge that can hurt led away when the supply is off?

    What:
        Adds up the capacitors between each two nets of known voltage. Above 60 V and 0.1 uF, or from 20 J
        on, resistors must bring them to 60 V, or below 20 J, within 5 s; the running converter does not
        count. Where they do not, it is for a person to judge.
    Why:
        Whoever services the board meets the charge long after the plug is out.
    Formula:
        E [J] = C [F] x V^2 / 2; t [s] = R C ln(V / 60 V), or R C ln(E / 20 J) / 2
    Source:
        IEC 60204-1 (60 V within 5 s), as quoted in published texts; IEC 60950-1 (20 J), from memory
    Remedy:
        Put a bleeder across the capacitor, or a warning with the time to wait beside it.
    Fails:
        C1 HV 0 10u
        [rails.HV] voltage = "325 V"
    Passes:
        C1 HV 0 10u
        R1 HV 0 150k
        [rails.HV] voltage = "325 V"
    """
    pairs: dict[tuple[str, str], list[Part]] = {}
    for stress in design.stresses().of.values():
        if design.circuit.kind(stress.part) == "capacitor":
            pairs.setdefault(_pair(stress.part), []).append(stress.part)
    for nets, parts in pairs.items():
        across = _Across.of(design, parts)
        spreads = [design.stresses().of[part.reference].voltage.spread for part in parts]
        volts = max(max(abs(s.minimum), abs(s.maximum)) for s in spreads)
        if across.is_dangerous(volts):
            yield _drained(across, nets, bleeder(design.circuit, nets[:1], nets[1:]), volts)


@dataclass(frozen=True, slots=True)
class _Across:
    """The capacitors between two nets, and their sum (F)."""

    parts: tuple[str, ...]
    capacitance: Spread

    @classmethod
    def of(cls, design: Design, parts: Iterable[Part]) -> _Across:
        """Return those of `parts` that have a value which a part can have, together."""
        found = ((part.reference, design.circuit.value(part)) for part in parts)
        values = {name: value for name, value in found if value and is_a_size(value.spread.nominal)}
        spreads = [value.spread for value in values.values()]
        ends = (sum(s.minimum for s in spreads), sum(s.nominal for s in spreads))
        return cls(tuple(values), Spread(*ends, sum(s.maximum for s in spreads), "F"))

    @classmethod
    def the_mains(cls, design: Design, one: tuple[str, ...], other: tuple[str, ...]) -> _Across:
        """Return the capacitors across the mains, each side given with the nets that are joined to it."""
        between = (part for net in one for end in other for part in design.circuit.between(net, end))
        return cls.of(design, (part for part in between if design.circuit.kind(part) == "capacitor"))

    def energy(self, volts: float) -> float:
        """Return the greatest energy (J) at a voltage."""
        return self.capacitance.maximum * volts * volts / 2

    def is_dangerous(self, volts: float) -> bool:
        """Tell whether they hold, at a voltage, what can shock or burn."""
        shocks = volts > _SHOCKING and self.capacitance.maximum > _LEAST_CAPACITANCE
        return shocks or self.energy(volts) >= _BURNING

    def time(self, resistance: Spread) -> Spread:
        """Return the time constant (s) with a resistance."""
        c, r = self.capacitance, resistance
        return Spread(r.minimum * c.minimum, r.nominal * c.nominal, r.maximum * c.maximum, "s")


def _pair(part: Part) -> tuple[str, str]:
    first, second = sorted(pin.net for pin in part.pins)
    return first, second


def _mains(design: Design) -> Mapping[str, tuple[str, ...]]:
    """Return the declared mains nets, each with the nets that fuses and chokes join to it."""
    groups: dict[str, tuple[str, ...]] = {}
    taken: set[str] = set()
    for name in design.declared("mains"):
        group: dict[str, None] = {}
        waiting = [name]
        while waiting:
            net = waiting.pop()
            if net in taken:
                continue
            taken.add(net)
            group[net] = None
            for connection in design.circuit.connections(net):
                if design.circuit.kind(connection.part) in _IN_LINE and len(connection.part.pins) == 2:
                    waiting += design.circuit.other_nets(connection.part, net)
        if group:
            groups[name] = tuple(group)
    return groups


_IN_LINE = frozenset({"fuse", "inductor", "jumper", "thermistor", "switch"})


def _rail_voltage(design: Design, net: str) -> float:
    rail = design.rail(net)
    return rail.band.maximum if rail is not None else 0.0


def _discharged(
    design: Design, across: _Across, nets: tuple[str, str], found: Bleeder | None, peak: float
) -> Verdict:
    """Return the verdict on the capacitors between two mains nets."""
    who = f"{', '.join(across.parts)}, {across.capacitance} across {' and '.join(nets)}"
    most = engineering(_PLUGGABLE / across.capacitance.maximum, "ohm")
    verdict = Verdict(
        outcome=Outcome.FAIL,
        message=f"{who}: no resistor discharges it",
        subject=across.parts[0],
        parts=across.parts,
        nets=nets,
        source=_SOURCE,
        remedy=f"put two or more resistors in series across it, together {most} at most",
    )
    if found is None:
        return verdict
    tau, limit = across.time(found.resistance), Limit(None, _PLUGGABLE, "s")
    doubts = _doubts(design, found, tau, peak)
    fall = engineering(tau.maximum * log(max(1.0, peak / _SHOCKING)), "s")
    says = f"{who}: discharged through {', '.join(found.shares)}, time constant {tau}, to 60 V in {fall}"
    verdict = replace(
        verdict,
        message="; ".join((says, *doubts)),
        measured=tau,
        limit=limit,
        margin=limit.margin(tau),
        parts=(*across.parts, *found.shares),
        formula=f"{found.resistance} × {across.capacitance}",
    )
    if doubts:
        return replace(verdict, outcome=Outcome.FAIL if tau.maximum > _FIXED else Outcome.REVIEW)
    whole = f"{', '.join(found.shares)} stay whole: an open one is not looked at"
    return replace(verdict, outcome=Outcome.PASS, assumptions=(whole,), remedy="")


def _doubts(design: Design, found: Bleeder, tau: Spread, peak: float) -> list[str]:
    """Return why a person must judge a bleeder."""
    doubts: list[str] = []
    if tau.maximum > _PLUGGABLE:
        doubts.append("only equipment that is not plugged may take more than 1 s")
    if len(found.shares) == 1:
        doubts.append(f"{next(iter(found.shares))} is alone: open, it discharges nothing")
    for name, share in found.shares.items():
        rating = design.circuit.reader.rating(design.part(name), "voltage")
        if rating is not None and share * peak > rating.value:
            across, rated = engineering(share * peak, "V"), engineering(rating.value, "V")
            doubts.append(f"{name} has {across} of the peak across it, rated {rated}")
    return doubts


def _drained(across: _Across, nets: tuple[str, str], found: Bleeder | None, volts: float) -> Verdict:
    """Return the verdict on capacitors that hold a charge which can hurt."""
    energy = across.energy(volts)
    who = f"{', '.join(across.parts)} can hold {engineering(energy, 'J')} at {engineering(volts, 'V')}"
    verdict = Verdict(
        outcome=Outcome.REVIEW,
        message=f"{who}: no resistor discharges it",
        subject=across.parts[0],
        measured=Spread.exact(energy, "J"),
        parts=across.parts,
        nets=nets,
        formula=f"{engineering(across.capacitance.maximum, 'F')} × ({engineering(volts, 'V')})² / 2",
        source="IEC 60204-1, as quoted in published texts; IEC 60950-1 (20 J), from memory",
        remedy="put a bleeder across it, or a warning with the time to wait beside it",
    )
    if found is None:
        return verdict
    tau = across.time(found.resistance).maximum
    shock = tau * log(max(1.0, volts / _SHOCKING))
    burn = tau * log(max(1.0, energy / _BURNING)) / 2
    time, goal = max((shock, "60 V"), (burn, "20 J"))
    wait, limit = Spread.exact(time, "s"), Limit(None, _WAIT, "s")
    return replace(
        verdict,
        outcome=Outcome.PASS if limit.contains(wait) else Outcome.REVIEW,
        message=f"{who}; below {goal} in {wait} through {', '.join(found.shares)}",
        measured=wait,
        limit=limit,
        margin=limit.margin(wait),
        parts=(*across.parts, *found.shares),
        remedy="" if limit.contains(wait) else verdict.remedy,
    )
