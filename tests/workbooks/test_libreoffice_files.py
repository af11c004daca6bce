"""Files that a real LibreOffice saved, and our files opened by it."""

from __future__ import annotations

import csv
import io
import shutil
import subprocess
from pathlib import Path

import conformance
import openpyxl
import pytest
import workbook_parts as parts

from rigidsheet.udf.cells import CellError
from rigidsheet.workbooks import recalculate

OFFICE = shutil.which("soffice") or shutil.which("libreoffice")
pytestmark = [
    pytest.mark.live,
    pytest.mark.skipif(OFFICE is None, reason="no LibreOffice on this machine"),
]


def converted(data: bytes, folder: Path, to: str) -> bytes:
    """Return a workbook as LibreOffice saves it, from a profile of its own."""
    assert OFFICE is not None
    source = folder / "in" / "book.xlsx"
    source.parent.mkdir(exist_ok=True)
    source.write_bytes(data)
    profile = (folder / "profile").as_uri()
    command = [OFFICE, f"-env:UserInstallation={profile}", "--headless", "--convert-to", to, "--outdir"]
    subprocess.run([*command, str(folder / "out"), str(source)], check=True, timeout=120, capture_output=True)
    return (folder / "out" / f"book.{to.partition(':')[0]}").read_bytes()


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return tmp_path_factory.mktemp("office")


def machine_book() -> bytes:
    """Return a small sheet with all that a file from LibreOffice differs in."""
    book = openpyxl.Workbook()
    sheet = book.active
    sheet.title = "Load cases"
    for i in range(1, 6):
        sheet.cell(i, 1, i * 0.25)
        sheet.cell(i, 2, f"=A{i}^2*RADIANS(30)")
        sheet.cell(i, 3, f'=IF(A{i}>0.7,"above","below")')
    sheet["D1"] = openpyxl.worksheet.formula.ArrayFormula("D1:D5", "=A1:A5*2")
    sheet["E1"] = "=1/0"
    sheet["E2"] = "=A1>0"
    sheet["E3"] = "=RB_X(A1,B1)"
    book.create_sheet("Other & more")["A1"] = "=SUM('Load cases'!B1:B5)"
    target = io.BytesIO()
    book.save(target)
    return target.getvalue()


def test_a_file_saved_by_libreoffice_comes_back_with_only_values_changed(folder: Path) -> None:
    functions = {"RB_X": lambda a, b: a + b}
    saved = converted(machine_book(), folder, "xlsx")
    result = recalculate(saved, functions=functions)
    before, after = parts.unpacked(saved), parts.unpacked(result.package)
    changed = {name for name in before if before[name] != after[name]}
    assert changed <= {"xl/worksheets/sheet1.xml", "xl/worksheets/sheet2.xml", "xl/workbook.xml"}
    assert not recalculate(result.package, functions=functions).changed
    ours = recalculate(machine_book(), functions=functions)
    assert ours.values == result.values
    assert result.values["Load cases", "E3"] == pytest.approx(0.25 + 0.0625 * 0.5235987755982988, rel=1e-14)
    # what LibreOffice itself had worked out, where it knows the functions
    theirs = openpyxl.load_workbook(io.BytesIO(saved), data_only=True)
    for (tab, ref), value in result.values.items():
        if ref != "E3":
            other = theirs[tab][ref].value
            if isinstance(value, float):
                assert other == pytest.approx(value, rel=1e-14)
            else:
                assert other == (value.text if isinstance(value, CellError) else value)


def test_libreoffice_shows_the_values_that_were_written(folder: Path) -> None:
    result = recalculate(machine_book(), functions={"RB_X": lambda a, b: 42.5})
    rows = list(csv.reader(converted(result.package, folder, "csv").decode().splitlines()))
    assert [row[2] for row in rows] == ["below", "below", "above", "above", "above"]
    assert [row[3] for row in rows] == ["0.5", "1", "1.5", "2", "2.5"]
    assert [rows[0][4], rows[1][4], rows[2][4]] == ["#DIV/0!", "TRUE", "42.5"]


def test_the_conformance_table_holds_in_libreoffice(folder: Path) -> None:
    cells = {f"A{i}": f"={case.formula}" for i, case in enumerate(conformance.CASES, 1)}
    data = parts.sheet(parts.rows({ref: parts.cell(ref, value) for ref, value in conformance.DATA.items()}))
    saved = converted(parts.workbook({"Formulas": cells, "Data": data}), folder, "xlsx")
    sheet = openpyxl.load_workbook(io.BytesIO(saved), data_only=True)["Formulas"]
    wrong = []
    for i, case in enumerate(conformance.CASES, 1):
        found, expected = sheet[f"A{i}"].value, case.value if case.calc is None else case.calc
        if isinstance(found, (int, float)) and isinstance(expected, (int, float)):
            same = float(found) == pytest.approx(float(expected), rel=1e-13, abs=1e-13)
        else:
            same = found == expected
        if not same:
            wrong.append((case.formula, expected, found))
    assert wrong == []
