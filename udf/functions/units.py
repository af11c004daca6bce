"""Units: converting a quantity, and saying what a unit means."""

from __future__ import annotations

from typing import Any

from ...core.errors import InputError, KindError
from ..arguments import asked
from ..declaration import Arg, CellFunction, Example, Field, Form, Result
from ..kinds import Kind
from ..units import readings
from ..words import Amount, AnyQuantity, Text
from ..working import num

GROUP = "Units"


def common_kinds(first: str, second: str) -> list[tuple[Kind, float, float]]:
    """Return the kinds both unit texts can be, with the factor to SI of each."""
    other = {kind.name: f for kind, f in readings(second)}
    return [(kind, f, other[kind.name]) for kind, f in readings(first) if kind.name in other]


def kinds_text(unit: str) -> str:
    """Word what a unit text can be: 'mass or force'."""
    return " or ".join(dict.fromkeys(kind.name for kind, _ in readings(unit)))


def conversion(quantity: Amount, unit: str) -> tuple[Kind, float, float]:
    """Return kind and factors of a conversion, refusing what does not fit or is ambiguous."""
    if not quantity.unit:
        raise InputError(
            "quantity",
            f"a number with its unit; got {num(quantity.number)} alone",
            remedy="Write it like '400 mm'",
        )
    common = common_kinds(quantity.unit, unit)
    if not common:
        raise KindError(
            "unit",
            f"a unit of {kinds_text(quantity.unit)}, like '{quantity.unit}'; got '{unit}' ({kinds_text(unit)})",
        )
    ratios = {f"{f / g:.12g}" for _, f, g in common}
    if len(ratios) > 1:
        names = " or ".join(kind.name for kind, _, _ in common)
        raise InputError("unit", f"clear about the kind; '{quantity.unit}' to '{unit}' can be {names}")
    return common[0]


def convert(quantity: Amount, unit: str) -> float:
    if quantity.unit == unit:
        conversion(quantity, unit)
        return quantity.number
    _, to_si, from_si = conversion(quantity, unit)
    return quantity.number * (to_si / from_si)


def convert_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    quantity, unit = values
    kind, to_si, from_si = conversion(quantity, unit)
    return [
        f"Conversion of {asked(kind)}",
        f"1 {quantity.unit} = {num(to_si, 10)} {kind.si}; 1 {unit} = {num(from_si, 10)} {kind.si}",
        f"{num(quantity.number, 10)} {quantity.unit} * {num(to_si, 10)} / {num(from_si, 10)} = {num(answer, 10)} {unit}",
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
