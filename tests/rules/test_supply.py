"""The rules on the supply, on the controller of a frost fan."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from pwmlint.grammar import read
from pwmlint.lint import Outcome, Verdict
from pwmlint.lint.review import review_netlist
from pwmlint.rules.supply import bypass, supply_range

Ask = Callable[..., list[Verdict]]


def board(*more: str, supply: str = "VIN", number: str = "494") -> str:
    """Return the fan's controller as a SPICE-style list; `supply` is the net of its supply pin."""
    return "\n".join(
        [
            "frost fan",
            f"U1 FB SET COMP DTC CT RT 0 DRV 0 0 DRV {supply} 0 VREF VREF 0 {number}",
            f"J1 {supply} 0 BATTERY",
            "R5 RT 0 12k",
            "C5 CT 0 10n",
            "R15 DTC 0 1k",
            f"R16 {supply} DRV 1k",
            *more,
            ".end",
            "",
        ]
    )


def rail(voltage: str, net: str = "VIN") -> str:
    return f'[rails."{net}"]\nvoltage = "{voltage}"\n'


# ------------------------------------------------------------------------------------------------ range


def test_a_rail_of_the_brief_inside_the_range_passes_with_its_figures(ask: Ask) -> None:
    # second sources' data sheets: 7 V to 40 V recommended
    (verdict,) = ask("supply.range", board(), brief=rail("21 V .. 29 V"))
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert (verdict.measured.minimum, verdict.measured.maximum, verdict.measured.unit) == (21.0, 29.0, "V")
    assert verdict.limit is not None
    assert (verdict.limit.minimum, verdict.limit.maximum) == (7.0, 40.0)
    assert verdict.margin == pytest.approx((40 - 29) / 40)
    assert verdict.pins == ("supply",)


def test_the_ends_of_the_recommended_range_belong_to_it(ask: Ask) -> None:
    (verdict,) = ask("supply.range", board(), brief=rail("7 V .. 40 V"))
    assert verdict.outcome is Outcome.PASS
    assert verdict.margin == 0


@pytest.mark.parametrize("voltage", ["6 V .. 15 V", "5 V", "6.9 V .. 15 V"])
def test_a_rail_that_sinks_too_low_fails(ask: Ask, voltage: str) -> None:
    (verdict,) = ask("supply.range", board(), brief=rail(voltage))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.remedy == "feed VCC from a rail that stays above 7.00 V"


def test_a_rail_beyond_the_absolute_maximum_fails_against_it(ask: Ask) -> None:
    # 41 V absolute maximum (SLVS074, from memory)
    (verdict,) = ask("supply.range", board(), brief=rail("21 V .. 42 V"))
    assert verdict.outcome is Outcome.FAIL
    assert verdict.limit is not None
    assert (verdict.limit.minimum, verdict.limit.maximum) == (None, 41.0)
    assert "absolute maximum" in verdict.message


def test_a_rail_between_recommended_and_absolute_maximum_fails(ask: Ask) -> None:
    (verdict,) = ask("supply.range", board(), brief=rail("21 V .. 40.5 V"))
    assert verdict.outcome is Outcome.FAIL
    assert verdict.limit is not None
    assert verdict.limit.maximum == 40.0
    assert "keep VCC below 40.0 V" in verdict.remedy


def test_a_source_of_the_list_tells_the_voltage(ask: Ask) -> None:
    (verdict,) = ask("supply.range", board("V1 VIN 0 24"))
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.nominal == 24.0


def test_a_name_tells_the_voltage_as_an_assumption(ask: Ask) -> None:
    (verdict,) = ask("supply.range", board(supply="+12V"))
    assert verdict.outcome is Outcome.PASS
    assert any("by its name" in assumption for assumption in verdict.assumptions)


@pytest.mark.parametrize(("net", "key"), [("+40V", '"+40V"'), ("7V0", "7V0")])
def test_a_spread_that_only_a_name_suggests_is_for_a_person_to_judge(ask: Ask, net: str, key: str) -> None:
    (verdict,) = ask("supply.range", board(supply=net))
    assert (verdict.outcome, verdict.level) == (Outcome.REVIEW, None)
    assert verdict.needs == (f'brief: [rails.{key}] voltage = "..."',)


def test_a_name_whose_nominal_voltage_is_outside_fails(ask: Ask) -> None:
    (verdict,) = ask("supply.range", board(supply="5V"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")


def test_an_unknown_rail_is_open_and_named(ask: Ask) -> None:
    (verdict,) = ask("supply.range", board())
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == ('brief: [rails.VIN] voltage = "..."',)


# ----------------------------------------------------------------------------------------------- bypass


@pytest.mark.parametrize(
    "parts",
    [
        pytest.param(("C1 VIN 0 100n",), id="100 nF"),
        pytest.param(("C1 VIN 0 470u", "C2 VIN 0 100n"), id="beside an electrolytic"),
        pytest.param(("C1 VIN 0 47n", "C2 VIN 0 68n"), id="two that add up"),
        pytest.param(("C1 VIN 0 10u",), id="unmarked, 10 uF"),
        pytest.param(("C1 VIN 0 22u dielectric=X7R",), id="large and marked ceramic"),
        pytest.param(("C1 0 VIN 100n tol=20%",), id="the other way round"),
    ],
)
def test_a_bypass_passes(ask: Ask, parts: tuple[str, ...]) -> None:
    (verdict,) = ask("supply.bypass", board(*parts))
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.minimum >= 100e-9  # common practice, no source


def test_a_bypass_that_is_too_small_fails_as_a_warning(ask: Ask) -> None:
    (verdict,) = ask("supply.bypass", board("C1 VIN 0 10n"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "warning")
    assert verdict.formula == "C1 10.0 nF"
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(10e-9)
    assert "100 nF, ceramic" in verdict.remedy


@pytest.mark.parametrize(
    "part",
    [
        pytest.param("C1 VIN 0 470u", id="by size"),
        pytest.param("C1 VIN 0 1u dielectric=aluminium", id="as marked"),
    ],
)
def test_an_electrolytic_alone_fails_where_the_reference_has_a_bypass(ask: Ask, part: str) -> None:
    (verdict,) = ask("supply.bypass", board(part, "C9 VREF 0 100n"))
    assert verdict.outcome is Outcome.FAIL
    assert "C1 taken for electrolytic" in verdict.message
    assert verdict.parts == ("C1",)


def test_a_capacitor_from_the_supply_to_elsewhere_is_no_bypass(ask: Ask) -> None:
    (verdict,) = ask("supply.bypass", board("C1 VIN DRV 100n", "C9 VREF 0 100n"))
    assert verdict.outcome is Outcome.FAIL


def test_a_sketch_without_any_bypass_is_for_a_person_to_judge(ask: Ask) -> None:
    (verdict,) = ask("supply.bypass", board())
    assert verdict.outcome is Outcome.REVIEW
    assert "drawn without them, or forgotten" in verdict.message


def test_a_capacitor_without_a_value_leaves_it_open(ask: Ask) -> None:
    (verdict,) = ask("supply.bypass", board("C1 VIN 0"))
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == ("a value for C1",)


def test_a_supply_pin_on_ground_is_asked_elsewhere(tmp_path: Path) -> None:
    path = tmp_path / "fan.cir"
    path.write_text(board(supply="0"), encoding="utf-8")
    assert review_netlist(read(path), rules=[bypass]).verdicts == ()
    (verdict,) = review_netlist(read(path), rules=[supply_range]).verdicts
    assert verdict.outcome is Outcome.FAIL
