"""What a text report looks like on a console of some width."""

from __future__ import annotations

from collections.abc import Callable
from io import StringIO

from rich.console import Console


def printed_by(draw: Callable[[Console], None], width: int, colour: bool) -> str:
    sheet = StringIO()
    console = Console(
        file=sheet,
        width=width,
        color_system="standard" if colour else None,
        force_terminal=colour,
        no_color=not colour,
        legacy_windows=False,
    )
    draw(console)
    return sheet.getvalue()
