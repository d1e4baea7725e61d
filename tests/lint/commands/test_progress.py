from __future__ import annotations

import sys
from io import StringIO

import pytest
from pwmlint.lint.commands.progress import with_progress


class Terminal(StringIO):
    def isatty(self) -> bool:
        return True


ITEMS = [("fan.cir", 1), ("press\x1b[31m.edf", 2)]


def run(monkeypatch: pytest.MonkeyPatch, stream: StringIO, count: int = 2) -> str:
    monkeypatch.setattr(sys, "stderr", stream)
    assert list(with_progress(ITEMS[:count])) == ITEMS[:count]
    return stream.getvalue()


def test_told_at_a_terminal_and_wiped_away(monkeypatch: pytest.MonkeyPatch) -> None:
    told = run(monkeypatch, Terminal())
    assert "\r\x1b[K1 of 2: fan.cir" in told
    assert told.endswith("\r\x1b[K")


def test_names_do_not_steer_the_terminal(monkeypatch: pytest.MonkeyPatch) -> None:
    assert "\x1b[31m" not in run(monkeypatch, Terminal())


def test_not_in_a_log_and_not_for_a_single_netlist(monkeypatch: pytest.MonkeyPatch) -> None:
    assert run(monkeypatch, StringIO()) == ""
    assert run(monkeypatch, Terminal(), count=1) == ""
