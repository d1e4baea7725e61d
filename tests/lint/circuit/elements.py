"""Elements and networks of constant values, written in a line, and their solution."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

import numpy as np
from pwmlint.lint.circuit.network import Condition, Element, Free, Network, Resistor, Value, VoltageSource
from pwmlint.lint.circuit.solver import Solution, solve


def constant(number: float) -> Value:
    return lambda _: np.full(1, number)


def resistor(name: str, a: str, b: str, ohms: float, *, may_be_zero: bool = False) -> Resistor:
    return Resistor(name, a, b, constant(ohms), may_be_zero=may_be_zero or ohms == 0)


def source(name: str, a: str, b: str, volts: float) -> VoltageSource:
    return VoltageSource(name, a, b, constant(volts))


def network(
    *elements: Element,
    free: tuple[Free, ...] = (),
    conditions: tuple[Condition, ...] = (),
    known: Mapping[str, float] = MappingProxyType({}),
) -> Network:
    """Return a network between ground, 5 V and whatever else is known."""
    nets = {"0": 0.0, "VREF": 5.0} | dict(known)
    return Network(elements, {net: constant(volts) for net, volts in nets.items()}, free, conditions)


def solved(*elements: Element, known: Mapping[str, float] = MappingProxyType({})) -> Solution:
    return solve(network(*elements, known=known), {}, 1)
