import pytest
from pwmlint.lint.references import expand


@pytest.mark.parametrize(
    ("text", "references"),
    [
        ("R1", ["R1"]),
        ("R1, R2;R3 R4", ["R1", "R2", "R3", "R4"]),
        ("R1-R4, R7", ["R1", "R2", "R3", "R4", "R7"]),
        ("R1-4", ["R1", "R2", "R3", "R4"]),
        ("R1 - R3", ["R1", "R2", "R3"]),
        ("R1\N{EN DASH}R3", ["R1", "R2", "R3"]),
        ("R1 \N{EM DASH} R3", ["R1", "R2", "R3"]),
        ("R1..R3", ["R1", "R2", "R3"]),
        ("R1...R3", ["R1", "R2", "R3"]),
        ("R1…R3", ["R1", "R2", "R3"]),
        ("R1 to R3", ["R1", "R2", "R3"]),
        ("C08-C10", ["C08", "C09", "C10"]),
        ("psu/R1-psu/R2", ["psu/R1", "psu/R2"]),
        ("psu/U1", ["psu/U1"]),
        ("A1-R3", ["A1-R3"]),
        ("J1-A", ["J1-A"]),
        ("R5-R5", ["R5"]),
        ("  ,; ", []),
        ("Total", ["Total"]),
        ("R1-3, 5-6, 8", ["R1", "R2", "R3", "R5", "R6", "R8"]),
        ("C10 12", ["C10", "C12"]),
        ("R1 & R2 and R3", ["R1", "R2", "R3"]),
        ("Total 2", ["Total", "2"]),
        ("10, R1", ["10", "R1"]),
    ],
)
def test_lists_and_ranges(text: str, references: list[str]) -> None:
    assert expand(text) == references


def test_ranges_are_bounded() -> None:
    assert len(expand("R1-R10000")) == 10_000
    with pytest.raises(ValueError, match="more than 10,000"):
        expand("R1-R10001")
    with pytest.raises(ValueError, match="backwards"):
        expand("R4-R1")
    assert expand("R1-R" + "9" * 40) == ["R1-R" + "9" * 40]
