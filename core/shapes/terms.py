"""Pieces that many shape formulas share; bare kernels that broadcast."""

from __future__ import annotations

from collections.abc import Iterable
from math import factorial
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .record import Array, Sizes

# Below this angle [rad] a difference of trigonometric functions is summed as its power series.
SERIES_BELOW: Final = 1.0
_SINC_TERMS: Final = tuple((-1.0) ** (k + 1) / factorial(2 * k + 1) for k in range(1, 11))
_COSINE_TERMS: Final = tuple((-1.0) ** k * (k - 1) / factorial(2 * k + 2) for k in range(2, 15))


def all_hold(conditions: Iterable[ArrayLike]) -> NDArray[np.bool_]:
    """Return where all conditions hold."""
    return np.asarray(np.all(np.stack(np.broadcast_arrays(*conditions)), axis=0), dtype=np.bool_)


def at(x: ArrayLike = 0.0, y: ArrayLike = 0.0, z: ArrayLike = 0.0) -> Array:
    """Return the point x, y, z, or a column of them."""
    return np.stack(np.broadcast_arrays(*(np.asarray(part, dtype=float) for part in (x, y, z))), axis=-1)


def at_datum(sizes: Sizes) -> Array:
    """Return the mass center of a shape whose datum is its mass center."""
    return np.zeros(3)


def spread(x: ArrayLike, y: ArrayLike, z: ArrayLike, xy: ArrayLike = 0.0) -> Array:
    """Return the tensor per unit mass from the mean of x^2, y^2, z^2 and xy about the mass center."""
    x, y, z, xy = (np.asarray(part, dtype=float) for part in (x, y, z, xy))
    out = np.zeros((*np.broadcast(x, y, z, xy).shape, 3, 3))
    out[..., 0, 0], out[..., 1, 1], out[..., 2, 2] = y + z, z + x, x + y
    out[..., 0, 1] = out[..., 1, 0] = 0.0 - xy
    return out


def spread_3d(own: ArrayLike, xy: ArrayLike, yz: ArrayLike, zx: ArrayLike) -> Array:
    """Return the tensor per unit mass from the means of x^2, y^2, z^2 (last axis) and of the products."""
    own = np.asarray(own, dtype=float)
    out = spread(own[..., 0], own[..., 1], own[..., 2], xy)
    out[..., 1, 2] = out[..., 2, 1] = 0.0 - np.asarray(yz, dtype=float)
    out[..., 0, 2] = out[..., 2, 0] = 0.0 - np.asarray(zx, dtype=float)
    return out


def _series(u: Array, terms: tuple[float, ...], power: int) -> Array:
    """Return u^power times the polynomial in u^2 with the given terms."""
    total = np.zeros_like(u)
    for term in reversed(terms):
        total = total * (u * u) + term
    return total * u**power


def sinc(u: ArrayLike) -> Array:
    """Return sin(u) / u, 1 at zero."""
    return np.asarray(np.sinc(np.asarray(u, dtype=float) / np.pi), dtype=np.float64)


def one_minus_sinc(u: ArrayLike) -> Array:
    """Return 1 - sin(u) / u without the loss of digits at small u."""
    u = np.asarray(u, dtype=float)
    small = _series(np.minimum(u, SERIES_BELOW), _SINC_TERMS, 2)
    return np.where(u < SERIES_BELOW, small, 1.0 - sinc(u))


def variance_of_cosine(half_angle: ArrayLike) -> Array:
    """Return mean of cos^2 minus the square of the mean of cos, over -half_angle to +half_angle.

    In closed form (1 + sinc 2a)/2 - sinc^2 a, which is a^4/45 at small a: there the power series is summed.
    """
    a = np.asarray(half_angle, dtype=float)
    small = _series(2.0 * np.minimum(a, SERIES_BELOW), _COSINE_TERMS, 4)
    return np.where(a < SERIES_BELOW, small, 0.5 * (1.0 + sinc(2.0 * a)) - sinc(a) ** 2)


def mean_radius_squared_spread(Ro: Array, Ri: Array, t: Array) -> Array:
    """Return the variance of the distance from the axis over an annulus of wall t."""
    return np.asarray(t * t * (Ro * Ro + 4.0 * Ro * Ri + Ri * Ri) / (18.0 * (Ro + Ri) ** 2), dtype=np.float64)
