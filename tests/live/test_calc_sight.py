"""Blank and boolean cells, which Calc hands to a function as numbers, are seen all the same."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import openpyxl
import pytest
from live_calc import LiveCalc
from openpyxl.workbook.defined_name import DefinedName

pytestmark = pytest.mark.live

VALUE = {"error": "#VALUE!"}


@pytest.fixture
def doc(calc: LiveCalc) -> Any:
    key = calc.ask("new")
    yield key
    calc.ask("close", key)


def test_a_single_blank_cell_is_not_zero(calc: LiveCalc, doc: int) -> None:
    calc.ask("put", doc, 0, {"A1": 2, "A2": "=RB_TORQUE(A1,B1)", "A3": '=RB_WHY("RB_TORQUE",A1,B1)'})
    assert calc.cell(doc, 0, "A2") == VALUE
    assert "blank cell" in calc.cell(doc, 0, "A3")
    calc.ask("put", doc, 0, {"B1": 0})
    assert calc.cell(doc, 0, "A2") == 0.0
    assert calc.cell(doc, 0, "A3") == "Not refused: the call has an answer."
    calc.ask("put", doc, 0, {"B1": None})
    assert calc.cell(doc, 0, "A2") == VALUE
    calc.ask("put", doc, 0, {"B1": 3})
    assert calc.cell(doc, 0, "A2") == 6.0


def test_quick_changes_are_followed(calc: LiveCalc, doc: int) -> None:
    calc.ask("put", doc, 0, {"A1": 2, "A2": "=RB_TORQUE(A1,B1)"})
    for _ in range(30):
        calc.ask("put", doc, 0, {"B1": 0})
        assert calc.cell(doc, 0, "A2") == 0.0
        calc.ask("put", doc, 0, {"B1": None})
        assert calc.cell(doc, 0, "A2") == VALUE


def test_a_typed_zero_is_never_refused_for_another_blank_cell(calc: LiveCalc, doc: int) -> None:
    calc.ask(
        "put",
        doc,
        0,
        {
            "A1": 2,
            "B1": 0,
            "C1": '=IF(B1="","",RB_TORQUE($A$1,B1))',
            "C2": '=IF(B2="","",RB_TORQUE($A$1,B2))',
            "C3": "=RB_TORQUE($A$1,0)",
            "C4": "=RB_TORQUE($A$1,1-1)",
        },
    )
    got = [row[0] for row in calc.read(doc, 0, "C1:C4")]
    assert got == [0.0, "", 0.0, 0.0]


def test_booleans_are_not_numbers(calc: LiveCalc, doc: int) -> None:
    calc.ask(
        "put",
        doc,
        0,
        {
            "A1": "=TRUE()",
            "A2": "=RB_TORQUE(A1,3)",
            "B1": 0.4,
            "C1": "=FALSE()",
            "D1": "m",
            "A3": '=INDEX(RB_ARM("(0, 0) m",B1:D1),1,1)',
            "A4": '=RB_WHY("RB_TORQUE",A1,3)',
        },
    )
    assert calc.cell(doc, 0, "A2") == VALUE
    assert calc.cell(doc, 0, "A3") == VALUE
    assert "boolean" in calc.cell(doc, 0, "A4")
    calc.ask("put", doc, 0, {"A1": 1, "C1": 0})
    assert calc.cell(doc, 0, "A2") == 3.0
    assert calc.cell(doc, 0, "A3") == 0.4


def test_named_cells_and_other_sheets(calc: LiveCalc, tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    inputs = book.active
    inputs.title = "My inputs"
    inputs["A1"] = "2 kg*m^2"
    book.defined_names["alpha"] = DefinedName("alpha", attr_text="'My inputs'!$B$2")
    work = book.create_sheet("Work")
    work["A1"] = "=RB_TORQUE('My inputs'!A1,alpha)"
    work["A2"] = "=RB_TORQUE('My inputs'!A1,'My inputs'!B2)"
    work["A3"] = "=RB_TORQUE('My inputs'!A1,0)"
    path = tmp_path / "named.xlsx"
    book.save(path)
    doc = calc.ask("load", str(path))
    assert [r[0] for r in calc.read(doc, "Work", "A1:A2")] == [0.0, 0.0], "A3 makes the same call with a zero"
    calc.ask("put", doc, "Work", {"A3": None})
    calc.ask("calculate", doc)
    assert [r[0] for r in calc.read(doc, "Work", "A1:A2")] == [VALUE, VALUE]
    calc.ask("close", doc)


def test_a_text_answer_is_the_same_text_as_a_typed_one(calc: LiveCalc, doc: int) -> None:
    formulas = {
        "A1": '=RB_CHECK("6 kN","15 kN")',
        "A2": '=IF(A1="OK",1,2)',
        "A3": '=IF(RB_CHECK("6 kN","15 kN")="OK",1,2)',
        "A4": '=COUNTIF(A1:A1,"OK")',
        "A5": '=MATCH("OK",A1:A1,0)',
        "A6": '=IF(RB_KIND("mm")="length",1,2)',
        "A7": '=ISERROR(RB_KIND("furlongs"))*1',
        "C1": "case",
        "D1": "load [N]",
        "C2": "empty",
        "D2": 3,
        "C3": "full",
        "D3": 5,
        "A8": '=MATCH(RB_ENVELOPE(C1:D3,"governing"),C1:C3,0)',
        "A9": '=RB_ENVELOPE(C1:D3,"largest")',
        "A10": "=INDEX(RB_ENVELOPE(C1:D3),1,2)",
    }
    calc.ask("put", doc, 0, formulas)
    got = [r[0] for r in calc.read(doc, 0, "A1:A10")]
    assert got == ["OK", 1.0, 1.0, 1.0, 1.0, 1.0, 1.0, 3.0, 5.0, "full"]


def test_one_number_counts_as_a_number_everywhere(calc: LiveCalc, doc: int) -> None:
    formulas = {
        "A1": '=RB_CONVERT("1 m","mm")',
        "A2": '=SUM(A1,RB_CONVERT("1 m","mm"))',
        "A3": '=IF(RB_CONVERT("1 m","mm")>999,1,2)',
        "A4": '=ROUND(RB_CONVERT("1 in","mm")/2,1)',
        "A5": '="is "&RB_CONVERT("1 m","mm")',
        "A6": "=COUNT(A1:A4)",
        "A7": '=RB_CONVERT(RB_CONVERT("1 m","mm")&" mm","m")',
        "A8": '=SUM(RB_ARM("(0, 0) m","(3, 4) m"))',
        "A9": "=SUM(A1,RB_KIND(1))",
        "A10": '=IF(RB_CONVERT("1 m","mm")>0,IF(A1>0,IF(RB_TORQUE(2,3)=6,1,2),3),4)',
        "A11": '=IF(ISERROR(RB_CONVERT("1 m","kg")),IF(A1>0,1,2),3)',
        "A12": '=MAX(RB_TORQUE(2,3),1)*RB_MOMENT("(1, 0) N","(0, 2) m")',
    }
    calc.ask("put", doc, 0, formulas)
    got = [r[0] for r in calc.read(doc, 0, "A1:A12")]
    assert got == [1000.0, 2000.0, 1.0, 12.7, "is 1000", 4.0, 1.0, 7.0, VALUE, 1.0, 1.0, -12.0]
