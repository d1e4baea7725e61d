"""Reads and reviews one revision: the comparison needs the design itself besides what the review says."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from ..design import Design
from ..estimate import Method
from ..review import read_inputs, review_netlist
from ..verdict import Review


def read_revision(
    netlist: str | Path,
    *,
    brief: str | Path | None,
    parts_list: str | Path | None,
    allow_include: Sequence[Path],
    method: Method,
) -> tuple[Design, Review]:
    """Return the design and its review."""
    inputs = read_inputs(netlist, brief=brief, parts_list=parts_list, allow_include=allow_include)
    found = review_netlist(inputs.netlist, inputs.brief, inputs.parts_list, method=method)
    return Design(inputs.netlist, inputs.brief, inputs.parts_list, method), found
