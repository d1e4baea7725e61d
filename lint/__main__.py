"""`python -m pwmlint.lint` and the console command `pwmlint`: the command line as a process of its own."""

from __future__ import annotations

import gc
import sys

from .cli import main

# A review makes many objects that live until its end and hardly a cycle. With the collector's usual patience
# a tenth of the time would go into looking at them, and at those of the libraries, over and over again.
_PATIENCE = (100_000, 20, 100)


def run() -> None:
    """Run the command line as a process and end it with the exit status."""
    gc.freeze()
    gc.set_threshold(*_PATIENCE)
    sys.exit(main())


if __name__ == "__main__":
    run()
