"""Solids with flat faces: boxes, prisms, pyramids, bars of constant section."""

from __future__ import annotations

from dataclasses import replace
from math import sqrt
from typing import Final

import numpy as np
from numpy.typing import NDArray

from .plates import TRIANGLE_CLOSES, triangle_sizes, triangle_spread, triangle_ways
from .record import Alternative, Array, Rule, Shape, Size, Sizes
from .sizes import ALONG_X, ALONG_Y, ALONG_Z, LENGTH, WALL
from .terms import all_hold, at, at_datum, spread, spread_3d

_SOLIDS: Final = "J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, table D/4"
_SECTION: Final = (
    "J. L. Meriam, L. G. Kraige, Engineering Mechanics: Statics, table D/3 (section of the prism)"
)
_HANDBOOK: Final = "Machinery's Handbook, mass moments of inertia"
_BASE_X: Final = replace(ALONG_X, help="length of the base along x")
_BASE_Y: Final = replace(ALONG_Y, help="width of the base along y")
_LEGS: Final = (
    Size("a", "leg along x from the right-angled corner", ("leg a", "x")),
    Size("b", "leg along y from the right-angled corner", ("leg b", "y")),
    Size("c", "leg along z from the right-angled corner", ("leg c", "z")),
)
_FLATS: Final = Size(
    "AF",
    "width across flats; two flats are square to x",
    ("S", "across flats", "width across flats"),
    (Alternative("AC", "width across corners", sqrt(0.75), ("across corners",)),),
)


def _walls_fit(*widths: str) -> Rule:
    """Return the rule that two walls leave a hollow in each of the widths."""

    def holds(s: Sizes) -> NDArray[np.bool_]:
        return all_hold(2.0 * s["t"] < s[width] for width in widths)

    return Rule(f"t must be less than half of {' and of '.join(widths)}, or nothing is hollow", holds)


def _box_tube_spread(W: Array, H: Array, t: Array) -> Array:
    """Return the mean of w^2 over a hollow rectangle W by H, all terms positive."""
    inner = W - 2.0 * t
    return np.asarray(
        (H * (W * W + W * inner + inner * inner) + inner**3) / (12.0 * (W + H - 2.0 * t)), dtype=np.float64
    )


def _box_tube(s: Sizes) -> Array:
    L, W, H, t = s["L"], s["W"], s["H"], s["t"]
    return spread(L * L / 12.0, _box_tube_spread(W, H, t), _box_tube_spread(H, W, t))


def _closed_box_area(s: Sizes) -> Array:
    """Return the volume of the six walls divided by 2 t: a sum of positive terms, not a difference."""
    L, W, H, t = s["L"], s["W"], s["H"], s["t"]
    return np.asarray(W * H + (L - 2.0 * t) * H + (L - 2.0 * t) * (W - 2.0 * t), dtype=np.float64)


def _closed_box_spread(A: Array, B: Array, C: Array, t: Array) -> Array:
    """Return 12 times the integral of a^2 over the six walls divided by 2 t, all terms positive."""
    a, b = A - 2.0 * t, B - 2.0 * t
    return np.asarray((A * A + A * a + a * a) * B * C + a**3 * C + a**3 * b, dtype=np.float64)


def _closed_box(s: Sizes) -> Array:
    L, W, H, t = s["L"], s["W"], s["H"], s["t"]
    whole = 12.0 * _closed_box_area(s)
    return spread(
        _closed_box_spread(L, W, H, t) / whole,
        _closed_box_spread(W, H, L, t) / whole,
        _closed_box_spread(H, L, W, t) / whole,
    )


def _triangular_prism(s: Sizes) -> Array:
    x, y, xy = triangle_spread(s)
    return spread(x, y, s["L"] ** 2 / 12.0, xy)


def _tetrahedron(s: Sizes) -> Array:
    a, b, c = s["a"], s["b"], s["c"]
    own = np.stack(np.broadcast_arrays(a * a, b * b, c * c), axis=-1) * (3.0 / 80.0)
    return spread_3d(own, -a * b / 80.0, -b * c / 80.0, -c * a / 80.0)


FLAT_SOLIDS: Final = (
    Shape(
        name="box",
        sizes=(ALONG_X, ALONG_Y, ALONG_Z),
        dimension="solid",
        datum="Datum at the center. Length along x, width along y, height along z.",
        working=("V = L*W*H", "Ixx = m*(W^2 + H^2)/12", "Iyy = m*(L^2 + H^2)/12", "Izz = m*(L^2 + W^2)/12"),
        source=_SOLIDS,
        measure=lambda s: s["L"] * s["W"] * s["H"],
        center=at_datum,
        unit_tensor=lambda s: spread(s["L"] ** 2 / 12.0, s["W"] ** 2 / 12.0, s["H"] ** 2 / 12.0),
        aliases=("block", "cuboid", "solid box", "rectangular block", "flat bar", "thick plate"),
    ),
    Shape(
        name="hollow box",
        sizes=(ALONG_X, ALONG_Y, ALONG_Z, WALL),
        dimension="solid",
        datum="Datum at the center. Length along x, ends open; outer W along y, H along z; four walls of t.",
        working=(
            "w = W - 2*t",
            "h = H - 2*t",
            "V = L*(W*H - w*h)",
            "Ixx = m*(W*H*(W^2 + H^2) - w*h*(w^2 + h^2))/(12*(W*H - w*h))",
            "Iyy = m*(L^2/12 + (W*H^3 - w*h^3)/(12*(W*H - w*h)))",
            "Izz = m*(L^2/12 + (H*W^3 - h*w^3)/(12*(W*H - w*h)))",
        ),
        source=_SOLIDS + " (difference of two)",
        measure=lambda s: s["L"] * 2.0 * s["t"] * (s["W"] + s["H"] - 2.0 * s["t"]),
        center=at_datum,
        unit_tensor=_box_tube,
        rules=(_walls_fit("W", "H"),),
        aliases=("box tube", "rectangular tube", "square tube", "hollow section", "open box tube"),
    ),
    Shape(
        name="closed hollow box",
        sizes=(ALONG_X, ALONG_Y, ALONG_Z, WALL),
        dimension="solid",
        datum="Datum at the center. Outer L along x, W along y, H along z; closed, six walls of t.",
        working=(
            "l = L - 2*t",
            "w = W - 2*t",
            "h = H - 2*t",
            "V = L*W*H - l*w*h",
            "Ixx = m*(L*W*H*(W^2 + H^2) - l*w*h*(w^2 + h^2))/(12*V)",
            "Iyy = m*(L*W*H*(L^2 + H^2) - l*w*h*(l^2 + h^2))/(12*V)",
            "Izz = m*(L*W*H*(L^2 + W^2) - l*w*h*(l^2 + w^2))/(12*V)",
        ),
        source=_SOLIDS + " (difference of two)",
        measure=lambda s: 2.0 * s["t"] * _closed_box_area(s),
        center=at_datum,
        unit_tensor=_closed_box,
        rules=(_walls_fit("L", "W", "H"),),
        aliases=("closed box", "box with six walls"),
    ),
    Shape(
        name="hexagonal bar",
        sizes=(_FLATS, LENGTH),
        dimension="solid",
        datum="Datum at mid-length on the axis. Axis along z, two flats square to x.",
        working=(
            "V = sqrt(3)/2*AF^2*L",
            "Ixx = Iyy = m*(5/72*AF^2 + L^2/12)",
            "Izz = 5/36*m*AF^2",
        ),
        source="Machinery's Handbook, moments of inertia of a hexagonal section",
        measure=lambda s: sqrt(0.75) * s["AF"] ** 2 * s["L"],
        center=at_datum,
        unit_tensor=lambda s: spread(
            5.0 / 72.0 * s["AF"] ** 2, 5.0 / 72.0 * s["AF"] ** 2, s["L"] ** 2 / 12.0
        ),
        aliases=("hex bar", "hexagon bar", "hexagonal prism"),
    ),
    Shape(
        name="triangular prism",
        sizes=(*triangle_sizes(), replace(LENGTH, help="length of the prism along z")),
        dimension="solid",
        datum="Datum at one end of the base, at mid-length. Length along z, base along +x, apex to +y.",
        working=(
            "V = b*h*L/2",
            "xc = (b + e)/3",
            "yc = h/3",
            "Ixx = m*(h^2/18 + L^2/12)",
            "Iyy = m*((b^2 - b*e + e^2)/18 + L^2/12)",
            "Izz = m*(h^2 + b^2 - b*e + e^2)/18",
            "Ixy = m*h*(b - 2*e)/36",
        ),
        source=_SECTION,
        measure=lambda s: 0.5 * s["b"] * s["h"] * s["L"],
        center=lambda s: at((s["b"] + s["e"]) / 3.0, s["h"] / 3.0),
        unit_tensor=_triangular_prism,
        rules=(TRIANGLE_CLOSES,),
        ways=triangle_ways("L"),
        aliases=("general triangular prism",),
    ),
    Shape(
        name="wedge",
        sizes=(
            replace(ALONG_X, help="leg of the right triangle along x"),
            replace(ALONG_Y, help="leg of the right triangle along y"),
            replace(ALONG_Z, help="height of the prism along z"),
        ),
        dimension="solid",
        datum="Right triangular prism. Datum at the right-angled corner, bottom face; all at +x, +y, +z.",
        working=(
            "V = L*W*H/2",
            "xc = L/3",
            "yc = W/3",
            "zc = H/2",
            "Ixx = m*(W^2/18 + H^2/12)",
            "Iyy = m*(L^2/18 + H^2/12)",
            "Izz = m*(L^2 + W^2)/18",
            "Ixy = m*L*W/36",
        ),
        source=_SECTION,
        measure=lambda s: 0.5 * s["L"] * s["W"] * s["H"],
        center=lambda s: at(s["L"] / 3.0, s["W"] / 3.0, s["H"] / 2.0),
        unit_tensor=lambda s: spread(
            s["L"] ** 2 / 18.0, s["W"] ** 2 / 18.0, s["H"] ** 2 / 12.0, -s["L"] * s["W"] / 36.0
        ),
        aliases=("right triangular prism", "right-angled wedge"),
    ),
    Shape(
        name="right pyramid",
        sizes=(_BASE_X, _BASE_Y, ALONG_Z),
        dimension="solid",
        datum="Datum at the center of the rectangular base. Apex above it at z = H.",
        working=(
            "V = L*W*H/3",
            "zc = H/4",
            "Ixx = m*(W^2/20 + 3/80*H^2)",
            "Iyy = m*(L^2/20 + 3/80*H^2)",
            "Izz = m*(L^2 + W^2)/20",
        ),
        source=_HANDBOOK + " (pyramid), moved to the mass center",
        measure=lambda s: s["L"] * s["W"] * s["H"] / 3.0,
        center=lambda s: at(z=s["H"] / 4.0),
        unit_tensor=lambda s: spread(s["L"] ** 2 / 20.0, s["W"] ** 2 / 20.0, 3.0 / 80.0 * s["H"] ** 2),
        aliases=("pyramid", "rectangular pyramid", "right rectangular pyramid"),
    ),
    Shape(
        name="tetrahedron",
        sizes=_LEGS,
        dimension="solid",
        datum="Datum at the right-angled corner. Three edges from it along +x, +y and +z.",
        working=(
            "V = a*b*c/6",
            "xc = a/4",
            "yc = b/4",
            "zc = c/4",
            "Ixx = 3/80*m*(b^2 + c^2)",
            "Iyy = 3/80*m*(a^2 + c^2)",
            "Izz = 3/80*m*(a^2 + b^2)",
            "Ixy = m*a*b/80",
            "Iyz = m*b*c/80",
            "Izx = m*c*a/80",
        ),
        source=_SOLIDS + " (rectangular tetrahedron)",
        measure=lambda s: s["a"] * s["b"] * s["c"] / 6.0,
        center=lambda s: at(s["a"] / 4.0, s["b"] / 4.0, s["c"] / 4.0),
        unit_tensor=_tetrahedron,
        aliases=("rectangular tetrahedron", "right-angled tetrahedron", "corner tetrahedron"),
    ),
)
