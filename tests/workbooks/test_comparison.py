"""Comparison of numbers in a cell: to the 15 significant digits that spreadsheet programs keep."""

from __future__ import annotations

import math
from decimal import ROUND_HALF_EVEN, Context, Decimal

from hypothesis import example, given, settings
from hypothesis import strategies as st

from rigidsheet.workbooks.evaluation.operators import compare

FIFTEEN = Context(prec=15, rounding=ROUND_HALF_EVEN)
NUMBERS = st.floats(allow_nan=False, allow_infinity=False)


def shown(number: float) -> Decimal:
    """The number to 15 significant digits, by decimal arithmetic."""
    return FIFTEEN.plus(Decimal(number))


@settings(max_examples=300, deadline=None)
@given(NUMBERS, st.integers(-60, 60))
@example(3.3, 1)
@example(1.0, 9)
@example(9.99999999999999, 5)
@example(-0.0, 0)
def test_neighbours_compare_as_their_fifteen_digits(number: float, steps: int) -> None:
    other = number
    for _ in range(abs(steps)):
        other = math.nextafter(other, math.copysign(math.inf, steps))
    if math.isinf(other):
        return
    a, b = shown(number), shown(other)
    assert compare("=", number, other) is (a == b)
    assert compare("<", number, other) is (a < b)
    assert compare(">=", number, other) is (a >= b)


@settings(max_examples=100, deadline=None)
@given(NUMBERS, NUMBERS)
def test_numbers_compare_as_their_fifteen_digits(one: float, other: float) -> None:
    assert compare("<=", one, other) is (shown(one) <= shown(other))


def test_texts_compare_without_case() -> None:
    assert compare("=", "Gearbox", "GEARBOX") is True
    assert compare("<", "anchor", "Bolt") is True
    assert compare(">", "anchor", "Bolt") is False
