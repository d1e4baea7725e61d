"""Pauses the garbage collector while a reader builds a netlist."""

from __future__ import annotations

import gc
from collections.abc import Generator
from contextlib import contextmanager


@contextmanager
def collector_paused() -> Generator[None]:
    """Keep the cyclic garbage collector from running inside the block.

    A reader makes some ten objects a part that all live on and form no cycles. The collector walks them again
    and again as their number grows and finds nothing, which takes as long as the reading itself.
    """
    was_enabled = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if was_enabled:
            gc.enable()
