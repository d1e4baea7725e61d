"""An output transistor conducting or not: the current in it, and the voltage at what it drives.

Direct current only: the charge of a gate is a matter of time, and is asked elsewhere.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from .. import needs
from ..estimate import Estimate, Unsolved
from ..quantity import Spread
from .answers import Probe, estimate
from .controllers import Controller
from .diodes import Diode
from .drive import Drive, Driven
from .graph import Circuit
from .growth import Growth
from .network import CurrentSource, Resistor, VoltageSource
from .outputs import OutputTransistor
from .potentials import Potential
from .transistors import Transistor
from .worst_case import Parameter, Variation

# A resistance is read as the voltage that this current makes across it; any value does for a linear network.
_TEST_CURRENT = 1e-3

# Parts on an output's own nets whose direct current the network tells.
_TOLD = frozenset({"resistor", "trimmer", "capacitor", "diode", "transistor", "jumper", "fuse", "test point"})

# An emitter pulls one way only: the gate of an N-channel type down by a PNP, that of a P-channel type up.
_EMPTIED_BY = {"N": "P", "P": "N"}


@dataclass(slots=True)
class OutputDrive:
    """Solves the network round one controller's outputs."""

    circuit: Circuit
    known: Mapping[str, Potential]
    controllers: Sequence[Controller]
    controller: Controller
    drive: Drive

    def current(self, output: OutputTransistor, *, strangers: bool = True) -> Estimate | Unsolved:
        """Return the collector current (A) of a conducting output; where two are joined, of both together.

        strangers: a part on the output whose current is not known makes it unsolved, else it is left out
        """
        obstacle = self._stranger(output) if strangers else self._unknown_supply()
        if obstacle is not None:
            return obstacle
        growth, source = self._conducting(output)
        found = estimate(growth, {"current": (lambda s: s.current(source), "A")})
        return found if isinstance(found, Unsolved) else found["current"]

    def conducting(self, output: OutputTransistor) -> Growth | Unsolved:
        """Return the network round an output that conducts, or why it cannot be solved."""
        return self._stranger(output) or self._conducting(output)[0]

    def control(self, output: OutputTransistor, driven: Driven, *, conducting: bool) -> Estimate | Unsolved:
        """Return by how much (V) the control terminal of a driven transistor stands above its common one."""
        opaque = self._stranger(output) or self._inverter(driven)
        if opaque is not None:
            return opaque
        one = driven.transistor
        growth = self._conducting(output)[0] if conducting else self._resting(output)
        self._grow(growth, (one.control, one.common))
        if not all(_is_led_to(growth, net) for net in (one.control, one.common)):
            return Unsolved(f"nothing but a junction leads to {one.control}", nets=(one.control,))
        found = estimate(growth, {"control": (lambda s: s.voltage(one.control, one.common), "V")})
        return found if isinstance(found, Unsolved) else found["control"]

    def discharge(self, driven: Driven) -> Estimate | Unsolved:
        """Return the resistance (ohm) from a driven transistor's control to its common terminal at rest."""
        one = driven.transistor
        quiet = {
            net: replace(potential, spread=Spread.exact(0.0, "V"), assumption="")
            for net, potential in self.known.items()
        }
        for net in (one.common, self.controller.net("supply")):
            if net:
                quiet.setdefault(net, Potential(net, Spread.exact(0.0, "V"), "bound"))
        stops = self._stops()
        growth = Growth(self.circuit, quiet, self.controllers, frozenset(stops))
        growth.grow(one.control, one.common)
        for net in stops:
            if net in growth.nets:
                growth.grow(net, from_known=True)
        growth.elements = {name: e for name, e in growth.elements.items() if isinstance(e, Resistor)}
        growth.diodes.clear()
        growth.switches.clear()
        growth.add(
            CurrentSource("test current", one.common, one.control, lambda _: np.full(1, _TEST_CURRENT))
        )
        if not all(_is_led_to(growth, net) for net in (one.control, one.common)):
            return Unsolved(f"no resistor discharges {one.control}", nets=(one.control,))
        probe: Probe = lambda s: s.voltage(one.control, one.common) / _TEST_CURRENT  # noqa: E731
        found = estimate(growth, {"resistance": (probe, "ohm")})
        return found if isinstance(found, Unsolved) else found["resistance"]

    def discharger(self, driven: Driven) -> str:
        """Return the driver whose emitter is on the control terminal, or beside it; empty for none.

        A transistor whose base nothing pulls empties nothing: its base must lead to a known potential, other
        than by way of the control terminal, or be driven by another transistor.
        """
        control = driven.transistor.control
        beside = {control}
        for connection in self.circuit.connections(control):
            if self.circuit.kind(connection.part) in ("resistor", "jumper"):
                others = set(self.circuit.other_nets(connection.part, control))
                beside |= {net for net in others - {driven.transistor.common} if not self._is_stiff(net)}
        for place, reference in enumerate(driven.drivers):
            driver = self.drive.transistors.get(reference)
            if driver is None:
                return reference
            pulled = place > 0 or self._is_pulled(driver, beside)
            wanted = ("", _EMPTIED_BY.get(driven.transistor.polarity, ""))
            for one in self.drive.transistors.values():  # the driver, or its counterpart in a pair
                same = one.control == driver.control and one.common in beside
                if same and pulled and one.polarity in wanted:
                    return one.reference
        return ""

    def _is_stiff(self, net: str) -> bool:
        return net in self.known or net == self.controller.net("supply")

    def _is_pulled(self, driver: Transistor, beside: set[str]) -> bool:
        """Tell whether resistors lead from a driver's control terminal to a stiff net or to its collector."""
        waiting, seen = [driver.control], {driver.control, *beside}
        while waiting:
            net = waiting.pop()
            if self._is_stiff(net) or net == driver.output:
                return True
            for connection in self.circuit.connections(net):
                if self.circuit.kind(connection.part) in ("resistor", "trimmer", "jumper", "inductor"):
                    new = [n for n in self.circuit.other_nets(connection.part, net) if n not in seen]
                    seen.update(new)
                    waiting += new
        return False

    def _stops(self) -> tuple[str, ...]:
        """Return the outputs' own nets: what stands on them is no obstacle, for the outputs are open."""
        ends = (net for output in self.drive.outputs for net in (output.collector, output.emitter))
        return tuple(dict.fromkeys(net for net in ends if net and net not in self.known))

    def _conducting(self, output: OutputTransistor) -> tuple[Growth, VoltageSource]:
        """Grow the network with the output saturated: its saturation voltage between its ends."""
        growth = self._resting(output)
        name = f"{self.controller.reference} output {output.number} saturation"
        emitter_follows = output.use == "follower"
        figure = "output.saturation-follower" if emitter_follows else "output.saturation-common-emitter"
        volts = self.controller.profile.figure(figure).spread()
        # The printed voltage holds at full current; at less it falls, though never below zero.
        value = growth.add_parameter(Parameter(name, 0.0, volts.nominal, volts.maximum, Variation.RANGE))
        source = VoltageSource(name, output.collector, output.emitter, value)
        growth.add(source)
        return growth, source

    def _resting(self, output: OutputTransistor) -> Growth:
        """Grow the network with the output not conducting."""
        ends = (output.collector, output.emitter)
        stops = tuple(net for net in ends if net not in self.known)
        growth = Growth(self.circuit, self.known, self.controllers, frozenset(stops))
        growth.grow(*stops, from_known=True)
        self._grow(growth, ends)
        return growth

    def _grow(self, growth: Growth, nets: Iterable[str]) -> None:
        """Go on from `nets`, with the base of every bipolar transistor met as the junction that it is."""
        growth.grow(*nets)
        met: set[str] = set()
        while True:
            new = [one for one in self._controlled_in(growth) if one.reference not in met]
            if not new:
                return
            for one in new:
                met.add(one.reference)
                growth.switches.pop(one.reference, None)
                if one.field_effect is False:
                    ends = (one.control, one.common) if one.polarity == "N" else (one.common, one.control)
                    growth.diodes.append(Diode(one.reference, *ends))
                    growth.grow(one.common)

    def _controlled_in(self, growth: Growth) -> list[Transistor]:
        return [one for one in self.drive.transistors.values() if one.control in growth.nets and one.polarity]

    def _unknown_supply(self) -> Unsolved | None:
        """Return that nothing tells the voltage of the controller's supply, None where something does."""
        supply = self.controller.net("supply")
        if not supply or supply in self.known:
            return None
        need = needs.rail(supply)
        return Unsolved(f"the voltage of {supply} is not known", nets=(supply,), needs=(need,))

    def _stranger(self, output: OutputTransistor) -> Unsolved | None:
        """Return why an output's network cannot be solved: its supply, or a part on its own nets."""
        unknown = self._unknown_supply()
        if unknown is not None:
            return unknown
        for net in output.drives:
            for connection in self.circuit.connections(net):
                part = connection.part
                if part.reference != self.controller.reference and self.circuit.kind(part) not in _TOLD:
                    kind = self.circuit.kind(part)
                    return Unsolved(
                        f"what {part.reference} ({kind}) draws from {net} is not known",
                        parts=(part.reference,),
                        nets=(net,),
                        needs=(f"data sheet of {part.reference}: the current that it draws from {net}",),
                    )
        return None

    def _inverter(self, driven: Driven) -> Unsolved | None:
        """Return why a control voltage cannot be told: a driver that is no plain emitter follower."""
        for reference in driven.drivers:
            driver = self.drive.transistors.get(reference)
            follows = driver is not None and driver.field_effect is False and driver.output in self.known
            if not follows:
                return Unsolved(f"{reference} drives it in a way that is not solved", parts=(reference,))
        return None


def _is_led_to(growth: Growth, net: str) -> bool:
    """Tell whether a net's potential is known or conductive elements, junctions left out, lead to it."""
    network = growth.network()
    return net in network.known or (net in network.nets() and net not in network.floating())
