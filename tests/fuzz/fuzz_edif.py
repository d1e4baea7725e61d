"""Reads a great many damaged EDIF files and counts what comes of it.

    python tests/fuzz/fuzz_edif.py 100000 --seed 7

Every file is one of the fixtures, changed in up to eight places: half of them have whole forms left out,
doubled, moved or given another keyword, the others any text, and scraps that hurt. A file is read or
refused with a NetlistError; anything else is a failure, and so is one that takes
over two seconds. The seed and the number of a failure make it again.
"""

from __future__ import annotations

import argparse
import random
import re
import sys
import traceback
from collections import Counter
from pathlib import Path
from time import perf_counter

from pwmlint.grammar.edif import read_edif
from pwmlint.grammar.errors import NetlistError

FIXTURES = Path(__file__).parents[1] / "grammar" / "fixtures" / "edif"
SCRAPS = [
    *'()"%& \n\r\0',
    "((",
    "))",
    ")(",
    '"" ',
    "%13 10%",
    "(net ",
    "(instance ",
    "(joined (portRef &1 (instanceRef R1)))",
    "(array A 999999)",
    "(member A -1)",
    "(rename A ",
    "(name ",
    "(e 1 99999)",
    "(cellRef TOP)",
    "(cellType TIE)",
    "99999999999999999999",
    "\N{MICRO SIGN}\N{OHM SIGN}",
]
FORM = re.compile(r"\(\s*[A-Za-z]+")
PARENTHESIS = re.compile(r'"[^"]*"|[()]')
SLOWEST = 2.0  # seconds


def damage(text: str, chance: random.Random) -> str:
    """Change any place of the text."""
    start = chance.randrange(len(text) + 1)
    end = min(len(text), start + int(chance.expovariate(1 / 30)))
    kind = chance.randrange(5)
    if kind == 0:
        return text[:start] + text[end:]
    if kind == 1:
        return text[:start] + text[start:end] + text[start:]
    if kind == 2:
        return text[:start] + chance.choice(SCRAPS) + text[start:]
    if kind == 3:
        return text[:start] + chance.choice(SCRAPS) + text[end:]
    to = chance.randrange(len(text) + 1)
    return text[:to] + text[start:end] + text[to:]


def disorder(text: str, chance: random.Random) -> str:
    """Change a whole form, so that the parentheses stay in balance."""
    forms = [match.start() for match in FORM.finditer(text)]
    if not forms:
        return text
    start = chance.choice(forms)
    end = end_of_form(text, start)
    kind = chance.randrange(5)
    if kind == 0:
        return text[:start] + text[end:]
    if kind == 1:
        return text[:start] + text[start:end] + text[start:]
    to = chance.choice(forms)
    if kind == 2:
        return text[:to] + text[start:end] + text[to:]
    if kind == 3:
        return text[:start] + text[to : end_of_form(text, to)] + text[end:]
    other = FORM.match(text, to)
    return text[:start] + (other[0] if other else "") + FORM.sub("", text[start:], count=1)


def end_of_form(text: str, start: int) -> int:
    """Return where the form ends that starts there; the end of the text where it does not."""
    depth = 0
    for token in PARENTHESIS.finditer(text, start):
        depth += {"(": 1, ")": -1}.get(token[0], 0)
        if depth == 0:
            return token.end()
    return len(text)


def mutate(text: str, chance: random.Random) -> str:
    """Change the text in one to eight places."""
    change = chance.choice((damage, disorder))
    for _ in range(chance.randint(1, 8)):
        text = change(text, chance)
    return text


def outcome(text: str) -> str:
    """Read a text; return `read` or `refused`, or what went wrong."""
    start = perf_counter()
    try:
        read_edif(text, "fuzz.edf")
    except NetlistError as error:
        str(error)
        result = "refused"
    except Exception:  # whatever it is, it is what is looked for
        return traceback.format_exc()
    else:
        result = "read"
    return result if perf_counter() - start < SLOWEST else "too slow"


def main(count: int, seed: int) -> int:
    """Try so many files; print the counts and the first of each kind of failure."""
    texts = [path.read_text(encoding="utf-8") for path in sorted(FIXTURES.glob("*.edf"))]
    counts: Counter[str] = Counter()
    failures: dict[str, int] = {}
    for number in range(count):
        chance = random.Random(f"{seed}/{number}")
        result = outcome(mutate(chance.choice(texts), chance))
        name = result if result in ("read", "refused") else "failed"
        counts[name] += 1
        if name == "failed":
            failures.setdefault(result, number)
    kinds = ", ".join(f"{counts[name]} {name}" for name in ("read", "refused", "failed"))
    print(f"{count} files, seed {seed}: {kinds}")
    for result, number in failures.items():
        print(f"\nnumber {number}:\n{result}")
    return 1 if failures else 0


if __name__ == "__main__":
    parser = argparse.ArgumentParser(description="Read damaged EDIF files.")
    parser.add_argument("count", type=int)
    parser.add_argument("--seed", type=int, default=1)
    given = parser.parse_args()
    sys.exit(main(given.count, given.seed))
