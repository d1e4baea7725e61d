"""Several instances that are sections of one package, such as the gates U5A to U5D, become one part."""

from __future__ import annotations

from .edif_notes import NoteKeeper
from .edif_parts import Built
from .netlist import Part, Pin


def merge_sections(entries: list[Built], notes: NoteKeeper) -> list[Part]:
    """Return the parts that the instances of one reference designator make: one, unless they contradict."""
    if len(entries) == 1:
        return [entries[0].part]
    packages: list[_Package] = []
    for entry in entries:
        package = next((known for known in (*packages[:1], *packages[-1:]) if known.accepts(entry)), None)
        if package:
            package.add(entry, notes)
        else:
            packages.append(_Package(entry))
    return [package.close() for package in packages]


class _Package:
    """One part as it grows from its sections."""

    def __init__(self, built: Built) -> None:
        self.part: Part = built.part
        self._sections = {built.reference.section}
        self._pins: list[Pin] = list(built.part.pins)
        self._index = {pin.number: i for i, pin in enumerate(self._pins) if pin.number}

    def accepts(self, built: Built) -> bool:
        """Say whether an instance of the same designator is a further section of this package.

        It is when the file says so, or when the pin numbers differ; supply pins may be drawn at each section.
        """
        section = built.reference.section
        if section and section not in self._sections and "" not in self._sections:
            return True
        if "names" in (self.part.pins_known, built.part.pins_known):
            return False
        numbers = {pin.number for pin in built.part.pins}
        shared = numbers & self._index.keys()
        if not shared:
            return bool(numbers)
        agree = all(self._agrees(pin) for pin in built.part.pins if pin.number in shared)
        return agree and len(shared) < min(len(numbers), len(self._index))

    def _agrees(self, pin: Pin) -> bool:
        net = self._pins[self._index[pin.number]].net
        return not net or not pin.net or net == pin.net

    def add(self, built: Built, notes: NoteKeeper) -> None:
        """Take in a section; what the first one says goes before what this one says."""
        part = self.part
        self._sections.add(built.reference.section)
        for pin in built.part.pins:
            self._add_pin(pin, notes)
        part.value = part.value or built.part.value
        part.attributes = {**built.part.attributes, **part.attributes}
        part.fitted = part.fitted and built.part.fitted

    def _add_pin(self, pin: Pin, notes: NoteKeeper) -> None:
        known = self._index.get(pin.number) if pin.number else None
        if known is None:
            self._index[pin.number] = len(self._pins)
            self._pins.append(pin)
        elif not self._pins[known].net:
            self._pins[known] = pin
        elif not self._agrees(pin):
            nets = f"{self._pins[known].net} and {pin.net}"
            message = f"pin {pin.number} of {self.part.reference} is on two nets, {nets}"
            notes.add("pin-mismatch", message, pin.place, self.part.reference)
            self._pins.append(pin)

    def close(self) -> Part:
        """Return the part with the pins of all its sections."""
        self.part.pins = tuple(self._pins)
        self.part.pins_known = "numbers" if all(pin.number for pin in self._pins) else "names"
        return self.part
