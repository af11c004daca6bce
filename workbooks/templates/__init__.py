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


def _shaker_arm(path: Path, blank: bool) -> None:
    from . import shaker_arm

    shaker_arm.write(path, blank)


def _swing_gate(path: Path, blank: bool) -> None:
    from . import swing_gate

    swing_gate.write(path, blank)


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
    Template(
        "shaker-arm",
        "Shaker arm",
        "Acceleration at a sensor, contact of the tray, and a pusher on a crank-driven arm.",
        _shaker_arm,
    ),
    Template(
        "swing-gate",
        "Swing gate",
        "Hinge loads, drive, brake and latch of a yard gate on two hinges, with wind and a person on its tip.",
        _swing_gate,
    ),
)
TEMPLATES: Final[Mapping[str, Template]] = MappingProxyType({one.name: one for one in _ALL})
