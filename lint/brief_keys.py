"""The keys of a brief, each with its explanation: what `read_brief` knows and `pwmlint brief` explains."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from .wording import one_of

TOPOLOGIES = ("single-ended", "push-pull", "half-bridge", "full-bridge")
DERATING_POLICIES = ("nasa", "ecss", "commercial")
CIRCUITS = ("mains", "primary", "secondary")


@dataclass(frozen=True, slots=True)
class Key:
    """One key of a table of the brief.

    says:    what it tells, a sentence without full stop
    example: a value, as TOML writes it
    blank:   the value to fill in, which is no value yet: taken as it stands it is refused
    rules:   whose verdicts tell what the circuit does in its place
    """

    name: str
    says: str
    example: str
    blank: str = '"..."'
    rules: tuple[str, ...] = ()


def names(keys: Iterable[Key]) -> tuple[str, ...]:
    """Return the names of keys."""
    return tuple(key.name for key in keys)


DESIGN_KEYS = (
    Key("name", "what the report calls the design", '"orchard frost-fan drive"'),
    Key(
        "ambient",
        "the temperature round the board, from coldest to hottest; ratings are derated at its upper end",
        '"-10 degC .. 50 degC"',
    ),
    Key("derating", f"the policy that derates ratings: {one_of(DERATING_POLICIES)}", '"commercial"'),
)

RAIL_KEYS = (
    Key(
        "voltage",
        "over ground, without the tolerance: of a supply what comes, of an output what is wanted; every "
        "rail needs one",
        '"21 V .. 29 V"',
        rules=("feedback.output-voltage",),
    ),
    Key("tolerance", "by how much the voltage may be off", '"2 %"'),
    Key("load", "the current drawn from the net, from no load to full load", '"0 A .. 6 A"'),
    Key(
        "circuit",
        f"{one_of(CIRCUITS)}: mains for each net of the line, its voltage being the rms one between them; "
        "primary for nets that are not isolated from the mains, secondary for those that must be",
        '"secondary"',
    ),
)

CONTROLLER_KEYS = (
    Key("topology", f"{one_of(TOPOLOGIES)}; single-ended for every stage of one switch", '"single-ended"'),
    Key("output", "the net that is regulated", '"VOUT"'),
    Key(
        "switching_frequency",
        "at each switch: half the oscillator where the outputs take turns",
        '"45 kHz .. 55 kHz"',
        rules=("oscillator.frequency", "output-mode.topology"),
    ),
    Key(
        "dead_time",
        "how long both outputs are off before the next pulse; a single time is the least",
        '"1.5 us .. 4 us"',
        rules=("dead-time.minimum",),
    ),
    Key(
        "maximum_duty",
        "the greatest duty that the stage needs, where a turns ratio hides it from the netlist",
        '"45 %"',
        rules=("dead-time.duty-headroom",),
    ),
    Key(
        "soft_start",
        "how long the start takes, until the working duty; a single time is the least",
        '"5 ms .. 50 ms"',
        rules=("soft-start.time",),
    ),
    Key(
        "current_limit",
        "the current in the sense resistor from which the limit takes over; a single current is the least",
        '"6.6 A .. 9 A"',
        rules=("current-limit.trip-point",),
    ),
    Key(
        "shut_off_by_dead_time",
        "true where the dead-time pin must be able to hold the outputs off",
        "true",
        blank="...",
        rules=("dead-time.range",),
    ),
    Key(
        "pins",
        "the names or numbers of the controller's pins in the order of the netlist's nodes, only where that "
        'is not the order of the package; "-" for a node that is no pin',
        '["1IN+", "1IN-"]',
        blank="[...]",
    ),
)
