"""The deviations that would accept what a review finds, written as TOML for an engineer to complete.

Reason and owner are left empty: an entry does not count until somebody has filled them in.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Iterator, Sequence

from ..grammar.errors import printable
from .deviations import TABLE, to_accept
from .quantity import Spread, engineering
from .toml_text import is_statable, toml_text
from .verdict import Outcome, Verdict

_DIGITS = 4

_HEAD = """\
# Deviations: verdicts that are accepted. One without a reason and an owner does not count.
# "*" in rule or subject stands for any text. `expires` is optional, the last day on which it counts.
# `accepted` is optional too: a figure worse than that is not accepted.
"""


def permit(verdicts: Iterable[Verdict], *, open_too: bool = False) -> str:
    """Return an entry for each verdict that fails or asks for a person and is not accepted yet.

    open_too: for each that is open as well
    """
    outcomes = {Outcome.FAIL, Outcome.REVIEW, Outcome.OPEN if open_too else Outcome.FAIL}
    asked = [one for one in verdicts if one.outcome in outcomes and one.deviation is None]
    # One about the deviations themselves is mended in their file, not accepted by another entry.
    asked = [one for one in asked if one.topic != "deviations"]
    if not asked:
        return ""
    alike = Counter((one.rule, one.subject) for one in asked)
    groups: dict[tuple[object, ...], list[Verdict]] = {}
    for one in asked:
        groups.setdefault((one.rule, one.subject, frozenset(one.parts), frozenset(one.nets)), []).append(one)
    entries = (
        "\n".join(_entry(group, alone=alike[group[0].rule, group[0].subject] == len(group)))
        for group in groups.values()
    )
    return "\n".join([_HEAD, *entries])


def _entry(group: Sequence[Verdict], *, alone: bool) -> Iterator[str]:
    """Yield the lines of the entry for verdicts that nothing tells apart, most often a single one.

    alone: rule and subject are enough to know them by; else parts and nets are named as well
    """
    for verdict in group:
        yield f"# {printable(f'{verdict.level or verdict.outcome}: {verdict.message}')}"
    first = group[0]
    yield f"[[{TABLE}]]"
    yield f"rule = {toml_text(first.rule)}"
    if first.subject:
        yield f"subject = {toml_text(_pattern(first.subject))}"
    if not alone:
        yield from _names("parts", first.parts)
        yield from _names("nets", first.nets)
    figures = [figure for verdict in group if (figure := to_accept(verdict)) is not None]
    if len(figures) == len(group) and len({figure.unit for figure in figures}) == 1:
        yield f"accepted = {toml_text(_range(figures))}"
    yield 'reason = ""'
    yield 'owner = ""'
    yield "# expires = 2030-12-31"
    yield ""


def _names(key: str, names: Sequence[str]) -> Iterator[str]:
    if names and all(map(is_statable, names)):
        yield f"{key} = [{', '.join(map(toml_text, names))}]"


def _pattern(subject: str) -> str:
    """Return the subject, with "?" for each character that TOML cannot hold, or that would leave it blank."""
    blank = not subject.strip()
    return "".join("?" if blank or not is_statable(character) else character for character in subject)


def _range(figures: Sequence[Spread]) -> str:
    """Return the range that all figures lie in, or their one value."""
    ends = min(one.minimum for one in figures), max(one.maximum for one in figures)
    return " .. ".join(dict.fromkeys(engineering(end, figures[0].unit, _DIGITS) for end in ends))
