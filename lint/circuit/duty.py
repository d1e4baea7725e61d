"""The duty that a power stage needs, from its input and output voltage.

Continuous conduction and ideal parts: a buck needs Vo/Vi, a boost 1 - Vi/Vo, an inverting stage
|Vo|/(Vi + |Vo|). Stages with a transformer need its turns ratio, which a netlist does not tell.
Source: any text on switching converters (volt-second balance of the inductor).
"""

from __future__ import annotations

from itertools import product

from ..quantity import Spread


def needed_duty(topology: str, supply: Spread, output: Spread) -> Spread | None:
    """Return the duty a stage needs over its supply and output voltages (V), None if untold.

    topology: "buck", "boost" or "inverting"; any other gives None. What a stage cannot do comes out as it is:
              above 1 where a buck should raise its input, below 0 where a boost should lower it.
    """
    law = _LAWS.get(topology)
    if law is None or supply.minimum <= 0 or output.minimum * output.maximum <= 0:
        return None
    ends = product((supply.minimum, supply.maximum), (output.minimum, output.maximum))
    corners = [law(vi, abs(vo)) for vi, vo in ends]
    nominal = law(supply.nominal, abs(output.nominal))
    return Spread(min(corners), nominal, max(corners), "")


def _buck(supply: float, output: float) -> float:
    return output / supply


def _boost(supply: float, output: float) -> float:
    return 1 - supply / output


def _inverting(supply: float, output: float) -> float:
    return output / (supply + output)


_LAWS = {"buck": _buck, "boost": _boost, "inverting": _inverting}
