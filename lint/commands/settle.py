"""What holds for each netlist of a run, and where its reports go; what is wrong is told, or ends the run."""

from __future__ import annotations

import argparse
import os
import stat
from collections.abc import Iterable, Sequence

from ...grammar.errors import NetlistError
from ..configuration import ConfigurationError
from ..report import Unread
from ..report.delivery import STANDARD_OUTPUT, Target
from ..settings import Settings, Settler, overwritten, shared_reports
from .answer import tell_once
from .given import given


def settle_each(
    netlists: Iterable[str], options: argparse.Namespace
) -> tuple[list[tuple[str, Settings]], list[Unread]]:
    """Return what holds for each netlist whose configuration can be used, and the others.

    What is wrong with a configuration is told once, however many netlists it concerns.
    """
    said = given(options)
    check_outputs(said.reports or (), options)
    settler = Settler(said)
    settled: list[tuple[str, Settings]] = []
    unread: list[Unread] = []
    told: list[NetlistError] = []
    for netlist in netlists:
        try:
            settings = settler.settle(netlist)
        except NetlistError as error:
            tell_once(error, told)
            unread.append(Unread.of(netlist, error))
        else:
            settled.append((netlist, settings))
            if settings.untrusted is not None:
                tell_once(settings.untrusted, told)
    return settled, unread


def targets_of(settled: Sequence[tuple[str, Settings]], options: argparse.Namespace) -> Sequence[Target]:
    """Return the reports of a run. Raises ConfigurationError; wrong usage ends here.

    Where no netlist can be reviewed they are those that the command line names.
    """
    if not settled:
        return given(options).reports or ()
    reports = shared_reports([settings for _, settings in settled])
    inputs = [path for netlist, settings in settled for path in (netlist, *settings.inputs)]
    output = overwritten(reports.value, inputs)
    if output is not None:
        message = f"the report would overwrite what is reviewed: {output}"
        if reports.place is None:
            options.parser.error(message)
        else:
            raise ConfigurationError(message, reports.place, remedy="name another file")
    return reports.value


def check_outputs(targets: Sequence[Target], options: argparse.Namespace) -> None:
    """End where two reports would go to one place: that is wrong usage."""
    outputs = [target.output for target in targets]
    places = [output if output == STANDARD_OUTPUT else os.path.realpath(output) for output in outputs]
    for output, place in zip(outputs, places, strict=True):
        if places.count(place) > 1 and not _is_device(place):
            where = "standard output" if output == STANDARD_OUTPUT else output
            options.parser.error(f"two reports would go to {where}: give each --format its own --output")


def _is_device(path: str) -> bool:
    """Tell whether a path leads to a device, which takes any number of reports."""
    try:
        return stat.S_ISCHR(os.stat(path).st_mode)
    except OSError:
        return False
