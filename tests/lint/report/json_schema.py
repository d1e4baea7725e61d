"""The schemas that come with the package, and what they say of a report."""

from __future__ import annotations

import json
from importlib.resources import files
from typing import Any

from jsonschema import Draft202012Validator


def schema_of(name: str) -> dict[str, Any]:
    """Return the schema of a file in the package, once it is one itself."""
    schema: dict[str, Any] = json.loads((files("pwmlint.lint.report") / name).read_text(encoding="utf-8"))
    Draft202012Validator.check_schema(schema)
    return schema


def check(schema: dict[str, Any], report: Any) -> None:
    """Raise ValidationError where a report is not as its schema has it."""
    # The library's own stubs leave the keyword arguments of `validate` untyped.
    Draft202012Validator(schema).validate(report)  # pyright: ignore[reportUnknownMemberType]
