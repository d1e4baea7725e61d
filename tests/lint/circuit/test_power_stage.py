"""Power stages of an orchard, each drawn as a list, and what is recognised in them."""

from __future__ import annotations

from pathlib import Path

import pytest
from pwmlint.grammar import read
from pwmlint.lint.circuit.power_stage import NotRecognised, PowerStage
from pwmlint.lint.design import Design

SENSE_IN_RETURN = ("R30 RTN SNS 1k", "R31 RTN 0 0.05", "J2 OUT RTN LOAD")

P_CHANNEL_BUCK = ("M1 SW G VBAT VBAT PM", "R20 VBAT G 470", "R21 G D1 47", "D1 0 SW DS", "L1 SW OUT 100u")
PNP_BUCK = (
    "Q1 SW B1 VBAT QP",
    "Q2 SW B2 B1 QP",
    "R20 VBAT B1 30",
    "R21 B1 B2 100",
    "R22 B2 D1 220",
    "D1 0 SW DS",
    "L1 SW OUT 100u",
)
N_CHANNEL_BUCK = (
    "M1 VBAT G SW SW NM",
    "XU5 D1 G SW BST VBAT 0 HIGHSIDE",
    "R20 VBAT D1 1k",
    "C20 BST SW 100n",
    "D1 0 SW DS",
    "L1 SW OUT 100u",
)
BOOST = ("M1 SW G 0 0 NM", "R20 D1 G 10", "R21 G 0 1k", "L1 VBAT SW 100u", "D1 SW OUT DS")
OUTPUT_BOOST = ("L1 VBAT D1 1m", "D1 D1 OUT DS")
INVERTING = ("Q1 SW B VBAT QP", "R20 VBAT B 100", "R21 B D1 220", "D1 OUT SW DS", "L1 SW 0 100u")
SYNCHRONOUS_BUCK = (
    "M1 SW G VBAT VBAT PM",
    "M2 SW G 0 0 NM",
    "R20 VBAT G 470",
    "R21 G D1 47",
    "L1 SW OUT 100u",
)
SYNCHRONOUS_BOOST = ("M1 SW G 0 0 NM", "M2 SW G OUT OUT PM", "R20 D1 G 10", "R21 G 0 1k", "L1 VBAT SW 100u")
PUSH_PULL = (
    "M1 PA GA 0 0 NM",
    "M2 PB GB 0 0 NM",
    "R20 D1 GA 10",
    "R21 D2 GB 10",
    "R22 GA 0 1k",
    "R23 GB 0 1k",
    "TR1 PA VBAT PB SA 0 SB PRESS",
    "D1 SA RECT DS",
    "D2 SB RECT DS",
    "L1 RECT OUT 100u",
)
COUPLED_PUSH_PULL = (
    *PUSH_PULL[:6],
    "L11 PA VBAT 50u",
    "L12 VBAT PB 50u",
    "L13 SA 0 200u",
    "L14 0 SB 200u",
    "K1 L11 L12 L13 0.999",
    "K2 L13 L14 0.999",
    *PUSH_PULL[7:],
)
HALF_BRIDGE = (
    "TR2 D1 VBAT D2 GH SW GL 0 DRIVE",
    "M1 VBAT GH SW SW NM",
    "M2 SW GL 0 0 NM",
    "C20 VBAT MID 2u2",
    "C21 MID 0 2u2",
    "TR1 SW MID SA 0 SB PRESS",
    "D1 SA RECT DS",
    "D2 SB RECT DS",
    "L1 RECT OUT 100u",
)
FULL_BRIDGE = (
    "TR2 D1 VBAT D2 GH1 SW1 GL1 0 GH2 SW2 GL2 DRIVE",
    "M1 VBAT GH1 SW1 SW1 NM",
    "M2 SW1 GL1 0 0 NM",
    "M3 VBAT GH2 SW2 SW2 NM",
    "M4 SW2 GL2 0 0 NM",
    "TR1 SW1 SW2 SA 0 SB PRESS",
    "D1 SA RECT DS",
    "D2 SB RECT DS",
    "L1 RECT OUT 100u",
)
FORWARD = (
    "M1 PA G 0 0 NM",
    "R20 D1 G 10",
    "R21 G 0 1k",
    "TR1 PA VBAT SA 0 RESET PRESS",
    "D3 0 RESET DS",
    "D1 SA RECT DS",
    "D2 0 RECT DS",
    "L1 RECT OUT 100u",
)
TWO_SWITCH_FORWARD = (
    "TR2 D1 0 GH SH GL PGND DRIVE",
    "M1 VBAT GH SH SH NM",
    "M2 DL GL PGND PGND NM",
    "D3 PGND SH DS",
    "D4 DL VBAT DS",
    "TR1 SH DL SA 0 PRESS",
    "D1 SA RECT DS",
    "D2 0 RECT DS",
    "L1 RECT OUT 100u",
)
PARALLEL_PUSH_PULL = (*PUSH_PULL, "M3 PA GC 0 0 NM", "M4 PB GD 0 0 NM", "R24 D1 GC 10", "R25 D2 GD 10")
SERIES_CAPACITOR = (*HALF_BRIDGE[:5], "C22 SW PRI 1u", "TR1 PRI MID SA 0 SB PRESS", *HALF_BRIDGE[6:])
PAST_A_DIODE = (*P_CHANNEL_BUCK[:4], "L1 SW CHARGER 100u", "C21 CHARGER 0 470u", "D5 CHARGER OUT DS")
PAST_A_SHUNT = (*P_CHANNEL_BUCK[:4], "L1 SW SHUNT 100u", "R22 SHUNT OUT 0.05", "J2 OUT 0 PUMP")
FLYBACK = ("M1 PA G 0 0 NM", "R20 D1 G 10", "R21 G 0 1k", "TR1 PA VBAT SA 0 PRESS", "D1 SA OUT DS")

COLLECTOR, EMITTER = "D1 0 0 D1", "VBAT D1 D1 VBAT"
COLLECTORS, EMITTERS = "D1 0 0 D2", "VBAT D1 D2 VBAT"


def stage(
    tmp_path: Path, outputs: str, parts: tuple[str, ...], mode: str = "0"
) -> PowerStage | NotRecognised:
    """Return what is recognised of the parts on a controller's outputs `C1 E1 E2 C2`."""
    lines = [
        "orchard",
        "VBAT VBAT 0 24",
        f"U1 FB SET COMP DTC CT RT 0 {outputs} VBAT {mode} VREF LIM SNS 494",
        "R11 VREF SET 5k1",
        "R12 SET 0 5k1",
        "R13 OUT FB 5k1",
        "R14 FB 0 1k3",
        "R15 VREF LIM 47k",
        "R16 LIM 0 4k7",
        "C9 OUT 0 220u",
        *(() if any(" SNS " in part for part in parts) else ("R17 SNS 0 1k",)),
        *parts,
        ".model PM PMOS",
        ".model NM NMOS",
        ".model QP PNP",
        ".model QN NPN",
        ".model DS D",
        ".end",
    ]
    path = tmp_path / "orchard.cir"
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")
    design = Design(read(path))
    return design.power_stage(design.controllers[0])


@pytest.mark.parametrize(
    ("outputs", "parts", "topology", "switches", "rectifiers"),
    [
        pytest.param(COLLECTOR, P_CHANNEL_BUCK, "buck", ("M1",), ("D1",), id="buck, P-channel"),
        pytest.param(COLLECTOR, PNP_BUCK, "buck", ("Q1",), ("D1",), id="buck, two PNP in cascade"),
        pytest.param(COLLECTOR, N_CHANNEL_BUCK, "buck", ("M1",), ("D1",), id="buck, N-channel by a driver"),
        pytest.param(COLLECTOR, SYNCHRONOUS_BUCK, "buck", ("M1", "M2"), ("M2",), id="buck, synchronous"),
        pytest.param(EMITTER, SYNCHRONOUS_BOOST, "boost", ("M1", "M2"), ("M2",), id="boost, synchronous"),
        pytest.param(EMITTER, BOOST, "boost", ("M1",), ("D1",), id="boost, N-channel"),
        pytest.param(
            "D1 0 0 D1", OUTPUT_BOOST, "boost", ("U1",), ("D1",), id="boost by the outputs themselves"
        ),
        pytest.param(COLLECTOR, INVERTING, "inverting", ("Q1",), ("D1",), id="inverting, PNP"),
        pytest.param(EMITTERS, PUSH_PULL, "push-pull", ("M1", "M2"), ("D1", "D2"), id="push-pull"),
        pytest.param(
            EMITTERS, COUPLED_PUSH_PULL, "push-pull", ("M1", "M2"), ("D1", "D2"), id="coupled coils"
        ),
        pytest.param(COLLECTORS, HALF_BRIDGE, "half-bridge", ("M1", "M2"), ("D1", "D2"), id="half-bridge"),
        pytest.param(
            COLLECTORS, FULL_BRIDGE, "full-bridge", ("M1", "M2", "M3", "M4"), ("D1", "D2"), id="full-bridge"
        ),
        pytest.param(EMITTER, FORWARD, "forward", ("M1",), ("D1",), id="forward"),
        pytest.param(
            EMITTER, TWO_SWITCH_FORWARD, "forward", ("M1", "M2"), ("D1",), id="forward, two switches"
        ),
        pytest.param(
            EMITTERS,
            PARALLEL_PUSH_PULL,
            "push-pull",
            ("M1", "M3", "M2", "M4"),
            ("D1", "D2"),
            id="push-pull, switches in parallel",
        ),
        pytest.param(
            COLLECTORS,
            SERIES_CAPACITOR,
            "half-bridge",
            ("M1", "M2"),
            ("D1", "D2"),
            id="half-bridge, capacitor in series",
        ),
        pytest.param(COLLECTOR, PAST_A_DIODE, "buck", ("M1",), ("D1",), id="buck, diode to the battery"),
        pytest.param(COLLECTOR, PAST_A_SHUNT, "buck", ("M1",), ("D1",), id="buck, shunt to the output"),
        pytest.param(EMITTER, FLYBACK, "flyback", ("M1",), ("D1",), id="flyback"),
    ],
)
def test_stages_are_recognised(
    tmp_path: Path,
    outputs: str,
    parts: tuple[str, ...],
    topology: str,
    switches: tuple[str, ...],
    rectifiers: tuple[str, ...],
) -> None:
    found = stage(tmp_path, outputs, parts)
    assert isinstance(found, PowerStage), found
    assert found.topology == topology
    assert found.output == "OUT"
    assert found.input == "VBAT"
    assert found.rectifiers == rectifiers
    assert tuple(switch.reference for switch in found.switches) == switches


def test_transistors_of_untold_terminals_are_named(tmp_path: Path) -> None:
    board = """(edif mast (edifVersion 2 0 0) (edifLevel 0) (keywordMap (keywordLevel 0))
 (library parts (edifLevel 0) (technology (numberDefinition))
  (cell FET (cellType GENERIC) (view n (viewType NETLIST) (interface (port &1) (port &2) (port &3))))
  (cell PWM (cellType GENERIC) (view n (viewType NETLIST) (interface
   (port &1) (port &2) (port &3) (port &4) (port &5) (port &6) (port &7) (port &8)
   (port &9) (port &10) (port &11) (port &12) (port &13) (port &14) (port &15) (port &16))))
  (cell mast (cellType GENERIC) (view n (viewType NETLIST) (interface) (contents
   (instance U1 (viewRef n (cellRef PWM)) (property VALUE (string "494")))
   (instance M1 (viewRef n (cellRef FET)) (property VALUE (string "NMOS")))
   (net GND (joined (portRef &7 (instanceRef U1)) (portRef &3 (instanceRef M1))))
   (net DRV (joined (portRef &9 (instanceRef U1)) (portRef &1 (instanceRef M1))))
   (net SW (joined (portRef &2 (instanceRef M1))))))))
 (design mast (cellRef mast (libraryRef parts))))
"""
    path = tmp_path / "mast.edf"
    path.write_text(board, encoding="utf-8")
    design = Design(read(path))
    found = design.power_stage(design.controllers[0])
    assert isinstance(found, NotRecognised)
    assert found.reason.endswith("no names of pins tell the terminals of M1")


def test_the_brief_calls_every_stage_of_one_switch_single_ended(tmp_path: Path) -> None:
    found = stage(tmp_path, EMITTER, FLYBACK)
    assert isinstance(found, PowerStage)
    assert found.family == "single-ended"
    found = stage(tmp_path, EMITTERS, PUSH_PULL)
    assert isinstance(found, PowerStage)
    assert found.family == "push-pull"


def test_the_evidence_names_the_switch_the_inductor_and_the_diode(tmp_path: Path) -> None:
    found = stage(tmp_path, COLLECTOR, (*P_CHANNEL_BUCK, *SENSE_IN_RETURN))
    assert isinstance(found, PowerStage)
    assert found.evidence == (
        "M1 (P-channel MOSFET) switches SW to VBAT, driven by output 1 and 2",
        "L1 lies between SW and OUT",
        "D1 stands between 0 and SW",
        "R31 carries the current of the output return",
    )


def test_a_polarity_that_nothing_states_is_read_off_the_wiring_and_said(tmp_path: Path) -> None:
    parts = ("XM1 SW G VBAT SWITCH7", *P_CHANNEL_BUCK[1:])
    found = stage(tmp_path, COLLECTOR, parts)
    assert isinstance(found, PowerStage)
    assert "M1 taken as P type: its source or emitter is on VBAT" in found.evidence


@pytest.mark.parametrize(
    ("outputs", "parts", "sensed"),
    [
        pytest.param(COLLECTOR, (*P_CHANNEL_BUCK, *SENSE_IN_RETURN), "output return", id="in the return"),
        pytest.param(
            EMITTER,
            ("M1 SW G S 0 NM", *BOOST[1:], "R30 S SNS 1k", "R31 S 0 0.05"),
            "switch",
            id="below the switch",
        ),
        pytest.param(
            COLLECTOR,
            (*P_CHANNEL_BUCK[:4], "L1 SW LX 100u", "R31 LX OUT 0.05", "R30 LX SNS 1k", "R32 OUT LIM 1k"),
            "output",
            id="behind the inductor",
        ),
        pytest.param(COLLECTOR, P_CHANNEL_BUCK, "", id="no sense resistor"),
        pytest.param(
            COLLECTOR,
            (*P_CHANNEL_BUCK, "J1 VBAT INRTN BATTERY", "R30 INRTN SNS 1k", "R31 INRTN 0 0.05"),
            "input",
            id="in the input's return",
        ),
        pytest.param(COLLECTOR, (*P_CHANNEL_BUCK, "R30 AUX SNS 1k", "R31 AUX 0 0.05"), "", id="nowhere near"),
    ],
)
def test_what_flows_in_the_sense_resistor(
    tmp_path: Path, outputs: str, parts: tuple[str, ...], sensed: str
) -> None:
    found = stage(tmp_path, outputs, parts)
    assert isinstance(found, PowerStage), found
    assert found.sensed == sensed


@pytest.mark.parametrize(
    ("outputs", "parts", "says"),
    [
        pytest.param(COLLECTOR, ("R20 VBAT D1 1k",), "no transistor at a winding", id="no power stage"),
        pytest.param(
            COLLECTOR, (*P_CHANNEL_BUCK[:3], "L1 SW OUT 100u"), "no diode on SW", id="no catch diode"
        ),
        pytest.param(
            EMITTER,
            (*BOOST[:3], "L1 OUT SW 100u", "D1 SW VBAT DS"),
            "no diode on SW",
            id="load above the switch",
        ),
        pytest.param(EMITTER, FLYBACK[:4], "no rectifier", id="no rectifier"),
        pytest.param(
            COLLECTOR,
            (*SYNCHRONOUS_BUCK[:4], "L1 SW ELSEWHERE 100u"),
            "neither end of L1",
            id="output of a synchronous stage not seen",
        ),
        pytest.param(
            COLLECTOR,
            ("M1 SW G VBAT VBAT PM", "M2 SW G VBAT VBAT PM", *SYNCHRONOUS_BUCK[2:]),
            "no diode on SW",
            id="two switches side by side",
        ),
        pytest.param(
            COLLECTOR, (*P_CHANNEL_BUCK, "L2 SW AUX 10u"), "touch L1, L2", id="two inductors on one switch"
        ),
        pytest.param(
            COLLECTOR,
            ("M1 SW G HI HI PM", *P_CHANNEL_BUCK[1:], "L3 IN HI 1u"),
            "no side, or both, on a winding",
            id="inductors on both sides of a switch",
        ),
        pytest.param(
            COLLECTOR, ("M1 SW G HI HI PM", *P_CHANNEL_BUCK[1:]), "no diode on SW", id="unknown upper rail"
        ),
    ],
)
def test_what_fits_no_pattern_is_not_recognised(
    tmp_path: Path, outputs: str, parts: tuple[str, ...], says: str
) -> None:
    found = stage(tmp_path, outputs, parts)
    assert isinstance(found, NotRecognised), found
    assert says in found.reason
