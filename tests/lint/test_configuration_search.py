"""Where the configuration is looked for, and where no longer."""

from __future__ import annotations

from pathlib import Path

import pytest
from pwmlint.lint.configuration import ConfigurationError
from pwmlint.lint.configuration_search import find_configuration


@pytest.fixture
def press(tmp_path: Path) -> Path:
    """The folder of a cider press's board, two below the root of its repository."""
    press = tmp_path / "repository" / "boards" / "press"
    press.mkdir(parents=True)
    (tmp_path / "repository" / ".git").mkdir()
    (press / "press.cir").write_text("press\n")
    return press


def configure(*folders: Path) -> None:
    for folder in folders:
        (folder / "pwmlint.toml").write_text("")


def test_the_nearest_holds(press: Path) -> None:
    for folder in (press.parent.parent, press.parent, press):
        configure(folder)
        assert find_configuration(press / "press.cir") == folder / "pwmlint.toml"


def test_a_folder_is_searched_from_itself(press: Path) -> None:
    configure(press)
    assert find_configuration(press) == press / "pwmlint.toml"


def test_the_search_ends_at_the_repository(press: Path) -> None:
    configure(press.parent.parent.parent)
    assert find_configuration(press / "press.cir") is None


def test_a_repository_within_ends_it_too(press: Path) -> None:
    configure(press.parent)
    (press / ".git").write_text("gitdir: ../../.git/modules/press\n")
    assert find_configuration(press / "press.cir") is None


def test_outside_a_repository_only_the_own_folder_counts(press: Path) -> None:
    (press.parent.parent / ".git").rmdir()
    configure(press.parent)
    assert find_configuration(press / "press.cir") is None
    configure(press)
    assert find_configuration(press / "press.cir") == press / "pwmlint.toml"


def test_standard_input_has_none(press: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    configure(press)
    monkeypatch.chdir(press)
    assert find_configuration("-") is None
    assert find_configuration("./-") == Path("pwmlint.toml")


def test_the_path_is_written_as_the_netlist_s(press: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    configure(press.parent)
    monkeypatch.chdir(press)
    assert find_configuration("press.cir") == Path("../pwmlint.toml")
    monkeypatch.chdir(press.parent)
    assert find_configuration("press/press.cir") == Path("pwmlint.toml")
    assert find_configuration(press / "press.cir") == press.parent / "pwmlint.toml"


def test_a_link_to_a_netlist_stands_where_it_lies(press: Path) -> None:
    configure(press)
    (press.parent / "link.cir").symlink_to(press / "press.cir")
    assert find_configuration(press.parent / "link.cir") is None


def test_a_link_out_of_the_repository_is_refused(press: Path, tmp_path: Path) -> None:
    (tmp_path / "secret").write_text("secret = ")
    (press / "pwmlint.toml").symlink_to(tmp_path / "secret")
    with pytest.raises(ConfigurationError, match="leads out") as caught:
        find_configuration(press / "press.cir")
    assert "secret" not in str(caught.value)


def test_a_link_inside_the_repository_will_do(press: Path) -> None:
    configure(press.parent)
    (press / "pwmlint.toml").symlink_to(press.parent / "pwmlint.toml")
    assert find_configuration(press / "press.cir") == press / "pwmlint.toml"


@pytest.mark.parametrize("kind", ["folder", "dangling", "loop"])
def test_what_is_no_file_is_told(press: Path, kind: str) -> None:
    path = press / "pwmlint.toml"
    if kind == "folder":
        path.mkdir()
    else:
        path.symlink_to(path if kind == "loop" else press / "gone")
    with pytest.raises(ConfigurationError, match="this is no file") as caught:
        find_configuration(press / "press.cir")
    assert "--no-config" in caught.value.remedy


@pytest.mark.parametrize("name", ["gone/x.cir", "a\0b/x.cir", "x" * 5000 + "/x.cir", "loop/x.cir"])
def test_a_netlist_that_cannot_be_has_none(press: Path, name: str, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(press)
    Path("loop").symlink_to("loop")
    assert find_configuration(name) is None
