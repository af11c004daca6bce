"""What a cell may hold where vectors, spins, offsets and tensors are asked."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from cell_answers import answer, flat, refused

from rigidsheet.udf.cells import OMITTED

# RB_ARM is to - from: with the origin as `from` the answer is what the second argument means in meters.
FT = 0.3048  # exact since 1959
VECTORS: list[tuple[Any, list[float]]] = [
    ([[0.4, 0.25]], [0.4, 0.25]),
    ([[0.4], [0.25]], [0.4, 0.25]),
    ([[0.4, 0.25, "m"]], [0.4, 0.25]),
    ([[400.0, 250.0, "mm"]], [0.4, 0.25]),
    ([[400.0], [250.0], ["mm"]], [0.4, 0.25]),
    ([["400", 250.0, "mm"]], [0.4, 0.25]),
    ([["400 mm", "0.25 m"]], [0.4, 0.25]),
    ([["400 mm", 0.25]], [0.4, 0.25]),
    ([[400.0, "mm"], [0.25, "m"]], [0.4, 0.25]),
    ([[400.0, 0.25], ["mm", "m"]], [0.4, 0.25]),
    ("(0.4, 0.25) m", [0.4, 0.25]),
    ("(400, 250) mm", [0.4, 0.25]),
    ("(400 mm, 0.25 m)", [0.4, 0.25]),
    ("(0.4, 0.25)", [0.4, 0.25]),
    ("(−0.4, 0.25) m", [-0.4, 0.25]),
    ([[1.0, 2.0, "ft"]], [FT, 2 * FT]),
]
SPACE: list[tuple[Any, list[float]]] = [
    ([[1.2, 0.0, -0.5]], [1.2, 0.0, -0.5]),
    ([[1.2], [0.0], [-0.5]], [1.2, 0.0, -0.5]),
    ([[1.2, 0.0, -0.5, "m"]], [1.2, 0.0, -0.5]),
    ([[1200.0], [0.0], [-500.0], ["mm"]], [1.2, 0.0, -0.5]),
    ([[1.2, "m"], [0.0, "m"], [-500.0, "mm"]], [1.2, 0.0, -0.5]),
    ([[1.2, 0.0, -500.0], ["m", "m", "mm"]], [1.2, 0.0, -0.5]),
    ("(1.2, 0, -0.5) m", [1.2, 0.0, -0.5]),
    ("(1200, 0, -500) mm", [1.2, 0.0, -0.5]),
]


@pytest.mark.parametrize(("cell", "si"), VECTORS)
def test_two_numbers_are_x_y_and_the_answer_is_planar(cell: Any, si: list[float]) -> None:
    assert answer("RB_ARM", [[0.0, 0.0]], cell) == [[pytest.approx(v, rel=1e-14) for v in si]]


@pytest.mark.parametrize(("cell", "si"), SPACE)
def test_three_numbers_are_x_y_z(cell: Any, si: list[float]) -> None:
    assert answer("RB_ARM", [[0.0, 0.0, 0.0]], cell) == [[pytest.approx(v, rel=1e-14) for v in si]]
    # beside a planar vector z is 0
    assert answer("RB_ARM", [[0.0, 0.0]], cell) == [[pytest.approx(v, rel=1e-14) for v in si]]


ROWS: list[tuple[Any, list[list[float]]]] = [
    ([[1.0, 2.0], [3.0, 4.0]], [[1.0, 2.0], [3.0, 4.0]]),
    ([[1.0, 2.0], [3.0, 4.0], [5.0, 6.0]], [[1.0, 2.0], [3.0, 4.0], [5.0, 6.0]]),
    ([[1.0, 2.0, "mm"], [3.0, 4.0, "m"]], [[1e-3, 2e-3], [3.0, 4.0]]),
    ([[1.0, 2.0], [3.0, 4.0], ["mm", "m"]], [[1e-3, 2.0], [3e-3, 4.0]]),
    ([["mm", "m"], [1.0, 2.0], [3.0, 4.0]], [[1e-3, 2.0], [3e-3, 4.0]]),
    ([[1.0, 2.0, 3.0], [4.0, 5.0, 6.0]], [[1.0, 2.0, 3.0], [4.0, 5.0, 6.0]]),
    ([[1.0, 2.0, 3.0, "mm"], [4.0, 5.0, 6.0, "mm"]], [[1e-3, 2e-3, 3e-3], [4e-3, 5e-3, 6e-3]]),
    (np.eye(3).tolist(), np.eye(3).tolist()),
    ([["1 mm", 2.0], [3.0, 4.0]], [[1e-3, 2.0], [3.0, 4.0]]),
]


@pytest.mark.parametrize(("cell", "si"), ROWS)
def test_rows_of_vectors(cell: Any, si: list[list[float]]) -> None:
    found = answer("RB_ARM", [[0.0, 0.0]], cell)
    assert found == [[pytest.approx(v, rel=1e-14) for v in row] for row in si]


REFUSED: list[tuple[Any, tuple[str, ...]]] = [
    (None, ("`to_point` must be a length vector", "a blank cell")),
    ("", ("a blank cell",)),
    (True, ("the boolean TRUE",)),
    (0.4, ("x y or x y z", "the single number 0.4")),
    ("400 mm", ("x y or x y z", "'400 mm'")),
    ("(0.4; 0.25) m", ("'(0.4; 0.25) m'",)),
    ("(0.4, 0.25", ("'(0.4, 0.25'", "(0.4, 0.25) m'")),
    ("(0.4,0.25) m", ("Write a blank after each comma",)),
    ("(0.4) m", ("'(0.4) m'",)),
    ("(1, 2, 3, 4) m", ("'(1, 2, 3, 4) m'",)),
    ("(1 mm, 2) m", ("Write the unit once",)),
    ("(1, nan) m", ("a length",)),
    ("(1, 2) kg", ("'kg' (mass)",)),
    ([[0.4, None]], ("a blank cell", "component y")),
    ([[0.4, None, 0.25]], ("a blank cell", "component y")),
    ([[0.4, "", 0.25]], ("a blank cell", "component y")),
    ([[400.0, None, "mm"]], ("a number in mm", "a blank cell", "component y")),
    ([[400.0, True, "mm"]], ("the boolean TRUE", "component y")),
    ([[400.0, "250 mm", "mm"]], ("two units", "component y")),
    ([[400.0, math.nan, "mm"]], ("NaN", "component y")),
    ([[0.4, math.inf]], ("a finite number", "component y")),
    ([["mm", 400.0, 250.0]], ("the unit after the numbers", "'mm' first")),
    ([["mm"], [400.0], [250.0]], ("the unit after the numbers", "'mm' first")),
    ([[400.0, 250.0, "kg"]], ("'kg' (mass)",)),
    ([[400.0, "mm"], [0.25, "kg"]], ("'kg' (mass)", "component y")),
    ([[400.0, "mm"], [0.25, None]], ("the unit cell is blank", "row 2")),
    ([[1.0, 2.0, 3.0, 4.0]], ("a block of 1 x 4 cells",)),
    ([[1.0, 2.0, 3.0, "mm", "mm"]], ("a block of 1 x 5 cells",)),
    ([[1.0], [2.0], [3.0], [4.0]], ("a block of",)),
    ([[1.0, 2.0], [3.0, None]], ("a blank cell", "row 2")),
    ([[1.0, 2.0], [None, None], [3.0, 4.0]], ("a blank cell", "row 2")),
    ([[1.0, 2.0, "mm"], [3.0, 4.0, None]], ("the unit cell is blank", "row 2")),
    ([[1.0, 2.0], [3.0, 4.0], ["mm", "kg"]], ("'kg' (mass)",)),
    ([[1.0, "kg"]], ("the single number 1",)),
    ([[1.0, "mm"]], ("x y or x y z", "the single number 1")),
]


@pytest.mark.parametrize(("cell", "says"), REFUSED)
def test_no_vector(cell: Any, says: tuple[str, ...]) -> None:
    refused("RB_ARM", [[[0.0, 0.0]], cell], *says)


def test_rows_of_vectors_broadcast_against_one_vector_only() -> None:
    two, three = [[1.0, 2.0], [3.0, 4.0]], [[0.0, 0.0], [1.0, 1.0], [2.0, 2.0]]
    assert answer("RB_ARM", [[1.0, 1.0]], two) == [[0.0, 1.0], [2.0, 3.0]]
    assert answer("RB_ARM", two, [[1.0, 1.0]]) == [[0.0, -1.0], [-2.0, -3.0]]
    assert answer("RB_ARM", two, two) == [[0.0, 0.0], [0.0, 0.0]]
    refused("RB_ARM", [two, three], "`to_point`", "a column as long as `from_point`, 2 rows", "got 3 rows")


# v = omega x r with A at rest. Planar: omega (-ry, rx).
STILL, ARM = [[0.0, 0.0]], [[2.0, 1.0]]


@pytest.mark.parametrize(
    "omega", [3.0, "3 rad/s", [[3.0, "rad/s"]], [[3.0], ["rad/s"]], [[3.0]], f"{90 / math.pi} rev/min"]
)
def test_a_spin_as_one_number_is_about_z(omega: Any) -> None:
    assert flat("RB_VELOCITY_AT", STILL, omega, ARM) == pytest.approx([-3.0, 6.0], rel=1e-9)


@pytest.mark.parametrize(
    "omega",
    [
        [[1.0, 2.0, 3.0]],
        [[1.0, 2.0, 3.0, "rad/s"]],
        "(1, 2, 3) rad/s",
        [["1 rad/s", 2.0, "3 rad/s"]],
    ],
)
def test_a_spin_as_x_y_z(omega: Any) -> None:
    # (1, 2, 3) x (2, 1, 0) = (2*0 - 3*1, 3*2 - 1*0, 1*1 - 2*2)
    assert flat("RB_VELOCITY_AT", STILL, omega, ARM) == [-3.0, 6.0, -3.0]


UPRIGHT = ([[1.0], [2.0], [3.0]], [[1.0], [2.0], [3.0], ["rad/s"]])


@pytest.mark.parametrize("omega", UPRIGHT)
def test_three_spins_below_each_other_are_x_y_z_in_a_call_in_space(omega: Any) -> None:
    assert flat("RB_VELOCITY_AT", STILL, omega, [[2.0, 1.0, 0.0]]) == [-3.0, 6.0, -3.0]
    assert flat("RB_SPIN_SUM", omega, [[0.0, 0.0, 2.0]]) == [1.0, 2.0, 5.0]
    assert flat("RB_SPIN_SUM", omega, omega) == [2.0, 4.0, 6.0]
    assert flat("RB_SPIN_TORQUE", np.eye(3).tolist(), omega, 0.0) == [0.0, 0.0, 0.0]


@pytest.mark.parametrize("omega", UPRIGHT)
def test_three_spins_below_each_other_are_not_guessed_at_in_a_planar_call(omega: Any) -> None:
    says = ("`omega` must be clear", "x y z or three cases", "side by side")
    refused("RB_VELOCITY_AT", [STILL, omega, ARM], *says)
    refused("RB_ACCELERATION_AT", [STILL, omega, [[0.0], [0.0], [0.0]], ARM], *says)
    refused("RB_SPIN_SUM", [omega, 2.0], "`omega_1` must be clear")
    refused("RB_MOMENT_SUM", [2.0, 3.0, ARM, 0.0, [[1.0], [2.0], [3.0]], STILL], "`alpha` must be clear")


def test_three_spins_below_each_other_are_a_column_when_the_call_has_three_rows() -> None:
    arms = [[2.0, 1.0], [2.0, 1.0], [2.0, 1.0]]
    assert answer("RB_VELOCITY_AT", STILL, [[1.0], [2.0], [3.0]], arms) == [
        [-1.0, 2.0],
        [-2.0, 4.0],
        [-3.0, 6.0],
    ]
    with_unit = [[1.0], [2.0], [3.0], ["rad/s"]]
    assert answer("RB_VELOCITY_AT", STILL, with_unit, arms) == [[-1.0, 2.0], [-2.0, 4.0], [-3.0, 6.0]]


def test_two_or_four_spins_below_each_other_are_a_column() -> None:
    assert answer("RB_VELOCITY_AT", STILL, [[1.0], [2.0]], ARM) == [[-1.0, 2.0], [-2.0, 4.0]]
    assert answer("RB_VELOCITY_AT", STILL, [[1.0], [2.0], [3.0], [4.0]], ARM)[3] == [-4.0, 8.0]
    assert answer("RB_VELOCITY_AT", STILL, [["rad/s"], [1.0], [2.0]], ARM) == [[-1.0, 2.0], [-2.0, 4.0]]
    assert answer("RB_VELOCITY_AT", STILL, [[1.0], [2.0], ["rad/s"]], ARM) == [[-1.0, 2.0], [-2.0, 4.0]]


def test_rows_of_spins() -> None:
    found = answer("RB_VELOCITY_AT", STILL, [[0.0, 0.0, 1.0], [1.0, 2.0, 3.0]], ARM)
    assert found == [[-1.0, 2.0, 0.0], [-3.0, 6.0, -3.0]]
    found = answer("RB_VELOCITY_AT", STILL, [[0.0, 0.0, 1.0, "rad/s"], [1.0, 2.0, 3.0, "rad/s"]], ARM)
    assert found == [[-1.0, 2.0, 0.0], [-3.0, 6.0, -3.0]]


@pytest.mark.parametrize(
    ("omega", "says"),
    [
        ("(1, 2) rad/s", ("one number about z, or x y z", "two numbers")),
        ([[1.0, 2.0, "rad/s"], [1.0, 2.0, "rad/s"]], ("one number about z, or x y z", "two numbers")),
        ([[1.0, 2.0]], ("`omega`", "a block of 1 x 2 cells")),
        ([[1.0, 2.0, "rad/s"]], ("`omega`",)),
        ([["rad/s", 3.0]], ("the unit after the number",)),
        ([[1.0, None, 3.0]], ("a blank cell", "component y")),
        ("12 Hz", ("`omega` must be an angular velocity", "'Hz'")),
        ("12 1/s", ("'1/s'",)),
        (True, ("the boolean TRUE",)),
        (None, ("a blank cell",)),
    ],
)
def test_no_spin(omega: Any, says: tuple[str, ...]) -> None:
    refused("RB_VELOCITY_AT", [STILL, omega, ARM], *says)


# RB_SHIFT: I + m d^2 for a number, I + m ((d.d) E - d d^T) for a tensor. m = 2 kg, I = 1 kg m^2.
@pytest.mark.parametrize(
    ("offset", "distance"),
    [
        (0.5, 0.5),
        ("500 mm", 0.5),
        ([[500.0, "mm"]], 0.5),
        ([[500.0], ["mm"]], 0.5),
        ([[0.3, 0.4]], 0.5),
        ([[0.3, 0.4, 7.0]], 0.5),  # z does not count for an axis along z
        ([[300.0, 400.0, 7.0, "mm"]], 0.5),
        ([[300.0, "mm"], [0.4, "m"]], 0.5),
        ("(0.3, 0.4) m", 0.5),
        ("(-0.3, 0.4) m", 0.5),
        ([[300.0, 400.0], ["mm", "mm"]], 0.5),
    ],
)
def test_an_offset_is_a_distance_or_a_vector(offset: Any, distance: float) -> None:
    assert flat("RB_SHIFT", 1.0, 2.0, offset) == pytest.approx([1.0 + 2.0 * distance**2], rel=1e-14)


def test_distances_below_each_other_are_a_column() -> None:
    pair = [[2.0], [2.0]]
    assert flat("RB_SHIFT", 1.0, pair, [[0.1], [0.2]]) == pytest.approx([1.02, 1.08], rel=1e-14)
    assert flat("RB_SHIFT", 1.0, pair, [[100.0], [200.0], ["mm"]]) == pytest.approx([1.02, 1.08], rel=1e-14)
    masses, distances = [[1.0], [2.0], [3.0]], [[0.1], [0.2], [0.3]]
    assert flat("RB_SHIFT", 1.0, masses, distances) == pytest.approx([1.01, 1.08, 1.27], rel=1e-14)
    assert flat("RB_SHIFT", 1.0, 1.0, [[0.1], [0.2], [0.3], [0.4]]) == pytest.approx([1.01, 1.04, 1.09, 1.16])
    assert flat("RB_SHIFT", 1.0, 2.0, [[0.3, 0.4], [0.6, 0.8]]) == pytest.approx([1.5, 3.0])


def test_two_or_three_offsets_below_each_other_are_not_guessed_at() -> None:
    refused("RB_SHIFT", [1.0, 2.0, [[0.3], [0.4], [0.5]]], "x y z or three distances", "side by side")
    refused("RB_SHIFT", [1.0, 2.0, [[0.3], [0.4], [0.5], ["m"]]], "x y z or three distances")
    refused("RB_SHIFT", [1.0, 2.0, [[0.3], [0.4]]], "x y or two distances", "side by side")
    refused("RB_SHIFT_BACK", [1.0, 2.0, [[300.0], [400.0], ["mm"]]], "x y or two distances")
    # for a tensor they can only be x y z
    flat_one = answer("RB_SHIFT", np.eye(3).tolist(), 2.0, [[0.3], [0.4]])
    assert flat_one == answer("RB_SHIFT", np.eye(3).tolist(), 2.0, [[0.3, 0.4]])
    upright = answer("RB_SHIFT", np.eye(3).tolist(), 2.0, [[0.3], [0.4], [0.5]])
    assert upright == answer("RB_SHIFT", np.eye(3).tolist(), 2.0, [[0.3, 0.4, 0.5]])


@pytest.mark.parametrize(
    ("offset", "says"),
    [
        (-0.5, ("of zero or more", "-0.5 m")),
        ([[0.1], [-0.2], [0.3], [0.4]], ("of zero or more", "row 2")),
        (None, ("a blank cell",)),
        ([["mm", 0.5]], ("the unit after the number",)),
        ("(0.3, x) m", ("`offset`",)),
        ([[0.3, None]], ("blank",)),
        ([[0.3, None, 0.1]], ("a blank cell",)),
        (True, ("the boolean TRUE",)),
    ],
)
def test_no_offset(offset: Any, says: tuple[str, ...]) -> None:
    refused("RB_SHIFT", [1.0, 2.0, offset], *says)


def test_a_tensor_needs_a_vector() -> None:
    refused("RB_SHIFT", [np.eye(3).tolist(), 2.0, 0.5], "`offset` must be a vector x y z for a tensor")
    refused("RB_SHIFT", [np.eye(3).tolist(), 2.0, [[0.1], [0.2], [0.3], [0.4]]], "`offset`")


TENSOR = [[2.0, -0.1, 0.0], [-0.1, 3.0, 0.2], [0.0, 0.2, 4.0]]


def scaled(factor: float) -> list[list[Any]]:
    return [[v * factor for v in row] for row in TENSOR]


# With a vanishing offset RB_SHIFT gives back the tensor as it was read.
@pytest.mark.parametrize(
    "cell",
    [
        TENSOR,
        [[*row, "kg*m^2"] for row in TENSOR],
        [[*row, "kg*cm^2"] for row in scaled(1e4)],
        [[*scaled(1e4)[0], "kg*cm^2"], [*scaled(1e4)[1], None], [*scaled(1e4)[2], ""]],
        [[*scaled(1e4)[0], None], [*scaled(1e4)[1], None], [*scaled(1e4)[2], "kg*cm^2"]],
        [*scaled(1e4), ["kg*cm^2", None, None]],
        [*scaled(1e4), ["kg*cm^2"] * 3],
        [["kg*cm^2", "x", "y", "z"], *[[k, *row] for k, row in zip("xyz", scaled(1e4), strict=True)]],
    ],
)
def test_a_tensor_with_or_without_its_unit(cell: Any) -> None:
    found = np.array(answer("RB_SHIFT", cell, 1.0, [[0.0, 0.0, 0.0]]))
    assert found == pytest.approx(np.array(TENSOR), rel=1e-14, abs=1e-15)


@pytest.mark.parametrize(
    ("cell", "says"),
    [
        (2.0, ("three rows of three numbers",)),
        ([[1.0, 2.0], [3.0, 4.0]], ("a block of 2 x 2 cells",)),
        (np.ones((5, 3)).tolist(), ("a block of 5 x 3 cells",)),
        ([[2.0, -0.1, 0.0], [0.1, 3.0, 0.2], [0.0, 0.2, 4.0]], ("symmetric", "xy = -0.1 but yx = 0.1")),
        ([[2.0, None, 0.0], [-0.1, 3.0, 0.2], [0.0, 0.2, 4.0]], ("a blank cell", "term xy")),
        ([[2.0, True, 0.0], [-0.1, 3.0, 0.2], [0.0, 0.2, 4.0]], ("the boolean TRUE", "term xy")),
        ([[2.0, math.nan, 0.0], [-0.1, 3.0, 0.2], [0.0, 0.2, 4.0]], ("NaN", "term xy")),
        ([[*TENSOR[0], "kg*m^2"], [*TENSOR[1], "kg*cm^2"], [*TENSOR[2], None]], ("one unit", "2 units")),
        ([[*row, None] for row in TENSOR], ("one unit", "0 units")),
        ([[*row, 5.0] for row in TENSOR], ("one unit",)),
        ([[*row, "kg"] for row in TENSOR], ("'kg' (mass)",)),
        (None, ("a blank cell",)),
    ],
)
def test_no_tensor(cell: Any, says: tuple[str, ...]) -> None:
    refused("RB_TENSOR_CHECK", [cell], "`inertia`", *says)


def test_where_one_moment_will_do_a_number_is_taken_too() -> None:
    assert answer("RB_SHIFT", "1 kg*m^2", 2.0, 0.5) == 1.5
    # moment about B of the planar body: I alpha with B in the mass center
    at_rest = [[0.0, 0.0]]
    assert answer("RB_MOMENT_SUM", 2.0, 1.0, at_rest, 0.0, 3.0, at_rest) == 6.0
    assert flat("RB_MOMENT_SUM", np.diag([1.0, 1.0, 2.0]).tolist(), 1.0, at_rest, 0.0, 3.0, at_rest) == [
        0.0,
        0.0,
        6.0,
    ]


def test_the_unit_of_a_vector_result() -> None:
    assert flat("RB_ARM", STILL, ARM, "mm") == [2000.0, 1000.0]
    assert flat("RB_ARM", STILL, ARM, OMITTED) == [2.0, 1.0]
    refused("RB_ARM", [STILL, ARM, "kg"], "`unit` must be a unit of length", "'kg' (mass)")
    refused("RB_ARM", [STILL, ARM, 5.0], "`unit` must be a text", "5")
