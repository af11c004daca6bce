"""Two amounts side by side: bringing a demand and its limit, or a quantity and a unit, to one unit."""

from __future__ import annotations

from functools import lru_cache
from typing import Any

import numpy as np

from ...core.errors import InputError, KindError
from ..reading.words import Amount
from .factors import readings
from .kinds import Kind


def common_kinds(first: str, second: str) -> list[tuple[Kind, float, float]]:
    """Return the kinds both unit texts can be, with the factor to SI of each."""
    other = {kind.name: f for kind, f in readings(second)}
    return [(kind, f, other[kind.name]) for kind, f in readings(first) if kind.name in other]


def kinds_text(unit: str) -> str:
    """Word what a unit text can be: 'mass or force'."""
    return " or ".join(dict.fromkeys(kind.name for kind, _ in readings(unit)))


@lru_cache(maxsize=4096)
def shared_kind(argument: str, first: str, second: str) -> tuple[Kind, float, float]:
    """Return the one kind two units share and their factors; `argument` names the second in a refusal."""
    common = common_kinds(first, second)
    if not common:
        raise KindError(
            argument,
            f"in a unit of {kinds_text(first)}, like '{first}'; got '{second}' ({kinds_text(second)})",
        )
    if len({f"{f / g:.12g}" for _, f, g in common}) > 1:
        names = " or ".join(kind.name for kind, _, _ in common)
        raise InputError(argument, f"clear about the kind; '{first}' to '{second}' can be {names}")
    return common[0]


def pair(name_1: str, first: Amount, name_2: str, second: Amount) -> tuple[Any, Any, str]:
    """Return two amounts as numbers in the unit of the second, and that unit.

    Both must carry a unit, or neither: a bare number beside a united one is a slip waiting to happen.
    """
    if bool(first.unit) != bool(second.unit):
        bare, united = (name_1, second) if not first.unit else (name_2, first)
        raise InputError(
            bare,
            f"given with its unit, as the other one is in {united.unit}",
            remedy="Put the unit beside the number",
        )
    a, b = first.number, second.number
    if np.ndim(a) and np.ndim(b) and len(a) != len(b):
        raise InputError(name_2, f"a column as long as `{name_1}`, {len(a)} rows; got {len(b)} rows")
    if first.unit and first.unit != second.unit:
        _, f, g = shared_kind(name_2, first.unit, second.unit)
        a = a * (f / g)
    elif first.unit:
        readings(first.unit)
    return a, b, second.unit
