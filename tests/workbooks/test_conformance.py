"""The built-in functions that templates and users' sheets need, against values from outside the engine."""

from __future__ import annotations

import conformance
import pytest
import workbook_parts as parts

from rigidsheet.workbooks import recalculate
from rigidsheet.workbooks.errors import FormulaRefused
from rigidsheet.workbooks.evaluation.builtins import VERIFIED_FUNCTIONS
from rigidsheet.workbooks.evaluation.formulas import analyse, resolver

DATA = parts.sheet(parts.rows({ref: parts.cell(ref, value) for ref, value in conformance.DATA.items()}))


def worked_out(formula: str) -> object:
    book = parts.workbook({"Formulas": {"A1": f"={formula}"}, "Data": DATA})
    return recalculate(book, functions={}).values["Formulas", "A1"]


@pytest.mark.parametrize("case", [c for c in conformance.CASES if not c.engine], ids=lambda c: c.formula)
def test_formula_gives_the_value_from_outside(case: conformance.Case) -> None:
    found = worked_out(case.formula)
    assert type(found) is type(case.value)
    if isinstance(case.value, float):
        assert found == pytest.approx(case.value, rel=1e-14, abs=1e-14)
    else:
        assert found == case.value


@pytest.mark.parametrize("case", [c for c in conformance.CASES if c.engine], ids=lambda c: c.formula)
def test_formula_that_the_engine_gets_wrong_is_refused(case: conformance.Case) -> None:
    with pytest.raises(FormulaRefused, match=r"engine|no function|the whole of"):
        worked_out(case.formula)


def test_the_verified_functions_are_those_of_the_table() -> None:
    good = [case for case in conformance.CASES if not case.engine]
    assert {f for case in good for f in analyse(case.formula, resolver(())).functions} == VERIFIED_FUNCTIONS
    assert len(good) > 60


def test_a_function_without_a_check_value_is_named_in_a_warning() -> None:
    book = parts.workbook({"S": {"A1": "=ERF(0)", "A2": "=ERF(1)", "A3": "=SQRT(4)"}})
    [warning] = recalculate(book, functions={}).warnings
    assert warning.kind == "function"
    assert "S!A1 calls ERF" in str(warning)
