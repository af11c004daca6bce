"""Loads on a body brought together: moment of a force, resultant, line of action, wrench."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .vectors import cross

Array = NDArray[np.float64]

# A resultant below this part of the loads that make it is what rounding left of a balance.
BALANCE_TOLERANCE = 1e-9


@dataclass(frozen=True, slots=True, eq=False)
class Resultant:
    """Resultant of a set of loads about a point, and where the resultant force acts.

    Parameters
    ----------
    force : ndarray, shape (3,)
        Sum of the forces [N].
    moment : ndarray, shape (3,)
        Sum of the moments and couples about `about` [N m].
    about : ndarray, shape (3,)
        The point [m].
    is_couple : bool
        Whether the forces cancel, so that only a couple remains and there is no line of action.
    axis_point : ndarray, shape (3,), or None
        Point of the wrench axis nearest to `about` [m]; None for a couple.
    pitch : float or None
        Moment along the force over the force: zero in planar work [m]; None for a couple.
    lever : float or None
        Distance of the axis from `about` [m]; None for a couple.
    """

    force: Array
    moment: Array
    about: Array
    is_couple: bool
    axis_point: Array | None
    pitch: float | None
    lever: float | None

    def crossing(self) -> tuple[float | None, float | None]:
        """Return x where a planar line of action crosses y = 0 and y where it crosses x = 0, in m.

        None stands for a line that runs along the axis in question and for a couple.
        """
        if self.axis_point is None:
            return None, None
        (fx, fy, _), (px, py, _) = self.force, self.axis_point
        least = BALANCE_TOLERANCE * float(np.hypot(fx, fy))
        at_x = float(px - py * fx / fy) if abs(fy) > least else None
        at_y = float(py - px * fy / fx) if abs(fx) > least else None
        return at_x, at_y


def moment(force: Array, arm: Array) -> Array:
    """Return the moment of a force about the point that its arm starts from.

    Parameters
    ----------
    force : ndarray, shape (..., 3)
        Force on the body [N].
    arm : ndarray, shape (..., 3)
        Arm from the point to any point of the force's line of action [m].

    Returns
    -------
    ndarray, shape (..., 3)
        Moment of the force about the point [N m].

    Notes
    -----
    M = arm x force; in the plane M_z = x F_y - y F_x.

    References
    ----------
    Definition of the moment of a force.
    """
    return cross(arm, force)


def resultant(forces: Array, points: Array, couples: Array, about: Array) -> Resultant:
    """Return the resultant of forces and couples about a point, and the axis of their wrench.

    Parameters
    ----------
    forces : ndarray, shape (n, 3)
        Forces on the body [N].
    points : ndarray, shape (n, 3)
        A point of each force's line of action [m].
    couples : ndarray, shape (m, 3)
        Couples on the body [N m].
    about : ndarray, shape (3,)
        Point about which the moment is taken [m].

    Returns
    -------
    Resultant
        Force, moment about the point, and the axis of the wrench (in the plane: the line of action).

    Notes
    -----
    Axis point p = about + F x M / F^2, pitch F.M / F^2. Forces count as canceling when their sum is below
    1e-9 of the sum of their magnitudes.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Statics, resultants of force systems, wrench resultant.
    """
    force = forces.sum(axis=0)
    total = cross(points - about, forces).sum(axis=0) + couples.sum(axis=0)
    square = float(force @ force)
    scale = float(np.sqrt((forces * forces).sum(axis=1)).sum())
    if square <= (BALANCE_TOLERANCE * scale) ** 2:
        return Resultant(force, total, about, True, None, None, None)
    offset = cross(force, total) / square
    pitch = float(force @ total) / square
    return Resultant(force, total, about, False, about + offset, pitch, float(np.sqrt(offset @ offset)))


def center_acceleration(force: Array, mass: float | Array) -> Array:
    """Return the acceleration of the mass center under a net force.

    Parameters
    ----------
    force : ndarray, shape (..., 3)
        Sum of all forces on the body, weight and reactions included [N].
    mass : float or ndarray, shape (...)
        Mass [kg].

    Returns
    -------
    ndarray, shape (..., 3)
        Acceleration of the mass center [m/s^2].

    Notes
    -----
    a_G = F / m, wherever the force acts and however the body turns.

    References
    ----------
    Newton's second law for the mass center of a body.
    """
    return force / (mass[..., None] if isinstance(mass, np.ndarray) else mass)
