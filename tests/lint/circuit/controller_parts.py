"""A controller as netlists write it: its pins in every order that libraries are known to use."""

from __future__ import annotations

from collections.abc import Sequence

from pwmlint.grammar.netlist import Netlist, Part, Pin, Place
from pwmlint.lint.circuit.controllers import Controller, find_controllers
from pwmlint.lint.controllers import load

FILE = "frost_fan.cir"

# The net that an orchard's frost fan has on each pin 1..16 of its controller.
NETS = {
    "amplifier 1 in+": "FAN_SENSE",
    "amplifier 1 in-": "FAN_SET",
    "feedback": "COMP",
    "dead time": "SLOW_START",
    "timing capacitor": "RAMP",
    "timing resistor": "RATE",
    "ground": "0",
    "output 1 collector": "VBAT",
    "output 1 emitter": "DRIVE",
    "output 2 emitter": "DRIVE2",
    "output 2 collector": "VBAT2",
    "supply": "VCELL",
    "output control": "MODE",
    "reference": "V5",
    "amplifier 2 in-": "LIMIT_SET",
    "amplifier 2 in+": "LIMIT_SENSE",
}

SHEET = {pin.number: pin.role for pin in load("494").pins}

# The orders that libraries of the 494 class are known to use, by the names of their pins.
DATA_SHEET_ORDER = [
    "1IN+",
    "1IN-",
    "FEEDBACK",
    "DTC",
    "CT",
    "RT",
    "GND",
    "C1",
    "E1",
    "E2",
    "C2",
    "VCC",
    "OUTPUT_CTRL",
    "REF",
    "2IN-",
    "2IN+",
]

INPUTS_FIRST = [
    "IN1",
    "-IN1",
    "IN2",
    "-IN2",
    "FB",
    "DTC",
    "Vref",
    "OCT",
    "CT1",
    "ET1",
    "CT2",
    "ET2",
    "Ct",
    "Rt",
    "GND",
    "Vcc",
]

SUPPLY_FIRST = [
    "Vcc",
    "OCT",
    "CT1",
    "ET1",
    "CT2",
    "ET2",
    "GND",
    "VREF",
    "Rt",
    "Ct",
    "DTC",
    "FB",
    "-IN2",
    "IN2",
    "-IN1",
    "IN1",
    "Ctctr",
]

NUMBERS_AS_NAMES = ["1", "2", "15", "16", "3", "4", "13", "14", "5", "6", "9", "10", "11", "8", "12", "7"]

ROLES_INPUTS_FIRST = [
    "amplifier 1 in+",
    "amplifier 1 in-",
    "amplifier 2 in+",
    "amplifier 2 in-",
    "feedback",
    "dead time",
    "reference",
    "output control",
    "output 1 collector",
    "output 1 emitter",
    "output 2 collector",
    "output 2 emitter",
    "timing capacitor",
    "timing resistor",
    "ground",
    "supply",
]

ROLES_SUPPLY_FIRST = [
    "supply",
    "output control",
    "output 1 collector",
    "output 1 emitter",
    "output 2 collector",
    "output 2 emitter",
    "ground",
    "reference",
    "timing resistor",
    "timing capacitor",
    "dead time",
    "feedback",
    "amplifier 2 in-",
    "amplifier 2 in+",
    "amplifier 1 in-",
    "amplifier 1 in+",
]


def fan_part(
    nets: Sequence[str],
    names: Sequence[str] = (),
    numbers: Sequence[str] = (),
    *,
    known: str = "positions",
    element: str = "X",
    model: str = "xx494",
    value: str = "",
    reference: str = "U1",
    fitted: bool = True,
) -> Part:
    """A part whose nodes stand in one line of the file, one every eight columns."""
    pins = tuple(
        Pin(
            number=numbers[index] if numbers else str(index + 1),
            name=names[index] if names else "",
            net=net,
            place=Place(FILE, 12, 8 * (index + 1)),
        )
        for index, net in enumerate(nets)
    )
    return Part(reference, element, value, model, pins, Place(FILE, 12, 1), pins_known=known, fitted=fitted)


def board(*parts: Part) -> Netlist:
    return Netlist(FILE, "SPICE list", parts={part.reference: part for part in parts})


def the_controller(part: Part, pins: tuple[str, ...] | None = None) -> Controller:
    [controller] = find_controllers(board(part), {} if pins is None else {part.reference: pins})
    return controller


def nets_in(roles: Sequence[str]) -> list[str]:
    return [NETS[role] for role in roles]


def mapped_nets(controller: Controller) -> dict[str, str]:
    return {role: pin.net for role, pin in controller.pins.items()}
