"""What an open verdict asks for, in the words of the brief: the lines that would open it."""

from __future__ import annotations


def rail(net: str, *keys: str, declared: bool = False) -> str:
    """Return the line of the brief that tells keys of a rail.

    declared: the brief has the rail already; no rail goes without a voltage
    """
    wanted = keys if declared else dict.fromkeys(("voltage", *keys))
    told = ", ".join(f'{key} = "..."' for key in wanted)
    return f"brief: [rails.{toml_key(net)}] {told}"


def controller(reference: str, key: str) -> str:
    """Return the line of the brief that tells one key of a controller."""
    return f'brief: [controllers.{toml_key(reference)}] {key} = "..."'


def toml_key(name: str) -> str:
    """Return a net or a reference designator as a TOML key, quoted where a path or a mark demands it."""
    if name.isascii() and name.replace("_", "").replace("-", "").isalnum():
        return name
    escaped = name.replace("\\", "\\\\").replace('"', '\\"')
    return f'"{escaped}"'
