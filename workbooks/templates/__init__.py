"""The working sheets that a person can start from."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from pathlib import Path
from types import MappingProxyType
from typing import Final


@dataclass(frozen=True, slots=True)
class Template:
    """A working sheet: its name for the command line, a title, one line, and what writes the .xlsx.

    `write(path, blank)` writes the workbook; with `blank` the cells that a person fills in are empty.
    """

    name: str
    title: str
    line: str
    write: Callable[[Path, bool], None]


TEMPLATES: Final[Mapping[str, Template]] = MappingProxyType({})
