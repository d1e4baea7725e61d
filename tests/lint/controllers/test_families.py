"""Every profile in the folder: complete, consistent, sourced and free of makers' names."""

from __future__ import annotations

import re
from pathlib import Path

import pytest
from pwmlint.lint import controllers
from pwmlint.lint.controllers import Figure, families, generic_number, load, plain_name

PROFILES = [(family, number) for family in families() for number in (None, *load(family).generic_numbers)]

# What the checks ask of every controller with this class's pins.
FIGURES_OF_494 = [
    "reference.voltage",
    "reference.load",
    "reference.line-regulation",
    "reference.load-regulation",
    "reference.short-circuit",
    "supply.recommended",
    "supply.absolute",
    "supply.current",
    "output.collector-voltage",
    "output.collector-voltage-absolute",
    "output.current",
    "output.current-absolute",
    "output.saturation-common-emitter",
    "output.saturation-follower",
    "output.leakage",
    "output-control.current",
    "amplifier.offset",
    "amplifier.offset-current",
    "amplifier.bias-current",
    "amplifier.gain",
    "amplifier.common-mode-low",
    "amplifier.common-mode-headroom",
    "feedback.sink",
    "feedback.source",
    "feedback.control-range",
    "feedback.external-sink",
    "feedback.zero-duty",
    "dead-time.useful-voltage",
    "dead-time.zero-duty-threshold",
    "dead-time.bias-current",
    "dead-time.least",
    "dead-time.absolute-voltage",
    "dead-time.guaranteed-duty",
    "oscillator.constant",
    "oscillator.frequency",
    "oscillator.deviation",
    "oscillator.timing-resistor",
    "oscillator.timing-capacitor",
    "oscillator.ramp",
    "soft-start.cycles",
]

PRACTICES_OF_494 = [
    "reference.bypass",
    "supply.bypass",
    "output-control.series",
    "sense-resistor",
    "feedback.reference",
    "feedback.thevenin",
]


def has_use(figure: Figure) -> bool:
    """A figure serves as a limit or as a spread, else nobody can use it."""
    sides = [side for side in (figure.minimum, figure.maximum) if side is not None]
    return bool(sides) or figure.spread().nominal == figure.typical


def test_no_two_families_share_a_generic_number():
    numbers = [number for family in families() for number in load(family).generic_numbers]
    assert len(set(numbers)) == len(numbers)


def test_the_494_class_is_there():
    assert "494" in families()


@pytest.mark.parametrize(("family", "variant"), PROFILES)
class TestEveryProfile:
    def test_every_figure_has_unit_and_source(self, family: str, variant: str | None):
        profile = load(family, variant)
        for name, figure in {**profile.figures, **profile.practices}.items():
            assert figure.source.strip(), name
            assert figure.unit in {"V", "A", "ohm", "F", "H", "s", "Hz", "W", "J", "degC", "K", ""}, name
            assert has_use(figure), name

    def test_pins_are_1_to_n_and_distinct(self, family: str, variant: str | None):
        profile = load(family, variant)
        assert {int(pin.number) for pin in profile.pins} == set(range(1, profile.package_pins + 1))
        assert len({pin.role for pin in profile.pins}) == profile.package_pins

    def test_names_stay_unambiguous_once_plain(self, family: str, variant: str | None):
        names = [plain_name(name) for pin in load(family, variant).pins for name in (pin.name, *pin.aliases)]
        assert all(names)
        assert sorted({name for name in names if names.count(name) > 1}) == []

    def test_no_name_is_a_pin_number(self, family: str, variant: str | None):
        profile = load(family, variant)
        assert not set(profile.roles_by_name()) & set(profile.roles_by_number())

    def test_every_pin_that_must_connect_has_advice(self, family: str, variant: str | None):
        for pin in load(family, variant).pins:
            assert pin.advice.endswith("."), pin.name

    def test_the_generic_numbers_find_the_family(self, family: str, variant: str | None):
        number = variant or load(family).generic_numbers[0]
        assert generic_number(f"xx{number}CN") == (family, number)

    def test_practices_do_not_pass_for_published_figures(self, family: str, variant: str | None):
        for name, practice in load(family, variant).practices.items():
            assert practice.source == "common practice, no source" or "from memory" in practice.source, name


@pytest.mark.parametrize("number", load("494").generic_numbers)
class TestThe494Class:
    def test_has_what_the_checks_ask_for(self, number: str):
        profile = load("494", number)
        assert [name for name in FIGURES_OF_494 if name not in profile.figures] == []
        assert [name for name in PRACTICES_OF_494 if name not in profile.practices] == []

    def test_dead_time_models_agree_with_the_published_ends(self, number: str):
        profile = load("494", number)
        least = profile.figure("dead-time.least").spread()
        for model in profile.dead_time_models:
            assert least.minimum <= model.dead_time(0) <= least.maximum, model.name
            assert model.dead_time(3.3) == 1, model.name
            assert model.dead_time(1.5) < 0.6, model.name

    def test_currents_into_the_pins_keep_their_sign(self, number: str):
        profile = load("494", number)
        assert profile.figure("dead-time.bias-current").spread().maximum <= 0
        bias = profile.figure("amplifier.bias-current").spread()
        assert bias.minimum == -bias.maximum, "the printed figure has no sign: both must be covered"


def own_profile_texts() -> list[tuple[str, str]]:
    folder = Path(controllers.__file__).parent
    return [(path.name, path.read_text(encoding="utf-8")) for path in sorted(folder.glob("*.toml"))]


@pytest.mark.parametrize(("name", "text"), own_profile_texts())
def test_no_part_number_with_a_makers_prefix(name: str, text: str):
    numbers = "|".join(number for family in families() for number in load(family).generic_numbers)
    assert re.findall(rf"[A-Za-z]+(?:{numbers})\b", text) == [], name
