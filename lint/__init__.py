"""What a netlist means: the circuit, the brief, the review and its reports.

    from pwmlint.lint import review
    found = review("board.edf", brief="board.brief.toml")

Nothing here prints or exits; `cli` does.
"""

from __future__ import annotations

from .brief import read_brief
from .estimate import Method
from .parts_list import read_parts_list
from .policy import Policy
from .review import review, review_netlist
from .verdict import Level, Outcome, Review, Verdict

__all__ = [
    "Level",
    "Method",
    "Outcome",
    "Policy",
    "Review",
    "Verdict",
    "read_brief",
    "read_parts_list",
    "review",
    "review_netlist",
]
