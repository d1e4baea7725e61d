"""All that a rule sees: the circuit, what the engineer told, and the questions in the field's words.

A rule asks `design.voltage(net)` or `design.regulation(controller)`; it never walks the graph. Answers are
kept, so that ten rules may ask the same without solving ten times.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from difflib import get_close_matches
from typing import TypeVar, cast

from ..grammar.netlist import Netlist, Part, Place
from .brief import Brief, BriefError, ControllerBrief, Rail
from .circuit.amplifiers import Amplifier, AmplifierReader, Reach, SenseResistor, amplifier_for
from .circuit.answers import estimate
from .circuit.compensation import Compensation, compensation
from .circuit.conditions import Conditions
from .circuit.controllers import Controller, find_controllers
from .circuit.dead_time import DeadTime, dead_time
from .circuit.drive import Drive
from .circuit.duty import needed_duty
from .circuit.envelope import WITH_FAULTS, Operated, envelope
from .circuit.graph import Circuit
from .circuit.growth import Growth
from .circuit.loops import Fault, Loops, Regulation, Trip
from .circuit.output_drive import OutputDrive
from .circuit.potentials import Potential, known_potentials
from .circuit.power_stage import NotRecognised, PowerStage
from .circuit.power_stage_reader import PowerStageReader
from .circuit.reference_load import ReferenceLoad, reference_load
from .circuit.regimes import REGULATING, Operation, Regime, potentials_in
from .circuit.stress import Stresses, stresses
from .circuit.time_constants import source_resistance, time_constant
from .circuit.timing import Timing, timing
from .circuit.worst_case import Variation
from .derating import DEFAULT_POLICY
from .estimate import Estimate, Method, Unsolved
from .parts_list import PartsList
from .quantity import Spread

_Answer = TypeVar("_Answer")


@dataclass(frozen=True, slots=True)
class NoLoop:
    """There is no such loop on the controller: `reason` is a sentence."""

    reason: str


class Design:
    """A netlist with its brief and parts list, and the answers to what a reviewer asks of them."""

    def __init__(
        self,
        netlist: Netlist,
        brief: Brief | None = None,
        parts_list: PartsList | None = None,
        method: Method = Method.EXTREME,
    ) -> None:
        self.netlist = netlist
        self.brief = brief
        self.parts_list = parts_list
        conditions = Conditions(
            method,
            brief.ambient if brief is not None else None,
            brief.derating if brief is not None and brief.derating else DEFAULT_POLICY,
        )
        self.circuit = Circuit(netlist, parts_list, conditions)
        told: Mapping[str, ControllerBrief] = brief.controllers if brief is not None else {}
        pins = {reference: entry.pins for reference, entry in told.items() if entry.pins}
        self.controllers = find_controllers(netlist, pins)
        self.known = known_potentials(self.circuit, brief, self.controllers)
        if brief is not None:
            _check_rails(netlist, brief)
        self._answers: dict[tuple[str, str], object] = {}

    # What the engineer told

    def told(self, controller: Controller) -> ControllerBrief | None:
        """Return what the brief says of a controller."""
        return self.brief.controllers.get(controller.reference) if self.brief is not None else None

    def rail(self, net: str) -> Rail | None:
        """Return what the brief says of a net."""
        return self.brief.rails.get(net) if self.brief is not None else None

    def declared(self, *circuits: str) -> tuple[str, ...]:
        """Return the nets that the brief puts into one of `circuits`, such as "mains"."""
        rails = self.brief.rails.values() if self.brief is not None else ()
        return tuple(rail.net for rail in rails if rail.circuit in circuits)

    def missing(self, controller: Controller, need: str) -> str:
        """Return the line of the brief that would tell `need` of a controller, empty where it is told.

        need: a key of the controller's table in the brief, such as "topology"
        """
        told = self.told(controller)
        if told is not None and getattr(told, need) is not None:
            return ""
        return f'brief: [controllers.{controller.reference}] {need} = "..."'

    # What the circuit does

    def potential(self, net: str) -> Potential | None:
        """Return a net's potential where it is known without solving."""
        return self.known.get(net)

    def is_ground(self, net: str) -> bool:
        """Tell whether a net is ground."""
        return net in self.known and self.known[net].origin == "ground"

    def voltage(self, net: str) -> Estimate | Unsolved:
        """Return the direct voltage of a net over ground, loops standing still."""
        return self._keep("voltage", net, lambda: self._voltage(net))

    def switches(self, net: str) -> tuple[str, ...]:
        """Return the transistors and switches on a net's network, which `voltage` takes as off."""
        return tuple(Growth(self.circuit, self.known, self.controllers).grow(net).switches)

    def voltage_with(self, conducting: str, net: str) -> Estimate | Unsolved:
        """Return the direct voltage of a net while one transistor or switch on its network is on."""
        growth = Growth(self.circuit, self.known, self.controllers, conducting=frozenset({conducting}))
        return self._keep(f"voltage with {conducting}", net, lambda: self._solved_voltage(growth, net))

    def voltage_in(self, regime: Regime, controller: Controller, net: str) -> Estimate | Unsolved:
        """Return the direct voltage of a net over ground while a controller's converter is in a regime."""
        return self._keep(f"voltage in {regime}", net, lambda: self._voltage_in(regime, controller, net))

    def output_capacitance(self, controller: Controller) -> float:
        """Return the nominal capacitance (F) straight from a controller's output to ground, 0 without any."""
        outputs = [amplifier.output for amplifier in self.amplifiers(controller) if amplifier.output]
        grounds = [net for net in self.known if self.is_ground(net)]
        parts = [
            part for net in outputs[:1] for ground in grounds for part in self.circuit.between(net, ground)
        ]
        return sum(self.nominal(part) or 0.0 for part in parts if self.circuit.kind(part) == "capacitor")

    def needed_duty(self, controller: Controller) -> Spread | None:
        """Return the duty (0 to 1) that the recognised power stage needs over its rails, None if untold."""
        stage = self.power_stage(controller)
        if isinstance(stage, NotRecognised):
            return None
        supply, output = self.known.get(stage.input), self.known.get(stage.output)
        if supply is None or output is None:
            return None
        return needed_duty(stage.topology, supply.spread, output.spread)

    def difference(self, net: str, other: str) -> Estimate | Unsolved:
        """Return by how much (V) the direct voltage of a net stands above that of another."""
        return self._keep("difference", f"{net} - {other}", lambda: self._difference(net, other))

    def feedback_current(self, controller: Controller) -> Estimate | Unsolved:
        """Return the current (A) out of a controller's feedback pin, its voltage anywhere in its range."""
        return self._keep(
            "feedback current", controller.reference, lambda: self._loops(controller).feedback_current()
        )

    def compensation(self, output: str, inverting: str) -> Compensation | None:
        """Return the feedback path from an amplifier's output net to its inverting input's net."""
        return compensation(self.circuit, self.known, output, inverting)

    def time_constant(self, capacitor: Part) -> Estimate | Unsolved:
        """Return the time constant (s) of a capacitor with the resistance that it sees."""
        return self._keep(
            "time constant",
            capacitor.reference,
            lambda: time_constant(self.circuit, self.known, self.controllers, capacitor),
        )

    def full_load(self, controller: Controller) -> float | None:
        """Return the greatest load (A) that the brief puts on a controller's output, None if untold."""
        told = self.told(controller)
        output = told.output if told is not None and told.output else ""
        outputs = [output] if output else [a.output for a in self.amplifiers(controller) if a.output]
        rails = [self.rail(net) for net in outputs]
        return max(
            (rail.load.maximum for rail in rails if rail is not None and rail.load is not None), default=None
        )

    def has_path(self, net: str) -> bool:
        """Tell whether a direct-current path joins a net to a known potential."""
        growth = Growth(self.circuit, self.known, self.controllers).grow(net)
        return bool(growth.blocked or growth.valueless) or growth.network().has_path(net)

    def reference_load(self, controller: Controller) -> ReferenceLoad | Unsolved:
        """Return the current out of a controller's reference pin, in all and by branch."""
        return self._keep(
            "reference load",
            controller.reference,
            lambda: reference_load(self.circuit, self.known, self.controllers, controller),
        )

    def timing(self, controller: Controller) -> Timing | Unsolved:
        """Return a controller's timing resistance, capacitance and oscillator frequency."""
        return self._keep(
            "timing", controller.reference, lambda: timing(self.circuit, self.known, controller)
        )

    def dead_time(self, controller: Controller, voltage: Estimate) -> DeadTime:
        """Return the dead time that a voltage on the dead-time pin makes at the controller's frequency."""
        found = self.timing(controller)
        frequency = None if isinstance(found, Unsolved) else found.frequency
        return dead_time(controller.profile, voltage, frequency)

    def output_mode(self, controller: Controller) -> str | None:
        """Return "single-ended" or "push-pull" as the output-control pin sets it, None where it does not."""
        net = controller.net("output control")
        if not net:
            return None
        voltage = self.voltage(net)
        if isinstance(voltage, Unsolved):
            return None
        reference = controller.profile.figure("reference.voltage").spread()
        if voltage.spread.maximum < _LOW:
            return "single-ended"
        return "push-pull" if voltage.spread.minimum > reference.minimum - _HIGH_DROP else None

    def amplifiers(self, controller: Controller) -> tuple[Amplifier, ...]:
        """Return what each error amplifier of a controller is used for."""
        return self._keep("amplifiers", controller.reference, self._amplifier_reader(controller).amplifiers)

    def reach(self, controller: Controller, net: str) -> Reach:
        """Return what resistors alone join to a net of a controller's amplifiers."""
        return self._keep("reach", net, lambda: self._amplifier_reader(controller).reach(net))

    def regulating(self, controller: Controller) -> Amplifier | None:
        """Return the voltage amplifier that regulates: of two, the one that holds the output lower."""
        return self._keep("regulating", controller.reference, lambda: self._regulating(controller))

    def regulation(self, controller: Controller) -> Regulation | Unsolved | NoLoop:
        """Return the output voltage that a controller's voltage loop regulates to."""
        return self._keep("regulation", controller.reference, lambda: self._regulation(controller))

    def power_stage(self, controller: Controller) -> PowerStage | NotRecognised:
        """Return the power stage that a controller's outputs drive, or why none was recognised."""

        def read() -> PowerStage | NotRecognised:
            amplifiers = self.amplifiers(controller)
            return PowerStageReader(self.circuit, self.known, controller, amplifiers).read()

        return self._keep("power stage", controller.reference, read)

    def output_after(self, controller: Controller, fault: Fault) -> float:
        """Return the output (V) after a resistor has failed: infinite where every loop loses it upwards."""
        loops = self._loops(controller)
        voltage = [a for a in self.amplifiers(controller) if a.use == "voltage" and a.output]
        return min(loops.output_after(amplifier, fault) for amplifier in voltage)

    def source_resistance(self, controller: Controller, net: str) -> Estimate | Unsolved:
        """Return the resistance (ohm) that a net is driven from in operation, sources still."""
        operation = self._operation(controller)
        known = potentials_in(Regime.NO_LOAD, self.known, controller, operation)
        if operation.output and operation.output not in known:
            known[operation.output] = Potential(operation.output, Spread.exact(0.0, "V"), "regime")
        return self._keep(
            "source resistance",
            net,
            lambda: source_resistance(self.circuit, known, self.controllers, net, self._passed(controller)),
        )

    def output_drive(self, controller: Controller) -> OutputDrive:
        """Return the solver of what a controller's outputs drive."""

        def make() -> OutputDrive:
            drive = Drive(self.circuit, self.known, controller)
            return OutputDrive(self.circuit, self.known, self.controllers, controller, drive)

        return self._keep("output drive", controller.reference, make)

    def stresses(self, regimes: Sequence[Regime] = WITH_FAULTS, *, pulsed: bool = True) -> Stresses:
        """Return what resistors and capacitors stand while the converters are anywhere in `regimes`.

        pulsed: with the resistors that stand something only while an output conducts
        """

        def read() -> Stresses:
            converters = [Operated(one, self._in_service(one)) for one in self.controllers]
            known = envelope(self.known, converters, regimes)
            conducting = self._conducting() if pulsed else ()
            return stresses(self.circuit, known, self.controllers, conducting)

        return self._keep("stresses", ", ".join(regimes) + (" and pulses" if pulsed else ""), read)

    def trip(self, controller: Controller, *, shorted: bool = False) -> Trip | Unsolved | NoLoop:
        """Return the current at which a controller's current loop takes over.

        shorted: with the output at ground instead of at its regulated voltage
        """
        key = f"trip{' shorted' if shorted else ''}"
        return self._keep(key, controller.reference, lambda: self._trip(controller, shorted=shorted))

    def divider(self, amplifier: Amplifier) -> tuple[Part, Part] | None:
        """Return top and bottom resistor of a plain divider from the output, None for any other network."""
        net = amplifier.plus if amplifier.sensed_by == "in+" else amplifier.minus
        resistors = [c.part for c in self.circuit.connections(net) if self.circuit.kind(c.part) == "resistor"]
        ends = {other: part for part in resistors for other in self.circuit.other_nets(part, net)}
        grounds = [end for end in ends if self.is_ground(end)]
        if len(ends) != 2 or amplifier.output not in ends or len(grounds) != 1:
            return None
        return ends[amplifier.output], ends[grounds[0]]

    def nominal(self, part: Part) -> float | None:
        """Return the nominal value of a part in SI units, None where it has none."""
        value = self.circuit.value(part)
        return value.spread.nominal if value is not None else None

    # Where things are

    def place(self, reference: str) -> Place:
        """Return where a part stands in the netlist."""
        return self.netlist.parts[reference].place

    def part(self, reference: str) -> Part:
        """Return a part by its reference designator."""
        return self.netlist.parts[reference]

    def _keep(self, question: str, about: str, answer: Callable[[], _Answer]) -> _Answer:
        key = (question, about)
        if key not in self._answers:
            self._answers[key] = answer()
        return cast(_Answer, self._answers[key])

    def _difference(self, net: str, other: str) -> Estimate | Unsolved:
        growth = Growth(self.circuit, self.known, self.controllers).grow(net, other)
        adrift = tuple(one for one in (net, other) if not growth.network().has_path(one))
        if adrift and not (growth.blocked or growth.valueless):
            return Unsolved(f"no direct-current path to net {', '.join(adrift)}", nets=adrift)
        found = estimate(growth, {"difference": (lambda s: s.voltage(net, other), "V")})
        return found if isinstance(found, Unsolved) else found["difference"]

    def _amplifier_reader(self, controller: Controller) -> AmplifierReader:
        told = self.told(controller)
        output = told.output if told is not None and told.output else ""
        return AmplifierReader(self.circuit, self.known, controller, output)

    def _voltage(self, net: str) -> Estimate | Unsolved:
        return self._solved_voltage(Growth(self.circuit, self.known, self.controllers), net)

    @staticmethod
    def _solved_voltage(growth: Growth, net: str) -> Estimate | Unsolved:
        potential = growth.known.get(net)
        if potential is not None:
            assumptions = (potential.assumption,) if potential.assumption else ()
            return Estimate(potential.spread, potential.spread, nets=(net,), assumptions=assumptions)
        growth.grow(net)
        if not (growth.blocked or growth.valueless) and not growth.network().has_path(net):
            return Unsolved(f"net {net} has no direct-current path", nets=(net,))
        found = estimate(growth, {"voltage": (lambda s: s.voltage(net), "V")})
        return found if isinstance(found, Unsolved) else found["voltage"]

    def _voltage_in(self, regime: Regime, controller: Controller, net: str) -> Estimate | Unsolved:
        held = self._held_input(regime, controller, net)
        if held is not None:
            return held
        known = potentials_in(regime, self.known, controller, self._operation(controller))
        empty = regime is Regime.START_UP
        growth = Growth(self.circuit, known, self.controllers, empty_capacitors=empty)
        return self._solved_voltage(growth, net)

    def _held_input(self, regime: Regime, controller: Controller, net: str) -> Estimate | None:
        """Return the potential of an input that the regulating amplifier holds equal to the other."""
        amplifier = self.regulating(controller)
        if regime not in REGULATING or amplifier is None or net not in (amplifier.plus, amplifier.minus):
            return None
        found = self.regulation(controller)
        return found.inputs if isinstance(found, Regulation) else None

    def _operation(self, controller: Controller) -> Operation:
        return self._keep("operation", controller.reference, lambda: self._operated(controller))

    def _conducting(self) -> Iterator[Growth]:
        """Yield the networks round the controllers' outputs while these conduct, of two joined ones once."""
        for controller in self.controllers:
            drive = self.output_drive(controller)
            live = {(o.collector, o.emitter): o for o in reversed(drive.drive.outputs) if o.live}
            networks = (drive.conducting(output) for output in live.values())
            yield from (network for network in networks if isinstance(network, Growth))

    def _in_service(self, controller: Controller) -> Operation:
        """Return the operation with a trimmed output set to what the brief wants of it."""
        operation, regulation = self._operation(controller), self.regulation(controller)
        told = self.rail(operation.output)
        if told is not None and isinstance(regulation, Regulation) and regulation.trimmers:
            return replace(operation, regulated=told.band)
        return operation

    def _operated(self, controller: Controller) -> Operation:
        """Return what is known of the converter in operation: output, threshold, full load."""
        voltage = self.regulating(controller)
        current = amplifier_for(self.amplifiers(controller), "current")
        regulation, trip = self.regulation(controller), self.trip(controller)
        shorted = self.trip(controller, shorted=True)
        sense = current.sense if current is not None else None
        load = self.full_load(controller)
        return Operation(
            output=voltage.output if voltage is not None else "",
            regulated=regulation.output.spread if isinstance(regulation, Regulation) else None,
            sense=sense,
            threshold=trip.threshold.spread if isinstance(trip, Trip) else None,
            threshold_shorted=shorted.threshold.spread if isinstance(shorted, Trip) else None,
            full_load=self._drop(sense, load) if sense is not None and load is not None else None,
            reversed=isinstance(trip, Trip) and trip.reversed,
        )

    def _drop(self, sense: SenseResistor, load: float) -> Spread | None:
        value = self.circuit.value(sense.part)
        if value is None:
            return None
        return Spread(0.0, load * value.spread.nominal / 2, load * value.spread.maximum, "V")

    def _loops(self, controller: Controller) -> Loops:
        """Return the loops of a controller, its amplifier output inside the control range."""
        known = dict(self.known)
        net = controller.net("feedback")
        if net and net not in known:
            reach = controller.profile.figure("feedback.control-range").spread()
            label = f"{controller.reference} amplifier output"
            known[net] = Potential(net, reach, "amplifier", Variation.RANGE, label=label)
        return Loops(self.circuit, known, controller, self._passed(controller))

    def _passed(self, controller: Controller) -> frozenset[str]:
        """Return the nets between a controller's amplifier inputs and what these sense."""
        inputs = [net for a in self.amplifiers(controller) for net in (a.plus, a.minus) if net]
        return frozenset(net for start in inputs for net in self.reach(controller, start).nets)

    def _regulating(self, controller: Controller) -> Amplifier | None:
        voltage = [a for a in self.amplifiers(controller) if a.use == "voltage"]
        found = (
            {a: self._loops(controller).regulation(a) for a in voltage if a.output}
            if len(voltage) > 1
            else {}
        )
        solved = {a: r.output.spread.nominal for a, r in found.items() if isinstance(r, Regulation)}
        return min(solved, key=lambda a: solved[a]) if solved else next(iter(voltage), None)

    def _regulation(self, controller: Controller) -> Regulation | Unsolved | NoLoop:
        amplifier = self.regulating(controller)
        if amplifier is None:
            return NoLoop(f"no amplifier of {controller.reference} senses an output through resistors")
        if not amplifier.output:
            return Unsolved(
                f"amplifier {amplifier.number} reaches several nets: {', '.join(amplifier.outputs)}",
                nets=amplifier.outputs,
                needs=(self.missing(controller, "output"),),
            )
        return self._loops(controller).regulation(amplifier)

    def _trip(self, controller: Controller, *, shorted: bool) -> Trip | Unsolved | NoLoop:
        amplifier = amplifier_for(self.amplifiers(controller), "current")
        if amplifier is None:
            return NoLoop(f"no amplifier of {controller.reference} looks at a current-sense resistor")
        return self._loops(controller).trip(amplifier, self._output_potential(controller, shorted=shorted))

    def _output_potential(self, controller: Controller, *, shorted: bool) -> Potential | None:
        amplifier = self.regulating(controller)
        if amplifier is None or not amplifier.output:
            return None
        net = amplifier.output
        if shorted:
            return Potential(net, Spread.exact(0.0, "V"), "brief", assumption=f"{net} shorted to ground")
        if net in self.known:
            return None
        found = self.regulation(controller)
        if isinstance(found, Regulation):
            return Potential(net, found.output.spread, "brief", assumption=f"{net} in regulation")
        return None


def _check_rails(netlist: Netlist, brief: Brief) -> None:
    """Refuse a brief whose rails are no nets of the netlist: such a limit would hold nothing."""
    for name, rail in brief.rails.items():
        if name not in netlist.nets:
            near = get_close_matches(name, netlist.nets, n=1, cutoff=0.6)
            raise BriefError(
                f"the netlist has no net {name}",
                rail.place,
                expected="a net of the netlist",
                remedy=f"did you mean {near[0]}?"
                if near
                else "take the rail out of the brief, or name its net",
            )


# Below the first the output-control pin reads as low, and as high within the second of the reference:
# function table of the 494 class, "at ground" and "at the reference" (from memory).
_LOW = 0.4
_HIGH_DROP = 0.5
