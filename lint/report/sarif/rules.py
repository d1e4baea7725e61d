"""The installed rules as SARIF reportingDescriptors, from the docstrings that describe them."""

from __future__ import annotations

import re
from typing import Any

from ...rule import EXAMPLES, Rule

# Sections that are set as they are typed: formulas and netlists.
_TYPED = ("Formula", *EXAMPLES)


def descriptor(one: Rule) -> dict[str, Any]:
    """Return what a reader of a log can learn of a rule without this tool."""
    sections = one.sections
    told: dict[str, Any] = {
        "id": one.id,
        "name": "".join(word.capitalize() for word in re.split(r"[.-]", one.id)),
        "shortDescription": {"text": one.question or one.id},
        "fullDescription": {"text": sections.get("What") or one.question or one.id},
        "defaultConfiguration": {"level": one.level.value},
        "properties": {"tags": [one.topic]},
    }
    if sections:
        told["help"] = {"text": _plain(sections), "markdown": _markdown(one.question, sections)}
    return told


def _plain(sections: dict[str, str]) -> str:
    return "\n\n".join(f"{name}: {text}" for name, text in sections.items())


def _markdown(question: str, sections: dict[str, str]) -> str:
    pieces = [f"**{question}**"] if question else []
    for name, text in sections.items():
        body = f"```text\n{text}\n```" if name in _TYPED else text
        pieces.append(f"### {name}\n\n{body}")
    return "\n\n".join(pieces)
