"""What holds for every working sheet: words to choose from, and what the kit refuses while it is built."""

from __future__ import annotations

from functools import cache
from io import BytesIO
from pathlib import Path

import openpyxl
import pytest
from command_line import run

from rigidsheet.workbooks import cases, recalculate
from rigidsheet.workbooks.templates import TEMPLATES
from rigidsheet.workbooks.templates.kit import Book


@cache
def written(name: str) -> bytes:
    import tempfile

    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "sheet.xlsx"
        TEMPLATES[name].write(path, False)
        return path.read_bytes()


@pytest.mark.parametrize("name", TEMPLATES)
def test_what_stands_in_a_cell_with_words_to_choose_from_is_one_of_them(name: str) -> None:
    """A comma parts the words of such a list, which has up to 255 characters: common practice, from memory."""
    lists = 0
    for sheet in openpyxl.load_workbook(BytesIO(written(name))):
        for rule in sheet.data_validations.dataValidation:
            if rule.type != "list":
                continue
            lists += 1
            text = rule.formula1
            assert text.startswith('"')
            assert text.endswith('"')
            assert len(text) <= 257
            words = text[1:-1].split(",")
            for block in rule.sqref.ranges:
                for row, column in block.cells:
                    value = sheet.cell(row, column).value
                    assert value is None or value in words, (sheet.title, row, column, value)
    assert lists > 3


@pytest.mark.parametrize("word", ["stop, then wait", 'a "quick" stop', " stop", ""])
def test_a_word_that_a_list_cannot_hold_is_refused(word: str) -> None:
    page = Book("Title", "Line", False).page("Inputs", (2.5, 30.0, 7.0, 13.0, 9.0, 10.0, 8.0, 9.0))
    with pytest.raises(ValueError, match="must be a word without comma, quotation mark"):
        page.choice("Stop", "", "go", ("go", word), "stop")


def test_a_list_that_is_too_long_is_refused() -> None:
    page = Book("Title", "Line", False).page("Inputs", (2.5, 30.0, 7.0, 13.0, 9.0, 10.0, 8.0, 9.0))
    words = tuple(letter * 7 for letter in "abcdefghijklmnopqrstuvwxyzABCDEF")
    assert len(",".join(words)) == 255
    page.choice("Stop", "", words[0], words, "stop")
    with pytest.raises(ValueError, match="up to 255 characters; got 256"):
        page.choice("Go", "", words[0], (*words[:-1], words[-1] + "x"), "go")


def test_what_a_drive_does_not_use_is_not_printed(tmp_path: Path) -> None:
    path = tmp_path / "tipper.xlsx"
    path.write_bytes(written("bin-tipper"))
    cylinder, gearbox = ("demand_push", "check_push"), ("demand_motor_torque", "check_motor_torque")
    for drive, shown, hidden in (("cylinder", cylinder, gearbox), ("gearbox", gearbox, cylinder)):
        output = run("recalc", path, "--no-write", "--set", f"drive={drive}").output
        first = [line.split()[0] for line in output.splitlines() if line.strip()]
        assert set(shown) <= set(first)
        assert not set(hidden) & set(first)
        assert "not used" not in output


CHANGES = {
    "bin-tipper": "drive,tilt_time,fruit\ncylinder,5.6 s,385\ngearbox,6 s,385\ngearbox,5.6 s,300\ncylinder,5.6 s,385\n",
    "swing-gate": "moved_by,run_time\nhand,14 s\ngearmotor,16 s\nhand,14 s\n",
}


@pytest.mark.parametrize("name", CHANGES)
def test_every_load_case_equals_a_recalculation_of_its_own(name: str, tmp_path: Path) -> None:
    path, table = tmp_path / "sheet.xlsx", tmp_path / "cases.csv"
    path.write_bytes(written(name))
    text = CHANGES[name]
    if name == "bin-tipper":  # the mass of the fruit, in the last row of the parts list
        sheet = openpyxl.load_workbook(path)["Inputs"]
        row = max(r for r in range(30, 90) if sheet.cell(r, 2).value and sheet.cell(r, 4).value == "box")
        text = text.replace("fruit", f"Inputs!E{row}", 1)
    table.write_text(text)
    heads, *rows = [line.split(",") for line in text.splitlines()]
    with cases.opened(path, cases.read(table), {}) as answers:
        for row, answer in zip(rows, answers, strict=True):
            alone = recalculate(written(name), inputs=dict(zip(heads, row, strict=True)))
            assert not answer.error
            named = {one.name: one.value for one in alone.results if one.name in answer.results}
            assert named == {name: value for name, (value, _) in answer.results.items()}
            assert dict(answer.verdicts) == {one.name: one.verdict for one in alone.checks}
