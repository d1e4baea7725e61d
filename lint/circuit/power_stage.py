"""A recognised power stage: what the outputs of a controller drive, in the words of the field."""

from __future__ import annotations

from dataclasses import dataclass

from .drive import Driven

# The topologies of the brief that each recognised one belongs to.
_FAMILY = {"push-pull": "push-pull", "half-bridge": "half-bridge", "full-bridge": "full-bridge"}


@dataclass(frozen=True, slots=True)
class Switch:
    """A power switch: a driven transistor, the net of the winding it switches, and where it returns.

    rail: the other main terminal's net, as seen past a current-sense resistor
    """

    driven: Driven
    node: str
    rail: str

    @property
    def reference(self) -> str:
        """Return the switch's reference designator."""
        return self.driven.transistor.reference

    @property
    def sentence(self) -> str:
        """Return a sentence on it: what it is, what it switches and who drives it."""
        outputs = " and ".join(str(number) for number in self.driven.outputs)
        through = f" through {', '.join(self.driven.drivers)}" if self.driven.drivers else ""
        transistor = self.driven.transistor
        says = f"{self.reference} ({transistor.kind}) switches {self.node} to {self.rail}"
        return f"{says}, driven by output {outputs}{through}" if transistor.control else says


@dataclass(frozen=True, slots=True)
class PowerStage:
    """A recognised power stage.

    topology:   "buck", "boost", "inverting", "forward", "flyback", "push-pull", "half-bridge", "full-bridge"
    input:      the net that feeds it, empty where it is not seen
    output:     the net behind the filter
    rectifiers: the catch or output diodes; in a synchronous stage the second switch
    sensed:     what flows in the current-sense resistor: "switch", "output return", "output", "input", or ""
    evidence:   what the recognition rests on, each a sentence
    """

    topology: str
    switches: tuple[Switch, ...]
    input: str
    output: str
    inductor: str = ""
    transformer: str = ""
    rectifiers: tuple[str, ...] = ()
    sensed: str = ""
    evidence: tuple[str, ...] = ()

    @property
    def family(self) -> str:
        """Return the topology in the brief's words: "single-ended" for every stage of one switch."""
        return _FAMILY.get(self.topology, "single-ended")


@dataclass(frozen=True, slots=True)
class NotRecognised:
    """Why no power stage was recognised: a sentence."""

    reason: str
