"""The derating policies as data: whole, bounded, every figure with its source."""

from __future__ import annotations

import tomllib
from pathlib import Path
from typing import Any, cast

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.lint import derating
from pwmlint.lint.brief_keys import DERATING_POLICIES
from pwmlint.lint.derating import (
    UNMARKED,
    ageing_of,
    capacitor_voltage,
    junction_limit,
    plastic_supply_limit,
    policies,
    resistor_power,
    resistor_voltage,
    semiconductor,
)

DATA: dict[str, Any] = tomllib.loads(
    Path(derating.__file__).with_name("derating.toml").read_text(encoding="utf-8")
)
DIELECTRICS = [
    name
    for name in tomllib.loads(
        Path(derating.__file__).with_name("dielectrics.toml").read_text(encoding="utf-8")
    )
    if name != "marks"
]

POLICIES = st.sampled_from(policies())


def tables(content: dict[str, Any]) -> list[dict[str, Any]]:
    """Return the innermost tables: those that hold figures."""
    inner = [cast("dict[str, Any]", value) for value in content.values() if isinstance(value, dict)]
    return [table for one in inner for table in tables(one)] if inner else [content]


def test_the_policies_are_those_that_a_brief_may_name():
    assert set(policies()) == set(DERATING_POLICIES)


@pytest.mark.parametrize("policy", policies())
def test_every_figure_has_a_source(policy: str):
    found = tables(DATA[policy])
    assert len(found) > 15
    assert all(table.get("source") for table in found)


@pytest.mark.parametrize("policy", policies())
@pytest.mark.parametrize("dielectric", [*DIELECTRICS, UNMARKED])
def test_every_policy_knows_every_dielectric(policy: str, dielectric: str):
    found = capacitor_voltage(dielectric, 25, 50, policy)
    assert 0 < found.share <= 1
    assert found.policy == policy


@settings(deadline=None, max_examples=60)
@given(POLICIES, st.floats(-60, 200), st.floats(-60, 200))
def test_a_hotter_resistor_never_has_more_power(policy: str, one: float, other: float):
    cool, hot = sorted((one, other))
    assert 0 <= resistor_power(hot, policy).share <= resistor_power(cool, policy).share <= 1


@settings(deadline=None, max_examples=100)
@given(POLICIES, st.sampled_from(DIELECTRICS), st.floats(-60, 200), st.floats(-60, 200), st.floats(1, 1000))
def test_a_hotter_capacitor_never_has_more_voltage(
    policy: str, dielectric: str, one: float, other: float, rated: float
):
    cool, hot = sorted((one, other))
    shares = [capacitor_voltage(dielectric, ambient, rated, policy).share for ambient in (hot, cool)]
    assert 0 <= shares[0] <= shares[1] <= 1


@settings(deadline=None, max_examples=60)
@given(POLICIES, st.sampled_from(["discrete", "linear-circuit", "digital-circuit"]), st.floats(80, 300))
def test_no_policy_allows_a_junction_more_than_its_rating(policy: str, kind: str, maximum: float):
    assert junction_limit(maximum, kind, policy) <= maximum


def test_a_policy_that_is_none_is_refused():
    with pytest.raises(KeyError):
        resistor_power(25, "hope")


def test_a_figure_that_a_policy_lacks_is_refused():
    with pytest.raises(KeyError):
        semiconductor("zener", "current", "ecss")
    with pytest.raises(KeyError):
        plastic_supply_limit(15, 30, "linear-circuit", "commercial")


def test_without_a_policy_the_commercial_one_counts():
    assert resistor_voltage() == resistor_voltage("commercial")
    assert ageing_of("resistor") == 0
    assert ageing_of("resistor", "nasa") > 0
