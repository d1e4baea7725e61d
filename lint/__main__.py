"""`python -m pwmlint.lint` and the console command `pwmlint`: the command line as a process of its own."""

from __future__ import annotations

import gc
import os
import sys

from .cli import main

# A review makes many objects that live until its end and hardly a cycle. With the collector's usual patience
# a tenth of the time would go into looking at them, and at those of the libraries, over and over again.
_PATIENCE = (100_000, 20, 100)


def run() -> None:
    """Run the command line as a process and end it with the exit status."""
    _open_streams()
    gc.freeze()
    gc.set_threshold(*_PATIENCE)
    sys.exit(main())


def _open_streams() -> None:
    """Put something in the place of a stream that the process was started without.

    Standard output is then one that cannot be written to: what asks for it must learn that nobody has it.
    """
    for name, mode in (("stdin", "r"), ("stdout", "r"), ("stderr", "w")):
        if getattr(sys, name) is None:
            setattr(sys, name, open(os.devnull, mode, encoding="utf-8"))  # noqa: SIM115 - for as long as we run


if __name__ == "__main__":
    run()
