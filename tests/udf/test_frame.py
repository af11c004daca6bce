"""The frame of a call: when it is planar, how many rows it has, and what the first row is."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from rigidsheet.core.errors import InputError
from rigidsheet.udf.declaration import Arg
from rigidsheet.udf.frame import Frame
from rigidsheet.udf.reading.arguments import Offset, Scalar, Spin, Tensor, Vector
from rigidsheet.udf.reading.sizes import Sizes
from rigidsheet.udf.reading.words import Amount, AnyQuantity, Choice
from rigidsheet.udf.units import kinds

MASS = Arg("mass", Scalar(kinds.MASS), "")
ARM = Arg("arm", Vector(kinds.LENGTH), "")
OMEGA = Arg("omega", Spin(kinds.ANGULAR_VELOCITY), "")
INERTIA = Arg("inertia", Tensor(kinds.INERTIA, planar=True), "")
OFFSET = Arg("offset", Offset(kinds.LENGTH), "")
SIZES = Arg("sizes", Sizes(), "")
DEMAND = Arg("demand", AnyQuantity(), "")
WORD = Arg("word", Choice(("a", "b")), "")


def aligned(arguments: tuple[Arg, ...], cells: list[Any]) -> tuple[list[Any], bool, int]:
    """Return the aligned values of some cells, whether the call is planar, and how many rows it has."""
    frame = Frame(arguments)
    values = [a.shape.reader(a.name, None)(c) for a, c in zip(arguments, cells, strict=True)]
    values, planar = frame.align(values)
    return values, planar, frame.first_row(values)[1]


@pytest.mark.parametrize(
    ("arm", "omega", "planar"),
    [
        ([[1.0, 2.0]], 3.0, True),
        ([[1.0, 2.0, 0.0]], 3.0, False),
        ([[1.0, 2.0]], [[0.0, 0.0, 3.0]], False),
        ([[1.0, 2.0], [3.0, 4.0]], 3.0, True),
        ([[1.0, 2.0]], [[1.0], [2.0]], True),
        ([[1.0, 2.0, 0.0]], [[1.0], [2.0], [3.0]], False),
        ([[1.0, 2.0]] * 3, [[1.0], [2.0], [3.0]], True),
    ],
)
def test_planar_is_when_nothing_came_in_space(arm: Any, omega: Any, planar: bool) -> None:
    (r, w), found, _ = aligned((ARM, OMEGA), [arm, omega])
    assert found is planar
    assert r.shape[-1] == w.shape[-1] == 3


def test_a_tensor_makes_the_call_spatial() -> None:
    assert aligned((INERTIA, ARM, OMEGA), [2.0, [[1.0, 2.0]], 3.0])[1]
    assert not aligned((INERTIA, ARM, OMEGA), [np.eye(3).tolist(), [[1.0, 2.0]], 3.0])[1]


def test_a_planar_vector_gets_z_zero_and_a_spin_lies_along_z() -> None:
    (r, w), _, _ = aligned((ARM, OMEGA), [[[1.0, 2.0], [3.0, 4.0]], [[5.0], [6.0]]])
    assert r.tolist() == [[1.0, 2.0, 0.0], [3.0, 4.0, 0.0]]
    assert w.tolist() == [[0.0, 0.0, 5.0], [0.0, 0.0, 6.0]]


@pytest.mark.parametrize(
    ("arguments", "cells", "rows"),
    [
        ((MASS, ARM), [1.0, [[1.0, 2.0]]], 1),
        ((MASS, ARM), [[[1.0], [2.0]], [[1.0, 2.0]]], 2),
        ((MASS, ARM), [[[1.0], [2.0]], [[1.0, 2.0], [3.0, 4.0]]], 2),
        ((MASS, INERTIA), [[[1.0], [2.0], [3.0], [4.0]], np.eye(3).tolist()], 4),
        ((INERTIA, OFFSET), [[[1.0], [2.0]], [[0.1], [0.2]]], 2),
        ((MASS, SIZES), [1.0, [["OD [m]"], [1.0], [2.0], [3.0]]], 3),
        ((MASS, DEMAND), [1.0, [["1 N"], ["2 N"]]], 2),
        ((WORD, MASS), ["a", 2.0], 1),
    ],
)
def test_how_many_rows_a_call_has(arguments: tuple[Arg, ...], cells: list[Any], rows: int) -> None:
    assert aligned(arguments, cells)[2] == rows


@pytest.mark.parametrize(
    ("arguments", "cells", "late"),
    [
        ((MASS, ARM), [[[1.0], [2.0]], [[1.0, 2.0]] * 3], "arm"),
        ((ARM, OMEGA), [[[1.0, 2.0]] * 2, [[1.0]] * 4], "omega"),
        ((MASS, OFFSET), [[[1.0], [2.0]], [[1.0]] * 4], "offset"),
        ((MASS, SIZES), [[[1.0], [2.0]], [["OD [m]"], [1.0], [2.0], [3.0]]], "sizes"),
        ((MASS, DEMAND), [[[1.0], [2.0]], [["1 N"]] * 3], "demand"),
        ((ARM, MASS), [np.eye(3).tolist(), [[1.0], [2.0]]], "mass"),
    ],
)
def test_columns_of_unequal_length_are_refused(
    arguments: tuple[Arg, ...], cells: list[Any], late: str
) -> None:
    with pytest.raises(
        InputError, match=rf"`{late}` must be a column as long as `\w+`, \d rows, or one value; got \d rows"
    ):
        aligned(arguments, cells)


def test_the_first_row_of_everything() -> None:
    arguments = (MASS, ARM, INERTIA, SIZES, DEMAND, WORD)
    frame = Frame(arguments)
    table: list[Any] = [["OD [m]", "L [m]"], [1.0, 5.0], [2.0, 6.0]]
    cells: list[Any] = [
        [[1.0], [2.0]],
        [[1.0, 2.0], [3.0, 4.0]],
        np.eye(3).tolist(),
        table,
        [["7 N"], ["8 N"]],
        "a",
    ]
    values = [a.shape.reader(a.name, None)(c) for a, c in zip(arguments, cells, strict=True)]
    values, _ = frame.align(values)
    (mass, arm, inertia, sizes, demand, word), rows = frame.first_row(values)
    assert rows == 2
    assert mass == 1.0
    assert arm.tolist() == [1.0, 2.0, 0.0]
    assert inertia.tolist() == np.eye(3).tolist()
    assert sizes == {"OD": 1.0, "L": 5.0}
    assert demand == Amount(7.0, "N")
    assert word == "a"
