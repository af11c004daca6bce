"""From a kernel's answer to cells: choosing a result, converting its unit, and the one gate at the end."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, Final

import numpy as np

from ..core.errors import AbsentError, InputError, PhysicsError
from .cells import Answer
from .declaration import Field, Form, Result, Row
from .reading.words import hint
from .units.factors import factor
from .units.kinds import Kind
from .units.quantities import folded
from .working import NOT_FINITE

ALL: Final = "all"


def names(result: Result) -> tuple[str, ...]:
    """Return the words that `what` takes."""
    return tuple(f.name for f in result.fields)


def dimensional(kind: Kind | None) -> bool:
    """Say whether a result of this kind carries a unit."""
    return kind is not None and kind.si not in ("", "-", "1")


def has_unit(result: Result) -> bool:
    """Say whether the function takes a `unit`."""
    return any(dimensional(f.kind) for f in result.fields)


def sample_unit(result: Result) -> str:
    return next(f.kind.si for f in result.fields if f.kind is not None and dimensional(f.kind))


def attribute(answer: Any, name: str) -> Any:
    """Return one field of a kernel's answer, which is a mapping or a record with attributes."""
    if isinstance(answer, dict):
        return answer[name]
    return getattr(answer, name.replace(" ", "_"))


class Expression:
    """Turns what a kernel gave into cells; compiled once a function."""

    def __init__(self, result: Result) -> None:
        self.result = result
        self._single = result.fields[0] if len(result.fields) == 1 and not result.open else None
        self._fields = {f.name: f for f in result.fields}

    def chosen(self, what: str | None) -> Field | None:
        """Return the field asked for, None for the whole record."""
        if self._single is not None:
            return self._single
        word = what or self.result.default
        if word is None or word == ALL:
            return None
        return self._fields[word]

    def check(self, what: str | None, unit: str | None, columns: Callable[[], bool]) -> None:
        """Refuse a `unit` or a record that cannot be, before the kernel runs."""
        if self.result.open:
            if unit is not None and (what is None or folded(what) == ALL):
                raise InputError("unit", "left out when all rows are asked", remedy="Choose one with `what`")
            return
        field = self.chosen(what)
        if unit is not None:
            if field is None:
                raise InputError(
                    "unit", "left out when all results are asked", remedy="Choose one with `what`"
                )
            if not dimensional(field.kind):
                raise InputError("unit", f"left out for '{field.name}', which carries no unit")
            assert field.kind is not None
            factor(unit, field.kind, "unit")
        if field is None and not self.result.gathers and columns():
            raise InputError("what", "given when columns are handed in: one result for each row")

    def __call__(self, answer: Any, what: str | None, unit: str | None, planar: bool) -> Answer:
        if self.result.open:
            return open_rows(answer, what, unit)
        field = self.chosen(what)
        if field is None:
            problem = getattr(answer, "record_problem", "")
            if problem:
                raise InputError("what", problem)
            return record(
                [Row(f.name, attribute(answer, f.name), f.kind) for f in self.result.fields if f.in_record]
            )
        value = answer if self._single is not None else attribute(answer, field.name)
        if unit is not None and field.kind is not None:
            value = value / factor(unit, field.kind, "unit")
        return express(value, field.form, planar)


def express(value: Any, form: Form, planar: bool) -> Answer:
    """Return a value as cells in its form."""
    if form is Form.SCALAR:
        if type(value) is float:
            return finite(value)
        array = np.asarray(value, dtype=float)
        if array.ndim == 0:
            return finite(float(array))
        return block(array.reshape(-1, 1))
    if form is Form.TEXT:
        return value if isinstance(value, str) else [[str(t)] for t in value]
    if form is Form.TEXTS:
        return [[str(t)] for t in value] if len(value) > 1 else str(value[0])
    if form is Form.TABLE:
        return gate_rows(value)
    array = np.asarray(value, dtype=float)
    if form is Form.SPIN and planar and array.ndim and array.shape[-1] == 3:
        array = array[..., 2]
        return finite(float(array)) if array.ndim == 0 else block(array.reshape(-1, 1))
    if form is Form.TENSOR or array.ndim == 0:
        return finite(float(array)) if array.ndim == 0 else block(array.reshape(len(array), -1))
    if planar and form is Form.VECTOR:
        array = array[..., :2]
    return block(array.reshape(-1, array.shape[-1]))


def finite(value: float) -> float:
    """The gate for one number: nothing but finite floats leaves, and no negative zero."""
    if value - value != 0.0:
        raise PhysicsError("", NOT_FINITE)
    return value + 0.0


def block(array: Any) -> Answer:
    """The gate for numbers in rows."""
    if not np.isfinite(array).all():
        finite(float("nan"))
    return (array + 0.0).tolist()  # type: ignore[no-any-return]


def gate_rows(rows: Any) -> Answer:
    """The gate for rows of texts and numbers: rectangular, padded with empty text."""
    width = max(len(r) for r in rows)
    out: list[list[float | str]] = []
    for r in rows:
        cells: list[float | str] = [c if isinstance(c, str) else finite(float(c)) for c in r]
        out.append(cells + [""] * (width - len(cells)))
    return out


def record(rows: list[Row]) -> Answer:
    """Return rows of label, value(s) and unit; values of one component stand in the second column."""
    values = [shown_values(r.value) for r in rows]
    width = max(map(len, values))
    return [
        [r.label, *v, *[""] * (width - len(v)), r.kind.si if dimensional(r.kind) else ""]  # type: ignore[union-attr]
        for r, v in zip(rows, values, strict=True)
    ]


def shown_values(value: Any) -> list[float | str]:
    """Return the cells of one line of a record."""
    if isinstance(value, str):
        return [value]
    if isinstance(value, float):
        return [finite(float(value))]
    return [finite(v) for v in np.ravel(value).tolist()]


def open_rows(rows: list[Row], what: str | None, unit: str | None) -> Answer:
    """Return all rows, or the one that `what` names."""
    if what is None or folded(what) == ALL:
        return record(rows)
    row = next((r for r in rows if folded(r.label) == folded(what)), None)
    if row is None:
        raise AbsentError("what", "a row of the result", what, remedy=hint(what, [r.label for r in rows]))
    if isinstance(row.value, str):
        return row.value
    value = row.value
    if unit is not None:
        if row.kind is None or not dimensional(row.kind):
            raise InputError("unit", f"left out for '{row.label}', which carries no unit")
        value = value / factor(unit, row.kind, "unit")
    return express(value, Form.VECTOR if np.ndim(value) else Form.SCALAR, False)
