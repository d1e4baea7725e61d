"""Reviews made by hand, in the words of the orchard: what the reporters are tested on."""

from __future__ import annotations

from dataclasses import replace

from pwmlint.grammar.netlist import Place
from pwmlint.lint.quantity import Spread
from pwmlint.lint.verdict import (
    ControllerReview,
    Level,
    Limit,
    Outcome,
    PinRow,
    Review,
    SwitchedOff,
    Verdict,
)

NETLIST = "orchard/frost-fan-b.cir"

PASS, FAIL, REVIEW, OPEN = Outcome.PASS, Outcome.FAIL, Outcome.REVIEW, Outcome.OPEN


def faulty_fan() -> Review:
    """A frost-fan drive with every kind of finding."""
    return Review(
        netlist=NETLIST,
        format="SPICE list",
        name="orchard frost-fan drive, revision B",
        brief="orchard/frost-fan-b.brief.toml",
        parts_list=None,
        controllers=(
            ControllerReview(
                part="U1",
                family="494",
                model="PWM494",
                place=_at(14),
                pins=_pins(),
                assumptions=("U1: its 16 nodes are taken in the order of the package's pins.",),
            ),
        ),
        verdicts=(*_connections(), *_reference(), *_dead_time(), *_feedback(), *_current_limit()),
        cautions=(
            "A frost-fan drive can start without warning and its capacitors hold charge: isolate and "
            "discharge before you touch it, follow the local codes, leave mains work to licensed practice.",
        ),
    )


def sound_scale() -> Review:
    """A bee-hive scale on which every verdict passes, with neither brief nor controller table."""
    return Review(
        netlist="orchard/hive-scale.edf",
        format="EDIF 2 0 0",
        name="",
        brief=None,
        parts_list="orchard/hive-scale.parts.csv",
        controllers=(),
        verdicts=_connections()[:1],
    )


def hostile_design() -> Review:
    """A design whose every text tries to steer the terminal, the markup or the reading direction."""
    bad = (
        "\x1b[31mred\x1b[0m [bold red]x[/] \u202egnp\u202c \r\n\x07 :skull: \udc80 ｆｕｌｌ梨 " + "long" * 50
    )
    place = Place(bad, 1, 1)
    return Review(
        netlist=bad,
        format=bad,
        name=bad,
        brief=bad,
        parts_list=bad,
        controllers=(
            ControllerReview(bad, bad, bad, place, (PinRow(bad, bad, bad, bad, PASS),), assumptions=(bad,)),
        ),
        verdicts=(
            replace(
                _judged(FAIL, bad, bad, Spread(1, 2, 3, "V"), Limit(0, 2, "V")),
                topic=bad,
                subject=bad,
                parts=(bad,),
                nets=(bad,),
                places=(place,),
                formula=bad,
                contributions=((bad, 1.0),),
                assumptions=(bad,),
                source=bad,
                remedy=bad,
            ),
            replace(
                _judged(PASS, bad, bad, Spread(1, 2, 3, bad), Limit(0, 4, bad)), assumptions=(bad + "2",)
            ),
            replace(_said(OPEN, bad, bad), needs=(bad,)),
            replace(_said(Outcome.NOT_APPLICABLE, bad, bad)),
        ),
        cautions=(bad,),
        configuration=bad,
        switched_off=(SwitchedOff(bad, place),),
    )


def _at(line: int, column: int = 1) -> Place:
    return Place(NETLIST, line, column)


def _said(outcome: Outcome, rule: str, message: str, subject: str = "U1") -> Verdict:
    topic = rule.partition(".")[0].replace("-", " ")
    return Verdict(outcome=outcome, rule=rule, topic=topic, message=message, subject=subject, controller="U1")


def _judged(
    outcome: Outcome, rule: str, message: str, measured: Spread, limit: Limit, subject: str = "U1"
) -> Verdict:
    verdict = _said(outcome, rule, message, subject)
    return replace(verdict, measured=measured, limit=limit, margin=limit.margin(measured))


def _pins() -> tuple[PinRow, ...]:
    """Return the pin table, out of order: the report puts it right."""
    return (
        PinRow("10", "E2", "0", "ground", None),
        PinRow("11", "C2", "GATE", "switched", None),
        PinRow("12", "VCC", "VBAT", "24.0 V (21.0 V .. 29.0 V)", PASS),
        PinRow("13", "OUTPUT CTRL", "0", "0 V: single-ended", PASS),
        PinRow("14", "REF", "VREF", "5.00 V (4.75 V .. 5.25 V)", FAIL, Level.ERROR),
        PinRow("15", "2IN-", "SENSE", "not computed", OPEN),
        PinRow("16", "2IN+", "", "not connected", REVIEW),
        PinRow("1", "1IN+", "FB", "2.50 V (2.44 V .. 2.56 V)", FAIL, Level.ERROR),
        PinRow("2", "1IN-", "HALFREF", "2.50 V (2.46 V .. 2.54 V)", PASS),
        PinRow("3", "FEEDBACK", "COMP", "set by the loop", None),
        PinRow("4", "DTC", "DT", "2.10 V (1.20 V .. 3.62 V)", FAIL, Level.WARNING),
        PinRow("5", "CT", "CT", "oscillator", Outcome.INFORMATIONAL),
        PinRow("6", "RT", "RT", "oscillator", Outcome.INFORMATIONAL),
        PinRow("7", "GND", "0", "ground", None),
        PinRow("8", "C1", "GATE", "switched; pulled up to VBAT through R14, joined with C2", None),
        PinRow("9", "E1", "0", "ground", None),
    )


def _connections() -> tuple[Verdict, ...]:
    return (
        _judged(
            PASS,
            "supply.range",
            "The supply pin sees 24.0 V (21.0 V .. 29.0 V); the controller works from 7 V to 40 V.",
            Spread(21, 24, 29, "V"),
            Limit(7, 40, "V"),
        ),
        _said(
            PASS,
            "connections.controller-found",
            "U1 is a controller of the 494 class, and all its 16 pins are mapped.",
        ),
        replace(
            _said(
                REVIEW,
                "connections.pin-open",
                "Pin 16 (2IN+) is on no net: an amplifier input must sit at a defined voltage.",
            ),
            parts=("U1",),
            places=(_at(14, 3),),
            source="SLVS074, pin functions",
            remedy="Tie 2IN+ to ground and 2IN- to VREF where the second amplifier is not used.",
        ),
    )


def _reference() -> tuple[Verdict, ...]:
    return (
        replace(
            _judged(
                PASS,
                "reference.bypass",
                "C3 holds 1.00 µF (800 nF .. 1.20 µF) at the reference pin.",
                Spread(0.8e-6, 1e-6, 1.2e-6, "F"),
                Limit(0.1e-6, None, "F"),
            ),
            assumptions=("C3: no tolerance is given, 20 % assumed.",),
            source="common practice, no source",
        ),
        replace(
            _judged(
                FAIL,
                "reference.load",
                "The reference pin delivers 11.4 mA (10.8 mA .. 12.1 mA); it can deliver 10.0 mA.",
                Spread(0.0108, 0.0114, 0.0121, "A"),
                Limit(None, 0.010, "A"),
            ),
            level=Level.ERROR,
            parts=("R4", "R5", "RV1", "R9"),
            nets=("VREF",),
            places=(_at(21), _at(22), Place("orchard/timing.inc", 3, 1), _at(31), _at(37)),
            formula="I = 5.00 V / (R4 + R5) + 5.00 V / RV1 = 5.00 V / 940 Ω + 5.00 V / 1.00 kΩ",
            contributions=(("R4", 0.48), ("REF", 0.31), ("RV1", 0.21)),
            assumptions=("R4, R5: no tolerance is given, 5 % assumed.", "RV1: swept from end to end."),
            source="SLVS074, recommended operating conditions: output current of the reference",
            remedy="Raise R4 and R5 to 1.50 kΩ each (E24): 9.35 mA at most.",
        ),
        replace(
            _said(
                Outcome.INFORMATIONAL,
                "oscillator.frequency",
                "The oscillator runs at 9.17 kHz (7.96 kHz .. 10.6 kHz), and so does each output.",
            ),
            measured=Spread(7960, 9170, 10600, "Hz"),
            formula="f = 1.1 / (R9 C4) = 1.1 / (12.0 kΩ · 10.0 nF)",
            source="SLVS074",
        ),
    )


def _dead_time() -> tuple[Verdict, ...]:
    return (
        _said(PASS, "dead-time.driven", "RV1 holds the dead-time pin at a defined voltage."),
        replace(
            _judged(
                FAIL,
                "dead-time.range",
                "The dead-time pin travels from 1.20 V to 3.62 V; above 3.30 V the outputs stay off.",
                Spread(1.2, 2.1, 3.62, "V"),
                Limit(0, 3.3, "V"),
            ),
            level=Level.WARNING,
            parts=("RV1", "R7"),
            nets=("DT",),
            places=(_at(30),),
            formula="V = VREF (R7 + RV1) / (R6 + R7 + RV1)",
            assumptions=("RV1: swept from end to end.",),
            source="SLVS074: 3.3 V typical sets 100 % dead time",
            remedy="Put 820 Ω (E24) between the top of RV1 and VREF.",
        ),
        replace(
            _said(OPEN, "dead-time.minimum", "Is the least dead time as long as the brief asks?"),
            needs=('brief: [controllers.U1] dead_time = "..."',),
        ),
        _said(PASS, "output-mode.wiring", "OUTPUT CTRL is tied to ground: single-ended, outputs in phase."),
        _said(Outcome.NOT_APPLICABLE, "output-mode.outputs-used", "The outputs are joined."),
    )


def _feedback() -> tuple[Verdict, ...]:
    return (
        replace(
            _judged(
                FAIL,
                "feedback.output-voltage",
                "The loop settles at 12.6 V (12.2 V .. 13.1 V) on VOUT; the brief asks for 12.0 V, 2 %.",
                Spread(12.2, 12.6, 13.1, "V"),
                Limit(11.76, 12.24, "V"),
            ),
            level=Level.ERROR,
            parts=("R1", "R2"),
            nets=("FB", "VOUT"),
            places=(_at(18), _at(19)),
            formula="VOUT = 2.50 V (1 + R1 / R2) = 2.50 V (1 + 40.2 kΩ / 10.0 kΩ)",
            contributions=(("REF", 0.62), ("R1", 0.19), ("R2", 0.19)),
            source="the brief, rails.VOUT",
            remedy="R1 = 38.3 kΩ with R2 = 10.0 kΩ (E96) gives 12.1 V.",
        ),
        _said(
            PASS,
            "feedback.complete",
            "The divider has both halves, R1 from VOUT and R2 to ground, on the pin itself.",
        ),
    )


def _current_limit() -> tuple[Verdict, ...]:
    return (
        replace(
            _said(OPEN, "current-limit.trip-point", "Does the limit take over where the brief asks?"),
            needs=('brief: [controllers.U1] current_limit = "..."', 'brief: [rails.VOUT] load = "..."'),
        ),
        replace(
            _said(
                OPEN,
                "current-limit.sense-dissipation",
                "R12 takes up to 3.60 W; its rating is not known.",
                "R12",
            ),
            needs=("parts list: power of R12",),
        ),
        replace(
            _said(OPEN, "current-limit.single-fault", "Q1 stands between the sense resistor and the pin."),
            topic="house rules",
        ),
        _judged(
            PASS,
            "current-limit.sense-voltage",
            "R12 drops 150 mV (146 mV .. 154 mV) at full load.",
            Spread(0.146, 0.15, 0.154, "V"),
            Limit(0.1, 0.25, "V"),
            "R12",
        ),
    )
