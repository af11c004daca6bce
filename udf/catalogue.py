"""The one explicit list of all cell functions."""

from __future__ import annotations

import functools
from types import MappingProxyType
from typing import Final

from ..core.errors import AbsentError, quote
from .compiling import Compiled
from .declaration import CellFunction
from .functions import (
    asking,
    axes,
    bodies,
    drives,
    forces,
    momentum,
    motion,
    reactions,
    review,
    shapes,
    sliding,
    spins,
    tensors,
    units,
)
from .reading.words import hint


@functools.cache
def find(name: str) -> Compiled:
    """Return the function called `name`, compiled; AbsentError when there is none."""
    f = FUNCTIONS.get(name) or FUNCTIONS.get(name.strip().upper())
    if f is None:
        raise AbsentError("", f"There is no function {quote(name)}", remedy=hint(name, FUNCTIONS))
    return Compiled(f)


FUNCTIONS: Final = MappingProxyType(
    {
        f.name: f
        for f in (
            *units.FUNCTIONS,
            *shapes.FUNCTIONS,
            *tensors.FUNCTIONS,
            *axes.FUNCTIONS,
            *bodies.FUNCTIONS,
            *motion.FUNCTIONS,
            *sliding.FUNCTIONS,
            *spins.FUNCTIONS,
            *forces.FUNCTIONS,
            *reactions.FUNCTIONS,
            *momentum.FUNCTIONS,
            *drives.FUNCTIONS,
            *review.FUNCTIONS,
            *asking.functions(find),
        )
    }
)

GROUPS: Final = tuple(dict.fromkeys(f.group for f in FUNCTIONS.values()))


def function(name: str) -> CellFunction:
    """Return the declaration of a function."""
    return find(name).function
