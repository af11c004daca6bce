"""Curved shapes without wall thickness; the axis of revolution is z."""

from __future__ import annotations

from typing import Final

import numpy as np

from .record import Alternative, Array, Rule, Shape, Size, Sizes
from .sizes import HEIGHT, LENGTH, MEAN_RADIUS, SHELL_WALL, thin
from .terms import at, at_datum, spread

_SOLIDS: Final = "J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, table D/4"
END_RADII: Final = (
    Size(
        "R1",
        "radius at the datum, z = 0",
        ("radius 1",),
        (Alternative("D1", "diameter at the datum", 0.5, ("diameter 1",)),),
        sign="not negative",
    ),
    Size(
        "R2",
        "radius at z = H",
        ("radius 2",),
        (Alternative("D2", "diameter at z = H", 0.5, ("diameter 2",)),),
        sign="not negative",
    ),
)
ONE_END_OPEN: Final = Rule("R1 and R2 must not both be zero", lambda s: s["R1"] + s["R2"] > 0.0)
SPHERE_RADIUS: Final = Size(
    "R", "radius of the sphere", ("radius",), (Alternative("D", "diameter of the sphere", 0.5, ("dia",)),)
)
CAP_FITS: Final = Rule(
    "H must be at most the diameter of the sphere", lambda s: np.asarray(s["H"] <= 2.0 * s["R"])
)


def _thin_frustum(s: Sizes) -> Array:
    R1, R2, H = s["R1"], s["R2"], s["H"]
    across = (R1 * R1 + R2 * R2) / 4.0
    return spread(across, across, H * H * (R1 * R1 + 4.0 * R1 * R2 + R2 * R2) / (18.0 * (R1 + R2) ** 2))


def _thin_cap(s: Sizes) -> Array:
    across = s["H"] * (3.0 * s["R"] - s["H"]) / 6.0
    return spread(across, across, s["H"] ** 2 / 12.0)


SHELLS: Final = (
    Shape(
        name="thin tube",
        sizes=(MEAN_RADIUS, LENGTH, SHELL_WALL),
        dimension="shell",
        datum="Datum at mid-length on the axis. Axis along z, ends open.",
        working=("area = 2*pi*R*L", "Ixx = Iyy = m*(R^2/2 + L^2/12)", "Izz = m*R^2"),
        source=_SOLIDS,
        measure=lambda s: 2.0 * np.pi * s["R"] * s["L"],
        center=at_datum,
        unit_tensor=lambda s: spread(s["R"] ** 2 / 2.0, s["R"] ** 2 / 2.0, s["L"] ** 2 / 12.0),
        rules=(thin("t", "R"),),
        aliases=("thin cylinder", "cylindrical shell", "thin-walled tube", "open cylinder"),
    ),
    Shape(
        name="thin half tube",
        sizes=(MEAN_RADIUS, LENGTH, SHELL_WALL),
        dimension="shell",
        datum="Datum on the axis at mid-length. Axis along z, straight edges at x = R and -R, arc to +y.",
        working=(
            "area = pi*R*L",
            "yc = 2*R/pi",
            "Ixx = m*(R^2/2 + L^2/12 - yc^2)",
            "Iyy = m*(R^2/2 + L^2/12)",
            "Izz = m*(R^2 - yc^2)",
        ),
        source=_SOLIDS,
        measure=lambda s: np.pi * s["R"] * s["L"],
        center=lambda s: at(y=2.0 * s["R"] / np.pi),
        unit_tensor=lambda s: spread(
            s["R"] ** 2 / 2.0, s["R"] ** 2 * (0.5 - 4.0 / np.pi**2), s["L"] ** 2 / 12.0
        ),
        rules=(thin("t", "R"),),
        aliases=("trough", "half cylindrical shell", "thin half cylinder"),
    ),
    Shape(
        name="thin sphere",
        sizes=(MEAN_RADIUS, SHELL_WALL),
        dimension="shell",
        datum="Datum at the center.",
        working=("area = 4*pi*R^2", "Ixx = Iyy = Izz = 2/3*m*R^2"),
        source=_SOLIDS,
        measure=lambda s: 4.0 * np.pi * s["R"] ** 2,
        center=at_datum,
        unit_tensor=lambda s: spread(s["R"] ** 2 / 3.0, s["R"] ** 2 / 3.0, s["R"] ** 2 / 3.0),
        rules=(thin("t", "R"),),
        aliases=("thin spherical shell", "thin-walled sphere"),
    ),
    Shape(
        name="thin hemisphere",
        sizes=(MEAN_RADIUS, SHELL_WALL),
        dimension="shell",
        datum="Datum at the center of the open rim. Axis along z, dome to +z, no floor.",
        working=("area = 2*pi*R^2", "zc = R/2", "Ixx = Iyy = 5/12*m*R^2", "Izz = 2/3*m*R^2"),
        source=_SOLIDS,
        measure=lambda s: 2.0 * np.pi * s["R"] ** 2,
        center=lambda s: at(z=s["R"] / 2.0),
        unit_tensor=lambda s: spread(s["R"] ** 2 / 3.0, s["R"] ** 2 / 3.0, s["R"] ** 2 / 12.0),
        rules=(thin("t", "R"),),
        aliases=("hemispherical shell", "thin hemispherical shell"),
    ),
    Shape(
        name="thin spherical cap",
        sizes=(SPHERE_RADIUS, HEIGHT, SHELL_WALL),
        dimension="shell",
        datum="Datum at the center of the open rim. Axis along z, crown at z = H, no floor.",
        working=(
            "area = 2*pi*R*H",
            "zc = H/2",
            "Ixx = Iyy = m*(H*(3*R - H)/6 + H^2/12)",
            "Izz = m*H*(3*R - H)/3",
        ),
        source="Integration over the zone of a sphere, whose area is even along its axis (Archimedes)",
        measure=lambda s: 2.0 * np.pi * s["R"] * s["H"],
        center=lambda s: at(z=s["H"] / 2.0),
        unit_tensor=_thin_cap,
        rules=(CAP_FITS, thin("t", "R")),
        aliases=("dished head", "dished end", "thin dome"),
    ),
    Shape(
        name="thin cone",
        sizes=(MEAN_RADIUS, HEIGHT, SHELL_WALL),
        dimension="shell",
        datum="Datum at the center of the open base. Axis along z, apex at z = H, no floor.",
        working=(
            "area = pi*R*sqrt(R^2 + H^2)",
            "zc = H/3",
            "Ixx = Iyy = m*(R^2/4 + H^2/18)",
            "Izz = m*R^2/2",
        ),
        source=_SOLIDS,
        measure=lambda s: np.pi * s["R"] * np.hypot(s["R"], s["H"]),
        center=lambda s: at(z=s["H"] / 3.0),
        unit_tensor=lambda s: spread(s["R"] ** 2 / 4.0, s["R"] ** 2 / 4.0, s["H"] ** 2 / 18.0),
        rules=(thin("t", "R"),),
        aliases=("conical shell", "thin conical shell", "hollow cone"),
    ),
    Shape(
        name="thin frustum",
        sizes=(*END_RADII, HEIGHT, SHELL_WALL),
        dimension="shell",
        datum="Datum at the center of the R1 end. Axis along z, R2 end at z = H, both ends open.",
        working=(
            "area = pi*(R1 + R2)*sqrt((R1 - R2)^2 + H^2)",
            "zc = H*(R1 + 2*R2)/(3*(R1 + R2))",
            "Ixx = Iyy = m*((R1^2 + R2^2)/4 + H^2*(R1^2 + 4*R1*R2 + R2^2)/(18*(R1 + R2)^2))",
            "Izz = m*(R1^2 + R2^2)/2",
        ),
        source="J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, table D/4 (difference of cones)",
        measure=lambda s: np.pi * (s["R1"] + s["R2"]) * np.hypot(s["R1"] - s["R2"], s["H"]),
        center=lambda s: at(z=s["H"] * (s["R1"] + 2.0 * s["R2"]) / (3.0 * (s["R1"] + s["R2"]))),
        unit_tensor=_thin_frustum,
        rules=(ONE_END_OPEN, Rule("t must be at most 0.1 of the larger radius", lambda s: _frustum_thin(s))),
        aliases=("hopper", "conical frustum shell", "thin conical frustum"),
    ),
)


def _frustum_thin(s: Sizes) -> np.ndarray[tuple[int, ...], np.dtype[np.bool_]]:
    """Return where the wall, if it is given, is small beside the larger end."""
    return np.asarray("t" not in s or s["t"] <= 0.1 * np.maximum(s["R1"], s["R2"]))
