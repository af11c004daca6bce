"""Loads brought together, drive torque, gears, gyroscopic couples: published values and first principles."""

from __future__ import annotations

from math import pi, radians, sin, tan

import numpy as np
import pytest
from printed_digits import agrees

from rigidsheet.core.balance import spin_torque
from rigidsheet.core.body import RigidBody
from rigidsheet.core.drives import (
    angular_acceleration,
    drive_torque,
    gd2_from_inertia,
    inertia_from_gd2,
    motor_torque,
    reflected_inertia,
    torque,
)
from rigidsheet.core.loads import center_acceleration, moment, resultant

ZERO = np.zeros(3)
Z = np.array([0.0, 0.0, 1.0])
NONE = np.empty((0, 3))
SEEDS = pytest.mark.parametrize("seed", range(12))

# Loads brought together.


@SEEDS
def test_wrench_of_a_resultant_has_the_same_moment_everywhere(seed):
    """First principles: force on its axis plus a moment along it replaces the loads about any point."""
    random = np.random.default_rng(seed)
    forces, points, couples = random.normal(size=(3, 4, 3))
    about = random.normal(size=3)
    found = resultant(forces, points, couples, about)
    assert not found.is_couple
    other = random.normal(size=3)
    expected = np.cross(points - other, forces).sum(axis=0) + couples.sum(axis=0)
    wrench = np.cross(found.axis_point - other, found.force) + found.pitch * found.force
    np.testing.assert_allclose(wrench, expected, rtol=1e-10, atol=1e-10)
    assert found.lever == pytest.approx(np.linalg.norm(found.axis_point - about))


def test_planar_line_of_action_and_couple():
    """Handbook case: 3 N and 5 N downward at 1 m and 3 m act together at (3 + 15) / 8 m."""
    forces = np.array([[0, -3.0, 0], [0, -5.0, 0]])
    points = np.array([[1.0, 0, 0], [3.0, 7.0, 0]])
    found = resultant(forces, points, NONE, np.array([0.5, 2.0, 0]))
    assert found.crossing() == (pytest.approx(18 / 8), None)
    assert found.pitch == 0
    couple = resultant(np.array([[0, 2.0, 0], [0, -2.0, 0]]), points, NONE, ZERO)
    assert couple.is_couple
    assert couple.axis_point is None
    assert couple.crossing() == (None, None)
    np.testing.assert_allclose(couple.moment, [0, 0, 2.0 - 6.0])


def test_forces_that_cancel_but_for_rounding_are_a_couple():
    forces = np.array([[0.1, 0, 0], [0.2, 0, 0], [-0.3, 0, 0]])
    assert forces.sum() != 0
    assert resultant(forces, np.eye(3), NONE, ZERO).is_couple


def test_moment_of_a_force_and_acceleration_of_the_mass_center():
    """numpy's own cross product; Newton's second law."""
    forces, arms = np.random.default_rng(1).normal(size=(2, 8, 3))
    np.testing.assert_allclose(moment(forces, arms), np.cross(arms, forces), atol=1e-15)
    np.testing.assert_allclose(center_acceleration(forces, 4.0), forces / 4)
    np.testing.assert_allclose(center_acceleration(forces, np.arange(1.0, 9))[5], forces[5] / 6)


# Drives.


def test_flywheel_run_up():
    """McLean, Nelson, Schaum's Engineering Mechanics, Ex. 18.15 (read): 181 N m."""
    assert agrees(torque(2000 * 1.2**2, 120 * pi / 30 / 200), "181")


def test_flywheel_run_down():
    """OpenStax, University Physics Volume 1, section 10.7 problem (read): -43.6 N m."""
    assert agrees(torque(100.0, -500 * pi / 30 / 120), "-43.6")


def test_gyroscopic_couple_of_a_turning_engine():
    """T. Bevan, Theory of Machines, Ch. 2 Ex. 13 (read): 572 lbf ft."""
    inertia = np.diag([250.0, 125.0, 125.0]) / 32.2
    turn = np.array([0, 0, 150 * 5280 / 3600 / 500])
    spin = np.array([1600 * pi / 30, 0, 0])
    # A steady turn carries the spin axis along, so alpha = turn x spin and both parts of the torque enter.
    found = spin_torque(inertia, spin + turn, np.cross(turn, spin))
    assert agrees(float(np.linalg.norm(found.total)), "572")


def test_precession_of_an_overhung_disk():
    """Khurmi, Gupta, Theory of Machines, Ex. 14.1 (read): 16.7 rad/s, weight on 0.6 m overhang."""
    mass, radius, spin = 5.0, 0.15, 300 * pi / 30
    polar = mass * radius**2 / 2
    # With precession square to the spin the torque is polar * spin * precession, whatever the other moment.
    torque_per_rate = spin_torque(
        np.diag([polar, polar / 2, polar / 2]), np.array([spin, 0, 1.0]), np.array([0, spin, 0])
    ).total
    assert agrees(mass * 9.81 * 0.6 / torque_per_rate[1], "16.7")


def test_best_gear_ratio():
    """Khurmi, Gupta, Theory of Machines, Ex. 3.14 (read): ratio 4, load 6.25, motor 25 rad/s^2."""
    ratios = np.linspace(1, 10, 901)
    load = angular_acceleration(100.0, 2.0 + reflected_inertia(32.0, ratios)) / ratios
    best = int(load.argmax())
    assert agrees(float(ratios[best]), "4")
    assert agrees(float(load[best]), "6.25")
    assert agrees(float(load[best] * ratios[best]), "25")


def test_motor_torque_by_direction_of_power():
    """First principles: power into the gear times efficiency is power out, whichever side drives."""
    ratio, efficiency, speed = 20.0, 0.8, 3.0
    raising = motor_torque(400.0, ratio, efficiency, speed)
    assert raising * speed * ratio * efficiency == pytest.approx(400 * speed)
    lowering = motor_torque(400.0, ratio, efficiency, -speed)
    assert lowering * speed * ratio == pytest.approx(400 * speed * efficiency)
    assert motor_torque(-400.0, ratio, efficiency) == pytest.approx(-lowering)
    column = motor_torque(np.array([400.0, -400.0]), ratio, efficiency)
    np.testing.assert_allclose(column, [raising, -lowering])
    assert motor_torque(400.0, -ratio, efficiency, speed) == pytest.approx(-raising)


def test_flywheel_moment_of_a_solid_disk():
    """Common practice in motor catalogs: GD^2 of a solid disk is G D^2 / 2, and J is m d^2 / 8."""
    mass, diameter = 40.0, 0.5
    assert inertia_from_gd2(mass * diameter**2 / 2) == pytest.approx(mass * diameter**2 / 8)
    assert gd2_from_inertia(inertia_from_gd2(3.7)) == pytest.approx(3.7)


@SEEDS
def test_drive_torque_of_a_pendulum_on_a_moving_pivot(seed):
    """Lagrange's equation of a planar pendulum with given pivot acceleration, written out by hand:
    T = (I + m l^2) alpha + m l (ay cos + g cos - ax sin) for the arm at an angle from x.
    """
    random = np.random.default_rng(seed)
    m, length, inertia, angle, omega, alpha = random.uniform(0.5, 4, 6)
    ax, ay = random.normal(size=2)
    pivot = random.normal(size=3)
    arm = length * np.array([np.cos(angle), np.sin(angle), 0])
    body = RigidBody(m, pivot + arm, np.diag([1.0, 1.0, inertia]))
    load_force = np.array([3.0, -1.0, 0])
    found = drive_torque(
        body,
        pivot,
        Z,
        omega=omega,
        alpha=alpha,
        acceleration_pivot=np.array([ax, ay, 0]),
        gravity=np.array([0, -9.81, 0]),
        load_force=load_force,
        load_moment=np.array([0, 0, 7.0]),
    )
    asked = (inertia + m * length**2) * alpha
    asked += m * length * (ay * np.cos(angle) - ax * np.sin(angle))
    held = m * length * 9.81 * np.cos(angle)
    assert found.motion == pytest.approx(asked, rel=1e-10, abs=1e-10)
    assert found.weight == pytest.approx(held, rel=1e-10, abs=1e-10)
    assert found.loads == pytest.approx(-7)
    assert found.total == pytest.approx(asked + held - 7, rel=1e-10, abs=1e-10)
    assert found.power == pytest.approx(found.total * omega)
    center = np.array([ax, ay, 0]) + alpha * np.cross(Z, arm) - omega**2 * arm
    np.testing.assert_allclose(
        found.force, m * center - m * np.array([0, -9.81, 0]) - load_force, rtol=1e-10, atol=1e-10
    )


def test_drive_torque_over_a_table_of_angles():
    """A tilting tray at rest: the torque follows m g l cos(angle), row by row."""
    angles = np.radians(np.linspace(0, 120, 7))
    body = RigidBody(30.0, ZERO, np.eye(3))
    pivots = -0.4 * np.stack([np.cos(angles), np.sin(angles), 0 * angles], axis=1)
    found = drive_torque(
        body,
        pivots,
        Z,
        omega=np.zeros(7),
        alpha=np.zeros(7),
        acceleration_pivot=ZERO,
        gravity=np.array([0, -9.81, 0]),
        load_force=ZERO,
        load_moment=ZERO,
    )
    np.testing.assert_allclose(found.total, 30 * 9.81 * 0.4 * np.cos(angles), atol=1e-12)


def test_conical_pendulum_needs_no_torque_about_its_hook():
    """Known steady motion: a bob at angle b from the vertical circles at omega^2 = g tan(b) / radius."""
    length, tilt = 1.3, radians(35)
    arm = length * np.array([sin(tilt), 0, -np.cos(tilt)])
    omega = np.sqrt(9.81 * tan(tilt) / (length * sin(tilt)))
    found = drive_torque(
        RigidBody(2.0, arm, np.zeros((3, 3))),
        ZERO,
        Z,
        omega=omega,
        alpha=0.0,
        acceleration_pivot=ZERO,
        gravity=np.array([0, 0, -9.81]),
        load_force=ZERO,
        load_moment=ZERO,
    )
    np.testing.assert_allclose(found.support, 0, atol=1e-12)
    np.testing.assert_allclose(np.cross(found.force, arm), 0, atol=1e-12)
