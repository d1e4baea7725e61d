"""`pwmlint brief`: where the brief goes, what is never overwritten, what cannot be read."""

from __future__ import annotations

import io
import sys
from pathlib import Path

import pytest
from pwmlint.lint.brief import read_brief
from pwmlint.lint.cli import main

LIST = "hen house\nR1 RT 0 22k\nC1 CT 0 1n\nU1 A B FB DTC CT RT 0 C1 0 0 C2 VCC 0 REF C D 494\n"


@pytest.fixture(autouse=True)
def _in_a_folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    Path("board.cir").write_text(LIST)


def test_on_standard_output(capsys: pytest.CaptureFixture[str]) -> None:
    Path("board.brief.toml").write_text("not read, and not touched")
    assert main(["brief", "board.cir"]) == 0
    streams = capsys.readouterr()
    assert streams.err == ""
    assert "\n[controllers.U1]\n" in streams.out
    assert list(read_brief("board.brief.toml", streams.out).controllers) == ["U1"]
    assert Path("board.brief.toml").read_text() == "not read, and not touched"


def test_into_a_file_that_the_review_then_finds(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["brief", "board.cir", "--output", "board.brief.toml"]) == 0
    assert capsys.readouterr().out == ""
    main(["review", "board.cir"])
    assert "board.brief.toml" in capsys.readouterr().out


@pytest.mark.parametrize("output", ["board.brief.toml", "./board.cir", "link"])
def test_a_file_that_is_there_is_not_overwritten(output: str, capsys: pytest.CaptureFixture[str]) -> None:
    Path("board.brief.toml").write_text("precious")
    Path("link").symlink_to("board.brief.toml")
    assert main(["brief", "board.cir", "--output", output]) == 2
    streams = capsys.readouterr()
    assert streams.out == ""
    assert streams.err == (
        f"{output}: this file is there already, and is not overwritten\n"
        "  remedy:   remove it first, or name another with --output\n"
    )
    assert Path("board.brief.toml").read_text() == "precious"
    assert Path("board.cir").read_text() == LIST


def test_from_standard_input(monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]) -> None:
    monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.BytesIO(LIST.encode())))
    assert main(["brief", "-"]) == 0
    assert capsys.readouterr().out.startswith("# The brief of <standard input>, begun from the netlist.\n")


def test_the_parts_list_counts(capsys: pytest.CaptureFixture[str]) -> None:
    main(["brief", "board.cir"])
    wide = capsys.readouterr().out
    Path("ratings.csv").write_text("Reference,Tolerance\nR1,1 %\nC1,1 %\n")
    assert main(["brief", "board.cir", "--parts-list", "ratings.csv"]) == 0
    given = capsys.readouterr().out
    assert given != wide
    Path("ratings.csv").rename("board.parts.csv")
    assert main(["brief", "board.cir"]) == 0
    assert capsys.readouterr().out == given


@pytest.mark.parametrize(
    ("arguments", "says"),
    [
        (["nowhere.cir"], "nowhere.cir: there is no such file"),
        (["board.cir", "--parts-list", "gone.csv"], "gone.csv: there is no such file"),
        (["."], "a folder"),
        (["board.cir", "--output", "no/such/folder.toml"], "No such file or directory"),
        (["board.cir", "--output", "."], "Is a directory"),
    ],
)
def test_what_goes_wrong(arguments: list[str], says: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["brief", *arguments]) == 2
    streams = capsys.readouterr()
    assert streams.out == ""
    assert says in streams.err
    assert "Traceback" not in streams.err


def test_a_stream_without_unicode(monkeypatch: pytest.MonkeyPatch) -> None:
    Path("board.cir").write_text(LIST.replace("VCC", "größe"), encoding="utf-8")
    stream = io.TextIOWrapper(io.BytesIO(), encoding="ascii")
    monkeypatch.setattr(sys, "stdout", stream)
    assert main(["brief", "board.cir"]) == 0
    stream.seek(0)
    assert '"gr\\u00f6\\u00dfe".voltage' in stream.read()
