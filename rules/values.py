"""Values: are they there, do they read one way only, are they sold, and do two documents agree on them?

The topic is connections: these are the slips of the pen that a review finds before it computes anything.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator
from dataclasses import replace

from ..grammar.netlist import Part
from ..grammar.property_names import leaves_out
from ..grammar.values import Value, ValueTextError, read_value
from ..lint.circuit.controllers import Controller
from ..lint.circuit.loops import Regulation, Trip
from ..lint.design import Design
from ..lint.estimate import Unsolved
from ..lint.parts_list import PartData, PartsList
from ..lint.preferred import is_a_size, is_preferred, nearest
from ..lint.quantity import engineering, percent
from ..lint.rule import netlist_rule, rule
from ..lint.verdict import Level, Outcome, Verdict


@rule("connections.value-missing", level="error", topic="connections")
def value_missing(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Has every part round the controller a value that can be read?

    What:
        Solves the networks round the controller, as the other questions do, and names the parts whose
        value keeps them from being solved.
    Why:
        Without it the dead time, the output voltage or the current limit is unknown, here and on the
        bench, and what is bought for the part is somebody's guess.
    Formula:
        none: values are looked for, no figure is computed
    Source:
        common practice, no source
    Remedy:
        Write the value beside the part, with its unit.
    Fails:
        R1 REF DTC 10k
        R2 DTC 0 TBD
    Passes:
        R1 REF DTC 10k
        R2 DTC 0 1k
    """
    problems = _unread(controller, design)
    for reference, problem in problems.items():
        nets = [pin.net for pin in design.part(reference).pins if pin.net]
        yield Verdict(
            outcome=Outcome.FAIL,
            message=problem,
            subject=reference,
            parts=(reference,),
            nets=tuple(dict.fromkeys(nets)),
            remedy=f"write the value of {reference} beside it, with its unit",
        )
    if not problems:
        says = f"every part in the networks round {controller.reference} has a value"
        yield Verdict(outcome=Outcome.PASS, message=says)


def _unread(controller: Controller, design: Design) -> dict[str, str]:
    """Return the parts whose value an answer about the controller lacks: reference to the reason."""
    blamed = (reference for answer in _unsolved(controller, design) for reference in answer.parts)
    problems = {reference: _problem(design, reference) for reference in sorted(set(blamed))}
    return {reference: problem for reference, problem in problems.items() if problem}


def _problem(design: Design, reference: str) -> str:
    return design.circuit.reader.value_problem(design.part(reference))


def _unsolved(controller: Controller, design: Design) -> Iterator[Unsolved]:
    """Yield those of the design's answers about a controller that could not be computed."""
    regulation, trip = design.regulation(controller), design.trip(controller)
    answers: list[object] = [regulation, trip, design.timing(controller), design.reference_load(controller)]
    nets = [controller.net("dead time"), controller.net("output control")]
    for amplifier in design.amplifiers(controller):
        # Where the loop is solved, its inputs are; beyond the output other parts may lack a value.
        solved = {"voltage": isinstance(regulation, Regulation), "current": isinstance(trip, Trip)}
        if not solved.get(amplifier.use, False):
            nets += [amplifier.plus, amplifier.minus]
    answers += [design.voltage(net) for net in nets if net]
    yield from (answer for answer in answers if isinstance(answer, Unsolved))


@netlist_rule("connections.value-preferred", level="note", topic="connections")
def value_preferred(design: Design) -> Iterable[Verdict]:
    """Are the values of resistors and capacitors ones that are sold?

    What:
        Compares each value with the series of its tolerance: E24 always, E48 from 2 %, E96 from 1 %, E192
        from 0.5 % on, and any of them where no tolerance is told. Left alone are resistors up to 1 ohm
        (current sense, links), trimmers, capacitors below 10 pF and from 1 uF on (sold in other steps),
        and what a simulation adds to the board (a load, a parasitic resistance).
    Why:
        A value outside its series is a special order, or a slip of the pen: 4.8k for 4.7k. Whoever buys
        it takes the neighbour, and nobody computes the circuit again.
    Formula:
        the value's digits against the series
    Source:
        IEC 60063 (the series and their tolerances); the exceptions: common practice, no source
    Remedy:
        Take a neighbour of the series, or two parts that make the value.
    Fails:
        R1 REF DTC 4.8k
    Passes:
        R1 REF DTC 4.7k
    """
    asked = [part for part in design.circuit.parts.values() if _sold_in_series(part, design)]
    rarer = [part for part in asked if not is_preferred(_nominal(part, design), ("E24",))]
    others = [part for part in rarer if not is_preferred(_nominal(part, design), _series(part, design))]
    yield from (_outside(part, design) for part in others)
    if asked and not others:
        yield Verdict(
            outcome=Outcome.PASS,
            message=f"all {len(asked)} resistors and capacitors asked have values of their series",
        )


# A simulation's own parts, by what their names say: RLOAD, R_ESR, CPAR.
_OF_SIMULATION = re.compile(r"(?:load|esr|dcr|par|lk|leak)\d*\Z", re.IGNORECASE)

_LARGEST_SENSE_RESISTOR = 1.0
_CAPACITORS_IN_SERIES = (10e-12, 1e-6)


def _sold_in_series(part: Part, design: Design) -> bool:
    """Tell whether a part is of a sort that comes in the E series, and has a value to compare."""
    kind = design.circuit.kind(part)
    if kind not in ("resistor", "capacitor") or _OF_SIMULATION.search(part.reference):
        return False
    value = design.circuit.reader.written(part)
    if value is None:
        return False
    if kind == "resistor":
        return value.number > _LARGEST_SENSE_RESISTOR
    least, most = _CAPACITORS_IN_SERIES
    return least <= value.number < most


def _nominal(part: Part, design: Design) -> float:
    value = design.circuit.reader.written(part)
    assert value is not None  # `_sold_in_series` asks for it
    return value.number


def _tolerance(part: Part, design: Design) -> float | None:
    """Return the tolerance as a ratio, None where it is only assumed."""
    value = design.circuit.value(part)
    assert value is not None
    return value.tolerance.plus if value.tolerance.told else None


# The greatest tolerance, as a ratio, at which each finer series is sold (IEC 60063).
_FINER_SERIES = (("E48", 0.02), ("E96", 0.01), ("E192", 0.005))
_ROUNDING = 1e-6


def _series(part: Part, design: Design) -> tuple[str, ...]:
    tolerance = _tolerance(part, design)
    finer = [name for name, most in _FINER_SERIES if tolerance is None or tolerance <= most + _ROUNDING]
    return ("E24", *finer)


def _outside(part: Part, design: Design) -> Verdict:
    value, names, tolerance = _nominal(part, design), _series(part, design), _tolerance(part, design)
    unit = "ohm" if design.circuit.kind(part) == "resistor" else "F"
    told = f" at {percent(tolerance)}" if tolerance is not None else ""
    near = [name for name in names if name != "E48" and is_a_size(value)]
    values = [f"{engineering(nearest(value, name), unit)} ({name})" for name in near]
    return Verdict(
        outcome=Outcome.REVIEW,
        message=f"{part.reference}, {engineering(value, unit, 4)}{told}, is not of {', '.join(names)}",
        subject=part.reference,
        parts=(part.reference,),
        source="IEC 60063",
        remedy=f"take {' or '.join(values)}" if values else "no part has such a value: correct it",
    )


@netlist_rule("connections.value-ambiguous", level="warning", topic="connections")
def value_ambiguous(design: Design) -> Iterable[Verdict]:
    """Does every value read the same to everyone?

    What:
        Names the values that another reader would take otherwise: in a SPICE-style list 1M is a milliohm
        and 1F a femtofarad, 4M7 is 4.7 Mohm to one reader and 4 milliohm to another, and a decimal comma
        ends the value. A marking code such as 4k7, of which some simulators drop the last digit, is only
        listed.
    Why:
        The simulation then runs with another circuit than the board, and the bench finds out.
    Formula:
        none: texts are read, no figure is computed
    Source:
        IEC 60062 (marking codes); Berkeley SPICE 3 manual (scale factors), from memory
    Remedy:
        Write the value in the way that has one reading: 1MEG, 4.7MEG, 4.7k.
    Fails:
        R1 FEEDBACK 1IN- 1M
    Passes:
        R1 FEEDBACK 1IN- 1MEG
    """
    read = {part.reference: design.circuit.reader.written(part) for part in design.circuit.parts.values()}
    doubtful = {
        reference: value for reference, value in read.items() if value is not None and value.ambiguous
    }
    codes = [reference for reference in doubtful if _drops_digits(design.part(reference).value)]
    for reference, value in doubtful.items():
        if reference not in codes:
            yield _trap(design.part(reference), value)
    if codes:
        yield Verdict(
            outcome=Outcome.INFORMATIONAL,
            message=f"{_some(codes)}: {'a marking code' if len(codes) == 1 else 'marking codes'} such as "
            f'"{design.part(codes[0]).value}"; some simulators drop the digits behind the letter',
            parts=tuple(codes),
        )
    elif not doubtful:
        yield Verdict(outcome=Outcome.PASS, message="every value reads one way only")


# Codes whose other reading is near: 4k7 as 4k. M parts milli from mega and is none of them.
_MARKING_CODE = re.compile(r"\d*[a-ln-z]+\d+\w*", re.IGNORECASE)


# A decimal comma, or a blank before the scale.
_CUT = re.compile(r"\d,\d|\d\s+[a-zµ]", re.IGNORECASE)


def _drops_digits(text: str) -> bool:
    return _MARKING_CODE.fullmatch(text.strip()) is not None


def _trap(part: Part, value: Value) -> Verdict:
    reference = part.reference
    remedy = {"ohm": "1MEG for mega, 1m for milli", "F": "1u or 1e-6, without the F"}.get(value.unit, "1e-3")
    if _CUT.search(part.value):
        remedy = "4.7k, with a point and without a blank"
    return Verdict(
        outcome=Outcome.FAIL,
        message=f"{reference}: {value.ambiguous}",
        subject=reference,
        parts=(reference,),
        source="IEC 60062; SPICE scale factors, from memory",
        remedy=f"write the value in the way that has one reading, such as {remedy}",
    )


@netlist_rule("connections.value-conflict", level="error", topic="connections")
def value_conflict(design: Design) -> Iterable[Verdict]:
    """Do the parts list and the netlist agree on every value?

    What:
        Compares the value of each part in the two, as numbers: 4k7 and 4700 agree. A part that the list
        alone marks as not fitted (DNP) is a conflict too. Rows without a part are listed, and so are fitted
        resistors, trimmers, capacitors and inductors without a row. Nothing is asked where there is no
        parts list.
    Why:
        The board is built from the parts list and reviewed from the netlist: where they differ, another
        circuit is built than the one reviewed.
    Formula:
        the two values differ by more than rounding: 0.1 %
    Source:
        common practice, no source
    Remedy:
        Correct whichever is wrong, best by exporting both from one schematic.
    Fails:
        R1 REF DTC 10k
        parts: R1, value 100k
    Passes:
        R1 REF DTC 10k
        parts: R1, value 10k
    """
    if design.parts_list is None:
        return
    conflicts = [_conflict(part, design, design.parts_list) for part in design.circuit.parts.values()]
    found = [conflict for conflict in conflicts if conflict is not None]
    yield from found
    strays = _strays(design, design.parts_list)
    if strays:
        yield Verdict(outcome=Outcome.INFORMATIONAL, message="; ".join(strays))
    elif not found:
        yield Verdict(outcome=Outcome.PASS, message="the parts list and the netlist agree on every value")


_AGREE_WITHIN = 1e-3

_QUANTITIES = {"ohm": "resistance", "F": "capacitance", "H": "inductance", "V": "voltage", "A": "current"}


def _conflict(part: Part, design: Design, listed: PartsList) -> Verdict | None:
    """Return the verdict on a part whose value the parts list gives otherwise, None where they agree."""
    row = listed.rows.get(part.reference)
    drawn = design.circuit.reader.written(part)
    if row is None:
        return None
    if not row.fitted:
        return _left_out(part, row)
    if not row.value or not part.value or drawn is None:
        return None
    try:
        bought = read_value(row.value, _QUANTITIES[drawn.unit], spice=False)
    except ValueTextError:
        return None  # an order number or a remark in the column of the values contradicts nothing
    if abs(bought.number - drawn.number) <= _AGREE_WITHIN * abs(drawn.number):
        return None
    verdict = Verdict(
        outcome=Outcome.FAIL,
        message=f"{part.reference} is {engineering(drawn.number, drawn.unit)} in the netlist and "
        f"{engineering(bought.number, drawn.unit)} in the parts list",
        subject=part.reference,
        parts=(part.reference,),
        places=(part.place, row.place),
        remedy="correct whichever is wrong",
    )
    # A text with two readings may be what makes the difference: connections.value-ambiguous says which.
    return replace(verdict, level=Level.WARNING) if drawn.ambiguous else verdict


def _left_out(part: Part, row: PartData) -> Verdict:
    said = f': "{row.value}"' if leaves_out(row.value) else ""
    return Verdict(
        outcome=Outcome.FAIL,
        message=f"{part.reference} is in the netlist, and the parts list leaves it out{said}",
        subject=part.reference,
        parts=(part.reference,),
        places=(part.place, row.place),
        remedy="mark it as not fitted in the schematic, or correct the parts list",
    )


def _strays(design: Design, listed: PartsList) -> list[str]:
    """Return what stands in one document only, each as a sentence."""
    parts = [p.reference for p in design.circuit.parts.values() if design.circuit.kind(p) in _RATED]
    sentences: list[str] = []
    if rows := listed.unmatched(design.netlist.parts):
        sentences.append(f"in the parts list only: {_some(rows)}")
    if unlisted := listed.missing(parts):
        sentences.append(f"in the netlist only: {_some(unlisted)}")
    return sentences


# Parts whose ratings are asked for; a list of ratings need not name any other.
_RATED = frozenset({"resistor", "trimmer", "capacitor", "inductor"})

_MOST_NAMED = 12


def _some(names: list[str]) -> str:
    """Return the names as a sentence lists them, the first ones only where there are many."""
    rest = len(names) - _MOST_NAMED
    return ", ".join(names[:_MOST_NAMED]) + (f" and {rest} more" if rest > 0 else "")
