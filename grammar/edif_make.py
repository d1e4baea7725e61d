"""Makes a form of EDIF from its items: one short function for each keyword that a netlist needs.

A function gets the items behind the keyword, already made; with the keywords that demand a name, the name is
the first of them. Items of a kind that it has no use for are left out, wherever they come from.
"""

from __future__ import annotations

from collections.abc import Callable
from types import MappingProxyType

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
    PortGroup,
    PortList,
    PortRef,
    Property,
    Version,
    View,
    ViewKind,
    merged,
)
from .edif_names import Name
from .edif_values import (
    Items,
    designator,
    false,
    first_of,
    numbers,
    of_kind,
    property_form,
    scale,
    scaled_number,
    scales,
    text,
    true,
    unit,
    words,
)


def _offset(items: Items) -> int:
    return next((name.offset for name in of_kind(Name, items)), 0)


def _joined(items: Items) -> list[JoinedRun | Joined]:
    return [item for item in items if isinstance(item, (JoinedRun, Joined))]


# ---------------------------------------------------------------------------------------------- the file


def edif(items: Items) -> Edif:
    """`(edif name (edifVersion 2 0 0) ... (library ...) (design ...))`."""
    return Edif(
        items[0],
        version=first_of(Version, items),
        keyword_level=first_of(KeywordLevel, items),
        libraries=of_kind(Library, items),
        designs=of_kind(Design, items),
    )


def _version(items: Items) -> Version:
    return Version(words(items), _offset(items))


def _keyword_level(items: Items) -> KeywordLevel:
    return KeywordLevel(words(items), _offset(items))


def _keyword_map(items: Items) -> KeywordLevel | None:
    return first_of(KeywordLevel, items)


def _design(items: Items) -> Design:
    return Design(items[0], first_of(CellRef, items))


def _library(items: Items) -> Library:
    return Library(items[0], of_kind(Cell, items), scales(items).factors)


# ----------------------------------------------------------------------------------------------- cells


def _cell(items: Items) -> Cell:
    kind = first_of(CellKind, items)
    return Cell(items[0], kind.text if kind else "GENERIC", of_kind(View, items), of_kind(Property, items))


def _cell_type(items: Items) -> CellKind:
    return CellKind("".join(words(items)).upper())


def _view(items: Items) -> View:
    """A view: what its interface has told of it, and what it contains."""
    view = first_of(View, items) or View(items[0])
    kind = first_of(ViewKind, items)
    view.name = items[0]
    view.kind = kind.text if kind else ""
    contents = _contents(items)
    view.contents = contents if contents.instances or contents.nets else None
    view.properties = (*view.properties, *of_kind(Property, items))
    return view


def _view_type(items: Items) -> ViewKind:
    return ViewKind("".join(words(items)).upper())


def _interface(items: Items) -> View:
    """A view of which only the outside is known yet."""
    prefix = first_of(Designator, items)
    return View(
        Name("", "", 0),
        ports=of_kind(Port, items),
        joined=_joined(items),
        properties=of_kind(Property, items),
        prefix=prefix.text if prefix else "",
    )


def _port(items: Items) -> Port:
    designator = first_of(Designator, items)
    return Port(items[0], designator.text.strip() if designator else "", of_kind(Property, items))


def _port_bundle(items: Items) -> Port:
    return Port(items[0], members=[port for group in of_kind(PortGroup, items) for port in group.ports])


def _list_of_ports(items: Items) -> PortGroup:
    return PortGroup(of_kind(Port, items))


# -------------------------------------------------------------------------------------------- contents


def _contents(items: Items) -> Contents:
    """The instances, nets and off-page connectors among the items, and those of pages, sections, bundles."""
    gathered = Contents(of_kind(Instance, items), of_kind(Net, items), of_kind(Port, items))
    for inner in of_kind(Contents, items):
        gathered.add(inner)
    return gathered


def _instance(items: Items) -> Instance:
    said = tuple(item for item in items if isinstance(item, (Property, Designator, PinNumber)))
    return Instance(items[0], first_of(CellRef, items), said)


def _port_instance(items: Items) -> PinNumber | None:
    port, designator = first_of(PortRef, items), first_of(Designator, items)
    name = port.port if port else first_of(Name, items)
    return PinNumber(name.identifier, designator.text) if name and designator else None


def _net(items: Items) -> Net:
    """A net; the nets inside are parts of this one."""
    net = Net(items[0], _joined(items), of_kind(Instance, items))
    for inner in of_kind(Net, items):
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
    return PortList(tuple(of_kind(PortRef, items)))


def _port_ref(items: Items) -> PortRef:
    """`(portRef port (instanceRef ...))`; a port in a bundle is known by its own name."""
    bundle, path = first_of(PortRef, items), first_of(Path, items)
    return PortRef(_member(items[0]), path.steps if path else bundle.path if bundle else ())


def _instance_ref(items: Items) -> Path:
    """`(instanceRef instance ...)`; a reference inside says in which instance this one is."""
    path = first_of(Path, items) or Path([])
    path.steps.append(_member(items[0]))
    return path


def _global_port_ref(items: Items) -> GlobalRef:
    return GlobalRef(_member(items[0]))


def _view_ref(items: Items) -> CellRef:
    cell = first_of(CellRef, items)
    return cell._replace(view=items[0].identifier) if cell else CellRef("", "", items[0].identifier)


def _view_list(items: Items) -> CellRef | None:
    """`(viewList ...)`: the first view is as good as the others."""
    return first_of(CellRef, items)


def _cell_ref(items: Items) -> CellRef:
    library = first_of(LibraryRef, items)
    return CellRef(items[0].identifier, library.identifier if library else "", "")


def _library_ref(items: Items) -> LibraryRef:
    return LibraryRef(items[0].identifier)


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
        "property": property_form,
        "parameter": property_form,
        "parameterassign": property_form,
    }
)
PLAIN_FORMS: MappingProxyType[str, Callable[[Items], object]] = MappingProxyType(
    {
        "edifversion": _version,
        "keywordmap": _keyword_map,
        "keywordlevel": _keyword_level,
        "technology": scales,
        "numberdefinition": scales,
        "scale": scale,
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
        "designator": designator,
        "string": text,
        "boolean": text,
        "true": true,
        "false": false,
        "integer": numbers,
        "number": numbers,
        "minomax": numbers,
        "mnm": numbers,
        "e": scaled_number,
        "unit": unit,
    }
)
