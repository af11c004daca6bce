"""Drive torque at a pivot, and what a gearbox makes of torque and inertia."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from .balance import moment_sum
from .body import RigidBody
from .vectors import cross

Array = NDArray[np.float64]
Number: TypeAlias = float | Array


@dataclass(frozen=True, slots=True, eq=False)
class DriveTorque:
    """Torque that a drive must give about a pivot axis, with its parts.

    Parameters
    ----------
    total : float or ndarray, shape (...)
        Torque of the drive on the body about the axis, right-handed about it [N m].
    motion : float or ndarray, shape (...)
        Part that the motion asks for: the moment sum about the pivot [N m].
    weight : float or ndarray, shape (...)
        Part that holds the weight: minus the moment of the weight [N m].
    loads : float or ndarray, shape (...)
        Part that holds the loads: minus the moment of the loads [N m].
    power : float or ndarray, shape (...)
        Power from the drive to the body; negative when the body drives [W].
    support : ndarray, shape (..., 3)
        Moment that drive and bearings together give about the pivot [N m].
    force : ndarray, shape (..., 3)
        Force of the pivot on the body [N].
    """

    total: Number
    motion: Number
    weight: Number
    loads: Number
    power: Number
    support: Array
    force: Array


def drive_torque(
    body: RigidBody,
    pivot: Array,
    axis: Array,
    *,
    omega: Number,
    alpha: Number,
    acceleration_pivot: Array,
    gravity: Array,
    load_force: Array,
    load_moment: Array,
) -> DriveTorque:
    """Return the torque that a drive must give about a pivot axis, weight and loads included.

    Parameters
    ----------
    body : RigidBody
        Body, as it stands at this instant.
    pivot : ndarray, shape (..., 3)
        Point B of the axis, fixed in the body; it may accelerate [m].
    axis : ndarray, shape (..., 3)
        Direction of the axis, of length 1; z in planar work [-].
    omega : float or ndarray, shape (...)
        Angular velocity about the axis [rad/s].
    alpha : float or ndarray, shape (...)
        Angular acceleration about the axis [rad/s^2].
    acceleration_pivot : ndarray, shape (..., 3)
        Acceleration of the pivot; zero for a fixed one [m/s^2].
    gravity : ndarray, shape (3,)
        Acceleration of free fall, pointing down [m/s^2].
    load_force : ndarray, shape (..., 3)
        Sum of the other loads on the body [N].
    load_moment : ndarray, shape (..., 3)
        Moment of the other loads about the pivot [N m].

    Returns
    -------
    DriveTorque
        Torque about the axis and its parts, power, and what the pivot must hold.

    Notes
    -----
    T = e.(sum M_B - r_BG x m g - M_loads), sum M_B being the general moment sum about the moving pivot. The
    body turns about an axis whose direction is fixed; friction of the pivot is a load.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, general equations of motion of a rigid body,
    moments about an arbitrary point.
    """
    arm = body.center - pivot
    spin, turn = np.asarray(omega)[..., None] * axis, np.asarray(alpha)[..., None] * axis
    asked = moment_sum(body.inertia, body.mass, arm, spin, turn, acceleration_pivot)
    weight = body.mass * gravity
    weight_moment = cross(arm, weight)
    support = asked.total - weight_moment - load_moment
    motion = (axis * asked.total).sum(axis=-1)
    held_weight = -(axis * weight_moment).sum(axis=-1)
    held_loads = -(axis * load_moment).sum(axis=-1)
    total = motion + held_weight + held_loads
    force = asked.force - weight - load_force
    return DriveTorque(total, motion, held_weight, held_loads, total * omega, support, force)


def torque(inertia: Number, alpha: Number) -> Number:
    """Return the net torque that an angular acceleration asks for, about a fixed axis or the mass center.

    Parameters
    ----------
    inertia : float or ndarray, shape (...)
        Moment of inertia about the axis [kg m^2].
    alpha : float or ndarray, shape (...)
        Angular acceleration about it [rad/s^2].

    Returns
    -------
    float or ndarray, shape (...)
        Sum of the torques about the axis [N m].

    Notes
    -----
    T = I alpha. Planar; about a fixed axis or an axis through the mass center only.

    References
    ----------
    Euler's second law for a fixed axis.
    """
    return inertia * alpha


def angular_acceleration(torque: Number, inertia: Number) -> Number:
    """Return the angular acceleration under a net torque, about a fixed axis or the mass center.

    Parameters
    ----------
    torque : float or ndarray, shape (...)
        Sum of the torques about the axis [N m].
    inertia : float or ndarray, shape (...)
        Moment of inertia about the axis [kg m^2].

    Returns
    -------
    float or ndarray, shape (...)
        Angular acceleration about the axis [rad/s^2].

    Notes
    -----
    alpha = T / I. Planar; about a fixed axis or an axis through the mass center only.

    References
    ----------
    Euler's second law for a fixed axis.
    """
    return torque / inertia


def reflected_inertia(inertia: Number, ratio: Number) -> Number:
    """Return a load's moment of inertia as its motor feels it through a gear.

    Parameters
    ----------
    inertia : float or ndarray, shape (...)
        Moment of inertia at the slow (load) side [kg m^2].
    ratio : float or ndarray, shape (...)
        Speed of the motor over the speed of the load [-].

    Returns
    -------
    float or ndarray, shape (...)
        Moment of inertia at the motor shaft [kg m^2].

    Notes
    -----
    J / ratio^2, from equal kinetic energy; losses of the gear are not in it.

    References
    ----------
    First principles: kinetic energy of the load at the speed of the motor.
    """
    return inertia / (ratio * ratio)


def motor_torque(torque: Number, ratio: Number, efficiency: Number, load_speed: Number = 1.0) -> Number:
    """Return the motor torque behind a gear, losses counted by the direction of power.

    Parameters
    ----------
    torque : float or ndarray, shape (...)
        Torque of the drive on the load [N m].
    ratio : float or ndarray, shape (...)
        Speed of the motor over the speed of the load; negative for a gear that reverses [-].
    efficiency : float or ndarray, shape (...)
        Power out over power in, the same both ways, above 0 to 1 [-].
    load_speed : float or ndarray, shape (...)
        Speed of the load, of which only the sign counts [rad/s]. Left out, a positive torque drives and a
        negative one brakes.

    Returns
    -------
    float or ndarray, shape (...)
        Torque of the motor at its own shaft [N m].

    Notes
    -----
    When the motor drives (torque and speed of one sign) T / (ratio efficiency); when the load drives
    T efficiency / ratio, as then the losses help to brake. At rest the motor is taken to drive: the greater
    of the two. Gears with an efficiency below one half hold by themselves and are not meant.

    References
    ----------
    Common practice in drive sizing; from the definition of efficiency.
    """
    if isinstance(torque, float) and isinstance(efficiency, float) and isinstance(load_speed, float):
        return torque / ratio / efficiency if torque * load_speed >= 0.0 else torque / ratio * efficiency
    drives = np.asarray(torque) * load_speed >= 0
    factor = np.where(drives, 1.0 / np.asarray(efficiency), efficiency)
    answer = torque / ratio * factor
    return float(answer) if np.ndim(answer) == 0 else answer


def inertia_from_gd2(gd2: Number) -> Number:
    """Return the moment of inertia of a rotor from its flywheel moment GD2.

    Parameters
    ----------
    gd2 : float or ndarray, shape (...)
        Flywheel moment: mass times the square of the diameter of gyration, as kgf m^2 is read [kg m^2].

    Returns
    -------
    float or ndarray, shape (...)
        Moment of inertia [kg m^2].

    Notes
    -----
    J = GD^2 / 4: G in kgf has the number of the mass in kg, and D is twice the radius of gyration.

    References
    ----------
    Common practice in motor catalogs.
    """
    return gd2 / 4.0


def gd2_from_inertia(inertia: Number) -> Number:
    """Return the flywheel moment GD2 of a rotor from its moment of inertia.

    Parameters
    ----------
    inertia : float or ndarray, shape (...)
        Moment of inertia [kg m^2].

    Returns
    -------
    float or ndarray, shape (...)
        Flywheel moment GD^2 [kg m^2].

    Notes
    -----
    GD^2 = 4 J.

    References
    ----------
    Common practice in motor catalogs.
    """
    return 4.0 * inertia
