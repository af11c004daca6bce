"""Headers that no table knows but that would change the result, so that they must not be passed over."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Final

from ...core.errors import RigidsheetError
from ..units import kinds
from ..units.factors import readings
from ..units.kinds import Kind

# What a column of these kinds holds enters every result.
DECISIVE: Final = (kinds.ANGLE, kinds.FORCE, kinds.TORQUE, kinds.INERTIA)

_COUNT: Final = "For how many there are write 'qty', with -1 for a cut-out"
_TURN: Final = "Write 'turn x', 'turn y' or 'turn z', with its unit"
_MANY: Final = ("number", "pieces", "amount", "nos", "off", "no off", "no. off", "n", "multiplicity")
_CUT: Final = ("factor", "multiplier", "sign", "cut-out", "cutout", "cut out", "hole")
_FACTORS: Final = ("factor", "load factor", "partial factor", "multiplier", "qty", "n")

# Folded headers: the known column beside which they are harmless, '' for none, and the remedy.
OF_PARTS: Final[Mapping[str, tuple[str, str]]] = {
    **dict.fromkeys(_MANY, ("qty", _COUNT)),
    **dict.fromkeys(_CUT, ("", _COUNT)),
    **dict.fromkeys((f"{word} {k}" for word in ("rotation", "rot", "tilt") for k in "xyz"), ("", _TURN)),
    "datum": ("at", "Write 'at' for what x y z is: mass center or datum"),
}
OF_LOADS: Final[Mapping[str, tuple[str, str]]] = dict.fromkeys(_FACTORS, ("", "Loads count once, as entered"))
OF_SUPPORTS: Final[Mapping[str, tuple[str, str]]] = dict.fromkeys(
    ("mu", "friction"), ("", "Friction is not counted: enter it as a load")
)

# What a refused support speaks of, by the columns that were typed.
AS_COLUMNS: Final[Mapping[str, tuple[str, str]]] = {
    "direction": ("along", "Its columns are along x, along y, along z"),
    "components": ("holds", "Write them in a column 'holds', like fx fy mz"),
}


def kinds_of(unit: str) -> tuple[Kind, ...]:
    """Return what a unit in a header can mean, nothing when it is no unit."""
    try:
        return tuple(kind for kind, _ in readings(unit))
    except RigidsheetError:
        return ()
