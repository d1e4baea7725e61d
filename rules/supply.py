"""Supply: does the controller get a voltage that it can work with, and is it bypassed?"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from ..lint import needs
from ..lint.circuit.controllers import Controller
from ..lint.design import Design
from ..lint.estimate import Unsolved
from ..lint.judge import judge, unsolved
from ..lint.quantity import Spread, engineering
from ..lint.rule import rule
from ..lint.verdict import Outcome, Verdict
from .bypass import bypass_verdict

_PIN = ("supply",)


@rule("supply.range", level="error", topic="supply")
def supply_range(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the controller's supply stay in its range, over the whole range of the rail?

    What:
        Takes the voltage of the supply pin's net from the brief, from a source of the list, from the
        net's own name, or from the network that feeds it, and holds both its ends against the absolute
        maximum and the recommended range. Where only the name tells the voltage, an end outside the range
        is for a person to judge.
    Why:
        Below the range the reference drops out and takes every threshold with it; above the absolute
        maximum the part is destroyed. A battery or a rectified winding does reach both its ends.
    Formula:
        minimum <= V(rail, lowest) and V(rail, highest) <= maximum, in V
    Source:
        494 class: second sources' data sheets (7 V to 40 V); SLVS074 (41 V absolute), from memory
    Remedy:
        Feed the pin from a rail inside the range, or through a regulator or a resistor with a zener diode.
    Fails:
        [rails.VCC] voltage = "6 V .. 15 V"
    Passes:
        [rails.VCC] voltage = "9 V .. 15 V"
    """
    net = controller.net("supply")
    if not net:
        return  # connections.pin-open or connections.controller-found speaks of it
    voltage = design.voltage(net)
    if isinstance(voltage, Unsolved):
        need = needs.rail(net)
        reason = f"neither the brief, a source nor the name tells the voltage of net {net}"
        yield unsolved(Unsolved(reason, nets=(net,), needs=(need,)), "supply voltage", pins=_PIN)
        return
    name = controller.pins["supply"].name
    absolute = controller.profile.figure("supply.absolute")
    limit = absolute.limit()
    recommended = controller.profile.figure("supply.recommended")
    says = f"{name} on {net} at {voltage.spread}"
    if not limit.contains(voltage.spread):
        says += ", beyond the absolute maximum"
        remedy = f"keep {name} below {engineering(recommended.spread().maximum, 'V')}: {_BELOW}"
        verdict = judge(voltage, limit, says, source=absolute.source, rating=True, remedy=remedy, pins=_PIN)
    else:
        remedy = _into(recommended.spread(), voltage.spread, name)
        verdict = judge(
            voltage, recommended.limit(), says, source=recommended.source, remedy=remedy, pins=_PIN
        )
    yield _by_name_only(verdict, net, design)


_BELOW = "a regulator, or a resistor with a zener diode"


def _into(range_: Spread, voltage: Spread, name: str) -> str:
    """Return what brings the supply into its range."""
    if voltage.minimum < range_.minimum:
        return f"feed {name} from a rail that stays above {engineering(range_.minimum, 'V')}"
    return f"keep {name} below {engineering(range_.maximum, 'V')}: {_BELOW}"


def _by_name_only(verdict: Verdict, net: str, design: Design) -> Verdict:
    """Let a person judge where only the spread that was assumed for a rail's name leaves the range."""
    potential = design.potential(net)
    assumed = potential is not None and potential.origin == "name"
    if verdict.outcome is not Outcome.FAIL or not assumed:
        return verdict
    assert verdict.limit is not None  # a failure of this rule has both
    assert verdict.measured is not None
    if not verdict.limit.holds(verdict.measured.nominal):
        return verdict
    need = needs.rail(net)
    return replace(verdict, outcome=Outcome.REVIEW, level=None, needs=(need,))


@rule("supply.bypass", level="warning", topic="supply")
def bypass(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the supply pin bypassed to ground by a capacitor that works at high frequency?

    What:
        Adds up the capacitors that stand straight between the supply pin's net and ground, electrolytic
        ones left out. A capacitor without a marked dielectric counts up to 10 uF.
    Why:
        The output transistors switch within 100 ns. Without a capacitor beside the pin their current
        pulses pull at the supply, and the comparators and the oscillator see it.
    Formula:
        sum of C [F] >= 100 nF
    Source:
        common practice, no source
    Remedy:
        Put 100 nF, ceramic, from the supply pin to the ground pin.
    Fails:
        C1 VCC 0 100u
    Passes:
        C1 VCC 0 100u
        C2 VCC 0 100n
    """
    net = controller.net("supply")
    if not net or design.is_ground(net):
        return
    practice = controller.profile.practice("supply.bypass")
    unmarked = controller.profile.practice("supply.bypass-unmarked").maximum
    assert practice.minimum is not None  # the profile's own tests ask for both
    assert unmarked is not None
    remedy = f"put {engineering(practice.minimum, 'F')}, ceramic, from the supply pin to ground beside it"
    yield bypass_verdict(controller, design, "supply", practice, unmarked, remedy=remedy)
