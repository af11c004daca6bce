"""Labelled sizes of a shape: a text, rows of label, value and unit, or columns under labels."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import Any, Final

import numpy as np

from ...core.errors import InputError, RigidsheetError
from ...core.shapes import SHAPES
from ..cells import Block, Cell
from ..declaration import Reader, Role
from ..limits import Limit
from ..units import kinds
from ..units.kinds import Kind
from ..units.quantities import folded, is_unit_text, numbers, quantity, shown, unit_factor, wrong
from .arguments import Scalar
from .memory import remembered
from .records import block_lines
from .tables import Column, label_and_unit
from .words import hint


def _labels() -> dict[str, Kind]:
    """Return every label of every shape, in the spelling of the trade, with its kind."""
    out: dict[str, Kind] = {}
    for shape in SHAPES.values():
        for size in shape.sizes:
            kind = kinds.ANGLE if size.kind == "angle" else kinds.LENGTH
            labels = [size.label, *size.aliases]
            for other in size.alternatives:
                labels += [other.label, *other.aliases]
            out.update(dict.fromkeys(labels, kind))
    return out


SIZE_LABELS: Final[Mapping[str, Kind]] = MappingProxyType(_labels())
_FOLDED: Final = {folded(label): kind for label, kind in SIZE_LABELS.items()}
# Labels that a parts list needs for positions are no sizes there.
SIZE_COLUMNS: Final[Mapping[str, Column]] = MappingProxyType(
    {
        label: Column(label, kind, "size of the shape", blanks=True)
        for label, kind in SIZE_LABELS.items()
        if label not in ("x", "y", "z")
    }
)


def kind_of(argument: str, label: str, where: str = "") -> Kind:
    """Return the kind of the size called `label`, refusing a label that no shape has."""
    kind = SIZE_LABELS.get(label) or _FOLDED.get(folded(label))
    if kind is None:
        raise InputError(
            argument,
            f"sizes with known labels; got {shown(label)}",
            remedy=hint(label, dict.fromkeys(("OD", "ID", "D", "R", "L", "W", "H", "t", *SIZE_LABELS))),
            where=where,
        )
    return kind


def size_texts(argument: str, text: str, where: str = "") -> dict[str, float]:
    """Read 'OD 114.3 mm; ID 101.7 mm; L 520 mm' as labels with SI numbers."""
    out: dict[str, float] = {}
    if re.search(r",\s*[A-Za-z]", text):
        raise InputError(
            argument,
            f"sizes parted by semicolons, like 'OD 114.3 mm; L 520 mm'; got {shown(text)}",
            where=where,
        )
    for piece in text.split(";"):
        tokens = piece.replace("=", " ", 1).split()
        if not tokens:
            continue
        n = next((k for k, t in enumerate(tokens) if k and (t[0] in "+-−.,(" or t[0].isdigit())), None)
        if n is not None and " ".join(tokens[: n + 1]) in SIZE_LABELS:  # 'radius 1'
            n += 1
        if n is None or n >= len(tokens):
            raise InputError(
                argument, f"sizes like 'OD 114.3 mm; L 520 mm'; got {shown(piece.strip())}", where=where
            )
        _add(argument, out, " ".join(tokens[:n]), " ".join(tokens[n:]), where)
    return out


def _add(argument: str, out: dict[str, Any], label: str, cell: Cell, where: str) -> None:
    kind = kind_of(argument, label, where)
    if label in out:
        raise InputError(argument, f"sizes with each label once; '{label}' stands twice", where=where)
    place = f"{argument}, {where}" if where else argument
    if type(cell) is list:
        try:
            value = Scalar(kind).reader(label, None)(cell)
        except RigidsheetError as refused:
            raise type(refused)(
                label, refused.rule, refused.value, remedy=refused.remedy, where=place
            ) from None
    else:
        value = quantity(label, kind, cell, place)  # type: ignore[arg-type]
    out[label] = value


@dataclass(frozen=True, slots=True)
class Sizes:
    """Sizes by label: dict of label to float, or to (n,) when given as columns under a header."""

    example: str = "OD 114.3 mm; ID 101.7 mm; L 520 mm"
    role: Role = Role.BUNDLE

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        rule = "labelled sizes, like 'OD 114.3 mm; L 520 mm' or rows of label, value and unit"

        def read(cell: Cell) -> dict[str, Any]:
            if type(cell) is str and cell.strip():
                return {} if folded(cell) == "none" else size_texts(argument, cell)
            if type(cell) is not list:
                raise wrong(argument, rule, cell)
            if is_header(cell):
                return size_columns(argument, cell)
            if len(cell[0]) < 2:
                raise wrong(argument, rule, cell)
            out: dict[str, Any] = {}
            for label, value, where in block_lines(argument, cell, "list of sizes"):
                _add(argument, out, label, value, where)
            return out

        kept = remembered(read)
        return lambda cell: dict(kept(cell))

    def words(self) -> str:
        return "sizes by label: 'OD 114.3 mm; L 520 mm', or rows of label, value, unit"

    def sample(self) -> Cell:
        return self.example


def is_header(cell: Block) -> bool:
    """Say whether labels stand in the first row with numbers below, not in the first column."""
    return (
        len(cell) > 1
        and all(type(c) is str and c.strip() for c in cell[0])
        and all(
            row[0] is None or type(row[0]) is float or (type(row[0]) is str and not is_unit_text(row[0]))
            for row in cell[1:]
        )
    )


def size_columns(argument: str, cell: Block) -> dict[str, Any]:
    """Read columns of sizes under labels like `OD [mm]`."""
    out: dict[str, Any] = {}
    for j, head in enumerate(cell[0]):
        label, unit = label_and_unit(str(head))
        kind = kind_of(argument, label, "row 1")
        if label in out:
            raise InputError(argument, f"sizes with each label once; '{label}' stands twice", where="row 1")
        f = unit_factor(label, kind, unit, f"{argument}, row 1") if unit else 1.0
        cells = [row[j] for row in cell[1:]]
        if not unit and any(type(c) is float for c in cells):
            raise InputError(
                argument,
                f"sizes with units; column '{label}' has none",
                remedy=f"Write the header as '{label} [{kind.si}]'",
                where="row 1",
            )
        column = numbers(label, kind, cells, 2, united=bool(unit))
        out[label] = column * f if unit else column
        if len(column) == 1:
            out[label] = float(np.ravel(out[label])[0])
    return out
