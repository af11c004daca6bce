"""Columns: a call of n rows gives what n calls give, for every function that takes columns."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from cell_calls import OMITTED, ask, body_cells, column, refused, row, rows

from rigidsheet.udf.catalogue import FUNCTIONS

# A pattern of one argument: something that gives n rows, or the same cell for all rows.
Maker = Callable[[np.random.Generator, int], list[Any]]
ROWS = (1, 2, 3, 4, 7)


def scalars(low: float = 0.2, high: float = 2.0) -> Maker:
    return lambda rng, n: [[v] for v in rng.uniform(low, high, n).tolist()]


def vectors(width: int) -> Maker:
    return lambda rng, n: rng.normal(size=(n, width)).tolist()


def texts(unit: str) -> Maker:
    return lambda rng, n: [[f"{v:.6f} {unit}"] for v in rng.uniform(0.2, 2.0, n)]


ONE, TWO, THREE = scalars(), vectors(2), vectors(3)
TENSOR = rows([[2.0, 0.1, 0.0], [0.1, 3.0, 0.2], [0.0, 0.2, 4.0]])
BODY = body_cells(3.0, (0.4, -0.2, 0.7), TENSOR)
TUBE = "OD 120 mm; ID 90 mm; L 1.3 m"


def tubes(rng: np.random.Generator, n: int) -> list[list[float]]:
    return np.column_stack(
        (rng.uniform(100, 150, n), rng.uniform(20, 90, n), rng.uniform(100, 900, n))
    ).tolist()


def pairs(rng: np.random.Generator, n: int) -> list[Any]:
    """Return two points and their velocities of one body in the plane, a row each: handled below."""
    a, b, c = rng.normal(size=(3, n, 2))
    w = rng.uniform(1.0, 2.0, n)[:, None]
    turn = np.array([[0.0, 1.0], [-1.0, 0.0]])
    return [a, w * ((a - c) @ turn), b, w * ((b - c) @ turn)]


# Label: function, arguments; a list or text or number is one cell for all rows.
CALLS: dict[str, tuple[str, list[Any]]] = {
    "convert": ("RB_CONVERT", [texts("mm"), "in"]),
    "tensor of a shape": ("RB_SHAPE", ["tube", ONE, TUBE]),
    "moment of a shape": ("RB_SHAPE", ["tube", ONE, TUBE, "Izz", "kg*mm^2"]),
    "offset of a shape": ("RB_SHAPE", ["solid cone", ONE, "R 200 mm; H 1 m", "offset", "mm"]),
    "mass of a shape": ("RB_SHAPE_MASS", ["tube", scalars(1000, 8000), TUBE]),
    "shift": ("RB_SHIFT", [ONE, ONE, ONE]),
    "shift of a tensor": ("RB_SHIFT", [TENSOR, ONE, THREE]),
    "shift by vectors": ("RB_SHIFT", [ONE, 2.0, THREE]),
    "shift back": ("RB_SHIFT_BACK", [scalars(20, 30), ONE, ONE, "lb*ft^2"]),
    "turn": ("RB_TURN", [TENSOR, "z", ONE]),
    "turn about vectors": ("RB_TURN", [TENSOR, THREE, 0.4]),
    "axis": ("RB_AXIS_INERTIA", [TENSOR, THREE]),
    "axis off the center": ("RB_AXIS_INERTIA", [TENSOR, "x", ONE, THREE]),
    "gyration": ("RB_RADIUS_OF_GYRATION", [ONE, ONE, "mm"]),
    "gd2": ("RB_GD2", [texts("kgf*m^2")]),
    "gd2 from": ("RB_GD2_FROM", [ONE]),
    "tilt of a body": ("RB_MOVE", [BODY, "z", ONE, row((0.1, 0.2, 0.0)), "y", "mm"]),
    "tensor of a tilted body": ("RB_MOVE", [BODY, "y", ONE, "origin", "inertia"]),
    "center of a tilted body": ("RB_MOVE", [BODY, "x", ONE, "mass center", "center"]),
    "arm": ("RB_ARM", [TWO, THREE, "mm"]),
    "planar arm": ("RB_ARM", [TWO, TWO]),
    "planar velocity": ("RB_VELOCITY_AT", [TWO, ONE, TWO]),
    "velocity": ("RB_VELOCITY_AT", [row((1, 2, 3)), THREE, THREE]),
    "velocity, one spin": ("RB_VELOCITY_AT", [TWO, 1.5, TWO, "ft/s"]),
    "velocity of columns about z": ("RB_VELOCITY_AT", [THREE, ONE, THREE]),
    "planar acceleration": ("RB_ACCELERATION_AT", [TWO, ONE, ONE, TWO]),
    "centripetal": ("RB_ACCELERATION_AT", [THREE, THREE, ONE, THREE, "centripetal"]),
    "planar slider": ("RB_VELOCITY_SLIDING", [TWO, ONE, TWO, TWO]),
    "slider": ("RB_ACCELERATION_SLIDING", [THREE, THREE, THREE, THREE, THREE, THREE]),
    "coriolis": ("RB_ACCELERATION_SLIDING", [TWO, ONE, 0.0, TWO, TWO, TWO, "coriolis"]),
    "instant center": ("RB_INSTANT_CENTER", [TWO, TWO, ONE]),
    "planar spin sum": ("RB_SPIN_SUM", [ONE, ONE]),
    "spin sum": ("RB_SPIN_SUM", [THREE, THREE, ONE, OMITTED, "alpha"]),
    "alpha": ("RB_ANGULAR_ACCELERATION", [ONE, ONE, "deg/s^2"]),
    "torque": ("RB_TORQUE", [ONE, ONE]),
    "planar moment sum": ("RB_MOMENT_SUM", [ONE, ONE, TWO, ONE, ONE, TWO]),
    "planar moment sum at one spin": ("RB_MOMENT_SUM", [ONE, 2.0, TWO, 0.0, 1.1, row((-1.8, 0.4)), "lbf*ft"]),
    "planar moment sum of flat vectors": ("RB_MOMENT_SUM", [ONE, ONE, THREE, ONE, ONE, THREE]),
    "moment sum": ("RB_MOMENT_SUM", [TENSOR, ONE, THREE, THREE, THREE, THREE]),
    "planar moment": ("RB_MOMENT", [TWO, TWO]),
    "moment": ("RB_MOMENT", [THREE, THREE, "kN*m"]),
    "center acceleration": ("RB_CENTER_ACCELERATION", [THREE, ONE]),
    "spin torque": ("RB_SPIN_TORQUE", [TENSOR, THREE, THREE]),
    "spin torque about z": ("RB_SPIN_TORQUE", [TENSOR, ONE, ONE]),
    "reflected": ("RB_REFLECTED_INERTIA", [ONE, ONE]),
    "motor": ("RB_MOTOR_TORQUE", [ONE, ONE, scalars(0.5, 0.9), OMITTED, scalars(-1, 1)]),
    "margin": ("RB_MARGIN", [texts("kN"), "3 kN", 1.5]),
    "factors": ("RB_MARGIN", ["300 N", texts("kN"), ONE, "factor"]),
    "check": ("RB_CHECK", [texts("kN"), "1 kN"]),
}  # fmt: skip

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


def cell_of(block: list[list[Any]]) -> Any:
    return block[0][0] if len(block) == 1 and len(block[0]) == 1 else block


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
