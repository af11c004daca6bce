"""All that has mass is one thing: a `RigidBody`."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import ArrayLike, NDArray

from .errors import InputError, PhysicsError
from .tensors import PRINTED_ROUNDING, shift_from_center, tensor_from_terms, tensor_problem
from .tensors import turned as turned_tensor

# A sum of masses and cut-outs this small beside its terms is rounding, not mass.
NO_MASS_LEFT: Final = 1e-12


@dataclass(frozen=True, eq=False, slots=True)
class RigidBody:
    """Mass, mass center and inertia tensor of a body, along the sheet's axes.

    Parameters
    ----------
    mass : float
        Mass [kg].
    center : ndarray, shape (3,)
        Position of the mass center [m].
    inertia : ndarray, shape (3, 3)
        Inertia tensor about the mass center [kg m^2], tensor form: an off-diagonal term is minus the
        integral of the product of its two coordinates.
    """

    mass: float
    center: NDArray[np.float64]
    inertia: NDArray[np.float64]

    @classmethod
    def of(cls, mass: float, center: ArrayLike, inertia: ArrayLike) -> RigidBody:
        """Return a body whose mass, mass center and tensor have been checked.

        Parameters
        ----------
        mass : float
            Mass [kg], positive.
        center : array_like, shape (3,)
            Position of the mass center [m].
        inertia : array_like, shape (3, 3)
            Tensor about the mass center [kg m^2], tensor form, sheet axes.

        Returns
        -------
        RigidBody
            The body, with its own read-only arrays; a tensor that differs from its mirror by no more than
            printed rounding is made symmetric.

        Raises
        ------
        InputError
            Mass not positive, a number not finite, a wrong shape, or a tensor that no body can have.

        Notes
        -----
        Rounding as printed with few digits is forgiven, see `tensor_problem`.

        References
        ----------
        L. D. Landau, E. M. Lifshitz, Mechanics, 3rd ed., section 32 (moments against the sum of others).
        """
        number = float(mass)
        if not (np.isfinite(number) and number > 0.0):
            raise InputError("mass", "a positive number", number)
        place = np.array(center, dtype=float)
        if place.shape != (3,) or not np.isfinite(place).all():
            raise InputError("center", "three finite numbers x, y, z")
        tensor = np.array(inertia, dtype=float)
        problem = tensor_problem(tensor)
        if problem:
            raise InputError(
                "inertia",
                "a tensor that a body can have",
                remedy=f"{problem}. The tensor must be about the mass center, in tensor form",
            )
        return _body(number, place, 0.5 * (tensor + tensor.T))

    def moved(self, by: ArrayLike) -> RigidBody:
        """Return the body after a translation.

        Parameters
        ----------
        by : array_like, shape (3,)
            Displacement [m].

        Returns
        -------
        RigidBody
            Same mass and tensor, mass center moved.

        Notes
        -----
        The tensor is about the mass center, so it does not change.

        References
        ----------
        J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, section 7/7.
        """
        return _body(self.mass, self.center + np.asarray(by, dtype=float), self.inertia)

    def turned(self, rotation: ArrayLike, about_point: ArrayLike | None = None) -> RigidBody:
        """Return the body after an active turn about a point.

        Parameters
        ----------
        rotation : array_like, shape (3, 3)
            Matrix of the turn [-], about the sheet's axes.
        about_point : array_like, shape (3,), optional
            Point that stays where it is [m]; the mass center when left out.

        Returns
        -------
        RigidBody
            Same mass; mass center and tensor turned.

        Notes
        -----
        Any turn about a point; the matrix must be a rotation matrix.

        References
        ----------
        H. Goldstein, C. Poole, J. Safko, Classical Mechanics, 3rd ed., section 5.3.
        """
        matrix = np.asarray(rotation, dtype=float)
        place = self.center
        if about_point is not None:
            point = np.asarray(about_point, dtype=float)
            place = point + matrix @ (self.center - point)
        return _body(self.mass, place, turned_tensor(self.inertia, matrix))


def _body(mass: float, center: NDArray[np.float64], inertia: NDArray[np.float64]) -> RigidBody:
    """Return a body with read-only arrays of its own."""
    place, tensor = np.array(center, dtype=float), np.array(inertia, dtype=float)
    place.setflags(write=False)
    tensor.setflags(write=False)
    return RigidBody(mass, place, tensor)


def inertia_about(body: RigidBody, point: ArrayLike) -> NDArray[np.float64]:
    """Return the inertia tensor of a body about any point.

    Parameters
    ----------
    body : RigidBody
        Body [kg, m, kg m^2].
    point : array_like, shape (..., 3)
        Point [m].

    Returns
    -------
    ndarray, shape (..., 3, 3)
        Tensor about the point, sheet axes, tensor form [kg m^2].

    Notes
    -----
    Parallel axis theorem from the mass center, which a body always carries.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, appendix B (transfer of axes).
    """
    return shift_from_center(body.inertia, body.mass, body.center - np.asarray(point, dtype=float))


def combine(bodies: Sequence[RigidBody]) -> RigidBody:
    """Return the one body that several bodies make when joined.

    Parameters
    ----------
    bodies : sequence of RigidBody
        Bodies [kg, m, kg m^2], at least one.

    Returns
    -------
    RigidBody
        Joined body.

    Raises
    ------
    InputError
        No body given.
    PhysicsError
        Total mass not positive, or a tensor that no body can have.

    Notes
    -----
    Overlap is not noticed: material that two bodies share counts twice.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, appendix B (composite bodies).
    """
    return combine_arrays(
        np.array([body.mass for body in bodies], dtype=float),
        np.array([body.center for body in bodies], dtype=float).reshape(-1, 3),
        np.array([body.inertia for body in bodies], dtype=float).reshape(-1, 3, 3),
    )


def removed(body: RigidBody, cutout: RigidBody) -> RigidBody:
    """Return a body after a piece has been cut from it.

    Parameters
    ----------
    body : RigidBody
        Body before the cut [kg, m, kg m^2].
    cutout : RigidBody
        The piece that is taken away, as a body of positive mass.

    Returns
    -------
    RigidBody
        What is left.

    Raises
    ------
    PhysicsError
        The piece is larger than what it is cut from.

    Notes
    -----
    The piece must lie inside the body; only a negative mass or an impossible tensor gives it away.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, appendix B (composite bodies).
    """
    return combine_arrays(
        np.array([body.mass, -cutout.mass]),
        np.array([body.center, cutout.center]),
        np.array([body.inertia, -cutout.inertia]),
    )


def combine_arrays(masses: ArrayLike, centers: ArrayLike, inertias: ArrayLike) -> RigidBody:
    """Return the one body that a column of parts and cut-outs makes.

    Parameters
    ----------
    masses : array_like, shape (n,)
        Masses [kg]; a cut-out has a negative one.
    centers : array_like, shape (n, 3)
        Mass centers of the parts [m].
    inertias : array_like, shape (n, 3, 3)
        Tensors of the parts, each about its own mass center, sheet axes [kg m^2]; the tensor of a cut-out
        is negative like its mass.

    Returns
    -------
    RigidBody
        Joined body.

    Raises
    ------
    InputError
        No part, or a part whose tensor has not the sign of its mass.
    PhysicsError
        Total mass not positive, or a tensor that no body can have.

    Notes
    -----
    The mass center is found in two passes and the parallel axis terms are taken from it, so that a far
    origin costs no digits; the sums are pairwise.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, appendix B (composite bodies).
    N. J. Higham, Accuracy and Stability of Numerical Algorithms, 2nd ed., section 4.2 (pairwise sums).
    """
    mass = np.asarray(masses, dtype=float)
    place = np.ascontiguousarray(np.asarray(centers, dtype=float).T)
    own = np.asarray(inertias, dtype=float)
    if mass.size == 0:
        raise InputError("parts", "a list of at least one part", "an empty list")
    trace = own[:, 0, 0] + own[:, 1, 1] + own[:, 2, 2]
    mixed = np.flatnonzero(mass * trace < 0.0)
    if mixed.size:
        raise InputError(
            "inertia",
            "of the same sign as the mass: both negative for a cut-out",
            where=f"part {mixed[0] + 1}",
        )
    total = float(mass.sum())
    if not total > NO_MASS_LEFT * float(np.abs(mass).sum()):
        raise PhysicsError(
            "total mass",
            "positive",
            total,
            remedy="The cut-outs weigh as much as what they are cut from, or more",
        )
    # The first pass is off by the rounding of far coordinates; the second one, from there, is not.
    origin = place[:, int(np.argmax(np.abs(mass)))]
    center = origin + (mass * (place - origin[:, None])).sum(axis=1) / total
    center = center + (mass * (place - center[:, None])).sum(axis=1) / total
    x, y, z = place - center[:, None]
    mx, my, mz = mass * x, mass * y, mass * z
    sums = np.stack([mx * x, my * y, mz * z, mx * y, my * z, mz * x]).sum(axis=1)
    xx, yy, zz, xy, yz, zx = sums
    tensor = np.ascontiguousarray(own.transpose(1, 2, 0)).sum(axis=-1)
    tensor = tensor + tensor_from_terms(yy + zz, zz + xx, xx + yy, -xy, -yz, -zx)
    return _checked_sum(total, center, tensor, cutouts=bool((mass < 0.0).any()))


def _checked_sum(
    mass: float, center: NDArray[np.float64], tensor: NDArray[np.float64], *, cutouts: bool
) -> RigidBody:
    """Return the joined body, or refuse a tensor that no body can have."""
    problem = tensor_problem(tensor, PRINTED_ROUNDING)
    if problem or not np.isfinite(center).all():
        cause = (
            "A cut-out is larger than what it is cut from, or lies outside it"
            if cutouts
            else "A part has a tensor that no body can have"
        )
        raise PhysicsError(
            "", f"{problem or 'The mass center is not finite'}", remedy=f"{cause}; check the parts list"
        )
    return _body(mass, center, 0.5 * (tensor + tensor.T))
