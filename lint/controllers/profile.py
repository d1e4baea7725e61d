"""What the tool knows of one controller family: its pins and the published figures, each with a source.

The knowledge itself is data: one TOML file per family beside this module. This module gives it types and
reads it. A mistake in such a file is a developer's, and is told with the file and the key.
"""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from math import isfinite
from types import MappingProxyType
from typing import cast

from ..quantity import Spread
from ..verdict import Limit

ROLES = (
    "amplifier 1 in+",
    "amplifier 1 in-",
    "amplifier 2 in+",
    "amplifier 2 in-",
    "feedback",
    "dead time",
    "timing capacitor",
    "timing resistor",
    "ground",
    "output 1 collector",
    "output 1 emitter",
    "output 2 collector",
    "output 2 emitter",
    "supply",
    "output control",
    "reference",
)

_UNITS = frozenset({"V", "A", "ohm", "F", "H", "s", "Hz", "W", "J", "degC", "K", ""})

# What drawers put into pin names for the eye only. A hyphen stays: it may be the sign of an input.
_ORNAMENT = str.maketrans({"−": "-", "–": "-"} | dict.fromkeys(" \t_./()"))


class ProfileError(Exception):
    """A profile that cannot be used: the message names the file and the key."""


def plain_name(name: str) -> str:
    """Return a pin name as it is compared: case folded, without blanks and the marks `_ . / ( )`."""
    return name.casefold().translate(_ORNAMENT)


@dataclass(frozen=True, slots=True)
class Figure:
    """One published figure, in the SI base unit named by `unit`; None where the source prints nothing.

    conditions: what the figure holds for, and how makers differ
    source:     document and page, "from memory", or "common practice, no source"
    """

    minimum: float | None
    typical: float | None
    maximum: float | None
    unit: str
    conditions: str
    source: str

    def spread(self) -> Spread:
        """Return the figure as a spread: a missing end takes the typical value, a missing typical the middle.

        Raises ValueError where a single end is all that is known.
        """
        typical = self.typical
        if typical is None:
            if self.minimum is None or self.maximum is None:
                raise ValueError("a figure with one end only has no spread; use its limit")
            typical = (self.minimum + self.maximum) / 2
        minimum = typical if self.minimum is None else self.minimum
        maximum = typical if self.maximum is None else self.maximum
        return Spread(minimum, typical, maximum, self.unit)

    def limit(self) -> Limit:
        """Return minimum and maximum as the sides of a limit; ValueError where the figure has neither."""
        return Limit(self.minimum, self.maximum, self.unit)


@dataclass(frozen=True, slots=True)
class PinDescription:
    """One pin of the family's package.

    number:       pin number of the package
    name:         the data sheet's name ("DTC")
    role:         what it does, one of `ROLES`
    aliases:      other names that libraries and makers give it
    must_connect: whether it may never hang open
    advice:       one sentence: what it must connect to
    """

    number: str
    name: str
    role: str
    aliases: tuple[str, ...]
    must_connect: bool
    advice: str


@dataclass(frozen=True, slots=True)
class DeadTimeModel:
    """One published straight line of dead time over the dead-time pin's voltage.

    Dead time, as a share of the oscillator's period, is `at_zero + per_volt * voltage`, from 0 to 1.
    """

    name: str
    at_zero: float
    per_volt: float
    source: str

    def dead_time(self, voltage: float) -> float:
        """Return the dead time at `voltage` (V) as a share of the oscillator's period, 0 to 1."""
        return min(1.0, max(0.0, self.at_zero + self.per_volt * voltage))


@dataclass(frozen=True, slots=True)
class Profile:
    """A controller family; `figures` are published, `practices` are rules of thumb and say so."""

    family: str
    title: str
    generic_numbers: tuple[str, ...]
    package_pins: int
    pins: tuple[PinDescription, ...]
    figures: Mapping[str, Figure]
    dead_time_models: tuple[DeadTimeModel, ...]
    practices: Mapping[str, Figure]

    def pin(self, role: str) -> PinDescription:
        """Return the pin with this role; KeyError names the family and the role."""
        for pin in self.pins:
            if pin.role == role:
                return pin
        raise KeyError(f"the {self.family} class has no pin for: {role}")

    def figure(self, name: str) -> Figure:
        """Return a published figure; KeyError names the family and the figure."""
        if name not in self.figures:
            raise KeyError(f"the profile of the {self.family} class has no figure {name}")
        return self.figures[name]

    def practice(self, name: str) -> Figure:
        """Return a rule of thumb; KeyError names the family and the rule."""
        if name not in self.practices:
            raise KeyError(f"the profile of the {self.family} class has no practice {name}")
        return self.practices[name]

    def limit(self, name: str) -> Limit:
        """Return a published figure's minimum and maximum as a limit."""
        return self.figure(name).limit()

    def roles_by_name(self) -> dict[str, str]:
        """Return the role of every name and alias, the names as `plain_name` gives them."""
        return {plain_name(name): pin.role for pin in self.pins for name in (pin.name, *pin.aliases)}

    def roles_by_number(self) -> dict[str, str]:
        """Return the role of every pin number of the package."""
        return {pin.number: pin.role for pin in self.pins}


def parse(text: str, file: str, variant: str | None = None) -> Profile:
    """Read a profile from the text of its TOML file.

    variant: a generic number of the family, whose own figures replace or join those of the base
    Raises ProfileError with `file` and the key for whatever is missing, unknown or contradicts itself.
    """
    try:
        top = _Table(tomllib.loads(text), file, "")
    except tomllib.TOMLDecodeError as error:
        raise ProfileError(f"{file}: {error}") from error
    profile = _profile(top, variant)
    top.done()
    _check_pins(profile, file)
    return profile


def _profile(top: _Table, variant: str | None) -> Profile:
    """Return the profile of the whole file, every variant read so that none can hide a mistake."""
    numbers = top.texts("generic-numbers")
    figures = _figures(top.table("figures"))
    for number, table in top.table("variants", optional=True).tables():
        if number not in numbers:
            raise table.error("no generic number of this family")
        own = _figures(table.table("figures"))
        table.done()
        if number == variant:
            figures |= own
    if variant is not None and variant not in numbers:
        raise top.error(f"no variant {variant}; the family's generic numbers are {', '.join(numbers)}")
    return Profile(
        family=top.text("family"),
        title=top.text("title"),
        generic_numbers=numbers,
        package_pins=int(top.number("package-pins")),
        pins=tuple(_pin(table) for table in top.rows("pins")),
        figures=MappingProxyType(figures),
        dead_time_models=tuple(_dead_time_model(table) for table in top.rows("dead-time-models")),
        practices=MappingProxyType(_figures(top.table("practices"))),
    )


def _figures(table: _Table) -> dict[str, Figure]:
    """Return the figures of one table of the file, by name."""
    return {name: _figure(entry) for name, entry in table.tables()}


def _figure(table: _Table) -> Figure:
    """Return one figure, its values in order and its unit one that the tool computes in."""
    figure = Figure(
        minimum=table.optional_number("minimum"),
        typical=table.optional_number("typical"),
        maximum=table.optional_number("maximum"),
        unit=table.text("unit", empty=True),
        conditions=table.text("conditions", empty=True),
        source=table.text("source"),
    )
    table.done()
    values = [value for value in (figure.minimum, figure.typical, figure.maximum) if value is not None]
    if not values:
        raise table.error("has none of minimum, typical, maximum")
    if values != sorted(values):
        raise table.error(f"minimum, typical, maximum out of order: {values}")
    if figure.unit not in _UNITS:
        raise table.error(f"unit {figure.unit!r} is no SI base unit of the tool")
    return figure


def _pin(table: _Table) -> PinDescription:
    """Return one pin."""
    pin = PinDescription(
        number=table.text("number"),
        name=table.text("name"),
        role=table.text("role"),
        aliases=table.texts("aliases"),
        must_connect=table.flag("must-connect"),
        advice=table.text("advice"),
    )
    table.done()
    if pin.role not in ROLES:
        raise table.error(f"unknown role {pin.role!r}")
    return pin


def _dead_time_model(table: _Table) -> DeadTimeModel:
    """Return one straight line of dead time over voltage."""
    model = DeadTimeModel(
        name=table.text("name"),
        at_zero=table.number("at-zero"),
        per_volt=table.number("per-volt"),
        source=table.text("source"),
    )
    table.done()
    return model


def _check_pins(profile: Profile, file: str) -> None:
    """Refuse pins that are not 1..N once each, a role given twice, and a name that reads as two pins."""
    numbers = [pin.number for pin in profile.pins]
    if sorted(numbers) != sorted(str(number) for number in range(1, profile.package_pins + 1)):
        raise ProfileError(f"{file}: pins: the numbers are not 1..{profile.package_pins}, once each")
    roles = [pin.role for pin in profile.pins]
    for role in roles:
        if roles.count(role) > 1:
            raise ProfileError(f"{file}: pins: two pins have the role {role!r}")
    taken: dict[str, str] = {}
    for pin in profile.pins:
        for name in (pin.name, *pin.aliases):
            other = taken.setdefault(plain_name(name), pin.number)
            if other != pin.number:
                raise ProfileError(f"{file}: pins: {name!r} reads as pin {other} and as pin {pin.number}")


class _Table:
    """One table of the file, read key by key with its type; what is left at the end was not expected."""

    def __init__(self, content: Mapping[str, object], file: str, path: str) -> None:
        self._content = dict(content)
        self._file = file
        self._path = path

    def error(self, message: str, key: str = "") -> ProfileError:
        """Return the error to raise, with the file and the key."""
        where = ".".join(part for part in (self._path, key) if part) or "top"
        return ProfileError(f"{self._file}: {where}: {message}")

    def done(self) -> None:
        """Refuse keys that nobody asked for."""
        if self._content:
            raise self.error("unknown key", sorted(self._content)[0])

    def text(self, key: str, *, empty: bool = False) -> str:
        value = self._take(key)
        if not isinstance(value, str):
            raise self.error("must be text", key)
        if not (value.strip() or empty):
            raise self.error("must not be empty", key)
        return value

    def texts(self, key: str) -> tuple[str, ...]:
        value = self._take(key)
        if not isinstance(value, list):
            raise self.error("must be a list of texts", key)
        items = tuple(item for item in cast("list[object]", value) if isinstance(item, str) and item)
        if len(items) != len(cast("list[object]", value)):
            raise self.error("must be a list of texts", key)
        return items

    def flag(self, key: str) -> bool:
        value = self._take(key)
        if not isinstance(value, bool):
            raise self.error("must be true or false", key)
        return value

    def number(self, key: str) -> float:
        value = self._take(key)
        # To Python, true is a number as well.
        if isinstance(value, bool) or not isinstance(value, int | float) or not isfinite(value):
            raise self.error("must be a finite number", key)
        return float(value)

    def optional_number(self, key: str) -> float | None:
        return self.number(key) if key in self._content else None

    def table(self, key: str, *, optional: bool = False) -> _Table:
        value = self._content.pop(key, {}) if optional else self._take(key)
        return self._inner(value, key)

    def tables(self) -> list[tuple[str, _Table]]:
        """Return every entry of this table, each a table itself."""
        names = list(self._content)
        return [(name, self._inner(self._take(name), name)) for name in names]

    def rows(self, key: str) -> list[_Table]:
        value = self._take(key)
        if not isinstance(value, list):
            raise self.error("must be a list of tables", key)
        return [self._inner(row, f"{key}[{i}]") for i, row in enumerate(cast("list[object]", value), start=1)]

    def _inner(self, value: object, key: str) -> _Table:
        if not isinstance(value, dict):
            raise self.error("must be a table", key)
        path = f"{self._path}.{key}" if self._path else key
        return _Table(cast("dict[str, object]", value), self._file, path)

    def _take(self, key: str) -> object:
        if key not in self._content:
            raise self.error("is missing", key)
        return self._content.pop(key)
