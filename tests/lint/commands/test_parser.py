from __future__ import annotations

import argparse
import shlex
from collections.abc import Iterator

import pytest
from pwmlint.lint.cli import command_line
from pwmlint.lint.commands.parser import Parser


def parsers() -> Iterator[Parser]:
    """Yield the parser of the command line and that of each command."""
    whole = command_line()
    yield whole
    yield from whole.commands.values()


EXAMPLES = [line for parser in parsers() for line, _ in parser.examples]


def test_help_begins_with_examples() -> None:
    for parser in parsers():
        if parser.examples:
            assert parser.format_help().startswith(f"examples:\n  {parser.examples[0][0]}")
            assert "usage: " in parser.format_help()


def test_without_examples_it_is_argparse_s_help() -> None:
    assert Parser(prog="sorter").format_help() == argparse.ArgumentParser(prog="sorter").format_help()


@pytest.mark.parametrize("line", EXAMPLES)
def test_every_example_is_a_command_line(line: str) -> None:
    program, *arguments = shlex.split(line.partition(" >> ")[0])
    assert program == "pwmlint"
    assert command_line().parse_args(arguments).command


def test_there_are_examples_for_what_one_does_every_day() -> None:
    assert {line.split()[1] for line in EXAMPLES} >= {"review", "brief", "permit", "settings", "rules"}
