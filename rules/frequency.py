"""Frequency: what the timing parts make of the oscillator and of each switch. The topic is oscillator."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from ..lint.circuit.controllers import Controller
from ..lint.circuit.timing import Timing
from ..lint.controllers import Profile
from ..lint.design import Design
from ..lint.estimate import Estimate, Unsolved
from ..lint.judge import judge, unsolved
from ..lint.preferred import nearest
from ..lint.quantity import Spread, engineering, percent
from ..lint.rule import rule
from ..lint.verdict import Level, Limit, Outcome, Verdict
from .oscillator import TIMING_PINS, middle, timing_of, timing_pair


@rule("oscillator.frequency", level="error", topic="oscillator")
def frequency(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the oscillator run where the controller can, and each switch where the brief wants it?

    What:
        Computes the oscillator's frequency as a band: over the constants that the published formulas and
        test points give, the tolerances of the timing parts and the travel of trimmers. Holds it against
        the recommended range, and the frequency at each switch (half of it in push-pull mode, where the
        outputs take turns) against `switching_frequency` of the brief.
    Why:
        Inductors, transformers and dead time are designed for one frequency. The factor of two between
        oscillator and output, and the decade of a capacitor, are easily lost.
    Formula:
        f [Hz] = k / (RT [ohm] x CT [F]), k = 1.0 .. 1.2; at each switch f / 2 in push-pull mode
    Source:
        SLVS074 p.11 (k = 1.0, half the frequency in push-pull) and p.4 (12 kohm, 10 nF, 10 kHz: k = 1.2);
        1 kHz .. 300 kHz: three second sources' data sheets
    Remedy:
        Take the timing resistor printed, the nearest preferred one for the middle of the wanted range.
    Fails:
        R1 RT 0 22k 1%
        C1 CT 0 1n 5%
        R2 OUTCTRL REF 0
        [controllers.U1] switching_frequency = "40 kHz .. 60 kHz"
    Passes:
        R1 RT 0 22k 1%
        C1 CT 0 1n 5%
        R2 OUTCTRL 0 0
        [controllers.U1] switching_frequency = "40 kHz .. 60 kHz"
    """
    found = timing_of(controller, design)
    if found is None:
        return
    if isinstance(found, Unsolved):
        yield unsolved(found, "oscillator frequency", pins=TIMING_PINS)
        return
    found = replace(found, frequency=_explained(controller.profile, found))
    yield _against_family(controller, found)
    yield from _against_brief(controller, design, found)


def _explained(profile: Profile, found: Timing) -> Estimate:
    """Return the frequency with its formula and with what its band leaves out."""
    constant = profile.figure("oscillator.constant").spread()
    r, c = found.resistance.spread.nominal, found.capacitance.spread.nominal
    deviation = profile.figure("oscillator.deviation")
    left_out = (
        f"from part to part the frequency deviates by {percent(deviation.spread().nominal, 2)} "
        f"(standard deviation, {deviation.source}): not in the band"
    )
    formula = f"{engineering(constant.nominal)} / ({engineering(r, 'ohm')} x {engineering(c, 'F')})"
    explained = found.frequency.because(f"{formula} = {engineering(found.frequency.spread.nominal, 'Hz')}")
    return replace(explained, assumptions=(*explained.assumptions, left_out))


def _against_family(controller: Controller, found: Timing) -> Verdict:
    figure = controller.profile.figure("oscillator.frequency")
    limit = figure.limit()
    spread = found.frequency.spread
    nearer = limit.minimum if spread.nominal < middle(limit) else limit.maximum
    assert nearer is not None
    return judge(
        found.frequency,
        limit,
        f"the oscillator runs at {spread}",
        source=figure.source,
        pins=TIMING_PINS,
        remedy=_timing_resistor(controller.profile, found, nearer),
        level=_corner_is_a_warning(limit, spread),
    )


def _corner_is_a_warning(limit: Limit, spread: Spread) -> Level | None:
    """Lower the level where the design is right and only the parts' spread leaves the range."""
    return Level.WARNING if limit.holds(spread.nominal) else None


def _against_brief(controller: Controller, design: Design, found: Timing) -> Iterable[Verdict]:
    """Judge the frequency at each switch, where the brief asks for one."""
    told = design.told(controller)
    wanted = told.switching_frequency if told is not None else None
    if wanted is None:
        return
    mode = design.output_mode(controller)
    if mode is None:
        name = (
            controller.pins["output control"].name if controller.pin("output control") else "output control"
        )
        yield Verdict(
            outcome=Outcome.OPEN,
            message=f"frequency at each switch: {name} sets neither single-ended nor push-pull mode",
            pins=TIMING_PINS,
            needs=(f"{name} at ground or at the reference",),
        )
        return
    yield _at_each_switch(controller, found, wanted, 2 if mode == "push-pull" else 1)


def _at_each_switch(controller: Controller, found: Timing, wanted: Spread, divider: int) -> Verdict:
    estimate = _divided(found.frequency, divider)
    says = f"each switch runs at {estimate.spread}"
    says += ", half the oscillator in push-pull mode" if divider == 2 else ", as the oscillator"
    remedy = _timing_resistor(controller.profile, found, wanted.nominal * divider)
    other = _divided(found.frequency, 3 - divider).spread.nominal
    if (
        not wanted.minimum <= estimate.spread.nominal <= wanted.maximum
        and wanted.minimum <= other <= wanted.maximum
    ):
        says += f": the brief's figure fits {'the oscillator itself' if divider == 2 else 'half of it'}"
    nets = (*estimate.nets, *filter(None, (controller.net(f"output {n} collector") for n in (1, 2))))
    estimate = replace(estimate, nets=nets)
    if found.settable is not None or wanted.minimum == wanted.maximum:
        return _reached(estimate, found, wanted.nominal, divider, says, remedy)
    limit = Limit(wanted.minimum, wanted.maximum, "Hz")
    level = _corner_is_a_warning(limit, estimate.spread)
    return judge(estimate, limit, says, source="brief", pins=_SWITCH, remedy=remedy, level=level)


_SWITCH = (*TIMING_PINS, "output control")


def _reached(
    estimate: Estimate, found: Timing, wanted: float, divider: int, says: str, remedy: str
) -> Verdict:
    """Judge against a single frequency: a trimmer must reach it on every unit, else the band must hold it."""
    low, high = estimate.spread.minimum, estimate.spread.maximum
    assumption = "the brief gives one frequency: the band must hold it"
    if found.settable is not None:
        low, high = (end / divider for end in found.settable)
        says = (
            f"each switch can be set from {engineering(low, 'Hz')} to {engineering(high, 'Hz')} on every unit"
        )
        assumption = f"{', '.join(found.trimmers)} set on the bench"
    holds = low <= wanted <= high
    return Verdict(
        outcome=Outcome.PASS if holds else Outcome.FAIL,
        message=f"{says}; the brief asks for {engineering(wanted, 'Hz')}",
        measured=estimate.spread,
        parts=estimate.parts,
        nets=estimate.nets,
        pins=_SWITCH,
        formula=estimate.formula,
        contributions=estimate.contributions,
        assumptions=(*estimate.assumptions, assumption),
        source="brief",
        remedy="" if holds else remedy,
    )


def _divided(estimate: Estimate, divider: int) -> Estimate:
    def share(spread: Spread) -> Spread:
        ends = (spread.minimum / divider, spread.nominal / divider, spread.maximum / divider)
        return Spread(*ends, spread.unit)

    formula = estimate.formula if divider == 1 else f"{estimate.formula}; / {divider} at each switch"
    return replace(
        estimate, spread=share(estimate.spread), statistical=share(estimate.statistical), formula=formula
    )


def _timing_resistor(profile: Profile, found: Timing, wanted: float) -> str:
    """Return the preferred timing resistors nearest to a wanted oscillator frequency (Hz).

    Where they would leave the recommended range with the capacitor as it is, a pair is returned.
    """
    constant = profile.figure("oscillator.constant").spread().nominal
    capacitance = found.capacitance.spread.nominal
    ideal = constant / (wanted * capacitance)
    if not profile.limit("oscillator.timing-resistor").holds(ideal):
        return timing_pair(profile, constant / wanted)
    choices: list[str] = []
    for series in ("E24", "E96"):
        resistance = nearest(ideal, series)
        makes = engineering(constant / (resistance * capacitance), "Hz")
        choices.append(f"{series}: {engineering(resistance, 'ohm')} makes {makes}")
    return f"timing resistance for an oscillator at {engineering(wanted, 'Hz')}: {'; '.join(choices)}"
