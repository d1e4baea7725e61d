"""`python -m pwmlint.lint` as a process of its own: streams, pipes and input that cannot be reviewed."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest

COMMAND = [sys.executable, "-m", "pwmlint.lint"]


def run(*arguments: str | Path, stdin: bytes = b"", **environment: str) -> subprocess.CompletedProcess[bytes]:
    return subprocess.run(
        [*COMMAND, *map(str, arguments)],
        input=stdin,
        capture_output=True,
        timeout=60,
        check=False,
        env={**os.environ, **environment},
    )


def test_a_reader_that_closes_the_pipe_is_no_error() -> None:
    with subprocess.Popen(
        [*COMMAND, "controllers", "494"], stdout=subprocess.PIPE, stderr=subprocess.PIPE
    ) as process:
        assert process.stdout is not None
        assert process.stderr is not None
        process.stdout.close()
        assert process.stderr.read() == b""
        assert process.wait(timeout=60) == 0


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="the system has no device that is always full")
def test_a_full_disk_is_told() -> None:
    with Path("/dev/full").open("wb") as full:
        process = subprocess.run(
            [*COMMAND, "controllers"], stdout=full, stderr=subprocess.PIPE, timeout=60, check=False
        )
    assert process.returncode == 2
    assert process.stderr.startswith(b"standard output: the report cannot be written: No space left")
    assert b"Traceback" not in process.stderr
    assert b"Exception" not in process.stderr


@pytest.mark.parametrize("encoding", ["ascii", "latin-1", "utf-8"])
def test_any_encoding_of_standard_output_will_do(encoding: str) -> None:
    process = run("controllers", "494", PYTHONIOENCODING=encoding)
    assert process.returncode == 0
    assert ("Ω" if encoding == "utf-8" else "ohm") in process.stdout.decode(encoding)


CUT_OFF = b"""(edif orchard
  (edifVersion 2 0 0)
  (edifLevel 0)
  (keywordMap (keywordLevel 0))
  (library pump
    (edifLevel 0)
    (technology (numberDefinition))
    (cell R (cellType GENERIC)"""

UNBALANCED = b"""(edif orchard
  (edifVersion 2 0 0)
  (edifLevel 0)
  (keywordMap (keywordLevel 0)))
)
"""

SOUND = b"""* bee-hive scale
R1 VREF HALF 4.7k
R2 HALF 0 4.7k
.end
"""


@pytest.mark.parametrize(
    ("name", "content", "place"),
    [
        ("empty.cir", b"", ""),
        ("blank.edf", b"\n \n", ""),
        ("binary.cir", b"\x7fELF\n\x00\x01\x02\xff", "2:1"),
        ("cut-off.edf", CUT_OFF, "8:31"),
        ("unbalanced.edf", UNBALANCED, "5:1"),
        ("few-nodes.cir", b"* cider press\nR1 VREF HALF 4.7k\nR2 HALF\n", "3:1"),
        ("value.cir", b"* cider press\nR1 VREF HALF 4.7k\nR2 HALF 0 {4.7k /}\n", "3:18"),
    ],
)
def test_a_netlist_that_cannot_be_read(name: str, content: bytes, place: str, tmp_path: Path) -> None:
    netlist = tmp_path / name
    netlist.write_bytes(content)
    assert_refused(run("review", netlist), netlist, place)


def test_no_such_netlist(tmp_path: Path) -> None:
    netlist = tmp_path / "missing.edf"
    assert_refused(run("review", netlist), netlist)


def test_a_folder_is_no_netlist(tmp_path: Path) -> None:
    assert_refused(run("review", tmp_path), tmp_path)


def test_standard_input_that_cannot_be_read() -> None:
    assert_refused(run("review", "-", stdin=CUT_OFF), Path("<standard input>"), "8:31")


@pytest.mark.parametrize(
    ("content", "place"),
    [
        (b'[design]\nname = "hive scale"\nambiant = "20 degC"\n', "3:1"),
        (b'[rails.VBAT]\nvoltage = "24 A"\n', "2:12"),
        (b'[rails.VBAT]\nvoltage = "24 furlongs"\n', "2:12"),
        (b'[rails.VBAT\nvoltage = "24 V"\n', "1:12"),
        (b"\x00\x01", "1:1"),
    ],
)
def test_a_brief_that_cannot_be_read(content: bytes, place: str, tmp_path: Path) -> None:
    netlist, brief = tmp_path / "scale.cir", tmp_path / "scale.brief.toml"
    netlist.write_bytes(SOUND)
    brief.write_bytes(content)
    assert_refused(run("review", netlist), brief, place)
    assert_refused(run("review", netlist, "--brief", brief), brief, place)


def test_no_such_brief(tmp_path: Path) -> None:
    netlist, brief = tmp_path / "scale.cir", tmp_path / "none.toml"
    netlist.write_bytes(SOUND)
    assert_refused(run("review", netlist, "--brief", brief), brief)


def test_a_parts_list_that_cannot_be_read(tmp_path: Path) -> None:
    netlist, parts = tmp_path / "scale.cir", tmp_path / "scale.parts.csv"
    netlist.write_bytes(SOUND)
    parts.write_bytes(b"reference,power\nR1,0.25 V\n")
    assert_refused(run("review", netlist), parts, "2:4")


def test_a_name_that_steers_the_terminal_is_written_out(tmp_path: Path) -> None:
    process = run("review", tmp_path / "\x1b[31m\u202e.cir")
    assert process.returncode == 2
    assert b"\\x1b[31m\\u202e.cir: there is no such file" in process.stderr
    assert b"\x1b" not in process.stderr


def assert_refused(process: subprocess.CompletedProcess[bytes], file: Path, place: str = "") -> None:
    """Check that a run ended with a message that names the place and a remedy, and with nothing else."""
    message = process.stderr.decode()
    where = f"{file}:{place}: " if place else f"{file}: "
    assert message.startswith(where), message
    assert "\n  remedy: " in message
    assert "Traceback" not in message
    assert "internal error" not in message
    assert process.stdout == b""
    assert process.returncode == 2


def without(stream: str, *arguments: str) -> subprocess.CompletedProcess[bytes]:
    """Run the command line with one stream closed, as a shell does for `>&-`."""
    closed = {"stdin": "<&-", "stdout": ">&-", "stderr": "2>&-"}[stream]
    return subprocess.run(
        ["sh", "-c", f'exec "$@" {closed}', "sh", *COMMAND, *arguments],
        capture_output=True,
        timeout=60,
        check=False,
    )


@pytest.mark.skipif(os.name == "nt", reason="closes streams as a POSIX shell does")
@pytest.mark.parametrize(
    ("stream", "arguments", "says"),
    [
        ("stdin", ["review", "-"], b"<standard input>: the file is empty"),
        ("stdout", ["controllers"], b"standard output: the report cannot be written"),
        ("stderr", ["review", "gone.cir"], b""),
    ],
)
def test_a_stream_that_is_closed(stream: str, arguments: list[str], says: bytes) -> None:
    process = without(stream, *arguments)
    assert process.returncode == 2
    assert process.stdout == b""
    assert process.stderr.startswith(says)
    assert b"internal error" not in process.stderr


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="the system has no device that is always full")
def test_messages_on_a_full_disk_do_not_change_the_exit_status() -> None:
    with Path("/dev/full").open("wb") as full:
        process = subprocess.run(
            [*COMMAND, "review", "gone.cir"], stdout=subprocess.PIPE, stderr=full, timeout=60, check=False
        )
    assert (process.returncode, process.stdout) == (2, b"")
