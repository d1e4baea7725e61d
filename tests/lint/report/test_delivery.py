from __future__ import annotations

import json
import os
import stat
import threading
from pathlib import Path
from typing import TextIO

import pytest
from pwmlint.lint.report import Gate
from pwmlint.lint.report.delivery import DeliveryError, Target, deliver, send
from pwmlint.lint.verdict import Review


def test_to_standard_output(sound: Review, capsys: pytest.CaptureFixture[str]) -> None:
    deliver(Target("json"), [sound], Gate())
    assert json.loads(capsys.readouterr().out)["schema"] == 1


def test_to_a_file_and_nothing_beside_it(sound: Review, tmp_path: Path) -> None:
    path = tmp_path / "report.txt"
    path.write_text("an older report")
    deliver(Target("text", str(path)), [sound], Gate())
    assert "hive-scale" in path.read_text(encoding="utf-8")
    assert os.listdir(tmp_path) == ["report.txt"]


def test_a_file_stays_free_of_escapes(
    faulty: Review, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setenv("FORCE_COLOR", "1")
    path = tmp_path / "report.txt"
    deliver(Target("text", str(path)), [faulty], Gate())
    assert "\x1b" not in path.read_text(encoding="utf-8")


def test_a_failing_writer_leaves_the_older_report(tmp_path: Path) -> None:
    path = tmp_path / "report.txt"
    path.write_text("an older report")

    def broken(stream: TextIO) -> None:
        stream.write("half a rep")
        raise OSError(28, "No space left on device")

    with pytest.raises(DeliveryError, match="No space left on device"):
        send(broken, str(path))
    assert path.read_text() == "an older report"
    assert os.listdir(tmp_path) == ["report.txt"]


def test_a_link_keeps_pointing(tmp_path: Path) -> None:
    real, link = tmp_path / "real.txt", tmp_path / "link.txt"
    real.write_text("old")
    link.symlink_to(real)
    send(lambda stream: stream.write("new"), str(link))
    assert link.is_symlink()
    assert real.read_text() == "new"


def test_a_pipe_is_written_to_and_not_replaced(tmp_path: Path) -> None:
    pipe = tmp_path / "pipe"
    os.mkfifo(pipe)
    read: list[str] = []
    reader = threading.Thread(target=lambda: read.append(pipe.read_text()))
    reader.start()
    send(lambda stream: stream.write("through"), str(pipe))
    reader.join(timeout=10)
    assert read == ["through"]
    assert stat.S_ISFIFO(pipe.stat().st_mode)


@pytest.mark.parametrize("name", ["no/such/folder/report.txt", ".", "\x1b[31m/report"])
def test_where_it_cannot_be_written(name: str, tmp_path: Path) -> None:
    with pytest.raises(DeliveryError) as error:
        send(lambda stream: stream.write("x"), str(tmp_path / name))
    assert "cannot be written" in str(error.value)
    assert "remedy:" in str(error.value)
    assert "\x1b" not in str(error.value)
