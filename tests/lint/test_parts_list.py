import time
from collections.abc import Callable
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar.errors import NetlistError
from pwmlint.lint.parts_list import PartsList, PartsListError, read_parts_list

FROST_FAN = '''\
Reference,Value,Tolerance,Power,Voltage,Current,Package,Dielectric,Temperature coefficient,Supplier
R1-R3,4k7,1%,1/4 W,,,0603,,100 ppm/K,any
R7,0.1,5,2 W,,,2512,,50,any
"C1, C2",100nF,K,,50V,,0805,X7R,,any
C3,470uF,-20/+80%,,35,1.9 A,radial,,,any
L1,47uH,20 %,-,n/a,"3.1",,,,"says ""any"""
'''

Write = Callable[[str | bytes], Path]


@pytest.fixture
def write(tmp_path: Path) -> Write:
    def _write(text: str | bytes) -> Path:
        path = tmp_path / "fan.parts.csv"
        path.write_bytes(text.encode() if isinstance(text, str) else text)
        return path

    return _write


def refused(path: Path) -> PartsListError:
    with pytest.raises(PartsListError) as caught:
        read_parts_list(path)
    return caught.value


def test_a_whole_list(write: Write) -> None:
    parts = read_parts_list(write(FROST_FAN))
    assert list(parts.rows) == ["R1", "R2", "R3", "R7", "C1", "C2", "C3", "L1"]
    first = parts.rows["R2"]
    assert (first.value, first.package) == ("4k7", "0603")
    assert first.tolerance == 0.01
    assert first.power == 0.25
    assert first.voltage is None
    assert first.temperature_coefficient == 100.0
    assert (first.place.line, first.place.column) == (2, 1)
    assert parts.rows["R7"].tolerance == 0.05
    assert parts.rows["R7"].power == 2.0
    ceramic = parts.rows["C2"]
    assert (ceramic.tolerance, ceramic.voltage, ceramic.dielectric) == (0.1, 50.0, "X7R")
    assert (ceramic.place.line, ceramic.place.column) == (4, 2)
    electrolytic = parts.rows["C3"]
    assert electrolytic.tolerance_range == (-0.2, 0.8)
    assert electrolytic.tolerance == 0.8
    assert (electrolytic.voltage, electrolytic.current) == (35.0, 1.9)
    choke = parts.rows["L1"]
    assert (choke.power, choke.voltage, choke.current) == (None, None, 3.1)


def test_what_matches_no_part_and_what_has_no_row(write: Write) -> None:
    parts = read_parts_list(write(FROST_FAN))
    netlist = ["U1", "R1", "R2", "C1", "C2", "C3", "L1"]
    assert parts.unmatched(netlist) == ["R3", "R7"]
    assert parts.missing(netlist) == ["U1"]


@pytest.mark.parametrize("delimiter", [",", ";", "\t", "|"])
def test_delimiters(write: Write, delimiter: str) -> None:
    text = FROST_FAN.replace('"C1, C2"', "C1-C2").replace(",", delimiter)
    parts = read_parts_list(write(text))
    assert parts.rows["C2"].voltage == 50.0
    assert len(parts.rows) == 8


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "utf-16-le", "cp1252"])
def test_encodings_and_line_ends(write: Write, encoding: str) -> None:
    text = "Ref;Value\r\nC1;4,7 µF\r\nR1;100\r\n"
    assert read_parts_list(write(text.encode(encoding))).rows["C1"].value == "4.7 µF"


@pytest.mark.parametrize(
    ("heading", "cell", "field", "number"),
    [
        ("Power (W)", "0.25", "power", 0.25),
        ("Power [mW]", "250", "power", 0.25),
        ("Power [mW]", "0.5 W", "power", 0.5),  # the cell's own unit stands
        ("Power / W", "1/4", "power", 0.25),
        ("Wattage", "0.25", "power", 0.25),
        ("power_rating", "0.25", "power", 0.25),
        ("Rated-Voltage", "50", "voltage", 50.0),
        ("VOLTAGE (kV)", "1.5", "voltage", 1500.0),
        ("Voltage rating [V]", "1,5", "voltage", 1.5),
        ("Ripple current (mA)", "800", "current", 0.8),
        ("Current", "2,5 A", "current", 2.5),
        ("Tol. (%)", "0,1", "tolerance", 0.001),
        ("Tol. (%)", "5", "tolerance", 0.05),
        ("Tolerance / %", "±5", "tolerance", 0.05),
        ("Tolerance", "±5 %", "tolerance", 0.05),
        ("TCR", "±50", "temperature_coefficient", 50.0),
        ("Tempco (ppm/K)", "25", "temperature_coefficient", 25.0),
    ],
)
def test_headings_and_units(write: Write, heading: str, cell: str, field: str, number: float) -> None:
    parts = read_parts_list(write(f"Item;Designators;{heading}\n1;R1;{cell}\n"))
    assert getattr(parts.rows["R1"], field) == pytest.approx(number)


def test_a_unit_behind_a_comma_in_the_heading(write: Write) -> None:
    assert read_parts_list(write('RefDes,"Power, mW"\nR1,250\n')).rows["R1"].power == 0.25


@pytest.mark.parametrize(
    ("delimiter", "value", "read"),
    [(";", "4,7k", "4.7k"), (";", "0,1", "0.1"), (";", "100nF,50V", "100nF,50V"), ("|", "10,1%", "10,1%")],
)
def test_decimal_comma_of_a_value(write: Write, delimiter: str, value: str, read: str) -> None:
    parts = read_parts_list(write(f"Ref{delimiter}Value\nR1{delimiter}{value}\n"))
    assert parts.rows["R1"].value == read


def test_what_stands_above_the_headings_and_between_the_rows(write: Write) -> None:
    text = 'Cider press, revision B\n\n"Drawn by; nobody"\nRef;Value\n\nR1;10k\n;sum\n"R2\nR3";1k\n'
    parts = read_parts_list(write(text))
    assert {reference: part.place.line for reference, part in parts.rows.items()} == {
        "R1": 6,
        "R2": 8,
        "R3": 8,
    }


def test_of_two_columns_of_a_kind_the_first_filled_one_counts(write: Write) -> None:
    parts = read_parts_list(write("Ref,Footprint,Case\nR1,,0805\nR2,0603,0805\n"))
    assert [part.package for part in parts.rows.values()] == ["0805", "0603"]


def test_rows_that_agree_may_repeat_a_part(write: Write) -> None:
    parts = read_parts_list(write("Ref,Value,Supplier\nR1,10k,one\nR1,10k,other\n"))
    assert list(parts.rows) == ["R1"]
    assert parts.rows["R1"].place.line == 2


@pytest.mark.parametrize(
    ("rows", "line", "column", "message", "hint"),
    [
        ("R1,10k,1%,1 W,\nR1,11k,1%,1 W,", 3, 1, "R1 has another row, line 2", "delete or correct"),
        ("R1-R3,1k,,,\nR4,1k,,,\nR2-R5,2k,,,", 4, 1, "R2 has another row, line 2", "one row per part"),
        ("R1,10k,lots,,", 2, 8, 'not a tolerance: "lots"', "a tolerance such as 5 %"),
        ("R1,10k,0.05,,", 2, 8, "0.05 may be a fraction or a percentage", "Tolerance (%)"),
        ("R1,10k,1%,lots,", 2, 11, 'power: no power in "lots"', "0.25 W"),
        ("R1,10k,1%,5 V,", 2, 11, 'power: no power in "5 V"', "0.25 W"),
        ("R1,10k,1%,-1,", 2, 11, "power: ", "0.25 W"),
        ("R1,10k,1%,,-5", 2, 12, "voltage: a rating below zero", ""),
        ("R1,10k,1%,,1e400 V", 2, 12, "not finite", "16 V"),
        ("R1-R20000,10k,,,", 2, 1, "more than 10,000 parts", "R1-R4, R7"),
        ("R9-R1,10k,,,", 2, 1, "runs backwards", "R1-R4, R7"),
    ],
)
def test_mistakes_have_their_place(
    write: Write, rows: str, line: int, column: int, message: str, hint: str
) -> None:
    error = refused(write(f"Ref,Value,Tolerance,Power,Voltage\n{rows}\n"))
    assert (error.place.line, error.place.column) == (line, column)
    assert message in error.message
    assert hint in error.expected + error.remedy
    assert error.excerpt == rows.split("\n")[-1]


def test_all_mistakes_are_shown_in_one_run(write: Write) -> None:
    error = refused(write("Ref,Power\nR1,a\nR2,1 W\nR3,b\n"))
    assert [error.place.line, *(other.place.line for other in error.also)] == [2, 4]
    error = refused(write("Ref,Power\n" + "R1,a\n" * 100))
    assert len(error.also) == 19


@pytest.mark.parametrize("text", ["", "\n\n", "Value,Power\n10k,1 W\n", "just a note\n", "10k,1 W\n" * 30])
def test_no_column_of_references(write: Write, text: str) -> None:
    error = refused(write(text))
    assert "no column of reference designators" in str(error)
    assert "Reference" in error.remedy


def test_files_that_cannot_be_read(write: Write, tmp_path: Path) -> None:
    assert "no such file" in str(refused(tmp_path / "missing.csv"))
    assert "folder" in str(refused(tmp_path))
    assert "larger than" in str(refused(write("x" * 5_000_001)))
    assert "binary" in str(refused(write(b"PK\x03\x04\x00\x00\x00" * 9)))
    assert isinstance(refused(tmp_path), NetlistError)


def test_cells_beyond_all_size(write: Write) -> None:
    error = refused(write('Ref,Value\nR1,1k\nR2,"' + "1" * 200_000 + "\n"))
    assert error.place.line == 3
    assert "R1" in read_parts_list(write("x" * 200_000 + "\nRef,Value\nR1,1k\n")).rows


@pytest.mark.parametrize("end", ["", "\n", "\n\n"])
def test_a_quotation_mark_that_is_never_closed(write: Write, end: str) -> None:
    error = refused(write(f'Ref,Value\nR1,1k\n"R2,1k\nR3,1k\nR4,1k{end}'))
    assert (error.place.line, error.message) == (3, "a quotation mark opens a cell and is never closed")
    assert error.remedy == "close the quotation mark of the cell, or shorten it"
    assert list(read_parts_list(write(f'Ref,Note\nR1,"a\nb\n"{end}')).rows) == ["R1"]
    assert list(read_parts_list(write(f'Ref,Note\nR1,5" long{end}')).rows) == ["R1"]


def test_where_nothing_is_called_the_value_the_comment_is_it(write: Write) -> None:
    rows = read_parts_list(write("Designator,Comment,Footprint\nR1,10k,0805\n")).rows
    assert (rows["R1"].value, rows["R1"].package) == ("10k", "0805")
    rows = read_parts_list(write("Designator,Comment,Value\nR1,beside U1,10k\nR2,1k,\n")).rows
    assert [part.value for part in rows.values()] == ["10k", "1k"]


@pytest.mark.parametrize("cell", ["n.a.", "NA", "TBD", "*", "unknown", "?", "-"])
def test_cells_that_say_nothing(write: Write, cell: str) -> None:
    part = read_parts_list(write(f"Ref,Value,Tolerance,P_max,V.max [V]\nR1,{cell},{cell},{cell},50\n")).rows[
        "R1"
    ]
    assert (part.value, part.tolerance, part.power, part.voltage) == ("", None, None, 50.0)


def test_the_number_of_parts_is_bounded(write: Write) -> None:
    rows = "".join(f"R{number}0000-R{number}9999,1k\n" for number in range(1, 24))
    error = refused(write("Ref,Value\n" + rows))
    assert "more than 200,000 parts" in str(error)


TEXTS = st.sampled_from(["Ref", "Value", "Power (W)", "R1", "R1-R9", "10k", "0,5", "1 %", '"', "", "\n", "X"])
MARKS = st.sampled_from([",", ";", "\t", "\n", "|"])


@settings(deadline=None, max_examples=300)
@given(
    st.lists(st.tuples(TEXTS, MARKS), max_size=20).map(lambda cells: "".join(a + b for a, b in cells))
    | st.binary(max_size=60)
    | st.text(max_size=60).map("Ref,Value,Tol\n{}".format)
)
def test_no_list_does_harm(tmp_path_factory: pytest.TempPathFactory, text: str | bytes) -> None:
    path = tmp_path_factory.getbasetemp() / "any.csv"
    path.write_bytes(text if isinstance(text, bytes) else text.encode(errors="replace"))
    try:
        parts = read_parts_list(path)
    except PartsListError as error:
        refusal = error
    else:
        assert isinstance(parts, PartsList)
        return
    assert refusal.message
    assert refusal.place.file == str(path)


@pytest.mark.parametrize(
    "row",
    [
        "R1-R9999,1k,1%",
        "R#,#k,1%",
        "R#," + "+1" * 150 + ",1%",
        'R#,"a""b",' * 50,
        "R1" + " " * 5_000 + "R2",
        "R#,1k," + "-" * 390,
        ",,,,,,,," * 20,
    ],
)
def test_hostile_lists_cost_little(write: Write, row: str) -> None:
    rows = "\n".join(row.replace("#", str(number)) for number in range(300_000 // len(row)))
    path = write("Ref,Value,Tolerance\n" + rows)
    start = time.process_time()
    try:
        read_parts_list(path)
    except PartsListError as error:
        refusal = error
        assert refusal.place.line > 1
    assert time.process_time() - start < 5.0


@pytest.mark.parametrize(
    ("heading", "cell", "fitted"),
    [
        ("Fitted", "yes", True),
        ("Fitted", "No", False),
        ("Populate", "0", False),
        ("Mounted", "", True),
        ("Fit", "DNP", False),
        ("DNP", "x", False),
        ("DNP", "DNP", False),
        ("DNP", "no", True),
        ("Do Not Populate", "1", False),
        ("Not fitted", "", True),
        ("Value", "10k DNI", False),
        ("Value", "10k", True),
    ],
)
def test_whether_a_part_is_fitted(tmp_path: Path, heading: str, cell: str, fitted: bool) -> None:
    path = tmp_path / "fan.parts.csv"
    path.write_text(f"Reference,{heading}\nR7,{cell}\n", encoding="utf-8")
    assert read_parts_list(path).rows["R7"].fitted is fitted
