"""All shapes in one table, by name."""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType
from typing import Final

from .flat_solids import FLAT_SOLIDS
from .lines import LINES
from .plates import PLATES
from .record import Shape
from .round_solids import ROUND_SOLIDS
from .shells import SHELLS

SHAPES: Final[Mapping[str, Shape]] = MappingProxyType(
    {row.name: row for row in (*LINES, *PLATES, *SHELLS, *ROUND_SOLIDS, *FLAT_SOLIDS)}
)
