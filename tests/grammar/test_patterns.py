r"""What the patterns of the grammars must keep off, for Python 3.11.0 to 3.11.4 reads it wrongly.

There the body of a possessive group that fails after its first character leaves the place of the match behind
that character: `a(?:(?!bc)b)*+` takes all of "abc". An atomic group, `(?>...)`, puts the place back.
"""

from __future__ import annotations

import ast
import re
from collections.abc import Iterator
from importlib.resources import files

import pytest

# An escape, a class of characters, or what is looked at: parentheses, and what follows one that closes.
_TOKEN = re.compile(
    r"\\.|\[\^?\]?(?:\\.|[^\]\\])*\]|\((?:\?[:>=!])?|\)(?P<possessive>(?:[*+?]|\{[\d,]*\})\+)?"
)


def possessive_groups(pattern: str) -> Iterator[str]:
    """Yield how each group begins that is repeated possessively."""
    begun: list[str] = []
    for token in _TOKEN.finditer(pattern):
        if token[0].startswith("("):
            begun.append(token[0])
        elif token[0].startswith(")") and begun:
            beginning = begun.pop()
            if token["possessive"]:
                yield beginning


def texts() -> Iterator[tuple[str, str]]:
    """Yield the terminals of the grammars and the texts in the modules, with the name of their file."""
    for file in sorted(files("pwmlint.grammar").iterdir(), key=lambda one: one.name):
        if file.name.endswith(".lark"):
            for terminal in re.split(r"(?m)^(?=\w+[.\d-]*:)", file.read_text(encoding="utf-8")):
                yield file.name, terminal
        elif file.name.endswith(".py"):
            for node in ast.walk(ast.parse(file.read_text(encoding="utf-8"))):
                if isinstance(node, ast.JoinedStr):
                    parts = (part.value for part in node.values if isinstance(part, ast.Constant))
                    yield file.name, "".join(map(str, parts))
                elif isinstance(node, ast.Constant) and isinstance(node.value, str):
                    yield file.name, node.value


@pytest.mark.parametrize(
    ("pattern", "found"),
    [
        (r"a(?:b)*+", ["(?:"]),
        (r"(a)?+\)*+", ["("]),
        (r"(?>[)(]|\()++", ["(?>"]),
        (r"(?:(?:a)*+b){2,}+", ["(?:", "(?:"]),
        (r"[^()]*+(?:a)*", []),
    ],
)
def test_they_are_found(pattern: str, found: list[str]) -> None:
    assert list(possessive_groups(pattern)) == found


def test_what_is_repeated_possessively_is_atomic() -> None:
    met = [(file, group, text) for file, text in texts() for group in possessive_groups(text)]
    assert len(met) > 20
    assert [one for one in met if one[1] != "(?>"] == []
