"""Values and attributes of an element where they are expressions or names of parameters."""

from __future__ import annotations

from collections.abc import Mapping

from .spice_element import Element, is_value
from .spice_nets import Level
from .spice_parameters import Written

# What the reader of elements adds is text for people, whatever it begins with.
_TEXT = frozenset({"expression", "waveform", "timing", "library", "area"})
_REFERENCES = frozenset({"couples", "through"})


def evaluated(element: Element, level: Level) -> tuple[str, Mapping[str, str]]:
    """Return the value and the attributes of `element`, each expression replaced by its number.

    The text of a value's expression is kept as the attribute "expression". What depends on the simulated
    circuit stays as written.
    """
    attributes = element.attributes
    if attributes:
        attributes = {key: _text_of(text, key, element, level) for key, text in attributes.items()}
    value = element.value
    if not value or not (value[0] in "{'" or (value[0].isalpha() and _is_parameter(value, level))):
        return value, attributes
    number = level.scope.parameters.number(Written(element.line, value, element.index_of(value)))
    if number is None:
        return value, attributes
    return _written(number), {**attributes, "expression": value}


def given_parameters(element: Element, level: Level) -> dict[str, float | None]:
    """Return the values that an instance hands to its subcircuit; None for one without a number."""
    return {
        key: level.scope.parameters.number(Written(element.line, text, element.index_of(text)))
        for key, text in element.attributes.items()
        if key not in _TEXT
    }


def _text_of(text: str, key: str, element: Element, level: Level) -> str:
    if key in _REFERENCES:
        return " ".join(level.path + level.names.get(word, word) for word in text.split())
    if key in _TEXT or text[:1] not in ("{", "'"):
        return text
    number = level.scope.parameters.number(Written(element.line, text, element.index_of(text)))
    return text if number is None else _written(number)


def _is_parameter(word: str, level: Level) -> bool:
    return not is_value(word) and level.scope.parameters.has(word.casefold())


def _written(number: float) -> str:
    """Return a number in decimal, to the fifteen digits that a float holds."""
    return format(number, ".15g")
