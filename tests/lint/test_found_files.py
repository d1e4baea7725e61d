from __future__ import annotations

from pathlib import Path

import pytest
from pwmlint.grammar.errors import NetlistError
from pwmlint.lint import review
from pwmlint.lint.found_files import root_of

EXAMPLES = Path(__file__).parents[2] / "examples"


def test_the_root_is_the_first_folder_above_with_a_repository(tmp_path: Path) -> None:
    folder = tmp_path / "boards" / "fan"
    folder.mkdir(parents=True)
    assert root_of(folder) == folder
    (tmp_path / ".git").mkdir()
    assert root_of(folder) == tmp_path
    (folder / ".git").write_text("gitdir: elsewhere\n", encoding="utf-8")
    assert root_of(folder) == folder


@pytest.mark.parametrize("ending", [".brief.toml", ".parts.csv", ".deviations.toml"])
def test_what_lies_beside_a_netlist_is_not_read_elsewhere(ending: str, tmp_path: Path) -> None:
    secret = tmp_path / "secret.txt"
    secret.write_text("orchard gate: 1234\n", encoding="utf-8")
    folder = tmp_path / "boards"
    folder.mkdir()
    netlist = folder / "fan.cir"
    netlist.write_bytes((EXAMPLES / "frost-fan.cir").read_bytes())
    beside = folder / f"fan{ending}"
    beside.symlink_to(secret)
    with pytest.raises(NetlistError, match="leads out of") as caught:
        review(netlist)
    assert caught.value.place.file == str(beside)
    assert "1234" not in str(caught.value)


def test_a_link_inside_the_repository_is_followed(tmp_path: Path) -> None:
    (tmp_path / ".git").mkdir()
    (tmp_path / "common.brief.toml").write_text('[design]\nname = "common"\n', encoding="utf-8")
    folder = tmp_path / "boards"
    folder.mkdir()
    netlist = folder / "fan.cir"
    netlist.write_bytes((EXAMPLES / "frost-fan.cir").read_bytes())
    (folder / "fan.brief.toml").symlink_to(tmp_path / "common.brief.toml")
    assert review(netlist).name == "common"
