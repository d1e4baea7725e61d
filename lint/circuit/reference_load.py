"""The current out of a controller's reference pin: in all, and branch by branch."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from ..estimate import Estimate, Unsolved
from ..quantity import Spread
from .answers import estimate
from .controllers import Controller
from .graph import Circuit
from .growth import Growth
from .network import Element
from .potentials import Potential
from .states import Probe


@dataclass(frozen=True, slots=True)
class ReferenceLoad:
    """What the reference feeds.

    total:    current out of the pin's net, in A
    branches: (part or pin, current in A) of everything on the net, the greatest first
    unknown:  parts on the net whose current cannot be told, each as a sentence
    bounded:  nets that resistors lead to and whose potential cannot be computed: taken anywhere between
              ground and the reference
    certain:  the total with nothing drawn from these nets; the total itself where there are none
    """

    total: Estimate
    branches: tuple[tuple[str, Estimate], ...]
    unknown: tuple[str, ...]
    bounded: tuple[str, ...]
    certain: Estimate


def reference_load(
    circuit: Circuit,
    known: Mapping[str, Potential],
    controllers: Sequence[Controller],
    controller: Controller,
) -> ReferenceLoad | Unsolved:
    """Return the direct current that a controller's reference pin delivers.

    A net that a branch leads to and whose potential cannot be computed is taken anywhere between ground
    and the reference: nothing that hangs on the reference alone can leave these bounds.
    """
    net = controller.net("reference")
    if not net:
        return Unsolved(f"the reference pin of {controller.reference} is not mapped or hangs open")
    potentials, bounded = dict(known), dict[str, Potential]()
    growth = Growth(circuit, potentials, controllers).grow(net, from_known=True)
    while growth.blocked:
        bounded |= _bounded(growth, potentials[net])
        potentials |= bounded
        growth = Growth(circuit, potentials, controllers).grow(net, from_known=True)
    elements = [element for element in growth.elements.values() if net in (element.a, element.b)]
    probes: dict[str, tuple[Probe, str]] = {"total": (lambda s: s.current_out_of(net), "A")}
    probes |= {element.name: (_out_of(net, element), "A") for element in elements}
    found = estimate(growth, probes)
    if isinstance(found, Unsolved):
        return found
    total = found.pop("total")
    open_ended = Growth(circuit, known, controllers, frozenset(bounded)).grow(net, from_known=True)
    certain = estimate(open_ended, {"total": probes["total"]}) if bounded else {"total": total}
    if isinstance(certain, Unsolved):
        return certain
    branches = sorted(found.items(), key=lambda item: (-item[1].spread.maximum, item[0]))
    return ReferenceLoad(total, tuple(branches), growth.untold(net), tuple(bounded), certain["total"])


def _bounded(growth: Growth, reference: Potential) -> dict[str, Potential]:
    """Return the nets that stopped the growth, each taken between ground and the reference."""
    top = reference.spread.minimum  # never above the reference as it is: that would feed it
    return {
        blocked.net: Potential(
            blocked.net,
            Spread(0.0, top / 2, top, "V"),
            "bound",
            assumption=f"net {blocked.net} taken anywhere from ground to the reference ({blocked.reason})",
        )
        for blocked in growth.blocked
    }


def _out_of(net: str, element: Element) -> Probe:
    sign = 1.0 if element.a == net else -1.0
    return lambda solution: sign * solution.current(element)
