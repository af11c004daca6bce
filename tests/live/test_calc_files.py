"""Files: RB_ names from .xlsx, what Calc saves and reads again, and PDF."""

from __future__ import annotations

import os
import shutil
import subprocess
import zipfile
from pathlib import Path
from typing import Any

import openpyxl
import pytest
from live_calc import LiveCalc
from openpyxl.chart import BarChart, Reference
from openpyxl.formatting.rule import FormulaRule
from openpyxl.styles import PatternFill
from openpyxl.workbook.defined_name import DefinedName
from openpyxl.worksheet.formula import ArrayFormula

from rigidsheet.core.errors import AbsentError, InputError
from rigidsheet.workbooks import office

pytestmark = pytest.mark.live

NAME_ERROR = {"error": "#NAME?"}


def tipper(path: Path) -> Path:
    """Write a workbook with our names wherever a formula can stand."""
    book = openpyxl.Workbook()
    sheet = book.active
    sheet.title = "Tipper"
    sheet["A1"], sheet["B1"] = 1450, "rpm"
    sheet["A2"] = '=RB_CONVERT(A1:B1,"rad/s")'
    sheet["A3"] = "=A2*2"
    sheet["A4"] = "=speed+1"
    sheet["A5"] = ArrayFormula("A5:B5", '=RB_ARM("(120, 80) mm","(870, 500) mm","mm")')
    sheet["A6"] = "=RB_NOBODY_KNOWS(A1)"
    sheet["A7"] = '=IF(RB_KIND("m")="length","a,b","c")'
    book.defined_names["speed"] = DefinedName("speed", attr_text='RB_CONVERT(Tipper!$A$1:$B$1,"rev/s")')
    rule = FormulaRule(formula=['RB_KIND("lb,ft")="a,b"'], fill=PatternFill(bgColor="FF0000"))
    sheet.conditional_formatting.add("A1", rule)
    book.save(path)
    return path


def check(calc: LiveCalc, doc: int) -> None:
    """Compare with 1450 turns a minute worked out by hand: times 2 pi / 60, divided by 60."""
    rows = calc.read(doc, "Tipper", "A1:B7")
    assert rows[1][0] == pytest.approx(151.84364492350666, rel=1e-14)
    assert rows[2][0] == pytest.approx(2 * 151.84364492350666, rel=1e-14)
    assert rows[3][0] == pytest.approx(1450 / 60 + 1, rel=1e-14)
    assert rows[4] == pytest.approx([750.0, 420.0], rel=1e-14)
    assert rows[5][0] == NAME_ERROR
    assert rows[6][0] == "a,b"


def test_the_names_in_an_xlsx_file_are_resolved(calc: LiveCalc, tmp_path: Path) -> None:
    doc = calc.ask("load", str(tipper(tmp_path / "tipper.xlsx")))
    assert not calc.ask("modified", doc)
    check(calc, doc)
    calc.ask("calculate", doc)
    check(calc, doc)
    assert calc.ask("formula", doc, 0, "A2")[1] == '=RB_CONVERT(A1:B1,"rad/s")'
    assert calc.ask("conditions", doc, 0) == ['RB_KIND("lb,ft")="a,b"']
    calc.ask("close", doc)


@pytest.mark.parametrize("ending", [".ods", ".xlsx"])
def test_what_calc_saves_is_read_again(calc: LiveCalc, tmp_path: Path, ending: str) -> None:
    doc = calc.ask("load", str(tipper(tmp_path / "tipper.xlsx")))
    saved = tmp_path / f"saved{ending}"
    calc.ask("save", doc, str(saved))
    calc.ask("close", doc)
    again = calc.ask("load", str(saved))
    check(calc, again)
    calc.ask("put", again, "Tipper", {"A1": 60})
    assert calc.cell(again, "Tipper", "A4") == pytest.approx(2.0, rel=1e-14)
    calc.ask("close", again)


def test_a_stale_value_in_the_file_is_replaced(calc: LiveCalc, tmp_path: Path) -> None:
    path = tipper(tmp_path / "tipper.xlsx")
    stale = tmp_path / "stale.xlsx"
    with zipfile.ZipFile(path) as old, zipfile.ZipFile(stale, "w") as new:
        for name in old.namelist():
            data = old.read(name)
            if name == "xl/worksheets/sheet1.xml":
                assert data.count(b"<v />") + data.count(b"<v></v>") > 3
                data = data.replace(b"<v />", b"<v>99</v>").replace(b"<v></v>", b"<v>99</v>")
            new.writestr(name, data)
    doc = calc.ask("load", str(stale))
    check(calc, doc)
    calc.ask("close", doc)


def test_many_formulas_load_quickly_enough_to_be_repaired_at_once(calc: LiveCalc, tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    sheet = book.active
    for row in range(1, 2001):
        sheet.append([row, f'=RB_CONVERT(A{row}&" m","mm")'])
    path = tmp_path / "many.xlsx"
    book.save(path)
    doc = calc.ask("load", str(path))
    got = [row[0] for row in calc.read(doc, 0, "B1:B2000")]
    assert got == pytest.approx([1000.0 * r for r in range(1, 2001)], rel=1e-14)
    calc.ask("close", doc)


def text_of(pdf: Path) -> str:
    tool = shutil.which("pdftotext")
    if tool is None:
        if os.environ.get("CI"):
            pytest.fail("pdftotext (poppler-utils) must be installed here")
        pytest.skip("pdftotext is not installed")
    return subprocess.run([tool, "-layout", str(pdf), "-"], capture_output=True, text=True, check=True).stdout


@pytest.mark.usefixtures("office_here")
def test_pdf_shows_recalculated_values_and_the_chart(tmp_path: Path) -> None:
    path = tipper(tmp_path / "tipper.xlsx")
    book = openpyxl.load_workbook(path)
    sheet = book["Tipper"]
    chart = BarChart()
    chart.title = "Tipper speed"
    chart.add_data(Reference(sheet, min_col=1, min_row=1, max_row=3))
    sheet.add_chart(chart, "D2")
    book.save(path)
    before = path.read_bytes()
    made = office.pdf(path)
    assert made == tmp_path / "tipper.pdf"
    assert made.read_bytes().startswith(b"%PDF-")
    assert path.read_bytes() == before
    assert sorted(p.name for p in tmp_path.iterdir()) == ["tipper.pdf", "tipper.xlsx"]
    text = text_of(made)
    assert "151.84" in text
    assert "303.68" in text
    assert "Tipper speed" in text


@pytest.mark.usefixtures("office_here")
def test_pdf_of_what_is_no_workbook_is_refused(tmp_path: Path) -> None:
    path = tmp_path / "broken.xlsx"
    path.write_bytes(b"PK\x03\x04 this is no workbook")
    with pytest.raises(InputError, match="made no PDF"):
        office.pdf(path)
    assert not (tmp_path / "broken.pdf").exists()


def test_pdf_says_what_to_install(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tipper(tmp_path / "tipper.xlsx")
    monkeypatch.setenv("RIGIDSHEET_OFFICE", str(tmp_path / "nowhere" / "soffice"))
    with pytest.raises(AbsentError, match="apt install libreoffice-calc"):
        office.pdf(path)


@pytest.mark.usefixtures("office_here")
def test_the_extension_is_installed_and_taken_away_again(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    place = [*office.layer(), *office.Profile(tmp_path).options]  # the one of this test, not that of the user
    monkeypatch.setattr(office, "layer", lambda: place)

    def installed() -> bool:
        command = [str(office.find().unopkg), "list", *place]
        listed = subprocess.run(command, capture_output=True, text=True, check=False)
        return office.IDENTIFIER in listed.stdout

    assert not installed()
    for _ in range(2):  # a second time replaces it
        assert "Restart LibreOffice" in office.install()
        assert installed()
    assert "Restart LibreOffice" in office.uninstall()
    assert not installed()
    with pytest.raises(InputError, match="The extension was not changed"):
        office.uninstall()


def test_the_wizard_shows_every_function(calc: LiveCalc) -> None:
    from rigidsheet.udf.calc.host import host_arguments
    from rigidsheet.udf.catalogue import FUNCTIONS

    wizard: dict[str, Any] = calc.ask("wizard")
    assert wizard.keys() == FUNCTIONS.keys()
    for name, f in FUNCTIONS.items():
        said, arguments = wizard[name]
        assert f.line in said
        assert [a[0] for a in arguments] == [a.name for a in host_arguments(f)]
        for (_, said, optional), a in zip(arguments, host_arguments(f), strict=True):
            assert a.help in said
            assert optional
