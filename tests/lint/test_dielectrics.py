from __future__ import annotations

import pytest
from pwmlint.lint.dielectrics import dielectric_of, is_polarised


@pytest.mark.parametrize(
    ("text", "name"),
    [
        ("X7R", "ceramic"),
        ("1nF,50V,C0G", "ceramic"),
        ("10u/X5R", "ceramic"),
        ("C0G(NP0)", "ceramic"),
        ("aluminium", "aluminium"),
        ("Aluminum Electrolytic", "aluminium"),
        ("polymer aluminium", "aluminium-polymer"),
        ("tantalum", "tantalum-solid"),
        ("10uF 16V TA", "tantalum-solid"),
        ("Tantalum-Polymer", "tantalum-polymer"),
        ("wet tantalum", "tantalum-wet"),
        ("metallised polypropylene", "film"),
        ("PET", "film"),
        ("silver mica", "mica"),
    ],
)
def test_words_name_the_dielectric(text: str, name: str):
    assert dielectric_of(text) == name


@pytest.mark.parametrize("text", ["", "470u", "CAP", "petrol", "ALPHA", "TAP 1"])
def test_other_words_name_none(text: str):
    assert dielectric_of(text) is None


def test_the_first_telling_text_counts():
    assert dielectric_of("", "film", "aluminium") == "film"


@pytest.mark.parametrize(
    "texts", [("aluminium",), ("", "10u", "CAP POL"), ("C_Polarized",), ("tantalum", "10u"), ("CP",)]
)
def test_polarised(texts: tuple[str, ...]):
    assert is_polarised(*texts)


@pytest.mark.parametrize(
    "texts", [("",), ("470u",), ("X7R",), ("bipolar electrolytic",), ("Non-Polar", "aluminium"), ("CAP",)]
)
def test_not_polarised(texts: tuple[str, ...]):
    assert not is_polarised(*texts)
