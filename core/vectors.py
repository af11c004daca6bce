"""Short vector kernels on arrays whose last axis is x, y, z; all broadcast over the leading axes."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray


def cross(a: ArrayLike, b: ArrayLike) -> NDArray[np.float64]:
    """Return the cross product a x b.

    Parameters
    ----------
    a : array_like, shape (..., 3)
        First factor [any unit].
    b : array_like, shape (..., 3)
        Second factor [any unit].

    Returns
    -------
    ndarray, shape (..., 3)
        a x b [product of the units].

    Notes
    -----
    Right-handed axes. Written out by component, for single vectors in plain numbers: many times faster
    than the general routine of NumPy.

    References
    ----------
    E. Kreyszig, Advanced Engineering Mathematics, 10th ed., section 9.3.
    """
    a, b = np.asarray(a, dtype=float), np.asarray(b, dtype=float)
    if a.ndim == 1 == b.ndim:
        ux, uy, uz = a.tolist()
        vx, vy, vz = b.tolist()
        return np.array((uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx))
    out = np.empty(np.broadcast(a, b).shape)
    ax, ay, az = a[..., 0], a[..., 1], a[..., 2]
    bx, by, bz = b[..., 0], b[..., 1], b[..., 2]
    out[..., 0] = ay * bz - az * by
    out[..., 1] = az * bx - ax * bz
    out[..., 2] = ax * by - ay * bx
    return out


def dot(a: ArrayLike, b: ArrayLike) -> NDArray[np.float64]:
    """Return the dot product of a and b.

    Parameters
    ----------
    a : array_like, shape (..., 3)
        First factor [any unit].
    b : array_like, shape (..., 3)
        Second factor [any unit].

    Returns
    -------
    ndarray, shape (...)
        Sum of the products of the components [product of the units].

    Notes
    -----
    Valid for any finite components.

    References
    ----------
    E. Kreyszig, Advanced Engineering Mathematics, 10th ed., section 9.2.
    """
    a, b = np.asarray(a, dtype=float), np.asarray(b, dtype=float)
    return np.asarray(a[..., 0] * b[..., 0] + a[..., 1] * b[..., 1] + a[..., 2] * b[..., 2], dtype=np.float64)


def norm(a: ArrayLike) -> NDArray[np.float64]:
    """Return the length of a vector.

    Parameters
    ----------
    a : array_like, shape (..., 3)
        Vector [any unit].

    Returns
    -------
    ndarray, shape (...)
        Length [same unit].

    Notes
    -----
    `hypot` keeps very small and very large components from under- and overflowing.

    References
    ----------
    E. Kreyszig, Advanced Engineering Mathematics, 10th ed., section 9.2.
    """
    a = np.asarray(a, dtype=float)
    return np.asarray(np.hypot(np.hypot(a[..., 0], a[..., 1]), a[..., 2]), dtype=np.float64)


def skew(a: ArrayLike) -> NDArray[np.float64]:
    """Return the skew-symmetric matrix S of a, for which S b = a x b.

    Parameters
    ----------
    a : array_like, shape (..., 3)
        Vector [any unit].

    Returns
    -------
    ndarray, shape (..., 3, 3)
        Cross-product matrix [same unit].

    Notes
    -----
    Right-handed axes.

    References
    ----------
    M. W. Spong, S. Hutchinson, M. Vidyasagar, Robot Modeling and Control, section 4.2.
    """
    a = np.asarray(a, dtype=float)
    out = np.zeros((*a.shape, 3))
    out[..., 0, 1], out[..., 0, 2] = -a[..., 2], a[..., 1]
    out[..., 1, 0], out[..., 1, 2] = a[..., 2], -a[..., 0]
    out[..., 2, 0], out[..., 2, 1] = -a[..., 1], a[..., 0]
    return out


def rotation_matrix(axis: ArrayLike, angle: ArrayLike) -> NDArray[np.float64]:
    """Return the matrix of an active turn about an axis.

    Parameters
    ----------
    axis : array_like, shape (..., 3)
        Direction of the axis, of any length but zero [-].
    angle : array_like, shape (...)
        Angle of the turn [rad], positive by the right-hand rule about `axis`.

    Returns
    -------
    ndarray, shape (..., 3, 3)
        Matrix R [-]; R v is the turned vector, R I R^T the turned tensor.

    Notes
    -----
    1 - cos is taken as 2 sin^2 of half the angle, so that a small turn keeps its digits. A zero axis
    gives NaN: whoever calls checks it.

    References
    ----------
    O. Rodrigues' rotation formula; J. J. Craig, Introduction to Robotics, 3rd ed., section 2.8.
    """
    axis, angle = np.asarray(axis, dtype=float), np.asarray(angle, dtype=float)
    with np.errstate(invalid="ignore"):
        cross_matrix = skew(axis / norm(axis)[..., None])
    sine, versine = np.sin(angle)[..., None, None], 2.0 * np.sin(0.5 * angle)[..., None, None] ** 2
    return np.asarray(
        np.eye(3) + sine * cross_matrix + versine * (cross_matrix @ cross_matrix), dtype=np.float64
    )


def turn_xyz(angles: ArrayLike) -> NDArray[np.float64]:
    """Return the matrix of a turn about the sheet's x, then the sheet's y, then the sheet's z axis.

    Parameters
    ----------
    angles : array_like, shape (..., 3)
        Angles about x, y and z [rad], in the order they are made.

    Returns
    -------
    ndarray, shape (..., 3, 3)
        Matrix Rz Ry Rx [-]; active.

    Notes
    -----
    The axes stay those of the sheet: the second turn is not about the already turned y axis.

    References
    ----------
    J. J. Craig, Introduction to Robotics, 3rd ed., section 2.8 (X-Y-Z fixed angles).
    """
    angles = np.asarray(angles, dtype=float)
    cosine, sine = np.cos(angles), np.sin(angles)
    cx, cy, cz = cosine[..., 0], cosine[..., 1], cosine[..., 2]
    sx, sy, sz = sine[..., 0], sine[..., 1], sine[..., 2]
    out = np.empty((*angles.shape, 3))
    out[..., 0, 0], out[..., 0, 1], out[..., 0, 2] = cz * cy, cz * sy * sx - sz * cx, cz * sy * cx + sz * sx
    out[..., 1, 0], out[..., 1, 1], out[..., 1, 2] = sz * cy, sz * sy * sx + cz * cx, sz * sy * cx - cz * sx
    out[..., 2, 0], out[..., 2, 1], out[..., 2, 2] = -sy, cy * sx, cy * cx
    return out
