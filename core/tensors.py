"""Inertia tensors: built from terms, shifted, turned, taken apart, and checked.

Tensor form throughout: an off-diagonal term is minus the integral of the product of its two coordinates.
"""

from __future__ import annotations

from typing import Final, Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .principal import Principal, principal
from .vectors import norm

__all__ = [
    "PRINTED_ROUNDING",
    "Principal",
    "axis_inertia",
    "offset_tensor",
    "principal",
    "radius_of_gyration",
    "shift_from_center",
    "shift_moment_from_center",
    "shift_moment_to_center",
    "shift_to_center",
    "tensor_from_terms",
    "tensor_problem",
    "turned",
]

# What rounding to four printed digits may do to one term, relative to the largest moment.
PRINTED_ROUNDING: Final = 5e-4


def tensor_from_terms(
    Ixx: ArrayLike,
    Iyy: ArrayLike,
    Izz: ArrayLike,
    Ixy: ArrayLike = 0.0,
    Iyz: ArrayLike = 0.0,
    Izx: ArrayLike = 0.0,
    products: Literal["tensor", "integral"] = "tensor",
) -> NDArray[np.float64]:
    """Return the inertia tensor from its six terms.

    Parameters
    ----------
    Ixx, Iyy, Izz : array_like, shape (...)
        Moments of inertia about x, y, z [kg m^2].
    Ixy, Iyz, Izx : array_like, shape (...)
        Products of inertia [kg m^2].
    products : {"tensor", "integral"}
        "tensor": the products are terms of the tensor, minus the integral of xy dm; "integral": they are
        the integrals themselves and change sign on their way into the tensor.

    Returns
    -------
    ndarray, shape (..., 3, 3)
        Tensor [kg m^2], tensor form.

    Notes
    -----
    Any point and axes, as long as all six terms share them.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, section 7/7 and appendix B.
    """
    terms = [np.asarray(term, dtype=float) for term in (Ixx, Iyy, Izz, Ixy, Iyz, Izx)]
    sign = {"tensor": 1.0, "integral": -1.0}[products]
    out = np.empty((*np.broadcast(*terms).shape, 3, 3))
    out[..., 0, 0], out[..., 1, 1], out[..., 2, 2] = terms[0], terms[1], terms[2]
    # Adding 0 keeps a zero product from turning into the -0 that a cell would show.
    out[..., 0, 1] = out[..., 1, 0] = sign * terms[3] + 0.0
    out[..., 1, 2] = out[..., 2, 1] = sign * terms[4] + 0.0
    out[..., 0, 2] = out[..., 2, 0] = sign * terms[5] + 0.0
    return out


def offset_tensor(mass: ArrayLike, offset: ArrayLike) -> NDArray[np.float64]:
    """Return the tensor of a point mass at an offset, the parallel axis term.

    Parameters
    ----------
    mass : array_like, shape (...)
        Mass [kg].
    offset : array_like, shape (..., 3)
        Arm between the mass and the point the tensor is about [m]; its sign does not matter.

    Returns
    -------
    ndarray, shape (..., 3, 3)
        m (r.r 1 - r r^T) [kg m^2].

    Notes
    -----
    The moments are summed as y^2 + z^2 and so on, never as r^2 - x^2, which would lose digits.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, appendix B (transfer of axes).
    """
    mass, offset = np.asarray(mass, dtype=float), np.asarray(offset, dtype=float)
    x, y, z = offset[..., 0], offset[..., 1], offset[..., 2]
    xx, yy, zz = x * x, y * y, z * z
    return tensor_from_terms(
        mass * (yy + zz), mass * (zz + xx), mass * (xx + yy), -mass * x * y, -mass * y * z, -mass * z * x
    )


def shift_from_center(inertia: ArrayLike, mass: ArrayLike, offset: ArrayLike) -> NDArray[np.float64]:
    """Return the tensor about a point from the tensor about the mass center.

    Parameters
    ----------
    inertia : array_like, shape (..., 3, 3)
        Tensor about the mass center [kg m^2].
    mass : array_like, shape (...)
        Mass [kg].
    offset : array_like, shape (..., 3)
        Arm between the mass center and the point [m].

    Returns
    -------
    ndarray, shape (..., 3, 3)
        Tensor about the point, along the same axes [kg m^2].

    Notes
    -----
    Parallel axis theorem. Only from the mass center: from any other point the result is wrong, and nothing
    in the numbers shows it.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, appendix B (transfer of axes).
    """
    return np.asarray(np.asarray(inertia, dtype=float) + offset_tensor(mass, offset), dtype=np.float64)


def shift_to_center(inertia: ArrayLike, mass: ArrayLike, offset: ArrayLike) -> NDArray[np.float64]:
    """Return the tensor about the mass center from the tensor about a point.

    Parameters
    ----------
    inertia : array_like, shape (..., 3, 3)
        Tensor about the point [kg m^2].
    mass : array_like, shape (...)
        Mass [kg].
    offset : array_like, shape (..., 3)
        Arm between the mass center and the point [m].

    Returns
    -------
    ndarray, shape (..., 3, 3)
        Tensor about the mass center, along the same axes [kg m^2].

    Notes
    -----
    A difference: digits are lost when the point lies far from a small body. `tensor_problem` of the result
    tells whether an impossible tensor came out.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, appendix B (transfer of axes).
    """
    return np.asarray(np.asarray(inertia, dtype=float) - offset_tensor(mass, offset), dtype=np.float64)


def shift_moment_from_center(
    moment: ArrayLike, mass: ArrayLike, distance: ArrayLike
) -> float | NDArray[np.float64]:
    """Return the moment of inertia about an axis from that about the parallel axis through the mass center.

    Parameters
    ----------
    moment : array_like, shape (...)
        Moment of inertia about the axis through the mass center [kg m^2].
    mass : array_like, shape (...)
        Mass [kg].
    distance : array_like, shape (...)
        Distance between the two axes [m].

    Returns
    -------
    float or ndarray, shape (...)
        Moment of inertia about the other axis [kg m^2].

    Notes
    -----
    I = I_G + m d^2; parallel axes, and only from the mass center.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, appendix B (parallel-axis theorem).
    """
    if isinstance(moment, float) and isinstance(mass, float) and isinstance(distance, float):
        return moment + mass * distance * distance  # one cell, by far the commonest call
    distance = np.asarray(distance, dtype=float)
    return np.asarray(
        np.asarray(moment, dtype=float) + np.asarray(mass, dtype=float) * distance**2, dtype=np.float64
    )


def shift_moment_to_center(
    moment: ArrayLike, mass: ArrayLike, distance: ArrayLike
) -> float | NDArray[np.float64]:
    """Return the moment of inertia about the axis through the mass center from that about a parallel axis.

    Parameters
    ----------
    moment : array_like, shape (...)
        Moment of inertia about the axis away from the mass center [kg m^2].
    mass : array_like, shape (...)
        Mass [kg].
    distance : array_like, shape (...)
        Distance between the two axes [m].

    Returns
    -------
    float or ndarray, shape (...)
        Moment of inertia about the parallel axis through the mass center [kg m^2].

    Notes
    -----
    I_G = I - m d^2. A negative result means that the three inputs cannot belong to one body.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, appendix B (parallel-axis theorem).
    """
    if isinstance(moment, float) and isinstance(mass, float) and isinstance(distance, float):
        return moment - mass * distance * distance  # one cell, by far the commonest call
    distance = np.asarray(distance, dtype=float)
    return np.asarray(
        np.asarray(moment, dtype=float) - np.asarray(mass, dtype=float) * distance**2, dtype=np.float64
    )


def turned(inertia: ArrayLike, rotation: ArrayLike) -> NDArray[np.float64]:
    """Return the tensor of a body after an active turn, along the unturned axes.

    Parameters
    ----------
    inertia : array_like, shape (..., 3, 3)
        Tensor before the turn [kg m^2].
    rotation : array_like, shape (..., 3, 3)
        Matrix R of the turn [-].

    Returns
    -------
    ndarray, shape (..., 3, 3)
        R I R^T [kg m^2], symmetric to the last bit.

    Notes
    -----
    R must be a rotation matrix, the tensor symmetric: the two halves are averaged.

    References
    ----------
    H. Goldstein, C. Poole, J. Safko, Classical Mechanics, 3rd ed., section 5.3.
    """
    rotation = np.asarray(rotation, dtype=float)
    out = rotation @ np.asarray(inertia, dtype=float) @ np.swapaxes(rotation, -1, -2)
    return np.asarray(0.5 * (out + np.swapaxes(out, -1, -2)), dtype=np.float64)


def axis_inertia(inertia: ArrayLike, direction: ArrayLike) -> NDArray[np.float64]:
    """Return the moment of inertia about an axis through the point that the tensor is about.

    Parameters
    ----------
    inertia : array_like, shape (..., 3, 3)
        Tensor about a point of the axis [kg m^2].
    direction : array_like, shape (..., 3)
        Direction of the axis, of any length but zero [-].

    Returns
    -------
    ndarray, shape (...)
        Moment of inertia about the axis [kg m^2].

    Notes
    -----
    n.I.n with n of unit length. A zero direction gives NaN: whoever calls checks it.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, appendix B (moment about any axis).
    """
    direction = np.asarray(direction, dtype=float)
    with np.errstate(invalid="ignore"):
        unit = direction / norm(direction)[..., None]
    return np.asarray(
        np.einsum("...i,...ij,...j->...", unit, np.asarray(inertia, dtype=float), unit), dtype=np.float64
    )


def radius_of_gyration(inertia: ArrayLike, mass: ArrayLike) -> NDArray[np.float64]:
    """Return the radius of gyration.

    Parameters
    ----------
    inertia : array_like, shape (...)
        Moment of inertia about an axis [kg m^2], not negative.
    mass : array_like, shape (...)
        Mass [kg], positive.

    Returns
    -------
    ndarray, shape (...)
        Square root of I / m [m], about the same axis.

    Notes
    -----
    Valid about any axis; it is not the distance of the mass center.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, appendix B (radius of gyration).
    """
    return np.asarray(
        np.sqrt(np.asarray(inertia, dtype=float) / np.asarray(mass, dtype=float)), dtype=np.float64
    )


def tensor_problem(inertia: ArrayLike, tolerance: float = PRINTED_ROUNDING) -> str | None:
    """Return the sentence why no body can have this tensor, or None.

    Parameters
    ----------
    inertia : array_like, shape (3, 3)
        Inertia tensor [kg m^2], tensor form, about any point.
    tolerance : float
        Rounding of each term to forgive, relative to the largest moment [-].

    Returns
    -------
    str or None
        None when a body with this tensor exists.

    Notes
    -----
    Flat bodies (one moment the sum of the others), slender rods (one moment zero) and a point (all zero)
    pass. The test holds about any point, not only about the mass center. Each rule forgives what rounding of
    all its terms can add up to, so the rounded tensor of a real body is never refused.

    References
    ----------
    L. D. Landau, E. M. Lifshitz, Mechanics, 3rd ed., section 32 (moments against the sum of others).
    """
    tensor = np.asarray(inertia, dtype=float)
    if tensor.shape != (3, 3):
        return "The tensor must be 3 by 3"
    if not np.isfinite(tensor).all():
        return "Every term of the tensor must be a finite number"
    terms = tensor.tolist()  # plain numbers are several times quicker to compare one by one
    slack = tolerance * max(abs(terms[k][k]) for k in range(3))
    names, pairs = ("Ixx", "Iyy", "Izz"), ((0, 1, "Ixy", "Iyx"), (1, 2, "Iyz", "Izy"), (2, 0, "Izx", "Ixz"))
    for i, j, upper, lower in pairs:
        if abs(terms[i][j] - terms[j][i]) > 2.0 * slack:
            return f"The tensor is not symmetric: {upper} is {terms[i][j]:.6g}, {lower} is {terms[j][i]:.6g}"
    for i in range(3):
        if terms[i][i] < -slack:
            return f"{names[i]} is {terms[i][i]:.6g}: a moment of inertia can't be negative"
    for i, j, k in ((0, 1, 2), (1, 2, 0), (2, 0, 1)):
        pair = terms[i][i] + terms[j][j]
        if terms[k][k] > pair + 3.0 * slack:
            return (
                f"{names[k]} is {terms[k][k]:.6g}, more than {names[i]} + {names[j]} = {pair:.6g}: "
                "no body has one moment above the sum of the other two"
            )
    for (i, j, name, _), k in zip(pairs, (2, 0, 1), strict=True):
        if abs(terms[i][j]) > 0.5 * terms[k][k] + 1.5 * slack:
            return (
                f"{name} is {terms[i][j]:.6g}: its size can't be more than half of {names[k]} "
                f"= {terms[k][k]:.6g}"
            )
    if not any(terms[i][j] for i, j, _, _ in pairs):
        return None  # the diagonal terms are the principal moments
    return _principal_problem(tensor, slack)


def _principal_problem(tensor: NDArray[np.float64], slack: float) -> str | None:
    """Return the sentence about principal moments that no body can have, or None."""
    low, middle, high = np.linalg.eigvalsh(0.5 * (tensor + tensor.T))
    # Rounding of nine terms moves a principal moment by at most three roundings (largest row sum), and the
    # largest one less the sum of the others, which is twice it less the trace, by at most seven.
    if low < -3.0 * slack:
        return f"The smallest principal moment is {low:.6g}: the products are too large for the moments"
    if high > low + middle + 7.0 * slack:
        return (
            f"The largest principal moment, {high:.6g}, is more than the sum of the other two, "
            f"{low + middle:.6g}: check the sign and size of the products"
        )
    return None
