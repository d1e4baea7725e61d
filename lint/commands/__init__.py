"""The commands of the command line, one module each.

A module has `add(commands)`, which tells argparse of the command and names the function that runs it. That
function takes the parsed options and returns the exit status. A new command is a module here and a line in
`COMMANDS`.
"""

from __future__ import annotations

COMMANDS = ("review", "compare", "brief", "permit", "settings", "rules", "controllers", "completion")
"""The modules of the commands, in the order in which `--help` lists them."""
