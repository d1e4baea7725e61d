"""The loader of controller profiles: what it gives, and how it tells a developer of a mistake."""

from __future__ import annotations

import operator
import re
from typing import cast

import pytest
from pwmlint.lint.controllers import (
    ROLES,
    DeadTimeModel,
    Figure,
    ProfileError,
    generic_number,
    load,
    parse,
    plain_name,
)
from pwmlint.lint.quantity import Spread
from pwmlint.lint.verdict import Limit

# A family of our own: two pins are enough for a controller that only ripens cider.
CIDER = """
family = "77"
title = "cider press controller"
generic-numbers = ["77", "78"]
package-pins = 2

[[pins]]
number = "1"
name = "REF"
role = "reference"
aliases = ["V REF"]
must-connect = false
advice = "Bypass it to ground."

[[pins]]
number = "2"
name = "GND"
role = "ground"
aliases = ["0V"]
must-connect = true
advice = "Connect it to ground."

[figures."reference.voltage"]
typical = 5
unit = "V"
conditions = "in the shade"
source = "from memory"

[[dead-time-models]]
name = "line"
at-zero = 0.1
per-volt = 0.5
source = "from memory"

[practices."reference.bypass"]
minimum = 1e-7
unit = "F"
conditions = ""
source = "common practice, no source"

[variants.78.figures."reference.voltage"]
typical = 2.5
unit = "V"
conditions = "in the sun"
source = "from memory"

[variants.78.figures."supply.lockout"]
minimum = 6
unit = "V"
conditions = ""
source = "from memory"
"""


def figure(minimum: float | None, typical: float | None, maximum: float | None) -> Figure:
    return Figure(minimum, typical, maximum, "V", "", "from memory")


class TestFigure:
    def test_spread_of_a_whole_figure(self):
        assert figure(4.75, 5, 5.25).spread() == Spread(4.75, 5, 5.25, "V")

    def test_missing_end_takes_the_typical_value(self):
        assert figure(None, 3, 3.3).spread() == Spread(3, 3, 3.3, "V")
        assert figure(0.3, 0.7, None).spread() == Spread(0.3, 0.7, 0.7, "V")

    def test_typical_alone_is_exact(self):
        assert figure(None, 2.5, None).spread() == Spread.exact(2.5, "V")

    def test_missing_typical_takes_the_middle(self):
        assert figure(7, None, 41).spread() == Spread(7, 24, 41, "V")

    @pytest.mark.parametrize("ends", [(7, None), (None, 41)])
    def test_one_end_alone_has_no_spread(self, ends: tuple[float | None, float | None]):
        with pytest.raises(ValueError, match="one end only"):
            figure(ends[0], None, ends[1]).spread()

    def test_limit_has_the_ends_only(self):
        assert figure(7, 15, 40).limit() == Limit(7, 40, "V")
        assert figure(None, None, 41).limit() == Limit(None, 41, "V")

    def test_typical_alone_is_no_limit(self):
        with pytest.raises(ValueError, match="side"):
            figure(None, 5, None).limit()


class TestDeadTimeModel:
    def test_is_a_line_between_none_and_all(self):
        model = DeadTimeModel("line", at_zero=0.1, per_volt=0.5, source="from memory")
        assert model.dead_time(0) == 0.1
        assert model.dead_time(1) == 0.6
        assert model.dead_time(5) == 1
        assert model.dead_time(-3) == 0


class TestProfile:
    def test_reads_everything(self):
        profile = parse(CIDER, "77.toml")
        assert profile.family == "77"
        assert profile.title == "cider press controller"
        assert profile.generic_numbers == ("77", "78")
        assert profile.package_pins == 2
        assert profile.pin("ground").must_connect
        assert profile.pin("ground").advice == "Connect it to ground."
        assert not profile.pin("reference").must_connect
        assert profile.figure("reference.voltage") == Figure(
            None, 5, None, "V", "in the shade", "from memory"
        )
        assert profile.practice("reference.bypass").minimum == 1e-7
        assert profile.dead_time_models == (DeadTimeModel("line", 0.1, 0.5, "from memory"),)

    def test_roles_by_name_and_number(self):
        profile = parse(CIDER, "77.toml")
        assert profile.roles_by_name() == {
            "ref": "reference",
            "vref": "reference",
            "gnd": "ground",
            "0v": "ground",
        }
        assert profile.roles_by_number() == {"1": "reference", "2": "ground"}

    def test_limit_of_a_figure(self):
        assert parse(CIDER, "77.toml", "78").limit("supply.lockout") == Limit(6, None, "V")

    def test_variant_overrides_and_adds(self):
        base, variant = parse(CIDER, "77.toml", "77"), parse(CIDER, "77.toml", "78")
        assert base.figure("reference.voltage").typical == 5
        assert variant.figure("reference.voltage").typical == 2.5
        assert "supply.lockout" in variant.figures
        assert "supply.lockout" not in base.figures

    def test_what_it_has_not_is_named(self):
        profile = parse(CIDER, "77.toml")
        with pytest.raises(KeyError, match=r"the profile of the 77 class has no figure apple\.weight"):
            profile.figure("apple.weight")
        with pytest.raises(KeyError, match=r"the profile of the 77 class has no practice apple\.size"):
            profile.practice("apple.size")
        with pytest.raises(KeyError, match="the 77 class has no pin for: dead time"):
            profile.pin("dead time")


def without(line: str) -> str:
    """The cider profile without its first line that starts so."""
    return re.sub(rf"^{re.escape(line)}.*\n", "", CIDER, count=1, flags=re.MULTILINE)


class TestMistakes:
    """Every mistake names the file and the key."""

    @pytest.mark.parametrize(
        ("text", "message"),
        [
            ("family = ", "77.toml: Invalid value"),
            (without("family"), "77.toml: family: is missing"),
            (without("title"), "77.toml: title: is missing"),
            (CIDER.replace('title = "cider press controller"', 'title = " "'), "title: must not be empty"),
            (CIDER.replace('title = "cider press controller"', "title = 7"), "title: must be text"),
            ("colour = 'red'\n" + CIDER, "77.toml: colour: unknown key"),
            (
                CIDER.replace('["77", "78"]', '"77"'),
                "77.toml: generic-numbers: must be a list of texts",
            ),
            (CIDER.replace('["77", "78"]', "[77]"), "77.toml: generic-numbers: must be a list of texts"),
            (
                CIDER.replace("package-pins = 2", "package-pins = true"),
                "package-pins: must be a finite number",
            ),
            (CIDER.replace("package-pins = 2", "package-pins = 3"), r"the numbers are not 1\.\.3, once each"),
            (CIDER.replace('number = "2"', 'number = "1"'), r"the numbers are not 1\.\.2, once each"),
            (CIDER.replace('role = "ground"', 'role = "reference"'), "two pins have the role 'reference'"),
            (CIDER.replace('role = "ground"', 'role = "cellar"'), r"pins\[2\]: unknown role 'cellar'"),
            (CIDER.replace('"0V"', '"V_ref"'), "'V_ref' reads as pin 1 and as pin 2"),
            (
                CIDER.replace("must-connect = true", 'must-connect = "yes"'),
                r"pins\[2\].must-connect: must be true",
            ),
            (without("advice"), r"pins\[1\].advice: is missing"),
            (without("source"), "figures.reference.voltage.source: is missing"),
            (CIDER.replace('source = "from memory"', 'source = ""', 1), "voltage.source: must not be empty"),
            (without("unit"), "figures.reference.voltage.unit: is missing"),
            (CIDER.replace('unit = "V"', 'unit = "mV"', 1), "'mV' is no SI base unit"),
            (without("conditions"), "figures.reference.voltage.conditions: is missing"),
            (CIDER.replace("typical = 5", "typical = nan"), "voltage.typical: must be a finite number"),
            (CIDER.replace("typical = 5", 'typical = "5 V"'), "voltage.typical: must be a finite number"),
            (without("typical"), "voltage: has none of minimum, typical, maximum"),
            (CIDER.replace("typical = 5\n", "typical = 5\nminimum = 6\n"), "voltage: .* out of order"),
            (
                CIDER.replace("typical = 5\n", "typical = 5\nusual = 6\n"),
                "reference.voltage.usual: unknown key",
            ),
            (
                CIDER.replace("per-volt = 0.5", "per-volt = 0.5\nramp = 3"),
                r"dead-time-models\[1\].ramp: unknown key",
            ),
            (without("per-volt"), r"dead-time-models\[1\].per-volt: is missing"),
            (
                "pins = 3\n" + CIDER.replace("[[pins]]", "[[other]]"),
                "77.toml: pins: must be a list of tables",
            ),
            ("pins = [3]\n" + CIDER.replace("[[pins]]", "[[other]]"), r"pins\[1\]: must be a table"),
            ("figures = 3\n" + CIDER.replace("[figures.", "[other."), "77.toml: figures: must be a table"),
            (CIDER.replace("variants.78", "variants.79"), "variants.79: no generic number of this family"),
            (CIDER + "[variants.78.practices]\n", "variants.78.practices: unknown key"),
        ],
    )
    def test_is_told_with_file_and_key(self, text: str, message: str):
        with pytest.raises(ProfileError, match=message) as told:
            parse(text, "77.toml")
        assert str(told.value).startswith("77.toml: ")

    def test_a_variant_cannot_hide_a_mistake(self):
        faulty = CIDER + "sauce = 1\n"
        with pytest.raises(ProfileError, match=r"variants\.78\.figures\.supply\.lockout\.sauce: unknown key"):
            parse(faulty, "77.toml", "77")

    def test_unknown_variant(self):
        with pytest.raises(ProfileError, match="no variant 80; the family's generic numbers are 77, 78"):
            parse(CIDER, "77.toml", "80")

    def test_unknown_family(self):
        with pytest.raises(ProfileError, match=r"no profile of a family '\.\./494'; there are: .*494"):
            load("../494")


class TestLoad:
    def test_is_read_once(self):
        assert load("494") is load("494")

    def test_profile_cannot_be_changed_by_its_readers(self):
        with pytest.raises(TypeError):
            operator.setitem(
                cast("dict[str, Figure]", load("494").figures), "reference.voltage", figure(0, 0, 0)
            )


class TestPlainName:
    @pytest.mark.parametrize(
        ("name", "plain"),
        [
            ("OUTPUT CTRL", "outputctrl"),
            ("Output_Ctrl", "outputctrl"),
            ("E/A 1 (+)", "ea1+"),
            ("1IN\N{MINUS SIGN}", "1in-"),
            ("1IN\N{EN DASH}", "1in-"),
            ("V.REF\t", "vref"),
            ("", ""),
        ],
    )
    def test_folds_case_and_drops_ornament(self, name: str, plain: str):
        assert plain_name(name) == plain


class TestGenericNumber:
    @pytest.mark.parametrize(
        ("text", "expected"),
        [
            ("494", ("494", "494")),
            ("xx494CN", ("494", "494")),
            ("XX494", ("494", "494")),
            ("xx494_MODEL", ("494", "494")),
            ("pwm-494", ("494", "494")),
            ("x594IDR", ("494", "594")),
            ("7500C", ("494", "7500")),
            ("xx3759", ("494", "3759")),
            ("press.494", ("494", "494")),
        ],
    )
    def test_is_found_with_any_prefix_and_suffix(self, text: str, expected: tuple[str, str]):
        assert generic_number(text) == expected

    @pytest.mark.parametrize(
        "text", ["", "4940", "1494", "xx4941", "4.94", "1.494", "494.5", "75000", "xx49 4"]
    )
    def test_is_a_whole_number(self, text: str):
        assert generic_number(text) is None

    @pytest.mark.parametrize("text", ["74HC594", "xx74hct594D", "54LS594", "74594"])
    def test_logic_of_the_same_number_is_no_controller(self, text: str):
        assert generic_number(text) is None

    @pytest.mark.parametrize("text", ["٤٩٤", "494" * 20000, "74a" * 20000, "\0494\0\n"])
    def test_odd_names_do_no_harm(self, text: str):
        assert generic_number(text) in (None, ("494", "494"))


def test_roles_are_distinct():
    assert len(set(ROLES)) == len(ROLES) == 16
