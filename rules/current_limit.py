"""Current limit: at which load it takes over, and what the sense resistor has to stand."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from math import inf

from ..grammar.netlist import Part
from ..lint.circuit.amplifiers import Amplifier, SenseResistor
from ..lint.circuit.controllers import Controller
from ..lint.circuit.converter import NoLoop
from ..lint.circuit.loops import Trip
from ..lint.derating import DEFAULT_POLICY, Derating, resistor_power
from ..lint.design import Design
from ..lint.estimate import Unsolved
from ..lint.judge import judge, reports, unsolved
from ..lint.preferred import next_wattage
from ..lint.quantity import engineering, percent
from ..lint.rule import rule
from ..lint.verdict import Limit, Outcome, Verdict

# Where no ambient is told: the temperature at which resistors are rated (IEC 60115-8).
_AMBIENT = 70.0


@rule("current-limit.trip-point", level="error", topic="current limit")
def trip_point(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the current limit let the full load pass, and stop what the parts do not stand?

    What:
        Solves for the current through the sense resistor at which the current amplifier's inputs are
        equal, for whatever resistor network stands round it, over tolerances, trimmer travel, reference
        spread, offset and bias currents. Held against `current_limit` of the brief, else against what the
        full load of the output rail sends through the resistor. Where a trimmer sets it, every unit must be
        able to reach a current that is wanted. Where the output's voltage moves the threshold, the current
        into a short circuit is told as well.
    Why:
        A limit that sits too low starves the load on a cold morning; one that sits too high lets the
        switch, the inductor and the source carry what they were not chosen for.
    Formula:
        V(in+) - V(in-) = offset [V], solved for the current [A] by nodal analysis; for the plain circuit
        current = threshold [V] / sense resistance [ohm]
    Source:
        the brief (band or load); SLVS074 p.4 (reference spread, offset)
    Remedy:
        Change the sense resistor, or the divider that sets the threshold.
    Fails:
        R1 REF 2IN- 9.1k 1%
        R2 2IN- 0 1k 1%
        R3 RTN 2IN+ 1k
        R4 RTN 0 0.1 1%
        [controllers.U1] current_limit = "8 A .. 12 A"
    Passes:
        R1 REF 2IN- 9.1k 1%
        R2 2IN- 0 1k 1%
        R3 RTN 2IN+ 1k
        R4 RTN 0 0.05 1%
        [controllers.U1] current_limit = "8 A .. 12 A"
    """
    found = design.trip(controller)
    if isinstance(found, NoLoop):
        return  # current-limit.present speaks of it
    amplifier = _current_amplifier(design, controller)
    sense = _sense(amplifier)
    pins = (f"amplifier {amplifier.number} in+", f"amplifier {amplifier.number} in-")
    if isinstance(found, Unsolved):
        yield unsolved(found, "current limit", pins=pins)
        return
    says = f"takes over at {found.current.spread} in {sense.part.reference}"
    says += _into_short(design, controller, found)
    found = replace(found, current=found.current.because(_formula(found, sense)))
    limit, source = _wanted(design, controller)
    if limit is None:
        yield reports(found.current, says, pins=pins)
        return
    remedy = _resistor_for(found, limit, sense)
    if found.settable is not None:
        yield _settable(found, limit, says, source, pins, remedy)
        return
    yield judge(found.current, limit, says, source=source, pins=pins, remedy=remedy)


def _settable(
    found: Trip, limit: Limit, says: str, source: str, pins: tuple[str, ...], remedy: str
) -> Verdict:
    """Judge a limit with trimmers: some current that is wanted must be within reach of every unit."""
    assert found.settable is not None
    low, high = found.settable
    trimmers = ", ".join(found.trimmers)
    least, most = limit.minimum or 0.0, limit.maximum if limit.maximum is not None else inf
    inside = low <= high and low <= most and high >= least
    reach = f"{engineering(low, 'A')} to {engineering(high, 'A')}"
    every = (
        f"{trimmers} sets it from {reach} on every unit" if low <= high else f"{trimmers} sets no unit alike"
    )
    verdict = reports(found.current, f"{says}; {every}", pins=pins, source=source)
    if inside:
        set_up = f"{trimmers} set on the bench for a limit as wanted"
        return replace(verdict, outcome=Outcome.PASS, assumptions=(*verdict.assumptions, set_up))
    return replace(verdict, outcome=Outcome.FAIL, limit=limit, margin=None, remedy=remedy)


def _formula(found: Trip, sense: SenseResistor) -> str:
    threshold, current = found.threshold.spread.nominal, found.current.spread.nominal
    resistance = engineering(threshold / current, "ohm") if current else "0 Ω"
    return (
        f"I = V / {sense.part.reference} = {engineering(threshold, 'V')} / {resistance} = "
        f"{engineering(current, 'A')}"
    )


def _current_amplifier(design: Design, controller: Controller) -> Amplifier:
    return next(a for a in design.amplifiers(controller) if a.use == "current")


def _sense(amplifier: Amplifier) -> SenseResistor:
    assert amplifier.sense is not None
    return amplifier.sense


def _into_short(design: Design, controller: Controller, found: Trip) -> str:
    """Return what the limit becomes with the output shorted, empty where the output does not move it."""
    shorted = design.trip(controller, shorted=True)
    if not isinstance(shorted, Trip):
        return ""
    nominal, folded = found.current.spread.nominal, shorted.current.spread.nominal
    if abs(folded - nominal) <= 1e-6 * abs(nominal):
        return ""
    return f", at {shorted.current.spread} into a short circuit"


def _wanted(design: Design, controller: Controller) -> tuple[Limit | None, str]:
    """Return what the brief asks of the limit: its own band, else the full load as a lower side."""
    told = design.told(controller)
    if told is not None and told.current_limit is not None:
        wanted = told.current_limit
        top = wanted.maximum if wanted.maximum > wanted.minimum else None
        return Limit(wanted.minimum, top, "A"), "brief: current_limit"
    load = design.sensed_load(controller)
    return (Limit(load.average, None, "A"), "brief: load") if load is not None else (None, "")


def _resistor_for(found: Trip, limit: Limit, sense: SenseResistor) -> str:
    """Return the sense resistance that puts the nominal limit in the middle of what is wanted."""
    low, high = limit.minimum, limit.maximum
    assert low is not None
    wanted = (low + high) / 2 if high is not None else 1.2 * low
    resistance = found.threshold.spread.nominal / wanted
    fit = f"{sense.part.reference} of about {engineering(resistance, 'ohm')}"
    return f"{fit} takes over at {engineering(wanted, 'A')}; or move the divider that sets the threshold"


@rule("current-limit.sense-dissipation", level="error", topic="current limit")
def sense_dissipation(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the sense resistor stand the heat at the highest current the limit allows?

    What:
        Computes the power in the sense resistor at full load and at the current limit, in the worst case,
        and holds the latter against the rated power, derated at the highest ambient by the policy that
        the brief names.
    Why:
        A sense resistor carries the whole load, and in a fault the limit current for as long as the fault
        lasts. Half a volt at ten amperes is five watts in one small part.
    Formula:
        P [W] = I^2 [A^2] x R [ohm]; allowed [W] = rated [W] x share(policy, ambient)
    Source:
        the rating's own; the derating policy's (EEE-INST-002, ECSS-Q-ST-30-11C or IEC 60115-8)
    Remedy:
        Fit the wattage printed, share the current between resistors, or lower threshold and resistance
        together.
    Fails:
        R1 REF 2IN- 9.1k 1%
        R2 2IN- 0 1k 1%
        R3 RTN 2IN+ 1k
        R4 RTN 0 0.1 1%
        parts: R4, power 2 W
    Passes:
        R1 REF 2IN- 9.1k 1%
        R2 2IN- 0 1k 1%
        R3 RTN 2IN+ 1k
        R4 RTN 0 0.1 1%
        parts: R4, power 5 W
    """
    found = design.trip(controller)
    if not isinstance(found, Trip):
        return  # current-limit.trip-point speaks of it
    sense = _sense(_current_amplifier(design, controller)).part
    derating, assumption = _derating(design)
    worst = found.dissipation.spread.maximum
    fit = f"fit at least {engineering(next_wattage(worst / derating.share), 'W')}" if derating.share else ""
    says = f"{sense.reference} takes {_at_full_load(design, controller, sense)}"
    says += f"{found.dissipation.spread} at the limit"
    rating = design.circuit.reader.rating(sense, "power")
    if rating is None:
        yield replace(
            reports(found.dissipation, f"{says}: {fit}"),
            outcome=Outcome.OPEN,
            needs=(f"parts list: power of {sense.reference}",),
            remedy=fit,
        )
        return
    verdict = judge(
        found.dissipation.because(_power_formula(found)),
        Limit(None, rating.value * derating.share, "W"),
        f"{says}, {engineering(rating.value, 'W')} rated",
        source=f"{rating.source}; {derating.source}",
        rating=True,
        assumptions=(assumption,),
        remedy=fit,
    )
    yield verdict


def _power_formula(found: Trip) -> str:
    threshold, current = found.threshold.spread.nominal, found.current.spread.nominal
    power = engineering(found.dissipation.spread.nominal, "W")
    return f"P = I x V = {engineering(current, 'A')} x {engineering(threshold, 'V')} = {power}"


def _derating(design: Design) -> tuple[Derating, str]:
    """Return the share of a resistor's rating in use, and what was assumed for it."""
    brief = design.brief
    policy = brief.derating if brief is not None and brief.derating else DEFAULT_POLICY
    told = brief.ambient.maximum if brief is not None and brief.ambient is not None else None
    ambient = _AMBIENT if told is None else told
    derating = resistor_power(ambient, policy)
    origin = "" if told is not None else " assumed"
    return derating, f"{percent(derating.share)} of the rating by policy {policy} at {ambient:g} °C{origin}"


def _at_full_load(design: Design, controller: Controller, sense: Part) -> str:
    load = design.sensed_load(controller)
    resistance = design.nominal(sense)
    if load is None or resistance is None:
        return ""
    return f"{engineering(load.effective**2 * resistance, 'W')} at full load, "
