"""Direct voltages: of a net over ground, or of one net over another, from the network grown round them."""

from __future__ import annotations

from ..estimate import Estimate, Unsolved
from .answers import estimate
from .growth import Growth


def voltage(growth: Growth, net: str) -> Estimate | Unsolved:
    """Return the direct voltage (V) of a net over ground; `growth` has not begun to grow yet."""
    potential = growth.known.get(net)
    if potential is not None:
        assumptions = (potential.assumption,) if potential.assumption else ()
        return Estimate(potential.spread, potential.spread, nets=(net,), assumptions=assumptions)
    growth.grow(net)
    if not has_path(growth, net):
        return Unsolved(f"net {net} has no direct-current path", nets=(net,))
    found = estimate(growth, {"voltage": (lambda s: s.voltage(net), "V")})
    return found if isinstance(found, Unsolved) else found["voltage"]


def difference(growth: Growth, net: str, other: str) -> Estimate | Unsolved:
    """Return by how much (V) a net stands above another; `growth` has not begun to grow yet."""
    growth.grow(net, other)
    adrift = tuple(one for one in (net, other) if not has_path(growth, one))
    if adrift:
        return Unsolved(f"no direct-current path to net {', '.join(adrift)}", nets=adrift)
    found = estimate(growth, {"difference": (lambda s: s.voltage(net, other), "V")})
    return found if isinstance(found, Unsolved) else found["difference"]


def has_path(growth: Growth, net: str) -> bool:
    """Tell whether a path joins a net to a known potential; what cannot be solved may hold one."""
    return bool(growth.blocked or growth.valueless) or growth.network().has_path(net)
