"""Every function in a live Calc gives what the same call gives headless."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import pytest
from host_book import write
from host_cases import HostCase, all_cases, kind_of_error, plain
from live_calc import LiveCalc

from rigidsheet.udf.calling import call
from rigidsheet.udf.cells import CellError, Refusal

pytestmark = pytest.mark.live


def seen(value: Any) -> Any:
    """Return a cell as Calc hands it over: a boolean is a number there."""
    return float(value) if isinstance(value, bool) else plain(value)


def as_calc_sees(case: HostCase) -> Any:
    """Return the answer to expect in Calc, where it hides or decides something before we are asked.

    An error that stands alone passes through unasked; an error inside a range is Err:504; booleans are
    numbers; a single blank cell is zero.
    """
    alone = kind_of_error(case.cells)
    inside = any(
        isinstance(v, CellError) for c in case.cells if isinstance(c, list) for row in c for v in row
    )
    if inside:
        return {"error": "Err:504"}
    if alone is not None:
        return {"error": alone}
    cells: list[Any] = []
    for cell in case.cells:
        if isinstance(cell, list):
            cells.append([[seen(v) for v in row] for row in cell])
        else:
            cells.append(0.0 if cell is None else seen(cell))
    answer = call(case.function, cells)
    return {"error": answer.error} if isinstance(answer, Refusal) else answer


def differences(expected: Any, got: list[list[Any]]) -> str:
    """Say where a block of cells differs from the expected answer, or nothing."""
    if isinstance(expected, dict):
        return "" if got[0][0] == expected else f"expected {expected}, got {got[0][0]}"
    rows = expected if isinstance(expected, list) else [[expected]]
    numbers = [abs(v) for row in rows for v in row if isinstance(v, float)]
    scale = max(numbers, default=0.0)
    for wanted, found in zip(rows, got, strict=True):
        for w, g in zip(wanted, found, strict=True):
            if isinstance(w, float) and not isinstance(w, bool):
                same = isinstance(g, float) and math.fabs(w - g) <= 1e-12 * scale
            else:
                same = w == g or (w == "" and g is None)
            if not same:
                return f"expected {w!r}, got {g!r}"
    return ""


def run(calc: LiveCalc, cases: list[HostCase], path: Path, literals: bool = False) -> list[str]:
    """Work the cases out in Calc and return what differs."""
    expected = [as_calc_sees(c) for c in cases]
    placed = write(cases, path, expected, literals)
    doc = calc.ask("load", str(path))
    last = placed[-1]
    columns, rows = calc.ask("used", doc, "Answers")
    calc.ask("calculate", doc)
    block = calc.read(doc, "Answers", f"A1:{column_letters(columns)}{rows}")
    calc.ask("close", doc)
    assert rows >= int(last.where.partition(":")[0][1:])
    out = []
    for p, e in zip(placed, expected, strict=True):
        top = int(p.where.partition(":")[0][1:]) - 1
        got = [line[: p.columns] for line in block[top : top + p.rows]]
        difference = differences(e, got)
        if difference:
            out.append(f"{p.case.label} {p.case.cells}: {difference}")
    return out


def column_letters(number: int) -> str:
    from openpyxl.utils import get_column_letter

    return str(get_column_letter(number))


def test_every_function_on_cells(calc: LiveCalc, tmp_path: Path) -> None:
    cases = all_cases()
    assert len(cases) > 300
    assert run(calc, cases, tmp_path / "cells.xlsx") == []


def test_every_function_on_values_in_the_formula(calc: LiveCalc, tmp_path: Path) -> None:
    cases = all_cases()
    assert run(calc, cases, tmp_path / "typed.xlsx", literals=True) == []
