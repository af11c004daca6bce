"""Workbooks without a spreadsheet program: recalculated, checked and written back."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from .recalc import Recalculation, recalculate

__all__ = ["Recalculation", "recalculate"]


def __getattr__(name: str) -> Any:
    """Load what recalculation needs only when it is asked for, so that importing stays light."""
    if name in __all__:
        from . import recalc

        return getattr(recalc, name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
