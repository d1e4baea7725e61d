"""Nets whose potential is known before any solving: ground, references, rails, sources."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass

from ...grammar.netlist import Part
from ..brief import Brief
from ..quantity import Spread, engineering, percent
from .controllers import Controller
from .graph import Circuit
from .parts import defaults
from .worst_case import Parameter, Variation

# A net whose whole name is a voltage: +12V, 5V0, -15V, V3V3 and such.
_NAMED_RAIL = re.compile(r"(?:.*/)?(?P<sign>[+-]?)V?(?P<whole>\d{1,3})V(?P<tenths>\d{0,2})", re.IGNORECASE)


@dataclass(frozen=True, slots=True)
class Potential:
    """A net's potential over ground, known without solving.

    origin: "ground", "reference", "brief", "source" (a voltage source of the list), "name" (the net's own
            name) or "amplifier" (held inside the control range while the loop regulates)
    assumption: a sentence where it was taken for granted, else empty
    random:     the share of its spread that varies from unit to unit
    """

    net: str
    spread: Spread
    origin: str
    variation: Variation = Variation.RANGE
    assumption: str = ""
    label: str = ""
    random: float = 1.0

    @property
    def parameter(self) -> Parameter:
        """Return what varies about it, for the worst case."""
        s, label = self.spread, self.label or self.net
        name = f"V({self.net})"
        return Parameter(name, s.minimum, s.nominal, s.maximum, self.variation, label, self.random)


def known_potentials(
    circuit: Circuit, brief: Brief | None, controllers: Sequence[Controller]
) -> dict[str, Potential]:
    """Return every net of known potential. Where several say it: ground, reference, brief, source, name.

    A net of the mains alternates, and has none unless it is ground.
    """
    rails = brief.rails.values() if brief is not None else ()
    alternating = {rail.net for rail in rails if rail.circuit == "mains"}
    known: dict[str, Potential] = {}
    for found in (
        _grounds(circuit, controllers),
        _references(controllers),
        _rails(circuit, brief),
        _sources(circuit),
        _named(circuit),
    ):
        for net, potential in found.items():
            if net not in alternating or potential.origin == "ground":
                known.setdefault(net, potential)
    return known


def _grounds(circuit: Circuit, controllers: Sequence[Controller]) -> dict[str, Potential]:
    found: dict[str, Potential] = {}
    for net in circuit.grounds:
        plain = net.rpartition("/")[2].casefold() in ("0", "gnd")
        assumption = "" if plain else f"net {net} taken for ground by its name"
        found[net] = Potential(net, Spread.exact(0.0, "V"), "ground", assumption=assumption)
    for controller in controllers:
        net = controller.net("ground")
        if net and net not in found:
            assumption = f"net {net} taken for ground: {controller.reference}'s ground pin is on it"
            found[net] = Potential(net, Spread.exact(0.0, "V"), "ground", assumption=assumption)
    return found


def _references(controllers: Sequence[Controller]) -> dict[str, Potential]:
    found: dict[str, Potential] = {}
    for controller in controllers:
        net = controller.net("reference")
        if net:
            found[net] = _reference(controller, net)
    return found


def _reference(controller: Controller, net: str) -> Potential:
    """Return a reference over its whole duty: spread from unit to unit, and regulation, which is bias."""
    profile = controller.profile
    initial = profile.figure("reference.voltage").spread()
    regulation = sum(
        profile.figure(name).spread().maximum
        for name in ("reference.line-regulation", "reference.load-regulation")
    )
    spread = Spread(initial.minimum - regulation, initial.nominal, initial.maximum + regulation, "V")
    return Potential(
        net,
        spread,
        "reference",
        Variation.TOLERANCE,
        assumption=f"{controller.reference}: line and load regulation of the reference at their limits, "
        f"{engineering(regulation, 'V')}",
        label=f"{controller.reference} reference",
        random=(initial.maximum - initial.minimum) / (spread.maximum - spread.minimum),
    )


def _rails(circuit: Circuit, brief: Brief | None) -> dict[str, Potential]:
    if brief is None:
        return {}
    return {
        name: Potential(name, rail.band, "brief", label=f"rail {name}")
        for name, rail in brief.rails.items()
        if name in circuit.netlist.nets
    }


def _sources(circuit: Circuit) -> dict[str, Potential]:
    found: dict[str, Potential] = {}
    for part in circuit.parts.values():
        if circuit.kind(part) in ("voltage source", "battery") and len(part.pins) == 2:
            found.update(_source(circuit, part))
    return found


def _source(circuit: Circuit, part: Part) -> dict[str, Potential]:
    value = circuit.value(part)
    plus, minus = part.pins[0].net, part.pins[1].net
    if value is None:
        return {}
    s = value.spread
    if circuit.is_ground(minus) and plus:
        return {plus: Potential(plus, s, "source", label=part.reference)}
    if circuit.is_ground(plus) and minus:
        turned = Spread(-s.maximum, -s.nominal, -s.minimum, "V")
        return {minus: Potential(minus, turned, "source", label=part.reference)}
    return {}


def _named(circuit: Circuit) -> dict[str, Potential]:
    found: dict[str, Potential] = {}
    ratio = float(defaults()["tolerance"]["named-rail"]["ratio"])
    for net in circuit.netlist.nets:
        volts = named_voltage(net)
        if volts is not None:
            ends = sorted((volts * (1 - ratio), volts * (1 + ratio)))
            assumption = f"net {net} taken for {engineering(volts, 'V')} ±{percent(ratio)} by its name"
            found[net] = Potential(net, Spread(ends[0], volts, ends[1], "V"), "name", assumption=assumption)
    return found


def named_voltage(net: str) -> float | None:
    """Return the voltage that a net's whole name states: 12.0 for "+12V", 3.3 for "3V3"; None for others."""
    match = _NAMED_RAIL.fullmatch(net)
    if match is None:
        return None
    volts = float(f"{match['whole']}.{match['tenths'] or '0'}")
    return -volts if match["sign"] == "-" else volts
