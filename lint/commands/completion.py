"""`pwmlint completion`: the script that lets a shell complete commands, options and files."""

from __future__ import annotations

import argparse

from ..shells import SHELLS
from .answer import show
from .parser import Commands

_HOW = {
    "bash": "source <(pwmlint completion bash)          # in ~/.bashrc",
    "zsh": "source <(pwmlint completion zsh)           # in ~/.zshrc, after compinit",
    "fish": "pwmlint completion fish | source           # in ~/.config/fish/config.fish",
}


def add(commands: Commands) -> None:
    """Add the command to the command line."""
    parser = commands.add_parser(
        "completion",
        help="print a script that completes the command line in a shell",
        formatter_class=argparse.RawDescriptionHelpFormatter,
        epilog="\n".join(_HOW[shell] for shell in SHELLS),
    )
    parser.add_argument("shell", choices=list(SHELLS), help="the shell")
    parser.set_defaults(command=_run)


def _run(options: argparse.Namespace) -> int:
    from ..cli import command_line
    from ..completion import script
    from ..controllers import families
    from ..rule import load_rules

    words = {"ID": [one.id for one in load_rules()], "FAMILY": families()}
    return show(script(options.shell, command_line(), words))
