"""Ratings of capacitors: voltage by dielectric, and polarity. What they stand is as in `ratings`."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import replace

from ..grammar.netlist import Part
from ..lint import needs
from ..lint.circuit.envelope import IN_REGULATION
from ..lint.circuit.parts import Rating
from ..lint.circuit.stress import Stress
from ..lint.derating import UNMARKED, capacitor_voltage
from ..lint.design import Design
from ..lint.dielectrics import dielectric_of, is_polarised
from ..lint.estimate import Estimate
from ..lint.quantity import engineering
from ..lint.rule import netlist_rule
from ..lint.verdict import Level, Outcome, Verdict
from .loading import Load, ambient, margin_taken, size, some, verdicts


@netlist_rule("rating.capacitor-voltage", level="error", topic="ratings")
def voltage(design: Design) -> Iterable[Verdict]:
    """Does every capacitor stand the voltage across it, with the margin of its dielectric?

    What:
        Holds the greatest voltage across each capacitor between nets of known or solved voltage against
        its rated voltage, times the share that the policy of the brief leaves its dielectric at the
        highest ambient. Beyond the rating itself it fails as an error; inside the rating but beyond the
        margin it fails as an error where the brief asks for the policy, else as a warning. Those without
        a rating are named once.
    Why:
        A solid tantalum fails short at half its rated voltage on a stiff rail, an aluminium one dries out
        faster, and a ceramic beyond its rating breaks down. It is the commonest wrong digit of a parts
        list: 16 V on a rail of 24 V.
    Formula:
        |V| [V] <= rated [V] x share(policy, dielectric, ambient)
    Source:
        EEE-INST-002 section C1 table 4, ECSS-Q-ST-30-11C (from memory) or common practice, by the policy
    Remedy:
        Fit the rated voltage printed, or another dielectric.
    Fails:
        V1 VCC 0 24
        C1 VCC 0 100u
        parts: C1, voltage 16 V
    Passes:
        V1 VCC 0 24
        C1 VCC 0 100u
        parts: C1, voltage 50 V
    """
    loads: list[Load] = []
    unrated: list[str] = []
    for stress in _capacitors(design):
        rating = design.circuit.reader.rating(stress.part, "voltage")
        if rating is None:
            unrated.append(stress.part.reference)
        else:
            loads.append(_charge(design, stress.part, size(stress.voltage), rating))
    yield from verdicts(loads, "capacitors", "have no more voltage across them than they may")
    yield from _untold(design, unrated)


@netlist_rule("rating.capacitor-polarity", level="error", topic="ratings")
def polarity(design: Design) -> Iterable[Verdict]:
    """Do polarised capacitors stand the right way round?

    What:
        Takes a capacitor for a polarised one where its dielectric, value, model or type says so, or where
        its pins are named + and -; else never. Its positive pin must not lie below its negative one in
        regulation. The pins' names tell which is which, or else the order in the list, the positive one
        first: then a person must look.
    Why:
        A reversed electrolytic gasses and bursts; a reversed tantalum catches fire.
    Formula:
        V(+) - V(-) [V] >= 0
    Source:
        common practice, no source
    Remedy:
        Turn the capacitor round.
    Fails:
        V1 VCC 0 24
        C1 0 VCC 100u
        parts: C1, dielectric aluminium
    Passes:
        V1 VCC 0 24
        C1 VCC 0 100u
        parts: C1, dielectric aluminium
    """
    found = design.stresses(IN_REGULATION, pulsed=False).of.values()
    asked = [stress for stress in found if _is_polarised(design, stress.part)]
    judged = [_polarity(design, stress) for stress in asked]
    yield from (verdict for verdict in judged if verdict is not None)
    right = [stress.part for stress, verdict in zip(asked, judged, strict=True) if verdict is None]
    if right:
        names = tuple(part.reference for part in right)
        by_order = [part.reference for part in right if _plus(part) is None]
        assumed = (f"{some(by_order)}: the first pin taken for the positive one",) if by_order else ()
        message = f"polarised and the right way round: {some(names)}"
        yield Verdict(outcome=Outcome.PASS, message=message, parts=names, assumptions=assumed)


# ---------------------------------------------------------------------------------------------------- voltage


def _capacitors(design: Design) -> Iterator[Stress]:
    for stress in design.stresses().of.values():
        if design.circuit.kind(stress.part) == "capacitor":
            yield stress


def _texts(design: Design, part: Part) -> tuple[str, ...]:
    """Return the texts that may name a capacitor's dielectric, the most explicit first."""
    kinds = (part.attributes.get(key, "") for key in ("type", "kind", "description", "capacitor type"))
    return (design.circuit.reader.attribute(part, "dielectric"), *kinds, part.value, part.model)


def _charge(design: Design, part: Part, across: Estimate, rating: Rating) -> Load:
    conditions = design.circuit.conditions
    dielectric = dielectric_of(*_texts(design, part)) or UNMARKED
    derating = capacitor_voltage(dielectric, ambient(design), rating.value, conditions.policy)
    worst = across.spread.maximum
    asked_for = design.brief is not None and design.brief.derating is not None
    fit = f"fit at least {engineering(worst / derating.share, 'V')}" if derating.share else _TOO_HOT
    what = f"{dielectric}, " if dielectric != UNMARKED else ""
    return Load(
        part=part.reference,
        stress=across,
        limit=rating.value * derating.share,
        says=f"{part.reference} has {engineering(worst, 'V')} across it, {what}"
        f"rated {engineering(rating.value, 'V')}",
        source=f"{rating.source}; {derating.source}",
        remedy=f"{fit} for {part.reference}",
        assumptions=(margin_taken(design, derating.share, f"rated voltage, {dielectric}"),),
        level=None if worst > rating.value or asked_for else Level.WARNING,
    )


_TOO_HOT = "the policy allows no such capacitor at this ambient: take another dielectric"


def _untold(design: Design, unrated: list[str]) -> Iterator[Verdict]:
    """Yield the open verdict that names the capacitors of which a rating or a net's voltage is not told."""
    listed = (f"parts list: voltage of {some(unrated)}",) if unrated else ()
    blind = {
        reference: rails
        for reference in design.stresses().unsolved
        if (rails := _rails_to_tell(design, design.part(reference)))
    }
    if not unrated and not blind:
        return
    about = [f"no voltage rating is told of {some(unrated)}"] if unrated else []
    about += [f"the voltage across {some(list(blind))} is not known"] if blind else []
    rails = dict.fromkeys(needs.rail(net) for nets in blind.values() for net in nets)
    yield Verdict(
        outcome=Outcome.OPEN,
        message="; ".join(about),
        parts=(*unrated, *blind),
        needs=(*listed, *rails),
    )


def _rails_to_tell(design: Design, part: Part) -> tuple[str, ...]:
    """Return the nets of a capacitor that feed the board, and of which nobody told the voltage."""
    if design.circuit.kind(part) != "capacitor":
        return ()
    supplies = {controller.net("supply") for controller in design.controllers}
    unknown = [pin.net for pin in part.pins if design.potential(pin.net) is None]
    return tuple(net for net in unknown if net in supplies or _is_fed(design, net))


def _is_fed(design: Design, net: str) -> bool:
    """Tell whether a fuse, a battery or a connector is on a net."""
    parts = (connection.part for connection in design.circuit.connections(net))
    return any(design.circuit.kind(part) in ("fuse", "battery", "connector") for part in parts)


# --------------------------------------------------------------------------------------------------- polarity

_POSITIVE = frozenset({"+", "pos", "plus", "positive", "anode"})
_NEGATIVE = frozenset({"-", "\N{MINUS SIGN}", "neg", "minus", "negative", "cathode"})

# Less reverse voltage than this an aluminium electrolytic stands for good (common practice, from memory).
_HARMLESS = 1.0


def _is_polarised(design: Design, part: Part) -> bool:
    if design.circuit.kind(part) != "capacitor":
        return False
    return _plus(part) is not None or is_polarised(*_texts(design, part))


def _plus(part: Part) -> int | None:
    """Return the index of the pin that is named the positive one, None where no name tells."""
    for index, pin in enumerate(part.pins):
        if pin.name.casefold() in _POSITIVE:
            return index
        if pin.name.casefold() in _NEGATIVE:
            return 1 - index
    return None


def _polarity(design: Design, stress: Stress) -> Verdict | None:
    """Return the verdict on a capacitor that is reversed or may be, None on one that is right."""
    part, plus = stress.part, _plus(stress.part)
    spread = stress.voltage.spread
    low, high = (spread.minimum, spread.maximum) if plus != 1 else (-spread.maximum, -spread.minimum)
    if low >= -_HARMLESS:
        return None
    positive, negative = (part.pins[index].net for index in ((0, 1) if plus != 1 else (1, 0)))
    reversed_always = high < 0
    does = "lies" if reversed_always else "can lie"
    certain = reversed_always and plus is not None
    verdict = Verdict(
        outcome=Outcome.FAIL if certain else Outcome.REVIEW,
        message=f"{part.reference} is polarised, and its positive end on {positive} {does} "
        f"{engineering(-low, 'V')} below {negative}",
        subject=part.reference,
        measured=stress.voltage.spread,
        parts=(part.reference,),
        nets=(positive, negative),
        assumptions=stress.voltage.assumptions,
        source="common practice, no source",
        remedy=f"turn {part.reference} round",
    )
    if plus is None:
        assumed = f"{part.reference}: the first pin taken for the positive one"
        verdict = replace(verdict, assumptions=(*verdict.assumptions, assumed))
    return verdict
