"""What holds of any two revisions: of the same one twice, of one renamed or its lines turned."""

from __future__ import annotations

import random
from collections.abc import Callable

from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from pwmlint.lint.compare.circuits import circuit_changes
from pwmlint.lint.compare.comparison import CircuitChanges
from pwmlint.lint.compare.pairing import match
from pwmlint.lint.compare.side import Side

SideOf = Callable[..., Side]

CALM = (HealthCheck.function_scoped_fixture, HealthCheck.too_slow)
PROPERTY = settings(max_examples=60, deadline=None, suppress_health_check=CALM)

NETS = ("0", "A", "B", "C", "D", "VREF", "VIN", "OUT", "SW", "COMP", "N1", "N2")
PINS = ["A", "B", "COMP", "C", "D", "N1", "0", "SW", "0", "0", "SW", "VIN", "0", "VREF", "N2", "OUT"]
SHAPES = (
    ("R", 2, "1k"),
    ("R", 2, "10k"),
    ("C", 2, "1n"),
    ("L", 2, "10u"),
    ("D", 2, "DX"),
    ("Q", 3, "QX"),
    ("M", 4, "MX"),
    ("V", 2, "5"),
    ("XU9", 5, "PUMP"),
)

Line = tuple[str, tuple[str, ...], str]


@st.composite
def circuits(draw: st.DrawFn) -> list[Line]:
    """Draw a list as its lines: reference, nets, value."""
    lines: list[Line] = []
    for number in range(draw(st.integers(1, 25))):
        letters, pins, value = draw(st.sampled_from(SHAPES))
        nets = tuple(draw(st.sampled_from(NETS)) for _ in range(pins))
        lines.append((f"{letters}{number}", nets, value))
    if draw(st.booleans()):
        lines.append(("U1", tuple(PINS), "494"))
    return lines


def written(lines: list[Line]) -> str:
    return "\n".join(f"{name} {' '.join(nets)} {value}" for name, nets, value in lines)


def compared(old: Side, new: Side) -> CircuitChanges:
    return circuit_changes(old, new, match(old, new))


@PROPERTY
@given(lines=circuits())
def test_nothing_changed_between_a_netlist_and_itself(side_of: SideOf, lines: list[Line]) -> None:
    assert not compared(side_of(written(lines)), side_of(written(lines)))


@PROPERTY
@given(lines=circuits(), seed=st.integers(0, 1000))
def test_the_order_of_the_lines_is_no_change(side_of: SideOf, lines: list[Line], seed: int) -> None:
    turned = random.Random(seed).sample(lines, len(lines))
    assert not compared(side_of(written(lines)), side_of(written(turned)))


def joined(lines: list[Line]) -> set[str]:
    """Return the nets with two pins or more: those of one pin join nothing, and may go by any name."""
    pins = [net for _, nets, _ in lines for net in nets]
    return {net for net in pins if pins.count(net) > 1}


@PROPERTY
@given(lines=circuits())
def test_nets_under_new_names_are_renamed_and_nothing_else(side_of: SideOf, lines: list[Line]) -> None:
    names = {net: f"NET_{number}" for number, net in enumerate(reversed(NETS))} | {"0": "0"}
    renamed = [(name, tuple(names[net] for net in nets), value) for name, nets, value in lines]
    found = compared(side_of(written(lines)), side_of(written(renamed)))
    assert (found.parts_added, found.parts_removed, found.parts_changed) == ((), (), ())
    assert (found.nets_added, found.nets_removed) == ((), ())
    assert all(change.renamed and not change.gained and not change.lost for change in found.nets_changed)
    assert joined(lines) - {"0"} <= {change.old.name for change in found.nets_changed}


@PROPERTY
@given(lines=circuits(), seed=st.integers(0, 1000))
def test_names_that_changed_places_leave_each_part_where_it_was(
    side_of: SideOf, lines: list[Line], seed: int
) -> None:
    shuffled = random.Random(seed).sample(NETS[1:], len(NETS) - 1)
    names = dict(zip(NETS[1:], shuffled, strict=True)) | {"0": "0"}
    renamed = [(name, tuple(names[net] for net in nets), value) for name, nets, value in lines]
    found = compared(side_of(written(lines)), side_of(written(renamed)))
    assert (found.parts_added, found.parts_removed) == ((), ())
    assert not any(change.differences or change.pins for change in found.parts_changed)
    assert not any(change.gained or change.lost for change in found.nets_changed)


@PROPERTY
@given(old=circuits(), new=circuits())
def test_any_two_netlists_are_compared_and_every_part_is_told(
    side_of: SideOf, old: list[Line], new: list[Line]
) -> None:
    one, other = side_of(written(old)), side_of(written(new))
    matching = match(one, other)
    found = circuit_changes(one, other, matching)
    assert found == circuit_changes(one, other, match(one, other))
    assert len(matching.pairs) + len(found.parts_added) == len(other.netlist.parts)
    assert len(matching.pairs) + len(found.parts_removed) == len(one.netlist.parts)
    back = matching.nets.backward
    assert {new: old for old, new in matching.nets.forward.items()} == back
