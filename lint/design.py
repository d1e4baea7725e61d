"""All that a rule sees: the circuit, what the engineer told, and the questions in the field's words.

A rule asks `design.voltage(net)` or `design.regulation(controller)`; it never walks the graph. Answers are
kept, so that ten rules may ask the same without solving ten times.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from difflib import get_close_matches
from typing import TypeVar, cast

from ..grammar.netlist import Netlist, Part, Place
from . import needs
from .brief import Brief, BriefError, ControllerBrief, Rail
from .circuit.amplifiers import Amplifier, Reach
from .circuit.compensation import Compensation, compensation
from .circuit.conditions import Conditions
from .circuit.controllers import Controller, find_controllers
from .circuit.converter import Converter, NoLoop
from .circuit.dead_time import DeadTime, dead_time
from .circuit.duty import needed_duty
from .circuit.envelope import WITH_FAULTS, Operated, envelope
from .circuit.graph import Circuit
from .circuit.growth import Growth
from .circuit.loops import Fault, FeedbackLoad, Regulation, Trip
from .circuit.output_drive import OutputDrive
from .circuit.potentials import Potential, known_potentials
from .circuit.power_stage import NotRecognised, PowerStage
from .circuit.reference_load import ReferenceLoad, reference_load
from .circuit.regimes import Regime
from .circuit.sensed_current import SensedCurrent, sensed_current
from .circuit.stress import Stresses, stresses
from .circuit.time_constants import time_constant
from .circuit.timing import Timing, timing
from .circuit.voltages import difference, has_path, voltage
from .derating import DEFAULT_POLICY
from .estimate import Estimate, Method, Unsolved
from .parts_list import PartsList
from .quantity import Spread

_Answer = TypeVar("_Answer")


class Design:
    """A netlist with its brief and parts list, and the answers to what a reviewer asks of them."""

    def __init__(
        self,
        netlist: Netlist,
        brief: Brief | None = None,
        parts_list: PartsList | None = None,
        method: Method = Method.EXTREME,
        *,
        close: bool = False,
    ) -> None:
        """Put the inputs together; with `close`, parts of untold tolerance are taken for close ones."""
        self.netlist = netlist
        self.brief = brief
        self.parts_list = parts_list
        conditions = Conditions(
            method,
            brief.ambient if brief is not None else None,
            brief.derating if brief is not None and brief.derating else DEFAULT_POLICY,
            close,
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
        return needs.controller(controller.reference, need)

    # What the circuit does

    def potential(self, net: str) -> Potential | None:
        """Return a net's potential where it is known without solving."""
        return self.known.get(net)

    def is_ground(self, net: str) -> bool:
        """Tell whether a net is ground."""
        return net in self.known and self.known[net].origin == "ground"

    def voltage(self, net: str) -> Estimate | Unsolved:
        """Return the direct voltage of a net over ground, loops standing still."""
        return self._keep("voltage", net, lambda: voltage(self._growth(), net))

    def switches(self, net: str) -> tuple[str, ...]:
        """Return the transistors and switches on a net's network, which `voltage` takes as off."""
        return tuple(self._growth().grow(net).switches)

    def voltage_with(self, conducting: str, net: str) -> Estimate | Unsolved:
        """Return the direct voltage of a net while one transistor or switch on its network is on."""
        growth = Growth(self.circuit, self.known, self.controllers, conducting=frozenset({conducting}))
        return self._keep(f"voltage with {conducting}", net, lambda: voltage(growth, net))

    def voltage_in(self, regime: Regime, controller: Controller, net: str) -> Estimate | Unsolved:
        """Return the direct voltage of a net over ground while a controller's converter is in a regime."""
        return self.converter(controller).voltage_in(regime, net)

    def output_capacitance(self, controller: Controller) -> float:
        """Return the nominal capacitance (F) straight from a controller's output to ground, 0 without any."""
        net = self.converter(controller).output
        grounds = [ground for ground in self.known if self.is_ground(ground)]
        parts = [part for ground in grounds for part in self.circuit.between(net, ground)] if net else []
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
        return self._keep("difference", f"{net} - {other}", lambda: difference(self._growth(), net, other))

    def feedback_load(self, controller: Controller) -> FeedbackLoad | Unsolved:
        """Return what hangs on a controller's feedback pin, its voltage anywhere in its control range."""
        return self.converter(controller).feedback_load

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
        return self.converter(controller).full_load

    def sensed_load(self, controller: Controller) -> SensedCurrent | None:
        """Return what flows in a controller's current-sense resistor at full load, None if untold."""
        load, duty = self.full_load(controller), self.needed_duty(controller)
        if load is None:
            return None
        return sensed_current(self.power_stage(controller), load, duty.maximum if duty is not None else None)

    def has_path(self, net: str) -> bool:
        """Tell whether a direct-current path joins a net to a known potential."""
        return has_path(self._growth().grow(net), net)

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

    def converter(self, controller: Controller) -> Converter:
        """Return a controller with the circuit round it, as a converter in operation."""
        rails: Mapping[str, Rail] = self.brief.rails if self.brief is not None else {}
        return self._keep(
            "converter",
            controller.reference,
            lambda: Converter(
                self.circuit, self.known, self.controllers, controller, self.told(controller), rails
            ),
        )

    def amplifiers(self, controller: Controller) -> tuple[Amplifier, ...]:
        """Return what each error amplifier of a controller is used for."""
        return self.converter(controller).amplifiers

    def reach(self, controller: Controller, net: str) -> Reach:
        """Return what resistors alone join to a net of a controller's amplifiers."""
        return self.converter(controller).reach(net)

    def regulating(self, controller: Controller) -> Amplifier | None:
        """Return the voltage amplifier that regulates: of two, the one that holds the output lower."""
        return self.converter(controller).regulating

    def regulation(self, controller: Controller) -> Regulation | Unsolved | NoLoop:
        """Return the output voltage that a controller's voltage loop regulates to."""
        return self.converter(controller).regulation

    def trip(self, controller: Controller, *, shorted: bool = False) -> Trip | Unsolved | NoLoop:
        """Return the current at which a controller's current loop takes over.

        shorted: with the output at ground instead of at its regulated voltage
        """
        converter = self.converter(controller)
        return converter.trip_shorted if shorted else converter.trip

    def output_after(self, controller: Controller, fault: Fault) -> float:
        """Return how far from ground (V) the output goes after a resistor has failed."""
        return self.converter(controller).output_after(fault)

    def source_resistance(self, controller: Controller, net: str) -> Estimate | Unsolved:
        """Return the resistance (ohm) that a net is driven from in operation, sources still."""
        return self.converter(controller).source_resistance(net)

    def power_stage(self, controller: Controller) -> PowerStage | NotRecognised:
        """Return the power stage that a controller's outputs drive, or why none was recognised."""
        return self.converter(controller).power_stage

    def output_drive(self, controller: Controller) -> OutputDrive:
        """Return the solver of what a controller's outputs drive."""
        return self.converter(controller).output_drive

    def stresses(self, regimes: Sequence[Regime] = WITH_FAULTS, *, pulsed: bool = True) -> Stresses:
        """Return what resistors and capacitors stand while the converters are anywhere in `regimes`.

        pulsed: with the resistors that stand something only while an output conducts
        """

        def read() -> Stresses:
            converters = [self.converter(one) for one in self.controllers]
            operated = [Operated(one.controller, one.in_service) for one in converters]
            known = envelope(self.known, operated, regimes)
            conducting = [network for one in converters for network in one.conducting()] if pulsed else []
            return stresses(self.circuit, known, self.controllers, conducting)

        return self._keep("stresses", ", ".join(regimes) + (" and pulses" if pulsed else ""), read)

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

    def _growth(self) -> Growth:
        return Growth(self.circuit, self.known, self.controllers)

    def _keep(self, question: str, about: str, answer: Callable[[], _Answer]) -> _Answer:
        key = (question, about)
        if key not in self._answers:
            self._answers[key] = answer()
        return cast(_Answer, self._answers[key])


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
