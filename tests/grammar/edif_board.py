"""A board of few parts round an orchard, written as EDIF 2 0 0: for the tests of single constructs."""

from __future__ import annotations

from collections.abc import Iterable

from pwmlint.grammar.edif import read_edif
from pwmlint.grammar.netlist import Netlist, Part

PARTS = """
(external PARTS (edifLevel 0) (technology (numberDefinition))
 (cell R (cellType GENERIC) (view V (viewType NETLIST) (interface (port &1) (port &2))))
 (cell AMP (cellType GENERIC) (view V (viewType NETLIST) (interface
  (port (rename IN_P "IN+") (designator "3")) (port OUT (designator "1")))))
 (cell (rename D8 "Octal (driver)") (cellType GENERIC) (view V (viewType NETLIST) (interface
  (port (array (rename D "D(7:0)") 8)) (port EN))))
 (cell JOINT (cellType TIE) (view V (viewType SCHEMATIC) (interface (port A) (port B))))
 (cell RIP (cellType RIPPER) (view V (viewType SCHEMATIC) (interface (port BUS) (port BIT))))
 (cell LINK (cellType GENERIC) (view V (viewType NETLIST) (interface (port &1) (port &2) (port &3)
  (joined (portRef &1) (portRef &3))))))
"""

R = "(viewRef V (cellRef R (libraryRef PARTS)))"
AMP = "(viewRef V (cellRef AMP (libraryRef PARTS)))"
DRIVER = "(viewRef V (cellRef D8 (libraryRef PARTS)))"


def board(
    contents: str, *, interface: str = "", more: str = "", view: str = "NETLIST", head: str = ""
) -> str:
    return f"""(edif ORCHARD (edifVersion 2 0 0) (edifLevel 0) (keywordMap (keywordLevel 0)) {head}
{PARTS}
(library MAIN (edifLevel 0) (technology (numberDefinition)) {more}
 (cell TOP (cellType GENERIC) (view V (viewType {view}) (interface {interface})
  (contents {contents}))))
(design ORCHARD (cellRef TOP (libraryRef MAIN))))"""


def read(contents: str, **parts: str) -> Netlist:
    return read_edif(board(contents, **parts), "orchard.edf")


def pins(netlist: Netlist) -> dict[str, list[str]]:
    """Return for each net what is on it, as `R1.2`."""
    parts = netlist.parts
    return {
        name: [f"{part}.{parts[part].pins[i].number or parts[part].pins[i].name}" for part, i in net.pins]
        for name, net in netlist.nets.items()
    }


def only(parts: Iterable[Part]) -> Part:
    (part,) = parts
    return part


def kinds(netlist: Netlist) -> list[str]:
    return [note.kind for note in netlist.notes]
