"""Bodies as weighted points that have exactly a body's mass, mass center and tensor.

Gauss points integrate polynomials of the second degree exactly, so sums over these points are exact integrals
over boxes, cylinders, tubes and cones. Turning, copying, placing and cutting out are done on the points.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.spatial.transform import Rotation

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Cloud:
    """Masses (n,) [kg], negative in cut-outs, at points (n, 3) [m]."""

    masses: Array
    points: Array

    def scaled_to(self, mass: float) -> Cloud:
        return Cloud(self.masses * (mass / self.masses.sum()), self.points)

    def times(self, factor: float) -> Cloud:
        return Cloud(self.masses * factor, self.points)

    def turned(self, turn: Rotation, about: Array) -> Cloud:
        return Cloud(self.masses, turn.apply(self.points - about) + about)

    def moved(self, by: Array) -> Cloud:
        return Cloud(self.masses, self.points + by)

    @property
    def mass(self) -> float:
        return float(self.masses.sum())

    @property
    def center(self) -> Array:
        return self.masses @ self.points / self.masses.sum()

    def tensor(self, about: Array | None = None) -> Array:
        """Return the sum of m (r.r E - r r^T) about a point, the mass center when omitted."""
        r = self.points - (self.center if about is None else about)
        return np.einsum(
            "n,nij->ij", self.masses, (r * r).sum(1)[:, None, None] * np.eye(3) - r[:, :, None] * r[:, None]
        )


def together(clouds: list[Cloud]) -> Cloud:
    return Cloud(np.concatenate([c.masses for c in clouds]), np.concatenate([c.points for c in clouds]))


def line(start: float, end: float, count: int = 3) -> tuple[Array, Array]:
    """Return Gauss points and weights over an interval."""
    x, w = np.polynomial.legendre.leggauss(count)
    return start + (end - start) * (x + 1) / 2, w * (end - start) / 2


def box(length: float, width: float, height: float) -> Cloud:
    """Return a box L x W x H along x, y, z at unit density, its datum at the middle."""
    grid = [line(-s / 2, s / 2) for s in (length, width, height)]
    points = np.array(np.meshgrid(*[x for x, _ in grid], indexing="ij")).reshape(3, -1).T
    weights = np.einsum("i,j,k->ijk", *[w for _, w in grid]).ravel()
    return Cloud(weights, points)


def round_part(inner: float, outer: float, start: float, end: float, taper: float = 0.0) -> Cloud:
    """Return a tube about z at unit density; with `taper` radii shrink linearly from 1 to 1 - taper over z."""
    z, wz = line(start, end, 6)
    angle = 2 * np.pi * np.arange(8) / 8
    masses, points = [], []
    for height, weight in zip(z, wz, strict=True):
        shrink = 1.0 - taper * (height - start) / (end - start)
        r, wr = line(inner * shrink, outer * shrink, 4)
        for radius, share in zip(r, wr, strict=True):
            masses.append(np.full(8, weight * share * radius * 2 * np.pi / 8))
            points.append(
                np.stack((radius * np.cos(angle), radius * np.sin(angle), np.full(8, height)), axis=1)
            )
    return Cloud(np.concatenate(masses), np.concatenate(points))


def triangle(corners: Array) -> tuple[Array, Array]:
    """Return points (3, 2) and signed areas (3,) that integrate quadratics over a triangle: its mid-sides."""
    a, b, c = corners
    area = ((b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])) / 2
    return np.array([(a + b) / 2, (b + c) / 2, (c + a) / 2]), np.full(3, area / 3)


def polygon(corners: Array, thickness: float) -> Cloud:
    """Return a flat plate at unit density: triangles fanned from a point outside, areas signed."""
    outside = corners.mean(axis=0) + np.ptp(corners, axis=0) * [1.3, -1.7]
    z, wz = line(-thickness / 2, thickness / 2)
    masses, points = [], []
    for start, end in zip(corners, np.roll(corners, -1, axis=0), strict=True):
        at, area = triangle(np.array([outside, start, end]))
        for height, weight in zip(z, wz, strict=True):
            masses.append(area * weight)
            points.append(np.column_stack((at, np.full(3, height))))
    cloud = Cloud(np.concatenate(masses), np.concatenate(points))
    return cloud.times(float(np.sign(cloud.mass)))
