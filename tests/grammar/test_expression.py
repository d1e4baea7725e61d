"""Arithmetic of expressions: precedence, functions, bounds."""

from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar.expression import Function, evaluate, names_in
from pwmlint.grammar.expression_grammar import ExpressionError

VALUES = {"a": 2.0, "rtop": 4700.0, "x.y": 3.0}


def value(text: str) -> float:
    return evaluate(text, VALUES, {"twice": Function(("x",), "2*x"), "scaled": Function(("x",), "x*rtop")})


@pytest.mark.construct("B5 expressions: precedence")
@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("1+2*3", 7),
        ("(1+2)*3", 9),
        ("{1+2}*3", 9),
        ("-2**2", -4),
        ("2**-1", 0.5),
        ("2^3^2", 512),
        ("2**3**2", 512),
        ("8-4-2", 2),
        ("8/4/2", 1),
        ("7%4", 3),
        ("--1", 1),
        ("!0 + !5", 1),
        ("~0", 1),
        ("1<2 && 2<=2 && 3>2 && 2>=3", 0),
        ("1 || 0 && 0", 1),
        ("a==2 & a!=3 | 0", 1),
        ("a>1 ? 5 : 1/0", 5),
        ("a>1 ? a>1 ? 1 : 2 : 3", 1),
        ("0 ? 1 : 0 ? 2 : 3", 3),
        ("if(a<1, 1/0, 3)", 3),
        ("RTop*2", 9400),
        ("x.y", 3),
        ("2*pi", 2 * math.pi),
        ("1\r+\r1", 2),
    ],
)
def test_precedence(text: str, expected: float) -> None:
    assert value(text) == expected


@pytest.mark.construct("B5 numbers in expressions: scale factors and marking codes")
@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("10k", 1e4),
        ("1MEG", 1e6),
        ("1Meg5", 1.5e6),
        ("1m", 1e-3),
        ("1M", 1e-3),
        ("100mil", 2.54e-3),
        ("4k7", 4700),
        ("4R7", 4.7),
        ("10kOhm", 1e4),
        ("47uF", 47e-6),
        ("10µ", 10e-6),
        ("1e-3", 1e-3),
        ("1d3", 1e3),
        ("1.5e3k", 1.5e6),
        (".5", 0.5),
        ("5.", 5),
        ("5V", 5),
        ("1T+1G", 1.001e12),
        ("1n+1p+1f", 1.001001e-9),
    ],
)
def test_numbers(text: str, expected: float) -> None:
    assert value(text) == pytest.approx(expected, rel=1e-12)


@pytest.mark.construct("B5 expressions: functions")
@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("sqrt(16)", 4),
        ("abs(-2)+fabs(-1)", 3),
        ("min(3,1,2)+max(3,1,2)", 4),
        ("pow(2,3)", 8),
        ("pwr(-2,2)", -4),
        ("sgn(-3)+sgn(0)", -1),
        ("sign(2,-1)", -2),
        ("int(2.7)+floor(-0.5)+ceil(0.2)+round(2.4)+nint(0.6)", 5),
        ("log10(1000)+ln(exp(1))+db(10)", 24),
        ("atan2(0,1)+hypot(3,4)", 5),
        ("limit(5,0,2)+limit(7,1)", 9),
        ("uramp(-1)+uramp(2)+u(1)+stp(-1)+ustep(1)", 4),
        ("buf(1)+inv(1)", 1),
        ("gauss(10,0.1,3)+agauss(1,1,1)+unif(1,2)+aunif(1,2)+mc(2,0.1)", 15),
        ("twice(3)+TWICE(1)", 8),
        ("scaled(2)", 9400),
        ("par(1)+trunc(1.9)+fmod(7,4)", 5),
    ],
)
def test_functions(text: str, expected: float) -> None:
    assert value(text) == pytest.approx(expected)


@pytest.mark.parametrize(
    ("text", "index", "message"),
    [
        ("1+", 2, "ends too early"),
        ("", 0, "ends too early"),
        ("(1", 2, "ends too early"),
        ("1 2", 2, "unexpected `2`"),
        ("1)", 1, "unexpected `)`"),
        ("1+@", 2, "no meaning"),
        ("1+nosuch", 2, "unknown name nosuch"),
        ("1+foo(2)", 2, "unknown function foo"),
        ("sqrt(1,2)", 0, "sqrt with 2 arguments"),
        ("max(1)", 0, "max with 1 arguments"),
        ("twice(1,2)", 0, "twice with 2 arguments"),
        ("1+1/0", 2, "no finite real number"),
        ("1e400", 0, "no finite real number"),
        ("10**10**10", 0, "no finite real number"),
        ("(-8)**0.5", 1, "no finite real number"),
        ("1e308*10", 0, "no finite real number"),
        ("exp(1e6)", 0, "no finite real number"),
        ("ceil(1e308*1)+log(0)", 14, "no finite real number"),
        ("nan", 0, "unknown name nan"),
        ("inf", 0, "unknown name inf"),
    ],
)
def test_errors_have_a_place(text: str, index: int, message: str) -> None:
    with pytest.raises(ExpressionError, match=message.replace("(", r"\(").replace(")", r"\)")) as caught:
        value(text)
    assert caught.value.index == index
    assert caught.value.expected
    assert caught.value.remedy
    assert not caught.value.dynamic


def test_what_is_expected_is_told_in_words() -> None:
    with pytest.raises(ExpressionError) as caught:
        value("(1")
    assert caught.value.expected == "`)`"


@pytest.mark.parametrize("text", ["V(out)*2", "1+i(V1)", "time", "2*hertz", "table(V(a),0,0)"])
def test_what_only_a_simulation_knows(text: str) -> None:
    with pytest.raises(ExpressionError) as caught:
        value(text)
    assert caught.value.dynamic


@pytest.mark.parametrize(
    "text",
    [
        "-" * 200 + "1",
        "1**" * 200 + "1",
        "1?" * 200 + "1" + ":1" * 200,
        "sin(" * 200 + "1" + ")" * 200,
        "!" * 9000 + "1",
    ],
)
def test_nesting_is_bounded(text: str) -> None:
    with pytest.raises(ExpressionError, match="nested deeper than 100 levels"):
        value(text)


def test_long_chains_and_many_parentheses_are_no_nesting() -> None:
    assert value("+".join("1" * 4000)) == 4000
    assert value("(" * 4000 + "1" + ")" * 4000) == 1


def test_length_and_work_are_bounded() -> None:
    with pytest.raises(ExpressionError, match="10001 characters"):
        value("1" * 10001)
    functions = {f"f{n}": Function(("x",), f"f{n + 1}(x)+f{n + 1}(x)") for n in range(20)}
    functions["f20"] = Function(("x",), "x")
    with pytest.raises(ExpressionError, match="operations"):
        evaluate("f0(1)", {}, functions)
    with pytest.raises(ExpressionError, match="nested deeper"):
        evaluate("f(1)", {}, {"f": Function(("x",), "f(x)")})


def test_names_that_an_expression_asks_for() -> None:
    functions = {"f": Function(("x",), "x*Scale+g(x)"), "g": Function(("y",), "f(y)+deep")}
    assert {"rtop", "scale", "deep"} <= names_in("2*rTop + f(1k) + 3e5", functions)
    assert names_in("1k + 2meg", {}) == set()


@st.composite
def expressions(draw: st.DrawFn, depth: int = 3) -> str:
    if depth == 0:
        return repr(draw(st.floats(0.1, 100)))
    left, right = draw(expressions(depth - 1)), draw(expressions(depth - 1))
    return f"({left}{draw(st.sampled_from('+-*/'))}{right})"


@settings(deadline=None, max_examples=60)
@given(expressions())
def test_arithmetic_is_that_of_floats(text: str) -> None:
    try:
        expected = eval(text)
    except ZeroDivisionError:
        return
    assert evaluate(text, {}, {}) == expected


@settings(deadline=None, max_examples=200)
@given(st.text("0123456789.+-*/^()?:,<>=!&|{}eakmfx_ V@", max_size=60))
def test_any_text_has_a_value_or_an_error_with_a_place(text: str) -> None:
    try:
        number, index = evaluate(text, {"a": 1.0}, {}), 0
    except ExpressionError as error:
        number, index = 0.0, error.index
    assert math.isfinite(number)
    assert 0 <= index <= len(text)
