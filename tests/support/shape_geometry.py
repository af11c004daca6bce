"""Shapes as the region of space they fill, for checks that share no formula with the package.

Each shape is a list of patches: maps from the unit interval, square or cube into space. Gauss-Legendre
quadrature over a patch gives its measure, mass center and tensor; the Jacobian comes from complex steps,
which are exact to rounding for the analytic maps used here.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
# Takes parameters (k, n) in the unit cube, real or complex, and returns points (3, n).
Patch = tuple[int, Callable[[NDArray[np.complex128]], NDArray[np.complex128]]]
Sizes = Mapping[str, float]
NODES = {1: 60, 2: 48, 3: 36}


@dataclass(frozen=True)
class MassProperties:
    measure: float
    center: Array
    unit_tensor: Array


def integrate(patches: list[Patch]) -> MassProperties:
    """Return measure, center and tensor about the center per unit mass, by quadrature over the patches."""
    points, weights = [], []
    for dimension, patch in patches:
        nodes, gauss = np.polynomial.legendre.leggauss(NODES[dimension])
        grid = np.meshgrid(*[0.5 * (nodes + 1.0)] * dimension, indexing="ij")
        p = np.stack([axis.ravel() for axis in grid])
        w = np.ones(p.shape[1])
        for axis in np.meshgrid(*[0.5 * gauss] * dimension, indexing="ij"):
            w = w * axis.ravel()
        step = 1e-30
        columns = []
        for k in range(dimension):
            moved = p.astype(complex)
            moved[k] += 1j * step
            columns.append(np.imag(_full(patch(moved), p.shape[1])) / step)
        jacobian = np.stack(columns, axis=-1).transpose(1, 0, 2)
        gram = np.swapaxes(jacobian, -1, -2) @ jacobian
        if dimension == 3:
            area = np.abs(np.linalg.det(jacobian))
        elif dimension == 2:
            area = np.linalg.norm(np.cross(jacobian[:, :, 0], jacobian[:, :, 1]), axis=-1)
        else:
            area = np.sqrt(gram[:, 0, 0])
        points.append(np.real(_full(patch(p.astype(complex)), p.shape[1])))
        weights.append(w * area)
    x, dm = np.concatenate(points, axis=1), np.concatenate(weights)
    total = dm.sum()
    center = (x * dm).sum(axis=1) / total
    arm = x - center[:, None]
    second = (arm * dm) @ arm.T / total
    return MassProperties(float(total), center, np.trace(second) * np.eye(3) - second)


def _full(parts: object, count: int) -> NDArray[np.complex128]:
    return np.stack([np.broadcast_to(np.asarray(part, dtype=complex), (count,)) for part in parts])  # type: ignore[attr-defined]


def polar(r0: float, r1: float, start: float, end: float, z0: float, z1: float) -> Patch:
    """Return the part of a thick tube between two directions."""

    def point(p: NDArray[np.complex128]) -> object:
        r, angle = r0 + (r1 - r0) * p[0], start + (end - start) * p[1]
        return r * np.cos(angle), r * np.sin(angle), z0 + (z1 - z0) * p[2]

    return 3, point


def flat_polar(r0: float, r1: float, start: float, end: float) -> Patch:
    def point(p: NDArray[np.complex128]) -> object:
        r, angle = r0 + (r1 - r0) * p[0], start + (end - start) * p[1]
        return r * np.cos(angle), r * np.sin(angle), 0.0

    return 2, point


def block(x0: float, x1: float, y0: float, y1: float, z0: float, z1: float) -> Patch:
    return 3, lambda p: (x0 + (x1 - x0) * p[0], y0 + (y1 - y0) * p[1], z0 + (z1 - z0) * p[2])


def turned_surface(
    radius: Callable[[object], object], height: Callable[[object], object], end: float
) -> Patch:
    """Return the surface that a profile r(u), z(u) sweeps about z, from the direction 0 to `end`."""

    def point(p: NDArray[np.complex128]) -> object:
        r, angle = radius(p[0]), end * p[1]
        return r * np.cos(angle), r * np.sin(angle), height(p[0])  # type: ignore[operator]

    return 2, point


def turned_solid(radius: Callable[[object], object], z1: float) -> Patch:
    """Return the solid below a profile r(z), z from 0 to z1."""

    def point(p: NDArray[np.complex128]) -> object:
        z = z1 * p[2]
        r, angle = p[0] * radius(z), 2.0 * np.pi * p[1]  # type: ignore[operator]
        return r * np.cos(angle), r * np.sin(angle), z

    return 3, point


def ball(a: float, b: float, c: float, inner: float = 0.0, polar_end: float = np.pi) -> Patch:
    """Return an ellipsoid, or the part of it down to an angle from +z, from the share `inner` outward."""

    def point(p: NDArray[np.complex128]) -> object:
        r, down, angle = inner + (1.0 - inner) * p[0], polar_end * p[1], 2.0 * np.pi * p[2]
        return (
            a * r * np.sin(down) * np.cos(angle),
            b * r * np.sin(down) * np.sin(angle),
            c * r * np.cos(down),
        )

    return 3, point


def simplex(*corners: tuple[float, float, float]) -> Patch:
    """Return a flat triangle (three corners) or a tetrahedron (four) as a collapsed square or cube."""
    where = np.asarray(corners, dtype=float)

    def point(p: NDArray[np.complex128]) -> object:
        out = np.zeros((3, p.shape[1]), dtype=complex)
        left = np.ones(p.shape[1], dtype=complex)
        for k in range(len(where) - 1):
            out += where[k][:, None] * (left * (1.0 - p[k]))
            left = left * p[k]
        return out + where[-1][:, None] * left

    return len(where) - 1, point


def prism(corners: list[tuple[float, float]], z0: float, z1: float) -> list[Patch]:
    """Return a convex prism as triangular prisms from its first corner."""
    patches: list[Patch] = []
    for (x1, y1), (x2, y2) in pairwise(corners[1:]):
        flat = simplex((*corners[0], 0.0), (x1, y1, 0.0), (x2, y2, 0.0))[1]

        def point(p: NDArray[np.complex128], flat: Callable[..., object] = flat) -> object:
            x, y, _ = flat(p[:2])  # type: ignore[misc]
            return x, y, z0 + (z1 - z0) * p[2]

        patches.append((3, point))
    return patches


def _triangle(s: Sizes) -> list[tuple[float, float]]:
    return [(0.0, 0.0), (s["b"], 0.0), (s["e"], s["h"])]


def _cap_angle(s: Sizes) -> float:
    return float(np.arccos(1.0 - s["H"] / s["R"]))


def _hexagon(s: Sizes) -> list[tuple[float, float]]:
    corner = s["AF"] / np.sqrt(3.0)
    return [(corner * np.cos(a), corner * np.sin(a)) for a in np.pi / 6.0 + np.pi / 3.0 * np.arange(6)]


def _box_tube(s: Sizes) -> list[Patch]:
    x, y, z, t = s["L"] / 2, s["W"] / 2, s["H"] / 2, s["t"]
    return [
        block(-x, x, -y, -y + t, -z, z),
        block(-x, x, y - t, y, -z, z),
        block(-x, x, -y + t, y - t, -z, -z + t),
        block(-x, x, -y + t, y - t, z - t, z),
    ]


def _closed_box(s: Sizes) -> list[Patch]:
    x, y, z, t = s["L"] / 2, s["W"] / 2, s["H"] / 2, s["t"]
    ends = [block(-x, -x + t, -y, y, -z, z), block(x - t, x, -y, y, -z, z)]
    return ends + _box_tube({"L": s["L"] - 2 * t, "W": s["W"], "H": s["H"], "t": t})


def _thin_arc(s: Sizes) -> list[Patch]:
    half = s["angle"] / 2

    def point(p: NDArray[np.complex128]) -> object:
        angle = half * (2.0 * p[0] - 1.0)
        return s["R"] * np.cos(angle), s["R"] * np.sin(angle), 0.0

    return [(1, point)]


def _cap(s: Sizes) -> list[Patch]:
    def point(p: NDArray[np.complex128]) -> object:
        # Shells below the crown: the level of a disk is quadratic in p, so its radius is smooth there.
        depth = s["H"] * p[2] ** 2
        r, angle = p[0] * np.sqrt(2.0 * s["R"] * s["H"] - s["H"] * depth) * p[2], 2.0 * np.pi * p[1]
        return r * np.cos(angle), r * np.sin(angle), s["H"] - depth

    return [(3, point)]


def _torus(s: Sizes) -> list[Patch]:
    def point(p: NDArray[np.complex128]) -> object:
        a, b, r = 2.0 * np.pi * p[0], 2.0 * np.pi * p[1], s["r"] * p[2]
        ring = s["R"] + r * np.cos(b)
        return ring * np.cos(a), ring * np.sin(a), r * np.sin(b)

    return [(3, point)]


TURN, PI = 2.0 * np.pi, np.pi
GEOMETRY: dict[str, Callable[[Sizes], list[Patch]]] = {
    "slender rod": lambda s: [(1, lambda p: (0.0, 0.0, s["L"] * (p[0] - 0.5)))],
    "thin ring": lambda s: _thin_arc({"R": s["R"], "angle": TURN}),
    "thin arc": _thin_arc,
    "disk": lambda s: [flat_polar(0.0, s["R"], 0.0, TURN)],
    "annular disk": lambda s: [flat_polar(s["Ri"], s["Ro"], 0.0, TURN)],
    "half disk": lambda s: [flat_polar(0.0, s["R"], 0.0, PI)],
    "sector": lambda s: [flat_polar(0.0, s["R"], -s["angle"] / 2, s["angle"] / 2)],
    "annular sector": lambda s: [flat_polar(s["Ri"], s["Ro"], -s["angle"] / 2, s["angle"] / 2)],
    "elliptic disk": lambda s: [
        (2, lambda p: (s["a"] * p[0] * np.cos(TURN * p[1]), s["b"] * p[0] * np.sin(TURN * p[1]), 0.0))
    ],
    "thin plate": lambda s: [(2, lambda p: (s["L"] * (p[0] - 0.5), s["W"] * (p[1] - 0.5), 0.0))],
    "triangular plate": lambda s: [simplex(*[(x, y, 0.0) for x, y in _triangle(s)])],
    "thin tube": lambda s: [turned_surface(lambda u: s["R"], lambda u: s["L"] * (u - 0.5), TURN)],
    "thin half tube": lambda s: [turned_surface(lambda u: s["R"], lambda u: s["L"] * (u - 0.5), PI)],
    "thin sphere": lambda s: [
        turned_surface(lambda u: s["R"] * np.sin(PI * u), lambda u: s["R"] * np.cos(PI * u), TURN)
    ],
    "thin hemisphere": lambda s: [
        turned_surface(lambda u: s["R"] * np.sin(PI / 2 * u), lambda u: s["R"] * np.cos(PI / 2 * u), TURN)
    ],
    "thin spherical cap": lambda s: [
        turned_surface(
            lambda u: s["R"] * np.sin(_cap_angle(s) * u),
            lambda u: s["R"] * np.cos(_cap_angle(s) * u) - (s["R"] - s["H"]),
            TURN,
        )
    ],
    "thin cone": lambda s: [turned_surface(lambda u: s["R"] * (1.0 - u), lambda u: s["H"] * u, TURN)],
    "thin frustum": lambda s: [
        turned_surface(lambda u: s["R1"] + (s["R2"] - s["R1"]) * u, lambda u: s["H"] * u, TURN)
    ],
    "solid cylinder": lambda s: [polar(0.0, s["R"], 0.0, TURN, -s["L"] / 2, s["L"] / 2)],
    "tube": lambda s: [polar(s["Ri"], s["Ro"], 0.0, TURN, -s["L"] / 2, s["L"] / 2)],
    "half cylinder": lambda s: [polar(0.0, s["R"], 0.0, PI, -s["L"] / 2, s["L"] / 2)],
    "half tube": lambda s: [polar(s["Ri"], s["Ro"], 0.0, PI, -s["L"] / 2, s["L"] / 2)],
    "elliptic cylinder": lambda s: [
        (
            3,
            lambda p: (
                s["a"] * p[0] * np.cos(TURN * p[1]),
                s["b"] * p[0] * np.sin(TURN * p[1]),
                s["L"] * (p[2] - 0.5),
            ),
        )
    ],
    "solid sphere": lambda s: [ball(s["R"], s["R"], s["R"])],
    "hollow sphere": lambda s: [ball(s["Ro"], s["Ro"], s["Ro"], inner=s["Ri"] / s["Ro"])],
    "hemisphere": lambda s: [ball(s["R"], s["R"], s["R"], polar_end=PI / 2)],
    "spherical cap": _cap,
    "solid cone": lambda s: [turned_solid(lambda z: s["R"] * (1.0 - z / s["H"]), s["H"])],  # type: ignore[operator]
    "frustum": lambda s: [
        turned_solid(lambda z: s["R1"] + (s["R2"] - s["R1"]) * z / s["H"], s["H"])  # type: ignore[operator]
    ],
    "paraboloid": lambda s: [
        (
            3,
            lambda p: (
                s["R"] * p[2] * p[0] * np.cos(TURN * p[1]),
                s["R"] * p[2] * p[0] * np.sin(TURN * p[1]),
                s["H"] * (1.0 - p[2] ** 2),
            ),
        )
    ],
    "ellipsoid": lambda s: [ball(s["a"], s["b"], s["c"])],
    "torus": _torus,
    "box": lambda s: [block(*(sign * s[k] / 2 for k in ("L", "W", "H") for sign in (-1, 1)))],
    "hollow box": _box_tube,
    "closed hollow box": _closed_box,
    "hexagonal bar": lambda s: prism(_hexagon(s), -s["L"] / 2, s["L"] / 2),
    "triangular prism": lambda s: prism(_triangle(s), -s["L"] / 2, s["L"] / 2),
    "wedge": lambda s: prism([(0.0, 0.0), (s["L"], 0.0), (0.0, s["W"])], 0.0, s["H"]),
    "right pyramid": lambda s: [
        (
            3,
            lambda p: (
                s["L"] * (p[0] - 0.5) * (1.0 - p[2]),
                s["W"] * (p[1] - 0.5) * (1.0 - p[2]),
                s["H"] * p[2],
            ),
        )
    ],
    "tetrahedron": lambda s: [
        simplex((0.0, 0.0, 0.0), (s["a"], 0.0, 0.0), (0.0, s["b"], 0.0), (0.0, 0.0, s["c"]))
    ],
}
