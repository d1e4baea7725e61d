"""The grammar of one word of a value, and the short cut past it."""

from __future__ import annotations

import logging
from pathlib import Path

import lark
from hypothesis import given
from hypothesis import strategies as st
from pwmlint.grammar import value_words
from pwmlint.grammar.value_words import read_word


class _Collect(logging.Handler):
    def __init__(self, messages: list[str]) -> None:
        super().__init__()
        self.messages = messages

    def emit(self, record: logging.LogRecord) -> None:
        self.messages.append(record.getMessage())


def test_the_grammar_has_no_conflicts() -> None:
    """Where an LALR table has a conflict, lark silently shifts: some words would then never be read."""
    grammar = Path(value_words.__file__).with_name("value.lark").read_text(encoding="utf-8")
    messages: list[str] = []
    handler = _Collect(messages)
    lark.logger.addHandler(handler)
    level = lark.logger.level
    lark.logger.setLevel("DEBUG")
    try:
        lark.Lark(grammar, parser="lalr", start=["word", "simulated"], debug=True)
    finally:
        lark.logger.removeHandler(handler)
        lark.logger.setLevel(level)
    assert not [message for message in messages if "conflict" in message.lower()]


def test_unknown_words_say_nothing() -> None:
    assert read_word("SOT23-5", "word") is None


@given(
    digits=st.from_regex(r"[0-9]{1,6}(\.[0-9]{1,4})?|\.[0-9]{1,4}", fullmatch=True),
    tail=st.sampled_from(
        ["", "k", "K", "M", "n", "p", "u", "%", "V", "A", "W", "meg", "MEG", "m", "t", "f", "g", "N"]
    ),
    kind=st.sampled_from(["word", "simulated"]),
)
def test_plain_words_mean_what_the_grammar_says(digits: str, tail: str, kind: str) -> None:
    plain = value_words._plain(digits + tail, kind)  # pyright: ignore[reportPrivateUsage]  # the short cut itself
    if plain is not None:
        parsed = value_words._parser().parse(digits + tail, start=kind)  # pyright: ignore[reportPrivateUsage, reportUnknownMemberType, reportUnknownVariableType]
        assert plain == parsed
