"""The forms of EDIF 2 0 0 that board exporters write, one by one: A3."""

from __future__ import annotations

import pytest
from pwmlint.grammar.edif import read_edif

from .edif_board import AMP, DRIVER, PARTS, R, board, kinds, pins, read

construct = pytest.mark.construct


@construct("A3 status, userData and unknown forms are skipped anywhere")
def test_unknown_forms() -> None:
    deep = "(" * 3 + "x " + "(y 1)" * 3 + ")" * 3
    deep = deep.replace("((", "(a (").replace("((", "(b (")
    netlist = read(
        f"(figure (dot (pt 1 2))) (instance R1 (userData u {deep}) {R} (timing (derivation MEASURED)) {deep})"
        f"{deep} (net A (criticality 3) (userData (net B)) (joined (foo (portRef x)) (portRef &1 "
        "(bar 1) (instanceRef R1 (baz)))) (netDelay))",
        head="(status (written (timeStamp 0 0 0 0 0 0))) (userData tool (weights 1 2 3))",
    )
    assert pins(netlist) == {"A": ["R1.1"]}


@construct("A3 forms out of their place are left out")
def test_forms_out_of_place() -> None:
    netlist = read(
        f'(property P (string "x")) (instance R1 {R} (port X)) (net A (property Q (string "y")) '
        "(joined (portRef &1 (instanceRef R1))))"
    )
    assert pins(netlist) == {"A": ["R1.1"]}


@construct("A3 external before and after use")
def test_external_after_use() -> None:
    text = board(f"(instance R1 {R}) (net A (joined (portRef &1 (instanceRef R1))))")
    netlist = read_edif(text.replace(PARTS, "").replace("(design", PARTS + "(design"), "orchard.edf")
    assert pins(netlist) == {"A": ["R1.1"]}


@construct("A3 a cell that is defined nowhere")
def test_undefined_cell() -> None:
    netlist = read(
        "(instance U1 (viewRef V (cellRef LOST (libraryRef GONE))))"
        "(net A (joined (portRef &10 (instanceRef U1)))) (net B (joined (portRef &2 (instanceRef U1))))"
    )
    part = netlist.parts["U1"]
    assert (part.model, part.pins_known) == ("LOST", "numbers")
    assert [(pin.number, pin.net) for pin in part.pins] == [("2", "B"), ("10", "A")]
    assert kinds(netlist) == ["missing-library"]


@construct("A3 a cellRef without a libraryRef finds the cell in another library")
def test_cell_in_another_library() -> None:
    netlist = read("(instance U1 (viewRef V (cellRef AMP)))")
    assert [pin.number for pin in netlist.parts["U1"].pins] == ["3", "1"]


@construct("A3 an instance without a view")
def test_instance_without_view() -> None:
    netlist = read("(instance U1) (net A (joined (portRef X (instanceRef U1))))")
    assert [(pin.name, pin.number) for pin in netlist.parts["U1"].pins] == [("X", "")]
    assert netlist.parts["U1"].pins_known == "names"


@construct("A3 no design form: the last cell with contents, as an assumption")
def test_no_design() -> None:
    text = board(f"(instance R1 {R})")
    netlist = read_edif(text[: text.rindex("(design")] + ")", "orchard.edf")
    assert list(netlist.parts) == ["R1"]
    assert kinds(netlist) == ["assumption"]


@construct("A3 several designs: the first that leads to a circuit")
def test_several_designs() -> None:
    text = board(f"(instance R1 {R})")
    text = text.replace("(design", "(design OLD (cellRef GONE)) (design NEW (cellRef TOP)) (design")
    netlist = read_edif(text, "orchard.edf")
    assert list(netlist.parts) == ["R1"]
    assert kinds(netlist) == ["assumption"]
    assert "NEW" in netlist.notes[0].message


@construct("A3 a design whose cell is empty")
def test_empty_design() -> None:
    assert read("").parts == {}


@construct("A3 array of nets and member of a port")
def test_member_of_a_port() -> None:
    netlist = read(
        f"(instance U1 {DRIVER}) (net GATE (joined (portRef (member D 0) (instanceRef U1)) "
        "(portRef EN (instanceRef U1))))"
    )
    assert netlist.parts["U1"].model == "Octal (driver)"
    assert pins(netlist) == {"GATE": ["U1.D(7)", "U1.EN"]}


@construct("A3 net array on a port array, bit by bit")
def test_array_on_array() -> None:
    netlist = read(
        f"(instance U1 {DRIVER}) (instance U2 {DRIVER}) (net (array (rename BUS "
        '(stringDisplay "BUS[0..7]" (display X))) 8)'
        "(joined (portRef D (instanceRef U1)) (portRef D (instanceRef U2))))"
    )
    assert pins(netlist)["BUS[0]"] == ["U1.D(7)", "U2.D(7)"]
    assert pins(netlist)["BUS[7]"] == ["U1.D(0)", "U2.D(0)"]


@construct("A3 array of instances, member in instanceRef")
def test_array_of_instances() -> None:
    netlist = read(
        f"(instance (array R 2) {R}) (net A (joined (portRef &1 (instanceRef (member R 1)))))"
        "(net B (joined (portRef &2 (instanceRef R)))) (net (array C 2) (joined (portRef &1 "
        "(instanceRef R))))"
    )
    assert list(netlist.parts) == ["R[0]", "R[1]"]
    assert pins(netlist)["B"] == ["R[0].2", "R[1].2"]
    assert pins(netlist)["C[0]"] == ["R[0].1"]
    assert "R[1].1" in pins(netlist)["A"]


@construct("A3 port bundle")
def test_port_bundle() -> None:
    cell = """(cell BUF (cellType GENERIC) (view V (viewType NETLIST) (interface
      (portBundle IO (listOfPorts (port A (designator "1")) (port B (designator "2"))))
       (port C (designator "3")))))"""
    netlist = read(
        "(instance U1 (viewRef V (cellRef BUF)))"
        "(net N (joined (portRef A (portRef IO (instanceRef U1))) (portRef C (instanceRef U1))))"
        "(net (array P 2) (joined (portRef IO (instanceRef U1))))",
        more=cell,
    )
    assert [pin.number for pin in netlist.parts["U1"].pins][:3] == ["1", "1", "2"]
    assert pins(netlist)["P[1]"] == ["U1.2"]
    assert pins(netlist)["N"] == ["U1.1", "U1.3"]


@construct("A3 net bundle")
def test_net_bundle() -> None:
    netlist = read(
        f"(instance R1 {R}) (netBundle B (listOfNets (net X (joined (portRef &1 (instanceRef R1))))"
        "(net Y (joined (portRef &2 (instanceRef R1))))))"
    )
    assert pins(netlist) == {"X": ["R1.1"], "Y": ["R1.2"]}


@construct("A3 portList")
def test_port_list() -> None:
    netlist = read(
        f"(instance R1 {R}) (instance R2 {R}) (net (array N 2) (joined"
        "(portList (portRef &1 (instanceRef R1)) (portRef &2 (instanceRef R1)))"
        "(portList (portRef &2 (instanceRef R2)) (portRef (name &1) (instanceRef R2)))))"
    )
    assert pins(netlist) == {"N[0]": ["R1.1", "R2.2"], "N[1]": ["R1.2", "R2.1"]}


@construct("A3 globalPortRef")
def test_global_port() -> None:
    inner = f"""(cell PSU (cellType GENERIC) (view V (viewType NETLIST) (interface)
      (contents (instance R1 {R})
       (net N00001 (joined (globalPortRef GND) (portRef &1 (instanceRef R1)))))))"""
    netlist = read(
        f"(instance psu (viewRef V (cellRef PSU))) (instance R2 {R})"
        "(net N00002 (joined (globalPortRef GND) (portRef &1 (instanceRef R2))))",
        more=inner,
    )
    assert pins(netlist) == {"GND": ["R2.1", "psu/R1.1"]}


@construct("A3 nested instanceRef")
def test_nested_instance_ref() -> None:
    inner = (
        f"(cell PSU (cellType GENERIC) (view V (viewType NETLIST) (interface) (contents (instance R1 {R}))))"
    )
    netlist = read(
        "(instance psu (viewRef V (cellRef PSU))) (net A (joined (portRef &2 (instanceRef R1 "
        "(instanceRef psu)))))",
        more=inner,
    )
    assert pins(netlist) == {"A": ["psu/R1.2"]}


@construct("A3 viewList")
def test_view_list() -> None:
    netlist = read(f"(instance U1 (viewList {AMP} (viewList {R})))")
    assert netlist.parts["U1"].model == "AMP"


@construct("A3 parameterAssign and parameter")
def test_parameters() -> None:
    cell = """(cell RP (cellType GENERIC) (view V (viewType NETLIST)
      (interface (port &1) (port &2) (parameter VALUE (string "1k")) (parameter TOL (string "5%")))))"""
    netlist = read(
        '(instance R1 (viewRef V (cellRef RP)) (parameterAssign VALUE (string "2k"))) (instance R2 '
        "(viewRef V (cellRef RP)))",
        more=cell,
    )
    assert [part.value for part in netlist.parts.values()] == ["2k", "1k"]
    assert netlist.parts["R1"].attributes["tolerance"] == "5%"


@construct("A3 typed values with units and scales")
@pytest.mark.parametrize(
    ("value", "text"),
    [
        ("(number (e 47 2)) (unit RESISTANCE)", "4700 ohm"),
        ("(number (e 1 -7)) (unit INDUCTANCE)", "100e-9 H"),
        ("(number 100) (unit CAPACITANCE)", "100e-12 F"),
        ("(integer 12) (unit VOLTAGE)", "12 V"),
        ("(integer 12)", "12"),
        ("(boolean (true))", "true"),
        ("(boolean (false))", "false"),
        ("(miNoMax (mnm 9 10 11))", "10"),
        ("(number (e 5 99999999999))", "5e99999999999"),
        ('(string "10" "k")', "10k"),
        ('(string (stringDisplay "22k" (display X)) )', "22k"),
        ('(owner "me") (string "33k")', "33k"),
        ("(point (pt 1 2))", ""),
    ],
)
def test_typed_values(value: str, text: str) -> None:
    file = board(f"(instance R1 {R} (property VALUE {value}))").replace(
        "(library MAIN (edifLevel 0) (technology (numberDefinition))",
        "(library MAIN (edifLevel 0) (technology (numberDefinition (scale 1 (e 1 -12) (unit CAPACITANCE))"
        " (scale 0 1 (unit MASS)) (scale 1 1)))",
    )
    assert read_edif(file, "orchard.edf").parts["R1"].value == text


@construct("A3 subnets and nets of one name are one net")
def test_subnets() -> None:
    netlist = read(
        f"(instance R1 {R}) (net A (joined (portRef &1 (instanceRef R1))) (net A1 (joined (portRef &2 "
        "(instanceRef R1)))))"
    )
    assert pins(netlist) == {"A": ["R1.1", "R1.2"]}


@construct("A3 section and page forms")
def test_sections_and_pages() -> None:
    netlist = read(
        f'(section "power" (instance R1 {R}) (section "more" (instance R2 {R})))'
        f"(page P1 (instance R3 {R}) (net A (joined (portRef &1 (instanceRef R1)))))"
        "(page P2 (net A (joined (portRef &1 (instanceRef R3)))))"
    )
    assert set(netlist.parts) == {"R1", "R2", "R3"}
    assert pins(netlist) == {"A": ["R1.1", "R3.1"]}


@construct("A3 references that lead nowhere are noted")
def test_references_that_lead_nowhere() -> None:
    netlist = read(
        f"(instance U1 {AMP}) (net A (joined (portRef X (instanceRef GONE)) (portRef &9 (instanceRef U1))))"
    )
    assert kinds(netlist) == ["skipped"]
    assert pins(netlist) == {"A": ["U1.9"]}


@construct("A3 a port that the cell does not have")
def test_port_that_is_not_there() -> None:
    netlist = read(
        f"(instance U1 {AMP}) (instance R1 {R})"
        "(net (array N 2) (joined (portRef GONE (instanceRef U1)) (portRef &1 (instanceRef (member R1 0)))))"
    )
    assert pins(netlist) == {"N[0]": ["U1.GONE", "R1.1"]}
    assert kinds(netlist) == ["pin-mismatch", "pin-mismatch"]


@construct("A3 interface that joins ports of a bundle, a list or a member")
@pytest.mark.parametrize(
    "joined", ["(portList (portRef A) (portRef B))", "(portRef (member A 0)) (portRef B)"]
)
def test_joined_in_an_interface(joined: str) -> None:
    cell = f"""(cell BAR (cellType GENERIC) (view V (viewType NETLIST)
      (interface (port A) (port B) (port C) (joined {joined}))))"""
    netlist = read(
        "(instance W1 (viewRef V (cellRef BAR))) (net X (joined (portRef A (instanceRef W1))))"
        "(net Y (joined (portRef B (instanceRef W1)))) (net Z (joined (portRef C (instanceRef W1))))",
        more=cell,
    )
    assert pins(netlist) == {"X": ["W1.A", "W1.B"], "Z": ["W1.C"]}
