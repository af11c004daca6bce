"""Calls through the cells, and the cells that hold a vector, a tensor, a body, for tests of the functions."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from rigidsheet.udf.calling import call
from rigidsheet.udf.cells import OMITTED, Refusal

Array = NDArray[np.float64]
TENSOR_LABELS = ("Ixx", "Iyy", "Izz", "Ixy", "Iyz", "Izx")


def row(vector: Any) -> list[list[float]]:
    """Return a vector as one row of cells."""
    return [[float(part) for part in vector]]


def rows(table: Any) -> list[list[float]]:
    """Return rows of numbers as a block of cells."""
    return [[float(part) for part in line] for line in np.asarray(table)]


def column(values: Any) -> list[list[float]]:
    """Return numbers as a column of cells."""
    return [[float(value)] for value in values]


def ask(name: str, *cells: Any) -> Any:
    """Return the answer of a call; a refusal fails the test with its sentence."""
    got = call(name, cells)
    assert not isinstance(got, Refusal), f"{name}: {got.reason}"
    return got


def number(name: str, *cells: Any) -> float:
    """Return the answer of a call that must be one number."""
    got = ask(name, *cells)
    assert type(got) is float, f"{name} gave {got!r}"
    return got


def array(name: str, *cells: Any) -> Array:
    """Return the answer of a call that must be a block of numbers."""
    got = ask(name, *cells)
    assert isinstance(got, list), f"{name} gave {got!r}"
    return np.array(got, dtype=float)


def vector(name: str, *cells: Any) -> Array:
    """Return the answer of a call that must be one row of numbers."""
    got = array(name, *cells)
    assert len(got) == 1, f"{name} gave {len(got)} rows"
    return got[0]


def refused(name: str, *cells: Any) -> Refusal:
    """Return the refusal of a call; an answer fails the test."""
    got = call(name, cells)
    assert isinstance(got, Refusal), f"{name} gave {got!r}"
    return got


def terms(tensor: Any) -> tuple[float, ...]:
    """Return Ixx, Iyy, Izz, Ixy, Iyz, Izx of a tensor."""
    t = np.asarray(tensor)
    return tuple(float(v) for v in (t[0, 0], t[1, 1], t[2, 2], t[0, 1], t[1, 2], t[2, 0]))


def body_cells(mass: float, center: Any, tensor: Any) -> list[list[Any]]:
    """Return the record of a body, as RB_ROLLUP writes it."""
    lines: list[list[Any]] = [["mass", float(mass), "kg"]]
    lines += [[k, float(v), "m"] for k, v in zip("xyz", center, strict=True)]
    lines += [[k, v, "kg*m^2"] for k, v in zip(TENSOR_LABELS, terms(tensor), strict=True)]
    return [*lines, ["products", "tensor terms", ""]]


def tensor_of_record(record: Sequence[Sequence[Any]]) -> tuple[float, Array, Array]:
    """Return mass, center and tensor that a body record holds, its products being tensor terms."""
    v = {line[0]: line[1] for line in record}
    assert v["products"] == "tensor terms"
    center = np.array([v[k] for k in "xyz"])
    tensor = np.diag([v["Ixx"], v["Iyy"], v["Izz"]])
    for label in ("Ixy", "Iyz", "Izx"):
        i, j = ("xyz".index(c) for c in label[1:])
        tensor[i, j] = tensor[j, i] = v[label]
    return v["mass"], center, tensor


def motion_cells(**lines: Any) -> list[list[Any]]:
    """Return a motion record; underscores stand for blanks, vectors spread over cells, all in SI."""
    units = {"velocity": "m/s", "acceleration": "m/s^2", "point": "m", "gravity": "m/s^2"}
    out: list[list[Any]] = []
    for key, value in lines.items():
        label = key.replace("_", " ")
        unit = {"omega": "rad/s", "alpha": "rad/s^2"}.get(label) or units[label.split()[-1]]
        if isinstance(value, str):
            out.append([label, value])
        elif np.ndim(value) == 0:
            out.append([label, float(value), unit])
        else:
            out.append([label, *(float(part) for part in value), unit])
    width = max(map(len, out))
    return [line + [None] * (width - len(line)) for line in out]


__all__ = [
    "OMITTED",
    "array",
    "ask",
    "body_cells",
    "column",
    "motion_cells",
    "number",
    "refused",
    "row",
    "rows",
    "tensor_of_record",
    "terms",
    "vector",
]
