"""`pwmlint completion`: the script of a shell on standard output, with the words of this installation."""

from __future__ import annotations

import pytest
from pwmlint.lint.cli import main
from pwmlint.lint.rule import load_rules
from pwmlint.lint.shells import SHELLS


@pytest.mark.parametrize("shell", SHELLS)
def test_a_script_for_each_shell(shell: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["completion", shell]) == 0
    streams = capsys.readouterr()
    assert streams.err == ""
    assert all(rule.id in streams.out for rule in load_rules())
    assert "494" in streams.out


def test_another_shell(capsys: pytest.CaptureFixture[str]) -> None:
    with pytest.raises(SystemExit) as stop:
        main(["completion", "clam"])
    assert stop.value.code == 2
    assert "bash" in capsys.readouterr().err


def test_help_tells_where_the_line_goes(capsys: pytest.CaptureFixture[str]) -> None:
    with pytest.raises(SystemExit):
        main(["completion", "--help"])
    told = capsys.readouterr().out
    assert all(f"pwmlint completion {shell}" in told for shell in SHELLS)
