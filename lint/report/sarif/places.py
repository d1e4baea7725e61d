"""Where a result lies: in a file by line and column, in the circuit by part, pin and net.

Files are told as the user named them, as references against the folder of the run; only what lies outside of
it is told without that base.
"""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import PurePath
from typing import Any
from urllib.parse import quote

from ....grammar.errors import printable
from ....grammar.netlist import Place
from ...verdict import Review, Verdict

BASE = "%SRCROOT%"


def artifact(file: str) -> dict[str, Any]:
    """Return where a file is, as a SARIF artifactLocation."""
    path = PurePath(file)
    text = quote(_bytes(path.as_posix()))
    if path.is_absolute():
        return {"uri": f"file://{'' if text.startswith('/') else '/'}{text}"}
    if ".." in path.parts:
        return {"uri": text}
    return {"uri": text, "uriBaseId": BASE}


def physical(place: Place) -> dict[str, Any]:
    """Return a place as a SARIF physicalLocation; where a whole file is meant it has no region."""
    located: dict[str, Any] = {"artifactLocation": artifact(place.file)}
    if place.line > 0:
        located["region"] = {"startLine": place.line}
        if place.column > 0:
            located["region"]["startColumn"] = place.column
    return located


def sheets(review: Review) -> frozenset[str]:
    """Return the paths in the hierarchy on which the named parts stand: `psu` of `psu/U1`."""
    parts = {controller.part for controller in review.controllers}
    parts.update(part for verdict in review.verdicts for part in verdict.parts)
    return frozenset(part.rpartition("/")[0] for part in parts if "/" in part)


def logical(verdict: Verdict, known_sheets: frozenset[str]) -> list[dict[str, Any]]:
    """Return the controller, the parts, the pins and the nets of a verdict as SARIF logicalLocations.

    The slash of a net's name parts it from its sheet only where that sheet is known: `IN/OUT` is one name.
    """
    found = dict.fromkeys(_named(verdict, known_sheets))
    return [
        {"name": printable(name), "fullyQualifiedName": printable(full), "kind": kind}
        for kind, name, full in found
    ]


def _named(verdict: Verdict, known_sheets: frozenset[str]) -> Iterator[tuple[str, str, str]]:
    """Yield kind, name and full name of each, the controller first."""
    for part in filter(None, (verdict.controller, *verdict.parts)):
        yield "part", part.rpartition("/")[2] or part, part
    for pin in verdict.pins:
        yield "pin", pin, f"{verdict.controller}/{pin}" if verdict.controller else pin
    for net in verdict.nets:
        sheet, _, name = net.rpartition("/")
        yield "net", name if name and sheet in known_sheets else net, net


def _bytes(path: str) -> bytes:
    """Return the bytes of a path: those that the file system gave, where they are no text."""
    try:
        return path.encode("utf-8", "surrogateescape")
    except UnicodeEncodeError:
        return path.encode("utf-8", "surrogatepass")
