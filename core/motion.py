"""Velocity and acceleration of points of a rigid body, and what a body's spin is.

Positions, velocities and spins are vectors along the fixed sheet axes. Planar work is the same with z = 0
and a spin along z, counter-clockwise positive. A spin is that of the body in the fixed frame unless the name
says "relative".
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .vectors import cross

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class PointAcceleration:
    """Acceleration of a point fixed in a body, with its parts relative to the reference point A.

    Parameters
    ----------
    total : ndarray, shape (..., 3)
        Acceleration in the fixed frame [m/s^2].
    tangential : ndarray, shape (..., 3)
        Part alpha x arm [m/s^2].
    centripetal : ndarray, shape (..., 3)
        Part omega x (omega x arm) [m/s^2].
    """

    total: Array
    tangential: Array
    centripetal: Array


@dataclass(frozen=True, slots=True, eq=False)
class SlidingAcceleration:
    """Acceleration of a point that slides along a turning body, with its parts.

    Parameters
    ----------
    total : ndarray, shape (..., 3)
        Acceleration in the fixed frame [m/s^2].
    tangential : ndarray, shape (..., 3)
        Part alpha x arm [m/s^2].
    centripetal : ndarray, shape (..., 3)
        Part omega x (omega x arm) [m/s^2].
    slide : ndarray, shape (..., 3)
        Acceleration as seen from the body [m/s^2].
    coriolis : ndarray, shape (..., 3)
        Part 2 omega x (velocity as seen from the body) [m/s^2].
    """

    total: Array
    tangential: Array
    centripetal: Array
    slide: Array
    coriolis: Array


@dataclass(frozen=True, slots=True, eq=False)
class SpinSum:
    """Spin and angular acceleration of a body carried by a turning body, in the fixed frame.

    Parameters
    ----------
    omega : ndarray, shape (..., 3)
        Angular velocity [rad/s].
    alpha : ndarray, shape (..., 3)
        Angular acceleration [rad/s^2].
    carried : ndarray, shape (..., 3)
        The part omega_1 x omega_2 of alpha: the carrier turns the axis of the relative spin [rad/s^2].
    """

    omega: Array
    alpha: Array
    carried: Array


def velocity_at(velocity_a: Array, omega: Array, arm: Array) -> Array:
    """Return the velocity of point B of a rigid body from that of its point A.

    Parameters
    ----------
    velocity_a : ndarray, shape (..., 3)
        Velocity of point A [m/s].
    omega : ndarray, shape (..., 3)
        Angular velocity of the body [rad/s].
    arm : ndarray, shape (..., 3)
        Arm from A to B [m].

    Returns
    -------
    ndarray, shape (..., 3)
        Velocity of point B [m/s].

    Notes
    -----
    v_B = v_A + omega x r_AB. Valid for two points of the same rigid body, in the plane and in space.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, relative velocity of two points of a rigid
    body (chapters on plane kinematics and on three-dimensional dynamics).
    """
    return velocity_a + cross(omega, arm)


def acceleration_at(acceleration_a: Array, omega: Array, alpha: Array, arm: Array) -> PointAcceleration:
    """Return the acceleration of point B of a rigid body from that of its point A.

    Parameters
    ----------
    acceleration_a : ndarray, shape (..., 3)
        Acceleration of point A [m/s^2].
    omega : ndarray, shape (..., 3)
        Angular velocity of the body [rad/s].
    alpha : ndarray, shape (..., 3)
        Angular acceleration of the body [rad/s^2].
    arm : ndarray, shape (..., 3)
        Arm from A to B [m].

    Returns
    -------
    PointAcceleration
        Total and the parts relative to A, each of shape (..., 3) [m/s^2].

    Notes
    -----
    a_B = a_A + alpha x r_AB + omega x (omega x r_AB). Valid for two points of the same rigid body.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, relative acceleration of two points of a
    rigid body.
    """
    tangential = cross(alpha, arm)
    centripetal = cross(omega, cross(omega, arm))
    return PointAcceleration(acceleration_a + tangential + centripetal, tangential, centripetal)


def velocity_sliding(velocity_a: Array, omega: Array, arm: Array, slide_velocity: Array) -> Array:
    """Return the velocity of a point that slides along a moving body.

    Parameters
    ----------
    velocity_a : ndarray, shape (..., 3)
        Velocity of the body's point A [m/s].
    omega : ndarray, shape (..., 3)
        Angular velocity of the body [rad/s].
    arm : ndarray, shape (..., 3)
        Arm from A to the sliding point [m].
    slide_velocity : ndarray, shape (..., 3)
        Velocity of the point as seen from the body, along the fixed axes at this instant [m/s].

    Returns
    -------
    ndarray, shape (..., 3)
        Velocity of the sliding point in the fixed frame [m/s].

    Notes
    -----
    v = v_A + omega x r + v_slide. The slide velocity is measured by an observer who turns with the body.

    References
    ----------
    R. C. Hibbeler, Engineering Mechanics: Dynamics, relative motion analysis using rotating axes.
    """
    return velocity_a + cross(omega, arm) + slide_velocity


def acceleration_sliding(
    acceleration_a: Array,
    omega: Array,
    alpha: Array,
    arm: Array,
    slide_velocity: Array,
    slide_acceleration: Array,
) -> SlidingAcceleration:
    """Return the acceleration of a point that slides along a moving body.

    Parameters
    ----------
    acceleration_a : ndarray, shape (..., 3)
        Acceleration of the body's point A [m/s^2].
    omega : ndarray, shape (..., 3)
        Angular velocity of the body [rad/s].
    alpha : ndarray, shape (..., 3)
        Angular acceleration of the body [rad/s^2].
    arm : ndarray, shape (..., 3)
        Arm from A to the sliding point [m].
    slide_velocity : ndarray, shape (..., 3)
        Velocity of the point as seen from the body, along the fixed axes at this instant [m/s].
    slide_acceleration : ndarray, shape (..., 3)
        Acceleration of the point as seen from the body, along the fixed axes at this instant [m/s^2].

    Returns
    -------
    SlidingAcceleration
        Total and parts, each of shape (..., 3) [m/s^2].

    Notes
    -----
    a = a_A + alpha x r + omega x (omega x r) + 2 omega x v_slide + a_slide. On a curved slot the acceleration
    as seen from the body includes v_slide^2 / radius toward the slot's center of curvature.

    References
    ----------
    R. C. Hibbeler, Engineering Mechanics: Dynamics, relative motion analysis using rotating axes.
    """
    tangential = cross(alpha, arm)
    centripetal = cross(omega, cross(omega, arm))
    coriolis = 2.0 * cross(omega, slide_velocity)
    total = acceleration_a + tangential + centripetal + slide_acceleration + coriolis
    return SlidingAcceleration(total, tangential, centripetal, np.asarray(slide_acceleration), coriolis)


def spin_sum(omega_1: Array, omega_2: Array, alpha_1: Array, alpha_2: Array) -> SpinSum:
    """Return the absolute spin of a body that spins on a turning carrier.

    Parameters
    ----------
    omega_1 : ndarray, shape (..., 3)
        Angular velocity of the carrier in the fixed frame [rad/s].
    omega_2 : ndarray, shape (..., 3)
        Angular velocity of the body relative to the carrier [rad/s].
    alpha_1 : ndarray, shape (..., 3)
        Angular acceleration of the carrier in the fixed frame [rad/s^2].
    alpha_2 : ndarray, shape (..., 3)
        Rate of the relative spin as seen from the carrier [rad/s^2].

    Returns
    -------
    SpinSum
        Spin, angular acceleration, and the part of the latter that comes from turning the relative axis.

    Notes
    -----
    omega = omega_1 + omega_2 and alpha = alpha_1 + alpha_2 + omega_1 x omega_2. All components are along the
    fixed axes at this instant. With a steady relative spin about an axis fixed in the carrier alpha_2 is zero
    and alpha is still not.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, three-dimensional kinematics, rotation about
    a fixed point.
    """
    carried = cross(omega_1, omega_2)
    return SpinSum(omega_1 + omega_2, alpha_1 + alpha_2 + carried, carried)
