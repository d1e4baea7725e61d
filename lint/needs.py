"""What an open verdict asks for, in the words of the brief: the lines that would open it."""

from __future__ import annotations

import tomllib

from .toml_text import toml_key

_BRIEF = "brief: "


def rail(net: str, *keys: str, declared: bool = False) -> str:
    """Return the line of the brief that tells keys of a rail.

    declared: the brief has the rail already; no rail goes without a voltage
    """
    wanted = keys if declared else dict.fromkeys(("voltage", *keys))
    told = ", ".join(f'{key} = "..."' for key in wanted)
    return f"{_BRIEF}[rails.{toml_key(net)}] {told}"


def controller(reference: str, key: str) -> str:
    """Return the line of the brief that tells one key of a controller."""
    return f'{_BRIEF}[controllers.{toml_key(reference)}] {key} = "..."'


def rail_asked_for(need: str) -> str | None:
    """Return the net that the line of a need would declare, None where it asks for something else."""
    header, bracket, _ = need.removeprefix(_BRIEF).rpartition("] ")
    if not need.startswith(f"{_BRIEF}[rails.") or not bracket:
        return None
    try:
        asked = tomllib.loads(header + bracket)
    except tomllib.TOMLDecodeError:  # a line with a gap to fill in, such as <the other mains net>
        return None
    return next(iter(asked["rails"]))
