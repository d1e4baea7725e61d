"""Standard input as a revision, and the names under which a source is shown."""

from __future__ import annotations

import io
import sys
from pathlib import Path

import pytest
from pwmlint.grammar.netlist import Place
from pwmlint.lint.compare import compare
from pwmlint.lint.compare.source import Source, opened
from pwmlint.lint.verdict import Outcome, Verdict

LIST = b"from a pipe\nR1 A 0 10k\nR2 A 0 22k\n.end\n"


def test_standard_input(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "fan.cir"
    path.write_bytes(LIST.replace(b"22k", b"33k"))
    monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.BytesIO(LIST)))
    found = compare("-", path)
    assert found.old.netlist == "<standard input>"
    (change,) = found.circuit.parts_changed
    assert change.old.place == Place("<standard input>", 3, 1)


def test_a_file_is_read_where_it_is() -> None:
    with opened("fan.cir") as source:
        assert source == Source("fan.cir")


def test_every_text_is_named_and_nothing_else_is_touched() -> None:
    source = Source("/tmp/x/fan.cir", "/tmp/x/", "HEAD:")
    verdict = Verdict(
        outcome=Outcome.PASS,
        message="/tmp/x/lost.lib is not read",
        margin=0.5,
        places=(Place("/tmp/x/fan.cir", 3, 1),),
        contributions=(("/tmp/x/", 0.5),),
    )
    named = source.named(verdict)
    assert named.outcome is Outcome.PASS
    assert named.message == "HEAD:lost.lib is not read"
    assert named.places == (Place("HEAD:fan.cir", 3, 1),)
    assert named.contributions == (("HEAD:", 0.5),)
    assert named.margin == 0.5
