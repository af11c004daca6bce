"""Every function in a live Calc gives what the same call gives headless."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
from host_book import write
from host_cases import HostCase, all_cases, kind_of_error
from live_calc import LiveCalc

from rigidsheet.udf.cells import CellError, Refusal

pytestmark = pytest.mark.live


def as_calc_sees(case: HostCase) -> Any:
    """Return the answer to expect in Calc, which decides about errors before we are asked.

    An error that stands alone passes through; an error inside a range is Err:504 whatever it was.
    """
    inside = any(
        isinstance(v, CellError) for c in case.cells if isinstance(c, list) for row in c for v in row
    )
    if inside:
        return {"error": "Err:504"}
    alone = kind_of_error(case.cells)
    if alone is not None:
        return {"error": alone}
    answer = case.expected()
    return {"error": answer.error} if isinstance(answer, Refusal) else answer


def holds_boolean(case: HostCase) -> bool:
    return "True" in repr(case.cells) or "False" in repr(case.cells)


def books(cases: list[HostCase]) -> list[list[HostCase]]:
    """Return the cases in groups for a workbook each.

    Calc cannot tell a blank cell, FALSE and 0 apart when the same call is made with each in one workbook;
    there the zero wins (see the tests of the sight).
    """
    blank = [c for c in cases if any(v is None for v in c.cells)]
    boolean = [c for c in cases if c not in blank and holds_boolean(c)]
    return [blank, boolean, [c for c in cases if c not in blank and c not in boolean]]


def largest(cells: Any) -> float:
    """Return the largest number among cells and blocks."""
    if isinstance(cells, (list, tuple)):
        return max(map(largest, cells), default=0.0)
    return abs(cells) if isinstance(cells, float) else 0.0


def differences(case: HostCase, expected: Any, got: list[list[Any]]) -> str:
    """Say where a block of cells differs from the expected answer, or nothing.

    Where the whole answer cancels to nothing, the last bits of its terms are all that is left.
    """
    if isinstance(expected, dict):
        return "" if got[0][0] == expected else f"expected {expected}, got {got[0][0]}"
    rows = expected if isinstance(expected, list) else [[expected]]
    scale, noise = largest(rows), 1e-15 * largest(case.cells)
    tolerance = 1e-12 * scale if scale > noise else noise
    for wanted, found in zip(rows, got, strict=True):
        for w, g in zip(wanted, found, strict=True):
            if isinstance(w, float) and not isinstance(w, bool):
                same = isinstance(g, float) and abs(w - g) <= tolerance
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
    calc.ask("calculate", doc)
    blocks = calc.read_each(doc, "Answers", [p.where for p in placed])
    calc.ask("close", doc)
    out = []
    for p, e, got in zip(placed, expected, blocks, strict=True):
        difference = differences(p.case, e, got)
        if difference:
            out.append(f"{p.case.label} {p.case.cells}: {difference}")
    return out


@pytest.mark.parametrize("literals", [False, True], ids=["cells", "values in the formula"])
def test_every_function(calc: LiveCalc, tmp_path: Path, literals: bool) -> None:
    cases = all_cases()
    assert len(cases) > 1000
    wrong: list[str] = []
    for number, group in enumerate(books(cases)):
        assert len(group) > 20
        wrong += run(calc, group, tmp_path / f"{number}.xlsx", literals)
    assert wrong == []
