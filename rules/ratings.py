"""Ratings of resistors: do they stand what the circuit puts on them, with the margin the policy asks for?

What the parts stand is computed over everything that the converter does: the supply over its whole rail, the
output from a short circuit to the top of its regulation (a trimmed one as the brief wants it), the sense
resistor up to the current limit, an amplifier's output over its control range. Left out are the nets that the
power stage switches, and the start, which is over before a part grows warm.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator
from dataclasses import replace

from ..grammar.netlist import Part
from ..lint.circuit.parts import Rating
from ..lint.derating import Derating, resistor_power, resistor_voltage
from ..lint.design import Design
from ..lint.estimate import Estimate
from ..lint.packages import SOURCE, Package, package_of, smallest_usual
from ..lint.preferred import next_wattage
from ..lint.quantity import engineering
from ..lint.rule import netlist_rule
from ..lint.verdict import Outcome, Verdict
from .loading import Load, ambient, margin_taken, size, some, verdicts

# A simulation's own load or a parasitic resistance, by what its name says.
_OF_SIMULATION = re.compile(r"(?:load|esr|dcr)\d*\Z", re.IGNORECASE)


@netlist_rule("rating.resistor-power", level="error", topic="ratings")
def power(design: Design) -> Iterable[Verdict]:
    """Does every resistor stand the power that it turns into heat?

    What:
        Computes the power in each resistor and trimmer whose network can be solved, in the worst case,
        and holds it against the rated power, derated at the highest ambient by the policy that the brief
        names. A resistor without a rating is asked about only where it takes more than the smallest usual
        chip case, 0402, stands. Resistors at the controller's outputs are taken as if the output conducted
        all the time: too much is then for a person to judge. Current-sense resistors have a rule of their
        own. Each that fails has a verdict to itself; all others share one, which names the closest.
    Why:
        An overloaded resistor drifts, browns the board and opens, on the hottest day of the year.
    Formula:
        P [W] = V [V] x I [A]; allowed [W] = rated [W] x share(policy, ambient);
        trimmer: P [W] = I^2 x R of the whole track, I the greatest current in any piece of it
    Source:
        EEE-INST-002 section R2, ECSS-Q-ST-30-11C (from memory) or IEC 60115-8, by the policy
    Remedy:
        Fit the wattage printed, or share the power between two resistors.
    Fails:
        V1 VCC 0 24
        R1 VCC 0 2.2k
        parts: R1, power 0.25 W
    Passes:
        V1 VCC 0 24
        R1 VCC 0 2.2k
        parts: R1, power 1 W
    """
    derating = _power_share(design)
    loads: list[Load] = []
    unrated: list[Load] = []
    for part, taken in _heated(design):
        rating = design.circuit.reader.rating(part, "power")
        if rating is not None:
            loads.append(_heat(design, part, taken, rating, derating))
        elif _package(design, part) is None:
            load = _heat(design, part, taken, _of_smallest("power", smallest_usual().power), derating)
            told = f"{part.reference}: no power rating told, taken for the smallest case"
            load = replace(load, assumptions=(*load.assumptions, told))
            (loads if taken.spread.maximum <= load.limit else unrated).append(load)
    yield from verdicts(loads, "resistors", "take no more power than they may")
    yield from _untold("power", unrated)


@netlist_rule("rating.resistor-voltage", level="error", topic="ratings")
def voltage(design: Design) -> Iterable[Verdict]:
    """Does every resistor stand the voltage across it?

    What:
        Holds the greatest voltage across each resistor against its greatest working voltage, with the
        margin of the policy that the brief names. A resistor without a rating is asked about only where
        it has more across it than the smallest usual chip case, 0402, stands.
    Why:
        Above the critical resistance, the square of the working voltage over the power, it is the voltage
        that limits a resistor: a megohm across 400 V takes 160 mW and flashes over in a small case.
    Formula:
        |V| [V] <= rated [V] x share(policy)
    Source:
        EEE-INST-002 section R2 table 4 note 2, ECSS-Q-ST-30-11C (from memory) or IEC 60115-8, by the policy
    Remedy:
        Put two or more resistors in series, or fit a larger case.
    Fails:
        V1 VIN 0 400
        R1 VIN 0 1MEG
        parts: R1, voltage 350 V
    Passes:
        V1 VIN 0 400
        R1 VIN N1 470k
        R2 N1 0 470k
        parts: R1-R2, voltage 350 V
    """
    derating = resistor_voltage(design.circuit.conditions.policy)
    loads: list[Load] = []
    unrated: list[Load] = []
    for part, across in _stretched(design):
        rating = design.circuit.reader.rating(part, "voltage")
        if rating is not None:
            loads.append(_pull(part, across, rating, derating))
        elif _package(design, part) is None:
            load = _pull(part, across, _of_smallest("voltage", smallest_usual().voltage), derating)
            if across.spread.maximum > load.limit:
                unrated.append(load)
    yield from verdicts(loads, "resistors", "have no more voltage across them than they may")
    yield from _untold("voltage", unrated)


@netlist_rule("rating.package-assumed", level="warning", topic="ratings")
def package_assumed(design: Design) -> Iterable[Verdict]:
    """Do resistors of which only the case is known stand what such a case usually does?

    What:
        Where a resistor has no rating but a package or footprint with a case code, power and working
        voltage are taken from a table of what chip resistors of that case usually stand, and judged as
        told ratings are.
    Why:
        A case is only a hint: makers sell the same one with half the power and with twice. What comes of
        it is an assumption, and so at most a warning.
    Formula:
        as for rating.resistor-power and rating.resistor-voltage
    Source:
        common makers' data of thick-film chip resistors; the derating by the policy
    Remedy:
        Fit a larger case, or tell the rating in the parts list.
    Fails:
        V1 VCC 0 24
        R1 VCC 0 4.7k
        parts: R1, package 0603
    Passes:
        V1 VCC 0 24
        R1 VCC 0 4.7k
        parts: R1, package 1206
    """
    heat, pull = _power_share(design), resistor_voltage(design.circuit.conditions.policy)
    hot = [
        _heat(design, part, taken, _of_package(case, "power", case.power), heat)
        for part, taken, case in _by_package(design, "power", _heated(design))
    ]
    high = [
        _pull(part, across, _of_package(case, "voltage", case.voltage), pull)
        for part, across, case in _by_package(design, "voltage", _stretched(design))
    ]
    for verdict in verdicts(hot, "resistors", "take no more power than their case may"):
        yield _as_assumed(verdict)
    for verdict in verdicts(high, "resistors", "have no more voltage across them than their case may"):
        if verdict.outcome is not Outcome.PASS:
            yield _as_assumed(verdict)


# -------------------------------------------------------------------------------------------- what they stand


def _heated(design: Design) -> Iterator[tuple[Part, Estimate]]:
    """Yield the resistors whose power is known; those with a rule of their own are left out."""
    senses = {
        amplifier.sense.part.reference
        for controller in design.controllers
        for amplifier in design.amplifiers(controller)
        if amplifier.sense is not None
    }
    for reference, stress in design.stresses().of.items():
        if stress.power is not None and reference not in senses and not _OF_SIMULATION.search(reference):
            yield stress.part, stress.power


def _stretched(design: Design) -> Iterator[tuple[Part, Estimate]]:
    """Yield the resistors with the size of the voltage across them."""
    for part, _ in _heated(design):
        yield part, size(design.stresses().of[part.reference].voltage)


def _by_package(
    design: Design, name: str, stressed: Iterable[tuple[Part, Estimate]]
) -> Iterator[tuple[Part, Estimate, Package]]:
    for part, stress in stressed:
        case = _package(design, part)
        if case is not None and design.circuit.reader.rating(part, name) is None:
            yield part, stress, case


# ---------------------------------------------------------------------------------------- what they may stand


def _power_share(design: Design) -> Derating:
    return resistor_power(ambient(design), design.circuit.conditions.policy)


def _package(design: Design, part: Part) -> Package | None:
    """Return the case of a part where its package names one; a trimmer's case is none of the table."""
    if design.circuit.kind(part) != "resistor":
        return None
    return package_of(design.circuit.reader.attribute(part, "package"))


def _of_smallest(name: str, value: float) -> Rating:
    return Rating(value, f"{name} of the smallest case, {smallest_usual().code}: {SOURCE}")


def _of_package(case: Package, name: str, value: float) -> Rating:
    return Rating(value, f"{name} of case {case.code}: {SOURCE}")


def _as_assumed(verdict: Verdict) -> Verdict:
    """Say of a verdict that rests on a case what it rests on."""
    assumption = f"{some(verdict.parts)}: rating taken from the case"
    return replace(verdict, assumptions=(*verdict.assumptions, assumption))


def _heat(design: Design, part: Part, taken: Estimate, rating: Rating, derating: Derating) -> Load:
    pulsed = design.stresses().of[part.reference].pulsed
    worst, rated = taken.spread.maximum, engineering(rating.value, "W")
    fit = f"fit at least {engineering(next_wattage(worst / derating.share), 'W')}" if derating.share else ""
    return Load(
        part=part.reference,
        stress=taken,
        limit=rating.value * derating.share,
        says=f"{part.reference} takes {taken.spread}, rated {rated}",
        source=f"{rating.source}; {derating.source}",
        remedy=f"{fit} for {part.reference}" if fit else "no resistor stands this ambient by this policy",
        assumptions=(margin_taken(design, derating.share, "rated power of resistors"),),
        pulsed=pulsed,
    )


def _pull(part: Part, across: Estimate, rating: Rating, derating: Derating) -> Load:
    worst, rated = across.spread.maximum, engineering(rating.value, "V")
    return Load(
        part=part.reference,
        stress=across,
        limit=rating.value * derating.share,
        says=f"{part.reference} has {engineering(worst, 'V')} across it, rated {rated}",
        source=f"{rating.source}; {derating.source}",
        remedy=f"put resistors in series for {part.reference}, or a case with more working voltage",
    )


def _untold(name: str, loads: list[Load]) -> Iterator[Verdict]:
    """Yield the open verdict on the resistors that stand too much to be taken for any, and have no rating."""
    if not loads:
        return
    unit = {"power": "W", "voltage": "V"}[name]
    each = [f"{load.part} {engineering(load.stress.spread.maximum, unit)}" for load in loads]
    names = tuple(load.part for load in loads)
    yield Verdict(
        outcome=Outcome.OPEN,
        message=f"no {name} rating is told of {some(each)} in the worst case",
        parts=names,
        needs=(f"parts list: {name} of {some(names)}",),
        remedy="; ".join(load.remedy for load in loads[:3]) if name == "power" else "",
    )
