"""`pwmlint compare`: what changed between two revisions, and a gate on what is new or worse."""

from __future__ import annotations

import argparse
from collections.abc import Iterable
from typing import TYPE_CHECKING, Any

from ...grammar.errors import NetlistError
from ..report import COMPARISON_FORMATS
from ..report.delivery import DeliveryError, Target, deliver_comparison
from .answer import EXIT, NOT_PASSED, PASSED, TROUBLE, tell
from .given import given
from .inputs import STANDARD_INPUT
from .review import add_options

if TYPE_CHECKING:
    from ..compare import Asked, Comparison
    from ..compare.source import Source
    from ..report import Gate
    from ..settings import Settings, Settler


def add(commands: argparse._SubParsersAction[Any]) -> None:  # pyright: ignore[reportPrivateUsage]
    """Add the command to the command line."""
    parser = commands.add_parser(
        "compare",
        help="tell what changed between two revisions of a netlist",
        description="Tells what changed between two revisions of a netlist, of one format or of two: in "
        "parts, nets and verdicts. The gate, that of the new revision, stops at what is new or worse. A "
        "revision is a file, - for standard input, or REV:path, a file as a git revision had it, such as "
        "HEAD~1:boards/fan.cir; what is found beside it, and what it includes, is then of that revision.",
        epilog=EXIT,
    )
    parser.add_argument("old", metavar="OLD", help="the netlist as it was")
    parser.add_argument("new", metavar="NEW", help="the netlist as it is now")
    add_options(parser, COMPARISON_FORMATS)
    parser.set_defaults(command=_run, parser=parser)


class _Settled:
    """What holds for each of the two revisions, settled when it can be read."""

    def __init__(self, settler: Settler) -> None:
        self._settler = settler
        self._told: list[NetlistError] = []
        self.each: list[Settings] = []

    def asked(self, source: Source) -> Asked:
        """Return how a revision is reviewed; tell once where house rules that it names are not loaded."""
        from ..compare import Asked

        settings = self._settler.settle(source.path)
        self.each.append(settings)
        remark = settings.untrusted
        if remark is not None and not any(remark is one for one in self._told):
            self._told.append(remark)
            source.rename(remark)
            tell(str(remark))
        return Asked(
            brief=settings.brief.value,
            parts_list=settings.parts_list.value,
            deviations=settings.deviations.value,
            allow_include=settings.allow_include.value,
            method=settings.method,
            rules=settings.asked,
            policy=settings.policy,
        )


def _run(options: argparse.Namespace) -> int:
    if options.old == options.new == STANDARD_INPUT:
        options.parser.error("standard input can be read once only: give - once")
    from ..compare import compare_each
    from ..settings import Settler
    from .settle import check_outputs

    said = given(options)
    targets = said.reports or (Target(),)  # those that a configuration names are reports of reviews
    check_outputs(targets, options)
    _spare(targets, (options.old, options.new), options)
    settled = _Settled(Settler(said))
    try:
        comparison = compare_each(options.old, options.new, settled.asked)
    except NetlistError as error:
        tell(str(error))
        return TROUBLE
    _spare(targets, [path for settings in settled.each for path in settings.inputs], options)
    gate = settled.each[-1].own_gate
    written = [_deliver(target, comparison, gate) for target in targets]
    if not all(written):
        return TROUBLE
    return PASSED if comparison.passes(gate.level, strict=gate.strict) else NOT_PASSED


def _spare(targets: Iterable[Target], inputs: Iterable[str], options: argparse.Namespace) -> None:
    """End where a report would overwrite one of `inputs`: that is wrong usage."""
    from ..settings import overwritten

    output = overwritten(targets, inputs)
    if output is not None:
        options.parser.error(f"the report would overwrite what is compared: {output}")


def _deliver(target: Target, comparison: Comparison, gate: Gate) -> bool:
    """Write one report and tell whether it could be written; the others are wanted all the same."""
    try:
        deliver_comparison(target, comparison, gate)
    except DeliveryError as error:
        tell(str(error))
        return False
    return True
