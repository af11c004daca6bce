"""The README is true: its commands stand, its function list is complete, its sheet gives the numbers it promises."""

from __future__ import annotations

import re
from pathlib import Path

import openpyxl
import pytest

from rigidsheet.udf.catalogue import FUNCTIONS
from rigidsheet.udf.compiling import arguments_of
from rigidsheet.workbooks import recalculate

ROOT = Path(__file__).parents[1]
README = (ROOT / "README.md").read_text(encoding="utf-8")


def between(mark: str) -> str:
    return README.split(f"<!-- {mark} -->")[1].split("<!-- end -->")[0]


def row_of(name: str) -> str:
    f = FUNCTIONS[name]
    arguments = ", ".join(f"[{a.name}]" if a.optional else a.name for a in arguments_of(f))
    line = f.line.replace("|", r"\|")  # a bare one would end the cell of the table
    return f"| `{name}({arguments})` | {line} |"


def test_every_function_is_listed_with_its_arguments() -> None:
    listed = [line for line in between("functions").splitlines() if line.startswith("| `RB_")]
    assert listed == [row_of(name) for name in FUNCTIONS]


@pytest.mark.parametrize("mark", ["demo", "test"])
def test_each_command_is_one_line(mark: str) -> None:
    lines = [x for x in between(mark).splitlines() if x.strip() and not x.startswith("```")]
    assert len(lines) == 1
    assert lines[0].startswith("python3 -m venv ")


def test_the_sheet_of_your_own_gives_what_the_text_says(tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    sheet = book.active
    for line in between("chute").strip().splitlines()[2:]:
        cells = [c.strip().strip("`") for c in line.strip("|").split("|")]
        for column, text in enumerate(cells[1:], 1):
            if text:
                number = re.fullmatch(r"-?\d+(\.\d+)?", text)
                sheet.cell(int(cells[0]), column, float(text) if number else text)
    path = tmp_path / "chute.xlsx"
    book.save(path)
    done = recalculate(path)
    assert not done.errors
    assert done.values["Sheet", "B14"] == pytest.approx(30.0, rel=1e-12)
    # moments about the hinge: (24*0.6 + 6*1.18) kg m * 9.80665 m/s^2 / 1.1 m
    assert done.values["Sheet", "B15"] == pytest.approx((24 * 0.6 + 6 * 1.18) * 9.80665 / 1.1, rel=1e-12)
    assert "191.497 N" in README
    assert done.values["Sheet", "B17"] == "OK"


def test_every_picture_is_there_and_small() -> None:
    pictures = re.findall(r"!\[[^]]+\]\(([^)]+)\)", README)
    assert pictures
    for name in pictures:
        assert 0 < (ROOT / name).stat().st_size <= 200_000
