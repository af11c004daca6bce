"""Solids of revolution and their halves; the axis of revolution is z."""

from __future__ import annotations

from typing import Final

import numpy as np

from .plates import HALF_AXES
from .record import Alternative, Array, Rule, Shape, Size, Sizes
from .shells import CAP_FITS, END_RADII, ONE_END_OPEN, SPHERE_RADIUS
from .sizes import HEIGHT, INNER, LENGTH, OUTER, RADIUS, RING_RULES, WALL, ring_ways
from .terms import at, at_datum, mean_radius_squared_spread, spread, variance_of_cosine

_SOLIDS: Final = "J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, table D/4"
_DIFFERENCE: Final = _SOLIDS + " (difference of two)"
_HANDBOOK: Final = "Machinery's Handbook, mass moments of inertia"
_BASE_R: Final = Size(
    "R",
    "radius of the base",
    ("radius",),
    (Alternative("D", "diameter of the base", 0.5, ("dia", "diameter")),),
)
_TORUS: Final = (
    Size(
        "R",
        "radius of the center circle",
        ("center radius", "ring radius"),
        (Alternative("D", "diameter of the center circle", 0.5, ("center diameter", "ring diameter")),),
    ),
    Size(
        "r",
        "radius of the round section",
        ("section radius",),
        (Alternative("d", "diameter of the round section", 0.5, ("section diameter",)),),
    ),
)


def _round_bar(across: Array, L: Array) -> Array:
    return spread(across, across, L * L / 12.0)


def _hollow_sphere(s: Sizes) -> Array:
    Ro, Ri = s["Ro"], s["Ri"]
    fourth = Ro**4 + Ro**3 * Ri + Ro**2 * Ri**2 + Ro * Ri**3 + Ri**4
    each = fourth / (5.0 * (Ro * Ro + Ro * Ri + Ri * Ri))
    return spread(each, each, each)


def _frustum(s: Sizes) -> Array:
    R1, R2 = s["R1"], s["R2"]
    second = R1 * R1 + R1 * R2 + R2 * R2
    fourth = R1**4 + R1**3 * R2 + R1**2 * R2**2 + R1 * R2**3 + R2**4
    length = R1**4 + 4.0 * R1**3 * R2 + 10.0 * R1**2 * R2**2 + 4.0 * R1 * R2**3 + R2**4
    across = 3.0 * fourth / (20.0 * second)
    return spread(across, across, 3.0 * s["H"] ** 2 * length / (80.0 * second**2))


def _cap(s: Sizes) -> Array:
    R, H = s["R"], s["H"]
    across = H * (20.0 * R * R - 15.0 * R * H + 3.0 * H * H) / (20.0 * (3.0 * R - H))
    along = H * H * (40.0 * R * R - 24.0 * R * H + 3.0 * H * H) / (80.0 * (3.0 * R - H) ** 2)
    return spread(across, across, along)


def _half_tube_center(s: Sizes) -> Array:
    Ro, Ri = s["Ro"], s["Ri"]
    return at(y=4.0 * (Ro * Ro + Ro * Ri + Ri * Ri) / (3.0 * np.pi * (Ro + Ri)))


def _half_tube(s: Sizes) -> Array:
    # Spread of the radius plus spread of the direction, so that a thin wall keeps its digits.
    Ro, Ri = s["Ro"], s["Ri"]
    mean = 2.0 * (Ro * Ro + Ro * Ri + Ri * Ri) / (3.0 * (Ro + Ri))
    y = 0.5 * mean_radius_squared_spread(Ro, Ri, s["t"]) + mean**2 * variance_of_cosine(0.5 * np.pi)
    return spread((Ro * Ro + Ri * Ri) / 4.0, y, s["L"] ** 2 / 12.0)


ROUND_SOLIDS: Final = (
    Shape(
        name="solid cylinder",
        sizes=(RADIUS, LENGTH),
        dimension="solid",
        datum="Datum at mid-length on the axis. Axis along z.",
        working=("V = pi*R^2*L", "Ixx = Iyy = m*(3*R^2 + L^2)/12", "Izz = m*R^2/2"),
        source=_SOLIDS,
        measure=lambda s: np.pi * s["R"] ** 2 * s["L"],
        center=at_datum,
        unit_tensor=lambda s: _round_bar(s["R"] ** 2 / 4.0, s["L"]),
        aliases=("cylinder", "round bar", "shaft", "solid shaft", "roller", "pin"),
    ),
    Shape(
        name="tube",
        sizes=(OUTER, INNER, WALL, LENGTH),
        dimension="solid",
        datum="Datum at mid-length on the axis. Axis along z, ends open.",
        working=(
            "V = pi*(Ro^2 - Ri^2)*L",
            "Ixx = Iyy = m*(3*(Ro^2 + Ri^2) + L^2)/12",
            "Izz = m*(Ro^2 + Ri^2)/2",
        ),
        source=_DIFFERENCE,
        measure=lambda s: np.pi * s["t"] * (s["Ro"] + s["Ri"]) * s["L"],
        center=at_datum,
        unit_tensor=lambda s: _round_bar((s["Ro"] ** 2 + s["Ri"] ** 2) / 4.0, s["L"]),
        rules=RING_RULES,
        ways=ring_ways("L"),
        aliases=("pipe", "hollow cylinder", "thick tube", "hollow shaft", "sleeve", "bushing"),
    ),
    Shape(
        name="half cylinder",
        sizes=(RADIUS, LENGTH),
        dimension="solid",
        datum="Datum at the middle of the flat face. Axis along z, flat face in the x-z plane, round to +y.",
        working=(
            "V = pi*R^2*L/2",
            "yc = 4*R/(3*pi)",
            "Ixx = m*(R^2/4 + L^2/12 - yc^2)",
            "Iyy = m*(R^2/4 + L^2/12)",
            "Izz = m*(R^2/2 - yc^2)",
        ),
        source=_SOLIDS,
        measure=lambda s: 0.5 * np.pi * s["R"] ** 2 * s["L"],
        center=lambda s: at(y=4.0 * s["R"] / (3.0 * np.pi)),
        unit_tensor=lambda s: spread(
            s["R"] ** 2 / 4.0, s["R"] ** 2 * (0.25 - 16.0 / (9.0 * np.pi**2)), s["L"] ** 2 / 12.0
        ),
        aliases=("semicylinder", "half round bar"),
    ),
    Shape(
        name="half tube",
        sizes=(OUTER, INNER, WALL, LENGTH),
        dimension="solid",
        datum="Datum on the axis at mid-length. Axis along z, cut faces in the x-z plane, round to +y.",
        working=(
            "V = pi*(Ro^2 - Ri^2)*L/2",
            "yc = 4*(Ro^2 + Ro*Ri + Ri^2)/(3*pi*(Ro + Ri))",
            "Ixx = m*((Ro^2 + Ri^2)/4 + L^2/12 - yc^2)",
            "Iyy = m*((Ro^2 + Ri^2)/4 + L^2/12)",
            "Izz = m*((Ro^2 + Ri^2)/2 - yc^2)",
        ),
        source=_DIFFERENCE,
        measure=lambda s: 0.5 * np.pi * s["t"] * (s["Ro"] + s["Ri"]) * s["L"],
        center=_half_tube_center,
        unit_tensor=_half_tube,
        rules=RING_RULES,
        ways=ring_ways("L"),
        aliases=("half pipe", "half hollow cylinder", "half shell"),
    ),
    Shape(
        name="elliptic cylinder",
        sizes=(*HALF_AXES[:2], LENGTH),
        dimension="solid",
        datum="Datum at mid-length on the axis. Axis along z.",
        working=(
            "V = pi*a*b*L",
            "Ixx = m*(b^2/4 + L^2/12)",
            "Iyy = m*(a^2/4 + L^2/12)",
            "Izz = m*(a^2 + b^2)/4",
        ),
        source=_SOLIDS,
        measure=lambda s: np.pi * s["a"] * s["b"] * s["L"],
        center=at_datum,
        unit_tensor=lambda s: spread(s["a"] ** 2 / 4.0, s["b"] ** 2 / 4.0, s["L"] ** 2 / 12.0),
        aliases=("elliptical cylinder", "oval bar"),
    ),
    Shape(
        name="solid sphere",
        sizes=(RADIUS,),
        dimension="solid",
        datum="Datum at the center.",
        working=("V = 4/3*pi*R^3", "Ixx = Iyy = Izz = 2/5*m*R^2"),
        source=_SOLIDS,
        measure=lambda s: 4.0 / 3.0 * np.pi * s["R"] ** 3,
        center=at_datum,
        unit_tensor=lambda s: spread(s["R"] ** 2 / 5.0, s["R"] ** 2 / 5.0, s["R"] ** 2 / 5.0),
        aliases=("sphere", "ball"),
    ),
    Shape(
        name="hollow sphere",
        sizes=(OUTER, INNER, WALL),
        dimension="solid",
        datum="Datum at the center.",
        working=(
            "V = 4/3*pi*(Ro^3 - Ri^3)",
            "Ixx = Iyy = Izz = 2/5*m*(Ro^5 - Ri^5)/(Ro^3 - Ri^3)",
        ),
        source=_DIFFERENCE,
        measure=lambda s: 4.0 / 3.0 * np.pi * s["t"] * (s["Ro"] ** 2 + s["Ro"] * s["Ri"] + s["Ri"] ** 2),
        center=at_datum,
        unit_tensor=_hollow_sphere,
        rules=RING_RULES,
        ways=ring_ways(),
        aliases=("thick spherical shell", "spherical shell", "thick sphere", "hollow ball"),
    ),
    Shape(
        name="hemisphere",
        sizes=(RADIUS,),
        dimension="solid",
        datum="Datum at the center of the flat face. Axis along z, dome to +z.",
        working=("V = 2/3*pi*R^3", "zc = 3/8*R", "Ixx = Iyy = 83/320*m*R^2", "Izz = 2/5*m*R^2"),
        source=_SOLIDS,
        measure=lambda s: 2.0 / 3.0 * np.pi * s["R"] ** 3,
        center=lambda s: at(z=3.0 / 8.0 * s["R"]),
        unit_tensor=lambda s: spread(s["R"] ** 2 / 5.0, s["R"] ** 2 / 5.0, 19.0 / 320.0 * s["R"] ** 2),
        aliases=("solid hemisphere", "half sphere"),
    ),
    Shape(
        name="spherical cap",
        sizes=(SPHERE_RADIUS, HEIGHT),
        dimension="solid",
        datum="Datum at the center of the flat face. Axis along z, crown at z = H.",
        working=(
            "V = pi*H^2*(3*R - H)/3",
            "zc = H*(4*R - H)/(4*(3*R - H))",
            "Izz = m*H*(20*R^2 - 15*R*H + 3*H^2)/(10*(3*R - H))",
            "Ixx = Iyy = Izz/2 + m*H^2*(40*R^2 - 24*R*H + 3*H^2)/(80*(3*R - H)^2)",
        ),
        source=_HANDBOOK + " (spherical segment), moved to the mass center by integration",
        measure=lambda s: np.pi * s["H"] ** 2 * (3.0 * s["R"] - s["H"]) / 3.0,
        center=lambda s: at(z=s["H"] * (4.0 * s["R"] - s["H"]) / (4.0 * (3.0 * s["R"] - s["H"]))),
        unit_tensor=_cap,
        rules=(CAP_FITS,),
        aliases=("spherical segment", "sphere cap", "solid dome"),
    ),
    Shape(
        name="solid cone",
        sizes=(_BASE_R, HEIGHT),
        dimension="solid",
        datum="Datum at the center of the base. Axis along z, apex at z = H.",
        working=(
            "V = pi*R^2*H/3",
            "zc = H/4",
            "Ixx = Iyy = m*(3/20*R^2 + 3/80*H^2)",
            "Izz = 3/10*m*R^2",
        ),
        source=_SOLIDS,
        measure=lambda s: np.pi * s["R"] ** 2 * s["H"] / 3.0,
        center=lambda s: at(z=s["H"] / 4.0),
        unit_tensor=lambda s: spread(
            3.0 / 20.0 * s["R"] ** 2, 3.0 / 20.0 * s["R"] ** 2, 3.0 / 80.0 * s["H"] ** 2
        ),
        aliases=("cone", "right circular cone"),
    ),
    Shape(
        name="frustum",
        sizes=(*END_RADII, HEIGHT),
        dimension="solid",
        datum="Datum at the center of the end of radius R1. Axis along z, end of radius R2 at z = H.",
        working=(
            "A = R1^2 + R1*R2 + R2^2",
            "V = pi*H*A/3",
            "zc = H*(R1^2 + 2*R1*R2 + 3*R2^2)/(4*A)",
            "Izz = 3/10*m*(R1^4 + R1^3*R2 + R1^2*R2^2 + R1*R2^3 + R2^4)/A",
            "Ixx = Iyy = Izz/2 + 3/80*m*H^2*(R1^4 + 4*R1^3*R2 + 10*R1^2*R2^2 + 4*R1*R2^3 + R2^4)/A^2",
        ),
        source=_HANDBOOK + " (frustum of cone), moved to the mass center by integration",
        measure=lambda s: np.pi * s["H"] * (s["R1"] ** 2 + s["R1"] * s["R2"] + s["R2"] ** 2) / 3.0,
        center=lambda s: at(
            z=s["H"]
            * (s["R1"] ** 2 + 2.0 * s["R1"] * s["R2"] + 3.0 * s["R2"] ** 2)
            / (4.0 * (s["R1"] ** 2 + s["R1"] * s["R2"] + s["R2"] ** 2))
        ),
        unit_tensor=_frustum,
        rules=(ONE_END_OPEN,),
        aliases=("solid frustum", "conical frustum", "truncated cone", "frustum of a cone"),
    ),
    Shape(
        name="paraboloid",
        sizes=(_BASE_R, HEIGHT),
        dimension="solid",
        datum="Datum at the center of the base. Paraboloid of revolution, axis along z, apex at z = H.",
        working=(
            "V = pi*R^2*H/2",
            "zc = H/3",
            "Ixx = Iyy = m*(R^2/6 + H^2/18)",
            "Izz = m*R^2/3",
        ),
        source=_SOLIDS,
        measure=lambda s: np.pi * s["R"] ** 2 * s["H"] / 2.0,
        center=lambda s: at(z=s["H"] / 3.0),
        unit_tensor=lambda s: spread(s["R"] ** 2 / 6.0, s["R"] ** 2 / 6.0, s["H"] ** 2 / 18.0),
        aliases=("paraboloid of revolution", "solid paraboloid"),
    ),
    Shape(
        name="ellipsoid",
        sizes=HALF_AXES,
        dimension="solid",
        datum="Datum at the center. Half axes a along x, b along y, c along z.",
        working=(
            "V = 4/3*pi*a*b*c",
            "Ixx = m*(b^2 + c^2)/5",
            "Iyy = m*(a^2 + c^2)/5",
            "Izz = m*(a^2 + b^2)/5",
        ),
        source=_HANDBOOK + " (ellipsoid)",
        measure=lambda s: 4.0 / 3.0 * np.pi * s["a"] * s["b"] * s["c"],
        center=at_datum,
        unit_tensor=lambda s: spread(s["a"] ** 2 / 5.0, s["b"] ** 2 / 5.0, s["c"] ** 2 / 5.0),
        aliases=("solid ellipsoid",),
    ),
    Shape(
        name="torus",
        sizes=_TORUS,
        dimension="solid",
        datum="Datum at the center. Center circle in the x-y plane, axis along z, round section.",
        working=(
            "V = 2*pi^2*R*r^2",
            "Ixx = Iyy = m*(R^2/2 + 5/8*r^2)",
            "Izz = m*(R^2 + 3/4*r^2)",
        ),
        source=_HANDBOOK + " (torus)",
        measure=lambda s: 2.0 * np.pi**2 * s["R"] * s["r"] ** 2,
        center=at_datum,
        unit_tensor=lambda s: spread(
            s["R"] ** 2 / 2.0 + 3.0 / 8.0 * s["r"] ** 2,
            s["R"] ** 2 / 2.0 + 3.0 / 8.0 * s["r"] ** 2,
            s["r"] ** 2 / 4.0,
        ),
        rules=(
            Rule("r must be at most R, or the ring overlaps itself", lambda s: np.asarray(s["r"] <= s["R"])),
        ),
        aliases=("solid torus", "o-ring", "round ring"),
    ),
)
