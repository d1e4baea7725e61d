"""`pwmlint settings`, and `pwmlint review` under a configuration: what a user sees."""

from __future__ import annotations

import json
import re
from collections.abc import Sequence
from pathlib import Path

import pytest
from pwmlint.lint import cli
from rich.cells import cell_len

RULE = """\
from pathlib import Path
from pwmlint.lint.rule import netlist_rule
from pwmlint.lint.verdict import Outcome, Verdict
Path(__file__).with_name("marker").touch()
@netlist_rule("label.present", level="warning", topic="labels")
def label(design):
    \"\"\"Has the board a label?\"\"\"
    yield Verdict(outcome=Outcome.FAIL, message="It has none.")
"""

NETLIST = "mast beacon\nR1 a 0 1k\nR2 a 0 1k\n.end\n"


@pytest.fixture(autouse=True)
def beacon(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """The working folder of a mast beacon, with a folder of house rules."""
    monkeypatch.chdir(tmp_path)
    for variable in ("NO_COLOR", "FORCE_COLOR", "COLUMNS", "PWMLINT_TRACEBACK"):
        monkeypatch.delenv(variable, raising=False)
    monkeypatch.setenv("TERM", "xterm")
    Path("beacon.cir").write_text(NETLIST)
    Path("house").mkdir()
    Path("house/label.py").write_text(RULE)


def configure(text: str, folder: str = ".") -> None:
    Path(folder).mkdir(exist_ok=True)
    Path(folder, "pwmlint.toml").write_text(text)


def run(capsys: pytest.CaptureFixture[str], *arguments: str) -> tuple[int, str, str]:
    status = cli.main(arguments)
    streams = capsys.readouterr()
    return status, streams.out, streams.err


class TestSettings:
    def test_the_table(self, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> None:
        configure(
            'strict = true\nrules = "house"\n[reports]\ntext = "-"\njson = "report.json"\n'
            '[topics]\n"dead time" = "note"\n[levels]\nsupply.range = "off"\n'
        )
        monkeypatch.setenv("NO_COLOR", "1")
        monkeypatch.setenv("COLUMNS", "100")
        status, out, err = run(capsys, "settings", "beacon.cir", "--gate", "note", "--trust-config")
        assert (status, err) == (0, "")
        assert out == (
            "setting                value            set by\n"
            "configuration          pwmlint.toml     found by itself\n"
            "gate                   note             command line\n"
            "strict                 yes              pwmlint.toml:1\n"
            "worst_case             extreme          default\n"
            "brief                  none             default\n"
            "parts_list             none             default\n"
            "deviations             none             default\n"
            "allow_include          none             default\n"
            "rules                  house            pwmlint.toml:2\n"
            "reports.text           standard output  pwmlint.toml:3\n"
            "reports.json           report.json      pwmlint.toml:3\n"
            'topics."dead time"     note             pwmlint.toml:7\n'
            'levels."supply.range"  off              pwmlint.toml:9\n'
            "colour                 no               environment NO_COLOR\n"
            "width                  100              environment COLUMNS\n"
            "traceback              no               default\n"
        )

    def test_without_a_netlist_and_a_configuration(self, capsys: pytest.CaptureFixture[str]) -> None:
        status, out, err = run(capsys, "settings")
        assert (status, err) == (0, "")
        rows = [line.split("  ")[0] for line in out.splitlines()]
        assert rows[-5:] == ["topics", "levels", "colour", "width", "traceback"]
        assert {line.split("  ")[-1].strip() for line in out.splitlines()[1:]} == {
            "default",
            "standard output is no terminal",
        }

    @pytest.mark.parametrize(
        ("variable", "value", "row"),
        [
            ("FORCE_COLOR", "1", "colour yes environment FORCE_COLOR"),
            ("TERM", "dumb", "colour no environment TERM"),
            ("PWMLINT_TRACEBACK", "1", "traceback yes environment PWMLINT_TRACEBACK"),
        ],
    )
    def test_the_environment(
        self,
        variable: str,
        value: str,
        row: str,
        capsys: pytest.CaptureFixture[str],
        monkeypatch: pytest.MonkeyPatch,
    ) -> None:
        monkeypatch.setenv(variable, value)
        assert row in [" ".join(line.split()) for line in run(capsys, "settings")[1].splitlines()]

    def test_names_steer_nothing(self, capsys: pytest.CaptureFixture[str]) -> None:
        out = run(capsys, "settings", "--brief", "\x1b[31m\u202e.toml", "--no-config")[1]
        assert r"brief          \x1b[31m\u202e.toml " in out
        assert "\x1b" not in out

    def test_wide_names_stay_in_line(self, capsys: pytest.CaptureFixture[str]) -> None:
        out = run(capsys, "settings", "--brief", "梨.toml")[1]
        found = re.findall(r"(?m)^(.*  )(?:default|command line|standard output is.*)$", out)
        assert len(found) == len(out.splitlines()) - 1
        assert len({cell_len(left) for left in found}) == 1

    def test_house_rules_that_are_not_loaded(self, capsys: pytest.CaptureFixture[str]) -> None:
        configure('rules = "house"')
        status, out, err = run(capsys, "settings")
        assert status == 0
        assert "house (not loaded)" in out
        assert err.startswith("pwmlint.toml:1:9: the house rules in house are not loaded")

    def test_a_mistake(self, capsys: pytest.CaptureFixture[str]) -> None:
        configure('[topics]\nsuply = "off"\n')
        status, out, err = run(capsys, "settings")
        assert (status, out) == (2, "")
        assert err == (
            'pwmlint.toml:2:1: there is no topic "suply"\n  | suply = "off"\n  | ^\n'
            "  expected: a topic that `pwmlint rules` lists\n"
            '  remedy:   did you mean "supply"?\n'
        )


class TestReview:
    def test_the_gate_of_the_file(self, capsys: pytest.CaptureFixture[str]) -> None:
        configure('gate = "warning"\n')
        status, out, _ = run(capsys, "review", "beacon.cir", "--rules", "house")
        assert status == 1
        assert out.endswith("gate warning: not passed\n")
        assert "\nsettings    pwmlint.toml\n" in out
        assert run(capsys, "review", "beacon.cir", "--rules", "house", "--gate", "error")[0] == 0
        assert run(capsys, "review", "beacon.cir", "--rules", "house", "--no-config")[0] == 0

    def test_strict_may_be_taken_back(self, capsys: pytest.CaptureFixture[str]) -> None:
        configure("strict = true\n")
        assert "gate error, strict: " in run(capsys, "review", "beacon.cir")[1]
        assert "gate error: " in run(capsys, "review", "beacon.cir", "--no-strict")[1]

    def test_what_is_off_is_said(self, capsys: pytest.CaptureFixture[str]) -> None:
        configure('[topics]\nlabels = "off"\n[levels]\nsupply.range = "off"\n')
        status, out, err = run(capsys, "review", "beacon.cir", "--rules", "house")
        assert status == 0
        assert "It has none." not in out
        assert "  1 switched off by pwmlint.toml:4: supply.range\n" in out
        assert "  1 switched off by pwmlint.toml:2: label.present\n" in out
        assert err == ""
        out = run(capsys, "review", "beacon.cir", "--rules", "house", "--format", "json")[1]
        (found,) = json.loads(out)["reviews"]
        assert found["configuration"] == "pwmlint.toml"
        assert found["switched_off"] == [
            {"rule": "supply.range", "place": {"file": "pwmlint.toml", "line": 4, "column": 16}},
            {"rule": "label.present", "place": {"file": "pwmlint.toml", "line": 2, "column": 10}},
        ]

    def test_a_level_of_the_file(self, capsys: pytest.CaptureFixture[str]) -> None:
        configure('[levels]\nlabel.present = "error"\n')
        status, out, _ = run(capsys, "review", "beacon.cir", "--rules", "house")
        assert status == 1
        assert "  error    It has none.\n" in out

    def test_untrusted_house_rules_are_not_executed(self, capsys: pytest.CaptureFixture[str]) -> None:
        configure('rules = "house"\n')
        for arguments in (["review", "beacon.cir"], ["review", "beacon.cir", "--config", "pwmlint.toml"]):
            _, out, err = run(capsys, *arguments)
            assert "It has none." not in out
            assert err == (
                "pwmlint.toml:1:9: the house rules in house are not loaded: they are programs, and this file "
                "cannot vouch for them\n  remedy:   give --trust-config where you do, or --rules house\n"
            )
        assert not Path("house/marker").exists()
        _, out, err = run(capsys, "review", "beacon.cir", "--trust-config")
        assert "It has none." in out
        assert err == ""

    def test_the_reports_of_the_file(self, capsys: pytest.CaptureFixture[str]) -> None:
        configure('[reports]\ntext = "-"\njson = "beacon.report.json"\n')
        Path("lamp.cir").write_text(NETLIST)
        _, out, _ = run(capsys, "review", "beacon.cir", "lamp.cir")
        assert "2 netlists" in out
        assert len(json.loads(Path("beacon.report.json").read_text())["reviews"]) == 2
        Path("beacon.report.json").unlink()
        assert json.loads(run(capsys, "review", "beacon.cir", "--format", "json")[1])
        assert not Path("beacon.report.json").exists()

    def test_a_report_of_the_file_never_overwrites_what_is_reviewed(
        self, capsys: pytest.CaptureFixture[str]
    ) -> None:
        Path("board.report.txt").write_text(NETLIST)
        configure('reports.text = "board.report.txt"\n')
        status, out, err = run(capsys, "review", "board.report.txt")
        assert (status, out) == (2, "")
        assert err.startswith(
            "pwmlint.toml:1:1: the report would overwrite what is reviewed: board.report.txt\n"
        )
        assert Path("board.report.txt").read_text() == NETLIST

    def test_nor_does_one_of_the_command_line(self, capsys: pytest.CaptureFixture[str]) -> None:
        for name in ("pwmlint.toml", "beacon.brief.toml", "beacon.parts.csv"):
            Path(name).write_text("")
            with pytest.raises(SystemExit) as stop:
                cli.main(["review", "beacon.cir", "--output", name])
            assert stop.value.code == 2
            assert "overwrite" in capsys.readouterr().err
            assert Path(name).read_text() == ""

    def test_each_netlist_is_held_to_its_own_file(self, capsys: pytest.CaptureFixture[str]) -> None:
        for folder, gate in (("mast", "error"), ("pump", "warning")):
            configure(f'gate = "{gate}"\n', folder)
            Path(folder, "board.cir").write_text(NETLIST)
        status, out, _ = run(capsys, "review", "mast/board.cir", "pump/board.cir", "--rules", "house")
        assert status == 1
        assert "gate error: passed\n" in out
        assert "gate warning: not passed\n" in out
        assert out.endswith("gate of each netlist: not passed\n")

    def test_a_broken_file_does_not_hide_the_other_netlists(self, capsys: pytest.CaptureFixture[str]) -> None:
        configure("gate = 1\n", "mast")
        netlists = ["mast/a.cir", "mast/b.cir"]
        for name in netlists:
            Path(name).write_text(NETLIST)
        status, out, err = run(capsys, "review", *netlists, "beacon.cir")
        assert status == 2
        assert "netlist     beacon.cir" in out
        assert "netlist     mast/" not in out
        assert out.count("at mast/pwmlint.toml:1:8") == 2
        assert out.endswith(
            "1 netlist, 1 passed; 2 netlists could not be reviewed     gate error: not passed\n"
        )
        assert err.count("mast/pwmlint.toml:1:8: ") == 1

    def test_different_reports(self, capsys: pytest.CaptureFixture[str]) -> None:
        configure('reports.json = "report.json"\n', "mast")
        Path("mast/a.cir").write_text(NETLIST)
        status, out, err = run(capsys, "review", "beacon.cir", "mast/a.cir")
        assert (status, out) == (2, "")
        assert err.startswith(
            "mast/pwmlint.toml:1:1: the netlists ask for different reports: default and mast/"
        )

    def test_a_rule_that_crashes_does_not_hide_the_other_netlists(
        self, capsys: pytest.CaptureFixture[str]
    ) -> None:
        Path("house/label.py").write_text(
            RULE.replace("yield", "1 / (design.netlist.file != 'beacon.cir'); yield")
        )
        Path("pump.cir").write_text(NETLIST.replace("R2", "R3"))
        arguments = ["review", "beacon.cir", "pump.cir", "--rules", "house"]
        status, out, err = run(capsys, *arguments)
        assert status == 2
        assert err.startswith(
            "house/label.py:8:1: the house rule label.present crashed on beacon.cir: ZeroDivision"
        )
        assert "Traceback" not in err
        assert "netlist     pump.cir" in out
        assert "netlist     beacon.cir" not in out
        assert "crashed on beacon.cir" in out

    def test_the_same_input_gives_the_same_bytes(self, capsys: pytest.CaptureFixture[str]) -> None:
        configure('rules = "house"\n[topics]\nconnections = "off"\n[levels]\nsupply.range = "off"\n')
        arguments = ["review", "beacon.cir", "--trust-config", "--format", "json"]
        assert run(capsys, *arguments) == run(capsys, *arguments)

    @pytest.mark.parametrize(
        ("arguments", "message"),
        [
            (["--config", "a", "--no-config"], "not allowed with"),
            (["--gate", "loud"], "choose from"),
        ],
    )
    def test_wrong_usage(
        self, arguments: Sequence[str], message: str, capsys: pytest.CaptureFixture[str]
    ) -> None:
        with pytest.raises(SystemExit) as stop:
            cli.main(["review", "beacon.cir", *arguments])
        assert stop.value.code == 2
        assert message in capsys.readouterr().err


class TestRules:
    def test_they_list_the_house_s(self, capsys: pytest.CaptureFixture[str]) -> None:
        status, out, err = run(capsys, "rules", "--rules", "house")
        assert (status, err) == (0, "")
        assert "label.present" in out
        assert "dead-time.range" in out
        assert "Has the board a label?" in run(capsys, "rules", "label.present", "--rules", "house")[1]

    def test_only_where_they_are_asked_for(self, capsys: pytest.CaptureFixture[str]) -> None:
        configure('rules = "house"\n')
        assert "label.present" not in run(capsys, "rules")[1]
        assert not Path("house/marker").exists()

    def test_a_folder_that_cannot_be_used(self, capsys: pytest.CaptureFixture[str]) -> None:
        Path("house/label.py").write_text("def label(:\n")
        status, out, err = run(capsys, "rules", "--rules", "house")
        assert (status, out) == (2, "")
        assert err.startswith("house/label.py:1:11: not Python: ")


class TestDeviations:
    DEVIATION = '[[deviation]]\nrule = "label.present"\nreason = "it is painted on"\nowner = "mast team"\n'

    def test_the_file_names_them(self, capsys: pytest.CaptureFixture[str]) -> None:
        Path("accepted.toml").write_text(self.DEVIATION + 'subject = "*"\n')
        configure('gate = "warning"\ndeviations = "accepted.toml"\n')
        arguments = ["review", "beacon.cir", "--rules", "house", "--format", "json"]
        (found,) = json.loads(run(capsys, *arguments)[1])["reviews"]
        assert (found["deviations"], found["accepted"]) == ("accepted.toml", 1)

    @pytest.mark.parametrize(
        ("configuration", "arguments"),
        [
            ('[levels]\nlabel.present = "off"\n', ["--rules", "house"]),
            ('[topics]\nlabels = "off"\n', ["--rules", "house"]),
            ('rules = "house"\n', []),  # not trusted, so not loaded
        ],
    )
    @pytest.mark.parametrize("rule", ["label.present", "label.*"])
    def test_one_from_a_rule_that_was_not_asked_is_not_called_unused(
        self, configuration: str, arguments: list[str], rule: str, capsys: pytest.CaptureFixture[str]
    ) -> None:
        Path("beacon.deviations.toml").write_text(
            self.DEVIATION.replace("label.present", rule) + 'subject = "*"\n'
        )
        configure(configuration)
        _, out, _ = run(capsys, "review", "beacon.cir", "--format", "json", *arguments)
        (found,) = json.loads(out)["reviews"]
        (about,) = [one for one in found["verdicts"] if one["rule"] == "deviations.unused"]
        assert about["outcome"] == "informational"
        assert about["message"] == (f"the deviation from {rule} of * was not needed: its rule was not asked")
        assert about["places"] == [{"file": "beacon.deviations.toml", "line": 1, "column": 3}]

    def test_one_from_a_rule_that_does_not_exist_is(self, capsys: pytest.CaptureFixture[str]) -> None:
        Path("beacon.deviations.toml").write_text(self.DEVIATION.replace("present", "presnt"))
        configure('[levels]\nlabel.present = "off"\n')
        _, out, _ = run(capsys, "review", "beacon.cir", "--rules", "house", "--format", "json")
        (about,) = [
            one for one in json.loads(out)["reviews"][0]["verdicts"] if one["rule"] == "deviations.unused"
        ]
        assert (about["outcome"], about["level"]) == ("fail", "note")

    def test_a_permit_is_for_what_a_review_would_find(self, capsys: pytest.CaptureFixture[str]) -> None:
        assert 'rule = "label.present"' in run(capsys, "permit", "beacon.cir", "--rules", "house")[1]
        configure('[topics]\nlabels = "off"\n')
        assert "label.present" not in run(capsys, "permit", "beacon.cir", "--rules", "house")[1]
        configure("strict = 1\n")
        assert run(capsys, "permit", "beacon.cir")[:2] == (2, "")

    def test_a_house_rule_about_them_that_crashes(self, capsys: pytest.CaptureFixture[str]) -> None:
        Path("beacon.deviations.toml").write_text(self.DEVIATION)
        head = "from pwmlint.lint.rule import deviation_rule\n"
        Path("house/owner.py").write_text(
            f'{head}@deviation_rule("house.owner", level="note")\ndef owner(applied):\n    yield 1 / 0\n'
        )
        status, out, err = run(capsys, "review", "beacon.cir", "--rules", "house")
        assert (status, out) == (2, "")
        assert err.startswith("house/owner.py:4:1: the house rule house.owner crashed on beacon.cir: ")
