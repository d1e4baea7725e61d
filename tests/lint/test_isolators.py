from __future__ import annotations

import pytest
from pwmlint.lint.isolators import is_opto_coupler, is_safety_capacitor


@pytest.mark.parametrize(
    ("reference", "texts"),
    [
        ("OK1", ()),
        ("psu/ISO2", ("",)),
        ("U2", ("4N25",)),
        ("U2", ("", "OPTO-COUPLER")),
        ("U3", ("817",)),
        ("U4", ("digital isolator",)),
    ],
)
def test_isolators(reference: str, texts: tuple[str, ...]):
    assert is_opto_coupler(reference, *texts)


@pytest.mark.parametrize(("reference", "texts"), [("U1", ("494",)), ("U2", ("8170",)), ("R1", ("10k",))])
def test_other_circuits(reference: str, texts: tuple[str, ...]):
    assert not is_opto_coupler(reference, *texts)


def test_capacitors_of_class_y():
    # IEC 60384-14
    assert is_safety_capacitor("2.2nF Y1")
    assert is_safety_capacitor("", "X1/Y2")
    assert not is_safety_capacitor("2.2nF")
    assert not is_safety_capacitor("Y5V")
