"""Where a compiled grammar is kept, so that it is compiled once and not at every start.

It lies where Python keeps the compiled form of a module, under the same rules: in the `__pycache__` beside
the grammar or under PYTHONPYCACHEPREFIX, not at all where writing such files is switched off, and made anew
after the grammar, lark or Python has changed (lark sees to that). Where it cannot be written or read nothing
is lost but time.
"""

from __future__ import annotations

import sys
from importlib.util import cache_from_source
from pathlib import Path


def compiled(grammar: Path) -> str | bool:
    """Return the file for the compiled form of `grammar` as lark's option `cache` takes it; False: none."""
    if sys.dont_write_bytecode or not sys.implementation.cache_tag:
        return False
    return str(Path(cache_from_source(str(grammar))).with_suffix(".lark"))
