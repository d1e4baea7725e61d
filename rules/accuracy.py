"""Accuracy: whether the reference and the dividers are exact enough for the output; topic reference."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from ..lint import needs
from ..lint.circuit.controllers import Controller
from ..lint.circuit.loops import Regulation
from ..lint.design import Design
from ..lint.estimate import Estimate
from ..lint.judge import judge
from ..lint.quantity import Spread, engineering, percent
from ..lint.rule import rule
from ..lint.verdict import Limit, Outcome, Verdict

_PIN = ("reference",)


@rule("reference.needed-accuracy", level="warning", topic="reference")
def needed_accuracy(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Are the reference and the dividers exact enough for the output's tolerance?

    What:
        Takes the spread of the regulated output about its own nominal value and holds it against the
        output's tolerance in the brief, with the share of every part in it. Whether the nominal value is
        the right one is another question (feedback.output-voltage).
    Why:
        It says which part to buy better: no resistor mends a reference that alone fills the tolerance.
    Formula:
        deviation = output / output(nominal) - 1, extreme values by nodal analysis
    Source:
        the brief (tolerance); 494 class: SLVS074 p.4 (reference 4.75 V to 5.25 V), 594: SLVS052 p.4
        (4.95 V to 5.05 V)
    Remedy:
        Take a tighter part for the one that is named first, or add a trimmer.
    Fails:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 E1 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 494
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 14k 1%
        R3 1IN+ 0 10k 1%
        [controllers.U1] output = "VOUT"
        [rails.VOUT] voltage = "12 V"; tolerance = "5 %"
    Passes:
        U1 1IN+ 1IN- FEEDBACK DTC CT RT 0 C1 E1 E2 C2 VCC OUTCTRL REF 2IN- 2IN+ 594
        R1 REF 1IN- 1k
        R2 VOUT 1IN+ 14k 1%
        R3 1IN+ 0 10k 1%
        [controllers.U1] output = "VOUT"
        [rails.VOUT] voltage = "12 V"; tolerance = "5 %"
    """
    found = design.regulation(controller)
    if not isinstance(found, Regulation) or found.output.spread.nominal == 0:
        return  # feedback.output-voltage or feedback.complete speaks of it
    amplifier = design.regulating(controller)
    output = amplifier.output if amplifier is not None else ""
    rail = design.rail(output)
    told = rail.deviation if rail is not None else None
    if told is None:
        need = needs.rail(output, "tolerance", declared=rail is not None)
        yield Verdict(outcome=Outcome.OPEN, message=f"accuracy of {output}: no tolerance told", needs=(need,))
        return
    if found.trimmers:
        trimmers = found.trimmers
        yield Verdict(
            outcome=Outcome.NOT_APPLICABLE,
            message=f"{output} is set on the bench by {', '.join(trimmers)}",
            parts=trimmers,
            nets=(output,),
            pins=_PIN,
        )
        return
    allowed, deviation = Limit(*told, ""), _deviation(found.output)
    nominal = engineering(found.output.spread.nominal, "V")
    says = f"{output} spreads {_percentages(deviation.spread)} about {nominal}"
    remedy = _better(deviation, _voltage(controller, design), allowed)
    yield judge(deviation, allowed, says + _shares(deviation), source="brief", pins=_PIN, remedy=remedy)


def _voltage(controller: Controller, design: Design) -> Spread:
    """Return the reference's own voltage, its line and load regulation included where they are known."""
    known = design.potential(controller.net("reference") or "")
    return known.spread if known is not None else controller.profile.figure("reference.voltage").spread()


def _deviation(output: Estimate) -> Estimate:
    """Return an output voltage's deviation from its nominal value, as a ratio."""
    nominal = output.spread.nominal

    def about_nominal(spread: Spread) -> Spread:
        least, most = sorted((spread.minimum / nominal - 1, spread.maximum / nominal - 1))
        return Spread(least, 0.0, most, "")

    ends = f"{engineering(output.spread.minimum, 'V', 4)} .. {engineering(output.spread.maximum, 'V', 4)}"
    return replace(
        output,
        spread=about_nominal(output.spread),
        statistical=about_nominal(output.statistical),
        formula=f"({ends}) / {engineering(nominal, 'V', 4)} - 1",
    )


def _percentages(spread: Spread) -> str:
    return f"{percent(spread.minimum)} .. +{percent(spread.maximum)}"


_MOST_SHARES = 3


def _shares(deviation: Estimate) -> str:
    greatest = [f"{name} {percent(share, 2)}" for name, share in deviation.contributions[:_MOST_SHARES]]
    return f"; of it {', '.join(greatest)}" if greatest else ""


def _better(deviation: Estimate, reference: Spread, allowed: Limit) -> str:
    """Return which part to buy better."""
    assert allowed.maximum is not None
    alone = 0.0
    if reference.nominal > 0:  # one shorted to ground is for reference.back-fed to tell
        alone = max(reference.maximum / reference.nominal - 1, 1 - reference.minimum / reference.nominal)
    if alone > allowed.maximum:
        return (
            f"the reference alone may be off by {percent(alone)}: take a controller with a tighter one, "
            "an external reference, or a trimmer"
        )
    first = next((name for name, _ in deviation.contributions), "the dividers")
    return f"take a tighter {first}: it has the greatest share"
