"""Reference designators as the engineer wrote them, under the prefixes that exporters add."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterable
from typing import NamedTuple

# XU1 and X_U1; R_R14, whose letter comes again or whose rest is in capitals; M§Q1.
_EXPORTED = re.compile(
    r"""
      [Xx] _? (?P<instance> (?!TAL|FMR) [A-Za-z]{1,4} \d+ [A-Za-z]? )
    | [A-Za-z] _ (?P<capitals> [A-Z]{1,4} \d+ [A-Z]? )
    | (?P<letter> [A-Za-z] ) _ (?P<twice> (?P=letter) [A-Za-z]{0,3} \d+ [A-Za-z]? )
    | [A-Za-z] § (?P<marked> [A-Za-z]{1,4} \d+ [A-Za-z]? )
    """,
    re.VERBOSE,
)
_SHEET = re.compile(r"[Xx]_?(?P<name>(?!TAL|FMR)[A-Za-z]\w*)")


class Recovered(NamedTuple):
    """names: reference as written to designator, where they differ; clashes: those left as written."""

    names: dict[str, str]
    clashes: dict[str, str]


def recovered(references: Iterable[str]) -> Recovered:
    """Return the designators behind the `references` of one level.

    A designator that is also written as such, or that two references stand for, is left to nobody.
    """
    references = list(references)
    found: dict[str, str] = {}
    for reference in references:
        if reference[1:2] in "_§" or reference[0] in "Xx":
            designator = _designator(reference)
            if designator:
                found[reference] = designator
    if not found:
        return Recovered({}, {})
    claims = Counter(designator.casefold() for designator in found.values())
    claims.update({reference.casefold() for reference in references})
    names = {reference: name for reference, name in found.items() if claims[name.casefold()] == 1}
    return Recovered(names, {reference: name for reference, name in found.items() if reference not in names})


def sheet_name(reference: str) -> str:
    """Return the name of a subcircuit's instance in paths: without the X that every instance begins with."""
    match = _SHEET.fullmatch(reference)
    return match["name"] if match else reference


def _designator(reference: str) -> str:
    match = _EXPORTED.fullmatch(reference)
    if match is None:
        return ""
    return match["instance"] or match["capitals"] or match["twice"] or match["marked"]
