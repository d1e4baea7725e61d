from __future__ import annotations

from pathlib import Path

import pytest
from pwmlint.lint import cli
from pwmlint.lint.deviations import read_deviations

EXAMPLES = Path(__file__).parents[3] / "examples"
FAULTY = str(EXAMPLES / "frost-fan-rev-b.cir")


def test_written_to_standard_output(capsys: pytest.CaptureFixture[str]) -> None:
    assert cli.main(["permit", FAULTY]) == 0
    out, err = capsys.readouterr()
    assert out.startswith("# Deviations")
    assert out.count("[[deviation]]") == out.count('reason = ""') > 5
    assert err == ""


def test_written_into_a_file_they_let_the_gate_pass_once_completed(tmp_path: Path) -> None:
    netlist = tmp_path / "fan.cir"
    netlist.write_bytes(Path(FAULTY).read_bytes())
    file = tmp_path / "fan.deviations.toml"
    assert cli.main(["permit", str(netlist), "--output", str(file)]) == 0
    assert cli.main(["review", str(netlist)]) == 1, "reasons are missing yet"
    text = file.read_text(encoding="utf-8").replace('= ""', '= "for the first frost"')
    file.write_text(text, encoding="utf-8")
    assert len(read_deviations(file).entries) == text.count("[[deviation]]")
    assert cli.main(["review", str(netlist)]) == 0


def test_a_file_that_is_there_is_not_overwritten(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    file = tmp_path / "fan.deviations.toml"
    file.write_text("# mine\n", encoding="utf-8")
    assert cli.main(["permit", FAULTY, "--output", str(file)]) == 2
    assert file.read_text(encoding="utf-8") == "# mine\n"
    assert "not overwritten" in capsys.readouterr().err


def test_open_verdicts_when_strict(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    brief = tmp_path / "empty.brief.toml"
    brief.write_text("", encoding="utf-8")
    permit = ["permit", str(EXAMPLES / "frost-fan.cir"), "--brief", str(brief)]
    assert cli.main(permit) == 0
    few = capsys.readouterr().out.count("[[deviation]]")
    assert cli.main([*permit, "--strict"]) == 0
    assert capsys.readouterr().out.count("[[deviation]]") > few


def test_nothing_to_accept_and_nothing_readable(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    netlist = tmp_path / "lamp.cir"
    netlist.write_text("lamp\nR1 a 0 1k\nR2 a 0 1k\n.end\n", encoding="utf-8")
    assert cli.main(["permit", str(netlist)]) == 0
    out, err = capsys.readouterr()
    assert (out, err) == ("", "pwmlint: there is nothing to accept\n")
    assert cli.main(["permit", str(tmp_path / "gone.cir")]) == 2
    assert "gone.cir" in capsys.readouterr().err
