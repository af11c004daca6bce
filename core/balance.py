"""Force and moment balance of one rigid body: the sums that a motion asks for.

Forces and moments act on the body. Each moment is named with its point; the balance about a moving point B is
the general one, sum M_B = I alpha + omega x I omega + r_BG x m a_G, and the short forms are its cases. No sum
contains the weight unless its name says so: weight is a load.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from .body import RigidBody
from .vectors import cross

Array = NDArray[np.float64]
Number: TypeAlias = float | Array


@dataclass(frozen=True, slots=True, eq=False)
class SpinTorque:
    """Net moment about the mass center that a spinning motion asks for, with its parts.

    Parameters
    ----------
    total : ndarray, shape (..., 3)
        Net moment on the body about its mass center [N m].
    inertial : ndarray, shape (..., 3)
        Part I alpha [N m].
    gyroscopic : ndarray, shape (..., 3)
        Part omega x I omega [N m].
    """

    total: Array
    inertial: Array
    gyroscopic: Array


@dataclass(frozen=True, slots=True, eq=False)
class MomentSum:
    """Net moment on a body about a point B, with its parts.

    Parameters
    ----------
    total : ndarray, shape (..., 3)
        Net moment on the body about B [N m].
    spin : ndarray, shape (..., 3)
        Part I alpha + omega x I omega, about the mass center [N m].
    transfer : ndarray, shape (..., 3)
        Part r_BG x m a_G [N m].
    acceleration : ndarray, shape (..., 3)
        Acceleration of the mass center a_G [m/s^2].
    force : ndarray, shape (..., 3)
        Net force m a_G [N].
    """

    total: Array
    spin: Array
    transfer: Array
    acceleration: Array
    force: Array


@dataclass(frozen=True, slots=True, eq=False)
class PlanarMomentSum:
    """Net moment on a body about a point B in planar motion, counter-clockwise positive.

    Parameters
    ----------
    total : float or ndarray
        Net moment on the body about B [N m].
    spin : float or ndarray
        Part I_G alpha [N m].
    transfer : float or ndarray
        Part m (rx ay - ry ax) [N m].
    acceleration_x, acceleration_y : float or ndarray
        Acceleration of the mass center [m/s^2].
    """

    total: Number
    spin: Number
    transfer: Number
    acceleration_x: Number
    acceleration_y: Number


@dataclass(frozen=True, slots=True, eq=False)
class AngularMomentum:
    """Angular momentum of a body about a point, with its parts.

    Parameters
    ----------
    total : ndarray, shape (..., 3)
        Angular momentum about the point [kg m^2/s].
    spin : ndarray, shape (..., 3)
        Part I omega, about the mass center [kg m^2/s].
    transfer : ndarray, shape (..., 3)
        Part r x m v_G [kg m^2/s].
    """

    total: Array
    spin: Array
    transfer: Array


@dataclass(frozen=True, slots=True, eq=False)
class KineticEnergy:
    """Kinetic energy of a body, with its parts.

    Parameters
    ----------
    total : float or ndarray, shape (...)
        Kinetic energy [J].
    translation : float or ndarray, shape (...)
        Part m v_G^2 / 2 [J].
    rotation : float or ndarray, shape (...)
        Part omega I omega / 2 [J].
    """

    total: Number
    translation: Number
    rotation: Number


def times(inertia: Array, vector: Array) -> Array:
    """Return the product of a tensor and a vector, broadcast over leading axes.

    Parameters
    ----------
    inertia : ndarray, shape (..., 3, 3)
        Tensor, tensor form [kg m^2].
    vector : ndarray, shape (..., 3)
        Vector along the same axes [rad/s or rad/s^2].

    Returns
    -------
    ndarray, shape (..., 3)
        Product [kg m^2/s or N m].

    Notes
    -----
    Plain matrix product; no symmetry is assumed.

    References
    ----------
    Definition of the product of a tensor and a vector.
    """
    if inertia.ndim == 2:
        # A product from the right with the transpose serves one vector and a column of them alike.
        plain: Array = vector @ inertia.T
        return plain
    stacked: Array = (inertia @ vector[..., None])[..., 0]
    return stacked


def spin_torque(inertia: Array, omega: Array, alpha: Array) -> SpinTorque:
    """Return the net moment about the mass center that a spin in space asks for.

    Parameters
    ----------
    inertia : ndarray, shape (..., 3, 3)
        Inertia tensor about the mass center, tensor form, along the sheet's axes as the body stands [kg m^2].
    omega : ndarray, shape (..., 3)
        Angular velocity of the body in the fixed frame [rad/s].
    alpha : ndarray, shape (..., 3)
        Angular acceleration of the body in the fixed frame [rad/s^2].

    Returns
    -------
    SpinTorque
        Net moment on the body and its inertial and gyroscopic parts, each (..., 3) [N m].

    Notes
    -----
    sum M_G = I alpha + omega x (I omega). Valid also about a fixed point, with the tensor about that point.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, momentum equations of three-dimensional
    motion.
    """
    inertial = times(inertia, alpha)
    gyroscopic = cross(omega, times(inertia, omega))
    return SpinTorque(inertial + gyroscopic, inertial, gyroscopic)


def moment_sum(
    inertia: Array, mass: Number, center_arm: Array, omega: Array, alpha: Array, acceleration_b: Array
) -> MomentSum:
    """Return the net moment on a body about any moving point B of it, weight not included.

    Parameters
    ----------
    inertia : ndarray, shape (..., 3, 3)
        Inertia tensor about the mass center G, tensor form [kg m^2].
    mass : float or ndarray, shape (...)
        Mass [kg].
    center_arm : ndarray, shape (..., 3)
        Arm r_BG from B to the mass center [m].
    omega : ndarray, shape (..., 3)
        Angular velocity of the body in the fixed frame [rad/s].
    alpha : ndarray, shape (..., 3)
        Angular acceleration of the body in the fixed frame [rad/s^2].
    acceleration_b : ndarray, shape (..., 3)
        Acceleration of the body's point B [m/s^2].

    Returns
    -------
    MomentSum
        Sum of the moments of all forces and couples on the body about B, and its parts.

    Notes
    -----
    sum M_B = I alpha + omega x (I omega) + r_BG x m a_G with
    a_G = a_B + alpha x r_BG + omega x (omega x r_BG). B is a point of the body; it need neither be fixed nor
    be the mass center. The short form I_B alpha holds only for a fixed B, for B = G, or when a_B points along
    r_BG.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, general equations of motion of a rigid body,
    moments about an arbitrary point.
    """
    spin = spin_torque(inertia, omega, alpha).total
    swirl = cross(alpha, center_arm) + cross(omega, cross(omega, center_arm))
    acceleration = acceleration_b + swirl
    force = acceleration * (mass[..., None] if isinstance(mass, np.ndarray) else mass)
    transfer = cross(center_arm, force)
    return MomentSum(spin + transfer, spin, transfer, acceleration, force)


def moment_sum_planar(
    inertia: Number, mass: Number, center_arm: Array, omega: Number, alpha: Number, acceleration_b: Array
) -> PlanarMomentSum:
    """Return the net moment about a moving point B in planar motion, weight not included.

    Parameters
    ----------
    inertia : float or ndarray, shape (...)
        Moment of inertia about the axis along z through the mass center [kg m^2].
    mass : float or ndarray, shape (...)
        Mass [kg].
    center_arm : ndarray, shape (..., 3)
        Arm r_BG from B to the mass center; z is not used [m].
    omega : float or ndarray, shape (...)
        Angular velocity, counter-clockwise positive [rad/s].
    alpha : float or ndarray, shape (...)
        Angular acceleration, counter-clockwise positive [rad/s^2].
    acceleration_b : ndarray, shape (..., 3)
        Acceleration of the body's point B; z is not used [m/s^2].

    Returns
    -------
    PlanarMomentSum
        Sum of the moments on the body about B, counter-clockwise positive, and its parts.

    Notes
    -----
    sum M_B = I_G alpha + m (rx ay - ry ax) with a = a_B + alpha k x r - omega^2 r. The omega^2 part points
    along the arm and has no moment. Valid when z is a principal direction at the mass center (a body that is
    symmetric about the plane of motion); else moments about x and y arise that this sum does not show.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, plane kinetics of rigid bodies, general
    equations of motion.
    """
    rx, ry = _plane_parts(center_arm)
    bx, by = _plane_parts(acceleration_b)
    square = omega * omega
    # The moment is taken before the omega^2 part joins: there it is exactly zero, not merely rounding.
    ax, ay = bx - alpha * ry, by + alpha * rx
    spin = inertia * alpha
    transfer = mass * (rx * ay - ry * ax)
    return PlanarMomentSum(spin + transfer, spin, transfer, ax - square * rx, ay - square * ry)


def _plane_parts(vector: Array) -> tuple[Number, Number]:
    """Return x and y of a vector or of many; of one vector as plain floats, several times quicker."""
    if vector.ndim == 1:
        return float(vector[0]), float(vector[1])
    return vector[..., 0], vector[..., 1]


def angular_momentum(
    body: RigidBody, omega: Array, velocity_center: Array, about_point: Array
) -> AngularMomentum:
    """Return the angular momentum of a body about a point of the fixed frame.

    Parameters
    ----------
    body : RigidBody
        Body with its inertia tensor about the mass center.
    omega : ndarray, shape (..., 3)
        Angular velocity in the fixed frame [rad/s].
    velocity_center : ndarray, shape (..., 3)
        Velocity of the mass center [m/s].
    about_point : ndarray, shape (..., 3)
        Point about which it is taken [m].

    Returns
    -------
    AngularMomentum
        Angular momentum and its parts, each (..., 3) [kg m^2/s].

    Notes
    -----
    H_P = I omega + r_PG x m v_G, of absolute velocities.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, angular momentum of a rigid body.
    """
    spin = times(body.inertia, omega)
    transfer = cross(body.center - about_point, body.mass * velocity_center)
    return AngularMomentum(spin + transfer, spin, transfer)


def kinetic_energy(body: RigidBody, omega: Array, velocity_center: Array) -> KineticEnergy:
    """Return the kinetic energy of a body.

    Parameters
    ----------
    body : RigidBody
        Body with its inertia tensor about the mass center.
    omega : ndarray, shape (..., 3)
        Angular velocity in the fixed frame [rad/s].
    velocity_center : ndarray, shape (..., 3)
        Velocity of the mass center [m/s].

    Returns
    -------
    KineticEnergy
        Kinetic energy and its parts [J].

    Notes
    -----
    T = m v_G^2 / 2 + omega I omega / 2.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, kinetic energy of a rigid body.
    """
    translation = 0.5 * body.mass * (velocity_center * velocity_center).sum(axis=-1)
    rotation = 0.5 * (omega * times(body.inertia, omega)).sum(axis=-1)
    return KineticEnergy(translation + rotation, translation, rotation)
