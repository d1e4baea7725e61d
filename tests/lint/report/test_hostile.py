"""Netlists whose texts try to steer whoever reads the report: every format stays inert and valid.

Each format of `FORMATS` has its own judge here; a new one has none until somebody says what "inert" means
for it, and fails.
"""

from __future__ import annotations

import json
import os
import re
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, replace
from datetime import date
from pathlib import Path
from typing import Any, cast
from xml.etree import ElementTree

import pytest
from markdown_it import MarkdownIt
from markdown_it.token import Token
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.netlist import Place
from pwmlint.lint import review
from pwmlint.lint.quantity import Spread
from pwmlint.lint.report import FORMATS
from pwmlint.lint.verdict import ControllerReview, Deviation, Level, Limit, Outcome, PinRow, Review, Verdict
from xmlschema import XMLSchema

from .json_schema import check, schema_of

ROOT = Path(__file__).parents[3]

# Without blanks, so that each can be the name of a net in a list.
WORDS = (
    "\x1b[31mRED",
    "\x9b31mC1",
    "BELL\x07",
    "[bold red]RICH[/]",
    "::error::WORKFLOW",
    "##[error]LOG",
    "::stop-commands::PEARS",
    "]]>CDATA",
    "<script>alert(1)</script>",
    "<img/src=x/onerror=y>",
    "</details>FOLD",
    "<!--COMMENT",
    "XML\ufffe\uffff\x0b",
    "\u202eRIGHT\u2066TO\u200fLEFT",
    "\u2028LINE",
    "%0A::error::ENCODED",
    "`CODE`",
    "PI|PE",
    "@foreman",
    "![IMAGE](http://orchard.example/x.png)",
    "[LINK](javascript:alert(1))",
    "http://orchard.example/",
    "www.orchard.example",
    "&lt;b&gt;ENTITY",
    "#12",
    "{0}PLACE{",
    "*BOLD*",
    "__STRONG__",
    ":skull:",
    "\\BACK\\",
)

# What a reader does not let through, or no name of a file can hold.
STRANGER = ("NUL\x00", "line\r\n::error::broken", "half\ud800", "byte\udc80", "SLA/SH", "COM,MA=1", "")

SENTENCE = " and ".join((*WORDS, *STRANGER))

OUTCOMES = tuple(Outcome)


def verdicts_about(words: Sequence[str]) -> Iterator[Verdict]:
    """Yield verdicts of every outcome in which each text is one of `words` in turn."""
    for number, word in enumerate(words):
        outcome = OUTCOMES[number % len(OUTCOMES)]
        yield Verdict(
            outcome=outcome,
            level=tuple(Level)[number % 3] if outcome is Outcome.FAIL else None,
            message=f"{word} carries more than {word}",
            rule=word,
            topic=word,
            subject=word,
            controller=word,
            measured=Spread(1, 2, 3, "V"),
            limit=Limit(0, 2, "V"),
            margin=-0.5,
            parts=(word, "R1"),
            nets=(word,),
            pins=(word,),
            places=(Place(word, 4, 2), Place(word, 0, 0)),
            formula=word,
            contributions=((word, 0.9), ("R1", 0.1)),
            assumptions=(word, f"R1: {word}"),
            source=f"{word}; SLVS074; {word} data sheet",
            needs=(word,),
            remedy=word,
        )


def built() -> Review:
    """A review made by hand: every field of it is hostile."""
    place = Place(SENTENCE, 2, 1)
    permit = Deviation(
        rule=SENTENCE,
        subject=SENTENCE,
        reason=SENTENCE,
        owner=SENTENCE,
        expires=date(2031, 9, 30),
        place=place,
    )
    words = (*WORDS, *STRANGER)
    asked = list(verdicts_about(words))
    failed = [replace(one, outcome=Outcome.FAIL, level=Level.ERROR) for one in verdicts_about(words[:7])]
    permitted = [replace(one, deviation=permit) for one in failed]
    return Review(
        netlist=SENTENCE,
        format=SENTENCE,
        name=SENTENCE,
        brief=SENTENCE,
        parts_list=SENTENCE,
        controllers=(
            ControllerReview(
                SENTENCE,
                SENTENCE,
                SENTENCE,
                place,
                tuple(PinRow(word, word, word, word, Outcome.PASS) for word in words),
                (SENTENCE,),
                SENTENCE,
                (SENTENCE,),
            ),
        ),
        verdicts=(*asked, *failed, *permitted),
        cautions=words,
        deviations=SENTENCE,
    )


# Nets of the examples that hostile names take the place of, those that most verdicts are about first.
FAN_NETS = (
    *("VBAT", "DTC", "SET", "FB", "MODE", "LIM", "SNS", "VOUT", "DRN", "GATE"),
    *("DRV", "SW", "RTN", "MET", "CZ", "LZ", "COMP", "VIN", "RT"),
)
PRESS_NETS = ("SNS", "LIM", "SET", "FB", "VBAT", "DTC", "REF", "COMP")


def spice(words: Sequence[str]) -> str:
    """Return the faulty frost fan with nets, a part, a value and the title called by `words`."""
    text = (ROOT / "examples" / "frost-fan-rev-b.cir").read_text(encoding="utf-8")
    title, _, rest = text.partition("\n")
    cards, subckt, end = rest.partition(".subckt")
    for net, word in zip(FAN_NETS, words, strict=False):
        cards = re.sub(rf"\b{net}\b", lambda _, word=word: word, cards)
    cards = re.sub(r"^R15 ", lambda _: f"R15{words[0]} ", cards, flags=re.MULTILINE)
    cards = cards.replace(" 22k\n", f" {words[1]}\n", 1)
    return "\n".join([f"{title} {' '.join(words)}", cards + subckt + end])


def edif(words: Sequence[str]) -> str:
    """Return the faulty cider press with nets, a part, a value and the title called by `words`."""
    text = (ROOT / "examples" / "cider-press-rev-b.edf").read_text(encoding="utf-8")
    for net, word in zip(PRESS_NETS, words, strict=False):
        text = re.sub(
            rf"\(net {net}(?=\s)", lambda _, net=net, word=word: f'(net (rename {net} "{word}")', text
        )
    text = text.replace('"R13"', f'"R13{words[0]}"').replace('"13.7K,1%37%"', f'"{words[1]}"')
    return text.replace('"CIDER PRESS REV B"', f'"{" ".join(words)}"')


def read(folder: Path, name: str, text: str) -> Review:
    path = folder / name
    path.write_bytes(text.encode("utf-8", "surrogateescape"))
    return review(path)


def spice_words() -> list[list[str]]:
    """Return the words in portions of as many as there are nets."""
    return [list(WORDS[:15]), [word for word in WORDS[15:] if not word.startswith(("&", "{"))]]


# A file may be called anything but a slash and a NUL.
FILE = "\x1b[31m::error::]]><script>@foreman[x](y)`|`%0A\u202e #12\udc80"


@pytest.fixture(scope="session")
def hostile_reviews(tmp_path_factory: pytest.TempPathFactory) -> list[Review]:
    """Return reviews made by hand and through both readers."""
    folder = tmp_path_factory.mktemp("hostile")
    lists = [read(folder, f"{number}{FILE}.cir", spice(words)) for number, words in enumerate(spice_words())]
    press = [
        read(folder, f"{number}{FILE}.edf", edif(words))
        for number, words in enumerate([WORDS[:8], WORDS[8:16], WORDS[16:24], WORDS[24:]])
    ]
    return [built(), *lists, *press]


def test_the_readers_let_the_names_through(hostile_reviews: list[Review]) -> None:
    """Else the tests below would be about nothing."""
    said = json.dumps(
        [[one.message, *one.nets, *one.parts] for r in hostile_reviews[1:] for one in r.verdicts]
    )
    let_through = [word for word in WORDS if json.dumps(word)[1:-1] in said]
    assert len(let_through) > len(WORDS) * 0.8
    assert all(os.fsencode(FILE) in os.fsencode(one.netlist) for one in hostile_reviews[1:])


def test_the_readers_refuse_a_nul(tmp_path: Path) -> None:
    for ending, text in (("cir", spice(["NUL\x00"] * 2)), ("edf", edif(["NUL\x00"] * 2))):
        with pytest.raises(NetlistError) as error:
            read(tmp_path, f"board.{ending}", text)
        assert "\x00" not in str(error.value)


@dataclass(frozen=True)
class Reported:
    """A report, what it is about, and the schemas that it may be held against."""

    text: str
    reviews: Sequence[Review]
    sarif_errors: Callable[[Any], list[str]]
    junit_schemas: Sequence[XMLSchema]


def judge_text(report: Reported) -> None:
    for line in report.text.splitlines():
        assert line.isprintable()
        assert not line.lstrip().startswith(("::", "##"))
    # Not taken for markup, and so still there.
    assert "[bold red]RICH[/]" in report.text
    assert r"\x1b[31mRED" in report.text


def judge_json(report: Reported) -> None:
    check(schema_of("review.schema.json"), json.loads(report.text))
    assert report.text.isascii()
    assert all(line.isprintable() for line in report.text.splitlines())


def judge_sarif(report: Reported) -> None:
    log = json.loads(report.text)
    assert report.sarif_errors(log) == []
    assert report.text.isascii()
    (run,) = log["runs"]
    run["tool"]["driver"].pop("rules")
    assert all(text.isprintable() for text in strings(run))
    for result in run["results"]:
        message = result["message"]["text"]
        assert not re.search(r"(?<!\{)\{(?:\{\{)*\d", message), "a placeholder"
        assert not re.search(r"(?<!\\)\](?=\()", message), "an embedded link"
    for uri in uris(run):
        assert re.fullmatch(r"(?:file://)?(?:[\w./~-]|%[0-9A-F]{2})*", uri, re.ASCII)


def judge_junit(report: Reported) -> None:
    for schema in report.junit_schemas:
        schema.validate(report.text)
    root = ElementTree.fromstring(report.text)
    for element in root.iter():
        texts = [*element.attrib.values(), *(element.text or "").strip().split("\n")]
        assert all(text.isprintable() for text in texts)
    cases = [
        (suite, one.get("classname"), one.get("name")) for suite in root for one in suite.iter("testcase")
    ]
    assert len(cases) == len(set(cases)) == sum(len(one.verdicts) for one in report.reviews)


# All that the Markdown report may make of its lines.
MARKS = {
    *("heading", "paragraph", "strong", "table", "thead", "tbody", "tr", "th", "td"),
    *("bullet_list", "list_item"),
}
LEAVES = {"inline", "text", "code_inline", "html_block", "softbreak"}
FOLD = re.compile(r"(?:<details>\n<summary>[A-Z][a-z ]+ \(\d+\)</summary>|</details>)\n?")


def judge_markdown(report: Reported) -> None:
    assert all(line.isprintable() for line in report.text.splitlines())
    renderer = MarkdownIt("commonmark", {"linkify": True}).enable(["table", "strikethrough", "linkify"])
    tokens = list(flat(renderer.parse(report.text)))
    for token in tokens:
        kind = token.type.removesuffix("_open").removesuffix("_close")
        assert kind in MARKS | LEAVES, f"{token.type}: {token.content}"
        if token.type == "html_block":
            assert FOLD.fullmatch(token.content)
        if token.type == "text":
            # What hosts look for beside Markdown: mentions, references, mathematics, named pictures.
            assert not re.search(r"[@#!~$<>`\[\]{}*|\\]|:\w+:|https?:|www\.", token.content)
    kinds = [token.type for token in tokens]
    assert kinds.count("td_open") == 4 * (kinds.count("tr_open") - kinds.count("thead_open"))
    assert kinds.count("heading_open") == len(report.reviews)


def judge_annotations(report: Reported) -> None:
    *commands, summary = report.text.split("\n")[:-1]
    kinds = [command.partition(" ")[0] for command in commands]
    assert [kinds.count(kind) for kind in ("::error", "::warning", "::notice")] == [10, 10, 10]
    assert len(kinds) == 30
    assert summary.startswith("pwmlint: ")
    assert report.text.splitlines() == [*commands, summary]
    for command in (*commands, summary):
        assert command.isprintable()
    for command in commands:
        properties, _, message = command.partition(" ")[2].partition("::")
        assert [one.partition("=")[0] for one in properties.split(",")] == ["file", "line", "col", "title"]
        assert re.sub("%(?:25|0A|3A|2C)", "", properties + message).find("%") == -1


JUDGES: dict[str, Callable[[Reported], None]] = {
    "text": judge_text,
    "json": judge_json,
    "sarif": judge_sarif,
    "sarif-alerts": judge_sarif,
    "junit": judge_junit,
    "markdown": judge_markdown,
    "annotations": judge_annotations,
}


@pytest.mark.parametrize("name", FORMATS)
def test_every_format_stays_inert_and_valid(
    name: str,
    hostile_reviews: list[Review],
    written: Callable[..., str],
    sarif_errors: Callable[[Any], list[str]],
    junit_schemas: Sequence[XMLSchema],
) -> None:
    text = written(name, *hostile_reviews)
    text.encode("utf-8")
    JUDGES[name](Reported(text, hostile_reviews, sarif_errors, junit_schemas))


def items_of(value: Any) -> list[Any]:
    """Return what an object or an array of JSON holds."""
    if isinstance(value, dict):
        return list(cast("dict[str, Any]", value).values())
    return cast("list[Any]", value) if isinstance(value, list) else []


def strings(value: Any) -> Iterator[str]:
    """Yield every string in data of JSON, keys apart."""
    if isinstance(value, str):
        yield value
    for item in items_of(value):
        yield from strings(item)


def uris(value: Any) -> Iterator[str]:
    """Yield every URI in a log."""
    if isinstance(value, dict) and "uri" in value:
        yield cast("dict[str, Any]", value)["uri"]
    for item in items_of(value):
        yield from uris(item)


def flat(tokens: Sequence[Token]) -> Iterator[Token]:
    """Yield tokens and those inside of them."""
    for token in tokens:
        yield token
        yield from flat(token.children or ())
