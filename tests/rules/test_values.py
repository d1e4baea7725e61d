"""The rules on values, on the controller of an irrigation pump."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]

PARTS = {
    "R5": "RT 0 12k",
    "C5": "CT 0 10n",
    "R11": "VREF SET 5.1k",
    "R12": "SET 0 5.1k",
    "R13": "OUT FB 5.1k",
    "R14": "FB 0 1.3k",
    "R15": "DTC 0 1k",
    "R16": "VBAT DRV 1k",
}


def board(*more: str, **changed: str) -> str:
    """Return the pump's controller as a SPICE-style list, with parts added and values changed."""
    parts = {name: changed.get(name, rest) for name, rest in PARTS.items()}
    return "\n".join(
        [
            "irrigation pump",
            "VBAT VBAT 0 24",
            "U1 FB SET COMP DTC CT RT 0 DRV 0 0 DRV VBAT 0 VREF VREF 0 494",
            *(f"{name} {rest}" for name, rest in parts.items()),
            "C3 COMP SET 1n",
            "L1 DRV OUT 100u",
            *more,
            ".end",
            "",
        ]
    )


# ---------------------------------------------------------------------------------------- value-missing


def test_a_board_with_all_values_passes(ask: Ask) -> None:
    (verdict,) = ask("connections.value-missing", board())
    assert verdict.outcome is Outcome.PASS


@pytest.mark.parametrize(
    ("reference", "rest"),
    [
        pytest.param("R12", "SET 0", id="reference divider"),
        pytest.param("R15", "DTC 0", id="dead time"),
        pytest.param("R5", "RT 0", id="timing resistor"),
        pytest.param("C5", "CT 0", id="timing capacitor"),
        pytest.param("R14", "FB 0", id="output divider"),
        pytest.param("R12", "SET 0 VALUE", id="unreadable"),
    ],
)
def test_a_part_in_a_solved_network_without_a_value_fails(ask: Ask, reference: str, rest: str) -> None:
    (verdict,) = ask("connections.value-missing", board(**{reference: rest}))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert (verdict.subject, verdict.parts) == (reference, (reference,))
    assert verdict.places[0].line > 3
    assert reference in verdict.message
    assert verdict.remedy


def test_a_sense_resistor_without_a_value_fails(ask: Ask) -> None:
    text = board("R20 RTN SNS 1k", "R21 RTN 0", "R22 OUT RTN 2").replace(
        "VREF VREF 0 494", "VREF VREF SNS 494"
    )
    (verdict,) = ask("connections.value-missing", text)
    assert (verdict.outcome, verdict.subject) == (Outcome.FAIL, "R21")


def test_the_parts_list_may_give_the_value(ask: Ask) -> None:
    parts = "reference,value\nR15,1k\n"
    (verdict,) = ask("connections.value-missing", board(R15="DTC 0"), parts=parts)
    assert verdict.outcome is Outcome.PASS


def test_a_part_that_no_question_asks_for_may_lack_a_value(ask: Ask) -> None:
    (verdict,) = ask("connections.value-missing", board("R30 LAMP 0", "R31 LAMP 0 1k"))
    assert verdict.outcome is Outcome.PASS


# -------------------------------------------------------------------------------------- value-preferred


@pytest.mark.parametrize(
    ("part", "take"),
    [
        # IEC 60063: E24 has 4.7 and 5.1, E96 has 4.75 and 4.87, E192 has 4.81
        pytest.param("R9 OUT 0 4.8k", "4.70 kΩ (E24) or 4.75 kΩ (E96) or 4.81 kΩ (E192)", id="4.8k"),
        # IEC 60063: 4.99 is of E96, which is sold at 1 %
        pytest.param("R9 OUT 0 4.99k tol=5%", "5.10 kΩ (E24)", id="E96 value at 5 %"),
        # IEC 60063: 4.93 is of E192, which is sold at 0.5 % and below
        pytest.param("R9 OUT 0 4.93k tol=1%", "5.10 kΩ (E24) or 4.99 kΩ (E96)", id="E192 value at 1 %"),
        pytest.param("C9 OUT 0 50n tol=10%", "51.0 nF (E24)", id="capacitor"),
    ],
)
def test_a_value_outside_its_series_is_for_a_person_to_judge(ask: Ask, part: str, take: str) -> None:
    (verdict,) = ask("connections.value-preferred", board(part))
    assert verdict.outcome is Outcome.REVIEW
    assert verdict.remedy == f"take {take}"
    assert verdict.source == "IEC 60063"


@pytest.mark.parametrize(
    "part",
    [
        pytest.param("R9 OUT 0 4.99k", id="E96 without a tolerance"),
        pytest.param("R9 OUT 0 4.99k tol=1%", id="E96 at 1 %"),
        pytest.param("R9 OUT 0 5.1k tol=0.1%", id="E24 at 0.1 %"),
        pytest.param("R9 OUT 0 4.93k tol=0.5%", id="E192 at 0.5 %"),
        pytest.param("R9 OUT 0 0.035", id="current sense"),
        pytest.param("R9 OUT 0 0", id="link"),
        pytest.param("RV9 OUT SET 0 25k", id="trimmer"),
        pytest.param("C9 OUT 0 5p", id="small capacitor"),
        pytest.param("C9 OUT 0 25u", id="large capacitor"),
        pytest.param("RLOAD OUT 0 2.3", id="a simulation's load"),
        pytest.param("R9 OUT 0", id="no value to compare"),
    ],
)
def test_values_that_are_sold_raise_no_alarm(ask: Ask, part: str) -> None:
    (verdict,) = ask("connections.value-preferred", board(part))
    assert verdict.outcome is Outcome.PASS


# -------------------------------------------------------------------------------------- value-ambiguous


@pytest.mark.parametrize(
    ("part", "says"),
    [
        # SPICE scale factors: M is milli and F is femto (Berkeley SPICE 3 manual, from memory)
        pytest.param("R9 OUT 0 1M", "M is milli", id="1M"),
        pytest.param("R9 OUT 0 4M7", "4.7e+06 ohm", id="4M7"),
        pytest.param("C9 OUT 0 1F", "F is femto", id="1F"),
    ],
)
def test_a_value_with_two_readings_fails_as_a_warning(ask: Ask, part: str, says: str) -> None:
    (verdict,) = ask("connections.value-ambiguous", board(part))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "warning")
    assert says in verdict.message
    assert verdict.parts == (part.split()[0],)


@pytest.mark.parametrize("value", ["4,7k", "4.7 k"])
def test_a_value_that_a_comma_or_a_blank_ends(ask: Ask, value: str) -> None:
    (verdict,) = ask("connections.value-ambiguous", board(f"R9 OUT 0 {value}"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "warning")
    assert verdict.remedy.endswith("such as 4.7k, with a point and without a blank")


def test_marking_codes_are_only_listed(ask: Ask) -> None:
    (verdict,) = ask("connections.value-ambiguous", board("R8 OUT 0 4k7", "R9 OUT 0 2R2"))
    assert verdict.outcome is Outcome.INFORMATIONAL
    assert verdict.parts == ("R8", "R9")
    assert '"4k7"' in verdict.message


def test_plain_values_pass(ask: Ask) -> None:
    (verdict,) = ask("connections.value-ambiguous", board("R9 OUT 0 1MEG", "C9 OUT 0 100n"))
    assert verdict.outcome is Outcome.PASS


# --------------------------------------------------------------------------------------- value-conflict

ALL = "reference,value\nR5,12k\nC5,10n\nR11-R13,5k1\nR14,1.3 kohm\nR15 R16,1000\nL1,100uH\nC3,1n\n"


def test_lists_that_agree_pass(ask: Ask) -> None:
    parts = ALL
    (verdict,) = ask("connections.value-conflict", board(), parts=parts)
    assert verdict.outcome is Outcome.PASS


def test_lists_that_differ_fail_with_both_values(ask: Ask) -> None:
    parts = ALL.replace("R14,1.3 kohm", "R14,13k")
    (verdict,) = ask("connections.value-conflict", board(), parts=parts)
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.message == "R14 is 1.30 kΩ in the netlist and 13.0 kΩ in the parts list"
    assert [place.file.rpartition(".")[2] for place in verdict.places] == ["cir", "csv"]


def test_a_difference_that_another_reading_explains_is_a_warning(ask: Ask) -> None:
    # 1M is a milliohm in a SPICE-style list, a megohm on a parts list
    parts = ALL + "R9,1M\n"
    (verdict,) = ask("connections.value-conflict", board("R9 OUT 0 1M"), parts=parts)
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "warning")


def test_what_stands_in_one_document_only_is_listed(ask: Ask) -> None:
    parts = ALL.replace("R15 R16,1000\n", "R15,1000\nR99,1k\n")
    (verdict,) = ask("connections.value-conflict", board(), parts=parts)
    assert verdict.outcome is Outcome.INFORMATIONAL
    assert verdict.message == "in the parts list only: R99; in the netlist only: R16"


def test_an_order_number_contradicts_nothing(ask: Ask) -> None:
    parts = ALL.replace("R14,1.3 kohm", "R14,see the drawing")
    (verdict,) = ask("connections.value-conflict", board(), parts=parts)
    assert verdict.outcome is Outcome.PASS


@pytest.mark.parametrize("value", ["DNP", "1k3 DNP", "not fitted"])
def test_a_part_that_only_the_parts_list_leaves_out(ask: Ask, value: str) -> None:
    parts = ALL.replace("R14,1.3 kohm", f"R14,{value}")
    (verdict,) = ask("connections.value-conflict", board(), parts=parts)
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.message == f'R14 is in the netlist, and the parts list leaves it out: "{value}"'
    assert len(verdict.places) == 2


def test_many_names_are_cut_short(ask: Ask) -> None:
    parts = ALL + "R101-R120,1k\n"
    (verdict,) = ask("connections.value-conflict", board(), parts=parts)
    assert verdict.message.endswith("R112 and 8 more")


def test_without_a_parts_list_nothing_is_asked(ask: Ask) -> None:
    assert ask("connections.value-conflict", board()) == []
