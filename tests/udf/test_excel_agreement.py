"""Every call of the table that serves all hosts, through the real xlwings: what headless gives, Excel gives."""

from __future__ import annotations

import datetime as dt
import sys
from collections.abc import Iterator
from typing import Any

import pytest
from excel_fakes import MISSING, ComTime, FakeExcel, fake_excel, rows_of
from host_cases import Date, HostCase, all_cases, plain

from rigidsheet.udf.calling import call
from rigidsheet.udf.catalogue import FUNCTIONS
from rigidsheet.udf.cells import OMITTED, Cell, CellError, Refusal

pytestmark = pytest.mark.skipif(
    sys.platform.startswith("win"), reason="the stand-in for pywin32 would hide the real one of Windows"
)

# What COM delivers for a cell that shows the error (enumeration XlCVError of Excel, from memory).
ERROR_CODES = {"#DIV/0!": -2146826281, "#N/A": -2146826246}


@pytest.fixture(scope="module")
def excel() -> Iterator[FakeExcel]:
    with fake_excel() as made:
        yield made


def sent(cell: Any) -> Any:
    """Return what COM delivers for a cell or a block of the table."""
    if isinstance(cell, list):
        return [[sent(v) for v in row] for row in cell]
    if cell is OMITTED:
        return MISSING
    if isinstance(cell, CellError):
        return ERROR_CODES[cell.text]
    if isinstance(cell, Date):
        return ComTime(1899, 12, 30) + dt.timedelta(days=float(cell))
    return cell


def seen(cell: Any) -> Cell:
    """Return what the functions can see of it: an empty text is a blank cell there (table of the README)."""
    if isinstance(cell, list):
        return [[None if v == "" else v for v in row] for row in plain(cell)]
    return None if cell == "" else plain(cell)


def expected(case: HostCase) -> list[list[Any]]:
    answer = call(case.function, [seen(c) for c in case.cells])
    if isinstance(answer, Refusal):
        return [[answer.error]]
    return answer if isinstance(answer, list) else [[answer]]


def by_range(excel: FakeExcel, case: HostCase) -> list[list[Any]]:
    """Call with a range for each argument."""
    return excel.cell(case.function, *map(sent, case.cells))


def by_value(excel: FakeExcel, case: HostCase) -> list[list[Any]]:
    """Call with the values themselves, as the project's own module in VBA does; there dates are plain numbers."""
    given = [sent(plain(c)) for c in case.cells]
    values = [tuple(map(tuple, c)) if isinstance(c, list) else c for c in given]
    return rows_of(excel.call(case.function, *values))


@pytest.mark.parametrize("way", [by_range, by_value], ids=["ranges", "values"])
def test_every_case_gives_the_headless_answer(excel: FakeExcel, way: Any) -> None:
    cases = all_cases()
    assert len(cases) > 1000
    assert {c.function for c in cases} == set(FUNCTIONS)
    wrong = []
    for case in cases:
        wanted = expected(case)
        got = way(excel, case)
        same = [[type(v) for v in row] for row in got] == [[type(v) for v in row] for row in wanted]
        if got != wanted or not same:
            wrong.append(f"{case.label} {case.cells}: expected {wanted}, got {got}")
    assert wrong == []
