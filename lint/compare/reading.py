"""Reads and reviews one revision: the comparison needs the design itself besides what the review says."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date
from pathlib import Path

from ..design import Design
from ..estimate import Method
from ..policy import Policy
from ..review import read_inputs, review_netlist
from ..rule import Rule
from ..verdict import Review


@dataclass(frozen=True, slots=True, kw_only=True)
class Asked:
    """How a revision is reviewed; each is the argument of `review` by its name."""

    brief: str | Path | None = None
    parts_list: str | Path | None = None
    deviations: str | Path | None = None
    allow_include: Sequence[Path] = ()
    method: Method = Method.EXTREME
    rules: Sequence[Rule] | None = None
    policy: Policy | None = None
    today: date | None = None


def read_revision(netlist: str, asked: Asked) -> tuple[Design, Review]:
    """Return the design of a netlist and its review."""
    inputs = read_inputs(
        netlist,
        brief=asked.brief,
        parts_list=asked.parts_list,
        deviations=asked.deviations,
        allow_include=asked.allow_include,
    )
    found = review_netlist(
        inputs.netlist,
        inputs.brief,
        inputs.parts_list,
        asked.rules,
        asked.method,
        asked.policy,
        inputs.deviations,
        asked.today,
    )
    return Design(inputs.netlist, inputs.brief, inputs.parts_list, asked.method), found
