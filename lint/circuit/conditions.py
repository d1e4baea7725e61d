"""Under which conditions a circuit is judged: the analysis, the ambient, the policy for margins."""

from __future__ import annotations

from dataclasses import dataclass

from ..derating import DEFAULT_POLICY
from ..estimate import Method
from ..quantity import Spread

# Parts are measured at this temperature when their values are stated (data sheets' common reference).
REFERENCE_TEMPERATURE = 25.0


@dataclass(frozen=True, slots=True)
class Conditions:
    """What a review takes as given for every part.

    method:  the worst-case analysis that decides
    ambient: ambient temperature in degC, None where nobody told it: then no drift with temperature is added
    policy:  the policy for derating and ageing, one of `derating.policies()`
    close:   whether parts whose tolerance nobody told are taken for close ones, instead of for common ones
    """

    method: Method = Method.EXTREME
    ambient: Spread | None = None
    policy: str = DEFAULT_POLICY
    close: bool = False

    @property
    def excursion(self) -> float:
        """Return how far (K) the ambient goes from the temperature at which values are stated."""
        if self.ambient is None:
            return 0.0
        return max(
            abs(self.ambient.minimum - REFERENCE_TEMPERATURE),
            abs(self.ambient.maximum - REFERENCE_TEMPERATURE),
        )


STANDARD_CONDITIONS = Conditions()
