"""Sheets of an EDIF board, the symbols that join nets on them, and what names a net: A5."""

from __future__ import annotations

import pytest

from .edif_board import DRIVER, R, kinds, pins, read

construct = pytest.mark.construct

SYMBOLS = """
(cell GND_POWER (cellType GENERIC) (view V (viewType SCHEMATIC) (interface (port P))))
(cell FLAG (cellType GENERIC) (view V (viewType SCHEMATIC)
 (interface (port P (property SupplyType (string "ground"))))))
(cell OFFPAGE_L (cellType GENERIC) (view V (viewType SCHEMATIC) (interface (port P))))
(cell DOT (cellType GENERIC) (view V (viewType SCHEMATIC) (interface (port P))))
"""


@construct("A5 hierarchy: readable paths, outer names win")
def test_hierarchy() -> None:
    stage = f"""(cell STAGE (cellType GENERIC) (view V (viewType NETLIST) (interface (port IN) (port OUT))
      (contents (instance R1 {R}) (instance R2 {R})
       (net IN (joined (portRef IN) (portRef &1 (instanceRef R1))))
       (net MID (joined (portRef &2 (instanceRef R1)) (portRef &1 (instanceRef R2))))
       (net LAST (joined (portRef OUT) (portRef &2 (instanceRef R2)))))))"""
    psu = """(cell PSU (cellType GENERIC) (view V (viewType NETLIST) (interface (port A))
      (contents (instance first (viewRef V (cellRef STAGE)))
       (instance I9 (viewRef V (cellRef STAGE)) (designator "second"))
       (net A (joined (portRef A) (portRef IN (instanceRef first))))
       (net LINK (joined (portRef OUT (instanceRef first)) (portRef IN (instanceRef I9)))))))"""
    netlist = read(
        f"(instance psu (viewRef V (cellRef PSU))) (instance R1 {R})"
        "(net VIN (joined (portRef A (instanceRef psu)) (portRef &1 (instanceRef R1))))",
        more=stage + psu,
    )
    assert pins(netlist) == {
        "VIN": ["R1.1", "psu/first/R1.1"],
        "psu/LINK": ["psu/first/R2.2", "psu/second/R1.1"],
        "psu/first/MID": ["psu/first/R1.2", "psu/first/R2.1"],
        "psu/second/MID": ["psu/second/R1.2", "psu/second/R2.1"],
        "psu/second/LAST": ["psu/second/R2.2"],
    }


@construct("A5 hierarchy: buses through sheets")
def test_bus_through_a_sheet() -> None:
    inner = f"""(cell BLOCK (cellType GENERIC) (view V (viewType NETLIST) (interface (port (array Q 8)))
      (contents (instance U1 {DRIVER})
       (net (array W 8) (joined (portRef Q) (portRef D (instanceRef U1)))))))"""
    netlist = read(
        f"(instance blk (viewRef V (cellRef BLOCK))) (instance R1 {R})"
        "(net TOP3 (joined (portRef (member Q 3) (instanceRef blk)) (portRef &1 (instanceRef R1))))",
        more=inner,
    )
    assert pins(netlist)["TOP3"] == ["R1.1", "blk/U1.D(4)"]


@construct("A5 TIE cells join nets")
def test_tie() -> None:
    netlist = read(
        f"(instance R1 {R}) (instance T (viewRef V (cellRef JOINT)))"
        "(net N00001 (joined (portRef &1 (instanceRef R1)) (portRef A (instanceRef T))))"
        "(net AGND (joined (portRef &2 (instanceRef R1)) (portRef B (instanceRef T))))",
        view="SCHEMATIC",
    )
    assert list(netlist.parts) == ["R1"]
    assert pins(netlist) == {"AGND": ["R1.1", "R1.2"]}


@construct("A5 RIPPER cells join a net to the bit of its name")
def test_ripper() -> None:
    netlist = read(
        f"(instance U1 {DRIVER}) (instance R1 {R}) (instance X (viewRef V (cellRef RIP))) (instance Y "
        "(viewRef V (cellRef RIP)))"
        '(net (array (rename D "D[7..0]") 8) (joined (portRef D (instanceRef U1)) (portRef BUS '
        "(instanceRef X)) (portRef BUS (instanceRef Y))))"
        "(net D5 (joined (portRef &1 (instanceRef R1)) (portRef BIT (instanceRef X))))"
        "(net ODD (joined (portRef &2 (instanceRef R1)) (portRef BIT (instanceRef Y))))",
        view="SCHEMATIC",
    )
    assert pins(netlist)["D[5]"] == ["U1.D(5)", "R1.1"]
    assert pins(netlist)["ODD"] == ["R1.2"]
    assert kinds(netlist) == ["skipped"]


@construct("A5 ports that a cell joins inside itself")
def test_joined_inside() -> None:
    netlist = read(
        "(instance W1 (viewRef V (cellRef LINK))) (net A (joined (portRef &1 (instanceRef W1)))) "
        "(net B (joined (portRef &3 (instanceRef W1))))"
    )
    assert pins(netlist) == {"A": ["W1.1", "W1.3"]}


@construct("A5 power symbols name their nets and are no parts")
def test_power_symbols() -> None:
    netlist = read(
        f'(instance I1 {R} (designator "R1")) (instance S1 (viewRef V (cellRef GND_POWER)) '
        '(property NAME (string "PGND")))'
        '(instance S2 (viewRef V (cellRef FLAG)) (property NAME (string "PGND"))) (instance S3 '
        "(viewRef V (cellRef FLAG)))"
        "(net N00001 (joined (portRef &1 (instanceRef I1)) (portRef P (instanceRef S1))))"
        "(net LOCAL (joined (portRef &2 (instanceRef I1)) (portRef P (instanceRef S2))))"
        "(net N00003 (joined (portRef P (instanceRef S3))))",
        more=SYMBOLS,
        view="SCHEMATIC",
    )
    assert list(netlist.parts) == ["R1"]
    assert pins(netlist) == {"PGND": ["R1.1", "R1.2"], "P": []}


@construct("A5 off-page symbols and off-page connectors join the nets of one sheet")
def test_off_page() -> None:
    netlist = read(
        f'(instance I1 {R} (designator "R1")) (instance I2 {R} (designator "R2")) (offPageConnector '
        '(rename OP "LEVEL"))'
        '(instance S1 (viewRef V (cellRef OFFPAGE_L)) (property NAME (string "SENSE"))) (instance S2 '
        '(viewRef V (cellRef OFFPAGE_L)) (property NAME (string "SENSE")))'
        "(instance S3 (viewRef V (cellRef OFFPAGE_L)))"
        "(net N00001 (joined (portRef &1 (instanceRef I1)) (portRef P (instanceRef S1))))"
        "(net N00002 (joined (portRef &2 (instanceRef I1)) (portRef P (instanceRef S2)) (portRef P "
        "(instanceRef S3))))"
        "(net N00003 (joined (portRef &1 (instanceRef I2)) (portRef OP))) (net N00004 (joined "
        "(portRef &2 (instanceRef I2)) (portRef OP)))",
        more=SYMBOLS,
        view="SCHEMATIC",
    )
    assert pins(netlist) == {"SENSE": ["R1.1", "R1.2"], "LEVEL": ["R2.1", "R2.2"]}


@construct("A5 instances inside nets are drawings")
def test_junctions_inside_nets() -> None:
    netlist = read(
        f'(instance I1 {R} (designator "R1")) (net A (joined (portRef &1 (instanceRef I1)) (portRef P '
        "(instanceRef J1)))"
        "(instance J1 (viewRef V (cellRef DOT))))"
        "(net B (joined (portRef &2 (instanceRef I1)) (portRef P (instanceRef S1))) (instance S1 "
        '(viewRef V (cellRef GND_POWER)) (property VALUE (string "GND"))))',
        more=SYMBOLS,
        view="SCHEMATIC",
    )
    assert list(netlist.parts) == ["R1"]
    assert pins(netlist) == {"A": ["R1.1"], "GND": ["R1.2"]}
    assert kinds(netlist) == []


@construct("A5 what has one pin and no designator among parts with one is a symbol")
def test_single_pin_symbols() -> None:
    netlist = read(
        f'(instance I1 {R} (designator "R1")) (instance D1 (viewRef V (cellRef DOT))) (instance TITLE '
        "(viewRef V (cellRef BLOCK)))"
        "(net A (joined (portRef P (instanceRef D1)) (portRef &1 (instanceRef I1))))",
        more=SYMBOLS + "(cell BLOCK (cellType GENERIC) (view V (viewType GRAPHIC) (interface)))",
        view="SCHEMATIC",
    )
    assert list(netlist.parts) == ["R1"]


@construct("A5 implicit ports name nets over all sheets")
def test_implicit_ports() -> None:
    port = '(port (rename GND "GND") (property ImplicitPortClass (string "power")))'
    inner = f"""(cell PSU (cellType GENERIC) (view V (viewType SCHEMATIC) (interface {port})
      (contents (instance R1 {R} (designator "R1"))
       (net N00001 (joined (portRef GND) (portRef &1 (instanceRef R1)))))))"""
    netlist = read(
        f'(instance psu (viewRef V (cellRef PSU))) (instance R2 {R} (designator "R2"))'
        "(net N00002 (joined (portRef GND) (portRef &1 (instanceRef R2))))",
        more=inner,
        interface=port,
        view="SCHEMATIC",
    )
    assert pins(netlist) == {"GND": ["R2.1", "psu/R1.1"]}


@construct("A5 a port names a net that the tool has numbered")
def test_port_names_a_numbered_net() -> None:
    netlist = read(
        f"(instance R1 {R}) (net N00012 (joined (portRef VOUT) (portRef &1 (instanceRef R1))))"
        "(net SENSE (joined (portRef SNS) (portRef &2 (instanceRef R1))))",
        interface="(port VOUT) (port SNS)",
    )
    assert list(netlist.nets) == ["VOUT", "SENSE"]
