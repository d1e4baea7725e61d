"""The design intent, as the engineer writes it: a TOML file -> Brief.

Every quantity is a text with its unit; a range is "10 V .. 15 V". A key that we do not know is an error, not
a key without effect: a misspelt limit must not look like a limit that holds.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from types import MappingProxyType

from ..grammar.errors import NetlistError
from ..grammar.netlist import Place
from .brief_keys import (
    CIRCUITS,
    CONTROLLER_KEYS,
    DERATING_POLICIES,
    DESIGN_KEYS,
    RAIL_KEYS,
    TOPOLOGIES,
    names,
)
from .quantity import Spread
from .toml_document import Table, TomlDocument

_ABSOLUTE_ZERO = -273.15

# Beyond any board, in SI units: a slip of the pen, which would be divided by or squared later.
_HOTTEST, _HIGHEST_VOLTAGE, _LARGEST_CURRENT, _LEAST_CURRENT = 1e3, 1e7, 1e7, 1e-9
_LOWEST_FREQUENCY, _HIGHEST_FREQUENCY, _LONGEST_TIME = 1.0, 1e10, 1e7


class BriefError(NetlistError):
    """A brief that cannot be read, or that says something impossible."""


@dataclass(frozen=True, slots=True)
class Rail:
    """What the brief says of one net.

    voltage:   as given, in V, without the tolerance
    tolerance: as a fraction, 0.02 for 2 %; None where the brief has none
    load:      the current drawn from the net, in A
    circuit:   one of CIRCUITS, None where the brief does not tell
    """

    net: str
    voltage: Spread
    tolerance: float | None
    load: Spread | None
    place: Place
    circuit: str | None = None

    @property
    def band(self) -> Spread:
        """Return the voltage with its tolerance, in V."""
        share = self.tolerance or 0.0
        low, high = self.voltage.minimum, self.voltage.maximum
        return Spread(low - abs(low) * share, self.voltage.nominal, high + abs(high) * share, "V")

    @property
    def deviation(self) -> tuple[float, float] | None:
        """Return the shares of its nominal voltage by which it may fall and grow, None where none are told.

        On a negative rail the end farther below ground is the greater one.
        """
        band, nominal = self.band, self.voltage.nominal
        if nominal == 0 or band.minimum == band.maximum:
            return None
        fall, grow = sorted((band.minimum / nominal - 1, band.maximum / nominal - 1))
        return fall, grow


@dataclass(frozen=True, slots=True)
class ControllerBrief:
    """What the brief says of one controller; None where it says nothing.

    topology:            one of TOPOLOGIES
    switching_frequency: at each switch, in Hz
    dead_time, soft_start: in s; maximum_duty: a ratio; current_limit: in A
    output:              the net that is regulated
    pins:                the names of the controller's pins, in the order of the netlist's nodes
    shut_off_by_dead_time: the dead-time pin must be able to hold the outputs off
    """

    reference: str
    place: Place
    topology: str | None = None
    switching_frequency: Spread | None = None
    dead_time: Spread | None = None
    maximum_duty: Spread | None = None
    soft_start: Spread | None = None
    current_limit: Spread | None = None
    output: str | None = None
    pins: tuple[str, ...] | None = None
    shut_off_by_dead_time: bool = False


@dataclass(frozen=True, slots=True)
class Brief:
    """The whole brief: rails by net, controllers by reference designator, ambient temperature in degC."""

    file: str
    name: str
    ambient: Spread | None
    derating: str | None
    rails: Mapping[str, Rail]
    controllers: Mapping[str, ControllerBrief]


def read_brief(path: str | Path, text: str | None = None) -> Brief:
    """Read a brief; raise BriefError, with every mistake in the file, where it cannot be used.

    text: what the file holds, where that is known without opening it
    """
    document = TomlDocument(path, BriefError, text)
    root = document.root
    root.know(("design", "rails", "controllers"))
    design = root.table("design")
    design.know(names(DESIGN_KEYS))
    rails = [_rail(net, table) for net, table in root.table("rails").tables()]
    controllers = {name: _controller(name, table) for name, table in root.table("controllers").tables()}
    brief = Brief(
        file=document.file,
        name=design.text("name") or "",
        ambient=design.spread("ambient", "degC", least=_ABSOLUTE_ZERO, most=_HOTTEST),
        derating=design.choice("derating", DERATING_POLICIES),
        rails=MappingProxyType({rail.net: rail for rail in rails if rail is not None}),
        controllers=MappingProxyType(controllers),
    )
    document.finish()
    return brief


def _rail(net: str, table: Table) -> Rail | None:
    """Return a rail, or None where its voltage is missing or wrong: a mistake is then noted."""
    table.know(names(RAIL_KEYS))
    voltage = table.spread("voltage", "V", least=-_HIGHEST_VOLTAGE, most=_HIGHEST_VOLTAGE)
    tolerance = table.quantity("tolerance", "", least=0.0, most=0.99)
    load = table.spread("load", "A", least=0.0, most=_LARGEST_CURRENT)
    circuit = table.choice("circuit", CIRCUITS)
    if not table.has("voltage"):
        table.mistake("voltage", f"the rail {net} has no voltage", expected='voltage = "12 V"')
    return Rail(net, voltage, tolerance, load, table.place, circuit) if voltage is not None else None


def _controller(reference: str, table: Table) -> ControllerBrief:
    table.know(names(CONTROLLER_KEYS))
    return ControllerBrief(
        reference=reference,
        place=table.place,
        topology=table.choice("topology", TOPOLOGIES),
        switching_frequency=table.spread(
            "switching_frequency", "Hz", least=_LOWEST_FREQUENCY, most=_HIGHEST_FREQUENCY
        ),
        dead_time=table.spread("dead_time", "s", least=0.0, most=_LONGEST_TIME),
        maximum_duty=table.spread("maximum_duty", "", least=0.0, most=1.0),
        soft_start=table.spread("soft_start", "s", least=0.0, most=_LONGEST_TIME),
        current_limit=table.spread("current_limit", "A", least=_LEAST_CURRENT, most=_LARGEST_CURRENT),
        output=table.text("output"),
        pins=table.texts("pins"),
        shut_off_by_dead_time=table.flag("shut_off_by_dead_time") or False,
    )
