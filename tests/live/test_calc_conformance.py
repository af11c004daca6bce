"""The table of built-in formulas in a live Calc, and whole workbooks against the headless recalculation."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any

import conformance
import gate_book
import openpyxl
import pytest
from live_calc import LiveCalc
from openpyxl.utils import coordinate_to_tuple, get_column_letter

from rigidsheet.udf.cells import CellError
from rigidsheet.workbooks import recalculate
from rigidsheet.workbooks.templates import TEMPLATES

pytestmark = pytest.mark.live


def test_built_in_formulas(calc: LiveCalc, tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    formulas = book.active
    formulas.title = "Formulas"
    data = book.create_sheet("Data")
    for where, value in conformance.DATA.items():
        data[where] = value
    for row, case in enumerate(conformance.CASES, start=1):
        formulas.cell(row, 1, f"={case.formula}")
    path = tmp_path / "formulas.xlsx"
    book.save(path)
    doc = calc.ask("load", str(path))
    calc.ask("calculate", doc)
    got = [row[0] for row in calc.read(doc, "Formulas", f"A1:A{len(conformance.CASES)}")]
    calc.ask("close", doc)
    wrong = []
    for case, found in zip(conformance.CASES, got, strict=True):
        wanted = case.value if case.calc is None else case.calc
        if isinstance(wanted, bool):
            wanted = float(wanted)
        same = (
            found == pytest.approx(wanted, rel=1e-12, abs=1e-14)
            if isinstance(wanted, float) and isinstance(found, float)
            else found == wanted
        )
        if not same:
            wrong.append(f"{case.formula}: expected {wanted!r}, got {found!r}")
    assert wrong == []


def write_gate(path: Path) -> None:
    gate_book.write(path)


BOOKS: dict[str, Callable[[Path], Any]] = {
    "gate": write_gate,
    **{name: lambda path, t=t: t.write(path, False) for name, t in TEMPLATES.items()},
    **{f"{name} blank": lambda path, t=t: t.write(path, True) for name, t in TEMPLATES.items()},
}


def differing(calc: LiveCalc, doc: int, values: Any) -> list[str]:
    """Return the formula cells of an open document that are not what the headless run gave."""
    wrong = []
    scales = row_scales(values)
    for sheet in dict.fromkeys(sheet for sheet, _ in values):
        places = [where for name, where in values if name == sheet]
        spots = {where: coordinate_to_tuple(where) for where in places}
        right, bottom = max(c for _, c in spots.values()), max(r for r, _ in spots.values())
        block = calc.read(doc, sheet, f"A1:{get_column_letter(right)}{bottom}")
        for where, (row, column) in spots.items():
            wanted, found = values[sheet, where], block[row - 1][column - 1]
            if not agree(wanted, found, scales[sheet, row_of(where)]):
                wrong.append(f"{sheet}!{where}: expected {wanted!r}, got {found!r}")
    return wrong


def row_of(where: str) -> str:
    return where.lstrip("ABCDEFGHIJKLMNOPQRSTUVWXYZ")


def row_scales(values: Any) -> dict[tuple[str, str], float]:
    """Return the largest number of each row: a small difference has the scale of its terms beside it."""
    scales: dict[tuple[str, str], float] = {}
    for (sheet, where), value in values.items():
        key = sheet, row_of(where)
        scales[key] = max(scales.get(key, 0.0), abs(value) if isinstance(value, float) else 0.0)
    return scales


def agree(wanted: Any, found: Any, scale: float) -> bool:
    if isinstance(wanted, CellError):
        # an error inside a range that is handed to a function is Err:504 in Calc, whichever it was
        return found in ({"error": wanted.text}, {"error": "Err:504"})
    if isinstance(wanted, (bool, float)) and isinstance(found, float):
        return abs(found - float(wanted)) <= 1e-12 * max(scale, abs(float(wanted)))
    return bool(wanted == found or (wanted in (None, "") and found in (None, "")))


@pytest.mark.parametrize("name", BOOKS)
def test_a_workbook_in_calc_and_saved_by_calc(calc: LiveCalc, tmp_path: Path, name: str) -> None:
    path = tmp_path / "book.xlsx"
    BOOKS[name](path)
    values = recalculate(path, write=False).values
    assert len(values) > 5
    doc = calc.ask("load", str(path))
    assert differing(calc, doc, values) == []
    calc.ask("calculate", doc)
    assert differing(calc, doc, values) == []
    saved = {ending: tmp_path / f"saved{ending}" for ending in (".xlsx", ".ods")}
    for copy in saved.values():
        calc.ask("save", doc, str(copy))
    calc.ask("close", doc)
    doc = calc.ask("load", str(saved[".ods"]))
    calc.ask("calculate", doc)
    assert differing(calc, doc, values) == []
    from_ods = tmp_path / "from ods.xlsx"
    calc.ask("save", doc, str(from_ods))
    calc.ask("close", doc)
    for copy in (saved[".xlsx"], from_ods):
        again = recalculate(copy, write=False).values
        scales = row_scales(values)
        wrong = [
            f"{sheet}!{where}: {value!r}, saved by Calc {again.get((sheet, where))!r}"
            for (sheet, where), value in values.items()
            if not same_headless(value, again.get((sheet, where)), scales[sheet, row_of(where)])
        ]
        assert wrong == []


def same_headless(first: Any, second: Any, scale: float) -> bool:
    if isinstance(first, (bool, float)) and isinstance(second, (bool, float)):
        return abs(float(first) - float(second)) <= 1e-12 * max(scale, abs(float(first)))
    return bool(first == second)
