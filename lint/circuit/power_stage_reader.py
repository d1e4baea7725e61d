"""What power stage the outputs drive: recognised from who is connected to what, with the evidence.

Nothing is guessed: a stage that fits no pattern wholly is `NotRecognised`, and rules that need one stay
silent or ask for the brief.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from ...grammar.netlist import Part
from .amplifiers import Amplifier, SenseResistor, amplifier_for
from .controllers import Controller
from .delivery import delivered
from .diodes import diode_nets
from .drive import Drive, Driven
from .graph import Circuit
from .potentials import Potential
from .power_stage import NotRecognised, PowerStage, Switch
from .windings import Winding

# From this capacitance (F) on a capacitor feeds a switch's pulses; less filters (common practice, no source).
_BUFFER = 1e-6


@dataclass(frozen=True, slots=True)
class _Diode:
    reference: str
    anode: str
    cathode: str


class PowerStageReader:
    """Reads the power stage of one controller off the circuit."""

    def __init__(
        self,
        circuit: Circuit,
        known: Mapping[str, Potential],
        controller: Controller,
        amplifiers: Sequence[Amplifier],
        declared_output: str = "",
    ) -> None:
        self._circuit = circuit
        self._known = known
        self._controller = controller
        self._amplifiers = amplifiers
        self._drive = Drive(circuit, known, controller)
        voltage = amplifier_for(amplifiers, "voltage")
        declared = (declared_output,) if declared_output else ()
        self._sensed_outputs = voltage.outputs if voltage is not None else declared

    def read(self) -> PowerStage | NotRecognised:
        """Return the power stage, or why none was recognised."""
        found = [self._switch(one) for one in self._drive.driven() if self._drive.is_switch(one.transistor)]
        switches = tuple(switch for switch in found if switch is not None)
        if not switches or len(switches) != len(found):
            outputs = f"the outputs of {self._controller.reference}"
            if not found:
                return NotRecognised(f"no transistor at a winding is found behind {outputs}{self._unread()}")
            return NotRecognised(f"a switch behind {outputs} has no side, or both, on a winding")
        nodes = dict.fromkeys(switch.node for switch in switches)
        touched = [winding for winding in self._drive.windings if not nodes.keys().isdisjoint(winding.nets)]
        transformers = [winding for winding in touched if winding.transformer]
        if len(transformers) == 1:
            return self._with_transformer(switches, transformers[0])
        if len(touched) == 1 and len(nodes) == 1:
            return self._with_inductor(switches, touched[0])
        names = ", ".join(winding.name for winding in touched)
        return NotRecognised(f"the switches share no single winding, but touch {names}")

    def _unread(self) -> str:
        """Return the end of a sentence: of which transistors nothing tells the terminals, if of any."""
        transistors = (p for p in self._circuit.parts.values() if self._circuit.kind(p) == "transistor")
        unread = [p.reference for p in transistors if p.reference not in self._drive.transistors]
        return f"; no names of pins tell the terminals of {', '.join(unread)}" if unread else ""

    # ------------------------------------------------------------------------------------- switches

    def _switch(self, driven: Driven) -> Switch | None:
        """Return a driven transistor as a switch, None where both its sides look alike."""
        transistor = driven.transistor
        soft = [net for net in transistor.mains if not self._is_stiff(self._past_sense(net))]
        on_winding = [net for net in soft if any(net in winding.nets for winding in self._drive.windings)]
        if len(on_winding) != 1:
            return None
        node = on_winding[0]
        return Switch(driven, node, self._past_sense(transistor.other(node)))

    def _past_sense(self, net: str) -> str:
        """Return the net behind a current-sense resistor on `net`, or `net` itself."""
        sense = self._sense
        if sense is None or self._is_stiff(net):
            return net
        return {sense.near: sense.far, sense.far: sense.near}.get(net, net)

    def _delivered(self, net: str) -> str:
        """Return the sensed output to which the load's current goes on, else what is past sense."""
        shunt = self._controller.profile.practice("sense-resistor").maximum or 0.0
        found = delivered(self._circuit, net, self._sensed_outputs, shunt)
        return found if found is not None else self._past_sense(net)

    @property
    def _sense(self) -> SenseResistor | None:
        current = amplifier_for(self._amplifiers, "current")
        return current.sense if current is not None else None

    def _is_ground(self, net: str) -> bool:
        return net in self._known and self._known[net].origin == "ground"

    def _is_return(self, net: str) -> bool:
        """Tell whether a net is ground, or the other side's: one that the brief puts at 0 V."""
        return net in self._known and self._known[net].spread.maximum == 0

    def _is_stiff(self, net: str) -> bool:
        return net in self._known or net == self._controller.net("supply")

    def _is_positive(self, net: str) -> bool:
        """Tell whether a net is a supply: known to be positive, or the controller's own."""
        if net == self._controller.net("supply"):
            return True
        return net in self._known and self._known[net].spread.minimum > 0

    def _diodes(self, net: str) -> list[_Diode]:
        parts = {c.part.reference: c.part for c in self._circuit.connections(net)}
        diodes = [part for part in parts.values() if self._circuit.kind(part) == "diode"]
        found = [one for part in diodes for one in _inside(part)]
        return [one for one in found if net in (one.anode, one.cathode)]

    # ------------------------------------------------------------------------- one inductor, no transformer

    def _with_inductor(self, switches: Sequence[Switch], inductor: Winding) -> PowerStage | NotRecognised:
        places = _places(switches)
        if len(places) == 2:
            return self._synchronous(switches, inductor)
        if len(places) != 1:
            return NotRecognised(f"{len(places)} switches share {inductor.name}")
        switch = switches[0]
        node, far = switch.node, inductor.others(switch.node)[0]
        for diode in self._diodes(node):
            other = self._past_sense(diode.anode if diode.cathode == node else diode.cathode)
            topology = self._topology(switch, far, other, into_node=diode.cathode == node)
            if topology:
                outputs = {"buck": self._delivered(far), "boost": self._delivered(other)}
                output = outputs.get(topology, other)
                source = far if topology == "boost" else switch.rail
                says = f"{diode.reference} stands between {other} and {node}"
                return self._stage(topology, switches, source, output, inductor, (diode.reference,), says)
        why = f"no diode on {node} makes a buck, boost or inverting stage of {inductor.name}"
        return NotRecognised(why)

    def _topology(self, switch: Switch, far: str, other: str, *, into_node: bool) -> str:
        """Return the topology of one switch, one inductor and one diode; empty where they fit none.

        far:   the inductor's net away from the switch; other: the diode's
        into_node: the diode conducts towards the switched node
        """
        if self._is_ground(switch.rail):
            rises = not into_node and not self._is_ground(far) and not self._is_ground(other)
            # A diode back to the supply frees an inductor that is loaded on its far side.
            return "boost" if rises and not self._is_positive_supply(other, far) else ""
        if not into_node or not self._is_positive(switch.rail):
            return ""
        if self._is_ground(other):
            return "" if self._is_ground(far) else "buck"
        return "inverting" if self._is_ground(far) else ""

    def _is_positive_supply(self, other: str, far: str) -> bool:
        """Tell whether `other` rather than `far` feeds the stage."""
        supply = self._controller.net("supply")
        return other == supply or (far in self._sensed_outputs and other not in self._sensed_outputs)

    def _synchronous(self, switches: Sequence[Switch], inductor: Winding) -> PowerStage | NotRecognised:
        """Recognise two switches on one node: the lower one stands in for the diode, or the upper one."""
        places = _places(switches)
        lower = [switch for switch in places if self._is_ground(switch.rail)]
        upper = [switch for switch in places if not self._is_ground(switch.rail)]
        if len(lower) != 1 or len(upper) != 1:
            return NotRecognised(f"two switches on {switches[0].node}, not one to ground and one to a supply")
        far, rail = inductor.others(lower[0].node)[0], upper[0].rail
        output = self._delivered(far)
        says = f"{lower[0].reference} takes the place of a diode"
        if output in self._sensed_outputs and self._is_positive(rail):
            return self._stage("buck", switches, rail, output, inductor, (lower[0].reference,), says)
        if rail in self._sensed_outputs and self._is_positive(far):
            says = f"{upper[0].reference} takes the place of a diode"
            return self._stage("boost", switches, far, rail, inductor, (upper[0].reference,), says)
        return NotRecognised(f"neither end of {inductor.name} and its switches is seen to be the output")

    # -------------------------------------------------------------------------------------- transformer

    def _with_transformer(
        self, switches: Sequence[Switch], transformer: Winding
    ) -> PowerStage | NotRecognised:
        source = next((net for net in self._feeds(switches, transformer)), "")
        primary = {switch.node for switch in switches} | {source}
        rectifiers = self._rectifiers(transformer, primary)
        output, inductor, freewheels = self._behind(rectifiers)
        topology = self._bridge(switches)
        if topology == "forward" and not freewheels:
            topology = "flyback"
        if not topology or not rectifiers:
            why = "no rectifier" if not rectifiers else f"{len(switches)} switches that fit no pattern"
            return NotRecognised(f"{why} at {transformer.name}")
        names = tuple(diode.reference for diode in rectifiers)
        says = f"{', '.join(names)} rectify what {transformer.name} delivers"
        return self._stage(topology, switches, source, output, inductor, names, says, transformer.name)

    def _feeds(self, switches: Sequence[Switch], transformer: Winding) -> list[str]:
        nets = [*transformer.nets, *(switch.rail for switch in switches)]
        return [net for net in nets if self._is_positive(net)]

    def _bridge(self, switches: Sequence[Switch]) -> str:
        """Return what the switches make at a transformer; "forward" for one switch, or for two in series."""
        places = _places(switches)
        nodes = [switch.node for switch in places]
        grounds = [self._is_return(switch.rail) for switch in places]
        if len(places) == 1:
            return "forward"
        if len(places) == 2 and len(set(nodes)) == 2:
            upper = [switch for switch in places if self._is_positive(switch.rail)]
            return "forward" if len(upper) == 1 else "push-pull"
        legs = [sorted(g for n, g in zip(nodes, grounds, strict=True) if n == node) for node in set(nodes)]
        if all(leg == [False, True] for leg in legs):
            return {1: "half-bridge", 2: "full-bridge"}.get(len(legs), "")
        return ""

    def _rectifiers(self, transformer: Winding, primary: set[str]) -> list[_Diode]:
        """Return the diodes that lead from the transformer's secondary nets to somewhere else."""
        found: dict[str, _Diode] = {}
        for net in transformer.nets:
            if net in primary or self._is_stiff(net):
                continue
            for diode in self._diodes(net):
                away = diode.anode == net and not self._is_ground(diode.cathode)
                if away and diode.cathode not in primary and diode.cathode not in transformer.nets:
                    found[diode.reference] = diode
        return list(found.values())

    def _behind(self, rectifiers: Sequence[_Diode]) -> tuple[str, Winding | None, bool]:
        """Return the output behind the rectifiers, the filter inductor, and whether it may freewheel."""
        found: dict[str, tuple[str, Winding | None, bool]] = {}
        for net in dict.fromkeys(diode.cathode for diode in rectifiers):
            inductors = [w for w in self._drive.windings if net in w.nets and not w.transformer]
            inductor = inductors[0] if len(inductors) == 1 else None
            output = self._delivered(inductor.others(net)[0] if inductor is not None else net)
            # The second diode of a floating winding starts from the winding's return, not from ground.
            onto = [diode for diode in self._diodes(net) if diode.cathode == net]
            returns = [diode for diode in onto if diode in rectifiers or self._is_ground(diode.anode)]
            found[output] = (output, inductor, inductor is not None and len(returns) > 1)
        sensed = [output for output in found if output in self._sensed_outputs]
        chosen = sensed if sensed else list(found)
        return found[chosen[0]] if len(chosen) == 1 else ("", None, False)

    # ------------------------------------------------------------------------------------------ result

    def _stage(
        self,
        topology: str,
        switches: Sequence[Switch],
        source: str,
        output: str,
        inductor: Winding | None,
        rectifiers: tuple[str, ...],
        says: str,
        transformer: str = "",
    ) -> PowerStage:
        evidence = [switch.sentence for switch in switches]
        if inductor is not None:
            evidence.append(f"{inductor.name} lies between {' and '.join(inductor.nets)}")
        evidence.append(says)
        evidence += [switch.driven.transistor.assumption for switch in switches]
        sensed = self._what_is_sensed(switches, source, output)
        if sensed and self._sense is not None:
            evidence.append(f"{self._sense.part.reference} carries the current of the {sensed}")
        return PowerStage(
            topology=topology,
            switches=tuple(switches),
            input=source,
            output=output,
            inductor=inductor.name if inductor is not None else "",
            transformer=transformer,
            rectifiers=rectifiers,
            sensed=sensed,
            evidence=tuple(sentence for sentence in evidence if sentence),
        )

    def _what_is_sensed(self, switches: Sequence[Switch], source: str, output: str) -> str:
        """Return what flows in the current-sense resistor, empty where that is not seen."""
        sense = self._sense
        if sense is None:
            return ""
        ends = tuple(net for net in (sense.near, sense.far) if not self._is_ground(net))
        mains = {net for switch in switches for net in switch.driven.transistor.mains}
        at_switch = [net for net in ends if net in mains and not self._is_stiff(net)]
        if at_switch:
            return "input" if any(self._is_buffered(net) for net in at_switch) else "switch"
        if output in ends:
            return "output"
        for net in ends:
            if self._share_a_part(net, output):
                return "output return"
            if net == source or self._share_a_part(net, source):
                return "input"
        return ""

    def _is_buffered(self, net: str) -> bool:
        """Tell whether a capacitor from a net to ground takes the pulses of the switch off what feeds it."""
        parts = (connection.part for connection in self._circuit.connections(net))
        capacitors = (p for p in parts if self._circuit.kind(p) == "capacitor")
        grounded = (p for p in capacitors if any(map(self._is_ground, self._circuit.other_nets(p, net))))
        values = (self._circuit.value(part) for part in grounded)
        return any(value is not None and value.spread.nominal >= _BUFFER for value in values)

    def _share_a_part(self, one: str, other: str) -> bool:
        """Tell whether a load, a connector or a capacitor stands between two nets."""
        if not other:
            return False
        parts = (connection.part for connection in self._circuit.connections(one))
        kinds = ("connector", "capacitor", "resistor", "battery", "current source", "other")
        return any(
            self._circuit.kind(part) in kinds and other in self._circuit.other_nets(part, one)
            for part in parts
        )


def _places(switches: Sequence[Switch]) -> list[Switch]:
    """Return one switch of each place: those in parallel count as one."""
    return list({(switch.node, switch.rail): switch for switch in reversed(switches)}.values())[::-1]


def _inside(part: Part) -> list[_Diode]:
    """Return the diodes in one body: one, or two of three pins with a common anode or cathode as named."""
    if len(part.pins) == 2:
        return [_Diode(part.reference, *diode_nets(part))]
    names = [pin.name.casefold().rstrip("0123456789") for pin in part.pins]
    anodes = [pin.net for pin, name in zip(part.pins, names, strict=True) if name in ("a", "anode")]
    cathodes = [pin.net for pin, name in zip(part.pins, names, strict=True) if name in ("k", "c", "cathode")]
    if len(part.pins) != 3 or len(anodes) + len(cathodes) != 3:
        return []
    return [_Diode(part.reference, anode, cathode) for anode in anodes for cathode in cathodes]
