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


def _bin_tipper(path: Path, blank: bool) -> None:
    from . import bin_tipper

    bin_tipper.write(path, blank)


def _hoist_arm(path: Path, blank: bool) -> None:
    from . import hoist_arm

    hoist_arm.write(path, blank)


_ALL: Final = (
    Template(
        "bin-tipper",
        "Bin tipper",
        "Drive torque, hinge loads and stops of a tilting table that tips bins, by cylinder or gearbox.",
        _bin_tipper,
    ),
    Template(
        "hoist-arm",
        "Hoist arm",
        "Drive torque, brake and pivot pin of an arm that lifts crates on a carriage that speeds up and stops.",
        _hoist_arm,
    ),
)
TEMPLATES: Final[Mapping[str, Template]] = MappingProxyType({one.name: one for one in _ALL})
