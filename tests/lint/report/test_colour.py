from __future__ import annotations

import os
import sys
from collections.abc import Iterator
from io import StringIO
from typing import TextIO

import pytest
from pwmlint.lint.report import colour


class Terminal(StringIO):
    def isatty(self) -> bool:
        return True


@pytest.fixture
def pseudo_terminal() -> Iterator[TextIO]:
    pty = pytest.importorskip("pty", reason="a pseudo terminal needs a POSIX system")
    near, far = pty.openpty()
    with os.fdopen(far, "w") as stream:
        yield stream
    os.close(near)


@pytest.mark.parametrize(
    ("environment", "on_terminal", "in_pipe"),
    [
        ({}, True, False),
        ({"TERM": "dumb"}, False, False),
        ({"NO_COLOR": "1"}, False, False),
        ({"NO_COLOR": ""}, True, False),
        ({"FORCE_COLOR": "1"}, True, True),
        ({"FORCE_COLOR": ""}, True, False),
        ({"FORCE_COLOR": "1", "TERM": "dumb"}, True, True),
        ({"FORCE_COLOR": "1", "NO_COLOR": "1"}, False, False),
        ({"CLICOLOR_FORCE": "1"}, True, True),
        ({"CLICOLOR_FORCE": "0"}, True, False),
        ({"CLICOLOR_FORCE": ""}, True, False),
        ({"CLICOLOR_FORCE": "1", "NO_COLOR": "1"}, False, False),
        ({"CLICOLOR_FORCE": "1", "CLICOLOR": "0", "TERM": "dumb"}, True, True),
        ({"CLICOLOR": "0"}, False, False),
        ({"CLICOLOR": "1"}, True, False),
    ],
)
def test_the_published_order_of_the_variables(
    environment: dict[str, str], on_terminal: bool, in_pipe: bool, monkeypatch: pytest.MonkeyPatch
) -> None:
    for stream, expected in ((Terminal(), on_terminal), (StringIO(), in_pipe)):
        monkeypatch.setattr(sys, "stdout", stream)
        assert colour.wanted(stream, environment) is expected


def test_a_file_is_never_coloured() -> None:
    assert not colour.wanted(StringIO(), {"FORCE_COLOR": "1"})


@pytest.mark.parametrize(
    ("columns", "width"),
    [
        ("", 80),
        ("40", 50),
        ("64", 64),
        ("100", 100),
        ("240", 120),
        ("9" * 5000, 80),
        ("-3", 80),
        ("wide", 80),
    ],
)
def test_width_without_a_terminal(columns: str, width: int) -> None:
    assert colour.width(StringIO(), {"COLUMNS": columns}) == width


@pytest.mark.parametrize(("size", "width"), [(30, 50), (66, 66), (99, 99), (200, 120)])
def test_width_of_a_terminal(pseudo_terminal: TextIO, size: int, width: int) -> None:
    import fcntl
    import struct
    import termios

    fcntl.ioctl(pseudo_terminal.fileno(), termios.TIOCSWINSZ, struct.pack("HHHH", 24, size, 0, 0))
    assert colour.width(pseudo_terminal, {}) == width
