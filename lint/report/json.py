"""The JSON report, for programs. `review.schema.json` beside this module describes it.

The same reviews give the same bytes: keys in a fixed order, numbers as Python's shortest form, and ASCII
throughout, so that neither the locale nor a terminal has a say. Values are in SI base units.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, TextIO

from ..verdict import ControllerReview, Deviation, Review, Verdict
from . import Gate, Unread
from .values import limit_values, number, serialised, spread_values, tool

SCHEMA = 1


def write(reviews: Sequence[Review], stream: TextIO, gate: Gate) -> None:
    """Write `reviews` to `stream`, and what could not be reviewed; the gate itself is the exit status."""
    report = {
        "schema": SCHEMA,
        "tool": tool(),
        "reviews": [_review(review) for review in reviews],
        "unread": [_unread(one) for one in gate.unread],
    }
    stream.write(serialised(report))


def _unread(one: Unread) -> dict[str, Any]:
    return {
        "netlist": one.netlist,
        "message": one.message,
        "place": one.place._asdict(),
        "remedy": one.remedy,
    }


def read_of(review: Review) -> dict[str, str | None]:
    """Return what was read for a review: the netlist and what belongs to it."""
    return {
        "netlist": review.netlist,
        "format": review.format,
        "name": review.name,
        "brief": review.brief,
        "parts_list": review.parts_list,
        "deviations": review.deviations,
        "configuration": review.configuration,
    }


def _review(review: Review) -> dict[str, Any]:
    return {
        **read_of(review),
        "controllers": [_controller(controller) for controller in review.controllers],
        "verdicts": [_verdict(verdict) for verdict in review.verdicts],
        "cautions": list(review.cautions),
        "switched_off": [{"rule": off.rule, "place": off.place._asdict()} for off in review.switched_off],
        "counts": review.counts,
        "accepted": review.accepted,
    }


def _controller(controller: ControllerReview) -> dict[str, Any]:
    return {
        "part": controller.part,
        "family": controller.family,
        "model": controller.model,
        "place": controller.place._asdict(),
        "pins": [
            {
                "number": pin.number,
                "function": pin.function,
                "net": pin.net,
                "state": pin.state,
                "outcome": pin.outcome,
                "level": pin.level,
            }
            for pin in controller.pins
        ],
        "assumptions": list(controller.assumptions),
        "power_stage": controller.power_stage,
        "evidence": list(controller.evidence),
    }


def _verdict(verdict: Verdict) -> dict[str, Any]:
    return {
        "rule": verdict.rule,
        "topic": verdict.topic,
        "outcome": verdict.outcome,
        "level": verdict.level,
        "subject": verdict.subject,
        "controller": verdict.controller,
        "message": verdict.message,
        "measured": spread_values(verdict.measured),
        "limit": limit_values(verdict.limit),
        "margin": number(verdict.margin),
        "parts": list(verdict.parts),
        "nets": list(verdict.nets),
        "pins": list(verdict.pins),
        "places": [place._asdict() for place in verdict.places],
        "formula": verdict.formula,
        "contributions": [
            {"parameter": parameter, "share": number(share)} for parameter, share in verdict.contributions
        ],
        "assumptions": list(verdict.assumptions),
        "source": verdict.source,
        "needs": list(verdict.needs),
        "remedy": verdict.remedy,
        "fingerprint": verdict.fingerprint,
        "deviation": _deviation(verdict.deviation),
    }


def _deviation(deviation: Deviation | None) -> dict[str, Any] | None:
    if deviation is None:
        return None
    return {
        "rule": deviation.rule,
        "subject": deviation.subject,
        "parts": None if deviation.parts is None else list(deviation.parts),
        "nets": None if deviation.nets is None else list(deviation.nets),
        "reason": deviation.reason,
        "owner": deviation.owner,
        "expires": deviation.expires.isoformat() if deviation.expires else None,
        "accepted": spread_values(deviation.accepted),
        "place": deviation.place._asdict(),
    }
