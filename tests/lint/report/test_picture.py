"""The picture in the README: an excerpt of the report on a faulty example, kept up to date by this test."""

from __future__ import annotations

import os
import re
from collections.abc import Callable
from io import StringIO
from pathlib import Path

import pytest
from pwmlint.lint import review
from rich.console import Console
from rich.text import Text

ROOT = Path(__file__).parents[3]

EXAMPLE = "examples/frost-fan-rev-b.cir"

PICTURE = ROOT / "examples" / "report.svg"

# With this variable set the picture is written instead of compared.
UPDATE = "PWMLINT_UPDATE_SNAPSHOTS"

# What the picture shows of the report; a gap stands for the rest.
SECTIONS = ("U1", "supply", "reference", "could not be checked")

GAP = "  ⋮\n"

# Fonts of the reader's own machine: a picture fetches nothing.
FORMAT = """\
<svg class="rich-terminal" viewBox="0 0 {width} {height}" xmlns="http://www.w3.org/2000/svg">
<style>
.{unique_id}-matrix {{
  font-family: "DejaVu Sans Mono", Menlo, Consolas, monospace;
  font-size: {char_height}px;
  line-height: {line_height}px;
}}
.{unique_id}-title {{ display: none; }}
{styles}
</style>
<defs>
<clipPath id="{unique_id}-clip-terminal">
<rect x="0" y="0" width="{terminal_width}" height="{terminal_height}"/>
</clipPath>
{lines}
</defs>
{chrome}
<g transform="translate({terminal_x}, {terminal_y})" clip-path="url(#{unique_id}-clip-terminal)">
{backgrounds}
<g class="{unique_id}-matrix">
{matrix}
</g>
</g>
</svg>
"""


def test_the_picture_shows_the_report(printed: Callable[..., str], monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(ROOT)
    picture = drawn(excerpt(printed(review(EXAMPLE), colour=True)))
    if os.environ.get(UPDATE):
        PICTURE.write_text(picture, encoding="utf-8", newline="\n")
    assert picture == PICTURE.read_text(encoding="utf-8")


def excerpt(report: str) -> str:
    """Return the head of a report, the sections to be shown, and its end."""
    head, *sections = re.split(r"^(?=\x1b\[1m[^\n]*[─━]{2})", report, flags=re.MULTILINE)
    body, line, answer = sections[-1].rpartition("\x1b[2m━")
    shown = head
    for section in (*sections[:-1], body):
        title = Text.from_ansi(section.partition("\n")[0]).plain
        if title.startswith(SECTIONS):
            shown += section
        elif not shown.endswith(GAP + "\n"):
            shown += GAP + "\n"
    return shown + line + answer


def drawn(report: str) -> str:
    """Return a coloured report as SVG, the same bytes for the same report."""
    console = Console(record=True, file=StringIO(), width=80, legacy_windows=False)
    console.print(Text.from_ansi(report), soft_wrap=True, highlight=False)
    return console.export_svg(title="pwmlint", unique_id="report", code_format=FORMAT)
