"""What a cell may hold where one quantity is asked: numbers, texts with units, unit cells, columns."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from cell_answers import answer, flat, refused

from rigidsheet.udf.cells import OMITTED, CellError

# RB_TORQUE is I alpha: with alpha = 1 rad/s^2 the answer is what the first cell means in kg m^2.
LB_IN2 = 0.45359237 * 0.0254**2  # kg m^2, from the exact pound and inch of 1959
MEANS: list[tuple[Any, float]] = [
    (0.4, 0.4),
    (44927.0, 44927.0),  # a date is a number to the program
    ("0.4", 0.4),
    (" 0.4 ", 0.4),
    ("0.4 kg*m^2", 0.4),
    ("0.4 kg·m²", 0.4),
    ("400 kg*cm^2", 0.04),
    ("2500000kg*mm^2", 2.5),
    ("5e-1 kg m2", 0.5),
    ("+.5 kg*m^2", 0.5),
    ("8 lb-in2", 8 * LB_IN2),
    ([[0.4, "kg*m^2"]], 0.4),
    ([[400.0, "kg*cm^2"]], 0.04),
    ([[400.0], ["kg*cm^2"]], 0.04),
    ([["400", "kg*cm^2"]], 0.04),
    ([[400.0, "[kg*cm^2]"]], 0.04),
    ([[400.0, " kg*cm^2 "]], 0.04),
    ([[8.0, "lb-in2"]], 8 * LB_IN2),
    ([[0.4]], 0.4),
    ([["400 kg*cm^2"]], 0.04),
]


@pytest.mark.parametrize(("cell", "si"), MEANS)
def test_one_quantity(cell: Any, si: float) -> None:
    assert answer("RB_TORQUE", cell, 1.0) == pytest.approx(si, rel=1e-14)


COLUMNS: list[tuple[Any, list[float]]] = [
    ([[1.0], [2.0], [3.0]], [1.0, 2.0, 3.0]),
    ([[1.0], [2.0], ["kg*cm^2"]], [1e-4, 2e-4]),
    ([["kg*cm^2"], [1.0], [2.0]], [1e-4, 2e-4]),
    ([["1 kg*cm^2"], ["2 kg*m^2"], [3.0]], [1e-4, 2.0, 3.0]),
    ([[1.0, "kg*cm^2"], [2.0, "kg*m^2"]], [1e-4, 2.0]),
    ([[1.0, "kg*m^2"], [2.0, "kg*m^2"], [5.0, "kg*m^2"]], [1.0, 2.0, 5.0]),
    ([["1"], ["2"], ["kg*cm^2"]], [1e-4, 2e-4]),
]


@pytest.mark.parametrize(("cell", "si"), COLUMNS)
def test_a_column_gives_a_column(cell: Any, si: list[float]) -> None:
    assert answer("RB_TORQUE", cell, 1.0) == [[pytest.approx(v, rel=1e-14)] for v in si]


REFUSED: list[tuple[Any, tuple[str, ...]]] = [
    (None, ("`inertia` must be a moment of inertia", "a blank cell")),
    ("", ("`inertia` must be a moment of inertia", "a blank cell")),
    (" ", ("`inertia`",)),
    (True, ("the boolean TRUE",)),
    (False, ("the boolean FALSE",)),
    (math.nan, ("a finite number", "NaN")),
    (math.inf, ("a finite number", "beyond all bounds")),
    (-math.inf, ("a finite number",)),
    ("nan", ("Write a finite number.",)),
    ("1e999 kg*m^2", ("The largest is about 1e308.",)),
    ("1.7e308 slug*ft^2", ("a finite number",)),
    ([[1.7e308, "slug*ft^2"], [1.0, "slug*ft^2"]], ("a finite number", "row 1")),
    ("0,4", ("'0,4'", "Write 0.4 with a point.")),
    ("0,4 kg*m^2", ("Write 0.4 kg*m^2 with a point.",)),
    ("1 250", ("Write 1250 without the space.",)),
    ("1 1/2", ("Write 1.5",)),
    ("2**3", ("Write the result",)),
    ("kg*m^2", ("'kg*m^2'",)),
    ("m 5", ("The number comes first",)),
    ("400 mm", ("`inertia` must be a moment of inertia", "'mm' (length)")),
    ("5 furlongs", ("'furlongs'",)),
    ("kg", ("'kg'",)),
    ([["kg*m^2", 0.4]], ("the unit after the number", "'kg*m^2' first", "Put the number first")),
    ([["kg*m^2"], [0.4]], ("the unit after the number", "Put the number first")),
    ([["kg*m^2", None]], ("the unit after the number",)),
    ([[0.4, None]], ("the unit cell beside 0.4 is blank", "kg*m^2")),
    ([[0.4, ""]], ("the unit cell beside 0.4 is blank",)),
    ([[None, "kg*m^2"]], ("a number in kg*m^2", "a blank cell")),
    ([["kg*m^2", "0.4"]], ("the unit after the number",)),
    ([["5 kg*cm^2", "kg*cm^2"], [1.0, "kg*cm^2"]], ("two units", "row 1")),
    ([[True, "kg*m^2"]], ("the boolean TRUE",)),
    ([[math.nan, "kg*m^2"]], ("a finite number",)),
    ([["5 kg*m^2", "kg*m^2"]], ("two units", "'kg*m^2'")),
    ([[0.4, "kg"]], ("'kg' (mass)",)),
    ([[0.4, 0.5]], ("one cell, a number beside its unit, or a column", "a block of 1 x 2 cells")),
    ([[0.4, 0.5, 0.6]], ("a block of 1 x 3 cells",)),
    ([[0.4, 0.5, "kg*m^2"]], ("a block of 1 x 3 cells",)),
    ([[1.0, 2.0], [3.0, 4.0]], ("a block of 2 x 2 cells",)),
    ([[1.0], [None], [3.0]], ("a blank cell", "row 2")),
    ([[1.0], [""], [3.0]], ("a blank cell", "row 2")),
    ([[1.0], [True], ["kg*m^2"]], ("the boolean TRUE", "row 2")),
    ([["kg*cm^2"], [1.0], [None]], ("a blank cell", "row 3")),
    ([[1.0], ["2 kg*m^2"], ["kg*m^2"]], ("in one unit", "row 2")),
    ([[1.0], ["2 kg*m^2"], ["kg*cm^2"]], ("in one unit", "row 2")),
    ([[1.0], ["kg*m^2"], [3.0]], ("row 2",)),
    ([[1.0, "kg*m^2"], [2.0, None]], ("the unit cell is blank", "row 2")),
    ([[1.0, "kg*m^2"], [2.0, "kg"]], ("'kg' (mass)", "row 2")),
    ([[1.0], [-2.0], [3.0]], ("of zero or more", "-2 kg*m^2", "row 2")),
    (-1.0, ("of zero or more", "-1 kg*m^2")),
    ("-1 kg*cm^2", ("of zero or more", "-0.0001 kg*m^2")),
    ("−1 kg*m^2", ("of zero or more", "-1 kg*m^2")),  # a Unicode minus is a minus
]


@pytest.mark.parametrize(("cell", "says"), REFUSED)
def test_what_is_refused_and_why(cell: Any, says: tuple[str, ...]) -> None:
    refused("RB_TORQUE", [cell, 1.0], *says)


def test_a_unicode_minus_is_a_minus() -> None:
    assert answer("RB_TORQUE", 2.0, "−4 rad/s^2") == -8.0
    assert answer("RB_TORQUE", 2.0, [["−4", "rad/s^2"]]) == -8.0


def test_columns_must_be_equally_long_or_single() -> None:
    three, two, one = [[1.0], [2.0], [3.0]], [[1.0], [2.0]], [[2.0]]
    assert flat("RB_TORQUE", three, 2.0) == [2.0, 4.0, 6.0]
    assert flat("RB_TORQUE", three, one) == [2.0, 4.0, 6.0]
    assert flat("RB_TORQUE", 2.0, three) == [2.0, 4.0, 6.0]
    assert flat("RB_TORQUE", three, three) == [1.0, 4.0, 9.0]
    refused("RB_TORQUE", [three, two], "`alpha`", "a column as long as `inertia`, 3 rows", "got 2 rows")


def test_a_column_of_one_number_and_its_unit_is_one_value() -> None:
    assert answer("RB_TORQUE", [[2.0], ["kg*m^2"]], [[3.0], ["rad/s^2"]]) == 6.0


# RB_TURN turns the tensor diag(1, 2, 3) about z; by 90 degrees x and y change places.
DIAGONAL = [[1.0, 0.0, 0.0], [0.0, 2.0, 0.0], [0.0, 0.0, 3.0]]
Z = [[0.0, 0.0, 1.0]]


@pytest.mark.parametrize(
    "angle",
    [
        math.pi / 2,
        "90 deg",
        "90°",
        [[90.0, "deg"]],
        [[90.0], ["deg"]],
        "0.25 rev",
        "450 deg",
        [[2.5 * math.pi, "rad"]],
    ],
)
def test_an_angle_in_radians_or_with_its_unit(angle: Any) -> None:
    assert np.array(answer("RB_TURN", DIAGONAL, Z, angle)) == pytest.approx(
        np.diag([2.0, 1.0, 3.0]), abs=1e-12
    )


@pytest.mark.parametrize("angle", [90.0, -7.0, "90", 2 * math.pi * (1 + 1e-12), [["90"]]])
def test_a_bare_angle_beyond_one_turn_is_refused_with_the_hint(angle: Any) -> None:
    refused("RB_TURN", [DIAGONAL, Z, angle], "`angle`", "without a unit", "more than one turn", "deg'")


def test_one_whole_turn_in_radians_is_still_bare() -> None:
    assert np.array(answer("RB_TURN", DIAGONAL, Z, 2 * math.pi)) == pytest.approx(
        np.diag([1.0, 2.0, 3.0]), abs=1e-12
    )


# An error stays the error it is, wherever it stands.
@pytest.mark.parametrize("error", ["#N/A", "#DIV/0!", "#REF!", "#NUM!", "#NAME?", "#NULL!", "#VALUE!"])
def test_an_error_that_enters_leaves_as_the_same_error(error: str) -> None:
    bad = CellError(error)
    for cells in (
        [bad, 1.0],
        [1.0, bad],
        [[[1.0], [bad]], 1.0],
        [[[bad, "kg*m^2"]], 1.0],
        [True, bad],
        [1.0, 1.0, bad],
    ):
        refused("RB_TORQUE", cells, f"the error {error}, which passes through", error=error)


def test_the_first_of_two_errors_counts() -> None:
    refused("RB_TORQUE", [CellError("#REF!"), CellError("#N/A")], "`inertia`", error="#REF!")


@pytest.mark.parametrize(
    "cell",
    [
        2,
        np.float64(2.0),
        np.int64(2),
        np.float32(2.0),
        ((2,),),
        [[2]],
        [2],
        (2.0,),
        np.array([[2.0]]),
        np.array([2]),
        np.array(2.0),
    ],
    ids=repr,
)
def test_hosts_that_hand_over_other_numbers_and_blocks(cell: Any) -> None:
    assert answer("RB_TORQUE", cell, 3) == 6.0


def test_blocks_of_other_makes() -> None:
    assert flat("RB_TORQUE", np.array([[1.0], [2.0]]), 3) == [3.0, 6.0]
    assert flat("RB_TORQUE", ((1,), (2,)), 3) == [3.0, 6.0]
    assert flat("RB_TORQUE", [[1], [2]], np.array([[3], [4]])) == [3.0, 8.0]
    assert flat("RB_TORQUE", np.array([[1.0], ["kg*m^2"]], dtype=object), 3.0) == [3.0]
    assert answer("RB_TORQUE", np.str_("2 kg*m^2"), 3.0) == 6.0


@pytest.mark.parametrize(
    ("cell", "says"),
    [
        ([[1.0], [2.0, 3.0]], "must be rectangular"),
        ([[]], "must be rectangular and not empty"),
        ([], "must be rectangular and not empty"),
        ([[[[1.0, 2.0]]]], "rows and columns only"),
        (10**400, "a finite number"),
        (np.bool_(True), "the boolean TRUE"),
        (1 + 2j, "(1+2j)"),
        ({"a": 1}, "`inertia`"),
        (b"5", "`inertia`"),
    ],
    ids=repr,
)
def test_what_no_host_should_hand_over(cell: Any, says: str) -> None:
    refused("RB_TORQUE", [cell, 1.0], says)


def test_omitted_is_neither_blank_nor_zero() -> None:
    refused("RB_TORQUE", [OMITTED, 1.0], "`inertia` must be given", "the argument is missing")
    refused("RB_TORQUE", [1.0], "`alpha` must be given", "the argument is missing")
    refused("RB_TORQUE", [], "`inertia` must be given")
    refused("RB_TORQUE", [1.0, 1.0, "N*m", 1.0], "RB_TORQUE takes at most 3 arguments; got 4")
    # a required factor left out is 1, a blank one is refused
    assert answer("RB_MARGIN", "10 N", "20 N", OMITTED, "margin") == 1.0
    refused("RB_MARGIN", ["10 N", "20 N", None, "margin"], "`required_factor`", "a blank cell")
    refused("RB_TORQUE", [1.0, 1.0, None], "`unit` must be a text", "a blank cell")
    assert answer("RB_TORQUE", 1.0, 1.0, OMITTED) == 1.0
