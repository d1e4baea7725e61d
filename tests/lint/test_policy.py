"""Topics and rules that a configuration switches off or counts otherwise, as the engine honours it."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from pathlib import Path

import pytest
from pwmlint.grammar import Place, read_bytes
from pwmlint.lint.configuration import ConfigurationError, read_configuration
from pwmlint.lint.design import Design
from pwmlint.lint.policy import Policy, policy_of
from pwmlint.lint.review import review_netlist
from pwmlint.lint.rule import Rule, netlist_rule
from pwmlint.lint.verdict import Level, Outcome, Review, SwitchedOff, Verdict

PolicyOf = Callable[..., Policy]

NETLIST = read_bytes(b"hive scale\nR1 a 0 1k\n.end\n", "scale.cir")


def made(identity: str, topic: str, *verdicts: Verdict) -> Rule:
    def answer(design: Design) -> Iterable[Verdict]:
        return verdicts

    return netlist_rule(identity, level="warning", topic=topic)(answer)


FAILS = Verdict(outcome=Outcome.FAIL, message="It does not.")
FAILS_SPECIALLY = Verdict(outcome=Outcome.FAIL, message="It hardly does.", level=Level.NOTE)
JUDGE = Verdict(outcome=Outcome.REVIEW, message="Judge it.")

RULES = (
    made("scale.zero", "bee hive", FAILS, FAILS_SPECIALLY, JUDGE),
    made("scale.drift", "bee hive", FAILS),
    made("paint.colour", "paint", FAILS),
    made("safety.scope", "safety", Verdict(outcome=Outcome.INFORMATIONAL, message="Mind the bees.")),
)


@pytest.fixture
def policy(tmp_path: Path) -> PolicyOf:
    """Return a function that makes a policy of the text of a configuration."""

    def make(text: str, *, complete: bool = True) -> Policy:
        path = tmp_path / "pwmlint.toml"
        path.write_text(text, encoding="utf-8")
        return policy_of(read_configuration(path), RULES, complete=complete)

    return make


def reviewed(policy: Policy | None = None) -> Review:
    return review_netlist(NETLIST, rules=RULES, policy=policy)


def levels(review: Review) -> list[tuple[str, Level | None]]:
    return [(verdict.rule, verdict.level) for verdict in review.verdicts]


AS_WRITTEN = [
    ("scale.zero", Level.WARNING),
    ("scale.zero", Level.NOTE),
    ("scale.zero", None),
    ("scale.drift", Level.WARNING),
    ("paint.colour", Level.WARNING),
    ("safety.scope", None),
]


def test_without_a_policy_rules_are_as_written() -> None:
    for review in (reviewed(), reviewed(Policy())):
        assert levels(review) == AS_WRITTEN
        assert (review.configuration, review.switched_off) == (None, ())


def test_a_file_that_tells_no_levels_changes_none(policy: PolicyOf, tmp_path: Path) -> None:
    review = reviewed(policy('gate = "note"'))
    assert levels(review) == AS_WRITTEN
    assert review.configuration == str(tmp_path / "pwmlint.toml")


def test_a_level_holds_for_every_failed_verdict_of_a_topic_and_for_no_other(policy: PolicyOf) -> None:
    assert levels(reviewed(policy('[topics]\n"bee hive" = "error"'))) == [
        ("scale.zero", Level.ERROR),
        ("scale.zero", Level.ERROR),
        ("scale.zero", None),
        ("scale.drift", Level.ERROR),
        *AS_WRITTEN[4:],
    ]


def test_a_rule_stands_above_its_topic(policy: PolicyOf) -> None:
    review = reviewed(policy('[topics]\n"bee hive" = "off"\n[levels]\nscale.zero = "note"'))
    assert levels(review)[:4] == [
        ("scale.zero", Level.NOTE),
        ("scale.zero", Level.NOTE),
        ("scale.zero", None),
        ("paint.colour", Level.WARNING),
    ]
    assert [off.rule for off in review.switched_off] == ["scale.drift"]
    review = reviewed(policy('[topics]\n"bee hive" = "error"\n[levels]\n"scale.drift" = "off"'))
    assert [off.rule for off in review.switched_off] == ["scale.drift"]


def test_what_is_off_is_not_asked_and_is_named_with_its_line(policy: PolicyOf, tmp_path: Path) -> None:
    file = str(tmp_path / "pwmlint.toml")
    review = reviewed(policy('[topics]\n"bee hive" = "off"\n[levels]\npaint.colour = "off"'))
    assert levels(review) == [("safety.scope", None)]
    assert review.switched_off == (
        SwitchedOff("scale.zero", Place(file, 2, 14)),
        SwitchedOff("scale.drift", Place(file, 2, 14)),
        SwitchedOff("paint.colour", Place(file, 4, 16)),
    )


def test_the_cautions_stay(policy: PolicyOf) -> None:
    review = reviewed(policy('[topics]\nsafety = "off"'))
    assert review.cautions == ("Mind the bees.",)
    assert review.switched_off == ()
    with pytest.raises(ConfigurationError, match="cannot be switched off") as caught:
        policy('[levels]\nsafety.scope = "off"')
    assert caught.value.place[1:] == (2, 16)


@pytest.mark.parametrize(
    ("text", "message", "remedy"),
    [
        ('[topics]\n"bee hives" = "off"', 'there is no topic "bee hives"', 'did you mean "bee hive"?'),
        ('[topics]\nbee-hive = "off"', 'there is no topic "bee-hive"', 'did you mean "bee hive"?'),
        ('[topics]\nfish = "off"', 'there is no topic "fish"', "remove it"),
        ('[levels]\nscale.zeros = "off"', 'there is no rule "scale.zeros"', 'did you mean "scale.zero"?'),
        ('[levels]\n"bee hive" = "off"', 'there is no rule "bee hive"', "remove it"),
        ('[topics]\n"\\u001b[31m" = "off"', 'there is no topic "\x1b[31m"', "remove it"),
    ],
)
def test_what_does_not_exist(policy: PolicyOf, text: str, message: str, remedy: str) -> None:
    with pytest.raises(ConfigurationError) as caught:
        policy(text)
    problem = caught.value
    assert (problem.message, problem.remedy) == (message, remedy)
    assert problem.place[1:] == (2, 1)
    assert problem.excerpt == text.splitlines()[1]
    assert "\x1b" not in str(problem)
    assert policy(text, complete=False).off == {}


def test_a_flood_of_unknown_names_ends(policy: PolicyOf) -> None:
    lines = "\n".join(f'k{number} = "off"' for number in range(40_000))
    with pytest.raises(ConfigurationError) as caught:
        policy(f"[topics]\n{lines}\n")
    assert len(caught.value.also) == 19
