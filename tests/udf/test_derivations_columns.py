"""Columns: a call of n rows gives what n calls give, for every function that takes columns."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from cell_calls import ask, column, refused, row, rows
from column_calls import BODY, CALLS, TENSOR, cell_of, pairs, tubes

from rigidsheet.udf.catalogue import FUNCTIONS

ROWS = (1, 2, 3, 4, 7)
# Here nothing but the spins could tell whether three of them are a column or x y z.
UPRIGHT = ("planar spin sum", "spin torque about z")

# Functions that answer one thing a call, and why.
NO_COLUMNS = {
    "RB_KIND": "a text",
    "RB_TENSOR": "one tensor of one body",
    "RB_TENSOR_CHECK": "one tensor of one body",
    "RB_PRINCIPAL": "one tensor of one body",
    "RB_ROLLUP": "the parts list is the column",
    "RB_PLATE": "the outline is the column",
    "RB_OMEGA_FROM": "the points are the column",
    "RB_RESULTANT": "the loads are the column",
    "RB_REACTIONS": "a body and tables",
    "RB_REACTIONS_3D": "a body and tables",
    "RB_DRIVE_TORQUE": "a body and tables",
    "RB_ANGULAR_MOMENTUM": "a body and its motion",
    "RB_KINETIC_ENERGY": "a body and its motion",
    "RB_ENVELOPE": "the cases are the column",
    "RB_WHY": "a question about one cell",
    "RB_WORKING": "a question about one cell",
}


def flat(answer: Any) -> list[Any]:
    """Return the answer of one row as a list."""
    return [v for line in answer for v in line] if isinstance(answer, list) else [answer]


def compare(whole: Any, alone: list[Any]) -> None:
    assert isinstance(whole, list)
    assert len(whole) == len(alone)
    for got, one in zip(whole, alone, strict=True):
        assert len(got) == len(one)
        if isinstance(one[0], str):
            assert got == one
        else:
            largest = max(abs(v) for v in one)
            np.testing.assert_allclose(got, one, rtol=1e-14, atol=1e-15 * largest)


@pytest.mark.parametrize(
    ("label", "count"), [(x, n) for x in CALLS for n in ROWS if not (n == 3 and x in UPRIGHT)]
)
def test_columns_equal_row_by_row(label, count):
    """Property: row k of the answer is the answer to row k."""
    name, arguments = CALLS[label]
    rng = np.random.default_rng([count, len(label)])
    made = [a(rng, count) if callable(a) else None for a in arguments]
    cells = [a if m is None else cell_of(m) for a, m in zip(arguments, made, strict=True)]
    alone = [
        flat(
            ask(
                name,
                *[a if m is None else cell_of(m[k : k + 1]) for a, m in zip(arguments, made, strict=True)],
            )
        )
        for k in range(count)
    ]
    if count == 1:
        assert flat(ask(name, *cells)) == alone[0]
        return
    compare(ask(name, *cells), alone)


def test_three_spins_alone_are_one_vector():
    """Rule of the cells: three numbers below each other are x y z unless another argument has three rows."""
    upright, flat_row = column([1.0, 2.0, 3.0]), row((1, 2, 3))
    assert ask("RB_SPIN_SUM", upright, upright) == ask("RB_SPIN_SUM", flat_row, flat_row) == [[2.0, 4.0, 6.0]]
    assert ask("RB_SPIN_TORQUE", TENSOR, upright, upright) == ask(
        "RB_SPIN_TORQUE", TENSOR, flat_row, flat_row
    )


@pytest.mark.parametrize("count", ROWS[1:])
def test_columns_of_instant_centers(count):
    """Property: row k of the answer is the answer to row k; rows of points that belong to one body."""
    made = pairs(np.random.default_rng(count), count)
    alone = [flat(ask("RB_INSTANT_CENTER_2", *(row(v[k]) for v in made))) for k in range(count)]
    compare(ask("RB_INSTANT_CENTER_2", *map(rows, made)), alone)


@pytest.mark.parametrize("count", ROWS[1:])
def test_columns_of_sizes(count):
    """Property: sizes in columns under labels, with a mass or density for all or for each."""
    made = tubes(np.random.default_rng(count), count)
    head = ["OD [mm]", "ID [mm]", "L [mm]"]
    for name, what in (("RB_SHAPE", ["Ixx"]), ("RB_SHAPE", []), ("RB_SHAPE_MASS", [])):
        for amount in (7850.0, column(range(1, count + 1))):
            each = [amount if isinstance(amount, float) else amount[k][0] for k in range(count)]
            alone = [
                flat(ask(name, "tube", m, [head, line], *what)) for m, line in zip(each, made, strict=True)
            ]
            compare(ask(name, "tube", amount, [head, *made], *what), alone)


def test_every_function_takes_columns_or_tells_why_not():
    covered = {name for name, _ in CALLS.values()} | {"RB_INSTANT_CENTER_2"}
    assert covered | set(NO_COLUMNS) == set(FUNCTIONS)
    assert not covered & set(NO_COLUMNS)


@pytest.mark.parametrize(
    ("name", "arguments"),
    [
        ("RB_TENSOR", [column([1, 2, 3]), 1.0, 1.0]),
        ("RB_KIND", [[["mm"], ["kg"]]]),
        ("RB_PLATE", [[[0.0, 0.0], [1.0, 0.0], [0.0, 1.0]], column([1, 2, 3]), 7850.0]),
        ("RB_MOVE", [BODY, "z", column([0.1, 0.2, 0.3]), "origin"]),
        ("RB_MOVE", [BODY, rows(np.eye(3)), 0.1, "origin", "y"]),
        ("RB_SHIFT_BACK", [TENSOR, 0.01, rows(np.eye(3))]),
    ],
)
def test_columns_where_none_fit_are_refused_with_a_sentence(name, arguments):
    said = refused(name, *arguments)
    assert said.error == "#VALUE!"
    assert "one" in said.reason or "text" in said.reason


@pytest.mark.parametrize("name", ["RB_VELOCITY_AT", "RB_MOMENT_SUM", "RB_INSTANT_CENTER_2"])
def test_columns_of_different_length_are_refused(name):
    cells = {
        "RB_VELOCITY_AT": [rows(np.eye(3)), column([1, 2]), rows(np.eye(3))],
        "RB_MOMENT_SUM": [column([1, 2, 3, 4]), 1.0, [[1.0, 0.0]] * 3, 0.0, 1.0, row((0, 0))],
        "RB_INSTANT_CENTER_2": [[[1.0, 0.0]] * 3, [[1.0, 0.0]] * 2, row((0, 0)), row((0, 1))],
    }[name]
    assert "a column as long as" in refused(name, *cells).reason


def test_the_row_at_fault_is_named():
    """First principles: the second pair of points stretches at 1 m/s."""
    points, velocities = [[0.0, 0.0]] * 3, [[0.0, 0.0]] * 3
    others, speeds = [[1.0, 0.0]] * 3, [[0.0, 1.0], [1.0, 0.0], [0.0, 2.0]]
    said = refused("RB_INSTANT_CENTER_2", points, velocities, others, speeds)
    assert "they move apart at 1 m/s" in said.reason
    assert "row 2" in said.reason


def test_units_beside_a_column_must_agree():
    """Rule of the cells: rows of number and unit are one column when the unit is the same in each."""
    assert ask("RB_CONVERT", [[1.0, "m"], [2.0, "m"], [3.0, "m"]], "mm") == [[1000.0], [2000.0], [3000.0]]
    said = refused("RB_CONVERT", [[1.0, "m"], [2.0, "mm"], [3.0, "m"]], "mm")
    assert "the units beside the numbers differ" in said.reason
    assert ask("RB_GD2", [[4.0, "kg*m^2"], [4.0e3, "kg*cm^2"]]) == [[1.0], [0.1]]
