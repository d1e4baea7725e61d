"""A board as a SPICE-style list or as EDIF 2 0 0, and its brief and parts list as their files hold them."""

from __future__ import annotations

import csv
import io
import re
from collections.abc import Iterable, Mapping

from .board import COLUMNS, GROUND, SYMBOLS, Board, Part

_CONTROLLER = "494"

# ------------------------------------------------------------------------------------ SPICE-style list

_MODELS = {"diode": "D", "NMOS": "NMOS", "PMOS": "PMOS", "NPN": "NPN", "PNP": "PNP"}
_SUBCIRCUITS = (
    *("dual-diode", "transformer", "half-bridge-transformer", "drive-transformer"),
    *("half-bridge-driver", "controller"),
)


def spice(board: Board) -> str:
    """Return the board as a list: models for semiconductors, subcircuits for what has none."""
    lines = [board.name, *(_card(part) for part in board.parts)]
    kinds = {_model(part): _MODELS[part.symbol] for part in board.parts if part.symbol in _MODELS}
    lines += [f".model {name} {kind}" for name, kind in kinds.items()]
    ports = " ".join(pin.replace(" ", "") for pin in SYMBOLS["controller"])
    lines += [f".subckt {_CONTROLLER} {ports}", ".ends", ".end"]
    return "\n".join(lines) + "\n"


def _card(part: Part) -> str:
    nets = ["0" if net == GROUND else net for net in part.nets]
    if part.symbol in ("NMOS", "PMOS"):
        nets.append(nets[-1])  # the bulk, on the source
    name = f"X{part.reference}" if part.symbol in _SUBCIRCUITS else part.reference
    named = part.symbol in _MODELS or part.symbol in _SUBCIRCUITS
    text = _model(part) if named else part.value.replace("M", "MEG")  # M alone is milli in a list
    return f"{name} {' '.join(nets)} {text}".rstrip()


def _model(part: Part) -> str:
    """Return a part's value as one word, for it names a model."""
    return re.sub(r"\W", "", part.value) or part.symbol.replace("-", "")


# -------------------------------------------------------------------------------------------- EDIF


def edif(board: Board) -> str:
    """Return the board as EDIF, netlist view: a library of symbols and one cell of instances and nets."""
    symbols = dict.fromkeys(part.symbol for part in board.parts)
    instances = {part.reference: f"I{number}" for number, part in enumerate(board.parts, 1)}
    lines = [
        f'(edif (rename BOARD "{board.name}") (edifVersion 2 0 0) (edifLevel 0)',
        " (keywordMap (keywordLevel 0))",
        " (library SYMBOLS (edifLevel 0) (technology (numberDefinition))",
        *(_cell(symbol) for symbol in symbols),
        " )",
        " (library DESIGN (edifLevel 0) (technology (numberDefinition))",
        "  (cell TOP (cellType GENERIC) (view NET (viewType NETLIST) (interface) (contents",
        *(_instance(part, instances[part.reference]) for part in board.parts),
        *_nets(board.parts, instances),
        "  ))))",
        " (design BOARD (cellRef TOP (libraryRef DESIGN))))",
    ]
    return "\n".join(lines) + "\n"


def _cell(symbol: str) -> str:
    pins = enumerate(SYMBOLS[symbol], 1)
    ports = " ".join(
        f'(port (rename P{number} "{pin}") (direction INOUT) (designator "{number}"))' for number, pin in pins
    )
    head = f'(cell (rename {_identifier(symbol)} "{symbol}") (cellType GENERIC)'
    return f"  {head} (view NET (viewType NETLIST) (interface {ports})))"


def _identifier(symbol: str) -> str:
    return f"S_{symbol.replace('-', '_')}"


def _instance(part: Part, name: str) -> str:
    view = f"(viewRef NET (cellRef {_identifier(part.symbol)} (libraryRef SYMBOLS)))"
    text = f'(property VALUE (string "{part.value.replace("%", "%37%")}"))' if part.value else ""
    return f'   (instance {name} {view} (designator "{part.reference}") {text})'


def _nets(parts: Iterable[Part], instances: Mapping[str, str]) -> list[str]:
    ends: dict[str, list[str]] = {}
    for part in parts:
        for number, net in enumerate(part.nets, 1):
            reference = f"(portRef P{number} (instanceRef {instances[part.reference]}))"
            ends.setdefault(net, []).append(reference)
    return [
        f'   (net (rename N{number} "{net}") (joined {" ".join(references)}))'
        for number, (net, references) in enumerate(ends.items(), 1)
    ]


WRITERS = {"SPICE": spice, "EDIF": edif}

# ------------------------------------------------------------------------------- brief and parts list


def brief_text(board: Board) -> str:
    """Return the brief as TOML with dotted keys."""
    return "".join(f"{key} = {text}\n" for key, text in board.brief.items())


def parts_list_text(board: Board) -> str:
    """Return the parts list as CSV."""
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\n")
    headings = ["temperature coefficient" if column == "drift" else column for column in COLUMNS]
    writer.writerow(["reference designator", *headings])
    for reference, row in board.ratings.items():
        writer.writerow((reference, *(row.get(column, "") for column in COLUMNS)))
    return stream.getvalue()
