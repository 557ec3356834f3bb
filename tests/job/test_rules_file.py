"""A shop's own rules: read over those that come with the program, every mistake with its line."""

from __future__ import annotations

from pathlib import Path

import pytest

from develop.errors import InputError
from develop.job.file import read_rules
from develop.tables.seams import edge_of, seam_of


def test_a_file_overrides_and_adds(tmp_path: Path) -> None:
    file = tmp_path / "shop.toml"
    file.write_text(
        '[seams.grooved]\nsize = "width"\nleft = { size = 1.5, thickness = 1 }\nright = { size = 1.5, thickness = 1 }\n'
        '[edges.bead]\nsize = "width"\nallowance = { size = 1.2 }\nsource = "trial of this shop"\n'
    )
    rules = read_rules(str(file))
    assert seam_of("grooved 6", thickness=0.8, rules=rules).left == pytest.approx(9.8, rel=1e-14)
    assert edge_of("bead 10", rules=rules).allowance == 12
    assert edge_of("bead 10", rules=rules).source == "trial of this shop"
    assert seam_of("standing 25", rules=rules) == seam_of("standing 25")


def test_every_mistake_has_its_line(tmp_path: Path) -> None:
    file = tmp_path / "shop.toml"
    file.write_text('[seams.lap]\nsize = "width"\n\nright = { sise = 1 }\nends = "round"\n\n[edge.raw]\n')
    with pytest.raises(InputError) as caught:
        read_rules(str(file))
    assert sorted((each.place, each.field) for each in caught.value.problems) == [
        (f"{file}:4", "seams.lap.right.sise"),
        (f"{file}:5", "seams.lap.ends"),
        (f"{file}:7", "edge"),
    ]
    assert 'did you mean "size"?' in str(caught.value)


@pytest.mark.parametrize(
    ("data", "words"),
    [
        (b"[seams.lap\n", "not a TOML file"),
        (b"\xff", "is not UTF-8 text"),
        (b"seams = 3", "3 is not a table"),
    ],
)
def test_what_is_no_file_of_rules_is_refused(tmp_path: Path, data: bytes, words: str) -> None:
    file = tmp_path / "shop.toml"
    file.write_bytes(data)
    with pytest.raises(InputError, match=words) as caught:
        read_rules(str(file))
    assert str(caught.value).startswith(f"{file}:1")


def test_a_file_that_is_not_there_is_told_so(tmp_path: Path) -> None:
    with pytest.raises(InputError, match=r"cannot be read: .*; allowed: a file of rules"):
        read_rules(str(tmp_path / "none.toml"))
    with pytest.raises(InputError, match="is a folder; allowed: a file of rules"):
        read_rules(str(tmp_path))
