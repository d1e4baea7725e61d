"""Bypass capacitors: what stands straight between a pin's net and ground, for the rules that ask of it."""

from __future__ import annotations

from dataclasses import dataclass, replace

from ..grammar.netlist import Part
from ..lint.circuit.controllers import Controller
from ..lint.controllers import Figure
from ..lint.design import Design
from ..lint.estimate import Estimate
from ..lint.judge import judge
from ..lint.quantity import Spread, engineering
from ..lint.verdict import Outcome, Verdict

# Dielectrics whose resistance and inductance keep them from working at high frequency.
_SLOW = ("alumin", "electrolytic", "tantalum", "polymer")


@dataclass(frozen=True, slots=True)
class Bypass:
    """The capacitors straight from a net to ground.

    fast:      (reference, F) of those that work at high frequency
    slow:      the electrolytic ones, by what they are marked with or by their size
    valueless: those whose value is missing
    """

    fast: tuple[tuple[str, float], ...]
    slow: tuple[str, ...]
    valueless: tuple[str, ...]

    @property
    def total(self) -> float:
        """Return the sum of the fast ones, in F."""
        return sum(value for _, value in self.fast)


def bypass_of(design: Design, net: str, most_unmarked: float) -> Bypass:
    """Return the bypass of a net.

    most_unmarked: the capacitance (F) up to which a capacitor without a marked dielectric counts as fast
    """
    fast: list[tuple[str, float]] = []
    slow: list[str] = []
    valueless: list[str] = []
    grounds = [ground for ground in design.netlist.nets if design.is_ground(ground)]
    for part in (part for ground in grounds for part in design.circuit.between(net, ground)):
        if design.circuit.kind(part) != "capacitor":
            continue
        value = design.circuit.value(part)
        if value is None:
            valueless.append(part.reference)
        elif _is_slow(design, part, value.spread.nominal, most_unmarked):
            slow.append(part.reference)
        else:
            fast.append((part.reference, value.spread.nominal))
    return Bypass(tuple(fast), tuple(slow), tuple(valueless))


def _is_slow(design: Design, part: Part, value: float, most_unmarked: float) -> bool:
    """Tell whether a capacitor is an electrolytic one: as marked, else by its size."""
    written = design.circuit.reader.written(part)
    marked = design.circuit.reader.attribute(part, "dielectric") or (written.dielectric if written else "")
    if marked:
        return any(name in marked.casefold() for name in _SLOW)
    return value > most_unmarked


def bypass_verdict(
    controller: Controller, design: Design, role: str, practice: Figure, most_unmarked: float, *, remedy: str
) -> Verdict:
    """Return the verdict on a pin's bypass: its sum, as marked on the parts, against the practice.

    A drawing with a bypass at neither pin is a sketch that leaves them out, or lacks both: who knows it
    must judge.
    """
    pin, limit = controller.pins[role], practice.limit()
    found = bypass_of(design, pin.net, most_unmarked)
    if found.valueless and not limit.holds(found.total):
        return Verdict(
            outcome=Outcome.OPEN,
            message=f"bypass of {pin.name}: {', '.join(found.valueless)} without a value",
            parts=found.valueless,
            nets=(pin.net,),
            pins=(role,),
            needs=tuple(f"a value for {reference}" for reference in found.valueless),
        )
    listed = " + ".join(f"{reference} {engineering(value, 'F')}" for reference, value in found.fast)
    says = f"{pin.name} is bypassed by {listed}" if listed else f"{pin.name} has no bypass to ground"
    if found.slow and not listed:
        says += f" for high frequency ({', '.join(found.slow)} taken for electrolytic)"
    # The practice is about what is marked on the part: its tolerance is in the practice already.
    spread = Spread.exact(found.total, "F")
    parts = tuple(reference for reference, _ in found.fast) or found.slow
    estimate = Estimate(spread, spread, parts=parts, nets=(pin.net,), formula=listed)
    verdict = judge(estimate, limit, says, source=practice.source, pins=(role,), remedy=remedy)
    if verdict.outcome is Outcome.PASS or not _is_sketch(controller, design, most_unmarked):
        return verdict
    message = f"{says}, nor has any other pin: drawn without them, or forgotten"
    return replace(verdict, outcome=Outcome.REVIEW, level=None, message=message)


def _is_sketch(controller: Controller, design: Design, most_unmarked: float) -> bool:
    """Tell whether neither the supply nor the reference has a capacitor to ground for high frequency."""
    nets = [controller.net(role) for role in ("supply", "reference")]
    return not any(bypass_of(design, net, most_unmarked).fast for net in nets if net)
