"""What ngspice, an open simulator, says of a network."""

from __future__ import annotations

import re
import shutil
import subprocess
from collections.abc import Iterator, Mapping
from pathlib import Path

from .networks import Case, Loop

NGSPICE = shutil.which("ngspice")

# ngspice has no nullor; its loops close through a source of this gain.
GAIN = 1e10

TIGHT = ".options gmin=1e-18 reltol=1e-9 abstol=1e-18 vntol=1e-15"

_PRINTED = re.compile(r"^([vi]\(\w+\)) = ([-+.\deE]+)\s*$", re.MULTILINE)


def simulated(case: Case, folder: Path, nets: list[str]) -> dict[str, float]:
    """Return the potentials of `nets`, and the loops' currents as load0, load1 ..., by ngspice."""
    assert NGSPICE is not None
    cards = [card for line in case.lines.strip().splitlines() for card in _cards(line, case.travel)]
    asked = [f"v({net})" for net in nets]
    for position, loop in enumerate(case.loops):
        cards.append(_closing(position, loop))
        if not isinstance(loop.free, str):
            cards.append(f"Vload{position} {loop.free[0]} probe{position} 0")
            asked.append(f"i(vload{position})")
    script = ["set numdgt=15", "op", *(f"print {quantity}" for quantity in asked)]
    deck = folder / "orchard.cir"
    lines = [f"* {case.name}", *cards, TIGHT, ".control", *script, ".endc", ".end", ""]
    deck.write_text("\n".join(lines), encoding="utf-8")
    command = [NGSPICE, "-b", deck.name]
    printed = subprocess.run(command, cwd=folder, capture_output=True, text=True, timeout=60)
    found = {m[1].lower(): float(m[2]) for m in _PRINTED.finditer(printed.stdout)}
    assert len(found) == len(asked), printed.stdout + printed.stderr
    answers = {net: found[f"v({net.lower()})"] for net in nets}
    return answers | {m[1]: found[name] for name in found if (m := re.fullmatch(r"i\(v(load\d+)\)", name))}


def _cards(line: str, travel: Mapping[str, float]) -> Iterator[str]:
    """Yield a line as ngspice takes it: it has no trimmers, and takes 1 mohm for a resistor of none."""
    name, *words = line.split()
    if name.startswith("RV"):
        top, wiper, bottom, value = words
        share = travel[name]
        yield from _resistor(f"R{name}a", top, wiper, f"{{{value}*{1 - share!r}}}", none=share == 1)
        yield from _resistor(f"R{name}b", wiper, bottom, f"{{{value}*{share!r}}}", none=share == 0)
    elif name.startswith("R"):
        a, b, value = words
        yield from _resistor(name, a, b, value, none=value == "0")
    else:
        yield line


def _resistor(name: str, a: str, b: str, value: str, *, none: bool) -> Iterator[str]:
    if a != b:
        yield f"V{name} {a} {b} 0" if none else f"{name} {a} {b} {value}"


def _closing(position: int, loop: Loop) -> str:
    """Return the high-gain source that closes a loop: its sign does not matter to direct current."""
    if isinstance(loop.free, str):
        return f"Eloop{position} {loop.free} 0 {loop.plus} {loop.minus} {GAIN:g}"
    return f"Gloop{position} probe{position} {loop.free[1]} {loop.plus} {loop.minus} {GAIN:g}"
