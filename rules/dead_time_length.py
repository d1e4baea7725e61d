"""Dead time: how long it is, and what duty it leaves."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from ..lint.circuit.controllers import Controller
from ..lint.circuit.power_stage import NotRecognised
from ..lint.design import Design
from ..lint.estimate import Estimate, Unsolved
from ..lint.judge import judge, reports
from ..lint.quantity import Spread, engineering, percent
from ..lint.rule import rule
from ..lint.verdict import Limit, Outcome, Verdict

_PIN = ("dead time",)
_BOTH_OUTPUTS = ("push-pull", "half-bridge", "full-bridge")

# Below this the pin is as good as grounded, and only the controller's own dead time is left.
_AT_GROUND = 0.2


@rule("dead-time.minimum", level="error", topic="dead time")
def least_dead_time(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the dead time long enough for the switches, and no longer than wanted?

    What:
        Turns the pin's voltage into dead time: a share of the oscillator's period, and seconds at the
        highest and lowest oscillator frequency. The published models disagree; the band covers them all.
        Held against `dead_time` of the brief. Without one, two outputs that alternate with the pin at
        ground are for a person to judge.
    Why:
        Where two switches share a winding or stand in one bridge leg, the one must be off before the
        other turns on; only the dead time sees to it.
    Formula:
        dead time [s] = share(V) / oscillator frequency [Hz]; share = 0.03 + 0.97 V / 3.3 V (text model),
        (V + 0.11 V) / 3.0 V (ramp model), never below the controller's own 3 % to 5 %
    Source:
        SLVS074 p.1 and p.11 (3 % and 5 % at 0 V, 100 % at 3.3 V)
    Remedy:
        Raise the pin's voltage with a divider from the reference.
    Fails:
        R1 DTC 0 1k
        R2 RT 0 22k
        C1 CT 0 1n
        [controllers.U1] dead_time = "2 us .. 6 us"
    Passes:
        R1 DTC 0 1k
        R2 RT 0 22k
        C1 CT 0 1n
        R3 REF DTC 10k
        [controllers.U1] dead_time = "2 us .. 6 us"
    """
    net = controller.net("dead time")
    voltage = design.voltage(net) if net and design.has_path(net) else None
    if voltage is None or isinstance(voltage, Unsolved):
        return  # dead-time.driven or dead-time.range speaks of it
    found = design.dead_time(controller, voltage)
    told = design.told(controller)
    source = controller.profile.figure("dead-time.least").source
    says = f"dead time {_percentages(found.share.spread)} of the period"
    if found.seconds is None:
        yield reports(found.share, says, pins=_PIN, source=source)
        return
    says += f", {found.seconds.spread}"
    if told is not None and told.dead_time is not None:
        wanted = told.dead_time
        limit = Limit(wanted.minimum, wanted.maximum if wanted.maximum > wanted.minimum else None, "s")
        verdict = judge(
            found.seconds,
            limit,
            says,
            source="brief",
            pins=_PIN,
            remedy=_wanted_voltage(controller, design, wanted),
        )
        yield _as_set(verdict, design, voltage, wanted.nominal)
    elif _alternates(controller, design) and voltage.spread.nominal < _AT_GROUND:
        yield replace(
            reports(found.seconds, f"{says}: {_WARNING}", pins=_PIN, source=source),
            outcome=Outcome.REVIEW,
            remedy="compare it with the turn-off time of the switch and say `dead_time` in the brief",
        )
    else:
        yield reports(found.seconds, says, pins=_PIN, source=source)


def _as_set(verdict: Verdict, design: Design, voltage: Estimate, wanted: float) -> Verdict:
    """Let pass what a trimmer on the pin can be set to, with the setting as an assumption."""
    trimmers = [name for name in voltage.parts if design.circuit.kind(design.part(name)) == "trimmer"]
    measured = verdict.measured
    assert measured is not None
    if not trimmers or not measured.minimum <= wanted <= measured.maximum:
        return verdict
    value = engineering(wanted, measured.unit) if measured.unit else percent(wanted)
    assumptions = (*verdict.assumptions, f"{', '.join(trimmers)} set on the bench for {value}")
    return replace(verdict, outcome=Outcome.PASS, level=None, remedy="", assumptions=assumptions)


_WARNING = "only the controller's own dead time stands between the two switches"


def _percentages(share: Spread) -> str:
    if share.minimum == share.maximum:
        return percent(share.nominal)
    return f"{percent(share.nominal)} ({percent(share.minimum)} .. {percent(share.maximum)})"


def _alternates(controller: Controller, design: Design) -> bool:
    told = design.told(controller)
    topology = told.topology if told is not None else None
    return topology in _BOTH_OUTPUTS or design.output_mode(controller) == "push-pull"


def _wanted_voltage(controller: Controller, design: Design, wanted: Spread) -> str:
    """Return the pin voltage that makes the middle of the wanted dead time, by the mean of the models."""
    timing = design.timing(controller)
    if isinstance(timing, Unsolved):
        return ""
    share = wanted.nominal * timing.frequency.spread.nominal
    models = controller.profile.dead_time_models
    volts = sum((share - model.at_zero) / model.per_volt for model in models) / len(models)
    name = controller.pins["dead time"].name
    if not 0 < share < 1 or volts <= 0:
        return f"{engineering(wanted.nominal, 's')} cannot be set at this frequency: change the timing parts"
    return f"about {engineering(volts, 'V')} on {name} makes {engineering(wanted.nominal, 's')}"


@rule("dead-time.duty-headroom", level="error", topic="dead time")
def duty_headroom(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the dead time leave the duty that the output needs at the lowest input?

    What:
        Subtracts the greatest dead time from the whole period and compares the rest with the duty that
        the recognised power stage needs over its rails, ideal parts taken. Stages with a transformer need
        its turns ratio, which a netlist does not tell; there `maximum_duty` of the brief is compared. A
        buck fed below its output, or a boost fed above it, fails whatever the dead time.
    Why:
        At the lowest input the converter needs its widest pulse. What the dead time takes away is missing
        from the output voltage.
    Formula:
        1 - dead time share >= duty; buck Vo / Vi, boost 1 - Vi / Vo, inverting |Vo| / (Vi + |Vo|)
    Source:
        volt-second balance of the inductor; SLVS074 p.11 (dead time over the pin's voltage)
    Remedy:
        Lower the voltage on the dead-time pin.
    Fails:
        R1 REF DTC 10k
        R2 DTC 0 3.3k
        R3 OUTCTRL 0 0
        [controllers.U1] maximum_duty = "75 %"
    Passes:
        R1 REF DTC 10k
        R2 DTC 0 1k
        R3 OUTCTRL 0 0
        [controllers.U1] maximum_duty = "75 %"
    """
    net = controller.net("dead time")
    voltage = design.voltage(net) if net and design.has_path(net) else None
    if voltage is None or isinstance(voltage, Unsolved):
        return
    wanted, source = _wanted_duty(controller, design)
    if wanted is None:
        return
    impossible = _out_of_reach(controller, design)
    if impossible is not None:
        yield impossible
        return
    left = _duty_left(design.dead_time(controller, voltage).share, design.output_mode(controller))
    verdict = judge(
        left,
        Limit(wanted, None, ""),
        f"the dead time leaves {_percentages(left.spread)} of duty, {percent(wanted)} is needed",
        source=source,
        pins=_PIN,
        remedy=f"lower the voltage on {controller.pins['dead time'].name}",
    )
    yield _as_set(verdict, design, voltage, wanted)


def _out_of_reach(controller: Controller, design: Design) -> Verdict | None:
    """Return the failed verdict where no duty makes the output: a buck above its input, a boost below it."""
    stage = design.power_stage(controller)
    if isinstance(stage, NotRecognised):
        return None
    supply, output = design.potential(stage.input), design.potential(stage.output)
    if supply is None or output is None:
        return None
    wanted = output.spread.nominal
    if stage.topology == "buck" and supply.spread.minimum <= wanted:
        says = f"a buck cannot raise {stage.input}, {supply.spread.minimum:g} V at the lowest"
    elif stage.topology == "boost" and supply.spread.maximum >= wanted:
        says = f"a boost cannot lower {stage.input}, {supply.spread.maximum:g} V at the highest"
    else:
        return None
    return Verdict(
        outcome=Outcome.FAIL,
        message=f"{says}, to {stage.output} of {wanted:g} V",
        nets=(stage.input, stage.output),
        pins=_PIN,
        source="volt-second balance of the recognised power stage",
        remedy="change the rails of the brief, or take a topology that raises and lowers",
    )


def _wanted_duty(controller: Controller, design: Design) -> tuple[float | None, str]:
    """Return the greatest duty that the brief or the power stage asks for, and where that is from."""
    needed = design.needed_duty(controller)
    if needed is not None:
        return needed.maximum, "volt-second balance of the recognised power stage"
    told = design.told(controller)
    if told is not None and told.maximum_duty is not None:
        return told.maximum_duty.maximum, "brief: maximum_duty"
    return None, ""


def _duty_left(share: Estimate, mode: str | None) -> Estimate:
    """Return the duty each output has left: half of it where two outputs alternate."""
    part = 0.5 if mode == "push-pull" else 1.0

    def left(dead: Spread) -> Spread:
        return Spread(part * (1 - dead.maximum), part * (1 - dead.nominal), part * (1 - dead.minimum), "")

    return replace(share, spread=left(share.spread), statistical=left(share.statistical))
