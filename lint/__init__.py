'''What a netlist means: the circuit, the brief, the review and its reports.

The names below are the Python interface; nothing in them prints or exits.

A review returns frozen data classes. A figure is a `Spread` in SI base units, its `quantities` are pint's:

    >>> from pwmlint.lint import Level, review
    >>> found = review("frost-fan.cir")
    >>> found.brief, found.passes(Level.ERROR)
    ('frost-fan.brief.toml', True)
    >>> load = next(verdict for verdict in found.verdicts if verdict.rule == "reference.load")
    >>> print(load.outcome, load.measured, load.limit)
    pass 1.05 mA (978 µA .. 1.13 mA) Limit(minimum=None, maximum=0.01, unit='A')
    >>> least, nominal, greatest = load.measured.quantities
    >>> print(f"{greatest.to('uA'):.0f}")
    1130 microampere

A house's own rule is a function with a question:

    >>> from pwmlint.lint import Limit, judge, read_netlist, review_netlist, rule
    >>> @rule("orchard.dead-time", level="warning", topic="dead time")
    ... def dead_time(controller, design):
    ...     """Does the dead-time pin stay above half a volt, as we want it in the orchard?"""
    ...     pin = controller.pin("dead time")
    ...     voltage = design.voltage(pin.net)
    ...     message = f"{pin.net} at {voltage.spread}"
    ...     yield judge(voltage, Limit(0.5, None, "V"), message, source="our own practice, no source")
    >>> (verdict,) = review_netlist(read_netlist("frost-fan.cir"), rules=[dead_time]).verdicts
    >>> print(verdict.level, verdict.subject, verdict.message)
    warning U1 DTC at 456 mV (391 .. 536 mV)
'''

from __future__ import annotations

from .brief import read_brief
from .deviations import read_deviations
from .estimate import Estimate, Method, Unsolved
from .judge import judge, unsolved
from .parts_list import read_parts_list
from .policy import Policy
from .quantity import Spread
from .review import read_netlist, review, review_netlist
from .rule import netlist_rule, rule
from .verdict import Deviation, Level, Limit, Outcome, Review, Verdict

__all__ = [
    "Deviation",
    "Estimate",
    "Level",
    "Limit",
    "Method",
    "Outcome",
    "Policy",
    "Review",
    "Spread",
    "Unsolved",
    "Verdict",
    "judge",
    "netlist_rule",
    "read_brief",
    "read_deviations",
    "read_netlist",
    "read_parts_list",
    "review",
    "review_netlist",
    "rule",
    "unsolved",
]
