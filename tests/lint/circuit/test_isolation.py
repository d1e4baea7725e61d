from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint.circuit.isolation import way_across
from pwmlint.lint.design import Design

DesignOf = Callable[..., Design]

# A flyback: primary on the left of T1 and of the opto-coupler, secondary on the right.
APART = """
C1 VBUS PGND 100u
T1 VBUS SW SEC SGND XFMR
Q1 SW G PGND NMOS
D1 SEC VOUT DX
C2 VOUT SGND 100u
XOK1 LED SGND COLL PGND OPTO
R1 VOUT LED 1k
R2 COLL VBUS 10k
C3 PGND SGND 2.2n_Y1
"""


def test_apart(design_of: DesignOf):
    assert way_across(design_of(APART).circuit, ["VBUS"], ["VOUT"]) is None


@pytest.mark.parametrize(
    "part", ["R9 VBUS VOUT 1meg", "L9 VBUS VOUT 1m", "D9 VBUS VOUT DX", "R9 VOUT VBUS 1k"]
)
def test_a_part_straight_across_conducts(design_of: DesignOf, part: str):
    found = way_across(design_of(APART + part).circuit, ["VBUS"], ["VOUT"])
    assert found is not None
    assert found.conductive
    assert found.parts == (part.split()[0],)
    assert found.nets == ("VBUS", "VOUT")


def test_a_chain_is_shown_in_its_order(design_of: DesignOf):
    found = way_across(design_of(APART + "R8 VBUS X 1meg\nR9 X VOUT 1meg").circuit, ["VBUS"], ["VOUT"])
    assert found is not None
    assert (found.nets, found.parts) == (("VBUS", "X", "VOUT"), ("R8", "R9"))


def test_a_capacitor_that_is_not_of_class_y_does_not_conduct(design_of: DesignOf):
    found = way_across(design_of(APART + "C9 PGND SGND 2.2n").circuit, ["VBUS", "PGND"], ["VOUT", "SGND"])
    assert found is not None
    assert not found.conductive
    assert found.parts == ("C9",)


def test_one_ground_for_both_sides_is_found(design_of: DesignOf):
    found = way_across(design_of(APART.replace("PGND", "0").replace("SGND", "0")).circuit, ["VBUS"], ["VOUT"])
    assert found is not None
    assert "0" in found.nets
