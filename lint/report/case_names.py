"""Names for the verdicts of one review, where a format wants each of a rule to have its own."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Sequence

from ...grammar.errors import printable
from ..verdict import Verdict

# What a name is made of, shortest first: no values, so that the history of a verdict stays with its name.
_WORDINGS: tuple[Callable[[Verdict], str], ...] = (
    lambda verdict: _joined(verdict.subject or "netlist", verdict.pins),
    lambda verdict: _joined(verdict.subject or "netlist", (*verdict.pins, *verdict.parts, *verdict.nets)),
)


def case_names(verdicts: Sequence[Verdict]) -> list[str]:
    """Return a name for each verdict that no other verdict of its rule has.

    It is the subject and the pins; where these are the same, the parts and nets as well; where nothing tells
    two verdicts apart, a number.
    """
    names = [""] * len(verdicts)
    unnamed = list(range(len(verdicts)))
    for wording in _WORDINGS:
        for index in unnamed:
            names[index] = wording(verdicts[index])
        met = Counter((verdicts[index].rule, names[index]) for index in range(len(verdicts)))
        unnamed = [index for index in unnamed if met[verdicts[index].rule, names[index]] > 1]
    return _numbered(verdicts, names)


def _numbered(verdicts: Sequence[Verdict], names: Sequence[str]) -> list[str]:
    """Return the names, those that still come again with a number behind them."""
    taken = {(verdict.rule, name) for verdict, name in zip(verdicts, names, strict=True)}
    met: Counter[tuple[str, str]] = Counter()
    unique: list[str] = []
    for verdict, name in zip(verdicts, names, strict=True):
        key = (verdict.rule, name)
        met[key] += 1
        while met[key] > 1 and (verdict.rule, _with(name, met[key])) in taken:
            met[key] += 1
        unique.append(_with(name, met[key]))
    return unique


def _with(name: str, number: int) -> str:
    return f"{name} ({number})" if number > 1 else name


def _joined(subject: str, words: Sequence[str]) -> str:
    return printable(f"{subject}: {', '.join(words)}" if words else subject)
