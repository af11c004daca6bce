"""Principal moments and axes of an inertia tensor."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .vectors import cross, norm

# Moments this close, relative to the largest, count as equal: their axes are then free to choose.
EQUAL_MOMENTS: Final = 1e-11


@dataclass(frozen=True, eq=False, slots=True)
class Principal:
    """Principal moments and axes of an inertia tensor.

    Parameters
    ----------
    moments : ndarray, shape (3,)
        Principal moments [kg m^2], ascending.
    axes : ndarray, shape (3, 3)
        Principal axes as unit columns [-], right-handed, in the order of `moments`.
    """

    moments: NDArray[np.float64]
    axes: NDArray[np.float64]


def principal(inertia: ArrayLike) -> Principal:
    """Return the principal moments and axes of a tensor.

    Parameters
    ----------
    inertia : array_like, shape (3, 3)
        Inertia tensor [kg m^2], symmetric.

    Returns
    -------
    Principal
        Moments ascending [kg m^2]; axes as right-handed unit columns [-].

    Notes
    -----
    The largest component of the first two axes is positive; the third completes a right-handed set. Where
    moments are equal the axes are not unique: then those closest to the sheet's axes are chosen.

    References
    ----------
    H. Goldstein, C. Poole, J. Safko, Classical Mechanics, 3rd ed., section 5.4.
    """
    moments, axes = np.linalg.eigh(np.asarray(inertia, dtype=float))
    limit = EQUAL_MOMENTS * float(np.abs(moments).max())
    low, high = float(moments[1] - moments[0]) <= limit, float(moments[2] - moments[1]) <= limit
    if low and high:
        return Principal(moments, np.eye(3))
    if low:
        axes[:, 0], axes[:, 1] = _axes_across(axes[:, 2])
    elif high:
        axes[:, 1], axes[:, 2] = _axes_across(axes[:, 0])
    for column in (0, 1):
        axes[:, column] *= _sign_of_largest(axes[:, column])
    axes[:, 2] = cross(axes[:, 0], axes[:, 1])
    # A zero with a minus would show as -0 in a cell.
    return Principal(moments, axes + 0.0)


def _largest(size: NDArray[np.float64]) -> int:
    """Return the place of the largest entry; of two as large, of the first, whatever the rounding."""
    return int(np.flatnonzero(size >= size.max() - 1e-9)[0])


def _sign_of_largest(axis: NDArray[np.float64]) -> float:
    """Return the sign of the largest component."""
    return 1.0 if axis[_largest(np.abs(axis))] > 0.0 else -1.0


def _axes_across(axis: NDArray[np.float64]) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Return two axes square to `axis`, one of them as close to a sheet axis as can be, in sheet order."""
    nearest = _largest(1.0 - axis**2)
    first = np.eye(3)[nearest] - axis[nearest] * axis
    first /= norm(first)
    second = cross(axis, first)
    if _largest(np.abs(second)) < nearest:
        return second, first
    return first, second
