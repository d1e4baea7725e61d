"""The report for the test tables of CI servers: JUnit XML, one suite a netlist and one case a verdict.

A case fails where its verdict stops the gate, so that the table and the exit status say the same; what else
asks something of the reader is skipped, with the reason. A netlist that could not be reviewed is a suite with
one case, an error. ASCII throughout; what XML 1.0 forbids is written as
a visible escape.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TextIO
from xml.etree import ElementTree

from ...grammar.errors import printable
from ..verdict import Outcome, Review, Verdict
from . import Gate, Unread
from .case_names import case_names
from .details import details
from .ranking import acceptance
from .words import gate_answer, word

_QUIET = (Outcome.PASS, Outcome.INFORMATIONAL)


def write(reviews: Sequence[Review], stream: TextIO, gate: Gate) -> None:
    """Write one suite a review."""
    root = ElementTree.Element("testsuites", name="pwmlint")
    suites = [_suite(review, gate) for review in reviews]
    suites += [_not_reviewed(one) for one in gate.unread]
    for count in ("tests", "failures", "errors"):
        root.set(count, str(sum(int(suite.get(count, "0")) for suite in suites)))
    root.extend(suites)
    ElementTree.indent(root)
    body = ElementTree.tostring(root, encoding="us-ascii", xml_declaration=False).decode("ascii")
    stream.write(f'<?xml version="1.0" encoding="UTF-8"?>\n{body}\n')


def _suite(review: Review, gate: Gate) -> ElementTree.Element:
    suite = ElementTree.Element("testsuite", name=printable(review.netlist))
    names = case_names(review.verdicts)
    cases = [_case(verdict, name, review, gate) for verdict, name in zip(review.verdicts, names, strict=True)]
    suite.set("tests", str(len(cases)))
    suite.set("failures", str(sum(case.find("failure") is not None for case in cases)))
    suite.set("errors", "0")
    suite.set("skipped", str(sum(case.find("skipped") is not None for case in cases)))
    suite.append(_properties(review, gate))
    suite.extend(cases)
    return suite


def _not_reviewed(one: Unread) -> ElementTree.Element:
    """Return the suite of a netlist that could not be reviewed."""
    suite = ElementTree.Element("testsuite", name=printable(one.netlist))
    for count, found in (("tests", 1), ("failures", 0), ("errors", 1), ("skipped", 0)):
        suite.set(count, str(found))
    case = ElementTree.SubElement(suite, "testcase", classname="pwmlint", name="the review is possible")
    told = ElementTree.SubElement(case, "error", type="not reviewed", message=printable(one.message))
    rows = (
        one.message,
        f"at: {one.where}" if one.where else "",
        f"remedy: {one.remedy}" if one.remedy else "",
    )
    told.text = "\n".join(printable(row) for row in rows if row)
    return suite


def _properties(review: Review, gate: Gate) -> ElementTree.Element:
    told = {
        "title": review.name,
        "format": review.format,
        "brief": review.brief,
        "parts list": review.parts_list,
        "deviations": review.deviations,
        "configuration": review.configuration,
        "switched off": ", ".join(f"{one.rule} by {one.where}" for one in review.switched_off),
        "gate": str(gate.of(review)),
        "answer": gate_answer(gate.passes(review)),
    }
    properties = ElementTree.Element("properties")
    for name, value in told.items():
        if value:
            ElementTree.SubElement(properties, "property", name=name, value=printable(value))
    return properties


def _case(verdict: Verdict, name: str, review: Review, gate: Gate) -> ElementTree.Element:
    case = ElementTree.Element("testcase", classname=printable(verdict.rule), name=name)
    called = word(verdict.outcome, verdict.level)[0]
    if gate.stops(verdict, review):
        told = ElementTree.SubElement(case, "failure", type=called, message=printable(verdict.message))
        told.text = _body(verdict)
    elif verdict.deviation is not None:
        reason = f"{called}, {acceptance(verdict.deviation)}"
        told = ElementTree.SubElement(case, "skipped", message=printable(reason))
        told.text = _body(verdict)
    elif verdict.outcome not in _QUIET:
        told = ElementTree.SubElement(case, "skipped", message=printable(f"{called}: {verdict.message}"))
        told.text = _body(verdict)
    else:
        ElementTree.SubElement(case, "system-out").text = _body(verdict)
    return case


def _body(verdict: Verdict) -> str:
    """Return the message and what stands below it, a line each."""
    rows = [f"{label}: {text}" for label, text in details(verdict) if text]
    return "\n".join(printable(line) for line in (verdict.message, *rows))
