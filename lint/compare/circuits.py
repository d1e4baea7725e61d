"""What changed in the circuit: the parts and nets that came, went or are not the same."""

from __future__ import annotations

from ..verdict import Review
from .comparison import CircuitChanges
from .describe import net_change, net_seen, numbers_fit, part_change, part_seen, traffic
from .pairing import Matching
from .side import Side


def circuit_changes(old: Side, new: Side, matching: Matching) -> CircuitChanges:
    """Return what changed, each list in the order of its file: the old one's for what is gone."""
    nets, pins = matching.nets, traffic(old, new, matching)
    by_new = {pair.new.reference: pair for pair in matching.pairs}
    parts, netlist, before = new.netlist.parts, new.netlist, old.netlist
    changed = (part_change(old, new, by_new[one], nets) for one in parts if one in by_new)
    crossed = (
        net_change(old, new, nets.backward[one], one, pins) for one in netlist.nets if one in nets.backward
    )
    return CircuitChanges(
        parts_added=tuple(part_seen(new, part) for one, part in parts.items() if one not in by_new),
        parts_removed=tuple(
            part_seen(old, part) for one, part in before.parts.items() if one not in matching.references
        ),
        parts_changed=tuple(one for one in changed if one is not None),
        nets_added=tuple(
            net_seen(new, net)
            for one, net in netlist.nets.items()
            if one not in nets.backward and not new.is_open(one)
        ),
        nets_removed=tuple(
            net_seen(old, net)
            for one, net in before.nets.items()
            if one not in nets.forward and not old.is_open(one)
        ),
        nets_changed=tuple(one for one in crossed if one is not None),
    )


def assumptions(old: Side, new: Side, matching: Matching) -> tuple[str, ...]:
    """Return what was taken for granted while the revisions were brought together."""
    found: list[str] = []
    if old.netlist.format != new.netlist.format:
        found.append(
            f"{old.netlist.format} against {new.netlist.format}: what only one of them tells of a part (a "
            "rating, a package, the name of its symbol) is taken as no change"
        )
    for what, one, other in (
        ("brief", old.design.brief, new.design.brief),
        ("parts list", old.design.parts_list, new.design.parts_list),
    ):
        if (one is None) != (other is None):
            only = "old" if other is None else "new"
            found.append(f"only the {only} revision has a {what}: what it tells counts as a change")
    found += [
        f"{pair.new.reference}: its pins have neither names nor numbers in common, and are told by their nets"
        for pair in matching.pairs
        if pair.pins.likely and not numbers_fit(old, new, pair, matching.nets)
    ]
    return tuple(found)


def switched_off(old: Review, new: Review) -> tuple[str, ...]:
    """Return which rules one revision's configuration switches off, and the other's does not."""
    found: list[str] = []
    rules = [{off.rule: None for off in review.switched_off} for review in (old, new)]
    for which, here, there in (("old", rules[0], rules[1]), ("new", rules[1], rules[0])):
        alone = [rule for rule in here if rule not in there]
        if alone:
            found.append(f"switched off in the {which} revision only: {', '.join(alone)}")
    return tuple(found)
