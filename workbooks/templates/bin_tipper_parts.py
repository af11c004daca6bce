"""The parts list that the bin tipper comes with: an invented table with a bin of fruit, in mm, kg and degrees."""

from __future__ import annotations

from typing import Final

from .kit_parts import Part

STEEL: Final = 7850.0  # kg/m^3, structural steel (EN 1991-1-1, table A.4: 77 to 78.5 kN/m^3)


def _part(part: str, shape: str, qty: int = 1, *, at: tuple[float, float, float], **rest: float) -> Part:
    x, y, z = at
    turn = {"turn z": rest.pop("turn")} if "turn" in rest else {}
    return {"part": part, "qty": qty, "shape": shape, **rest, "x": x, "y": y, "z": z, **turn}


TABLE: Final[tuple[Part, ...]] = (
    _part("deck plate", "box", at=(655, 63, 0), density=STEEL, L=1300, W=6, H=1100),
    _part("cut-out in the deck", "box", -1, at=(690, 63, 0), density=STEEL, L=520, W=6, H=700),
    _part("side rail, drive side", "hollow box", at=(660, 10, -430), density=STEEL, L=1320, W=100, H=50, t=4),
    _part("side rail, far side", "hollow box", at=(660, 10, 430), density=STEEL, L=1320, W=100, H=50, t=4),
    _part("hinge tube", "tube", at=(0, 0, 0), density=STEEL, L=1180, OD=76.1, ID=60.3),
    _part("fence plate", "box", at=(60, 386, 0), density=STEEL, L=5, W=640, H=900),
    _part("brace, turned", "hollow box", at=(14, 180, -430), density=STEEL, L=320, W=50, H=40, t=3, turn=79),
    _part("drive lever", "box", at=(200, -35, -480), density=STEEL, L=470, W=110, H=20, turn=-9),
    _part("hold-down bar", "box", at=(1180, 862, 0), mass=14.5, L=60, W=60, H=1040),
    _part("bin, empty", "closed hollow box", at=(680, 447, 0), mass=42, L=1200, W=760, H=1000, t=25),
)
FRUIT: Final = _part("fruit", "box", at=(680, 400, 45), mass=385, L=1130, W=620, H=930)
