"""What a review of a sound board may still leave to a person, each with the reason."""

from __future__ import annotations

from collections.abc import Mapping

_NOT_DRAWN = "the published drawing shows no bypass capacitors, neither here nor at the reference"

# board -> rule -> reason. Only a published design may have a `fail` among them, and only one of level note.
EXPLAINED: Mapping[str, Mapping[str, str]] = {
    "SLVA001": {
        "connections.value-preferred": "50 kohm and 4 kohm are in no series, as computed in the note",
        "supply.bypass": _NOT_DRAWN,
        "reference.bypass": _NOT_DRAWN,
        "feedback.single-fault": "nothing limits the output where a resistor of the divider fails",
    },
    "push-pull 28 V": {
        "supply.bypass": _NOT_DRAWN,
        "reference.bypass": _NOT_DRAWN,
        "soft-start.present": "the published circuit has none: DTC is at ground",
        "dead-time.minimum": "DTC at ground leaves no more than the controller's own dead time",
        "feedback.single-fault": "nothing limits the output where a resistor of the divider fails",
        "current-limit.trip-point": "250 mA printed, 200 mA of load: resistors of 5 % eat up the difference",
    },
    "step-down 5 V": {
        "supply.bypass": _NOT_DRAWN,
        "reference.bypass": _NOT_DRAWN,
        "soft-start.present": "the published circuit has none: DTC is at ground",
        "feedback.single-fault": "nothing limits the output where the one feedback resistor fails",
        "feedback.complete": "compared with the reference itself; no output tolerance is published",
        "current-limit.sense-voltage": "1.3 A in 0.1 ohm: the offset is a twelfth of the threshold",
    },
}
