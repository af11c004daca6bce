"""Speed of headless recalculation; prints a table.

Run: python tests/bench/bench_recalculate.py
"""

from __future__ import annotations

import io
import time
from collections.abc import Callable, Mapping
from typing import Any

import openpyxl

from rigidsheet.workbooks import recalculate

ROWS = 20_000
TURNS = 3


def book(formulas: Callable[[int], list[Any]], rows: int) -> bytes:
    """Return a workbook as openpyxl saves it."""
    made = openpyxl.Workbook()
    sheet = made.active
    assert sheet is not None
    for row in range(1, rows + 1):
        sheet.append(formulas(row))
    target = io.BytesIO()
    made.save(target)
    return target.getvalue()


def cheap(row: int) -> list[Any]:
    return [row * 0.5, 2.0, 3.0, "kg", f'=RB_X(A{row},B{row},C{row},"N*m")']


def mixed(row: int) -> list[Any]:
    """A torque, a parallel-axis shift with a text for the arm, a conversion, and a margin that is judged."""
    return [
        *(row * 0.5, 2.0, "0.4 m"),
        f"=RB_TORQUE(A{row},B{row})",
        f'=RB_SHIFT(A{row},B{row},C{row},"kg*m^2")',
        f'=RB_CONVERT("{row} mm","m")',
        f'=IF(RB_MARGIN(A{row},10000)>0,"OK","FAIL")',
    ]


def best(data: bytes, functions: Mapping[str, Callable[..., Any]] | None) -> float:
    found = []
    for _ in range(TURNS):
        start = time.perf_counter()
        recalculate(data, functions=functions)
        found.append(time.perf_counter() - start)
    return min(found)


def main() -> None:
    """Print the table."""
    stand_in = {"RB_X": lambda a, b, c, unit: a * b + c}
    rows = [
        ("20,000 cheap calls, 4 arguments", book(cheap, ROWS), stand_in),
        ("20,000 formulas, a mix of four functions", book(mixed, ROWS // 4), None),
    ]
    print(f"{'loaded, worked out and packed again':45} seconds   limit")
    for name, data, functions in rows:
        print(f"{name:45} {best(data, functions):7.2f}   2.50")


if __name__ == "__main__":
    main()
