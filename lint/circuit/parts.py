"""What a part is and what its value is worth: kind, nominal, tolerance, ratings, and what was assumed."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any

from ...grammar.netlist import Netlist, Part
from ...grammar.values import Value, ValueTextError, read_tolerance, read_value
from ..derating import ageing_of
from ..parts_list import PartData, PartsList
from ..preferred import is_preferred
from ..quantity import Spread, percent
from .conditions import Conditions

_LETTERS = re.compile(r"[A-Za-z]+")
_THERMISTOR = re.compile(r"NTC|PTC|THERM", re.IGNORECASE)

# What the value of each kind measures, as `read_value` names it, and the unit it comes in.
_QUANTITIES = {
    "resistor": ("resistance", "ohm"),
    "trimmer": ("resistance", "ohm"),
    "capacitor": ("capacitance", "F"),
    "inductor": ("inductance", "H"),
    "voltage source": ("voltage", "V"),
    "battery": ("voltage", "V"),
    "current source": ("current", "A"),
}

# Names under which the netlist's attributes give a rating or tolerance, most explicit first.
_ATTRIBUTES = {
    "tolerance": ("tolerance", "tol"),
    "power": ("power", "wattage", "pwr", "p"),
    "voltage": ("voltage", "volt", "v"),
    "current": ("current", "irms", "i"),
    "package": ("package",),
    "dielectric": ("dielectric",),
}

_PER_MILLION = 1e-6
_NONE = {"ratio_per_kelvin": 0.0}

# A bare tolerance below this is a ratio (0.01), above it a percentage (1): nobody buys 0.05 % by accident.
_RATIO_BELOW = 0.05


@dataclass(frozen=True, slots=True)
class Tolerance:
    """How far a part may be from its value when bought, as ratios; `told` is False where it was assumed."""

    minus: float
    plus: float
    told: bool


@dataclass(frozen=True, slots=True)
class PartValue:
    """The value of a part: `spread` in its SI unit, tolerance and drift included, and what was assumed.

    tolerance: as bought, without drift
    random:    the share of the spread that varies from unit to unit; the rest is drift, the same for all
    """

    spread: Spread
    tolerance: Tolerance
    assumptions: tuple[str, ...] = ()
    random: float = 1.0


@dataclass(frozen=True, slots=True)
class Rating:
    """What a part stands, in SI units, and where that is written."""

    value: float
    source: str


class PartReader:
    """Reads kinds, values and ratings of the parts of one netlist; the parts list has the last word."""

    def __init__(self, netlist: Netlist, parts_list: PartsList | None, conditions: Conditions) -> None:
        self._netlist = netlist
        self._conditions = conditions
        self._rows: Mapping[str, PartData] = parts_list.rows if parts_list is not None else {}
        self._kinds: dict[str, str] = {}
        self._values: dict[str, PartValue | None] = {}

    def kind(self, part: Part) -> str:
        """Return the kind of part, such as "resistor"; "other" where nothing tells."""
        kind = self._kinds.get(part.reference)
        if kind is None:
            kind = self._kinds[part.reference] = part_kind(part, self._netlist.models)
        return kind

    def value(self, part: Part) -> PartValue | None:
        """Return the part's value, or None where it has none or one that cannot be read."""
        if part.reference not in self._values:
            self._values[part.reference] = self._read(part)
        return self._values[part.reference]

    def value_problem(self, part: Part) -> str:
        """Return why a part that needs a value has none, empty where it has one."""
        if self.kind(part) not in _QUANTITIES or self.value(part) is not None:
            return ""
        text = self._text(part)
        if not text:
            return f"{part.reference} has no value"
        try:
            read_value(text, _QUANTITIES[self.kind(part)][0], spice=bool(part.element))
        except ValueTextError as error:
            return f"{part.reference} has the value {text!r}, which cannot be read: {error}"
        return f"{part.reference} has no value"

    def written(self, part: Part) -> Value | None:
        """Return the value text of a part as read, with the ratings found in it; None if unreadable."""
        kind = self.kind(part)
        text = self._text(part)
        if kind not in _QUANTITIES or not text:
            return None
        try:
            return read_value(text, _QUANTITIES[kind][0], spice=bool(part.element) and bool(part.value))
        except ValueTextError:
            return None  # `value_problem` gives the reason to the rule that reports it

    def rating(self, part: Part, name: str) -> Rating | None:
        """Return a rating ("power" in W, "voltage" in V, "current" in A) and its origin, or None."""
        row = self._rows.get(part.reference)
        if row is not None and getattr(row, name) is not None:
            return Rating(getattr(row, name), f"parts list line {row.place.line}")
        quantity = {"power": "power", "voltage": "voltage", "current": "current"}[name]
        text = self.attribute(part, name)
        if text:
            try:
                return Rating(
                    read_value(text, quantity, spice=False).number, f"{part.reference} {name} {text}"
                )
            except ValueTextError:
                return None
        value = self.written(part)
        number = getattr(value, name) if value is not None else None
        return Rating(number, f"value text of {part.reference}") if number is not None else None

    def attribute(self, part: Part, name: str) -> str:
        """Return the text of an attribute under any of its usual names, empty where there is none."""
        row = self._rows.get(part.reference)
        if name in ("package", "dielectric") and row is not None and getattr(row, name):
            return str(getattr(row, name))
        for key in _ATTRIBUTES[name]:
            if part.attributes.get(key):
                return part.attributes[key]
        value = self.written(part) if name == "dielectric" else None
        return value.dielectric if value is not None else ""

    def _text(self, part: Part) -> str:
        if part.value:
            return part.value
        row = self._rows.get(part.reference)
        return row.value if row is not None else ""

    def _read(self, part: Part) -> PartValue | None:
        value = self.written(part)
        if value is None:
            return None
        unit = _QUANTITIES[self.kind(part)][1]
        tolerance = self._tolerance(part, value)
        drift, assumptions = self._drift(part)
        nominal = value.number
        ends = sorted((nominal * (1 + tolerance.minus - drift), nominal * (1 + tolerance.plus + drift)))
        if not tolerance.told and tolerance.plus:
            assumptions.insert(0, f"{part.reference}: tolerance {percent(tolerance.plus)} assumed")
        if value.ambiguous:
            assumptions.append(f"{part.reference}: {value.ambiguous}")
        width = tolerance.plus - tolerance.minus
        random = width / (width + 2 * drift) if drift else 1.0
        return PartValue(Spread(ends[0], nominal, ends[1], unit), tolerance, tuple(assumptions), random)

    def _drift(self, part: Part) -> tuple[float, list[str]]:
        """Return the drift with temperature and age as a ratio, and what was assumed for it."""
        kind, drift, assumptions = self.kind(part), 0.0, list[str]()
        row = self._rows.get(part.reference)
        told = row.temperature_coefficient if row is not None else None
        table = defaults()["temperature_coefficient"]
        key = kind if kind != "capacitor" else self.attribute(part, "dielectric").upper()
        coefficient = (
            told * _PER_MILLION if told is not None else float(table.get(key, _NONE)["ratio_per_kelvin"])
        )
        if coefficient and self._conditions.excursion:
            drift += coefficient * self._conditions.excursion
            if told is None:
                assumptions.append(f"{part.reference}: {coefficient / _PER_MILLION:g} ppm/K assumed")
        ageing = ageing_of(kind, self._conditions.policy)
        if ageing:
            drift += ageing
            assumptions.append(
                f"{part.reference}: ageing {percent(ageing)} by policy {self._conditions.policy}"
            )
        return drift, assumptions

    def _tolerance(self, part: Part, value: Value) -> Tolerance:
        """Return the tolerance by parts list, attribute or the value's own text, else a default."""
        row = self._rows.get(part.reference)
        if row is not None and row.tolerance_range is not None:
            return Tolerance(*row.tolerance_range, told=True)
        text = self.attribute(part, "tolerance")
        told = _tolerance_text(text) if text else value.tolerance
        if told is not None:
            return Tolerance(*told, told=True)
        ratio = self._default_tolerance(self.kind(part), value.number)
        return Tolerance(-ratio, ratio, told=False)

    def _default_tolerance(self, kind: str, number: float) -> float:
        if kind in ("voltage source", "current source", "battery"):
            return 0.0  # a source in the list states the value it is simulated with
        if kind == "resistor" and number <= defaults()["limits"]["link_up_to"]:
            return 0.0
        row = kind
        if (
            kind == "resistor"
            and not is_preferred(number, ("E24",))
            and is_preferred(number, ("E96", "E192"))
        ):
            row = "resistor-fine"
        if kind == "capacitor" and number >= defaults()["limits"]["electrolytic_from"]:
            row = "electrolytic"
        told = defaults()["tolerance"][row]
        return float(told.get("close", told["ratio"]) if self._conditions.close else told["ratio"])


def part_kind(part: Part, models: Mapping[str, str]) -> str:
    """Return the kind of a part, from its element letter, its model's type or its reference designator.

    models: `.model` name (casefolded) to type, as in `Netlist.models`
    """
    pins = len(part.pins)
    letters = _LETTERS.match(part.reference.rpartition("/")[2])
    prefix = letters.group().upper() if letters else ""
    kind = part_kinds()["elements"].get(part.element, "")
    if kind == "resistor" and part_kinds()["prefixes"].get(prefix) == "trimmer":
        kind = "trimmer"  # RV1 of a list is an element R; RVCC is a resistor
    if not kind:
        kind = _by_prefix(prefix)
        if prefix == "RT" and not _THERMISTOR.search(f"{part.model} {part.value}"):
            kind = "resistor"  # the timing resistor's name in the data sheets, not the thermistor's letters
    if part.element == "J" and models.get(part.model.casefold(), "") in ("njf", "pjf"):
        return "transistor"
    if kind == "resistor" and pins == 3:
        return "trimmer"
    if kind in ("resistor", "capacitor", "inductor") and pins > 2:
        return "other"
    return kind


def _by_prefix(letters: str) -> str:
    prefixes = part_kinds()["prefixes"]
    while letters:
        if letters in prefixes:
            return prefixes[letters]
        letters = letters[:-1]
    return "other"


def _tolerance_text(text: str) -> tuple[float, float] | None:
    """Return the tolerance that an attribute's text states, None where it cannot be read."""
    try:
        ratio = float(text)
    except ValueError:
        ratio = 1.0
    if 0 < ratio < _RATIO_BELOW:
        return (-ratio, ratio)
    try:
        return read_tolerance(text)
    except ValueTextError:
        return None


@cache
def part_kinds() -> dict[str, dict[str, str]]:
    """Return the tables that tell a part's kind: "prefixes" and "elements"."""
    return _load("part_kinds.toml")


@cache
def defaults() -> dict[str, Any]:
    """Return what is taken where nothing is said: the tables "tolerance" and "limits"."""
    return _load("defaults.toml")


def _load(name: str) -> dict[str, Any]:
    return tomllib.loads(files("pwmlint.lint").joinpath(name).read_text(encoding="utf-8"))
