"""Who is listened to first, netlist by netlist; and what the netlists of a run must have in common."""

from __future__ import annotations

from pathlib import Path

import pytest
from pwmlint.lint.configuration import ConfigurationError, Setting
from pwmlint.lint.estimate import Method
from pwmlint.lint.house_rules import HouseRuleError
from pwmlint.lint.report import Gate
from pwmlint.lint.report.delivery import Target
from pwmlint.lint.review import review_netlist
from pwmlint.lint.rule import load_rules
from pwmlint.lint.settings import Given, Settings, Settler, gate_of, overwritten, shared_reports
from pwmlint.lint.verdict import Level, Review

CONFIGURATION = """\
gate = "warning"
strict = true
worst_case = "rss"
brief = "told.toml"
parts_list = "told.csv"
deviations = "told.deviations.toml"
allow_include = ["models"]
rules = "house"
[reports]
json = "report.json"
"""

RULE = """\
from pathlib import Path
from pwmlint.lint.rule import netlist_rule
Path(__file__).with_name("marker").touch()
@netlist_rule("house.label", level="note", topic="labels")
def label(design):
    return ()
"""


@pytest.fixture
def orchard(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """The working folder: a configuration and everything that it names, and a netlist with its own files."""
    monkeypatch.chdir(tmp_path)
    for folder in ("models", "house"):
        Path(folder).mkdir()
    for name in ("told.toml", "told.csv", "told.deviations.toml", "fan.cir"):
        Path(name).write_text("")
    for ending in (".brief.toml", ".parts.csv", ".deviations.toml"):
        Path(f"fan{ending}").write_text("")
    Path("house", "labels.py").write_text(RULE)
    Path("pwmlint.toml").write_text(CONFIGURATION)
    return tmp_path


GIVEN = Given(
    gate="note",
    strict=False,
    worst_case="extreme",
    brief="given.toml",
    parts_list="given.csv",
    deviations="given.deviations.toml",
    allow_include=(Path("given"),),
    reports=(Target("text", "given.txt"),),
)


def each(settings: Settings) -> list[Setting[object]]:
    return [
        settings.gate,
        settings.strict,
        settings.worst_case,
        settings.brief,
        settings.parts_list,
        settings.deviations,
        settings.allow_include,
        settings.reports,
    ]


def values(settings: Settings) -> list[object]:
    return [one.value for one in each(settings)]


def sources(settings: Settings) -> list[str]:
    return [one.source for one in each(settings)]


class TestPrecedence:
    def test_the_command_line_stands_above_the_file(self, orchard: Path):
        settings = Settler(GIVEN).settle("fan.cir")
        assert values(settings) == [
            "note",
            False,
            "extreme",
            "given.toml",
            "given.csv",
            "given.deviations.toml",
            (Path("given"),),
            (Target("text", "given.txt"),),
        ]
        assert set(sources(settings)) == {"command line"}
        assert settings.configuration.value == "pwmlint.toml"

    def test_the_file_above_what_is_found(self, orchard: Path):
        settings = Settler(Given()).settle("fan.cir")
        assert values(settings) == [
            "warning",
            True,
            "rss",
            Path("told.toml"),
            Path("told.csv"),
            Path("told.deviations.toml"),
            (Path("models"),),
            (Target("json", "report.json"),),
        ]
        assert sources(settings) == [f"pwmlint.toml:{line}" for line in (1, 2, 3, 4, 5, 6, 7, 9)]
        assert settings.method is Method.RSS
        assert settings.own_gate == Gate(Level.WARNING, strict=True)
        assert settings.policy.file == "pwmlint.toml"

    @pytest.mark.parametrize("given", [Given(), Given(no_config=True)])
    def test_what_is_found_above_the_default(self, orchard: Path, given: Given):
        if not given.no_config:
            Path("pwmlint.toml").unlink()
        settings = Settler(given).settle("fan.cir")
        beside = [Path(f"fan{ending}") for ending in (".brief.toml", ".parts.csv", ".deviations.toml")]
        assert values(settings) == ["error", False, "extreme", *beside, (), (Target(),)]
        assert sources(settings) == [
            *(["default"] * 3),
            *(["beside the netlist"] * 3),
            "default",
            "default",
        ]
        assert settings.configuration.value is None
        assert settings.policy.file is None

    def test_without_anything(self, orchard: Path):
        Path("pwmlint.toml").unlink()
        for netlist in ("-", "pump.cir", ".", ".."):
            settings = Settler(Given()).settle(netlist)
            assert values(settings) == ["error", False, "extreme", None, None, None, (), (Target(),)]
            assert set(sources(settings)) == {"default"}

    def test_never(self, orchard: Path):
        assert Settler(Given(gate="never")).settle("fan.cir").own_gate == Gate(None, strict=True)

    def test_a_file_that_is_named_counts_for_every_netlist(self, orchard: Path, tmp_path: Path):
        other = tmp_path / "elsewhere" / "ours.toml"
        other.parent.mkdir()
        other.write_text('gate = "note"\nbrief = "b.toml"\n')
        (other.parent / "b.toml").write_text("")
        for netlist in ("fan.cir", "-"):
            settings = Settler(Given(config="elsewhere/ours.toml")).settle(netlist)
            assert settings.gate.value == "note"
            assert settings.brief.value == Path("elsewhere/b.toml")
            assert settings.configuration.source == "command line"

    def test_a_file_that_is_named_must_be_there(self, orchard: Path):
        with pytest.raises(ConfigurationError, match="no such file"):
            Settler(Given(config="gone.toml")).settle("fan.cir")

    def test_a_mistake_is_one_error_for_all_netlists(self, orchard: Path):
        Path("pwmlint.toml").write_text('[levels]\nno.rule = "off"\n')
        settler = Settler(Given())
        caught: list[ConfigurationError] = []
        for netlist in ("fan.cir", "pump.cir"):
            with pytest.raises(ConfigurationError) as error:
                settler.settle(netlist)
            caught.append(error.value)
        assert caught[0] is caught[1]
        assert caught[0].also == ()


class TestHouseRules:
    def test_what_a_file_names_is_not_executed(self, orchard: Path):
        settings = Settler(Given()).settle("fan.cir")
        assert not Path("house/marker").exists()
        assert settings.asked == load_rules()
        assert settings.rules.value == Path("house")
        assert settings.untrusted is not None
        assert settings.untrusted.place == ("pwmlint.toml", 8, 9)
        assert "--trust-config" in settings.untrusted.remedy

    def test_nor_is_it_where_the_file_is_named(self, orchard: Path):
        assert Settler(Given(config="pwmlint.toml")).settle("fan.cir").untrusted is not None
        assert not Path("house/marker").exists()

    def test_what_is_off_may_then_be_unknown(self, orchard: Path):
        with Path("pwmlint.toml").open("a") as file:
            file.write('[levels]\nhouse.label = "off"\nsupply.range = "off"\n')
        assert list(Settler(Given()).settle("fan.cir").policy.off) == ["supply.range"]
        trusted = Settler(Given(trust_config=True)).settle("fan.cir")
        assert list(trusted.policy.off) == ["supply.range", "house.label"]

    def test_a_trusted_file_s_are_asked(self, orchard: Path):
        settings = Settler(Given(trust_config=True)).settle("fan.cir")
        assert [one.id for one in settings.asked[len(load_rules()) :]] == ["house.label"]
        assert settings.untrusted is None

    def test_the_command_line_s_take_their_place(self, orchard: Path):
        Path("mine").mkdir()
        Path("mine/own.py").write_text(RULE.replace("house.label", "mine.label"))
        settings = Settler(Given(rules="mine")).settle("fan.cir")
        assert [one.id for one in settings.asked[len(load_rules()) :]] == ["mine.label"]
        assert not Path("house/marker").exists()
        assert (settings.rules.source, settings.untrusted) == ("command line", None)

    def test_a_folder_is_loaded_once(self, orchard: Path):
        settler = Settler(Given(rules="house"))
        first, second = (settler.settle(netlist).asked for netlist in ("fan.cir", "pump.cir"))
        assert first is second

    def test_a_file_that_cannot_be_loaded(self, orchard: Path):
        Path("house/labels.py").write_text("1 / 0\n")
        with pytest.raises(HouseRuleError):
            Settler(Given(trust_config=True)).settle("fan.cir")


class TestARun:
    @pytest.fixture
    def two(self, orchard: Path) -> tuple[str, str]:
        """Two netlists below different configurations."""
        for name, gate in (("press", "error"), ("pump", "note")):
            Path(name).mkdir()
            Path(name, "pwmlint.toml").write_text(f'gate = "{gate}"\n')
        return "press/press.cir", "pump/pump.cir"

    def test_each_netlist_has_its_gate(self, two: tuple[str, str]):
        settler = Settler(Given())
        reviewed = [(review(netlist), settler.settle(netlist)) for netlist in two]
        gate = gate_of(reviewed)
        assert [gate.of(found) for found, _ in reviewed] == [Gate(Level.ERROR), Gate(Level.NOTE)]
        assert gate_of(reviewed[1:]) == Gate(Level.NOTE)
        assert gate_of([reviewed[0], reviewed[0]]) == Gate(Level.ERROR)

    def test_the_command_line_s_gate_is_everyone_s(self, two: tuple[str, str]):
        settler = Settler(Given(gate="warning"))
        assert gate_of([(review(netlist), settler.settle(netlist)) for netlist in two]) == Gate(Level.WARNING)

    def test_reports_in_common(self, two: tuple[str, str]):
        settled = [Settler(Given()).settle(netlist) for netlist in two]
        assert shared_reports(settled).value == (Target(),)

    @pytest.mark.parametrize("reverse", [False, True])
    def test_different_reports_are_refused(self, two: tuple[str, str], reverse: bool):
        with Path("pump/pwmlint.toml").open("a") as file:
            file.write('reports.json = "report.json"\n')
        netlists = two[::-1] if reverse else two
        with pytest.raises(ConfigurationError, match="different reports") as caught:
            shared_reports([Settler(Given()).settle(netlist) for netlist in netlists])
        assert caught.value.place.file == "pump/pwmlint.toml"
        assert "--output" in caught.value.remedy
        asked = Given(reports=(Target("json"),))
        settled = [Settler(asked).settle(netlist) for netlist in netlists]
        assert shared_reports(settled).value == (Target("json"),)

    def test_what_is_read_is_not_overwritten(self, orchard: Path):
        Path("link").symlink_to("told.csv")
        settings = Settler(Given()).settle("fan.cir")
        assert settings.inputs == ("pwmlint.toml", "told.toml", "told.csv", "told.deviations.toml")
        for output in ("link", "told.toml", "./pwmlint.toml"):
            assert overwritten([Target(), Target("json", output)], settings.inputs) == output
        assert overwritten([Target(), Target("json", "new.json")], settings.inputs) is None


def review(netlist: str) -> Review:
    from pwmlint.grammar import read_bytes

    return review_netlist(read_bytes(b"hive\nR1 a 0 1k\n.end\n", netlist), rules=())
