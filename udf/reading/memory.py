"""The last records and tables that were read: a sheet asks many formulas about the same body."""

from __future__ import annotations

import dataclasses
from collections.abc import Mapping
from itertools import chain
from typing import Any, Final

import numpy as np

from ..cells import Cell
from ..declaration import Reader

KEPT: Final = 256  # readings, for each argument of each function
LARGEST: Final = 600  # cells; a longer table is read anew, as it takes long to tell from another
_NOT_READ: Final = object()


def remembered(read: Reader) -> Reader:
    """Return a reader that gives the same reading for the same cells; refusals are worked out anew."""
    kept: dict[Any, Any] = {}

    def again(cell: Cell) -> Any:
        key = key_of(cell)
        if key is None:
            return read(cell)
        found = kept.get(key, _NOT_READ)
        if found is _NOT_READ:
            found = locked(read(cell))
            if len(kept) >= KEPT:
                kept.clear()
            kept[key] = found
        return found

    return again


def key_of(cell: Cell) -> Any:
    """Return what tells cells apart, None where they are not worth it.

    TRUE and 1 are the same key to Python and not the same to a reader.
    """
    if type(cell) is str:
        return cell
    if type(cell) is not list or len(cell) * len(cell[0]) > LARGEST:
        return None
    flat = tuple(chain.from_iterable(cell))
    return None if bool in set(map(type, flat)) else (len(cell), flat)


_FIELDS: Final[dict[type, tuple[str, ...]]] = {}  # one entry a class of readings


def field_names(kind: type) -> tuple[str, ...]:
    """Return the names of the fields of a record, none for what is no record."""
    names = _FIELDS.get(kind)
    if names is None:
        names = tuple(f.name for f in dataclasses.fields(kind)) if dataclasses.is_dataclass(kind) else ()
        _FIELDS[kind] = names
    return names


def locked(value: Any) -> Any:
    """Return a reading whose arrays cannot be written to, as the next call shall find it unchanged."""
    if isinstance(value, np.ndarray):
        value.flags.writeable = False
    elif isinstance(value, Mapping):
        for part in value.values():
            locked(part)
    else:
        for name in field_names(type(value)):
            locked(getattr(value, name))
    return value
