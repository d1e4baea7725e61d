"""No path that a file names leads out of the file's folder."""

from __future__ import annotations

import os
import tempfile
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pwmlint.lint.confined_path import PathRefusedError, confined


@pytest.fixture
def orchard(tmp_path: Path) -> Path:
    """A folder with links that lead inside and outside, and something hidden."""
    orchard = tmp_path / "orchard"
    (orchard / "models").mkdir(parents=True)
    (orchard / ".git").mkdir()
    (orchard / ".git" / "config").write_text("secret")
    (tmp_path / "outside.txt").write_text("secret")
    (orchard / "out").symlink_to(tmp_path)
    (orchard / "file").symlink_to(tmp_path / "outside.txt")
    (orchard / "in").symlink_to(orchard / "models")
    (orchard / "vault").symlink_to(orchard / ".git")
    (orchard / "loop").symlink_to(orchard / "loop")
    return orchard


@pytest.mark.parametrize(
    "text", ["models", "models/diodes.lib", "./models", "in/diodes.lib", ".", "to come/x", "~"]
)
def test_what_stays_inside(orchard: Path, text: str) -> None:
    assert confined(orchard, text) == orchard / text


def test_a_relative_folder_stays_relative(orchard: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(orchard)
    assert confined(Path("."), "models") == Path("models")
    assert confined(Path("../orchard"), "models") == Path("../orchard/models")


@pytest.mark.parametrize(
    ("text", "reason"),
    [
        ("..", "climbs"),
        ("../outside.txt", "climbs"),
        ("models/../models", "climbs"),
        ("models/../../outside.txt", "climbs"),
        ("/etc/hostname", "absolute"),
        ("//server/share", "absolute"),
        ("C:/orchard", "character"),
        ("C:orchard", "character"),
        ("models\\diodes.lib", "character"),
        ("..\\outside.txt", "character"),
        ("models\x00", "character"),
        ("\x1b[31mmodels", "character"),
        ("mod\u202eels", "character"),
        ("out", "out of the folder"),
        ("out/outside.txt", "out of the folder"),
        ("file", "out of the folder"),
        (".git/config", "hidden"),
        ("vault/config", "hidden"),
        ("models/.secret", "hidden"),
        ("loop/x", "cannot be followed"),
    ],
)
def test_what_is_refused(orchard: Path, text: str, reason: str) -> None:
    with pytest.raises(PathRefusedError, match=reason):
        confined(orchard, text)


def test_a_hidden_folder_above_is_no_matter(tmp_path: Path) -> None:
    hidden = tmp_path / ".cache" / "orchard"
    hidden.mkdir(parents=True)
    assert confined(hidden, "x.toml") == hidden / "x.toml"


@given(
    st.lists(
        st.sampled_from(["..", ".", "", "models", "out", "x", "\\", "~", ".git", "é", "\x00"]), min_size=1
    )
)
def test_no_path_escapes(words: list[str]) -> None:
    with tempfile.TemporaryDirectory() as above:
        orchard = Path(above, "orchard")
        (orchard / "models").mkdir(parents=True)
        (orchard / "out").symlink_to(above)
        try:
            path = confined(orchard, "/".join(words))
        except PathRefusedError:
            return
        assert os.path.commonpath([path.resolve(), orchard.resolve()]) == str(orchard.resolve())
