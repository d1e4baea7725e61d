"""Makes the values in the forms of EDIF: texts, numbers, units and scales; and the helpers to pick items."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from decimal import Decimal
from typing import Any, TypeVar

from .edif_forms import Designator, Property, Scales, Unit
from .edif_names import Name, integer, scaled

Items = Sequence[Any]
_Form = TypeVar("_Form")


def of_kind(kind: type[_Form], items: Iterable[object]) -> list[_Form]:
    """The items of one kind."""
    return [item for item in items if isinstance(item, kind)]


def first_of(kind: type[_Form], items: Iterable[object]) -> _Form | None:
    """The first item of a kind, None where there is none."""
    return next((item for item in items if isinstance(item, kind)), None)


def words(items: Items) -> tuple[str, ...]:
    """The plain words among the items, integers included."""
    return tuple(name.identifier for name in of_kind(Name, items))


def scales(items: Items) -> Scales:
    """The scales in a technology or a number definition, by the kind of unit."""
    return Scales(
        {kind: factor for scale in of_kind(Scales, items) for kind, factor in scale.factors.items()}
    )


def scale(items: Items) -> Scales:
    """`(scale a b (unit kind))`: a units of the file are b units of the SI."""
    unit = first_of(Unit, items)
    numbers = [number for item in items if isinstance(number := _number(item), Decimal)]
    if unit is None or len(numbers) != 2 or not numbers[0]:
        return Scales({})
    return Scales({unit.kind: numbers[1] / numbers[0]})


def property_form(items: Items) -> Property:
    """`(property name (string ...) ...)` and its like, with a value of any type."""
    unit = first_of(Unit, items)
    value = next((item for item in items if isinstance(item, (str, Decimal))), "")
    return Property(items[0].display, value, unit.kind if unit else "")


def designator(items: Items) -> Designator:
    """`(designator "R1")`."""
    return Designator(text(items))


def text(items: Items) -> str:
    """`(string "4k7")`, and a boolean, whose truth values have become texts."""
    return "".join(of_kind(str, items))


def true(_: Items) -> str:
    """`(true)`."""
    return "true"


def false(_: Items) -> str:
    """`(false)`."""
    return "false"


def numbers(items: Items) -> str | Decimal:
    """`(integer 5)`, `(number (e 47 2))`, `(miNoMax (mnm 1 2 3))`: the number, the nominal one of three."""
    values = [_number(item) for item in items if isinstance(item, (Name, Decimal, str))]
    return values[len(values) // 2] if values else ""


def _number(item: object) -> str | Decimal:
    """An item of a number as a number, as text where it is out of range."""
    if isinstance(item, Name):
        value = scaled(item.identifier, "0")
        return item.identifier if value is None else value
    return item if isinstance(item, (str, Decimal)) else ""


def scaled_number(items: Items) -> str | Decimal:
    """`(e mantissa exponent)`."""
    mantissa, exponent = (*words(items), "0", "0")[:2]
    value = scaled(mantissa, exponent)
    return f"{mantissa}e{exponent}" if value is None else value


def unit(items: Items) -> Unit:
    """`(unit RESISTANCE)`."""
    return Unit("".join(words(items)).upper())


def indexed(items: Items) -> Name:
    """`(array name size ...)` and `(member name index ...)`: the name with the integers behind it."""
    sizes = (integer(word) for word in words(items[1:]))
    return items[0]._replace(sizes=tuple(size for size in sizes if size is not None))
