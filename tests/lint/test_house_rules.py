"""Folders of house rules: what is loaded, in which order, and what is told of a file that cannot be used."""

from __future__ import annotations

import sys
from collections.abc import Callable
from pathlib import Path

import pytest
from pwmlint.grammar import read_bytes
from pwmlint.lint.house_rules import HouseRuleError, is_of_house, load_folder
from pwmlint.lint.review import review_netlist
from pwmlint.lint.rule import load_rules

Write = Callable[..., Path]

HEAD = """\
from __future__ import annotations
from pwmlint.lint.rule import netlist_rule, rule
from pwmlint.lint.verdict import Outcome, Verdict
"""

NETLIST = read_bytes(b"hive scale\nR1 a 0 1k\n.end\n", "scale.cir")


def source(identity: str, body: str = "return ()") -> str:
    return (
        f'{HEAD}\n@netlist_rule("{identity}", level="note", topic="house")\n'
        f'def ask(design):\n    """Is it ours?"""\n    {body}\n'
    )


@pytest.fixture
def write(tmp_path: Path) -> Write:
    """Return a function that writes files into a folder of house rules and returns the folder."""
    folder = tmp_path / "house"
    folder.mkdir()

    def run(**files: str) -> Path:
        for name, text in files.items():
            (folder / f"{name}.py").write_text(text, encoding="utf-8")
        return folder

    return run


def refused(folder: Path) -> HouseRuleError:
    with pytest.raises(HouseRuleError) as caught:
        load_folder(folder, load_rules())
    assert caught.value.remedy
    assert "Traceback" not in str(caught.value)
    return caught.value


class TestLoading:
    def test_by_the_name_of_the_file_then_as_written(self, write: Write):
        two = source("b.one") + '\n@rule("b.another", level="note", topic="t")\ndef more(c, d): return ()\n'
        folder = write(c=source("c.one"), b=two, a=source("a.one"))
        assert [one.id for one in load_folder(folder, ())] == ["a.one", "b.one", "b.another", "c.one"]

    def test_twice_alike(self, write: Write):
        folder = write(a=source("a.one"), b=source("b.one"))
        first, second = (load_folder(folder, load_rules()) for _ in range(2))
        assert [one.id for one in first] == [one.id for one in second]

    def test_other_files_are_no_rule_files(self, write: Write):
        folder = write(a=source("a.one"), __init__="1 / 0", _limits="1 / 0", **{".hidden": "1 / 0"})
        (folder / "notes.txt").write_text("1 / 0")
        (folder / "below").mkdir()
        (folder / "below" / "deep.py").write_text("1 / 0")
        assert [one.id for one in load_folder(folder, ())] == ["a.one"]

    def test_nothing_is_left_beside_the_files(self, write: Write):
        folder = write(a=source("a.one"))
        load_folder(folder, ())
        assert [path.name for path in folder.iterdir()] == ["a.py"]

    def test_a_name_shadows_nothing(self, write: Write):
        before = {name: id(module) for name, module in sys.modules.items()}
        names = {
            "json": "a.one",
            "pwmlint": "b.one",
            "rule": "c.one",
            "os.path": "d.one",
            "no name-1": "e.one",
        }
        folder = write(**{name: source(identity) for name, identity in names.items()})
        assert {one.id for one in load_folder(folder, ())} == set(names.values())
        assert str(folder) not in sys.path
        for name, module in sys.modules.items():
            assert before.get(name, id(module)) == id(module)
            assert name in before or name.startswith("house rules "), name

    def test_files_of_a_folder_share_what_begins_with_a_line(self, write: Write):
        body = source("a.one", "return (Verdict(outcome=Outcome.PASS, message=str(LIMIT)),)")
        folder = write(a=f"{body}\nfrom ._limits import LIMIT\n", _limits="LIMIT = 12\n")
        review = review_netlist(NETLIST, rules=load_folder(folder, ()))
        assert [verdict.message for verdict in review.verdicts] == ["12"]

    def test_two_folders_are_apart(self, tmp_path: Path):
        for name in ("one", "two"):
            (tmp_path / name).mkdir()
            (tmp_path / name / "a.py").write_text(source(f"{name}.a") + "\nfrom ._limits import LIMIT\n")
            (tmp_path / name / "_limits.py").write_text(f"LIMIT = '{name}'\n")
        rules = [load_folder(tmp_path / name, ())[0] for name in ("one", "two")]
        assert [vars(sys.modules[one.function.__module__])["LIMIT"] for one in rules] == ["one", "two"]

    def test_data_classes_work(self, write: Write):
        lines = "from dataclasses import dataclass\n@dataclass\nclass Hive:\n    weight: int\n"
        assert load_folder(write(a=source("a.one") + lines), ())

    def test_an_imported_rule_is_not_asked_twice(self, write: Write):
        ours = "from pwmlint.rules.dead_time import voltage_range\n"
        folder = write(a=source("a.one") + ours, b=source("b.one") + "from .a import ask as other\n")
        assert [one.id for one in load_folder(folder, load_rules())] == ["a.one", "b.one"]

    def test_whose_rule_it_is(self, write: Write):
        (ours,) = load_folder(write(a=source("a.one")), ())
        assert is_of_house(ours)
        assert not any(is_of_house(one) for one in load_rules())


class TestRefusing:
    @pytest.mark.parametrize(
        ("text", "line", "message"),
        [
            ("def ask(:\n", 1, "not Python: invalid syntax"),
            ("x = 1\n  y = 2\n", 2, "not Python: unexpected indent"),
            ("x = '\x00'\n", 0, "null bytes"),
            ("import no_such_module_of_ours\n", 1, "ModuleNotFoundError: No module named"),
            ("def f():\n    return 1 / 0\n\nf()\n", 2, "ZeroDivisionError: division by zero"),
            ("raise SystemExit(0)\n", 1, "the file cannot be loaded: SystemExit: 0"),
            ("from pwmlint.lint.rule import rul\n", 1, "ImportError"),
            ("raise ValueError\n", 1, "the file cannot be loaded: ValueError"),
            (source("Hive.Zero"), 5, "a rule's id reads topic.question"),
            (source("dead-time.range"), 5, "there is a rule dead-time.range already, in "),
            ("x = 1\n", 0, "there is no rule in this file"),
            ("", 0, "there is no rule in this file"),
            ("from ._gone import x\n", 1, "ModuleNotFoundError"),
        ],
    )
    def test_a_file(self, write: Write, text: str, line: int, message: str):
        folder = write(hive=text)
        problem = refused(folder)
        assert problem.place[:2] == (str(folder / "hive.py"), line)
        assert message in problem.message
        assert problem.excerpt == (text.splitlines()[line - 1] if line else "")

    def test_a_file_that_failed_is_no_module(self, write: Write):
        folder = write(half_made="x = 1\n1 / 0\n")
        for _ in range(2):
            assert refused(folder).place.line == 2
        assert not [name for name in sys.modules if name.endswith(".half_made")]

    def test_bytes_that_are_no_text(self, write: Write):
        folder = write()
        (folder / "a.py").write_bytes(b"x = '\xff'\n")
        assert "not Python" in refused(folder).message

    def test_a_file_that_cannot_be_read(self, write: Write):
        folder = write()
        (folder / "a.py").mkdir()
        assert "the file cannot be read: " in refused(folder).message

    def test_a_mistake_in_a_shared_file_is_told_there(self, write: Write):
        folder = write(a="from ._limits import x\n", _limits="\nx = 1 / 0\n")
        assert refused(folder).place[:2] == (str(folder / "_limits.py"), 2)

    def test_two_files_of_one_id(self, write: Write):
        folder = write(a=source("a.one"), b=source("a.one"))
        problem = refused(folder)
        assert problem.place[:2] == (str(folder / "b.py"), 5)
        assert problem.message == f"there is a rule a.one already, in {folder / 'a.py'}"

    def test_an_empty_folder(self, write: Write):
        assert "there is no rule file in this folder" in refused(write(_limits="x = 1")).message

    @pytest.mark.parametrize("name", ["gone", "file", "a\0b"])
    def test_no_folder(self, tmp_path: Path, name: str):
        (tmp_path / "file").write_text("")
        assert "the folder of house rules cannot be read" in refused(tmp_path / name).message

    def test_messages_steer_nothing(self, write: Write):
        folder = write(a="raise ValueError('\\x1b[31m\\n::error::')\n")
        assert "\x1b" not in str(refused(folder))
        assert not [line for line in str(refused(folder)).splitlines() if line.startswith("::")]

    def test_an_interruption_is_none_of_its_mistakes(self, write: Write):
        with pytest.raises(KeyboardInterrupt):
            load_folder(write(a="raise KeyboardInterrupt\n"), ())


class TestCrashing:
    @pytest.mark.parametrize(
        ("body", "line", "message"),
        [
            ("yield 1 / 0", 8, "ZeroDivisionError: division by zero"),
            ("raise SystemExit(0)", 8, "SystemExit: 0"),
            ("return design.voltage(1, 2, 3)", 8, "TypeError: "),
            ("return None", 5, "TypeError: 'NoneType' object is not iterable"),
            ("return ['x']", 5, "AttributeError: "),
        ],
    )
    def test_a_crash_names_rule_file_line_and_netlist(self, write: Write, body: str, line: int, message: str):
        folder = write(hive=source("hive.zero", body))
        with pytest.raises(HouseRuleError) as caught:
            review_netlist(NETLIST, rules=load_folder(folder, ()))
        problem = caught.value
        assert problem.place[:2] == (str(folder / "hive.py"), line)
        assert problem.message.startswith(f"the house rule hive.zero crashed on scale.cir: {message}")
        assert "a verdict of it would be missing" in problem.remedy

    def test_an_interruption_is_no_crash(self, write: Write):
        folder = write(hive=source("hive.zero", "raise KeyboardInterrupt"))
        with pytest.raises(KeyboardInterrupt):
            review_netlist(NETLIST, rules=load_folder(folder, ()))
