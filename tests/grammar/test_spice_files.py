"""Inclusions: both meanings of `.lib`, the tree that they stay in, and files that are not at hand."""

from __future__ import annotations

from pathlib import Path

import pytest
from pwmlint.grammar import spice_files
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.netlist import Netlist, Note
from pwmlint.grammar.spice import read_spice

SHEET = ".subckt sheet p\nR1 p 0 1k\n.ends\n.model DX D\n"


class Orchard:
    """A folder with a netlist and what lies beside it."""

    def __init__(self, root: Path) -> None:
        self.root = root / "board"
        self.root.mkdir()

    def write(self, name: str, text: str) -> Path:
        path = self.root / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text, encoding="utf-8")
        return path

    def read(self, *lines: str, allow: tuple[Path, ...] = ()) -> Netlist:
        text = "\n".join(("orchard", *lines)) + "\n"
        path = self.write("orchard.cir", text)
        return read_spice(text, str(path), include_root=self.root, allow_include=allow)


@pytest.fixture
def orchard(tmp_path: Path) -> Orchard:
    return Orchard(tmp_path)


def missing(netlist: Netlist) -> Note:
    (note,) = [
        note for note in netlist.notes if note.kind == "missing-library" and "not read" in note.message
    ]
    return note


@pytest.mark.construct("B2 .include, .inc and .lib of one file; names quoted or not")
@pytest.mark.parametrize(
    "card",
    [
        '.include "lib/sheet.lib"',
        ".inc lib/sheet.lib",
        ".INCLUDE 'lib/sheet.lib'",
        ".lib lib/sheet.lib",
        ".lib lib\\sheet.lib",
        ".lib C:\\Users\\A Grower\\sheet.lib",
        ".include ../board/lib/../lib/sheet.lib",
    ],
)
def test_a_library_is_included(orchard: Orchard, card: str) -> None:
    orchard.write("lib/sheet.lib", SHEET)
    orchard.write("sheet.lib", SHEET)
    netlist = orchard.read(card, "X1 a sheet")
    assert netlist.parts["X1/R1"].value == "1k"
    assert netlist.models == {"dx": "d"}
    assert len(netlist.files) == 2
    assert netlist.parts["X1/R1"].place == (netlist.files[1], 2, 1)


@pytest.mark.construct("B1 an included file has no title line")
def test_the_first_line_of_an_included_file_counts(orchard: Orchard) -> None:
    orchard.write("parts.net", "R1 a 0 1k\nR2 a b 2k\n.end\nR3 a b 3k\n")
    assert list(orchard.read(".INC 'parts.net'", "R9 a 0 1").parts) == ["R1", "R2", "R9"]


@pytest.mark.construct("B2 .lib file section, and .lib section .. .endl")
def test_a_section_of_a_library(orchard: Orchard) -> None:
    orchard.write(
        "corners.lib",
        ".lib typ\n.param r=1k\n.endl typ\n"
        ".lib MAX\n.param r=2k\n.lib 'corners.lib' more\n.endl\n"
        ".lib more\n.param c=5\n.endl\n",
    )
    netlist = orchard.read('.lib "corners.lib" max', "R1 a 0 {r}", "R2 a 0 {c}")
    assert (netlist.parts["R1"].value, netlist.parts["R2"].value) == ("2000", "5")
    assert orchard.read(".lib corners.lib typ", "R1 a 0 {r}").parts["R1"].value == "1000"
    assert "no section cold" in missing(orchard.read(".lib corners.lib cold", "R1 a 0 1")).message


def test_a_section_that_nothing_includes_is_skipped(orchard: Orchard) -> None:
    netlist = orchard.read(".lib typ", "R1 a 0 1k", ".endl", "R2 a 0 1k")
    assert list(netlist.parts) == ["R2"]
    assert [note.kind for note in netlist.notes] == ["skipped"]


@pytest.mark.construct("B2 .include inside a subcircuit and inside an included file")
def test_nested_inclusions(orchard: Orchard) -> None:
    orchard.write("lib/outer.lib", ".include inner.lib\n.subckt outer p\nX1 p sheet\n.inc value.inc\n.ends\n")
    orchard.write("lib/inner.lib", SHEET)
    orchard.write("lib/value.inc", "C1 p 0 1n\n")
    netlist = orchard.read(".lib lib/outer.lib", "X1 a outer")
    assert list(netlist.parts) == ["X1/X1/R1", "X1/C1"]


@pytest.mark.parametrize(
    ("name", "reason"),
    [
        ("gone.lib", "there is no such file"),
        ("/etc/passwd", "outside"),
        ("../../../../../../etc/passwd", "outside"),
        (".vault/key.lib", "hidden"),
        ("lib/.key.lib", "hidden"),
        ("key.lib", "hidden"),
        ("../outside.lib", "outside"),
        ("link.lib", "outside"),
        ("loop.lib", "is not read"),
        ("x" * 5000, "no usable file name"),
        ("folder", "there is no such file"),
        ("binary.lib", "NUL"),
    ],
)
def test_what_is_not_at_hand_or_refused_is_noted(orchard: Orchard, name: str, reason: str) -> None:
    (orchard.root.parent / "outside.lib").write_text(SHEET)
    (orchard.root / "link.lib").symlink_to(orchard.root.parent / "outside.lib")
    (orchard.root / "loop.lib").symlink_to(orchard.root / "loop.lib")
    orchard.write(".vault/key.lib", SHEET)
    orchard.write("lib/.key.lib", SHEET)
    (orchard.root / "key.lib").symlink_to(orchard.root / ".vault" / "key.lib")
    (orchard.root / "folder").mkdir()
    (orchard.root / "binary.lib").write_bytes(b"\x00\x01R1 a b 1\xff")
    note = missing(orchard.read(f'.include "{name}"', "R1 a 0 1k"))
    assert reason in note.message
    assert (note.place.line, note.place.column) == (2, 10)


def test_a_refused_file_is_not_opened(orchard: Orchard, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(path: Path) -> bytes:
        raise AssertionError(path)

    monkeypatch.setattr(Path, "read_bytes", refuse)
    assert len(orchard.read(".include /etc/hostname", ".lib ../../../etc/hostname", "R1 a 0 1").files) == 1


def test_an_allowed_tree_may_be_included(orchard: Orchard) -> None:
    tree = orchard.root.parent / "models"
    tree.mkdir()
    (tree / "sheet.lib").write_text(SHEET)
    assert list(orchard.read(".lib sheet.lib", "X1 a sheet", allow=(tree,)).parts) == ["X1/R1"]
    assert list(orchard.read(f".lib {tree}/sheet.lib", "X1 a sheet", allow=(tree,)).parts) == ["X1/R1"]
    assert missing(orchard.read(f".lib {tree}/sheet.lib", "X1 a sheet"))


def test_a_hidden_tree_may_be_allowed_by_name(orchard: Orchard) -> None:
    orchard.write(".models/sheet.lib", SHEET)
    card = ".lib .models/sheet.lib"
    assert list(orchard.read(card, "X1 a sheet", allow=(orchard.root / ".models",)).parts) == ["X1/R1"]


def test_standard_input_includes_nothing() -> None:
    netlist = read_spice("orchard\n.include sheet.lib\nR1 a b 1k\n", "-")
    assert "no file may be included here" in missing(netlist).message


def test_a_large_file_is_not_read(orchard: Orchard, monkeypatch: pytest.MonkeyPatch) -> None:
    orchard.write("sheet.lib", SHEET)
    monkeypatch.setattr(spice_files, "LARGEST_FILE", 10)
    assert "larger than 10 bytes" in missing(orchard.read(".lib sheet.lib", "R1 a b 1")).message


def test_a_file_that_cannot_be_opened_is_noted(orchard: Orchard, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(path: Path) -> bytes:
        raise PermissionError(13, "Permission denied", str(path))

    orchard.write("sheet.lib", SHEET)
    monkeypatch.setattr(Path, "read_bytes", refuse)
    assert "Permission denied" in missing(orchard.read(".lib sheet.lib", "R1 a b 1")).message


@pytest.mark.parametrize(
    ("files", "message"),
    [
        ({"a.inc": ".include a.inc\n"}, "a.inc includes itself"),
        ({"a.inc": ".include b.inc\n", "b.inc": ".include 'a.inc'\n"}, "a.inc includes itself"),
        (
            {"a.inc": ".include b.inc\n" * 40, "b.inc": ".include c.inc\n" * 40, "c.inc": "* leaf\n"},
            "more than 1000 inclusions",
        ),
        ({"a.inc": ".include\n"}, "`.include` without a file"),
    ],
)
def test_endless_inclusions_are_errors(orchard: Orchard, files: dict[str, str], message: str) -> None:
    for name, text in files.items():
        orchard.write(name, text)
    with pytest.raises(NetlistError) as caught:
        orchard.read(".include a.inc", "R1 a b 1k")
    assert message in [error.message for error in (caught.value, *caught.value.also)]


def test_an_error_in_an_included_file_has_its_place(orchard: Orchard) -> None:
    path = orchard.write("parts.inc", "R1 a\n")
    with pytest.raises(NetlistError) as caught:
        orchard.read(".include parts.inc", "R2 a")
    assert [
        (error.place.file.rpartition("/")[2], error.place.line)
        for error in (caught.value, *caught.value.also)
    ] == [
        ("orchard.cir", 3),
        (path.name, 1),
    ]
