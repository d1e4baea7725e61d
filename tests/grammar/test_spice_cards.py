"""Dot cards: parameters, conditions, globals, models, skipped blocks: formats B2, and B5's expressions."""

from __future__ import annotations

import pytest
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.netlist import Netlist, Place
from pwmlint.grammar.spice import read_spice


def read(*lines: str) -> Netlist:
    return read_spice("\n".join(("cider press", *lines)) + "\n", "press.cir")


def errors(*lines: str) -> list[NetlistError]:
    with pytest.raises(NetlistError) as caught:
        read(*lines)
    return [caught.value, *caught.value.also]


@pytest.mark.construct("B2 .param: several on a card, forward references, quotes")
def test_parameters_may_refer_forward() -> None:
    netlist = read(
        "R1 a b {top}",
        "R2 b 0 'bottom'",
        "C1 b 0 {c1}",
        ".param top={2*bottom} bottom = 4.7k",
        '.PARAM c1=\'1n*gain\' gain=2*5 part="494" kind="BC547"',
    )
    assert [netlist.parts[name].value for name in ("R1", "R2", "C1")] == ["9400", "4700", "1e-08"]
    assert netlist.parts["R1"].attributes == {"expression": "{top}"}


def test_attributes_may_be_expressions() -> None:
    netlist = read("R1 a b 1k p={w/2} tol='w' mfg=hive package='TO-220' part='1N4148'", ".param w=2")
    expected = {"p": "1", "tol": "2", "mfg": "hive", "package": "TO-220", "part": "1N4148"}
    assert netlist.parts["R1"].attributes == expected


def test_an_attribute_with_an_unknown_name_is_an_error_at_its_place() -> None:
    (error,) = errors("R1 a b 1k p=1 tol={2*nosuch}")
    assert (error.message, error.place) == ("unknown name nosuch", Place("press.cir", 2, 22))


@pytest.mark.construct("B2 .param cycle")
def test_a_cycle_of_parameters_is_an_error_with_a_place() -> None:
    (error,) = errors(".param a={b} b={c}", ".param c={a+1}", "R1 x 0 1k")
    assert error.message == "the parameter a depends on itself: a -> b -> c -> a"
    assert error.place == Place("press.cir", 2, 10)
    (error,) = errors(".param a={a}", "R1 x 0 {a}")
    assert "a -> a" in error.message


@pytest.mark.construct("B2 .param with an unknown name")
def test_an_unknown_name_is_an_error_with_a_place() -> None:
    found = errors(".param a={2 * nosuch}", "R1 x 0 {a}", "R2 x 0 {1k+other}")
    assert [(error.message, error.place.line, error.place.column) for error in found] == [
        ("unknown name nosuch", 2, 15),
        ("unknown name other", 4, 12),
    ]
    assert found[1].excerpt == "R2 x 0 {1k+other}"


@pytest.mark.construct("B5 expressions that cannot be read")
@pytest.mark.parametrize(
    "value",
    [
        "{1 +}",
        "{(1}",
        "{1 2}",
        "{1/0}",
        "{1e400}",
        "{10**10**10}",
        "{sqrt(-1)}",
        "{foo(1)}",
        "{max(1)}",
        "{}",
        "{@}",
    ],
)
def test_broken_expressions_are_errors(value: str) -> None:
    (error,) = errors(f"R1 x 0 {value}")
    assert error.place.line == 2
    assert error.place.column > 7
    assert error.expected
    assert error.remedy


@pytest.mark.construct("B5 expressions that only a simulation can evaluate stay symbolic")
@pytest.mark.parametrize("value", ["{V(a)*2}", "{1k+I(V1)}", "{time*1k}", "{d}"])
def test_what_depends_on_the_circuit_stays_as_written(value: str) -> None:
    netlist = read(f"R1 x 0 {value}", ".param d={V(a)}")
    assert netlist.parts["R1"].value == value


def test_the_last_of_two_definitions_holds() -> None:
    assert read(".param a=1", ".param a=2", "R1 x 0 {a}").parts["R1"].value == "2"


@pytest.mark.construct("B2 .func")
def test_functions_of_the_list() -> None:
    netlist = read(
        ".func twice(x) {2*x*scale}",
        ".param half(y)='y/2'",
        ".param scale=10",
        ".func both(x, y) = {twice(x)+half(y)}",
        "R1 a 0 {both(1,4)}",
    )
    assert netlist.parts["R1"].value == "22"
    assert errors(".func twice {2*x}", "R1 a 0 1k")[0].message.startswith("a function without arguments")
    assert "deeper" in errors(".func f(x) {f(x)}", "R1 a 0 {f(1)}")[0].message


@pytest.mark.construct("B2 .step")
def test_a_stepped_parameter_takes_its_first_value() -> None:
    netlist = read(
        ".step param rload list 47 100", ".step dec param cx 1n 1u 5", "R1 a 0 {rload}", "C1 a 0 {cx}"
    )
    assert (netlist.parts["R1"].value, netlist.parts["C1"].value) == ("47", "1e-09")
    assert [note.kind for note in netlist.notes] == ["assumption", "assumption"]
    assert read(".param r=1", ".step param r 2 3 4", "R1 a 0 {r}").parts["R1"].value == "1"


@pytest.mark.construct("B2 .if, .elseif, .else, .endif")
@pytest.mark.parametrize(("kind", "value"), [("1", "10"), ("2", "20"), ("3", "30")])
def test_conditions_choose_parts_and_parameters(kind: str, value: str) -> None:
    netlist = read(
        ".if (kind == 1)",
        "R1 a 0 10",
        ".elseif (kind==2)",
        ".if 1",
        "R1 a 0 {r}",
        ".endif",
        ".param r=20",
        ".else",
        "R1 a 0 30",
        ".ENDIF",
        f".param kind={kind}",
        "R9 a 0 1",
    )
    assert netlist.parts["R1"].value == value
    assert list(netlist.parts) == ["R1", "R9"]


def test_a_condition_that_no_branch_fulfils_leaves_nothing() -> None:
    assert list(read(".if (0)", "R1 a 0 10", ".endif", "R2 a 0 1").parts) == ["R2"]
    assert errors(".if (what)", "R1 a 0 1", ".endif", "R2 a 0 1")[0].message == "unknown name what"


@pytest.mark.construct("B2 .global")
def test_global_nets_reach_into_subcircuits() -> None:
    netlist = read(
        ".global VCC vee",
        "X1 a s",
        ".subckt s p",
        "R1 p vcc 1k",
        "R2 p n 1k",
        "R3 p $G_DPWR 1",
        "R4 p 0 1",
        ".ends",
        "R9 Vcc $N_1 1",
    )
    assert netlist.nets["vcc"].pins == [("X1/R1", 1), ("R9", 0)]
    assert {"X1/n", "$G_DPWR", "0"} <= set(netlist.nets)


@pytest.mark.construct("B2 .connect")
def test_connected_nets_are_one() -> None:
    netlist = read("R1 a b 1k", "R2 c d 1k", ".connect b c", ".connect C e", "R3 e 0 1")
    assert [pin.net for pin in netlist.parts["R3"].pins] == ["b", "0"]
    assert netlist.nets["b"].pins == [("R1", 1), ("R2", 0), ("R3", 0)]


@pytest.mark.construct("B2 .model: parentheses optional, AKO")
def test_models_give_the_kind_of_semiconductor() -> None:
    netlist = read(
        "Q1 c b e BC547",
        ".model BC547 NPN(Bf=200)",
        ".MODEL dx D Is=1f",
        ".model q2 ako:BC547 npn(Bf=300)",
        ".model q3 AKO: BC547 PNP (Bf=1)",
        ".model 1845AMP VDMOS(Rg=3",
        "+ pchan)",
    )
    assert netlist.models == {"bc547": "npn", "dx": "d", "q2": "npn", "q3": "pnp", "1845amp": "vdmos"}


@pytest.mark.construct("B2 .control, .data and .aliases blocks are skipped")
def test_blocks_without_elements_are_skipped() -> None:
    netlist = read(
        "R1 a b 1k",
        ".control",
        "plot v(a) {",
        "R2 a b 1k",
        ".endc",
        ".data sweep",
        "r c",
        "1 2",
        ".enddata",
        ".aliases",
        "R_R3 R3(1=a 2=b )",
        ".endaliases",
        "R4 a b 1k",
    )
    assert list(netlist.parts) == ["R1", "R4"]
    assert [(note.kind, note.subject) for note in netlist.notes] == [
        ("skipped", ".control"),
        ("skipped", ".data"),
        ("skipped", ".aliases"),
    ]


@pytest.mark.construct("B2 cards of analyses, and unknown cards")
def test_cards_of_analyses_are_passed_over_and_others_noted() -> None:
    netlist = read(
        ".tran 1u 1m",
        ".options reltol=1e-4",
        ".ic v(a)=0",
        ".meas tran x avg v(a)",
        ".probe",
        ".backanno",
        ".temp 27",
        ".frobnicate all",
        ".Prot",
        ".unprot",
        "R1 a b 1k",
    )
    assert [(note.kind, note.subject) for note in netlist.notes] == [("skipped", ".frobnicate")]


@pytest.mark.construct("B2 .alter begins another list")
def test_an_alteration_is_not_read() -> None:
    netlist = read("R1 a b 1k", ".alter", "R1 a b 2k")
    assert (list(netlist.parts), netlist.parts["R1"].value) == (["R1"], "1k")
    assert [note.subject for note in netlist.notes] == [".alter"]


@pytest.mark.parametrize(
    ("lines", "message", "line"),
    [
        ([".subckt s a", "R1 a 0 1"], "`.subckt` is never closed", 2),
        (["R1 a b 1", ".ends"], "`.ends` without its `.subckt`", 3),
        ([".if (1)", "R1 a b 1"], "`.if` is never closed", 2),
        (["R1 a b 1", ".else"], "`.else` without its `.if`", 3),
        (["R1 a b 1", ".endif"], "`.endif` without its `.if`", 3),
        (["R1 a b 1", ".endl"], "`.endl` without its `.lib`", 3),
        (["R1 a b 1", ".control", "run"], "`.control` is never closed", 3),
        ([".subckt", ".ends", "R1 a b 1"], "a subcircuit without a name", 2),
        ([".subckt s a", "R1 a 0 1", ".end"], "`.subckt` is never closed", 2),
        ([".subckt s a", ".if (1)", "R1 a 0 1", ".ends"], "`.subckt` is never closed", 2),
        ([".if (1)", ".subckt s", ".endif"], "`.if` is never closed", 2),
    ],
)
def test_unbalanced_blocks(lines: list[str], message: str, line: int) -> None:
    found = errors(*lines)[0]
    assert (found.message, found.place.line) == (message, line)
    assert found.expected
    assert found.remedy


def test_blocks_left_open_hide_no_other_errors() -> None:
    found = errors("R1 a", ".subckt s a", ".if (1)", "R2 a b {2*x}", ".end")
    assert [error.place.line for error in found] == [2, 3, 4]
    found = errors("R1 a", "R2 a b {2*x}", ".subckt s a", ".subckt t a")
    assert [error.place.line for error in found] == [2, 3, 4, 5]


def test_a_block_that_is_closed_inside_another_is_an_error() -> None:
    found = errors(".subckt s a", ".if (1)", "R1 a 0 1", ".ends", ".endif", ".ends", "R2 a b 1")
    assert [error.message for error in found] == ["`.ends` inside the `.if` of line 3"]


def test_all_errors_are_told_in_one_run_and_at_most_twenty() -> None:
    found = errors("R1 a", "R2 a b {", ".ends", "R3 a b 1k", "Q1 a b", "1x")
    assert [error.place.line for error in found] == [2, 3, 4, 6, 7]
    assert len(errors(*["R1 a"] * 50)) == 20
    text = str(found[0])
    assert text.count("remedy:") == 5
    assert "  | R2 a b {\n  |        ^" in text


@pytest.mark.parametrize("text", ["", "\n\n", "title only\n", "title\n* comment\n\n.tran 1 1\n", "R1 a b 1k"])
def test_a_list_without_parts_is_an_error(text: str) -> None:
    with pytest.raises(NetlistError, match=r"empty|no part") as caught:
        read_spice(text, "press.cir")
    assert caught.value.place == Place("press.cir", 0, 0)
    assert caught.value.remedy
