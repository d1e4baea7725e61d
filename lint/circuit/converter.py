"""One controller with the circuit round it: a converter in operation, its loops, regimes and power stage.

Everything is worked out when it is first asked for, and kept.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property

from .. import needs
from ..brief import ControllerBrief, Rail
from ..estimate import Estimate, Unsolved
from ..quantity import Spread
from .amplifiers import Amplifier, AmplifierReader, Reach, SenseResistor, amplifier_for
from .controllers import Controller
from .drive import Drive
from .graph import Circuit
from .growth import Growth
from .loops import Fault, FeedbackLoad, Loops, Regulation, Trip
from .output_drive import OutputDrive
from .potentials import Potential
from .power_stage import NotRecognised, PowerStage
from .power_stage_reader import PowerStageReader
from .regimes import REGULATING, Operation, Regime, potentials_in
from .time_constants import source_resistance
from .voltages import voltage
from .worst_case import Variation


@dataclass(frozen=True, slots=True)
class NoLoop:
    """There is no such loop on the controller: `reason` is a sentence."""

    reason: str


class Converter:
    """A controller's converter.

    known: nets of known potential; controllers: all of the board, which load nets as well
    told:  what the brief says of the controller; rails: what it says of nets
    """

    def __init__(
        self,
        circuit: Circuit,
        known: Mapping[str, Potential],
        controllers: Sequence[Controller],
        controller: Controller,
        told: ControllerBrief | None,
        rails: Mapping[str, Rail],
    ) -> None:
        self.circuit = circuit
        self.known = known
        self.controllers = controllers
        self.controller = controller
        self._declared_output = told.output if told is not None and told.output else ""
        self._rails = rails
        self._voltages: dict[tuple[Regime, str], Estimate | Unsolved] = {}

    # What the amplifiers are for

    @cached_property
    def _reader(self) -> AmplifierReader:
        return AmplifierReader(self.circuit, self.known, self.controller, self._declared_output)

    @cached_property
    def amplifiers(self) -> tuple[Amplifier, ...]:
        """Return what each error amplifier is used for."""
        return self._reader.amplifiers()

    def reach(self, net: str) -> Reach:
        """Return what resistors alone join to a net of the amplifiers."""
        return self._reader.reach(net)

    @cached_property
    def voltage_amplifiers(self) -> tuple[Amplifier, ...]:
        """Return the amplifiers that sense an output."""
        return tuple(amplifier for amplifier in self.amplifiers if amplifier.use == "voltage")

    @cached_property
    def regulating(self) -> Amplifier | None:
        """Return the voltage amplifier that regulates: of two, the one that holds the output lower."""
        if len(self.voltage_amplifiers) < 2:
            return next(iter(self.voltage_amplifiers), None)
        found = {a: self._loops.regulation(a) for a in self.voltage_amplifiers if a.output}
        solved = {a: r.output.spread.nominal for a, r in found.items() if isinstance(r, Regulation)}
        return min(solved, key=lambda a: solved[a]) if solved else self.voltage_amplifiers[0]

    @property
    def output(self) -> str:
        """Return the net of the output that is regulated, empty where none is seen."""
        return self.regulating.output if self.regulating is not None else ""

    # Closed loops

    @cached_property
    def _loops(self) -> Loops:
        """Return the solver of the loops, the amplifiers' common output inside its control range."""
        known = dict(self.known)
        net = self.controller.net("feedback")
        if net and net not in known:
            reach = self.controller.profile.figure("feedback.control-range").spread()
            label = f"{self.controller.reference} amplifier output"
            known[net] = Potential(net, reach, "amplifier", Variation.RANGE, label=label)
        return Loops(self.circuit, known, self.controller, self._passed)

    @cached_property
    def _passed(self) -> frozenset[str]:
        """Return the nets between the amplifiers' inputs and what these sense."""
        inputs = [net for a in self.amplifiers for net in (a.plus, a.minus) if net]
        return frozenset(net for start in inputs for net in self.reach(start).nets)

    @cached_property
    def regulation(self) -> Regulation | Unsolved | NoLoop:
        """Return the output voltage that the voltage loop regulates to."""
        amplifier, reference = self.regulating, self.controller.reference
        if amplifier is None:
            return NoLoop(f"no amplifier of {reference} senses an output through resistors")
        if not amplifier.output:
            return Unsolved(
                f"amplifier {amplifier.number} reaches several nets: {', '.join(amplifier.outputs)}",
                nets=amplifier.outputs,
                needs=(needs.controller(reference, "output"),),
            )
        return self._loops.regulation(amplifier)

    @cached_property
    def trip(self) -> Trip | Unsolved | NoLoop:
        """Return the current at which the current loop takes over, the output in regulation."""
        regulated = None
        if self.output not in self.known and isinstance(self.regulation, Regulation):
            spread = self.regulation.output.spread
            regulated = Potential(self.output, spread, "brief", assumption=f"{self.output} in regulation")
        return self._trip(regulated)

    @cached_property
    def trip_shorted(self) -> Trip | Unsolved | NoLoop:
        """Return the current at which the current loop takes over, the output at ground."""
        zero, net = Spread.exact(0.0, "V"), self.output
        shorted = Potential(net, zero, "brief", assumption=f"{net} shorted to ground") if net else None
        return self._trip(shorted)

    def _trip(self, output: Potential | None) -> Trip | Unsolved | NoLoop:
        amplifier = amplifier_for(self.amplifiers, "current")
        if amplifier is None:
            return NoLoop(f"no amplifier of {self.controller.reference} looks at a current-sense resistor")
        return self._loops.trip(amplifier, output)

    @cached_property
    def feedback_load(self) -> FeedbackLoad | Unsolved:
        """Return what hangs on the feedback pin, its voltage anywhere in its control range."""
        return self._loops.feedback_load()

    def output_after(self, fault: Fault) -> float:
        """Return how far from ground (V) the output goes after a resistor has failed.

        Infinite where every loop loses it that way.
        """
        regulation = self.regulation
        below = isinstance(regulation, Regulation) and regulation.output.spread.nominal < 0
        sensing = [amplifier for amplifier in self.voltage_amplifiers if amplifier.output]
        return min(self._loops.output_after(a, fault, below_ground=below) for a in sensing)

    # In operation

    @property
    def full_load(self) -> float | None:
        """Return the greatest load (A) that the brief puts on the output, None if untold."""
        outputs = [self._declared_output] if self._declared_output else [a.output for a in self.amplifiers]
        rails = [self._rails[net] for net in outputs if net in self._rails]
        return max((rail.load.maximum for rail in rails if rail.load is not None), default=None)

    @cached_property
    def operation(self) -> Operation:
        """Return what is known of the converter in operation: output, threshold, full load."""
        current = amplifier_for(self.amplifiers, "current")
        sense = current.sense if current is not None else None
        regulation, trip, shorted = self.regulation, self.trip, self.trip_shorted
        return Operation(
            output=self.output,
            regulated=regulation.output.spread if isinstance(regulation, Regulation) else None,
            sense=sense,
            threshold=trip.threshold.spread if isinstance(trip, Trip) else None,
            threshold_shorted=shorted.threshold.spread if isinstance(shorted, Trip) else None,
            full_load=self._drop(sense) if sense is not None else None,
            reversed=isinstance(trip, Trip) and trip.reversed,
        )

    def _drop(self, sense: SenseResistor) -> Spread | None:
        """Return the voltage across the sense resistor from no load to full load, None if untold."""
        value, load = self.circuit.value(sense.part), self.full_load
        if value is None or load is None:
            return None
        return Spread(0.0, load * value.spread.nominal / 2, load * value.spread.maximum, "V")

    @property
    def in_service(self) -> Operation:
        """Return the operation with a trimmed output set to what the brief wants of it."""
        told = self._rails.get(self.operation.output)
        if told is not None and isinstance(self.regulation, Regulation) and self.regulation.trimmers:
            return replace(self.operation, regulated=told.band)
        return self.operation

    def voltage_in(self, regime: Regime, net: str) -> Estimate | Unsolved:
        """Return the direct voltage of a net over ground in a regime."""
        key = (regime, net)
        if key not in self._voltages:
            self._voltages[key] = self._held_input(regime, net) or self._voltage_in(regime, net)
        return self._voltages[key]

    def _voltage_in(self, regime: Regime, net: str) -> Estimate | Unsolved:
        known = potentials_in(regime, self.known, self.controller, self.operation)
        empty = regime is Regime.START_UP
        return voltage(Growth(self.circuit, known, self.controllers, empty_capacitors=empty), net)

    def _held_input(self, regime: Regime, net: str) -> Estimate | None:
        """Return the potential of an input that the regulating amplifier holds equal to the other."""
        amplifier = self.regulating
        if regime not in REGULATING or amplifier is None or net not in (amplifier.plus, amplifier.minus):
            return None
        return self.regulation.inputs if isinstance(self.regulation, Regulation) else None

    def source_resistance(self, net: str) -> Estimate | Unsolved:
        """Return the resistance (ohm) that a net is driven from in operation, sources still."""
        known = potentials_in(Regime.NO_LOAD, self.known, self.controller, self.operation)
        if self.output and self.output not in known:
            known[self.output] = Potential(self.output, Spread.exact(0.0, "V"), "regime")
        return source_resistance(self.circuit, known, self.controllers, net, self._passed)

    # What the outputs drive

    @cached_property
    def power_stage(self) -> PowerStage | NotRecognised:
        """Return the power stage that the outputs drive, or why none was recognised."""
        told = (self.controller, self.amplifiers, self._declared_output)
        return PowerStageReader(self.circuit, self.known, *told).read()

    @cached_property
    def output_drive(self) -> OutputDrive:
        """Return the solver of what the outputs drive."""
        drive = Drive(self.circuit, self.known, self.controller)
        return OutputDrive(self.circuit, self.known, self.controllers, self.controller, drive)

    def conducting(self) -> Iterator[Growth]:
        """Yield the networks round the outputs while these conduct, of two joined ones once."""
        drive = self.output_drive
        live = {(o.collector, o.emitter): o for o in reversed(drive.drive.outputs) if o.live}
        networks = (drive.conducting(output) for output in live.values())
        yield from (network for network in networks if isinstance(network, Growth))
