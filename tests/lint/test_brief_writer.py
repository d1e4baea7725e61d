"""A brief begun from a netlist: what it states, what it leaves to fill in, and that it changes nothing."""

from __future__ import annotations

import os
import tomllib
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st
from pwmlint.grammar import Netlist, read_bytes
from pwmlint.grammar.netlist import Net, Part, Pin
from pwmlint.lint import Review, read_brief, read_parts_list, review
from pwmlint.lint.brief import BriefError
from pwmlint.lint.brief_keys import CONTROLLER_KEYS, DESIGN_KEYS, RAIL_KEYS, Key
from pwmlint.lint.brief_writer import brief_text
from pwmlint.lint.review import read_netlist, review_netlist
from pwmlint.lint.rule import load_rules
from pwmlint.lint.toml_text import toml_key

UPDATE = "PWMLINT_UPDATE_SNAPSHOTS"
EXPECTED = Path(__file__).parent / "expected"
EXAMPLES = Path(__file__).parents[2] / "examples"
NETLISTS = ("frost-fan.cir", "cider-press.edf", "frost-fan-rev-b.cir", "cider-press-rev-b.edf")

PINS = "1IN+ 1IN- FB DTC CT RT 0 C1 0 0 C2 VCC 0 REF 2IN- 2IN+"
TABLES = {"design": DESIGN_KEYS, "rails.X": RAIL_KEYS, "controllers.U1": CONTROLLER_KEYS}
SameVerdicts = Callable[[Review, Review], bool]


def netlist_of(text: str) -> Netlist:
    return read_bytes(f"a title\n{text}\n".encode(), "hen-house.cir")


def written(text: str) -> str:
    return brief_text(netlist_of(text))


def told(text: str) -> dict[str, Any]:
    return tomllib.loads(text)


class TestStoredBriefs:
    @pytest.mark.parametrize("example", NETLISTS[:2])
    def test_are_as_stored(self, example: str, monkeypatch: pytest.MonkeyPatch) -> None:
        monkeypatch.chdir(EXAMPLES.parent)
        text = brief_text(read_netlist(f"examples/{example}"))
        stored = EXPECTED / f"{example}.brief.toml"
        if os.environ.get(UPDATE):
            stored.parent.mkdir(exist_ok=True)
            stored.write_text(text, encoding="utf-8", newline="\n")
        assert text == stored.read_text(encoding="utf-8")
        assert max(map(len, text.splitlines())) <= 100


class TestReadBack:
    @pytest.mark.parametrize("rated", [True, False], ids=["with parts list", "netlist alone"])
    @pytest.mark.parametrize("example", NETLISTS)
    def test_the_examples_get_the_same_verdicts(
        self, example: str, rated: bool, tmp_path: Path, same_verdicts: SameVerdicts
    ) -> None:
        for source in (EXAMPLES / example, *([(EXAMPLES / example).with_suffix(".parts.csv")] * rated)):
            (tmp_path / source.name).write_bytes(source.read_bytes())
        before = review(tmp_path / example)
        listed = tmp_path / f"{Path(example).stem}.parts.csv"
        assert (before.parts_list is not None) == rated
        text = brief_text(read_netlist(tmp_path / example), read_parts_list(listed) if rated else None)
        (tmp_path / f"{Path(example).stem}.brief.toml").write_text(text, encoding="utf-8")
        after = review(tmp_path / example)
        assert after.brief is not None
        assert same_verdicts(before, after)

    def test_a_limit_filled_in_is_seen(self, same_verdicts: SameVerdicts) -> None:
        # The comparison itself must not be blind.
        netlist = read_netlist(EXAMPLES / "frost-fan.cir")
        text = brief_text(netlist).replace('# current_limit = "..."', 'current_limit = "20 A"')
        changed = review_netlist(netlist, read_brief("b", text))
        assert not same_verdicts(review_netlist(netlist), changed)


class TestWhatIsStated:
    def test_what_the_netlist_tells(self) -> None:
        brief = told(brief_text(read_netlist(EXAMPLES / "frost-fan.cir")))
        assert brief["controllers"] == {"U1": {"topology": "single-ended", "output": "VOUT"}}
        assert brief["rails"] == {}
        assert list(brief["design"]) == ["name"]

    def test_a_rail_by_its_source(self) -> None:
        text = written(f"V1 RAW 0 DC 24\nV2 0 LOW 3\nR1 RAW VCC 100\nR2 LOW 0 1k\nU1 {PINS} 494")
        assert told(text)["rails"] == {"RAW": {"voltage": "24 V"}, "LOW": {"voltage": "-3 V"}}
        assert "# V1 makes it\nRAW.voltage" in text

    def test_a_rail_by_its_name(self) -> None:
        text = written(f"R1 -12V DTC 1k\nR2 DTC 0 1k\nU1 {PINS} 494")
        assert told(text)["rails"] == {"-12V": {"voltage": "-12 V", "tolerance": "5 %"}}
        assert "# net -12V taken for -12.0 V ±5 % by its name\n-12V.voltage" in text

    def test_what_would_change_a_verdict_is_left_to_the_engineer(self) -> None:
        # +5V is the output: stated, its name would become the limit that the regulation is held against.
        divider = "R1 +5V 1IN+ 10k\nR2 1IN+ 0 10k\nR3 REF 1IN- 1k\nR4 1IN- FB 100k\nR5 -12V DTC 1k"
        text = written(f"{divider}\nU1 {PINS} 494")
        assert told(text)["rails"] == {"-12V": {"voltage": "-12 V", "tolerance": "5 %"}}
        assert "recognised; stated, it counts in feedback.divider-ratio" in text
        assert '\n# "+5V".voltage = "5 V"\n# "+5V".tolerance = "5 %"\n' in text

    def test_an_impossible_rail_is_not_stated(self) -> None:
        text = written(f"V1 RAW 0 DC 1e9\nR1 RAW VCC 100\nU1 {PINS} 494")
        assert told(text)["rails"] == {}
        assert '# recognised\n# RAW.voltage = "1000000000 V"' in text

    def test_a_name_that_says_nothing_is_not_stated(self) -> None:
        netlist = netlist_of(f"U1 {PINS} 494")
        for name in ("", " ", "x" * 500, "\ud800"):
            netlist.name = name
            assert told(brief_text(netlist))["design"] == {}

    def test_several_controllers(self) -> None:
        text = written(f"U1 {PINS} 494\nU2 {PINS.replace('VCC', 'RAW')} 494\nR1 RAW DTC 1k")
        assert list(told(text)["controllers"]) == ["U1", "U2"]
        assert "# RAW: supply of U2; asked for by amplifier.common-mode, " in text

    def test_no_controller(self) -> None:
        text = written("R1 A B 1k")
        assert told(text).get("controllers") is None
        assert "no controller is found in the netlist" in text
        assert "known without a brief: no net, not even ground" in text

    def test_a_crowd_is_cut_short(self) -> None:
        rails = "\n".join(f"V{n} N{n} 0 5" for n in range(70))
        crowd = "\n".join(f"U{n} {' '.join(f'{pin}_{n}' for pin in PINS.split())} 494" for n in range(23))
        text = written(f"{rails}\n{crowd}")
        assert len(told(text)["controllers"]) == 20
        assert "# 3 more controllers are left out here" in text
        assert "more nets of known voltage are left out here" in text
        assert len(text) < 200_000


class TestWhatIsLeftToFillIn:
    def test_every_key_is_explained_and_has_its_line(self) -> None:
        text = brief_text(read_netlist(EXAMPLES / "frost-fan.cir"))
        for before, keys in (("", DESIGN_KEYS), ("VBAT.", RAIL_KEYS), ("", CONTROLLER_KEYS)):
            for key in keys:
                assert f"\n# {key.name}: {key.says[:20]}" in text
                assert f"\n# {before}{key.name} = " in text or f"\n{before}{key.name} = " in text

    def test_the_examples_of_the_keys_are_a_brief(self) -> None:
        lines = [f"{table}.{key.name} = {key.example}" for table, keys in TABLES.items() for key in keys]
        brief = read_brief("example", "\n".join(lines))
        assert brief.rails["X"].circuit == "secondary"
        assert brief.controllers["U1"].pins == ("1IN+", "1IN-")

    @pytest.mark.parametrize("key", [*DESIGN_KEYS, *RAIL_KEYS, *CONTROLLER_KEYS], ids=lambda key: key.name)
    def test_a_blank_taken_as_it_stands_is_refused(self, key: Key) -> None:
        table = next(name for name, keys in TABLES.items() if key in keys)
        told = "" if key.name == "voltage" or table != "rails.X" else 'rails.X.voltage = "1 V"\n'
        line = f"{told}{table}.{key.name} = {key.blank}"
        if key.name in ("name", "output"):  # any text is a name
            assert read_brief("blank", line)
        else:
            with pytest.raises(BriefError):
                read_brief("blank", line)

    def test_what_is_computed_stands_beside_the_line_to_fill_in(self) -> None:
        lines = brief_text(read_netlist(EXAMPLES / "frost-fan.cir")).splitlines()
        for key, says in (
            ("switching_frequency", "# computed: the oscillator runs at 50.0 kHz"),
            ("dead_time", "# computed: dead time 17.8 %"),
            ("soft_start", "# computed: soft start with a time constant of 909 µs"),
            ("current_limit", "# computed: takes over at 8.07 A"),
            ("VOUT.voltage", "# computed: VOUT regulates to 12.07 V"),
        ):
            end = lines.index(f'# {key} = "..."')
            assert any(line.startswith(says) for line in lines[end - 3 : end]), key

    def test_the_rules_that_compute_exist(self) -> None:
        known = {rule.id for rule in load_rules()}
        assert {rule for key in (*RAIL_KEYS, *CONTROLLER_KEYS) for rule in key.rules} <= known


# Any name at all, wherever the writer puts names.
names = st.text(st.characters(exclude_characters="/"), min_size=1, max_size=12)


def renamed(netlist: Netlist, new: dict[str, str]) -> Netlist:
    """Return a netlist with other names for some of its nets and parts."""

    def name(old: str) -> str:
        return new.get(old, old)

    def part(one: Part) -> Part:
        pins = [Pin(pin.number, pin.name, name(pin.net), pin.place) for pin in one.pins]
        return replace(one, reference=name(one.reference), pins=pins)

    def net(one: Net) -> Net:
        return replace(one, name=name(one.name), pins=[(name(ref), index) for ref, index in one.pins])

    parts = [part(one) for one in netlist.parts.values()]
    nets = {name(key): net(one) for key, one in netlist.nets.items()}
    return replace(netlist, parts={one.reference: one for one in parts}, nets=nets)


FAN = read_netlist(EXAMPLES / "frost-fan.cir")


@settings(max_examples=25, deadline=None)
@given(supply=names, output=names, controller=names, title=names)
@example(supply="a.b", output='say "12 V"', controller="U1\\", title="'''")
@example(supply="\x1b[31m\0", output="\r\n[design]\nx = 1", controller="\t", title="# \x9b\u202e\u2028")
@example(supply="\ud800", output="\udfff", controller="\ud83d", title="\udc00")
@example(supply="x" * 3000, output='"' * 150, controller="\U0001f300" * 40, title="y" * 3000)
@example(supply="+12V", output="5V0", controller="größe", title="µΩ")
def test_any_name_is_valid_toml_and_changes_nothing(
    supply: str, output: str, controller: str, title: str, same_verdicts: SameVerdicts
) -> None:
    new = {"VBAT": supply, "VOUT": output, "U1": controller}
    if len(set(new.values()) - set(FAN.nets) - set(FAN.parts)) < len(new):
        return  # two nets of one name are one net
    netlist = replace(renamed(FAN, new), name=title)
    text = brief_text(netlist)
    assert all(line.isprintable() for line in text.split("\n"))
    text.encode()
    found = read_brief("hostile", text)
    assert list(found.controllers) in ([controller], [])
    assert same_verdicts(review_netlist(netlist), review_netlist(netlist, found))


def test_a_name_with_quotes_is_stated() -> None:
    name = 'say "12 V"\n'
    text = brief_text(renamed(FAN, {"VOUT": name}))
    assert told(text)["controllers"]["U1"]["output"] == name
    assert f"\n# {toml_key(name)}.load = " in text
