"""A point, and shapes that are long and thin: rod, ring, arc."""

from __future__ import annotations

from typing import Final

import numpy as np

from .record import Alternative, Shape, Size
from .sizes import ANGLE, FULL_TURN, LENGTH, MEAN_RADIUS, thin
from .terms import at, at_datum, one_minus_sinc, sinc, spread, variance_of_cosine

_PLANE: Final = "J. L. Meriam, L. G. Kraige, Engineering Mechanics: Statics, table D/3"
_SOLIDS: Final = "J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, table D/4"
_ROD: Final = Size(
    "D",
    "diameter of the rod, only for the mass from a density; the tensor takes it as zero",
    ("dia", "diameter"),
    (Alternative("R", "radius of the rod, only for the mass from a density", 2.0, ("radius",)),),
    for_density=True,
)
_WIRE: Final = Size(
    "wire",
    "diameter of the wire, only for the mass from a density; the tensor takes it as zero",
    ("wire diameter", "dw"),
    for_density=True,
)

LINES: Final = (
    Shape(
        name="point",
        sizes=(),
        dimension="point",
        datum="Datum at the point itself.",
        working=("Ixx = Iyy = Izz = 0",),
        source="By definition of the mass point",
        measure=lambda s: np.ones(()),
        center=at_datum,
        unit_tensor=lambda s: np.zeros((3, 3)),
        aliases=("point mass", "particle", "mass point"),
    ),
    Shape(
        name="slender rod",
        sizes=(LENGTH, _ROD),
        dimension="line",
        datum="Datum at mid-length. Length along z.",
        working=("Ixx = Iyy = m*L^2/12", "Izz = 0"),
        source=_SOLIDS,
        measure=lambda s: s["L"],
        center=at_datum,
        unit_tensor=lambda s: spread(0.0, 0.0, s["L"] ** 2 / 12.0),
        rules=(thin("D", "L"),),
        aliases=("rod", "thin rod", "slender bar", "wire"),
    ),
    Shape(
        name="thin ring",
        sizes=(MEAN_RADIUS, _WIRE),
        dimension="line",
        datum="Datum at the center of the ring. Ring in the x-y plane, its axis along z.",
        working=("length = 2*pi*R", "Ixx = Iyy = m*R^2/2", "Izz = m*R^2"),
        source="J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, table D/4 (shell of no length)",
        measure=lambda s: 2.0 * np.pi * s["R"],
        center=at_datum,
        unit_tensor=lambda s: spread(s["R"] ** 2 / 2.0, s["R"] ** 2 / 2.0, 0.0),
        rules=(thin("wire", "R", times=0.2),),
        aliases=("hoop", "thin hoop", "wire ring"),
    ),
    Shape(
        name="thin arc",
        sizes=(MEAN_RADIUS, ANGLE, _WIRE),
        dimension="line",
        datum="Datum at the center of curvature. Arc in the x-y plane, half of its angle on each side of +x.",
        working=(
            "length = R*angle",
            "xc = 2*R*sin(angle/2)/angle",
            "Ixx = m*R^2/2*(1 - sin(angle)/angle)",
            "Iyy = m*(R^2/2*(1 + sin(angle)/angle) - xc^2)",
            "Izz = Ixx + Iyy",
        ),
        source=_PLANE,
        measure=lambda s: s["R"] * s["angle"],
        center=lambda s: at(s["R"] * sinc(0.5 * s["angle"])),
        unit_tensor=lambda s: spread(
            s["R"] ** 2 * variance_of_cosine(0.5 * s["angle"]),
            0.5 * s["R"] ** 2 * one_minus_sinc(s["angle"]),
            0.0,
        ),
        rules=(FULL_TURN, thin("wire", "R", times=0.2)),
        aliases=("arc", "circular arc", "curved rod"),
    ),
)
