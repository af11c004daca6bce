"""A small workbook as a person makes one, for the tests of the command: inputs, results, one check."""

from __future__ import annotations

from pathlib import Path

import openpyxl
from openpyxl.workbook.defined_name import DefinedName

GRAVITY = 9.80665  # m/s^2, standard value of the 3rd General Conference on Weights and Measures

INPUTS = (
    ("Mass", 180.0, "kg", "m"),
    ("Arm", 400.0, "mm", "arm"),
    ("Acceleration", "40 deg/s^2", None, "alpha"),
    ("Inertia", 28.0, "kg*m^2", "I_G"),
    ("Pin capacity", 15.0, "kN", "pin_capacity"),
    ("Table row", 2.0, None, "row_number"),
)


def write(path: Path, extra: dict[str, str] | None = None) -> Path:
    """Write the workbook; `extra` adds formulas to the sheet of results, by address."""
    book = openpyxl.Workbook()
    inputs = book.active
    inputs.title = "Inputs"
    for row, (label, value, unit, name) in enumerate(INPUTS, start=2):
        inputs.cell(row, 1, label)
        inputs.cell(row, 2, value)
        inputs.cell(row, 3, unit)
        book.defined_names[name] = DefinedName(name, attr_text=f"Inputs!$B${row}")
    results = book.create_sheet("Load cases")
    lines = (
        ("Inertia about the hinge", "=RB_SHIFT(Inputs!B5:C5,Inputs!B2:C2,Inputs!B3:C3)", "kg*m^2", "I_B"),
        ("Torque", "=RB_TORQUE(B1,Inputs!B4)", "N*m", "torque"),
        ("Weight", f"=m*{GRAVITY}", "N", "weight"),
        ("Looked up", "=OFFSET(Inputs!B1,row_number-1,0)", None, "looked_up"),
    )
    for row, (label, formula, unit, name) in enumerate(lines, start=1):
        results.cell(row, 1, label)
        results.cell(row, 2, formula)
        results.cell(row, 3, unit)
        book.defined_names[name] = DefinedName(name, attr_text=f"'Load cases'!$B${row}")
    for place, formula in (extra or {}).items():
        results[place] = formula
    checks = book.create_sheet("Checks")
    for column, head in enumerate(("Check", "Demand", "Capacity", "Margin", "Verdict"), start=1):
        checks.cell(1, column, head)
    checks["A2"] = "Pin load"
    checks["B2"] = "='Load cases'!B3"
    checks["C2"] = '=RB_CONVERT(Inputs!B6:C6,"N")'
    checks["D2"] = "=RB_MARGIN(B2,C2,2)"
    checks["E2"] = '=RB_CHECK(B2,C2,"at most",2)'
    book.save(path)
    return path


def inertia(mass: float, arm: float, own: float = 28.0) -> float:
    """Parallel axis, Steiner's theorem: I_B = I_G + m r^2."""
    return own + mass * arm * arm
