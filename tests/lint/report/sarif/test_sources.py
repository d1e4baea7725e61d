from __future__ import annotations

import json
from collections.abc import Callable

import pytest
from pwmlint.lint.report.sarif.sources import documents
from pwmlint.lint.verdict import Review


@pytest.mark.parametrize(
    ("source", "named"),
    [
        ("", []),
        ("SLVS074 p.4; SLVS052 p.4", ["SLVS074", "SLVS052"]),
        ("SLVS074 p.5 (revision I section 7.9)", ["SLVS074"]),
        ("as ceramic in ECSS-Q-ST-30-11C, from memory", ["ECSS-Q-ST-30-11C"]),
        (
            "IEC 60204-1, as quoted in published texts; IEC 60950-1 (20 J), from memory",
            ["IEC 60204-1", "IEC 60950-1"],
        ),
        ("two second sources' data sheets", ["two second sources' data sheets"]),
        ("brief", []),
        ("brief: VOUT 24.0 V ±2 %", []),
        ("parts list line 11; IEC 60115-8: rated at 70 degC", ["IEC 60115-8"]),
        ("common practice, no source", []),
        ("a rating of 1.25 times the voltage: common practice, no source", []),
        ("the rating itself", []),
    ],
)
def test_what_counts_as_published(source: str, named: list[str]) -> None:
    assert documents(source) == named


def test_results_point_into_the_taxonomy(cider_press: Review, written: Callable[..., str]) -> None:
    (run,) = json.loads(written("sarif", cider_press))["runs"]
    (taxonomy,) = run["taxonomies"]
    assert run["tool"]["driver"]["supportedTaxonomies"] == [{"name": taxonomy["name"], "index": 0}]
    identifiers = [taxon["id"] for taxon in taxonomy["taxa"]]
    assert identifiers == sorted(set(identifiers))
    used = [reference for result in run["results"] for reference in result.get("taxa", ())]
    assert {reference["id"] for reference in used} == set(identifiers)
    assert "SLVS074" in identifiers
    for reference in used:
        assert identifiers[reference["index"]] == reference["id"]
        assert reference["toolComponent"] == {"name": taxonomy["name"], "index": 0}
