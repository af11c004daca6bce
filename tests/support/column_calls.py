"""A call with columns for every function that takes them, for the tests and the speed table."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
from cell_calls import OMITTED, body_cells, row, rows

# A pattern of one argument: something that gives n rows, or the same cell for all rows.
Maker = Callable[[np.random.Generator, int], list[Any]]


def scalars(low: float = 0.2, high: float = 2.0) -> Maker:
    return lambda rng, n: [[v] for v in rng.uniform(low, high, n).tolist()]


def vectors(width: int) -> Maker:
    return lambda rng, n: rng.normal(size=(n, width)).tolist()


def texts(unit: str) -> Maker:
    return lambda rng, n: [[f"{v:.6f} {unit}"] for v in rng.uniform(0.2, 2.0, n)]


def beside(unit: str) -> Maker:
    """Numbers beside their unit, the way a calc sheet is laid out."""
    return lambda rng, n: [[v, unit] for v in rng.uniform(0.2, 2.0, n).tolist()]


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
    "convert": ("RB_CONVERT", [beside("mm"), "in"]),
    "convert texts": ("RB_CONVERT", [texts("mm"), "in"]),
    "tensor of a shape": ("RB_SHAPE", ["tube", ONE, TUBE]),
    "moment of a shape": ("RB_SHAPE", ["tube", ONE, TUBE, "Izz", "kg*mm^2"]),
    "offset of a shape": ("RB_SHAPE", ["solid cone", ONE, "R 200 mm; H 1 m", "offset", "mm"]),
    "mass of a shape": ("RB_SHAPE_MASS", ["tube", scalars(1000, 8000), TUBE]),
    "shift": ("RB_SHIFT", [ONE, ONE, ONE]),
    "shift of a tensor": ("RB_SHIFT", [TENSOR, ONE, row((0.3, -0.2, 0.9))]),
    "shift by vectors": ("RB_SHIFT", [ONE, 2.0, THREE]),
    "shift back": ("RB_SHIFT_BACK", [scalars(20, 30), ONE, ONE, "lb*ft^2"]),
    "turn": ("RB_TURN", [TENSOR, "z", ONE]),
    "turn about vectors": ("RB_TURN", [TENSOR, THREE, 0.4]),
    "axis": ("RB_AXIS_INERTIA", [TENSOR, THREE]),
    "axis off the center": ("RB_AXIS_INERTIA", [TENSOR, "x", ONE, THREE]),
    "gyration": ("RB_RADIUS_OF_GYRATION", [ONE, beside("lb"), "mm"]),
    "gd2": ("RB_GD2", [beside("kgf*m^2")]),
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
    "margin": ("RB_MARGIN", [beside("kN"), "3 kN", 1.5]),
    "factors": ("RB_MARGIN", ["300 N", texts("kN"), ONE, "factor"]),
    "check": ("RB_CHECK", [texts("kN"), "1 kN"]),
}  # fmt: skip


def cell_of(block: list[list[Any]]) -> Any:
    return block[0][0] if len(block) == 1 and len(block[0]) == 1 else block
