"""Units: converting a quantity, and saying what a unit means."""

from __future__ import annotations

from typing import Any

import numpy as np

from ...core.errors import InputError
from ..declaration import Arg, CellFunction, Example, Field, Form, Result
from ..reading.words import Amount, AnyQuantity, Text
from ..units.amounts import kinds_text, shared_kind
from ..units.factors import readings
from ..units.kinds import Kind
from ..units.quantities import asked
from ..working import num

GROUP = "Units"


def conversion(quantity: Amount, unit: str) -> tuple[Kind, float, float]:
    """Return kind and factors of a conversion, refusing what does not fit or is ambiguous."""
    if not quantity.unit:
        raise InputError(
            "quantity", "a number with its unit; got a bare number", remedy="Write it like '400 mm'"
        )
    return shared_kind("unit", quantity.unit, unit)


def convert(quantity: Amount, unit: str) -> Any:
    _, to_si, from_si = conversion(quantity, unit)
    return quantity.number if to_si == from_si else quantity.number * to_si / from_si


def convert_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    quantity, unit = values
    number, rows = (quantity.number, 1) if np.ndim(quantity.number) == 0 else (quantity.number[0], 2)
    result = answer if rows == 1 else answer[0]
    kind, to_si, from_si = conversion(quantity, unit)
    return [
        f"Conversion of {asked(kind)}",
        f"1 {quantity.unit} = {num(to_si, 10)} {kind.si}; 1 {unit} = {num(from_si, 10)} {kind.si}",
        f"{num(number, 10)} {quantity.unit} * {num(to_si, 10)} / {num(from_si, 10)} = {num(result, 10)} {unit}",
    ]


def kind_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    return [
        f"'{values[0]}' is read as {kind.name}: 1 {values[0]} = {num(f, 10)} {kind.si}"
        for kind, f in readings(values[0])
    ]


FUNCTIONS = (
    CellFunction(
        name="RB_CONVERT",
        group=GROUP,
        line="A quantity in another unit of the same kind.",
        args=(
            Arg("quantity", AnyQuantity(), "number with its unit, in one cell or two"),
            Arg("unit", Text(example="in"), "the unit wanted"),
        ),
        result=Result((Field("number", None, "the number in the unit wanted"),)),
        kernel=convert,
        working=convert_working,
        source="NIST SP 811, appendix B (factors); exact definitions of the units",
        examples=(Example('=RB_CONVERT("1450 rpm", "rad/s")', "Speed of the tipper's motor in SI."),),
    ),
    CellFunction(
        name="RB_KIND",
        group=GROUP,
        line="What a unit text measures, as Rigidsheet reads it.",
        args=(Arg("unit", Text(example="lb-ft"), "the unit text"),),
        result=Result((Field("kind", None, "name of the kind, or of each it can be", Form.TEXT),)),
        kernel=kinds_text,
        working=kind_working,
        source="SI Brochure, 9th edition; NIST SP 811",
        examples=(Example('=RB_KIND("lb-ft")', "Whether lb-ft is read as a torque."),),
    ),
)
