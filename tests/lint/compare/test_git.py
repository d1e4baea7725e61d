"""Revisions from git: read from the object store, bounded, inside the repository; what is missing is told."""

from __future__ import annotations

import json
import os
import shutil
import subprocess
import tempfile
from collections.abc import Callable
from pathlib import Path

import pytest
from pwmlint.grammar.errors import NetlistError
from pwmlint.lint.cli import main
from pwmlint.lint.compare import compare, revision_files
from pwmlint.lint.compare.source import Source, opened

FIRST = "fan, first\nR1 VBAT DTC 10k\nR2 DTC 0 1k\n.include models/diodes.lib\nD1 0 VBAT DX\n.end\n"
SECOND = FIRST.replace("10k", "22k")
MODELS = ".model DX D\n"
BRIEF = '[rails.VBAT]\nvoltage = "{} V"\n'

pytestmark = pytest.mark.skipif(shutil.which("git") is None, reason="git is not installed")

Git = Callable[..., str]


@pytest.fixture
def git(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Git:
    """Return a function that runs git in a new repository, which is the current folder."""
    folder = tmp_path / "repository"
    folder.mkdir()
    monkeypatch.chdir(folder)
    monkeypatch.setenv("GIT_CONFIG_GLOBAL", os.devnull)
    monkeypatch.setenv("GIT_CONFIG_NOSYSTEM", "1")
    monkeypatch.setattr(tempfile, "tempdir", str(tmp_path / "temporary"))
    (tmp_path / "temporary").mkdir()

    def run(*arguments: str, given: bytes = b"") -> str:
        who = ("-c", "user.name=orchard", "-c", "user.email=orchard@farm.example")
        done = subprocess.run(["git", *who, *arguments], input=given, capture_output=True, check=True)
        return done.stdout.decode().strip()

    run("init", "-q", "-b", "main")
    return run


@pytest.fixture
def boards(git: Git) -> Git:
    """Two revisions of a fan with its brief and what it includes, in a folder of the repository."""
    folder = Path("boards")
    (folder / "models").mkdir(parents=True)
    (folder / "models" / "diodes.lib").write_text(MODELS)
    (folder / "fan.cir").write_text(FIRST)
    (folder / "fan.brief.toml").write_text(BRIEF.format("20"))
    Path("README").write_text("the orchard's boards\n")
    git("add", "-A")
    git("commit", "-qm", "first")
    (folder / "fan.cir").write_text(SECOND)
    (folder / "fan.brief.toml").write_text(BRIEF.format("30"))
    git("commit", "-qam", "second")
    git("tag", "second")
    return git


def refused(text: str) -> NetlistError:
    with pytest.raises(NetlistError) as caught, opened(text):
        pass
    assert caught.value.place.file == text
    assert caught.value.remedy
    return caught.value


def text_of(text: str) -> str:
    with opened(text) as source:
        return Path(source.path).read_text(encoding="utf-8")


def written(source: Source) -> list[str]:
    """Return the names of the files that were written beside a netlist at the top of its repository."""
    return sorted(one.name for one in Path(source.path).parent.iterdir() if one.name != ".git")


@pytest.mark.parametrize(
    ("revision", "text"),
    [
        ("HEAD", SECOND),
        ("HEAD~1", FIRST),
        ("second^", FIRST),
        ("main", SECOND),
        ("HEAD^{/first}", FIRST),
        ("HEAD^{tree}", SECOND),
    ],
)
def test_a_revision_is_read_as_it_was(boards: Git, revision: str, text: str) -> None:
    Path("boards/fan.cir").write_text("not committed\n")
    assert text_of(f"{revision}:boards/fan.cir") == text


def test_what_lies_beside_it_is_of_that_revision(boards: Git) -> None:
    found = compare("HEAD~1:boards/fan.cir", "boards/fan.cir")
    assert [change.new.reference for change in found.circuit.parts_changed] == ["R1"]
    assert (found.old.brief, found.new.brief) == ("HEAD~1:boards/fan.brief.toml", "boards/fan.brief.toml")
    assert not any("missing-library" in str(verdict) for verdict in found.old.verdicts)


def test_reports_name_the_revision_and_no_temporary_folder(boards: Git, tmp_path: Path) -> None:
    Path("boards/fan.cir").write_text(FIRST.replace("diodes.lib", "lost.lib").replace("D1 0", "D1 1"))
    boards("commit", "-qam", "third")
    found = compare("HEAD~1:boards/fan.cir", "HEAD:boards/fan.cir")
    assert found.new.netlist == "HEAD:boards/fan.cir"
    assert str(tmp_path) not in repr(found)
    assert {change.old.place.file for change in found.circuit.parts_changed} == {"HEAD~1:boards/fan.cir"}
    assert {change.new.place.file for change in found.circuit.parts_changed} == {"HEAD:boards/fan.cir"}


def test_an_error_names_the_revision_and_no_temporary_folder(boards: Git, tmp_path: Path) -> None:
    Path("boards/fan.brief.toml").write_text("[rails.VBAT]\nvoltage = 3\nload = 4\n")
    boards("commit", "-qam", "a bad brief")
    with pytest.raises(NetlistError) as caught:
        compare("HEAD:boards/fan.cir", "HEAD~1:boards/fan.cir")
    assert caught.value.place.file == "HEAD:boards/fan.brief.toml"
    assert str(tmp_path) not in str(caught.value)


def test_nothing_is_left_behind(boards: Git, tmp_path: Path) -> None:
    compare("HEAD~1:boards/fan.cir", "HEAD:boards/fan.cir")
    refused("HEAD:boards/lost.cir")
    assert list((tmp_path / "temporary").iterdir()) == []


def test_from_a_folder_of_the_repository(boards: Git, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir("boards")
    assert text_of("HEAD~1:boards/fan.cir") == FIRST
    assert text_of("HEAD~1:./fan.cir") == FIRST
    assert text_of("HEAD~1:../boards/fan.cir") == FIRST
    assert "HEAD~1:./fan.cir" in refused("HEAD~1:fan.cir").remedy


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("HEAD~9:boards/fan.cir", "no revision HEAD~9"),
        ("-n:boards/fan.cir", "no revision -n"),
        ("--output=x:boards/fan.cir", "no revision --output=x"),
        ("^HEAD:boards/fan.cir", "no revision ^HEAD"),
        ("HEAD..main:boards/fan.cir", "no revision HEAD..main"),
        ("HEAD\x00:boards/fan.cir", "no revision"),
        (f"{'a' * 5000}:boards/fan.cir", "no revision"),
        (":boards/fan.cir", "no revision before the colon"),
        ("HEAD:boards/lost.cir", "no file boards/lost.cir"),
        ("HEAD:boards", "is a folder"),
        ("HEAD:", "no path after the colon"),
        ("HEAD:boards/", "no file inside the repository"),
        ("HEAD:../other/fan.cir", "no file inside the repository"),
        ("HEAD:boards/../../fan.cir", "no file inside the repository"),
        ("HEAD:/etc/passwd", "no file inside the repository"),
        ("HEAD:*.cir", "no file *.cir"),
        ("HEAD::(glob)boards/*", "no file :(glob)boards/*"),
    ],
)
def test_what_cannot_be_had_is_told_in_words(boards: Git, text: str, message: str) -> None:
    assert message in refused(text).message


class TestConfiguration:
    """What holds for a netlist is what held for it: the configuration above it, and what that names."""

    @pytest.fixture(autouse=True)
    def _configured(self, boards: Git) -> None:
        Path("common").mkdir()
        Path("common/fan.toml").write_text(BRIEF.format("24"))
        Path("pwmlint.toml").write_text('brief = "common/fan.toml"\ngate = "warning"\n')
        Path("boards/fan.brief.toml").unlink()
        boards("add", "-A")
        boards("commit", "-qm", "configured")

    def test_of_the_revision(self, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
        Path("pwmlint.toml").write_text("gate = 3\n")
        assert main(["compare", "HEAD:boards/fan.cir", "HEAD:boards/fan.cir", "--format", "json"]) == 0
        report = json.loads(capsys.readouterr().out)
        assert report["new"]["configuration"] == "HEAD:pwmlint.toml"
        assert report["new"]["brief"] == "HEAD:common/fan.toml"
        assert report["new"]["netlist"] == "HEAD:boards/fan.cir"
        assert str(tmp_path) not in json.dumps(report)

    def test_the_gate_is_that_of_the_new_revision(self, capsys: pytest.CaptureFixture[str]) -> None:
        main(["compare", "HEAD~1:boards/fan.cir", "HEAD:boards/fan.cir"])
        assert "gate warning" in capsys.readouterr().out
        main(["compare", "HEAD:boards/fan.cir", "HEAD~1:boards/fan.cir"])
        assert "gate error" in capsys.readouterr().out

    def test_none_where_none_is_to_be(self, capsys: pytest.CaptureFixture[str]) -> None:
        arguments = ["HEAD:boards/fan.cir", "boards/fan.cir", "--no-config", "--format", "json"]
        assert main(["compare", *arguments]) == 0
        assert json.loads(capsys.readouterr().out)["old"]["configuration"] is None

    @pytest.mark.parametrize("named", ["../secret.toml", "/etc/hostname", ".git/config", "boards/../../x"])
    def test_it_leads_nowhere_else(
        self, boards: Git, named: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
    ) -> None:
        Path("pwmlint.toml").write_text(f'brief = "{named}"\n')
        boards("commit", "-qam", "a configuration that climbs")
        assert main(["compare", "HEAD:boards/fan.cir", "HEAD~1:boards/fan.cir"]) == 2
        message = capsys.readouterr().err
        assert message.startswith("HEAD:pwmlint.toml:1:")
        assert str(tmp_path) not in message

    def test_house_rules_need_trust(self, boards: Git, capsys: pytest.CaptureFixture[str]) -> None:
        Path("house").mkdir()
        Path("house/rules.py").write_text("raise SystemExit(7)\n")
        Path("pwmlint.toml").write_text('rules = "house"\n')
        boards("add", "-A")
        boards("commit", "-qm", "house rules")
        assert main(["compare", "HEAD:boards/fan.cir", "HEAD:boards/fan.cir"]) == 0
        assert capsys.readouterr().err.count("HEAD:pwmlint.toml:1:") == 2  # the revisions are read apart
        assert main(["compare", "HEAD:boards/fan.cir", "HEAD:boards/fan.cir", "--trust-config"]) == 2
        assert "HEAD:house/rules.py" in capsys.readouterr().err


def test_outside_a_repository(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("GIT_CEILING_DIRECTORIES", str(tmp_path.parent))
    assert "belongs to no git repository" in refused("HEAD:fan.cir").message


def test_without_git(boards: Git, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("PATH", "")
    assert "git is not installed" in refused("HEAD:boards/fan.cir").message


def test_a_git_that_hangs(boards: Git, monkeypatch: pytest.MonkeyPatch) -> None:
    def hang(*_: object, **options: object) -> object:
        raise subprocess.TimeoutExpired("git", float(str(options["timeout"])))

    monkeypatch.setattr(subprocess, "run", hang)
    assert "did not answer" in refused("HEAD:boards/fan.cir").message


@pytest.mark.parametrize("name", ["HEAD:boards/fan.cir", "rev:2.cir"])
def test_a_file_with_such_a_name_is_a_file(boards: Git, name: str) -> None:
    Path(name).parent.mkdir(parents=True, exist_ok=True)
    Path(name).write_text("a file of that name\n")
    with opened(name) as source:
        assert source == Source(name)


@pytest.mark.parametrize("name", ["C:\\boards\\fan.cir", "c:/boards/fan.cir", "fan.cir", "./fan.cir"])
def test_a_path_with_a_drive_is_a_path(git: Git, name: str) -> None:
    with opened(name) as source:
        assert source == Source(name)


class TestHostileRepositories:
    @pytest.fixture
    def tree(self, git: Git) -> Callable[..., None]:
        """Return a function that commits a tree of (mode, path, content), as no work of git's own would."""

        def commit(*files: tuple[str, str, str]) -> None:
            rows = b""
            for mode, name, content in sorted(files, key=lambda row: row[1]):
                made = git("hash-object", "-w", "--stdin", given=content.encode())
                rows += f"{mode} {name}\0".encode() + bytes.fromhex(made)
            tree = git("hash-object", "-t", "tree", "-w", "--literally", "--stdin", given=rows)
            git("update-ref", "refs/heads/main", git("commit-tree", tree, "-m", "by hand"))

        return commit

    def test_links_lead_to_what_is_inside(self, tree: Callable[..., None]) -> None:
        tree(
            ("100644", "fan.cir", FIRST),
            ("120000", "fan.brief.toml", "common.toml"),
            ("100644", "common.toml", BRIEF.format("20")),
            ("120000", "again.cir", "./fan.cir"),
        )
        with opened("main:again.cir") as source:
            path = Path(source.path)
            assert path.read_text() == FIRST
            assert not any(one.is_symlink() for one in path.parent.iterdir())
            assert path.with_name("fan.brief.toml").read_text() == BRIEF.format("20")

    @pytest.mark.parametrize("target", ["/etc/hostname", "../../secret", "loop.toml", "fan.parts.csv", ""])
    def test_links_lead_nowhere_else(self, tree: Callable[..., None], target: str) -> None:
        tree(
            ("100644", "fan.cir", FIRST),
            ("120000", "fan.brief.toml", target),
            ("120000", "loop.toml", "fan.brief.toml"),
        )
        with opened("main:fan.cir") as source:
            assert written(source) == ["fan.cir"]

    def test_a_netlist_that_is_a_link_out(self, tree: Callable[..., None]) -> None:
        tree(("120000", "fan.cir", "/etc/hostname"))
        assert "leads out of its folder" in refused("main:fan.cir").message

    def test_names_that_would_leave_the_folder(self, tree: Callable[..., None], tmp_path: Path) -> None:
        odd = ("..", ".", ".git", ".GIT")
        tree(("100644", "fan.cir", FIRST), *(("100644", name, "outside") for name in odd))
        with opened("main:fan.cir") as source:
            assert written(source) == ["fan.cir"]
        assert not (tmp_path / "outside").exists()

    def test_a_module_of_another_repository_is_left_out(self, tree: Callable[..., None]) -> None:
        tree(("100644", "fan.cir", FIRST), ("160000", "other", "not a commit"))
        assert text_of("main:fan.cir") == FIRST

    def test_too_many_files(self, tree: Callable[..., None], monkeypatch: pytest.MonkeyPatch) -> None:
        monkeypatch.setattr(revision_files, "MOST_FILES", 3)
        tree(("100644", "fan.cir", FIRST), *(("100644", f"f{number}", "x") for number in range(3)))
        assert "more than 3 files" in refused("main:fan.cir").message

    def test_too_many_bytes(self, tree: Callable[..., None], monkeypatch: pytest.MonkeyPatch) -> None:
        monkeypatch.setattr(revision_files, "MOST_BYTES", 1000)
        tree(("100644", "fan.cir", FIRST), *(("100644", f"f{number}", "x" * 300) for number in range(4)))
        assert "1,000 bytes" in refused("main:fan.cir").message

    def test_a_large_file_beside_it_is_left_out(
        self, tree: Callable[..., None], monkeypatch: pytest.MonkeyPatch
    ) -> None:
        monkeypatch.setattr(revision_files, "LARGEST_BESIDE", 500)
        tree(("100644", "fan.cir", FIRST), ("100644", "film", "x" * 501))
        with opened("main:fan.cir") as source:
            assert written(source) == ["fan.cir"]

    def test_a_pointer_to_a_large_file(self, tree: Callable[..., None]) -> None:
        tree(("100644", "fan.cir", "version https://git-lfs.example/spec/v1\noid sha256:0\n"))
        assert "pointer" in refused("main:fan.cir").message

    def test_filters_and_hooks_of_the_repository_do_not_run(self, boards: Git, tmp_path: Path) -> None:
        ran = tmp_path / "ran"
        Path(".gitattributes").write_text("*.cir filter=f diff=f\n")
        for key in ("filter.f.smudge", "filter.f.process", "diff.f.textconv", "core.fsmonitor", "core.pager"):
            boards("config", key, f"touch {ran}; cat")
        assert text_of("HEAD:boards/fan.cir") == SECOND
        assert not ran.exists()


def test_names_with_blanks_and_signs(git: Git) -> None:
    name = "büro \t'$(x)\".cir"
    Path(name).write_text(FIRST)
    git("add", "-A")
    git("commit", "-qm", "odd names")
    assert text_of(f"HEAD:{name}") == FIRST
