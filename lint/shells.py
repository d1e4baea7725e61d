"""Completion scripts in the languages of shells: bash, zsh, fish."""

from __future__ import annotations

import re
import shlex
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Argument:
    """An option, or what stands on the command line without one.

    flags:   as typed, such as "--gate"; empty for what stands without
    wants:   "nothing", "word" (one of `words`), "file", "folder" or "text" (which nobody can complete)
    name:    of the value, as help spells it
    says:    what help says of it
    """

    flags: tuple[str, ...]
    wants: str
    name: str
    says: str
    words: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Command:
    """One command: its name, what help says of it, and its arguments. The program itself has no name."""

    name: str
    says: str
    arguments: tuple[Argument, ...]

    @property
    def options(self) -> tuple[Argument, ...]:
        """Return the arguments that have flags."""
        return tuple(one for one in self.arguments if one.flags)

    @property
    def plain(self) -> tuple[Argument, ...]:
        """Return the arguments that have none."""
        return tuple(one for one in self.arguments if not one.flags)


# bash


def write_bash(program: str, commands: Sequence[Command]) -> Iterator[str]:
    """Yield the script for bash, from version 3.2 on."""
    function = _function(program)
    names = [command.name for command in commands if command.name]
    yield f"# Completion of {program} in bash: source this file."
    yield f"{function}() {{"
    yield from _BASH_BEFORE
    for command in commands:
        for one in command.options:
            if one.wants != "nothing":
                patterns = "|".join(shlex.quote(f"{command.name} {flag}") for flag in one.flags)
                yield f"        {patterns}) {_bash_offer(one)} ;;"
        flags = [flag for one in command.options for flag in one.flags]
        plain = [_bash_offer(one) for one in command.plain] or [_bash_words(() if command.name else names)]
        yield f"        {shlex.quote(f'{command.name} ')}*)"
        yield f"            {_bash_words(flags)}"
        yield f"            [[ $current == -* ]] || {{ {'; '.join(plain)}; }} ;;"
    yield from _BASH_AFTER
    yield f"complete -F {function} {shlex.quote(program)}"


# No word passes through an expansion: what is in it is offered as it is. Files are left to bash, which
# quotes their names.
_BASH_BEFORE = """\
    local current=${COMP_WORDS[COMP_CWORD]} previous=${COMP_WORDS[COMP_CWORD - 1]} command= word
    local -a words=() of=()
    # In --option=value the sign is a word of its own.
    if [[ $current == = ]]; then
        current=
    elif [[ $previous == = ]]; then
        previous=${COMP_WORDS[COMP_CWORD - 2]}
    fi
    for word in "${COMP_WORDS[@]:1:COMP_CWORD - 1}"; do
        if [[ $word != -* ]]; then command=$word; break; fi
    done
    COMPREPLY=()
    case "$command $previous" in""".splitlines()

_BASH_AFTER = """\
    esac
    for word in "${words[@]}"; do
        if [[ $word == "$current"* ]]; then COMPREPLY+=("$word"); fi
    done
    if (( ${#of[@]} )); then
        compopt -o filenames 2>/dev/null
        while IFS= read -r word; do COMPREPLY+=("$word"); done < <(compgen "${of[@]}" -- "$current")
    fi
}""".splitlines()


def _bash_offer(one: Argument) -> str:
    of = {"file": " of=(-f)", "folder": " of=(-d)"}
    return _bash_words(one.words) + of.get(one.wants, "")


def _bash_words(words: Sequence[str]) -> str:
    return f"words=({' '.join(map(shlex.quote, words))})"


# zsh


def write_zsh(program: str, commands: Sequence[Command]) -> Iterator[str]:
    """Yield the script for zsh, after its own completion system has been set up."""
    function = _function(program)
    named = [command for command in commands if command.name]
    yield f"#compdef {program}"
    yield f"# Completion of {program} in zsh: source this file, or put it on the fpath as {function}."
    yield f"{function}() {{"
    yield "    local -a commands"
    yield "    commands=("
    for command in named:
        yield f"        {shlex.quote(_escaped(command.name, ':') + ':' + command.says)}"
    yield "    )"
    yield "    if (( CURRENT == 2 )) && [[ $words[2] != -* ]]; then"
    yield "        _describe command commands"
    yield "        return"
    yield "    fi"
    yield "    local command=$words[2]"
    yield "    case $command in"
    for command in named:
        yield f"        {shlex.quote(command.name)})"
        yield "            shift words; (( CURRENT-- ))"
        yield from _zsh_arguments(command, " " * 12)
        yield "            ;;"
    yield "        -*)"
    yield from _zsh_arguments(commands[0], " " * 12)
    yield "            ;;"
    yield "    esac"
    yield "}"
    yield f'if [[ $funcstack[1] == {function} ]]; then {function} "$@"; else compdef {function} {program}; fi'


def _zsh_arguments(command: Command, margin: str) -> Iterator[str]:
    found = [shlex.quote(each) for one in command.arguments for each in _zsh_specifications(one)]
    yield f" \\\n{margin}    ".join([f"{margin}_arguments", *found])


def _zsh_specifications(one: Argument) -> Iterator[str]:
    """Yield an argument as `_arguments` reads it; each may be repeated."""
    offers = {"file": "_files", "folder": "_files -/", "text": " "}
    says, offer = _escaped(one.says, r"[]\[:\\]"), offers.get(one.wants, f"({_listed(one.words)})")
    for flag in one.flags:
        value = f":{_escaped(flag.lstrip('-'), ':')}:{offer}"
        yield f"*{flag}[{says}]" if one.wants == "nothing" else f"*{flag}=[{says}]{value}"
    if not one.flags:
        yield f"*:{_escaped(one.name.lower(), ':')}:{offer}"


def _listed(words: Sequence[str]) -> str:
    """Return words as one text from which zsh and fish read a list."""
    return " ".join(_escaped(word, r"[^\w.-]") for word in words)


def _escaped(text: str, special: str) -> str:
    """Return `text` with a backslash before each character that matches the pattern `special`."""
    return re.sub(f"({special})", r"\\\1", text)


# fish


def write_fish(program: str, commands: Sequence[Command]) -> Iterator[str]:
    """Yield the script for fish."""
    yield f"# Completion of {program} in fish: source this file, or put it into the folder of completions."
    yield f"complete -c {program} -f"
    for command in commands:
        seen = f"__fish_seen_subcommand_from {command.name}" if command.name else "__fish_use_subcommand"
        before = f"complete -c {program} -n {_fish_quoted(seen)}"
        if command.name:
            yield (
                f"complete -c {program} -n __fish_use_subcommand -a {_fish_quoted(command.name)} "
                f"-d {_fish_quoted(command.says)}"
            )
        for one in command.arguments:
            flags = [f"-{'l' if flag.startswith('--') else 's'} {flag.lstrip('-')}" for flag in one.flags]
            says = [f"-d {_fish_quoted(one.says)}"] if one.flags else []
            yield " ".join([before, *flags, *_fish_offer(one), *says])


def _fish_offer(one: Argument) -> list[str]:
    needs_value = ["-r"] if one.flags else []
    if one.wants == "file":
        return [*needs_value, "-F"]
    if one.wants == "folder":
        return [*needs_value, "-f", "-a", _fish_quoted("(__fish_complete_directories)")]
    if one.wants == "word":
        return [*needs_value, "-f", "-a", _fish_quoted(_listed(one.words))]
    return [*needs_value, "-f"] if one.wants == "text" else []


def _fish_quoted(text: str) -> str:
    return "'" + _escaped(text, r"[\\']") + "'"


def _function(program: str) -> str:
    return "_" + re.sub(r"\W", "_", program)


SHELLS: Mapping[str, Callable[[str, Sequence[Command]], Iterator[str]]] = {
    "bash": write_bash,
    "zsh": write_zsh,
    "fish": write_fish,
}
"""The shells that there is a script for, each with what writes it."""
