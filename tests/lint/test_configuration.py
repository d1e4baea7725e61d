"""What `pwmlint.toml` may say, and how it is told that it may not."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from pwmlint.lint.configuration import ConfigurationError, read_configuration
from pwmlint.lint.report.delivery import Target

Write = Callable[..., Path]

ORCHARD = """\
gate = "warning"
strict = true
worst_case = "rss"
brief = "briefs/fan.brief.toml"
parts_list = "stock.csv"
deviations = "accepted.toml"
allow_include = ["models", "briefs"]
rules = "house"

[reports]
json = "out/fan.report.json"
text = "-"

[topics]
"soft start" = "off"
ratings = "error"

[levels]
dead-time.range = "note"
"reference.bypass" = "off"
"""


@pytest.fixture
def write(tmp_path: Path) -> Write:
    """Return a function that writes the file, into a folder that holds what it may name."""
    for name in ("models", "briefs", "house", ".git"):
        (tmp_path / name).mkdir()
    for name in ("briefs/fan.brief.toml", "stock.csv", "accepted.toml", ".git/config"):
        (tmp_path / name).write_text("")

    def run(text: str) -> Path:
        path = tmp_path / "pwmlint.toml"
        path.write_text(text, encoding="utf-8")
        return path

    return run


def refused(path: Path) -> ConfigurationError:
    with pytest.raises(ConfigurationError) as caught:
        read_configuration(path)
    return caught.value


def test_a_whole_configuration(write: Write) -> None:
    path = write(ORCHARD)
    folder = path.parent
    told = read_configuration(path)
    assert told.file == str(path)
    settings = (
        told.gate,
        told.strict,
        told.worst_case,
        told.brief,
        told.parts_list,
        told.deviations,
        told.allow_include,
        told.rules,
    )
    values = [setting.value for setting in settings if setting is not None]
    assert values == [
        "warning",
        True,
        "rss",
        folder / "briefs/fan.brief.toml",
        folder / "stock.csv",
        folder / "accepted.toml",
        (folder / "models", folder / "briefs"),
        folder / "house",
    ]
    sources = [setting.source for setting in settings if setting is not None]
    assert sources == [f"{path}:{line}" for line in range(1, 9)]
    assert told.reports is not None
    assert told.reports.value == (Target("json", str(folder / "out/fan.report.json")), Target("text", "-"))
    assert told.reports.source == f"{path}:10"
    assert {topic: (found.value, found.source) for topic, found in told.topics.items()} == {
        "soft start": ("off", f"{path}:15"),
        "ratings": ("error", f"{path}:16"),
    }
    assert {rule: (found.value, found.source) for rule, found in told.levels.items()} == {
        "dead-time.range": ("note", f"{path}:19"),
        "reference.bypass": ("off", f"{path}:20"),
    }


def test_an_empty_one_tells_nothing(write: Write) -> None:
    told = read_configuration(write("# nothing yet\n"))
    assert told.gate is told.strict is told.worst_case is told.brief is told.rules is told.reports is None
    assert (told.topics, told.levels) == ({}, {})


def test_levels_may_stand_in_tables_of_their_topic(write: Write) -> None:
    told = read_configuration(write('[levels.dead-time]\nrange = "off"\n[levels.reference]\nload = "note"\n'))
    assert {rule: found.value for rule, found in told.levels.items()} == {
        "dead-time.range": "off",
        "reference.load": "note",
    }


@pytest.mark.parametrize(
    ("text", "line", "column", "message", "hint"),
    [
        ('gat = "note"', 1, 1, 'unknown key "gat"', 'did you mean "gate"?'),
        ('gate = "warnin"', 1, 8, 'unknown gate "warnin"', 'did you mean "warning"?'),
        ("gate = 3", 1, 8, '"gate" is not what belongs there', "error, warning, note or never"),
        ('strict = "yes"', 1, 10, '"strict" is not what belongs there', "without quotes"),
        ('worst_case = "monte carlo"', 1, 14, "unknown worst_case", 'did you mean "monte-carlo"?'),
        ('brief = "fan.toml"', 1, 9, 'there is no file "fan.toml" beside this file', "check the path"),
        ('brief = "briefs"', 1, 9, 'there is no file "briefs"', "check the path"),
        ('brief = ""', 1, 9, '"brief" is empty', ""),
        ('rules = "stock.csv"', 1, 9, 'there is no folder "stock.csv"', "check the path"),
        ('allow_include = "models"', 1, 17, "not what belongs there", "a list of folders"),
        ('allow_include = ["models", 1]', 1, 17, "no list of texts", "a list of folders"),
        ('allow_include = ["gone"]', 1, 17, 'there is no folder "gone"', "check the path"),
        ('[reports]\nprose = "-"', 2, 1, 'unknown key "prose" in [reports]', "text"),
        ('[reports]\njson = "a.report.json"\ntext = "a.report.json"', 3, 8, "two reports", "its own file"),
        ('[topics]\nratings = "loud"', 2, 11, 'unknown ratings "loud"', "error, warning, note or off"),
        ("[topics]\nratings = false", 2, 11, "not what belongs there", "error, warning, note or off"),
        ('topics = "off"', 1, 10, "not what belongs there", "a table [topics]"),
        ("[levels]\ndead-time.range = 1", 2, 19, "not what belongs there", "note or off"),
        ('[levels]\na.b.c = "off"', 2, 1, "not what belongs there", "note or off"),
        ('[levels]\n"a.b" = "off"\na.b = "note"', 3, 7, '"a.b" is told twice', "remove one"),
        ('gate = "note', 1, 13, "not TOML", "TOML"),
    ],
)
def test_mistakes(write: Write, text: str, line: int, column: int, message: str, hint: str) -> None:
    path = write(text)
    problem = refused(path)
    assert message in problem.message
    assert problem.place == (str(path), line, column)
    assert problem.excerpt == text.split("\n")[line - 1]
    assert hint in str(problem)


@pytest.mark.parametrize("key", ["brief", "parts_list", "deviations", "allow_include", "rules", "reports"])
@pytest.mark.parametrize(
    ("path", "reason"),
    [
        ("../report.json", "climbs out"),
        ("/tmp/report.json", "is absolute"),
        ("out/report.json", "leads out"),
        (".git/report.json", "something hidden"),
        ("C:/report.json", "a character"),
        ("\\u0000report.json", "a character"),
        ("\\u001b[31mreport.json", "a character"),
    ],
)
def test_a_path_never_leads_out(write: Write, tmp_path: Path, key: str, path: str, reason: str) -> None:
    elsewhere = tmp_path.parent / f"{tmp_path.name} elsewhere"
    elsewhere.mkdir(exist_ok=True)
    (elsewhere / "report.json").write_text("secret")
    (tmp_path / "out").symlink_to(elsewhere)
    text = {"allow_include": f'allow_include = ["{path}"]', "reports": f'reports.json = "{path}"'}
    problem = refused(write(text.get(key, f'{key} = "{path}"')))
    assert reason in problem.message
    assert "command line" in problem.remedy
    assert "secret" not in str(problem)
    assert "\x1b" not in str(problem)


@pytest.mark.parametrize(
    "output",
    ["pwmlint.toml", "stock.csv", "README.md", "house/report.py", "report", "models", "reports/x.json"],
)
def test_a_report_replaces_nothing_but_a_report(write: Write, output: str) -> None:
    problem = refused(write(f'[reports]\njson = "{output}"'))
    assert "is no name of a report" in problem.message
    assert "--output" in problem.remedy


def test_a_report_goes_through_no_link_to_another_file(write: Write, tmp_path: Path) -> None:
    (tmp_path / "report.json").symlink_to(tmp_path / "stock.csv")
    assert "is no name of a report" in refused(write('reports.json = "report.json"')).message


def test_a_report_is_no_folder(write: Write, tmp_path: Path) -> None:
    (tmp_path / "report.json").mkdir()
    assert "is there and no file" in refused(write('reports.json = "report.json"')).message


def test_every_mistake_is_shown_at_once_in_the_order_of_the_file(write: Write) -> None:
    problem = refused(write('[topics]\nx = 1\n[levels]\n"a.b" = "of"\n[report]\n'))
    assert [error.place.line for error in (problem, *problem.also)] == [2, 4, 5]


def test_a_flood_of_mistakes_ends(write: Write) -> None:
    lines = "\n".join(f'k{number} = "lowd"' for number in range(40_000))
    problem = refused(write(f"[topics]\n{lines}\n"))
    assert len(problem.also) == 19
