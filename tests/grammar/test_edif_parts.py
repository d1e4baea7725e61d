"""Parts of an EDIF board: reference designators, sections of a package, pins, values, fit state: A5, A6."""

from __future__ import annotations

import pytest

from .edif_board import AMP, R, kinds, pins, read

construct = pytest.mark.construct


@construct("A5 order of sources for the reference designator")
def test_reference_order() -> None:
    netlist = read(
        f'(instance I1 {R} (designator "R1") (property REFDES (string "R8")))'
        f'(instance I2 {R} (designator "") (property PART_REFERENCE (string "R2")))'
        f'(instance (rename I3 "R3") {R}) (instance R4 {R})'
    )
    assert list(netlist.parts) == ["R1", "R2", "R3", "R4"]


@construct("A5 two designators: the section letter goes when the second says so")
def test_two_designators() -> None:
    netlist = read(
        f'(instance I1 {AMP} (designator "U5C") (designator "U5")) (instance I2 {AMP} '
        '(designator "U6A") (designator "U6A"))'
        f'(instance I3 {R} (designator "R1") (designator "R2"))'
    )
    assert list(netlist.parts) == ["U5", "U6A", "R1"]


DUAL = """(cell DUAL (cellType GENERIC) (view V (viewType SCHEMATIC) (interface (port IN) (port OUT) "
    "(port V))))"""


def half(name: str, designators: str, numbers: tuple[str, str, str]) -> str:
    ports = zip(("IN", "OUT", "V"), numbers, strict=True)
    pins = "".join(f'(portInstance {port} (designator "{number}"))' for port, number in ports)
    return f"(instance {name} (viewRef V (cellRef DUAL)) {designators} {pins})"


@construct("A5 sections of one package become one part")
@pytest.mark.parametrize("second", ['(designator "U1")', '(designator "U1B") (designator "U1")'])
def test_sections_of_a_package(second: str) -> None:
    first = second.replace("U1B", "U1A")
    netlist = read(
        half("I1", first, ("3", "1", "8"))
        + half("I2", second, ("5", "7", "8"))
        + "(net VCC (joined (portRef V (instanceRef I1)) (portRef V (instanceRef I2))))"
        "(net A (joined (portRef OUT (instanceRef I1)) (portRef IN (instanceRef I2))))",
        more=DUAL,
    )
    assert pins(netlist) == {"VCC": ["U1.8"], "A": ["U1.1", "U1.5"]}
    assert [pin.number for pin in netlist.parts["U1"].pins] == ["3", "1", "8", "5", "7"]
    assert kinds(netlist) == []


@construct("A5 sections that disagree on a pin")
def test_sections_that_disagree() -> None:
    netlist = read(
        half("I1", '(designator "U1A") (designator "U1")', ("3", "1", "8"))
        + half("I2", '(designator "U1B") (designator "U1")', ("5", "7", "8"))
        + "(net VCC (joined (portRef V (instanceRef I1)))) (net VDD (joined (portRef V (instanceRef I2))))",
        more=DUAL,
    )
    assert pins(netlist) == {"VCC": ["U1.8"], "VDD": ["U1.8"]}
    assert kinds(netlist) == ["pin-mismatch"]


@construct("A5 a reference designator that is written twice")
def test_duplicate_references() -> None:
    netlist = read(
        f'(instance I1 {R} (designator "R1")) (instance I2 {R} (designator "R1")) (instance I3 {R} '
        '(designator "R1"))'
    )
    assert list(netlist.parts) == ["R1", "R1#2", "R1#3"]
    assert kinds(netlist) == ["duplicate-reference"] * 2


@construct("A5 an instance that is written twice")
def test_duplicate_instances() -> None:
    netlist = read(f'(instance I1 {R} (designator "R1")) (instance I1 {R} (designator "R2"))')
    assert list(netlist.parts) == ["R1", "R2"]
    assert kinds(netlist) == ["duplicate-reference"]


@construct("A5 pin numbers from the portInstance, the port, the name of the port")
def test_pin_numbers() -> None:
    netlist = read(
        f'(instance U1 {AMP} (portInstance IN_P (property X (string "(designator")) (designator "5")))'
        f'(instance U2 {AMP} (portInstance (portRef OUT) (designator "7"))) (instance R1 {R})'
    )
    assert [[pin.number for pin in part.pins] for part in netlist.parts.values()] == [
        ["5", "1"],
        ["3", "7"],
        ["1", "2"],
    ]
    assert [pin.name for pin in netlist.parts["U1"].pins] == ["IN+", "OUT"]


@construct("A5 pin numbers from the identifier of a port that is shown by name")
def test_number_of_a_renamed_port() -> None:
    cell = '(cell REG (cellType GENERIC) (view V (viewType NETLIST) (interface (port (rename &3 "VOUT")))))'
    (pin,) = read("(instance U1 (viewRef V (cellRef REG)))", more=cell).parts["U1"].pins
    assert (pin.number, pin.name) == ("3", "VOUT")


@construct("A5 portRef by pin number where the ports have names, and by name where they have numbers")
def test_port_by_number() -> None:
    netlist = read(
        f"(instance U1 {AMP}) (net A (joined (portRef &3 (instanceRef U1)) (portRef out (instanceRef U1))))"
    )
    assert pins(netlist) == {"A": ["U1.3", "U1.1"]}


@construct("A5 duplicate portRefs, and one pin on two nets")
def test_duplicate_port_refs() -> None:
    netlist = read(
        f"(instance R1 {R}) (net A (joined (portRef &1 (instanceRef R1)) (portRef &1 (instanceRef R1))))"
        "(net B (joined (portRef &1 (instanceRef R1))))"
    )
    assert pins(netlist) == {"A": ["R1.1"], "B": ["R1.1"]}
    assert kinds(netlist) == ["pin-mismatch"]


@construct("A6 values and fit state")
@pytest.mark.parametrize(
    ("value", "fitted"),
    [
        ("0.01uf,16V", True),
        ("10K,1%37%", True),
        ("100K,1%37%,DNI", False),
        ("0,DNI", False),
        ("150UF 35V", True),
        ("100 NF", True),
        ("10K NC", False),
        ("open", False),
        ("open collector", True),
        ("0805-NC", False),
        ("3PINH", True),
        ("10k not fitted", False),
        ("DNIPRO", True),
    ],
)
def test_fit_state(value: str, fitted: bool) -> None:
    netlist = read(f'(instance R1 {R} (property VALUE (string "{value}")))')
    part = netlist.parts["R1"]
    assert part.fitted is fitted
    assert part.value == value.replace("%37%", "%")
    assert kinds(netlist) == ([] if fitted else ["not-fitted"])


@construct("A6 fit state by property")
@pytest.mark.parametrize(
    ("name", "text", "fitted"),
    [
        ("DNP", "yes", False),
        ("DNP", "no", True),
        ("Fitted", "no", False),
        ("Status", "DNI", False),
        ("Status", "ok", True),
    ],
)
def test_fit_by_property(name: str, text: str, fitted: bool) -> None:
    netlist = read(f'(instance R1 {R} (property {name} (string "{text}")))')
    assert netlist.parts["R1"].fitted is fitted


@construct("A5 a value that may hold _ for a point is reported")
def test_underscore_for_point() -> None:
    netlist = read(
        f'(instance R1 {R} (property ModuleValue (string "R_0805")) (property VALUE (string "4_7k")))'
    )
    assert netlist.parts["R1"].value == "4_7k"
    assert kinds(netlist) == ["value-ambiguous"]


@construct("A5 text fields that hold name and value")
def test_text_fields() -> None:
    netlist = read(
        f'(instance R1 {R} (property Field2Value (string "TOL=1%")) (property Field3Value '
        '(string "a=b")) (property Power (string "Power=1W")))'
    )
    assert netlist.parts["R1"].attributes == {"tolerance": "1%", "field3value": "a=b", "power": "1W"}


@construct("A5 sections of which the first leaves a shared pin open")
def test_section_that_leaves_a_pin_open() -> None:
    netlist = read(
        half("I1", '(designator "U1A") (designator "U1")', ("3", "1", "8"))
        + half("I2", '(designator "U1B") (designator "U1")', ("5", "7", "8"))
        + "(net VCC (joined (portRef V (instanceRef I2))))",
        more=DUAL,
    )
    assert pins(netlist) == {"VCC": ["U1.8"]}
    assert kinds(netlist) == []
