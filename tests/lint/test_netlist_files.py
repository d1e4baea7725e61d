from __future__ import annotations

import os
from pathlib import Path

import pytest
from pwmlint.grammar.errors import NetlistError
from pwmlint.lint import netlist_files
from pwmlint.lint.netlist_files import netlists


@pytest.fixture(autouse=True)
def orchard(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    for name in (
        "fan.cir",
        "fan.brief.toml",
        "lamp.brief.toml",
        "notes.txt",
        ".hidden.cir",
        "press/b.EDF",
        "press/a.sp",
        "press/deep/c.spice",
        "press/.git/d.cir",
        "sorter/belt.edif",
        "sorter/belt.cir",
        "sorter/belt.parts.csv",
        "empty/readme.md",
    ):
        path = tmp_path / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text("", encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


@pytest.mark.parametrize(
    "argument", ["fan.cir", "notes.txt", "-", "gone.cir", "gone.brief.toml", "press/a.sp"]
)
def test_a_file_stands_for_itself(argument: str) -> None:
    assert netlists(argument) == [argument]


def test_a_folder_stands_for_its_netlists_in_a_fixed_order() -> None:
    assert netlists("press") == [
        str(Path("press", *name)) for name in (["a.sp"], ["b.EDF"], ["deep", "c.spice"])
    ]
    everything = netlists(".")
    assert everything[0] == "fan.cir"
    assert len(everything) == 6


def test_a_link_to_a_folder_is_not_entered(orchard: Path) -> None:
    (orchard / "press" / "again").symlink_to(orchard / "press", target_is_directory=True)
    assert len(netlists("press")) == 3


def test_a_file_beside_a_netlist_stands_for_it() -> None:
    assert netlists("fan.brief.toml") == ["fan.cir"]
    assert netlists("sorter/belt.parts.csv") == [str(Path("sorter/belt.edif")), str(Path("sorter/belt.cir"))]


@pytest.mark.parametrize(
    ("argument", "message"),
    [("lamp.brief.toml", "there is no netlist beside this file"), ("empty", "no netlist in this folder")],
)
def test_nothing_to_review_is_an_error(argument: str, message: str) -> None:
    with pytest.raises(NetlistError) as caught:
        netlists(argument)
    assert caught.value.message == message
    assert caught.value.place.file == argument
    assert ".spi or .spice" in caught.value.remedy


def test_a_netlist_that_leads_out_is_refused(orchard: Path, tmp_path_factory: pytest.TempPathFactory) -> None:
    secret = tmp_path_factory.mktemp("elsewhere") / "secret.cir"
    secret.write_text("R1 a b", encoding="utf-8")
    (orchard / "press" / "deep" / "z.cir").symlink_to(secret)
    with pytest.raises(NetlistError, match="leads out of"):
        netlists("press")
    (orchard / "press" / "deep" / "z.cir").unlink()
    (orchard / "press" / "deep" / "z.cir").symlink_to(orchard / "fan.cir")
    with pytest.raises(NetlistError, match="leads out of"):
        netlists("press")
    (orchard / ".git").mkdir()
    assert len(netlists(".")) == 7, "inside a repository links are its own business"


def test_a_folder_that_cannot_be_looked_into_is_not_passed_over(monkeypatch: pytest.MonkeyPatch) -> None:
    look = os.scandir

    def scandir(path: str) -> object:
        if Path(path).name == "deep":
            raise PermissionError(13, "Permission denied", path)
        return look(path)

    monkeypatch.setattr(os, "scandir", scandir)
    with pytest.raises(NetlistError, match="cannot be looked into: Permission denied") as caught:
        netlists("press")
    assert Path(caught.value.place.file) == Path("press/deep")


def test_there_is_a_limit(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(netlist_files, "_MOST", 2)
    with pytest.raises(NetlistError, match="more than 2 netlists"):
        netlists("press")


@pytest.mark.skipif(os.name == "nt", reason="links and pipes as POSIX has them")
class TestWhatIsNoFile:
    def test_a_ring_of_links_is_left_to_the_reader_to_tell(self, orchard: Path) -> None:
        ring = orchard / "empty" / "ring.cir"
        ring.symlink_to("ring.cir")
        assert netlists("empty") == ["empty/ring.cir"]

    def test_nobody_waits_for_a_pipe(self, orchard: Path) -> None:
        os.mkfifo(orchard / "empty" / "pipe.cir")
        with pytest.raises(NetlistError, match="this is no file") as caught:
            netlists("empty")
        assert caught.value.place.file == "empty/pipe.cir"
