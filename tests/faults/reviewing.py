"""Reviews of boards in memory."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from pathlib import Path

from pwmlint.grammar import read_bytes
from pwmlint.lint.brief import read_brief
from pwmlint.lint.controllers import generic_number
from pwmlint.lint.parts_list import read_parts_list
from pwmlint.lint.review import review_netlist
from pwmlint.lint.rule import load_rules
from pwmlint.lint.verdict import Outcome, Review, Verdict

from .board import Board
from .writers import WRITERS, brief_text, parts_list_text

FORMATS = tuple(WRITERS)


@dataclass(slots=True)
class Reviewer:
    """Reviews boards, each sound one once.

    folder: where briefs and parts lists are written, for their readers take files
    """

    folder: Path
    _sound: dict[tuple[str, str, bool], Review] = field(default_factory=dict[tuple[str, str, bool], Review])

    def sound(self, board: Board, form: str, *, told: bool) -> Review:
        """Return the whole review of a board as it is: with brief and parts list, or the netlist alone."""
        key = (board.name, form, told)
        if key not in self._sound:
            self._sound[key] = self.review(board, form, told=told)
        return self._sound[key]

    def review(self, board: Board, form: str, *, told: bool, rules: Iterable[str] | None = None) -> Review:
        """Review a board; `rules` are the ids of those to ask, None for all."""
        data = WRITERS[form](board).encode()
        name = f"board.{form.lower()}"
        netlist = read_bytes(data, name, keep=lambda model: generic_number(model) is not None)
        wanted = None if rules is None else frozenset(rules)
        asked = [rule for rule in load_rules() if wanted is None or rule.id in wanted]
        if not told:
            return review_netlist(netlist, rules=asked)
        brief, parts_list = self.folder / "board.brief.toml", self.folder / "board.parts.csv"
        brief.write_text(brief_text(board), encoding="utf-8")
        parts_list.write_text(parts_list_text(board), encoding="utf-8")
        return review_netlist(netlist, read_brief(brief), read_parts_list(parts_list), rules=asked)

    def new_concerns(
        self, sound: Board, faulty: Board, form: str, rules: Iterable[str], *, told: bool
    ) -> set[str]:
        """Return those of `rules` that speak of the faulty board and are silent on the sound one."""
        before = {verdict.rule for verdict in concerns(self.sound(sound, form, told=told))}
        after = concerns(self.review(faulty, form, told=told, rules=rules))
        return {verdict.rule for verdict in after} - before


def concerns(review: Review) -> list[Verdict]:
    """Return the verdicts that failed or that a person must judge."""
    return [verdict for verdict in review.verdicts if verdict.outcome in (Outcome.FAIL, Outcome.REVIEW)]
