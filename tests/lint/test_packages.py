from __future__ import annotations

import pytest
from pwmlint.lint.packages import package_of, smallest_usual


@pytest.mark.parametrize(
    ("text", "code"),
    [
        ("0805", "0805"),
        ("R_0603_1608Metric", "0603"),
        ("R_0201_0603Metric", "0201"),
        ("RES1206", "1206"),
        ("SM/R_2512", "2512"),
        ("1608", "0603"),
        ("chip 3216", "1206"),
    ],
)
def test_a_code_in_a_name_tells_the_case(text: str, code: str):
    found = package_of(text)
    assert found is not None
    assert found.code == code


@pytest.mark.parametrize("text", ["", "TO-220", "AXIAL-0.4", "01005", "108050", "WW5", "9999"])
def test_other_names_tell_none(text: str):
    assert package_of(text) is None


def test_the_smallest_usual_case_is_0402():
    # 1/16 W and 50 V: common makers' data
    found = smallest_usual()
    assert (found.code, found.power, found.voltage) == ("0402", 0.0625, 50.0)
