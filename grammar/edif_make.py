"""Makes a form of EDIF from its items: one short function for each keyword that a netlist needs.

A function gets the items behind the keyword, already made; with the keywords that demand a name, the name is the
first of them. Items of a kind that it has no use for are left out, wherever they come from.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from decimal import Decimal
from types import MappingProxyType
from typing import Any, TypeVar

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
    merged,
)
from .edif_names import Name, integer, scaled

Items = Sequence[Any]
_Form = TypeVar("_Form")


def _of(kind: type[_Form], items: Iterable[object]) -> list[_Form]:
    return [item for item in items if isinstance(item, kind)]


def _first(kind: type[_Form], items: Iterable[object]) -> _Form | None:
    return next((item for item in items if isinstance(item, kind)), None)


def _words(items: Items) -> tuple[str, ...]:
    return tuple(name.identifier for name in _of(Name, items))


def _offset(items: Items) -> int:
    return next((name.offset for name in _of(Name, items)), 0)


def _joined(items: Items) -> list[JoinedRun | Joined]:
    return [item for item in items if isinstance(item, (JoinedRun, Joined))]


# ---------------------------------------------------------------------------------------------- the file


def edif(items: Items) -> Edif:
    """`(edif name (edifVersion 2 0 0) ... (library ...) (design ...))`."""
    return Edif(
        items[0],
        version=_first(Version, items),
        keyword_level=_first(KeywordLevel, items),
        libraries=_of(Library, items),
        designs=_of(Design, items),
    )


def _version(items: Items) -> Version:
    return Version(_words(items), _offset(items))


def _keyword_level(items: Items) -> KeywordLevel:
    return KeywordLevel(_words(items), _offset(items))


def _keyword_map(items: Items) -> KeywordLevel | None:
    return _first(KeywordLevel, items)


def _design(items: Items) -> Design:
    return Design(items[0], _first(CellRef, items))


def _library(items: Items) -> Library:
    return Library(items[0], _of(Cell, items), _scales(items).factors)


def _scales(items: Items) -> Scales:
    """The scales in a technology or a number definition, by the kind of unit."""
    return Scales({kind: factor for scale in _of(Scales, items) for kind, factor in scale.factors.items()})


def _scale(items: Items) -> Scales:
    """`(scale a b (unit kind))`: a units of the file are b units of the SI."""
    unit = _first(Unit, items)
    numbers = [number for item in items if isinstance(number := _number(item), Decimal)]
    if unit is None or len(numbers) != 2 or not numbers[0]:
        return Scales({})
    return Scales({unit.kind: numbers[1] / numbers[0]})


# ----------------------------------------------------------------------------------------------- cells


def _cell(items: Items) -> Cell:
    kind = _first(CellKind, items)
    return Cell(items[0], kind.text if kind else "GENERIC", _of(View, items), _of(Property, items))


def _cell_type(items: Items) -> CellKind:
    return CellKind("".join(_words(items)).upper())


def _view(items: Items) -> View:
    """A view: what its interface has told of it, and what it contains."""
    view = _first(View, items) or View(items[0])
    kind = _first(ViewKind, items)
    view.name = items[0]
    view.kind = kind.text if kind else ""
    contents = _contents(items)
    view.contents = contents if contents.instances or contents.nets else None
    view.properties = (*view.properties, *_of(Property, items))
    return view


def _view_type(items: Items) -> ViewKind:
    return ViewKind("".join(_words(items)).upper())


def _interface(items: Items) -> View:
    """A view of which only the outside is known yet."""
    prefix = _first(Designator, items)
    return View(
        Name("", "", 0),
        ports=_of(Port, items),
        joined=_joined(items),
        properties=_of(Property, items),
        prefix=prefix.text if prefix else "",
    )


def _port(items: Items) -> Port:
    designator = _first(Designator, items)
    return Port(items[0], designator.text.strip() if designator else "", _of(Property, items))


def _port_bundle(items: Items) -> Port:
    return Port(items[0], members=[port for ports in _of(list, items) for port in _of(Port, ports)])


def _list_of_ports(items: Items) -> list[Port]:
    return _of(Port, items)


# -------------------------------------------------------------------------------------------- contents


def _contents(items: Items) -> Contents:
    """The instances, nets and off-page connectors among the items, and those of pages, sections, bundles."""
    gathered = Contents(_of(Instance, items), _of(Net, items), _of(Port, items))
    for inner in _of(Contents, items):
        gathered.add(inner)
    return gathered


def _instance(items: Items) -> Instance:
    said = tuple(item for item in items if isinstance(item, (Property, Designator, PinNumber)))
    return Instance(items[0], _first(CellRef, items), said)


def _port_instance(items: Items) -> PinNumber | None:
    port, designator = _first(PortRef, items), _first(Designator, items)
    name = port.port if port else _first(Name, items)
    return PinNumber(name.identifier, designator.text) if name and designator else None


def _net(items: Items) -> Net:
    """A net; the nets inside are parts of this one."""
    net = Net(items[0], _joined(items), _of(Instance, items))
    for inner in _of(Net, items):
        net.joined = merged(net.joined, inner.joined)
        net.instances = merged(net.instances, inner.instances)
    return net


def _joined_form(items: Items) -> Joined:
    return Joined(tuple(item for item in items if isinstance(item, (PortRef, PortList, GlobalRef))))


# ------------------------------------------------------------------------------------------ references


def _member(name: Name) -> Member:
    """A reference to a name, or to the member of an array whose index is the first "size" of the name."""
    return Member(name.identifier, name.sizes[0] if name.sizes else None, name.offset)


def _port_list(items: Items) -> PortList:
    return PortList(tuple(_of(PortRef, items)))


def _port_ref(items: Items) -> PortRef:
    """`(portRef port (instanceRef ...))`; a port in a bundle is known by its own name."""
    bundle, path = _first(PortRef, items), _first(Path, items)
    return PortRef(_member(items[0]), path.steps if path else bundle.path if bundle else ())


def _instance_ref(items: Items) -> Path:
    """`(instanceRef instance ...)`; a reference inside says in which instance this one is."""
    path = _first(Path, items) or Path([])
    path.steps.append(_member(items[0]))
    return path


def _global_port_ref(items: Items) -> GlobalRef:
    return GlobalRef(_member(items[0]))


def _view_ref(items: Items) -> CellRef:
    cell = _first(CellRef, items)
    return cell._replace(view=items[0].identifier) if cell else CellRef("", "", items[0].identifier)


def _view_list(items: Items) -> CellRef | None:
    """`(viewList ...)`: the first view is as good as the others."""
    return _first(CellRef, items)


def _cell_ref(items: Items) -> CellRef:
    library = _first(LibraryRef, items)
    return CellRef(items[0].identifier, library.identifier if library else "", "")


def _library_ref(items: Items) -> LibraryRef:
    return LibraryRef(items[0].identifier)


# ---------------------------------------------------------------------------------------------- values


def _property(items: Items) -> Property:
    unit = _first(Unit, items)
    value = next((item for item in items if isinstance(item, (str, Decimal))), "")
    return Property(items[0].display, value, unit.kind if unit else "")


def _designator(items: Items) -> Designator:
    return Designator(_text(items))


def _text(items: Items) -> str:
    return "".join(_of(str, items))


def _true(_: Items) -> str:
    return "true"


def _false(_: Items) -> str:
    return "false"


def _numbers(items: Items) -> str | Decimal:
    """`(integer 5)`, `(number (e 47 2))`, `(miNoMax (mnm 1 2 3))`: the number, the nominal one of three."""
    values = [_number(item) for item in items if isinstance(item, (Name, Decimal, str))]
    return values[len(values) // 2] if values else ""


def _number(item: object) -> str | Decimal:
    """An item of a number as a number, as text where it is out of range."""
    if isinstance(item, Name):
        value = scaled(item.identifier, "0")
        return item.identifier if value is None else value
    return item if isinstance(item, (str, Decimal)) else ""


def _scaled(items: Items) -> str | Decimal:
    """`(e mantissa exponent)`."""
    mantissa, exponent = (*_words(items), "0", "0")[:2]
    value = scaled(mantissa, exponent)
    return f"{mantissa}e{exponent}" if value is None else value


def _unit(items: Items) -> Unit:
    return Unit("".join(_words(items)).upper())


def indexed(items: Items) -> Name:
    """`(array name size ...)` and `(member name index ...)`: the name with the integers behind it."""
    sizes = (integer(word) for word in _words(items[1:]))
    return items[0]._replace(sizes=tuple(size for size in sizes if size is not None))


# The makers by keyword, as the terminals NAMED and PLAIN of edif.lark list them.
NAMED_FORMS: MappingProxyType[str, Callable[[Items], object]] = MappingProxyType(
    {
        "design": _design,
        "library": _library,
        "external": _library,
        "cell": _cell,
        "view": _view,
        "port": _port,
        "portbundle": _port_bundle,
        "page": _contents,
        "offpageconnector": _port,
        "instance": _instance,
        "net": _net,
        "netbundle": _contents,
        "portref": _port_ref,
        "instanceref": _instance_ref,
        "globalportref": _global_port_ref,
        "viewref": _view_ref,
        "cellref": _cell_ref,
        "libraryref": _library_ref,
        "property": _property,
        "parameter": _property,
        "parameterassign": _property,
    }
)
PLAIN_FORMS: MappingProxyType[str, Callable[[Items], object]] = MappingProxyType(
    {
        "edifversion": _version,
        "keywordmap": _keyword_map,
        "keywordlevel": _keyword_level,
        "technology": _scales,
        "numberdefinition": _scales,
        "scale": _scale,
        "celltype": _cell_type,
        "viewtype": _view_type,
        "interface": _interface,
        "listofports": _list_of_ports,
        "contents": _contents,
        "section": _contents,
        "listofnets": _contents,
        "joined": _joined_form,
        "portlist": _port_list,
        "viewlist": _view_list,
        "portinstance": _port_instance,
        "designator": _designator,
        "string": _text,
        "boolean": _text,
        "true": _true,
        "false": _false,
        "integer": _numbers,
        "number": _numbers,
        "minomax": _numbers,
        "mnm": _numbers,
        "e": _scaled,
        "unit": _unit,
    }
)
