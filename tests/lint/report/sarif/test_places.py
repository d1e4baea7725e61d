from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest
from pwmlint.grammar.netlist import Place
from pwmlint.lint.report.sarif.places import artifact, logical, physical, sheets
from pwmlint.lint.verdict import Review, Verdict


@pytest.mark.parametrize(
    ("file", "uri"),
    [
        ("orchard/frost-fan.cir", "orchard/frost-fan.cir"),
        ("./orchard//frost-fan.cir", "orchard/frost-fan.cir"),
        ("rev B/50 % duty?#1.edf", "rev%20B/50%20%25%20duty%3F%231.edf"),
        # A colon would make the first part a scheme, a pair of slashes an authority.
        ("file:board.edf", "file%3Aboard.edf"),
        ("press-µ.edf", "press-%C2%B5.edf"),
        ("latin-\udce9.edf", "latin-%E9.edf"),
        ("half-\ud800.edf", "half-%ED%A0%80.edf"),
        ("\x1b[31m\n.edf", "%1B%5B31m%0A.edf"),
        ("<standard input>", "%3Cstandard%20input%3E"),
    ],
)
def test_files_in_the_folder_of_the_run(file: str, uri: str) -> None:
    assert artifact(file) == {"uri": uri, "uriBaseId": "%SRCROOT%"}


def test_files_elsewhere_have_no_base(tmp_path: Path) -> None:
    assert artifact("../orchard/frost-fan.cir") == {"uri": "../orchard/frost-fan.cir"}
    board = tmp_path / "board.edf"
    assert artifact(str(board)) == {"uri": board.as_uri()}


def test_a_place_without_line_has_no_region() -> None:
    assert physical(Place("board.edf", 4, 7))["region"] == {"startLine": 4, "startColumn": 7}
    assert physical(Place("board.edf", 4, 0))["region"] == {"startLine": 4}
    assert "region" not in physical(Place("board.edf", 0, 0))


def test_names_are_told_with_the_path_of_their_sheet(sound: Review) -> None:
    verdict = replace(
        sound.verdicts[0],
        controller="psu/U1",
        parts=("psu/U1", "psu/R7"),
        pins=("dead time",),
        nets=("psu/DTC", "IN/OUT", "/"),
    )
    known = sheets(replace(sound, verdicts=(verdict,)))
    assert known == {"psu"}
    found = [(one["kind"], one["name"], one["fullyQualifiedName"]) for one in logical(verdict, known)]
    assert found == [
        ("part", "U1", "psu/U1"),
        ("part", "R7", "psu/R7"),
        ("pin", "dead time", "psu/U1/dead time"),
        ("net", "DTC", "psu/DTC"),
        ("net", "IN/OUT", "IN/OUT"),
        ("net", "/", "/"),
    ]


def test_a_verdict_on_nothing_in_particular(sound: Review) -> None:
    verdict = Verdict(outcome=sound.verdicts[0].outcome, message="The board has 12 parts.")
    assert logical(verdict, sheets(sound)) == []
