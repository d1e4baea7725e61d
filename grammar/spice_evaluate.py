"""Values and attributes of an element where they are expressions or names of parameters."""

from __future__ import annotations

from collections.abc import Mapping

from .expression import names_in
from .spice_element import Element, is_value
from .spice_nets import Level
from .spice_parameters import Written
from .spice_words import split

# What the reader of elements adds is text for people, whatever it begins with.
_TEXT = frozenset({"expression", "waveform", "timing", "library", "area"})
_REFERENCES = frozenset({"couples", "through"})


def evaluated(element: Element, level: Level) -> tuple[str, Mapping[str, str]]:
    """Return the value and the attributes of `element`, each expression replaced by its number.

    The text of a value's expression is kept as the attribute "expression". What depends on the simulated
    circuit stays as written.
    """
    attributes = _attributes(element, level) if element.attributes else element.attributes
    value = element.value
    if not value or not (value[0] in "{'" or (value[0].isalpha() and _is_parameter(value, level))):
        return value, attributes
    number = level.scope.parameters.number(Written(element.line, value, element.index_of(value)))
    if number is None:
        return value, attributes
    return _written(number), {**attributes, "expression": value}


def given_parameters(element: Element, level: Level) -> dict[str, float | None]:
    """Return the values that an instance hands to its subcircuit; None for one without a number."""
    texts = {key: text for key, text in element.attributes.items() if key not in _TEXT}
    return _numbers(texts, element, level)


def _attributes(element: Element, level: Level) -> dict[str, str]:
    attributes = dict(element.attributes)
    expressions: dict[str, str] = {}
    for key, text in element.attributes.items():
        if key in _REFERENCES:
            attributes[key] = " ".join(level.path + level.names.get(word, word) for word in text.split())
        elif key in _TEXT:
            continue
        elif text.startswith("{") or (text.startswith("'") and _asks_for_parameters(text, level)):
            expressions[key] = text
        else:
            attributes[key] = text.strip("'")
    numbers = _numbers(expressions, element, level)
    attributes.update({key: _written(number) for key, number in numbers.items() if number is not None})
    return attributes


def _asks_for_parameters(text: str, level: Level) -> bool:
    """Return whether a text in single quotes is an expression: it may as well be a text, as 'TO-220' is."""
    parameters = level.scope.parameters
    names = names_in(text, parameters.functions)
    return bool(names) and all(parameters.has(name) for name in names)


def _numbers(texts: Mapping[str, str], element: Element, level: Level) -> dict[str, float | None]:
    """Return the value of each of the `texts`, which are pairs at the end of the element's line."""
    if not texts:
        return {}
    line = element.line
    starts = {pair.key: pair.start for pair in split(line, exact=True).assignments}
    parameters = level.scope.parameters
    return {key: parameters.number(Written(line, text, starts.get(key, 0))) for key, text in texts.items()}


def _is_parameter(word: str, level: Level) -> bool:
    return not is_value(word) and level.scope.parameters.has(word.casefold())


def _written(number: float) -> str:
    """Return a number in decimal, to the fifteen digits that a float holds."""
    return format(number, ".15g")
