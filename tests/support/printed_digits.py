"""Comparison with a published number: the tolerance follows from the digits that were printed."""

from __future__ import annotations


def agrees(value: float, printed: str) -> bool:
    """Whether a value rounds to the printed text, within half a unit of its last place."""
    decimals = len(printed.partition(".")[2])
    return abs(value - float(printed)) <= 0.5 * 10.0**-decimals * (1 + 1e-9)
