"""Every rule is described where it is written: its question, and five sections that a reader can rely on."""

from __future__ import annotations

import inspect
import re

import pytest
from pwmlint.lint.rule import SECTIONS, Rule, load_rules
from pwmlint.lint.verdict import TOPICS

RULES = load_rules()

# How a maker's part number looks: letters in front of a controller's generic number, as on the part itself.
PART_NUMBER = re.compile(r"\b[A-Z]{2,4}-?(?:[1-3]?494|594|7500|[1-3]52[4-7]|[1-3]84[2-5])[A-Z]{0,3}\b")

# A source is a document's number, a standard's, the engineer's own brief, or what nobody has written down.
SOURCE = re.compile(
    r"SLV[AS]\d{3}|IEC \d{5}|EIA-\d+|ECSS-[\w-]+|EEE-INST-002|data sheet|manual|brief|rating"
    r"|pwmlint controllers|volt-second balance|from memory|no source"
)

every_rule = pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.id)


def test_there_are_rules_and_no_two_share_an_id() -> None:
    identities = [rule.id for rule in RULES]
    assert len(identities) > 30
    assert len(set(identities)) == len(identities)


@every_rule
def test_the_id_is_made_of_lower_case_words(rule: Rule) -> None:
    assert re.fullmatch(r"[a-z0-9]+(?:-[a-z0-9]+)*\.[a-z0-9]+(?:-[a-z0-9]+)*", rule.id)


@every_rule
def test_the_topic_is_a_heading_of_the_report(rule: Rule) -> None:
    assert rule.topic in TOPICS


@every_rule
def test_the_question_is_one_sentence_that_asks(rule: Rule) -> None:
    assert rule.question.endswith("?")
    assert rule.question.count("?") == 1
    assert rule.question[0].isupper()


@every_rule
def test_the_sections_stand_in_order_and_none_is_empty(rule: Rule) -> None:
    found = [name for name in rule.sections if name in SECTIONS]
    assert found == list(SECTIONS)
    assert all(rule.sections[name].strip() for name in SECTIONS)


@every_rule
def test_the_source_can_be_looked_up_or_says_that_there_is_none(rule: Rule) -> None:
    assert SOURCE.search(rule.sections["Source"]), rule.sections["Source"]


@every_rule
def test_no_maker_and_no_part_number_of_one_is_named(rule: Rule) -> None:
    text = inspect.getdoc(rule.function) or ""
    assert PART_NUMBER.search(text) is None


def test_the_pattern_of_part_numbers_knows_them() -> None:
    # Letters of our own invention: a real maker's do not belong here either.
    assert PART_NUMBER.search("fit an XY494CN") is not None
    assert PART_NUMBER.search("the 494 class, SLVS074") is None
