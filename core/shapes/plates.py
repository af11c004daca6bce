"""Flat shapes without thickness, in the x-y plane."""

from __future__ import annotations

from typing import Final

import numpy as np

from .record import Alternative, Array, Rule, Shape, Size, Sizes, Way
from .sizes import (
    ALONG_X,
    ALONG_Y,
    ANGLE,
    FULL_TURN,
    INNER,
    OUTER,
    RADIUS,
    THICKNESS,
    annulus_ways,
    thin,
)
from .terms import (
    at,
    at_datum,
    mean_radius_squared_spread,
    one_minus_sinc,
    sinc,
    spread,
    variance_of_cosine,
)

_PLANE: Final = "J. L. Meriam, L. G. Kraige, Engineering Mechanics: Statics, table D/3"
_SOLIDS: Final = "J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, table D/4"
HALF_AXES: Final = (
    Size("a", "half of the length along x", alternatives=(Alternative("Dx", "whole length along x", 0.5),)),
    Size("b", "half of the length along y", alternatives=(Alternative("Dy", "whole length along y", 0.5),)),
    Size("c", "half of the length along z", alternatives=(Alternative("Dz", "whole length along z", 0.5),)),
)


def triangle_sizes() -> tuple[Size, ...]:
    """Return the sizes of a general triangle: base, height and apex offset, or the three sides."""
    return (
        Size("b", "base, along x from the datum", ("base",)),
        Size("h", "height of the apex above the base, along y", ("height",), sign="positive"),
        Size("e", "x of the apex, from the datum; any sign", ("apex", "apex offset", "offset"), sign="any"),
        Size("a", "side from the far end of the base to the apex", ("side a",)),
        Size("c", "side from the datum to the apex", ("side c",)),
    )


def from_sides(s: Sizes) -> dict[str, Array]:
    """Return height and apex offset of a triangle from its sides; NaN where the sides do not close."""
    long, middle, short = np.sort(np.stack(np.broadcast_arrays(s["a"], s["b"], s["c"])), axis=0)[::-1]
    # Kahan's order of operations: sorted sides, the parentheses as they stand.
    product = (long + (middle + short)) * (short - (long - middle)) * (short + (long - middle))
    with np.errstate(invalid="ignore"):
        four_areas = np.sqrt(product * (long + (middle - short)))
    return {
        "h": four_areas / (2.0 * s["b"]),
        "e": ((s["c"] - s["a"]) * (s["c"] + s["a"]) + s["b"] ** 2) / (2.0 * s["b"]),
    }


def triangle_ways(*others: str) -> tuple[Way, ...]:
    """Return the two ways to give a triangle, each with the other sizes."""
    return (Way(("b", "h", "e", *others)), Way(("a", "b", "c", *others), from_sides))


TRIANGLE_CLOSES: Final = Rule(
    "The longest side must be shorter than the other two together, or there is no triangle",
    lambda s: np.asarray(s["h"] > 0.0),
)


def triangle_spread(s: Sizes) -> tuple[Array, Array, Array]:
    """Return the means of x^2, y^2 and xy over a triangle, about its mass center."""
    b, h, e = s["b"], s["h"], s["e"]
    return (b * b - b * e + e * e) / 18.0, h * h / 18.0, h * (2.0 * e - b) / 36.0


def annular_sector_center(s: Sizes) -> Array:
    """Return the distance of the mass center of an annular sector from its corner."""
    Ro, Ri = s["Ro"], s["Ri"]
    mean = 2.0 * (Ro * Ro + Ro * Ri + Ri * Ri) / (3.0 * (Ro + Ri))
    return np.asarray(mean * sinc(0.5 * s["angle"]), dtype=np.float64)


def annular_sector_spread(s: Sizes) -> tuple[Array, Array]:
    """Return the means of x^2 and y^2 over an annular sector about its mass center.

    Split into the spread of the radius and the spread of the direction: both parts are positive, so a thin
    ring segment of a small angle keeps its digits.
    """
    Ro, Ri, angle = s["Ro"], s["Ri"], s["angle"]
    mean = 2.0 * (Ro * Ro + Ro * Ri + Ri * Ri) / (3.0 * (Ro + Ri))
    radial = mean_radius_squared_spread(Ro, Ri, s["wall"])
    x = radial * 0.5 * (1.0 + sinc(angle)) + mean**2 * variance_of_cosine(0.5 * angle)
    return x, (Ro * Ro + Ri * Ri) * one_minus_sinc(angle) / 4.0


PLATES: Final = (
    Shape(
        name="disk",
        sizes=(RADIUS, THICKNESS),
        dimension="plate",
        datum="Datum at the center. Thin disk in the x-y plane, its axis along z.",
        working=("area = pi*R^2", "Ixx = Iyy = m*R^2/4", "Izz = m*R^2/2"),
        source=_PLANE,
        measure=lambda s: np.pi * s["R"] ** 2,
        center=at_datum,
        unit_tensor=lambda s: spread(s["R"] ** 2 / 4.0, s["R"] ** 2 / 4.0, 0.0),
        rules=(thin("t", "R"),),
        aliases=("thin disk", "circular plate", "round plate"),
    ),
    Shape(
        name="annular disk",
        sizes=(OUTER, INNER, THICKNESS),
        dimension="plate",
        datum="Datum at the center. Thin disk in the x-y plane, its axis along z.",
        working=("area = pi*(Ro^2 - Ri^2)", "Ixx = Iyy = m*(Ro^2 + Ri^2)/4", "Izz = m*(Ro^2 + Ri^2)/2"),
        source=_PLANE + " (difference of two)",
        measure=lambda s: np.pi * s["wall"] * (s["Ro"] + s["Ri"]),
        center=at_datum,
        unit_tensor=lambda s: spread(
            (s["Ro"] ** 2 + s["Ri"] ** 2) / 4.0, (s["Ro"] ** 2 + s["Ri"] ** 2) / 4.0, 0.0
        ),
        rules=(Rule("ID must be less than OD", lambda s: s["wall"] > 0.0), thin("t", "Ro")),
        ways=annulus_ways(),
        aliases=("annulus", "thin annular disk", "ring plate", "washer"),
    ),
    Shape(
        name="half disk",
        sizes=(RADIUS, THICKNESS),
        dimension="plate",
        datum="Datum at the middle of the straight edge. In the x-y plane, straight edge along x, arc to +y.",
        working=(
            "area = pi*R^2/2",
            "yc = 4*R/(3*pi)",
            "Ixx = m*(R^2/4 - yc^2)",
            "Iyy = m*R^2/4",
            "Izz = Ixx + Iyy",
        ),
        source=_PLANE,
        measure=lambda s: 0.5 * np.pi * s["R"] ** 2,
        center=lambda s: at(y=4.0 * s["R"] / (3.0 * np.pi)),
        unit_tensor=lambda s: spread(s["R"] ** 2 / 4.0, s["R"] ** 2 * (0.25 - 16.0 / (9.0 * np.pi**2)), 0.0),
        rules=(thin("t", "R"),),
        aliases=("semicircular plate", "semicircle", "half circle"),
    ),
    Shape(
        name="sector",
        sizes=(RADIUS, ANGLE, THICKNESS),
        dimension="plate",
        datum="Datum at the corner (circle center). In the x-y plane, half of the angle on each side of +x.",
        working=(
            "area = R^2*angle/2",
            "xc = 4*R*sin(angle/2)/(3*angle)",
            "Ixx = m*R^2/4*(1 - sin(angle)/angle)",
            "Iyy = m*(R^2/4*(1 + sin(angle)/angle) - xc^2)",
            "Izz = Ixx + Iyy",
        ),
        source=_PLANE,
        measure=lambda s: 0.5 * s["R"] ** 2 * s["angle"],
        center=lambda s: at(2.0 * s["R"] / 3.0 * sinc(0.5 * s["angle"])),
        unit_tensor=lambda s: spread(*annular_sector_spread(_as_annular(s)), 0.0),
        rules=(FULL_TURN, thin("t", "R")),
        aliases=("circular sector", "pie slice"),
    ),
    Shape(
        name="annular sector",
        sizes=(OUTER, INNER, ANGLE, THICKNESS),
        dimension="plate",
        datum="Datum at the circle center. In the x-y plane, half of the angle on each side of +x.",
        working=(
            "area = (Ro^2 - Ri^2)*angle/2",
            "xc = 4*sin(angle/2)*(Ro^3 - Ri^3)/(3*angle*(Ro^2 - Ri^2))",
            "Ixx = m*(Ro^2 + Ri^2)/4*(1 - sin(angle)/angle)",
            "Iyy = m*((Ro^2 + Ri^2)/4*(1 + sin(angle)/angle) - xc^2)",
            "Izz = Ixx + Iyy",
        ),
        source=_PLANE + " (difference of two)",
        measure=lambda s: 0.5 * s["wall"] * (s["Ro"] + s["Ri"]) * s["angle"],
        center=lambda s: at(annular_sector_center(s)),
        unit_tensor=lambda s: spread(*annular_sector_spread(s), 0.0),
        rules=(Rule("ID must be less than OD", lambda s: s["wall"] > 0.0), FULL_TURN, thin("t", "Ro")),
        ways=annulus_ways("angle"),
        aliases=("ring sector", "ring segment", "annulus sector"),
    ),
    Shape(
        name="elliptic disk",
        sizes=(*HALF_AXES[:2], THICKNESS),
        dimension="plate",
        datum="Datum at the center. In the x-y plane.",
        working=("area = pi*a*b", "Ixx = m*b^2/4", "Iyy = m*a^2/4", "Izz = Ixx + Iyy"),
        source=_PLANE,
        measure=lambda s: np.pi * s["a"] * s["b"],
        center=at_datum,
        unit_tensor=lambda s: spread(s["a"] ** 2 / 4.0, s["b"] ** 2 / 4.0, 0.0),
        rules=(thin("t", "a", "b"),),
        aliases=("ellipse", "elliptical disk", "elliptic plate"),
    ),
    Shape(
        name="thin plate",
        sizes=(ALONG_X, ALONG_Y, THICKNESS),
        dimension="plate",
        datum="Datum at the center. In the x-y plane.",
        working=("area = L*W", "Ixx = m*W^2/12", "Iyy = m*L^2/12", "Izz = Ixx + Iyy"),
        source=_SOLIDS,
        measure=lambda s: s["L"] * s["W"],
        center=at_datum,
        unit_tensor=lambda s: spread(s["L"] ** 2 / 12.0, s["W"] ** 2 / 12.0, 0.0),
        rules=(thin("t", "L", "W"),),
        aliases=("plate", "rectangular plate", "thin rectangular plate", "sheet"),
    ),
    Shape(
        name="triangular plate",
        sizes=(*triangle_sizes(), THICKNESS),
        dimension="plate",
        datum="Datum at one end of the base. In the x-y plane, base along +x, apex to +y.",
        working=(
            "area = b*h/2",
            "xc = (b + e)/3",
            "yc = h/3",
            "Ixx = m*h^2/18",
            "Iyy = m*(b^2 - b*e + e^2)/18",
            "Izz = Ixx + Iyy",
            "Ixy = m*h*(b - 2*e)/36",
        ),
        source=_PLANE + "; three sides by the area formula of W. Kahan",
        measure=lambda s: 0.5 * s["b"] * s["h"],
        center=lambda s: at((s["b"] + s["e"]) / 3.0, s["h"] / 3.0),
        unit_tensor=lambda s: _flat(triangle_spread(s)),
        rules=(TRIANGLE_CLOSES, thin("t", "b", "h")),
        ways=triangle_ways(),
        aliases=("triangle", "thin triangular plate", "gusset"),
    ),
)


def _as_annular(s: Sizes) -> Sizes:
    """Return a sector as the annular sector without a bore."""
    return {"Ro": s["R"], "Ri": np.zeros(()), "wall": s["R"], "angle": s["angle"]}


def _flat(means: tuple[Array, Array, Array]) -> Array:
    """Return the tensor of a flat shape from the means of x^2, y^2 and xy."""
    x, y, xy = means
    return spread(x, y, 0.0, xy)
