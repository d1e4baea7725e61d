"""From a controller's outputs to the transistors that they drive, through drivers and coupling parts."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace

from ...grammar.netlist import Part
from .controllers import Controller
from .graph import Circuit
from .outputs import OutputTransistor, output_transistors
from .potentials import Potential
from .transistors import Transistor, read_transistor
from .windings import Winding, windings

# Parts that a drive signal passes from net to net.
_PASSED = frozenset({"resistor", "capacitor", "diode", "jumper", "thermistor"})


@dataclass(frozen=True, slots=True)
class Driven:
    """A transistor that the controller drives.

    outputs: the numbers of the outputs that reach it
    drivers: the transistors and circuits in between, from the output on
    high:    whether its control terminal goes up when the output conducts; None where nothing tells, as
             behind a transformer, a capacitor or a driver circuit
    """

    transistor: Transistor
    outputs: tuple[int, ...]
    drivers: tuple[str, ...] = ()
    high: bool | None = None


@dataclass(frozen=True, slots=True)
class _Signal:
    """An output's signal on a net: the drivers passed so far, and whether it rises as it conducts."""

    net: str
    drivers: tuple[str, ...]
    high: bool | None


class Drive:
    """What the outputs of one controller drive.

    transistors: every transistor whose terminals are known, by reference
    windings:    the windings of the power stage, those of the drive itself left out
    outputs:     the controller's two output transistors
    """

    def __init__(self, circuit: Circuit, known: Mapping[str, Potential], controller: Controller) -> None:
        self._circuit = circuit
        self._known = known
        self._controller = controller
        self.outputs = output_transistors(circuit, known, controller)
        read = (read_transistor(circuit, known, part) for part in circuit.parts.values())
        self.transistors = {one.reference: one for one in read if one is not None}
        self._controls = {one.control for one in self.transistors.values()}
        self._switched = {net for one in self.transistors.values() if one.field_effect for net in one.mains}
        everything = windings(circuit)
        self.windings = tuple(winding for winding in everything if not self._is_of_the_drive(winding))
        self._drive_windings = tuple(winding for winding in everything if winding not in self.windings)
        nets = (net for winding in self.windings for net in winding.nets)
        self._power_nets = {net for net in nets if not self._is_stiff(net)}

    def driven(self) -> tuple[Driven, ...]:
        """Return the transistors that the outputs reach; an output that switches a winding is one itself."""
        found: dict[tuple[str, str, str], Driven] = {}
        for output in self.outputs:
            for one in self._reached(output):
                key = (one.transistor.reference, *one.transistor.mains)
                known = found.setdefault(key, one)
                outputs = tuple(dict.fromkeys((*known.outputs, *one.outputs)))
                found[key] = replace(known, outputs=outputs)
        return tuple(found.values())

    def is_switch(self, transistor: Transistor) -> bool:
        """Tell whether a transistor switches a winding of the power stage.

        One that feeds the control terminal of another is the first of a cascade, and its driver.
        """
        mains = set(transistor.mains)
        return not self._power_nets.isdisjoint(mains) and self._controls.isdisjoint(mains)

    def _is_of_the_drive(self, winding: Winding) -> bool:
        """Tell whether a winding leads to a control terminal: a bead, a drive transformer.

        What leads there by way of a drain or a source does so through a resistor from gate to source, or a
        snubber, and is a winding of the power stage.
        """
        if not winding.transformer:
            return not self._controls.isdisjoint(winding.nets)
        mains = {net for one in self.transistors.values() for net in one.mains}
        starts = [net for net in winding.nets if not self._is_stiff(net) and net not in mains]
        return any(self._leads_to_control(net) for net in starts)

    def _leads_to_control(self, start: str) -> bool:
        waiting, seen = [start], {start}
        while waiting:
            net = waiting.pop()
            if net in self._controls:
                return True
            for other in self._passed(net):
                if other not in seen and other not in self._switched:
                    seen.add(other)
                    waiting.append(other)
        return False

    def _passed(self, net: str) -> Iterator[str]:
        """Yield the nets to which coupling parts pass a signal from `net`, stiff ones left out."""
        for connection in self._circuit.connections(net):
            if self._circuit.kind(connection.part) in _PASSED:
                for other in self._circuit.other_nets(connection.part, net):
                    if not self._is_stiff(other):
                        yield other

    def _reached(self, output: OutputTransistor) -> Iterator[Driven]:
        """Yield what one output drives, nearest first."""
        if not output.live:
            return
        if not self._power_nets.isdisjoint(output.drives):
            yield Driven(self._itself(output), (output.number,))
            return
        rises = {output.collector: False, output.emitter: True}
        seen = {net: _Signal(net, (), rises[net]) for net in output.drives}
        waiting = list(seen.values())
        while waiting:
            for signal in self._onward(waiting.pop(0)):
                first = seen.get(signal.net)
                if first is None:
                    seen[signal.net] = signal
                    waiting.append(signal)
                elif first.high is not signal.high:  # two ways that contradict each other tell nothing
                    seen[signal.net] = replace(first, high=None)
        for signal in seen.values():
            for one in self._controlled_by(signal.net):
                yield Driven(one, (output.number,), signal.drivers, signal.high)

    def _itself(self, output: OutputTransistor) -> Transistor:
        """Return an output transistor as the switch that it is where a winding hangs on it."""
        ends = (output.collector, output.emitter)
        return Transistor(self._controller.reference, "", *ends, field_effect=False, polarity="N")

    def _controlled_by(self, net: str) -> list[Transistor]:
        return [one for one in self.transistors.values() if one.control == net]

    def _onward(self, signal: _Signal) -> Iterator[_Signal]:
        """Yield the signals that one signal makes on other nets."""
        net = signal.net
        for one in self._controlled_by(net):
            if not self.is_switch(one):
                for main in self._soft(one.mains):
                    turned = main == one.output and signal.high is not None
                    high = not signal.high if turned else signal.high
                    yield _Signal(main, (*signal.drivers, one.reference), high)
        for part in self._gate_drivers(net):
            for other in self._soft(self._circuit.other_nets(part, net)):
                yield _Signal(other, (*signal.drivers, part.reference), None)
        for winding in self._drive_windings:
            if net in winding.nets:
                high = None if winding.transformer else signal.high
                yield from (_Signal(other, signal.drivers, high) for other in self._soft(winding.others(net)))
        yield from (_Signal(other, signal.drivers, signal.high) for other in self._soft([*self._passed(net)]))

    def _gate_drivers(self, net: str) -> Iterator[Part]:
        """Yield the circuits on a net that have a transistor's control terminal on another of their pins."""
        for connection in self._circuit.connections(net):
            part = connection.part
            own = part.reference == self._controller.reference
            if own or self._circuit.kind(part) != "integrated circuit":
                continue
            if any(
                self._leads_to_control(other) for other in self._soft(self._circuit.other_nets(part, net))
            ):
                yield part

    def _soft(self, nets: Sequence[str]) -> list[str]:
        return [net for net in nets if net and not self._is_stiff(net) and net not in self._power_nets]

    def _is_stiff(self, net: str) -> bool:
        return net in self._known or net == self._controller.net("supply")
