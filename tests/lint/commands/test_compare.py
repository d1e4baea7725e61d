"""`pwmlint compare` as a user calls it: exit status, streams, usage."""

from __future__ import annotations

import io
import json
import os
import shutil
import subprocess
import sys
from collections.abc import Sequence
from pathlib import Path

import pytest
from pwmlint.lint.cli import main

SOUND = Path(__file__).parents[3] / "examples" / "frost-fan.cir"
FAULTY = SOUND.with_name("frost-fan-rev-b.cir")
BRIEF = SOUND.with_suffix(".brief.toml")


@pytest.fixture(autouse=True)
def _plain(monkeypatch: pytest.MonkeyPatch) -> None:
    for name in ("FORCE_COLOR", "COLUMNS"):
        monkeypatch.delenv(name, raising=False)


@pytest.mark.parametrize(
    ("old", "new", "options", "status"),
    [
        (SOUND, FAULTY, (), 1),
        (SOUND, FAULTY, ("--gate", "never"), 0),
        (FAULTY, SOUND, (), 0),
        (FAULTY, SOUND, ("--gate", "note"), 0),
        (FAULTY, FAULTY, ("--gate", "note", "--strict"), 0),
        (SOUND, SOUND, ("--gate", "note", "--strict"), 0),
    ],
)
def test_exit_status(
    old: Path, new: Path, options: Sequence[str], status: int, capsys: pytest.CaptureFixture[str]
) -> None:
    assert main(["compare", str(old), str(new), *options]) == status
    streams = capsys.readouterr()
    assert streams.out.rstrip().endswith("passed")
    assert streams.err == ""


def test_one_brief_for_both(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["compare", str(SOUND), str(FAULTY), "--brief", str(BRIEF), "--format", "json"]) == 1
    report = json.loads(capsys.readouterr().out)
    assert report["old"]["brief"] == report["new"]["brief"] == str(BRIEF)


def test_a_deviation_beside_the_new_revision_lets_it_pass(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    for source, name in ((SOUND, "old"), (FAULTY, "new")):
        for ending in (".cir", ".brief.toml", ".parts.csv"):
            shutil.copy(source.with_suffix(ending), tmp_path / f"{name}{ending}")
    old, new = tmp_path / "old.cir", tmp_path / "new.cir"
    assert main(["compare", str(old), str(new)]) == 1
    Path(tmp_path / "new.deviations.toml").write_text(
        '[[deviation]]\nrule = "*"\nsubject = "*"\nreason = "a bench model"\nowner = "the orchard"\n'
    )
    capsys.readouterr()
    assert main(["compare", str(old), str(new), "--format", "json"]) == 0
    report = json.loads(capsys.readouterr().out)
    assert report["new"]["deviations"] == str(tmp_path / "new.deviations.toml")
    failed = [one["new"] for one in report["verdicts"] if one["new"] and one["new"]["outcome"] == "fail"]
    assert failed
    assert all(one["accepted"] for one in failed)
    assert main(["compare", str(new), str(old)]) == 0


def test_a_rule_that_one_revision_switches_off_is_told(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (tmp_path / "a").mkdir()
    shutil.copy(SOUND, tmp_path / "a" / "fan.cir")
    (tmp_path / "a" / "pwmlint.toml").write_text('[levels]\n"supply.range" = "off"\n')
    assert main(["compare", str(SOUND), str(tmp_path / "a" / "fan.cir")]) == 0
    assert "switched off in the new revision only: supply.range" in capsys.readouterr().out


def test_several_reports_of_one_run(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    data, text = tmp_path / "compare.json", tmp_path / "compare.md"
    outputs = ["--format", "json", "--output", str(data), "--output", str(text), "--format", "markdown"]
    assert main(["compare", str(SOUND), str(FAULTY), *outputs]) == 1
    assert json.loads(data.read_text())["schema"] == 1
    assert text.read_text(encoding="utf-8").startswith("### pwmlint")
    assert capsys.readouterr().out == ""


def test_standard_input(monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]) -> None:
    monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.BytesIO(SOUND.read_bytes())))
    assert main(["compare", str(SOUND), "-", "--gate", "never"]) == 0
    assert "new         <standard input>" in capsys.readouterr().out


@pytest.mark.parametrize("missing", [0, 1])
def test_what_cannot_be_read(missing: int, capsys: pytest.CaptureFixture[str]) -> None:
    names = [str(SOUND), str(SOUND)]
    names[missing] = "lost\x1b[31m.cir"
    assert main(["compare", *names]) == 2
    streams = capsys.readouterr()
    assert streams.out == ""
    assert streams.err.startswith(r"lost\x1b[31m.cir: there is no such file")


def test_a_report_that_cannot_be_written(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    lost, kept = tmp_path / "no" / "folder.json", tmp_path / "kept.json"
    outputs = ["--output", str(lost), "--output", str(kept)]
    assert main(["compare", str(SOUND), str(SOUND), *outputs]) == 2
    assert str(lost) in capsys.readouterr().err
    assert kept.exists()


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        ([], "required"),
        (["a.cir"], "required"),
        (["-", "-"], "once"),
        (["a.cir", "b.cir", "--format", "sarif"], "choose from"),
        (["a.cir", "b.cir", "--gate", "always"], "choose from"),
        (["a.cir", "b.cir", "--format", "json", "--format", "text"], "go to standard output"),
    ],
)
def test_wrong_usage(arguments: Sequence[str], message: str, capsys: pytest.CaptureFixture[str]) -> None:
    with pytest.raises(SystemExit) as stop:
        main(["compare", *arguments])
    assert stop.value.code == 2
    assert message in capsys.readouterr().err


def test_a_report_never_overwrites_what_is_compared(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(tmp_path)
    for name in ("old.cir", "new.cir"):
        Path(name).write_text("precious")
        with pytest.raises(SystemExit):
            main(["compare", "old.cir", "new.cir", "--output", f"./{name}"])
        assert "overwrite" in capsys.readouterr().err
    assert {path.read_text() for path in tmp_path.iterdir()} == {"precious"}


def test_the_same_bytes_whatever_the_order_of_sets(tmp_path: Path) -> None:
    forms = ("json", "text", "markdown")
    reports: set[tuple[bytes, ...]] = set()
    for seed in ("1", "2"):
        paths = [tmp_path / f"{seed}.{form}" for form in forms]
        outputs = [
            word
            for form, path in zip(forms, paths, strict=True)
            for word in ("--format", form, "--output", path)
        ]
        done = subprocess.run(
            [sys.executable, "-m", "pwmlint.lint", "compare", SOUND, FAULTY, *outputs],
            env={**os.environ, "PYTHONHASHSEED": seed},
            capture_output=True,
            check=False,
        )
        assert done.returncode == 1, done.stderr
        reports.add(tuple(path.read_bytes() for path in paths))
    assert len(reports) == 1
