"""The published sources that verdicts name, as a SARIF taxonomy that results point into."""

from __future__ import annotations

import re
from collections.abc import Iterable
from typing import Any

from ....grammar.errors import printable
from ...verdict import Verdict

NAME = "published sources"

# Inputs of the user's are named as sources too, and a rule of thumb says that it has none.
_UNPUBLISHED = re.compile(r"(?:brief|parts list)\b|.*\bno source\b")

# What documents are called by: SLVS074, IEC 60115-8, EEE-INST-002.
_DOCUMENT = re.compile(r"(?<![\w-])[A-Z][A-Z-]+ ?\d[\w-]*")
_DATA_SHEET = re.compile(r"\bdata sheets?\b|\bfunction table\b")


def documents(source: str) -> list[str]:
    """Return the documents that the source of a verdict names: by number, or in words where it has none.

    A source is told in clauses parted by semicolons, each with pages and remarks.
    """
    found: dict[str, None] = {}
    for clause in source.split("; "):
        if _UNPUBLISHED.match(clause):
            continue
        numbers = _DOCUMENT.findall(clause)
        found.update(dict.fromkeys(numbers or ([clause] if _DATA_SHEET.search(clause) else [])))
    return [printable(document) for document in found]


def indexes(verdicts: Iterable[Verdict]) -> dict[str, int]:
    """Return every document that verdicts name, with its index in the taxonomy."""
    named = {document for verdict in verdicts for document in documents(verdict.source)}
    return {document: index for index, document in enumerate(sorted(named))}


def taxonomy(known: dict[str, int]) -> dict[str, Any]:
    """Return the documents as a SARIF toolComponent."""
    return {
        "name": NAME,
        "shortDescription": {"text": "What the limits and formulas of the results rest on."},
        "taxa": [{"id": document} for document in known],
    }


def taxa(verdict: Verdict, known: dict[str, int]) -> list[dict[str, Any]]:
    """Return the references of a verdict to the documents that it names."""
    return [
        {"id": document, "index": known[document], "toolComponent": {"name": NAME, "index": 0}}
        for document in documents(verdict.source)
    ]
