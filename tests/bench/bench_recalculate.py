"""Speed of headless recalculation, and of the command with the templates; prints a table.

Run: python tests/bench/bench_recalculate.py
"""

from __future__ import annotations

import csv
import io
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable, Mapping
from pathlib import Path
from typing import Any

import openpyxl

from rigidsheet.workbooks import recalculate
from rigidsheet.workbooks.templates import TEMPLATES

ROWS = 20_000
CASES = 1_000
TURNS = 3
# Inputs that differ from load case to load case; most of each sheet depends on them.
VARIED = {
    "bin-tipper": ("tilt_time", "eye_x", "efficiency"),
    "hoist-arm": ("arm_speed", "travel_speed", "ratio"),
    "shaker-arm": ("crank", "tray_mass", "slide_speed"),
    "swing-gate": ("run_time", "wind", "hand_rating"),
}


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


def process(*arguments: str, turns: int = TURNS) -> float:
    """Return the least time on the wall of the command as a whole [s], whatever its checks say."""
    found = []
    command = "from rigidsheet.workbooks.cli import main; main(prog_name='rigidsheet')"
    for _ in range(turns):
        start = time.perf_counter()
        done = subprocess.run([sys.executable, "-c", command, *arguments], capture_output=True, text=True)
        found.append(time.perf_counter() - start)
        if done.returncode not in (0, 1):
            raise SystemExit(done.stderr)
    return min(found)


def load_cases(book: Path, names: tuple[str, ...]) -> Path:
    """Write a table of load cases, each input between 95 % and 105 % of what the workbook holds."""
    held = openpyxl.load_workbook(book)
    values = []
    for name in names:
        sheet, _, cell = held.defined_names[name].attr_text.replace("$", "").partition("!")
        values.append(float(held[sheet.strip("'")][cell].value))
    path = book.with_suffix(".csv")
    with path.open("w", newline="") as file:
        table = csv.writer(file)
        table.writerow(names)
        for i in range(CASES):
            steps = [0.95 + 0.1 * ((7 * k + 1) * i % CASES) / CASES for k in range(len(names))]
            table.writerow([f"{value * step:.9g}" for value, step in zip(values, steps, strict=True)])
    return path


def templates() -> None:
    """Show each template recalculated by the command, and with its load cases."""
    print(f"\n{'the command as a whole':45} seconds   limit")
    with tempfile.TemporaryDirectory() as folder:
        for name, template in TEMPLATES.items():
            book = Path(folder) / f"{name}.xlsx"
            template.write(book, False)
            plain = process("recalc", str(book), "--to", str(book.with_name("done.xlsx")))
            print(f"{name + ', recalculated and written':45} {plain:7.2f}   1.00")
            cases = load_cases(book, VARIED[name])
            many = process("recalc", str(book), "--cases", str(cases), turns=1)
            print(f"{name + f', {CASES:,} load cases':45} {many:7.2f}  10.00")


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
    templates()


if __name__ == "__main__":
    main()
