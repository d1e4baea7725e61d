"""What the completion scripts know, and what they offer where the shell itself is there to ask."""

from __future__ import annotations

import shutil
import subprocess
from collections.abc import Callable, Sequence
from pathlib import Path

import pytest
from pwmlint.lint.cli import command_line
from pwmlint.lint.commands import COMMANDS
from pwmlint.lint.commands.parser import Commands, Parser
from pwmlint.lint.completion import commands_of, script
from pwmlint.lint.shells import SHELLS

WORDS = {"ID": ["dead-time.range", "dead-time.driven", "reference.load"], "FAMILY": ["494", "594"]}
HOSTILE = ("$(touch ruined)", "a b", "it's", "*", "`touch ruined`", 'say "so"', "a;touch ruined", "[x]:\\")

Complete = Callable[..., list[str]]


def run(shell: str, program: str, folder: Path) -> str:
    """Run a program in a shell that is free of the user's own settings."""
    if shutil.which(shell) is None:
        pytest.skip(f"no {shell} is installed here")
    options = {"bash": ["--norc", "--noprofile"], "zsh": ["-f"], "fish": ["--no-config"]}[shell]
    done = subprocess.run(
        [shell, *options, "-c", program],
        cwd=folder,
        env={"PATH": "/usr/bin:/bin", "HOME": str(folder), "LC_ALL": "C.UTF-8"},
        capture_output=True,
        text=True,
        timeout=60,
    )
    assert done.returncode == 0, done.stderr
    assert done.stderr == ""
    return done.stdout


def house() -> Parser:
    """Return a command line whose words and help are as awkward as can be."""
    parser = Parser(prog="hen-house")
    parser.add_argument("--100%", action="store_true", help="it's 100 %% [of: all]\n$(touch ruined) `x` \\")
    commands = Commands(parser)
    hatch = commands.add_parser("hatch", help="eggs: 'brown' $(touch ruined)")
    hatch.add_argument("-e", "--egg", choices=HOSTILE, help="one of %(choices)s")
    hatch.add_argument("hen", choices=HOSTILE)
    commands.add_parser("sleep")
    return parser


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    for name in ("board one.cir", "board*.edf", "$(touch ruined)", "-odd"):
        (tmp_path / name).touch()
    (tmp_path / "boards").mkdir()
    return tmp_path


@pytest.fixture
def bash(folder: Path) -> Complete:
    """Return a function that gives what bash is offered for the last of some words."""

    def complete(*words: str, parser: Parser | None = None) -> list[str]:
        parser = parser or command_line()
        (folder / ".script").write_text(script("bash", parser, WORDS))
        function = "_" + parser.prog.replace("-", "_")
        (folder / ".words").write_text("\n".join([parser.prog, *words]) + "\n")
        program = (
            "source ./.script; COMP_WORDS=(); "
            'while IFS= read -r word; do COMP_WORDS+=("$word"); done < .words; '
            f"COMP_CWORD=$(( ${{#COMP_WORDS[@]}} - 1 )); {function}; "
            "complete -p >/dev/null; printf '%s\\n' \"${COMPREPLY[@]}\""
        )
        return [line for line in run("bash", program, folder).splitlines() if line]

    return complete


class TestWhatThereIs:
    def test_every_command_and_option_of_the_parser(self) -> None:
        found = {command.name: command for command in commands_of(command_line(), WORDS)}
        assert list(found) == ["", *COMMANDS]
        assert all(command.says for name, command in found.items() if name)
        flags = {flag for one in found["review"].options for flag in one.flags}
        assert {"--help", "-h", "--brief", "--format", "--gate", "--strict"} <= flags

    def test_what_each_argument_wants(self) -> None:
        found = {command.name: command for command in commands_of(command_line(), WORDS)}
        wants = {flag: one for one in found["review"].options for flag in one.flags}
        assert wants["--strict"].wants == "nothing"
        assert wants["--brief"].wants == "file"
        assert wants["--allow-include"].wants == "folder"
        assert wants["--gate"].words == ("error", "warning", "note", "never")
        assert [one.wants for one in found["review"].plain] == ["file"]
        assert [one.words for one in found["rules"].plain] == [tuple(WORDS["ID"])]

    def test_no_argument_is_left_without_an_offer(self) -> None:
        # A new name for a file or a folder belongs into lint/completion.py.
        commands = commands_of(command_line(), WORDS)
        assert not [one.name for command in commands for one in command.arguments if one.wants == "text"]

    def test_help_is_spelt_out_on_one_line(self) -> None:
        program, hatch, sleep = commands_of(house(), {})
        assert program.options[1].says == "it's 100 % [of: all] $(touch ruined) `x` \\"
        assert hatch.options[1].says.startswith("one of $(touch ruined), a b, ")
        assert (sleep.name, sleep.says) == ("sleep", "")


class TestBash:
    @pytest.mark.parametrize(
        ("words", "offered"),
        [
            ([""], list(COMMANDS)),
            (["re"], ["review"]),
            (["--v"], ["--version"]),
            (["review", "--for"], ["--format"]),
            (["review", "--format", ""], ["text", "json"]),
            (["review", "--gate", "n"], ["note", "never"]),
            (["review", "--gate", "=", "w"], ["warning"]),
            (["review", "--gate", "="], ["error", "warning", "note", "never"]),
            (["review", "x.cir", "--worst-case", "m"], ["monte-carlo"]),
            (["review", "--allow-include", ""], ["boards"]),
            (["review", "--allow-include", "=", "bo"], ["boards"]),
            (["review", "nothing"], []),
            (["rules", "dead"], ["dead-time.range", "dead-time.driven"]),
            (["controllers", ""], ["494", "594"]),
            (["completion", "z"], ["zsh"]),
            (["nonsense", ""], []),
        ],
    )
    def test_offers(self, words: Sequence[str], offered: list[str], bash: Complete) -> None:
        found = bash(*words)
        # A format may join any day.
        if words[-2:] == ["--format", ""]:
            assert set(offered) <= set(found)
        else:
            assert found == offered

    @pytest.mark.parametrize(
        "words", [["review"], ["review", "--brief"], ["brief"], ["brief", "--output", "="]]
    )
    def test_offers_files_as_they_are_called(self, words: Sequence[str], bash: Complete) -> None:
        assert sorted(bash(*words, "board")) == ["board one.cir", "board*.edf", "boards"]

    def test_offers_options_only_after_a_dash(self, bash: Complete) -> None:
        assert all(one.startswith("--") for one in bash("review", "--"))
        assert not any(one.startswith("--") for one in bash("review", ""))

    def test_no_word_is_taken_for_a_command(self, bash: Complete, folder: Path) -> None:
        assert bash("hatch", "--egg", "", parser=house()) == list(HOSTILE)
        assert bash("hatch", "-e", "a", parser=house()) == ["a b", "a;touch ruined"]
        assert bash("hatch", "it", parser=house()) == ["it's"]
        assert bash("$(touch ruined)", "", parser=house()) == []
        assert not (folder / "ruined").exists()

    def test_is_registered(self, folder: Path) -> None:
        (folder / ".script").write_text(script("bash", command_line(), WORDS))
        assert (
            run("bash", "source ./.script; complete -p pwmlint", folder) == "complete -F _pwmlint pwmlint\n"
        )


class TestZsh:
    # The completion system runs in an editor only, so its functions are stood in for by ones that print.
    STUBS = "compdef() { :; }; _arguments() { print -rl -- $@; }; _describe() { print -rl -- $commands; };"

    def offers(self, words: Sequence[str], folder: Path, parser: Parser) -> list[str]:
        (folder / ".script").write_text(script("zsh", parser, WORDS))
        function = "_" + parser.prog.replace("-", "_")
        asked = " ".join(words)
        program = f"{self.STUBS} source ./.script; words=({asked} ''); CURRENT=$#words; {function}"
        return run("zsh", program, folder).splitlines()

    def test_commands(self, folder: Path) -> None:
        found = self.offers(["pwmlint"], folder, command_line())
        assert [line.partition(":")[0] for line in found] == list(COMMANDS)

    def test_options(self, folder: Path) -> None:
        found = self.offers(["pwmlint", "review"], folder, command_line())
        assert "*--brief=[what the supply must do (TOML)]:brief:_files" in found
        assert any(line.endswith(":gate:(error warning note never)") for line in found)
        assert "*:netlist:_files" in found

    def test_awkward_words(self, folder: Path) -> None:
        found = self.offers(["hen-house", "hatch"], folder, house())
        (words,) = [line.removeprefix("*:hen:") for line in found if line.startswith("*:hen:")]
        # As zsh itself reads such a list.
        (folder / ".list").write_text(f"back={words}\n")
        assert run("zsh", "source ./.list; print -rl -- $back", folder).splitlines() == list(HOSTILE)
        assert not (folder / "ruined").exists()

    def test_is_registered(self, folder: Path) -> None:
        (folder / ".script").write_text(script("zsh", command_line(), WORDS))
        program = "autoload -Uz compinit; compinit -u -D; source ./.script; print $_comps[pwmlint]"
        assert run("zsh", program, folder) == "_pwmlint\n"


class TestFish:
    def offers(self, line: str, folder: Path, parser: Parser | None = None) -> list[str]:
        (folder / "script.fish").write_text(script("fish", parser or command_line(), WORDS))
        found = run("fish", f"source ./script.fish; complete -C '{line}'", folder)
        return [one.partition("\t")[0] for one in found.splitlines()]

    @pytest.mark.parametrize(
        ("line", "offered"),
        [
            ("pwmlint ", COMMANDS),
            ("pwmlint review --for", ["--format"]),
            ("pwmlint review --gate ", ["error", "never", "note", "warning"]),
            ("pwmlint review --allow-include bo", ["boards/"]),
            ("pwmlint rules dead", ["dead-time.driven", "dead-time.range"]),
            ("pwmlint completion z", ["zsh"]),
        ],
    )
    def test_offers(self, line: str, offered: Sequence[str], folder: Path) -> None:
        assert sorted(self.offers(line, folder)) == sorted(offered)

    def test_awkward_words(self, folder: Path) -> None:
        assert set(self.offers("hen-house hatch --egg ", folder, house())) == set(HOSTILE)
        assert not (folder / "ruined").exists()


@pytest.mark.parametrize("shell", SHELLS)
@pytest.mark.parametrize("parser", [command_line, house], ids=["ours", "awkward"])
def test_the_syntax(shell: str, parser: Callable[[], Parser], folder: Path) -> None:
    (folder / "script").write_text(script(shell, parser(), WORDS))
    assert run(shell, f"{shell} -n ./script", folder) == ""
