"""The one door for every host: `call(name, cells)`, which never raises."""

from __future__ import annotations

from collections.abc import Collection, Sequence

from ..core.errors import AbsentError
from .catalogue import FUNCTIONS, find
from .cells import Answer, Cell, Refusal
from .compiling import answered, refusal_of, worked


def names() -> Collection[str]:
    """Return the names of all functions, in the order of the list."""
    return FUNCTIONS.keys()


def call(name: str, cells: Sequence[Cell]) -> Answer | Refusal:
    """Answer one call of a cell function. Never raises.

    Parameters
    ----------
    name : str
        Name of the function, as RB_TORQUE.
    cells : sequence of Cell
        What the arguments hold; trailing ones may be left out, OMITTED marks one in the middle.

    Returns
    -------
    Answer or Refusal
        A finite number, a text, a rectangular block of them, or the error with its reason.
    """
    try:
        ready = find(name)
    except AbsentError as error:
        return refusal_of(error)
    return answered(ready, cells)


def working(name: str, cells: Sequence[Cell]) -> list[str] | Refusal:
    """Return the working of one call, a line a text of at most 255 characters, or the refusal. Never raises."""
    try:
        ready = find(name)
    except AbsentError as error:
        return refusal_of(error)
    return worked(ready, cells)
