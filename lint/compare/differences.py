"""What tells a part of the old revision from the same part of the new one, its pins apart."""

from __future__ import annotations

from collections.abc import Iterator
from math import isclose

from ...grammar.netlist import Part
from ..circuit.parts import PartReader
from ..quantity import engineering, percent
from .comparison import Difference
from .side import Side
from .worth import plain

_RATINGS = (("power", "W"), ("voltage", "V"), ("current", "A"))
_WORDS = ("package", "dielectric")
_SAME = 1e-9
_LEAST_DIGITS, _MOST_DIGITS = 3, 9

# What the netlist says of a part under these names is compared by its meaning, not by its text.
_MEANT = frozenset(
    {
        *("tolerance", "tol", "power", "wattage", "pwr", "p", "voltage", "volt", "v", "current", "irms", "i"),
        *("package", "dielectric", "couples"),
    }
)


def differences(old: Side, one: Part, new: Side, other: Part) -> tuple[Difference, ...]:
    """Return every property that is not the same, the most telling first.

    Between formats, what only one of them tells of a part is no difference: a list seldom tells a package.
    """
    same_format = old.netlist.format == new.netlist.format
    found = [_text("kind", old.kind(one), new.kind(other)), _value(old, one, new, other, same_format)]
    if same_format:
        found.append(_text("model", one.model, other.model))
        found.append(_text("type of the model", _model_type(old, one), _model_type(new, other)))
    found += _ratings(old, one, new, other)
    found.append(_text("part number", _attribute(one, "part number"), _attribute(other, "part number")))
    found.append(_text("windings", _windings(one), _windings(other)))
    found.append(_text("fit state", _fit(one), _fit(other)))
    if same_format and one.element and other.element:
        found += _parameters(one, other)
    told = (difference for difference in found if difference is not None)
    return tuple(one for one in told if same_format or one.what == "value" or (one.old and one.new))


def _text(what: str, old: str, new: str) -> Difference | None:
    return Difference(what, old, new) if _spelt(old) != _spelt(new) else None


def _spelt(text: str) -> str:
    return " ".join(text.split()).casefold()


def _number(what: str, old: float | None, new: float | None, unit: str) -> Difference | None:
    """Return a difference of two numbers, with as many digits as it takes to show it."""
    if old == new or (old is not None and new is not None and isclose(old, new, rel_tol=_SAME)):
        return None
    digits = max(_digits(value) for value in (old, new) if value is not None)
    was, now = ("" if value is None else engineering(value, unit, digits) for value in (old, new))
    return Difference(what, was, now, old, new, unit)


def _value(old: Side, one: Part, new: Side, other: Part, same_format: bool) -> Difference | None:
    was, now = old.reader.written(one), new.reader.written(other)
    if was is not None and now is not None:
        return _number("value", was.number, now.number, now.unit)
    if not same_format and was is None and now is None:
        # One format names a model where the other has a value: a name in common is enough.
        names, there = _names(old, one), _names(new, other)
        if names & there or not names or not there:
            return None
        return Difference("type", one.value or one.model, other.value or other.model)
    return _text("value", value_text(old, one), value_text(new, other))


def value_text(side: Side, part: Part) -> str:
    """Return the value of a part as a reader sees it: in engineering notation, else as written."""
    value = side.reader.written(part)
    return part.value if value is None else engineering(value.number, value.unit, _digits(value.number))


def _digits(number: float) -> int:
    """Return how many digits a value needs: 4.99 has three, 38.25 four."""
    written = f"{abs(number):.{_MOST_DIGITS - 1}e}".partition("e")[0].replace(".", "").rstrip("0")
    return max(_LEAST_DIGITS, len(written))


def _names(side: Side, part: Part) -> set[str]:
    """Return what the type of a part is called in netlist and parts list."""
    row = side.design.parts_list.rows.get(part.reference) if side.design.parts_list is not None else None
    return {plain(text) for text in (part.value, part.model, row.value if row is not None else "") if text}


def _model_type(side: Side, part: Part) -> str:
    return side.netlist.models.get(part.model.casefold(), "")


def _ratings(old: Side, one: Part, new: Side, other: Part) -> Iterator[Difference | None]:
    """Yield the differences of tolerance and ratings, by netlist or parts list alike."""
    was, now = _tolerance(old.reader, one), _tolerance(new.reader, other)
    if was != now:
        yield Difference(
            "tolerance", _tolerance_text(was), _tolerance_text(now), _larger_side(was), _larger_side(now)
        )
    for name, unit in _RATINGS:
        yield _number(name, _rating(old.reader, one, name), _rating(new.reader, other, name), unit)
    for name in _WORDS:
        yield _text(name, old.reader.attribute(one, name), new.reader.attribute(other, name))
    yield _number("temperature coefficient", _drift(old, one), _drift(new, other), "ppm/K")


def _rating(reader: PartReader, part: Part, name: str) -> float | None:
    found = reader.rating(part, name)
    return found.value if found is not None else None


def _tolerance(reader: PartReader, part: Part) -> tuple[float, float] | None:
    """Return the tolerance that somebody told, None where it would be assumed."""
    value = reader.value(part)
    if value is None or not value.tolerance.told:
        return None
    return round(value.tolerance.minus, _MOST_DIGITS), round(value.tolerance.plus, _MOST_DIGITS)


def _tolerance_text(tolerance: tuple[float, float] | None) -> str:
    if tolerance is None:
        return ""
    minus, plus = tolerance
    return f"±{percent(plus)}" if minus == -plus else f"{percent(minus)} .. +{percent(plus)}"


def _larger_side(tolerance: tuple[float, float] | None) -> float | None:
    return None if tolerance is None else max(abs(side) for side in tolerance)


def _drift(side: Side, part: Part) -> float | None:
    row = side.design.parts_list.rows.get(part.reference) if side.design.parts_list is not None else None
    return row.temperature_coefficient if row is not None else None


def _windings(part: Part) -> str:
    return " ".join(sorted(part.attributes.get("couples", "").casefold().split()))


def _fit(part: Part) -> str:
    return "fitted" if part.fitted else "not fitted"


def _parameters(one: Part, other: Part) -> Iterator[Difference | None]:
    """Yield the parameters of a SPICE element, such as the width of a transistor, that are not the same."""
    for name in dict.fromkeys((*one.attributes, *other.attributes)):
        if name not in _MEANT:
            yield _text(name, one.attributes.get(name, ""), other.attributes.get(name, ""))


def _attribute(part: Part, name: str) -> str:
    return part.attributes.get(name, "")
