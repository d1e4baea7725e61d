"""Arguments that nobody meant: names that a change has chosen, variables that are not set, one file twice."""

from __future__ import annotations

import os
import sys
from collections.abc import Sequence
from pathlib import Path

import pytest
from pwmlint.lint import cli
from pwmlint.lint.commands.arguments import refusal

LIST = "mast beacon\nR1 A 0 10k\nR2 A 0 10k\n.end\n"


@pytest.fixture(autouse=True)
def mast(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    (tmp_path / "beacon.cir").write_text(LIST, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


@pytest.mark.parametrize(
    ("arguments", "says"),
    [
        (["review", ""], "pwmlint: an empty argument after review\n"),
        (["review", "--", ""], "pwmlint: an empty argument after --\n"),
        (["review", "beacon.cir", "--brief", ""], "pwmlint: an empty argument after --brief\n"),
        (["review", "beacon.cir", "--rules="], "pwmlint: --rules is empty\n"),
        (["compare", "", "beacon.cir"], "pwmlint: an empty argument after compare\n"),
    ],
)
def test_empty(arguments: Sequence[str], says: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(arguments) == 2
    streams = capsys.readouterr()
    assert streams.out == ""
    assert streams.err.startswith(says)


def test_a_file_with_the_name_of_an_option(mast: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """A hook or a shell gives the names of files; none must load rules or choose a configuration."""
    name = "--rules=orchard/beacon.cir"
    for file in (mast / name, mast / "orchard" / "beacon.cir" / "rules.py"):
        file.parent.mkdir(parents=True)
        file.write_text("raise SystemExit(0)", encoding="utf-8")
    assert cli.main(["review", name, "beacon.cir"]) == 2
    assert capsys.readouterr().err.startswith(f"{name}: this file has the name of an option\n")


def test_where_it_is_meant_as_a_file(mast: Path, capsys: pytest.CaptureFixture[str]) -> None:
    (mast / "--strict").write_text(LIST, encoding="utf-8")
    for meant in (["--", "--strict"], ["./--strict"]):
        assert cli.main(["review", "--gate", "never", *meant]) == 0
        assert f"netlist     {meant[-1]} " in capsys.readouterr().out
    assert refusal(["review", "--gate", "never", "-", "beacon.cir"]) is None


@pytest.mark.skipif(os.name == "nt", reason="no such file names there")
def test_a_name_on_two_lines_is_no_command_of_a_log(mast: Path, capsys: pytest.CaptureFixture[str]) -> None:
    name = "--x\n::error::PEARS.cir"
    with pytest.raises(SystemExit) as ended:
        cli.main(["review", "beacon.cir", name])
    assert ended.value.code == 2
    (mast / "--x\n::error::PEARS.cir").write_text(LIST, encoding="utf-8")
    assert cli.main(["review", name]) == 2
    err = capsys.readouterr().err
    assert err.count("--x\\n::error::PEARS.cir") == 3  # in the usage error, and twice in the other
    assert not any(line.startswith("::") for line in err.splitlines())


def test_one_file_in_several_spellings_is_reviewed_once(
    mast: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    spellings = ["beacon.cir", "./beacon.cir", str(mast / "beacon.cir"), "."]
    assert cli.main(["review", *spellings, "--gate", "never"]) == 0
    assert capsys.readouterr().out.count("netlist     ") == 1


def test_one_output_in_two_spellings(mast: Path, capsys: pytest.CaptureFixture[str]) -> None:
    two = ["--format", "json", "--output", "report", "--format", "text", "--output", "./report"]
    with pytest.raises(SystemExit):
        cli.main(["review", "beacon.cir", *two])
    assert "two reports would go to report" in capsys.readouterr().err
    assert not (mast / "report").exists()


@pytest.mark.skipif(not os.path.exists(os.devnull) or os.name == "nt", reason="devices by path")
def test_a_device_takes_any_number_of_reports() -> None:
    two = ["--format", "json", "--output", os.devnull, "--format", "text", "--output", os.devnull]
    assert cli.main(["review", "beacon.cir", "--gate", "never", *two]) == 0


def test_a_folder_that_is_not_there(capsys: pytest.CaptureFixture[str]) -> None:
    with pytest.raises(SystemExit):
        cli.main(["review", "beacon.cir", "--allow-include", "modles"])
    assert "argument --allow-include: there is no folder modles" in capsys.readouterr().err


LONG = "a" * 5000


@pytest.mark.parametrize(
    "arguments",
    [
        ["review", LONG],
        ["review", f"{LONG}.brief.toml"],
        ["compare", "beacon.cir", LONG],
        ["brief", LONG],
        ["brief", "beacon.cir", "--output", LONG],
        ["review", "beacon.cir", "--output", LONG],
        ["review", "beacon.cir", "--brief", LONG],
        ["review", "beacon.cir", "--config", LONG],
        ["review", "beacon.cir", "--rules", LONG],
    ],
)
def test_a_name_that_no_file_can_have(arguments: Sequence[str], capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(arguments) == 2
    err = capsys.readouterr().err
    assert err.startswith(LONG[:20])
    assert "internal error" not in err


@pytest.mark.skipif(sys.platform == "win32" or os.geteuid() == 0, reason="needs a user who may not read all")
@pytest.mark.parametrize("command", ["review", "permit", "brief", "settings"])
def test_a_folder_that_may_not_be_entered(
    command: str, mast: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    closed = mast / "closed"
    closed.mkdir(mode=0o000)
    try:
        cli.main([command, "closed/beacon.cir"])
    finally:
        closed.chmod(0o700)
    assert "internal error" not in capsys.readouterr().err
