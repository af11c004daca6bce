"""Units as sheets use them: beside a value, inside a text, given to a function."""

from __future__ import annotations

from functools import lru_cache

from rigidsheet.core.errors import RigidsheetError
from rigidsheet.udf.cells import Value
from rigidsheet.udf.units.factors import readings
from rigidsheet.udf.units.kinds import KINDS
from rigidsheet.udf.units.numbers import split_quantity
from rigidsheet.udf.units.quantities import is_unit_text
from rigidsheet.udf.units.spellings import canonical

from .errors import InputRefused


def unit_in(value: Value) -> str:
    """Return the unit text that a cell holds, or an empty text when it holds something else."""
    return value if isinstance(value, str) and _is_unit(value) else ""


@lru_cache(maxsize=4096)
def _is_unit(text: str) -> bool:
    if len(text) > 30 or not is_unit_text(text):
        return False
    try:
        return bool(readings(text))
    except RigidsheetError:
        return False


def common_unit_in(value: Value) -> str:
    """Return the unit text that a cell holds when it is one of the common spellings, else an empty text.

    Where a label may stand as well as a unit, a word such as Bar or Rod must not become one.
    """
    return value if isinstance(value, str) and _is_common_unit(value) else ""


@lru_cache(maxsize=4096)
def _is_common_unit(text: str) -> bool:
    if len(text) > 30 or not is_unit_text(text):
        return False
    try:
        plain = canonical(text)
    except RigidsheetError:
        return False
    return any(plain in kind.spellings for kind in KINDS)


@lru_cache(maxsize=4096)
def is_si_unit(unit: str) -> bool:
    """Tell whether a number in this unit is an SI number for some kind of quantity."""
    try:
        return any(factor == 1.0 for _, factor in readings(unit))
    except RigidsheetError:
        return True


def quantity(text: str) -> tuple[float, str] | None:
    """Return the number and unit of a text like '400 mm', None when it is something else."""
    try:
        return split_quantity(text)
    except RigidsheetError:
        return None


def converted(name: str, text: str, unit: str) -> float:
    """Return a quantity typed as text as a number in `unit`; a bare number is in that unit already."""
    try:
        number, given = split_quantity(text, name)
    except RigidsheetError as error:
        raise InputRefused(error.argument or name, error.rule, error.value, remedy=error.remedy) from None
    if not given:
        return number
    try:
        theirs = {kind.name: factor for kind, factor in readings(given)}
    except RigidsheetError as error:
        raise InputRefused(name, error.rule, error.value, remedy=error.remedy) from None
    for kind, factor in readings(unit):
        if kind.name in theirs:
            return number if theirs[kind.name] == factor else number * theirs[kind.name] / factor
    kinds = [kind.phrase for kind, _ in readings(unit)]
    found = next(iter(theirs), "no known kind")
    raise InputRefused(
        name, f"{kinds[0]} in a unit like '{unit}', which stands beside the cell", f"{text} ({found})"
    )
