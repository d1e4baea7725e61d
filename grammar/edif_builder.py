"""From the text of an EDIF file to its forms: the LALR parser and the transformer embedded in it.

The parser builds no tree: each form is made the moment its list is closed, from what its items have become.
A method here bears the name of the rule or the terminal in edif.lark that it serves; the first item of a
rule is the token that opens the list.
"""

from __future__ import annotations

from collections.abc import Iterable
from decimal import Decimal
from functools import cache, lru_cache
from importlib import import_module
import pathlib
import re
from typing import Any, TypeVar, cast

from lark import Lark, Token, Transformer

from .edif_forms import (
    Cell,
    CellKind,
    CellRef,
    Contents,
    Design,
    Designator,
    Edif,
    GlobalRef,
    Instance,
    Joined,
    JoinedRun,
    KeywordLevel,
    Library,
    LibraryRef,
    Member,
    Net,
    Path,
    PinNumber,
    Port,
    PortList,
    PortRef,
    Property,
    Scales,
    Unit,
    Version,
    View,
    ViewKind,
)
from .edif_names import Name, identifier, integer, scaled
from .edif_runs import (
    read_instance,
    read_net,
    read_pin_number,
    read_property,
    read_quoted,
    read_rename,
    read_view_ref,
)

_Items = list[Any]
_Form = TypeVar("_Form")


def parse(text: str) -> Edif:
    """Return the forms of an EDIF text.

    Raises lark.UnexpectedInput where the text does not follow the grammar.
    """
    return cast(Edif, cast(object, _parser().parse(text)))


@cache
def _parser() -> Lark:
    """Return the parser, its lexer and loop the compiled ones where the package lark_cython is installed."""
    try:
        plugins = cast(dict[str, Any], import_module("lark_cython").plugins)
    except ImportError:
        plugins = {}
    return build_parser(plugins)


def build_parser(plugins: dict[str, Any]) -> Lark:
    """Return a new parser with the given plugins of lark; none for plain lark."""
    grammar = pathlib.Path(__file__).with_name("edif.lark").read_text(encoding="utf-8")
    return Lark(grammar, parser="lalr", start="edif", transformer=FormBuilder(), g_regex_flags=re.ASCII, _plugins=plugins)


def _of(kind: type[_Form], items: Iterable[object]) -> list[_Form]:
    return [item for item in items if isinstance(item, kind)]


def _first(kind: type[_Form], items: Iterable[object]) -> _Form | None:
    return next((item for item in items if isinstance(item, kind)), None)


def _words(items: _Items) -> tuple[str, ...]:
    return tuple(name.identifier for name in _of(Name, items))


def _sizes(items: _Items) -> tuple[int, ...]:
    """Return the integers of an array or a member behind its name."""
    return tuple(value for word in _words(items) if (value := integer(word)) is not None)


class FormBuilder(Transformer[Token, Edif]):
    """Makes the forms, innermost first."""

    # ------------------------------------------------------------------------------------------ terminals

    def ATOM(self, token: Token) -> Name:
        """A word: an identifier, an integer or a keyword that is used as a name."""
        word = identifier(token.value.rstrip())
        return Name(word, word, _start(token))

    def STRING(self, token: Token) -> str:
        """A string, decoded."""
        return read_quoted(token.value)

    def RENAME_SIMPLY(self, token: Token) -> Name:
        """`(rename identifier "text")`."""
        return read_rename(token.value, _start(token))

    def DESIGNATOR_SIMPLY(self, token: Token) -> Designator:
        """`(designator "text")`."""
        return Designator(read_quoted(token.value))

    def PROPERTY_SIMPLY(self, token: Token) -> Property:
        """A property with a string."""
        return read_property(token.value)

    def PORT_INSTANCE_SIMPLY(self, token: Token) -> PinNumber:
        """`(portInstance port (designator "number") ...)`."""
        return read_pin_number(token.value)

    def VIEW_REF_SIMPLY(self, token: Token) -> CellRef:
        """`(viewRef view (cellRef cell (libraryRef library)))`."""
        return _cell_ref(token.value)

    def PORT_REFS(self, token: Token) -> JoinedRun:
        """A run of `(portRef port (instanceRef instance))`."""
        return JoinedRun(_start(token), _start(token) + len(token.value))

    def JOINED_SIMPLY(self, token: Token) -> JoinedRun:
        """A whole `joined` form that holds such a run and nothing else."""
        return JoinedRun(_start(token), _start(token) + len(token.value))

    def NET_SIMPLY(self, token: Token) -> Net:
        """A whole net in the usual spelling."""
        name, joined = read_net(token.value, _start(token))
        return Net(name, [joined])

    def INSTANCE_SIMPLY(self, token: Token) -> Instance:
        """A whole instance in the usual spelling."""
        name, view_ref, items = read_instance(token.value, _start(token))
        return Instance(name, _cell_ref(view_ref), items)

    # -------------------------------------------------------------------------------------------- names

    def name(self, items: _Items) -> Name:
        """`(name identifier display...)`."""
        return items[1]

    def rename(self, items: _Items) -> Name:
        """`(rename identifier "text")` in another spelling than the usual one."""
        return Name(items[1].identifier, items[2], items[1].offset)

    def string_display(self, items: _Items) -> str:
        """`(stringDisplay "text" display...)`."""
        return items[1]

    def array(self, items: _Items) -> Name:
        """`(array name size...)`."""
        return items[1]._replace(sizes=_sizes(items[2:]))

    def member(self, items: _Items) -> Member:
        """`(member name index...)`: the first index, as arrays of boards have one dimension."""
        indices = _sizes(items[2:])
        return Member(items[1].identifier, indices[0] if indices else None, items[1].offset)

    # ------------------------------------------------------------------------------------ the whole file

    def edif(self, items: _Items) -> Edif:
        """The whole file."""
        return Edif(
            items[1],
            version=_first(Version, items),
            keyword_level=_first(KeywordLevel, items),
            libraries=_of(Library, items),
            designs=_of(Design, items),
        )

    def edif_version(self, items: _Items) -> Version:
        """`(edifVersion 2 0 0)`."""
        return Version(_words(items), _start(items[0]))

    def keyword_map(self, items: _Items) -> KeywordLevel | None:
        """`(keywordMap (keywordLevel 0))`."""
        return _first(KeywordLevel, items)

    def keyword_level(self, items: _Items) -> KeywordLevel:
        """`(keywordLevel 0)`."""
        return KeywordLevel(_words(items), _start(items[0]))

    def design(self, items: _Items) -> Design:
        """`(design name (cellRef ...))`."""
        return Design(items[1], _first(CellRef, items))

    def library(self, items: _Items) -> Library:
        """`(library ...)` and `(external ...)`."""
        scales = {kind: factor for scales in _of(Scales, items) for kind, factor in scales.factors.items()}
        return Library(items[1], _of(Cell, items), scales)

    def technology(self, items: _Items) -> Scales | None:
        """`(technology (numberDefinition ...))`."""
        return _first(Scales, items)

    def number_definition(self, items: _Items) -> Scales:
        """`(numberDefinition (scale ...) ...)`."""
        return Scales(
            {kind: factor for scale in _of(Scales, items) for kind, factor in scale.factors.items()}
        )

    def scale(self, items: _Items) -> Scales:
        """`(scale a b (unit kind))`: a units of the file are b units of the SI."""
        unit = _first(Unit, items)
        numbers = [number for item in items if isinstance(number := _number(item), Decimal)]
        if unit is None or len(numbers) != 2 or not numbers[0]:
            return Scales({})
        return Scales({unit.kind: numbers[1] / numbers[0]})

    # -------------------------------------------------------------------------------------------- cells

    def cell(self, items: _Items) -> Cell:
        """`(cell name (cellType ...) (view ...) ...)`."""
        kind = _first(CellKind, items)
        return Cell(items[1], kind.text if kind else "GENERIC", _of(View, items), _of(Property, items))

    def cell_type(self, items: _Items) -> CellKind:
        """`(cellType GENERIC)`."""
        return CellKind("".join(_words(items)).upper())

    def view_type(self, items: _Items) -> ViewKind:
        """`(viewType SCHEMATIC)`."""
        return ViewKind("".join(_words(items)).upper())

    def view(self, items: _Items) -> View:
        """`(view name (viewType ...) (interface ...) (contents ...))`."""
        view = _first(View, items) or View(items[1])
        kind = _first(ViewKind, items)
        view.name = items[1]
        view.kind = kind.text if kind else ""
        view.contents = _gather(items)
        view.properties += _of(Property, items)
        return view

    def interface(self, items: _Items) -> View:
        """`(interface (port ...) ...)`: a view that knows only its outside yet."""
        prefix = _first(Designator, items)
        return View(
            Name("", "", _start(items[0])),
            ports=_of(Port, items),
            joined=_joined(items),
            properties=_of(Property, items),
            prefix=prefix.text if prefix else "",
        )

    def port(self, items: _Items) -> Port:
        """`(port name (direction ...) (designator ...) ...)`."""
        designator = _first(Designator, items)
        return Port(items[1], designator.text if designator else "", _of(Property, items))

    def port_bundle(self, items: _Items) -> Port:
        """`(portBundle name (listOfPorts ...))`."""
        members = [port for ports in _of(list, items) for port in _of(Port, ports)]
        return Port(items[1], members=members)

    def list_of_ports(self, items: _Items) -> list[Port]:
        """`(listOfPorts (port ...) ...)`."""
        return _of(Port, items)

    # ----------------------------------------------------------------------------------------- contents

    def contents(self, items: _Items) -> Contents:
        """`(contents ...)`, its pages and sections included."""
        return _gather(items)

    def page(self, items: _Items) -> Contents:
        """`(page name ...)`."""
        return _gather(items)

    def section(self, items: _Items) -> Contents:
        """`(section "title" ...)`."""
        return _gather(items)

    def net_bundle(self, items: _Items) -> Contents:
        """`(netBundle name (listOfNets ...))`."""
        return _gather(items)

    def list_of_nets(self, items: _Items) -> Contents:
        """`(listOfNets (net ...) ...)`."""
        return _gather(items)

    def off_page(self, items: _Items) -> Port:
        """`(offPageConnector name ...)`."""
        return Port(items[1], properties=_of(Property, items))

    def instance(self, items: _Items) -> Instance:
        """`(instance name (viewRef ...) ...)`."""
        said = tuple(item for item in items if isinstance(item, (Property, Designator, PinNumber)))
        return Instance(items[1], _first(CellRef, items), said)

    def port_instance(self, items: _Items) -> PinNumber | None:
        """`(portInstance port ...)` with its designator anywhere or nowhere."""
        designator = _first(Designator, items)
        port = items[1].port if isinstance(items[1], PortRef) else items[1]
        return PinNumber(port.identifier, designator.text) if designator else None

    def designator(self, items: _Items) -> Designator:
        """`(designator ...)` in another spelling than the usual one."""
        return Designator("".join(_of(str, items[1:])))

    # ------------------------------------------------------------------------------------------- nets

    def net(self, items: _Items) -> Net:
        """`(net name (joined ...) ...)`; the nets inside are parts of this one."""
        net = Net(items[1], _joined(items), _of(Instance, items))
        for inner in _of(Net, items):
            net.joined += inner.joined
            net.instances += inner.instances
        return net

    def joined(self, items: _Items) -> Joined:
        """`(joined ...)` that holds more than plain references to ports."""
        return Joined(tuple(item for item in items if isinstance(item, (JoinedRun, PortRef, PortList, GlobalRef))))

    def port_list(self, items: _Items) -> PortList:
        """`(portList ...)`."""
        return PortList(tuple(item for item in items if isinstance(item, (PortRef, JoinedRun))))

    def port_ref(self, items: _Items) -> PortRef:
        """`(portRef port ...)`; a port in a bundle is known by its own name."""
        bundle, path = _first(PortRef, items), _first(Path, items)
        return PortRef(_member(items[1]), path.steps if path else bundle.path if bundle else ())

    def instance_ref(self, items: _Items) -> Path:
        """`(instanceRef instance ...)`; a reference inside says in which instance this one is."""
        outer = _first(Path, items)
        return Path((*(outer.steps if outer else ()), _member(items[1])))

    def global_port_ref(self, items: _Items) -> GlobalRef:
        """`(globalPortRef name)`."""
        return GlobalRef(_member(items[1]))

    def view_ref(self, items: _Items) -> CellRef:
        """`(viewRef view (cellRef ...))` in another spelling than the usual one."""
        cell = _first(CellRef, items)
        return cell._replace(view=items[1].identifier) if cell else CellRef("", "", items[1].identifier)

    def view_list(self, items: _Items) -> CellRef | None:
        """`(viewList ...)`: the first view is as good as the others."""
        return _first(CellRef, items)

    def cell_ref(self, items: _Items) -> CellRef:
        """`(cellRef cell (libraryRef library))`."""
        library = _first(LibraryRef, items)
        return CellRef(items[1].identifier, library.identifier if library else "", "")

    def library_ref(self, items: _Items) -> LibraryRef:
        """`(libraryRef library)`."""
        return LibraryRef(items[1].identifier)

    # ------------------------------------------------------------------------------------------- values

    def property(self, items: _Items) -> Property:
        """`(property name (string ...) ...)` and its like, with a value of any type."""
        unit = _first(Unit, items)
        values = [
            item for item in items[2:] if isinstance(item, (str, Decimal)) and not isinstance(item, Token)
        ]
        return Property(items[1].display, values[0] if values else "", unit.kind if unit else "")

    def text(self, items: _Items) -> str:
        """`(string "text" ...)`."""
        return "".join(_of(str, items[1:]))

    def TRUTH(self, token: Token) -> str:
        """`(true)` or `(false)`."""
        return "true" if "true" in token.value.lower() else "false"

    def boolean(self, items: _Items) -> str:
        """`(boolean (true))`."""
        return " ".join(_of(str, items[1:]))

    def numbers(self, items: _Items) -> str | Decimal:
        """`(integer 5)`, `(number (e 47 2))`, `(miNoMax (mnm 1 2 3))`: the number, the nominal one of three."""
        values = [_number(item) for item in items[1:] if isinstance(item, (Name, Decimal, str))]
        return values[len(values) // 2] if values else ""

    def scaled(self, items: _Items) -> str | Decimal:
        """`(e mantissa exponent)`."""
        mantissa, exponent = (*_words(items), "0", "0")[:2]
        value = scaled(mantissa, exponent)
        return f"{mantissa}e{exponent}" if value is None else value

    def unit(self, items: _Items) -> Unit:
        """`(unit RESISTANCE)`."""
        return Unit("".join(_words(items)).upper())


    def unknown(self, items: _Items) -> None:
        """A list without meaning for a netlist, and all that is in it."""


@lru_cache(maxsize=4096)
def _cell_ref(view_ref: str) -> CellRef:
    """Return what a `viewRef` refers to, which is the same text a thousand times over."""
    return read_view_ref(view_ref)


def _start(token: Token) -> int:
    """Return where a token starts; one that was read from text always knows."""
    return token.start_pos or 0


def _joined(items: _Items) -> list[JoinedRun | Joined]:
    return [item for item in items if isinstance(item, (JoinedRun, Joined))]


def _gather(items: _Items) -> Contents:
    """Return the instances, nets and off-page connectors among the items and in the forms inside."""
    gathered = Contents(_of(Instance, items), _of(Net, items), _of(Port, items))
    for inner in _of(Contents, items):
        gathered.add(inner)
    return gathered


def _member(item: Name | Member) -> Member:
    return item if isinstance(item, Member) else Member(item.identifier, None, item.offset)


def _number(item: object) -> str | Decimal:
    """Return an item of a number form as a number, as text where it is out of range."""
    if isinstance(item, Name):
        value = scaled(item.identifier, "0")
        return item.identifier if value is None else value
    return item if isinstance(item, (str, Decimal)) else ""
