"""Each construct of EDIF 2 0 0 that board exporters write, one by one, in small files around an orchard."""

from __future__ import annotations

from collections.abc import Iterable

import pytest
from pwmlint.grammar.edif import read_edif
from pwmlint.grammar.netlist import Netlist, Part

construct = pytest.mark.construct

PARTS = """
(external PARTS (edifLevel 0) (technology (numberDefinition))
 (cell R (cellType GENERIC) (view V (viewType NETLIST) (interface (port &1) (port &2))))
 (cell AMP (cellType GENERIC) (view V (viewType NETLIST) (interface
  (port (rename IN_P "IN+") (designator "3")) (port OUT (designator "1")))))
 (cell (rename D8 "Octal (driver)") (cellType GENERIC) (view V (viewType NETLIST) (interface
  (port (array (rename D "D(7:0)") 8)) (port EN))))
 (cell JOINT (cellType TIE) (view V (viewType SCHEMATIC) (interface (port A) (port B))))
 (cell RIP (cellType RIPPER) (view V (viewType SCHEMATIC) (interface (port BUS) (port BIT))))
 (cell LINK (cellType GENERIC) (view V (viewType NETLIST) (interface (port &1) (port &2) (port &3)
  (joined (portRef &1) (portRef &3))))))
"""
R = "(viewRef V (cellRef R (libraryRef PARTS)))"
AMP = "(viewRef V (cellRef AMP (libraryRef PARTS)))"
DRIVER = "(viewRef V (cellRef D8 (libraryRef PARTS)))"


def board(
    contents: str, *, interface: str = "", more: str = "", view: str = "NETLIST", head: str = ""
) -> str:
    return f"""(edif ORCHARD (edifVersion 2 0 0) (edifLevel 0) (keywordMap (keywordLevel 0)) {head}
{PARTS}
(library MAIN (edifLevel 0) (technology (numberDefinition)) {more}
 (cell TOP (cellType GENERIC) (view V (viewType {view}) (interface {interface})
  (contents {contents}))))
(design ORCHARD (cellRef TOP (libraryRef MAIN))))"""


def read(contents: str, **parts: str) -> Netlist:
    return read_edif(board(contents, **parts), "orchard.edf")


def pins(netlist: Netlist) -> dict[str, list[str]]:
    """Return for each net what is on it, as `R1.2`."""
    parts = netlist.parts
    return {
        name: [f"{part}.{parts[part].pins[i].number or parts[part].pins[i].name}" for part, i in net.pins]
        for name, net in netlist.nets.items()
    }


def only(parts: Iterable[Part]) -> Part:
    (part,) = parts
    return part


def kinds(netlist: Netlist) -> list[str]:
    return [note.kind for note in netlist.notes]


# ---------------------------------------------------------------------------------------------- A1 tokens


@construct("A1 blanks are optional next to parentheses and quotes")
def test_blanks() -> None:
    netlist = read(
        f'( instance R1{R}( property\tVALUE(string"10k")))(net A( joined( portRef &1( instanceRef R1))))'
    )
    assert netlist.parts["R1"].value == "10k"
    assert pins(netlist) == {"A": ["R1.1"]}


@construct("A1 keywords in any case")
def test_keywords_in_any_case() -> None:
    text = board(
        f'(INSTANCE R1 {R} (Property Value (STRING "1k"))) (NET A (JOINED (PORTREF &1 (INSTANCEREF R1))))'
    )
    text = (
        text.replace("edifVersion", "EDIFVersion")
        .replace("keywordMap", "keywordmap")
        .replace("(library", "(Library")
    )
    netlist = read_edif(text, "orchard.edf")
    assert pins(netlist) == {"A": ["R1.1"]}
    assert netlist.parts["R1"].value == "1k"


@construct("A1 & marks an identifier and is no part of it")
def test_ampersand() -> None:
    netlist = read(
        f"(instance &R1 {R}) (net &GND (joined (portRef 1 (instanceRef R1)) (portRef &2 (instanceRef &R1))))"
    )
    assert pins(netlist) == {"GND": ["R1.1", "R1.2"]}


@construct("A1 names that equal keywords")
def test_names_that_equal_keywords() -> None:
    netlist = read(
        f"(instance net {R}) (instance joined {R}) (instance (rename e portRef) {R})".replace(
            "(rename e portRef)", '(rename e "instance")'
        )
        + "(net string (joined (portRef &1 (instanceRef net)) (portRef &1 (instanceRef joined)) "
        "(portRef &2 (instanceRef e))))" + '(net (rename and "AND")(joined (portRef &2 (instanceRef net))))'
    )
    assert pins(netlist) == {"string": ["net.1", "joined.1", "instance.2"], "AND": ["net.2"]}


@construct("A1 mixed-case files with CR LF")
def test_carriage_returns() -> None:
    text = board(
        f'(instance R1 {R} (property VALUE (string "4\n70")))\n(net A (joined (portRef &2 (instanceRef R1))))'
    )
    netlist = read_edif(text.replace("\n", "\r\n"), "orchard.edf")
    assert netlist.parts["R1"].value == "470"
    assert netlist.nets["A"].place.line == text[: text.index("(net A")].count("\n") + 1


@construct("A1 lines that end with CR alone")
def test_carriage_returns_alone() -> None:
    text = board(f"(instance R1 {R})\n(net A (joined (portRef &2 (instanceRef R1))))")
    netlist = read_edif(text.replace("\n", "\r"), "orchard.edf")
    assert netlist.nets["A"].place.line == text[: text.index("(net A")].count("\n") + 1


@construct("A1 integers of any size and comments")
def test_big_integers() -> None:
    netlist = read(f'(comment "a (" ") b") (instance R1 {R} (property SERIAL (integer 2397562737123456789)))')
    assert netlist.parts["R1"].attributes["serial"] == "2397562737123456789"


@construct("A1 names that differ by case only are reported, not merged")
def test_case_collision() -> None:
    netlist = read(
        f"(instance R1 {R}) (net m_data_0 (joined (portRef &1 (instanceRef R1))))"
        "(net m_DATA_0 (joined)) (net OTHER (joined (portRef &2 (instanceRef r1))))"
    )
    assert pins(netlist) == {"m_data_0": ["R1.1"], "m_DATA_0": [], "OTHER": ["R1.2"]}
    assert kinds(netlist) == ["name-collision"]


@construct("A1 exact spelling goes before folded case")
def test_exact_spelling_first() -> None:
    netlist = read(
        f"(instance r1 {R}) (instance R1 {R}) (net A (joined (portRef &1 (instanceRef R1))))"
        "(net B (joined (portRef &1 (instanceRef r1))))"
    )
    assert pins(netlist) == {"A": ["R1.1"], "B": ["r1.1"]}
    assert kinds(netlist) == ["name-collision"]


@construct("A1 cells that differ by case only")
def test_cells_that_differ_by_case() -> None:
    small = "(cell r (cellType GENERIC) (view V (viewType NETLIST) (interface (port A))))"
    large = "(cell R (cellType GENERIC) (view V (viewType NETLIST) (interface (port B))))"
    netlist = read("(instance X (viewRef V (cellRef r)))", more=small + large)
    assert [pin.name for pin in netlist.parts["X"].pins] == ["A"]
    assert kinds(netlist) == ["name-collision"]


# --------------------------------------------------------------------------------------------- A2 strings


@construct("A2 no backslash escape")
def test_backslashes() -> None:
    netlist = read(
        f'(instance R1 {R} (property VALUE (string "C:\\"))) (net (rename RES "R\\E\\S\\") (joined))'
    )
    assert netlist.parts["R1"].value == "C:\\"
    assert list(netlist.nets) == ["R\\E\\S\\"]


@construct("A2 string broken at column 80")
def test_broken_strings() -> None:
    netlist = read(
        f'(instance X1 {R} (designator "C8\n0") (property VALUE (string "10\n0n"))) (net '
        '(rename N "+\n5V") (joined))'
    )
    assert only(netlist.parts.values()).reference == "C80"
    assert netlist.parts["C80"].value == "100n"
    assert list(netlist.nets) == ["+5V"]


@construct("A2 % escapes, also cut by a line break")
def test_percent_escapes() -> None:
    netlist = read(
        f'(instance R1 {R} (property VALUE (string "10K,1%3\n7%")) (property NOTE (string "a%13 10%b%034%")))'
    )
    assert netlist.parts["R1"].value == "10K,1%"
    assert netlist.parts["R1"].attributes["note"] == 'a\r\nb"'


@construct("A2 a lone % stands for itself")
def test_lone_percent() -> None:
    netlist = read(f'(instance R1 {R} (property VALUE (string "10k 1% %a% 5%")))')
    assert netlist.parts["R1"].value == "10k 1% %a% 5%"


@construct("A2 long strings with parentheses")
def test_long_strings() -> None:
    text = "see (sheet) " * 200
    netlist = read(f'(instance R1 {R} (property NOTE (string "{text}")))')
    assert netlist.parts["R1"].attributes["note"] == text.strip()


# --------------------------------------------------------------------------------------------- A3 grammar


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


# ----------------------------------------------------------------------------------------------- A4 names


@construct("A4 rename with a blank string: the identifier counts")
@pytest.mark.parametrize("blank", ['""', '"  "', '"\n"', '(stringDisplay "" (display X))'])
def test_blank_rename(blank: str) -> None:
    netlist = read(
        f'(instance (rename R1 {blank}) {R} (property VALUE (string "1k")))'
        f"(net (rename SENSE {blank}) (joined (portRef &1 (instanceRef R1))))"
    )
    assert list(netlist.parts) == ["R1"]
    assert [pin.net for pin in netlist.parts["R1"].pins] == ["SENSE", ""]


@construct("A4 rename with a stringDisplay, identifier as a name")
def test_renames() -> None:
    netlist = read(
        f'(instance (rename (name &_R1 (display X)) (stringDisplay "R 1" (display X))) {R})'
        '(net (rename (name &_3_3V (display X)) "+3.3V") (joined (portRef &1 (instanceRef &_R1))))'
    )
    assert pins(netlist) == {"+3.3V": ["R 1.1"]}


@construct("A4 rename strings need not be unique")
def test_equal_renames() -> None:
    netlist = read(
        f'(instance R1 {R}) (net (rename N1 "OUT") (joined (portRef &1 (instanceRef R1))))'
        '(net (rename N2 "OUT") (joined (portRef &2 (instanceRef R1))))'
    )
    assert pins(netlist) == {"OUT": ["R1.1"], "OUT#2": ["R1.2"]}
    assert kinds(netlist) == ["name-collision"]


@construct("A4 names of bus bits")
@pytest.mark.parametrize(
    ("display", "first"),
    [("a(7:0)", "a(7)"), ("a[7:0]", "a[7]"), ("B[3..0]", "B[3..0][0]"), ("a<0:7>", "a<0>"), ("a", "a[0]")],
)
def test_bus_bits(display: str, first: str) -> None:
    netlist = read(
        f'(instance U1 {DRIVER}) (net (array (rename N "{display}") 8) (joined (portRef D (instanceRef U1))))'
    )
    assert next(iter(netlist.nets)) == first


# ------------------------------------------------------------------------------- A5 parts, pins, hierarchy


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


SYMBOLS = """
(cell GND_POWER (cellType GENERIC) (view V (viewType SCHEMATIC) (interface (port P))))
(cell FLAG (cellType GENERIC) (view V (viewType SCHEMATIC)
 (interface (port P (property SupplyType (string "ground"))))))
(cell OFFPAGE_L (cellType GENERIC) (view V (viewType SCHEMATIC) (interface (port P))))
(cell DOT (cellType GENERIC) (view V (viewType SCHEMATIC) (interface (port P))))
"""


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


# ---------------------------------------------------------------------------------------------- A6 values


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
