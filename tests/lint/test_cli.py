"""The command line on reviews made by hand: arguments, gate, exit status, streams."""

from __future__ import annotations

import json
import sys
from collections.abc import Sequence
from importlib.metadata import version
from pathlib import Path

import pytest
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.netlist import Place
from pwmlint.lint import cli
from pwmlint.lint.estimate import Method
from pwmlint.lint.policy import Policy
from pwmlint.lint.rule import Rule, load_rules
from pwmlint.lint.verdict import Level, Outcome, Review, Verdict

Asked = list[dict[str, object]]


def reviewed(netlist: str, *verdicts: Verdict) -> Review:
    return Review(
        netlist=netlist,
        format="SPICE list",
        name="",
        brief=None,
        parts_list=None,
        controllers=(),
        verdicts=verdicts,
    )


BY_NAME: dict[str, tuple[Verdict, ...]] = {
    "sound.cir": (Verdict(outcome=Outcome.PASS, message="It holds."),),
    "error.cir": (Verdict(outcome=Outcome.FAIL, level=Level.ERROR, message="It does not."),),
    "warning.cir": (Verdict(outcome=Outcome.FAIL, level=Level.WARNING, message="It hardly does."),),
    "note.cir": (Verdict(outcome=Outcome.FAIL, level=Level.NOTE, message="It might."),),
    "open.cir": (Verdict(outcome=Outcome.OPEN, message="Does it?", needs=("brief: load",)),),
    "review.cir": (Verdict(outcome=Outcome.REVIEW, message="Judge it."),),
    "-": (),
}


@pytest.fixture(autouse=True)
def asked(monkeypatch: pytest.MonkeyPatch) -> Asked:
    """Review by name instead of by reading; return what was asked of the review."""
    calls: Asked = []

    def review(
        netlist: str,
        *,
        brief: str | None = None,
        parts_list: str | None = None,
        deviations: str | None = None,
        allow_include: Sequence[Path] = (),
        method: Method = Method.EXTREME,
        rules: Sequence[Rule] = (),
        policy: Policy | None = None,
    ) -> Review:
        assert rules == load_rules()
        assert policy == Policy()
        calls.append(
            {
                "netlist": netlist,
                "brief": brief,
                "parts_list": parts_list,
                "deviations": deviations,
                "allow_include": list(allow_include),
                "method": method,
            }
        )
        if netlist == "crash.cir":
            raise ZeroDivisionError("two \x1b[31mlines\n")
        if netlist == "interrupt.cir":
            raise KeyboardInterrupt
        if netlist not in BY_NAME:
            raise NetlistError("there is no such file", Place(netlist, 0, 0), remedy="check the path")
        return reviewed(netlist, *BY_NAME[netlist])

    # The package offers a function by the name of its module, so the module is reached by its full name.
    monkeypatch.setattr(sys.modules["pwmlint.lint.review"], "review", review)
    return calls


@pytest.mark.parametrize(
    ("netlist", "stops_at"),
    [
        ("sound.cir", ()),
        ("error.cir", ("error", "warning", "note")),
        ("warning.cir", ("warning", "note")),
        ("note.cir", ("note",)),
        ("open.cir", ()),
        ("review.cir", ()),
    ],
)
@pytest.mark.parametrize("gate", ["error", "warning", "note", "never"])
def test_the_gate(netlist: str, stops_at: Sequence[str], gate: str) -> None:
    assert cli.main(["review", netlist, "--gate", gate]) == (1 if gate in stops_at else 0)


@pytest.mark.parametrize(
    ("netlist", "status"), [("open.cir", 1), ("review.cir", 1), ("sound.cir", 0), ("warning.cir", 0)]
)
def test_strict(netlist: str, status: int) -> None:
    assert cli.main(["review", netlist, "--strict"]) == status


def test_the_gate_stops_at_errors_unless_told_otherwise() -> None:
    assert cli.main(["review", "error.cir"]) == 1
    assert cli.main(["review", "warning.cir"]) == 0
    assert cli.main(["review", "error.cir", "--strict", "--gate", "never"]) == 0


def test_one_of_several_that_stops_is_enough() -> None:
    assert cli.main(["review", "sound.cir", "error.cir", "sound.cir"]) == 1


def test_what_is_passed_on(asked: Asked, tmp_path: Path) -> None:
    folders = [tmp_path / "models", tmp_path / "more"]
    for folder in folders:
        folder.mkdir()
    arguments = ["review", "sound.cir", "--brief", "b.toml", "--parts-list", "p.csv"]
    arguments += ["--deviations", "d.toml"]
    arguments += [f"--allow-include={folder}" for folder in folders]
    cli.main([*arguments, "--worst-case", "rss"])
    assert asked == [
        {
            "netlist": "sound.cir",
            "brief": "b.toml",
            "parts_list": "p.csv",
            "deviations": "d.toml",
            "allow_include": folders,
            "method": Method.RSS,
        }
    ]


def test_findings_on_standard_output_and_nothing_else(capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["review", "sound.cir"]) == 0
    streams = capsys.readouterr()
    assert "It holds." in streams.out
    assert streams.err == ""


def test_an_unreadable_netlist_does_not_hide_the_others(capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["review", "missing.cir", "error.cir", "gone.cir", "--format", "json"]) == 2
    streams = capsys.readouterr()
    report = json.loads(streams.out)
    assert [review["netlist"] for review in report["reviews"]] == ["error.cir"]
    assert [one["netlist"] for one in report["unread"]] == ["missing.cir", "gone.cir"]
    assert streams.err == (
        "missing.cir: there is no such file\n  remedy:   check the path\n"
        "gone.cir: there is no such file\n  remedy:   check the path\n"
    )


def test_a_report_of_nothing_takes_the_place_of_an_older_one(
    capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    path = tmp_path / "report.json"
    path.write_text("passed the day before", encoding="utf-8")
    assert cli.main(["review", "missing.cir", "--format", "json", "--output", str(path)]) == 2
    report = json.loads(path.read_text(encoding="utf-8"))
    assert report["reviews"] == []
    assert report["unread"][0]["message"] == "there is no such file"
    assert capsys.readouterr().out == ""


def test_at_a_terminal_nothing_is_told_twice(capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["review", "missing.cir"]) == 2
    streams = capsys.readouterr()
    assert streams.out == ""
    assert streams.err.startswith("missing.cir: there is no such file")


def test_a_folder_without_a_netlist_is_in_the_report(
    capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    assert cli.main(["review", "sound.cir", str(tmp_path), "--format", "json"]) == 2
    (unread,) = json.loads(capsys.readouterr().out)["unread"]
    assert unread["netlist"] == str(tmp_path)
    assert unread["message"] == "no netlist in this folder"


@pytest.mark.parametrize(
    ("options", "printed", "files"),
    [
        ("", "text", {}),
        ("--format json", "json", {}),
        ("--output a", "", {"a": "text"}),
        ("--output -", "text", {}),
        ("--format json --output a", "", {"a": "json"}),
        ("--output a --format json", "", {"a": "json"}),
        ("--format text --format json --output a", "text", {"a": "json"}),
        ("--format json --output a --format text", "text", {"a": "json"}),
        ("--format json --output a --format text --output b", "", {"a": "json", "b": "text"}),
        ("--output a --output b --format json", "", {"a": "text", "b": "json"}),
    ],
)
def test_formats_and_outputs_go_in_pairs(
    options: str,
    printed: str,
    files: dict[str, str],
    capsys: pytest.CaptureFixture[str],
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    monkeypatch.chdir(tmp_path)
    assert cli.main(["review", "sound.cir", *options.split()]) == 0
    assert kind(capsys.readouterr().out) == printed
    assert {path.name: kind(path.read_text("utf-8")) for path in tmp_path.iterdir()} == files


def kind(report: str) -> str:
    if report.startswith("{"):
        return "json"
    return "text" if report else ""


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        ([], "required"),
        (["review"], "required"),
        (["inspect"], "invalid choice"),
        (["review", "sound.cir", "--format", "braille"], "choose from"),
        (["review", "sound.cir", "--gate", "always"], "choose from"),
        (["review", "sound.cir", "--format", "json", "--format", "text"], "go to standard output"),
        (["review", "sound.cir", "--output", "a", "--output", "a"], "go to a"),
        (["review", "-", "-"], "once"),
    ],
)
def test_wrong_usage(arguments: Sequence[str], message: str, capsys: pytest.CaptureFixture[str]) -> None:
    with pytest.raises(SystemExit) as stop:
        cli.main(arguments)
    assert stop.value.code == 2
    streams = capsys.readouterr()
    assert streams.out == ""
    assert message in streams.err


def test_a_report_that_cannot_be_written_does_not_hide_the_others(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    lost, kept = tmp_path / "no" / "folder" / "a.json", tmp_path / "b.json"
    pairs = ["--format", "json", "--output", str(lost), "--format", "json", "--output", str(kept)]
    assert cli.main(["review", "sound.cir", *pairs]) == 2
    assert str(lost) in capsys.readouterr().err
    assert json.loads(kept.read_text("utf-8"))["schema"] == 1


@pytest.mark.parametrize("option", ["--brief", "--parts-list"])
def test_a_report_never_overwrites_what_is_reviewed(
    option: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(tmp_path)
    for name in ("sound.cir", "beside"):
        Path(name).write_text("precious")
    Path("link").symlink_to("beside")
    for output in ("./sound.cir", "beside", "link"):
        with pytest.raises(SystemExit) as stop:
            cli.main(["review", "sound.cir", option, "beside", "--output", output])
        assert stop.value.code == 2
        assert "overwrite" in capsys.readouterr().err
    assert {path.read_text() for path in tmp_path.iterdir()} == {"precious"}


def test_interrupted(capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["review", "interrupt.cir"]) == 130
    assert capsys.readouterr().err == "interrupted\n"


def test_an_internal_error_is_told_in_words(
    capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.delenv("PWMLINT_TRACEBACK", raising=False)
    assert cli.main(["review", "crash.cir"]) == 2
    message = capsys.readouterr().err
    assert message.startswith(r"pwmlint: internal error: ZeroDivisionError: two \x1b[31mlines\n" + "\n")
    assert "report it" in message
    assert "Traceback" not in message

    monkeypatch.setenv("PWMLINT_TRACEBACK", "1")
    assert cli.main(["review", "crash.cir"]) == 2
    assert "Traceback" in capsys.readouterr().err


def test_version_and_help(capsys: pytest.CaptureFixture[str]) -> None:
    for arguments, expected in (
        (["--version"], f"pwmlint {version('pwmlint')}"),
        (["--help"], "exit status"),
        (["review", "--help"], "--allow-include"),
    ):
        with pytest.raises(SystemExit) as stop:
            cli.main(arguments)
        assert stop.value.code == 0
        assert expected in capsys.readouterr().out


@pytest.mark.parametrize(
    ("arguments", "expected"),
    [
        (["rules"], "dead-time.range"),
        (["rules", "dead-time.range"], "\nRemedy\n"),
        (["controllers"], "494"),
        (["controllers", "494"], "source: SLVS074"),
    ],
)
def test_the_reference(arguments: Sequence[str], expected: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(arguments) == 0
    streams = capsys.readouterr()
    assert expected in streams.out
    assert streams.err == ""


@pytest.mark.parametrize(
    ("arguments", "suggestion"),
    [(["rules", "dead-time.rang"], "dead-time.range"), (["controllers", "\x1b495"], "494")],
)
def test_the_reference_suggests_what_was_meant(
    arguments: Sequence[str], suggestion: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert cli.main(arguments) == 2
    streams = capsys.readouterr()
    assert streams.out == ""
    assert suggestion in streams.err
    assert "\x1b" not in streams.err
