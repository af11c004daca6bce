"""From a kernel's answer to cells: forms, units, records, and the gate that lets only finite numbers through."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import pytest

from rigidsheet.core.errors import AbsentError, InputError, KindError, PhysicsError
from rigidsheet.udf.declaration import Field, Form, Result, Row
from rigidsheet.udf.results import Expression, block, express, finite, gate_rows, has_unit, names, record
from rigidsheet.udf.units import kinds

NOT_FINITE = "not a finite number"


@pytest.mark.parametrize("value", [float("nan"), float("inf"), float("-inf")])
def test_the_gate_lets_no_such_number_through(value: float) -> None:
    for act in (
        lambda: finite(value),
        lambda: block(np.array([[1.0, value]])),
        lambda: gate_rows([["a", value]]),
        lambda: express(np.array([1.0, value]), Form.SCALAR, False),
        lambda: express(np.array([1.0, value, 0.0]), Form.VECTOR, True),
        lambda: express(np.full((3, 3), value), Form.TENSOR, False),
        lambda: record([Row("a", value, None)]),
    ):
        with pytest.raises(PhysicsError, match=NOT_FINITE):
            act()


FORMS: list[tuple[Any, Form, bool, Any]] = [
    (2.0, Form.SCALAR, False, 2.0),
    (np.float64(2.0), Form.SCALAR, False, 2.0),
    (np.array(2.0), Form.SCALAR, False, 2.0),
    (np.array([1.0, 2.0]), Form.SCALAR, False, [[1.0], [2.0]]),
    (np.array([1.0, 2.0, 0.0]), Form.VECTOR, True, [[1.0, 2.0]]),
    (np.array([1.0, 2.0, 3.0]), Form.VECTOR, False, [[1.0, 2.0, 3.0]]),
    (np.array([[1.0, 2.0, 0.0], [3.0, 4.0, 0.0]]), Form.VECTOR, True, [[1.0, 2.0], [3.0, 4.0]]),
    (np.array([1.0, 2.0, 3.0]), Form.SPACE, True, [[1.0, 2.0, 3.0]]),
    (np.array([0.0, 0.0, 3.0]), Form.SPIN, True, 3.0),
    (np.array([1.0, 2.0, 3.0]), Form.SPIN, False, [[1.0, 2.0, 3.0]]),
    (np.array([[0.0, 0.0, 3.0], [0.0, 0.0, 4.0]]), Form.SPIN, True, [[3.0], [4.0]]),
    (5.0, Form.TENSOR, False, 5.0),
    (np.array([5.0, 6.0]), Form.TENSOR, False, [[5.0], [6.0]]),
    (np.diag([1.0, 2.0, 3.0]), Form.TENSOR, False, [[1.0, 0.0, 0.0], [0.0, 2.0, 0.0], [0.0, 0.0, 3.0]]),
    ("OK", Form.TEXT, False, "OK"),
    (["OK", "FAIL"], Form.TEXT, False, [["OK"], ["FAIL"]]),
    (["one"], Form.TEXTS, False, "one"),
    (["one", "two"], Form.TEXTS, False, [["one"], ["two"]]),
    (
        [["part", "mass"], ["a", np.float64(1.0)], ["b"]],
        Form.TABLE,
        False,
        [["part", "mass"], ["a", 1.0], ["b", ""]],
    ),
]


@pytest.mark.parametrize(("value", "form", "planar", "cells"), FORMS)
def test_each_form_leaves_as_plain_cells(value: Any, form: Form, planar: bool, cells: Any) -> None:
    found = express(value, form, planar)
    assert found == cells
    flat = [v for row in found for v in row] if isinstance(found, list) else [found]
    assert all(type(v) in (float, str) for v in flat)


def test_a_negative_zero_leaves_as_zero() -> None:
    assert str(express(-0.0, Form.SCALAR, False)) == "0.0"
    assert str(express(np.array([-0.0, 1.0]), Form.SCALAR, False)) == "[[0.0], [1.0]]"


def test_a_record_is_rectangular_with_its_units() -> None:
    rows = [
        Row("a", 1.0, kinds.MASS),
        Row("v", np.array([1.0, 2.0, 3.0]), kinds.LENGTH),
        Row("w", "word", None),
    ]
    assert record(rows) == [
        ["a", 1.0, "", "", "kg"],
        ["v", 1.0, 2.0, 3.0, "m"],
        ["w", "word", "", "", ""],
    ]


@dataclass(frozen=True)
class Two:
    mass: float = 4.0
    length: float = 0.5
    share: float = 0.25
    record_problem: str = ""


TWO = Result(
    (
        Field("mass", kinds.MASS, "mass"),
        Field("length", kinds.LENGTH, "length"),
        Field("share", kinds.RATIO, "share", in_record=False),
    ),
    default="mass",
)
ONE = Result((Field("length", kinds.LENGTH, "length"),))


def test_one_of_several_results_and_its_unit() -> None:
    act = Expression(TWO)
    assert names(TWO) == ("mass", "length", "share")
    assert act(Two(), None, None, False) == 4.0
    assert act(Two(), "mass", "g", False) == 4000.0
    assert act(Two(), "length", "mm", False) == 500.0
    assert act({"mass": 1.0, "length": 2.0}, "length", None, False) == 2.0
    assert act(Two(), "all", None, False) == [["mass", 4.0, "kg"], ["length", 0.5, "m"]]
    with pytest.raises(InputError, match="`what` must be one only"):
        act(Two(record_problem="one only"), "all", None, False)


def test_a_unit_is_checked_before_the_kernel_runs() -> None:
    act, none = Expression(TWO), lambda: False
    act.check("mass", "lb", none)
    with pytest.raises(KindError, match=r"`unit` must be a unit of mass; got 'mm' \(length\)"):
        act.check("mass", "mm", none)
    with pytest.raises(InputError, match="left out for 'share', which carries no unit"):
        act.check("share", "mm", none)
    with pytest.raises(InputError, match=r"left out when all results are asked\. Choose one with `what`"):
        act.check("all", "kg", none)
    with pytest.raises(InputError, match="`what` must be given when columns are handed in"):
        act.check("all", None, lambda: True)
    act.check("mass", None, lambda: True)
    Expression(ONE).check(None, "mm", lambda: True)


def test_which_functions_take_a_unit() -> None:
    assert has_unit(ONE)
    assert not has_unit(
        Result((Field("share", kinds.RATIO, "share"), Field("word", None, "word", Form.TEXT)))
    )


def test_open_rows() -> None:
    act = Expression(Result((Field("alpha", kinds.ANGULAR_ACCELERATION, "when unknown"),), open=True))
    rows = [Row("A fx", 5.0, kinds.FORCE), Row("note", "word", None), Row("ratio", 2.0, None)]
    assert act(rows, None, None, False) == [["A fx", 5.0, "N"], ["note", "word", ""], ["ratio", 2.0, ""]]
    assert act(rows, "ALL", None, False) == act(rows, None, None, False)
    assert act(rows, "a  FX", "kN", False) == 0.005
    assert act(rows, "note", None, False) == "word"
    with pytest.raises(InputError, match="left out for 'ratio', which carries no unit"):
        act(rows, "ratio", "N", False)
    with pytest.raises(
        AbsentError, match=r"`what` must be a row of the result; got 'A fz'. Did you mean 'A fx'\?"
    ):
        act(rows, "A fz", None, False)
    with pytest.raises(KindError, match="`unit` must be a unit of force; got 'mm'"):
        act(rows, "A fx", "mm", False)
