"""Moment balance, momentum, energy, loads and drives, against particles, a Lagrangian and published values."""

from __future__ import annotations

from math import pi, radians, sin, tan

import numpy as np
import pytest
import sympy as sp
from hypothesis import given, settings
from hypothesis import strategies as st
from printed_digits import agrees
from scipy.integrate import solve_ivp
from scipy.spatial.transform import Rotation
from scipy.special import ellipj
from sympy.physics.mechanics import ReferenceFrame, dynamicsymbols

from rigidsheet.core.balance import (
    angular_momentum,
    kinetic_energy,
    moment_sum,
    moment_sum_planar,
    spin_torque,
)
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


class Cloud:
    """A rigid body made of particles, so that every sum can be taken from first principles."""

    def __init__(self, seed: int) -> None:
        random = np.random.default_rng(seed)
        self.masses = random.uniform(0.1, 3.0, 9)
        self.points = random.normal(size=(9, 3)) * [1.0, 0.6, 0.3] + random.normal(size=3)
        self.mass = self.masses.sum()
        self.center = self.masses @ self.points / self.mass
        r = self.points - self.center
        self.inertia = sum(
            m * (p @ p * np.eye(3) - np.outer(p, p)) for m, p in zip(self.masses, r, strict=True)
        )
        self.body = RigidBody(float(self.mass), self.center, self.inertia)
        self.omega, self.alpha, self.velocity, self.acceleration, self.pivot = random.normal(size=(5, 3))

    def velocities(self) -> np.ndarray:
        return self.velocity + np.cross(self.omega, self.points - self.pivot)

    def accelerations(self) -> np.ndarray:
        r = self.points - self.pivot
        return self.acceleration + np.cross(self.alpha, r) + np.cross(self.omega, np.cross(self.omega, r))


SEEDS = pytest.mark.parametrize("seed", range(12))


@SEEDS
def test_moment_sum_equals_the_sum_over_particles(seed):
    """First principles: sum of r x m a over the particles, about the moving pivot."""
    c = Cloud(seed)
    forces = c.masses[:, None] * c.accelerations()
    expected = np.cross(c.points - c.pivot, forces).sum(axis=0)
    found = moment_sum(c.inertia, c.mass, c.center - c.pivot, c.omega, c.alpha, c.acceleration)
    np.testing.assert_allclose(found.total, expected, rtol=1e-11, atol=1e-11)
    np.testing.assert_allclose(found.force, forces.sum(axis=0), rtol=1e-11, atol=1e-11)
    about_center = np.cross(c.points - c.center, forces).sum(axis=0)
    np.testing.assert_allclose(found.spin, about_center, rtol=1e-10, atol=1e-10)
    np.testing.assert_allclose(
        spin_torque(c.inertia, c.omega, c.alpha).total, about_center, rtol=1e-10, atol=1e-10
    )


@SEEDS
def test_momentum_and_energy_equal_the_sums_over_particles(seed):
    """First principles: sum of r x m v and of m v^2 / 2 over the particles."""
    c = Cloud(seed)
    velocity_center = c.velocity + np.cross(c.omega, c.center - c.pivot)
    about = c.pivot + [0.3, -2.0, 0.7]
    momenta = c.masses[:, None] * c.velocities()
    found = angular_momentum(c.body, c.omega, velocity_center, about)
    expected = np.cross(c.points - about, momenta).sum(axis=0)
    np.testing.assert_allclose(found.total, expected, rtol=1e-11, atol=1e-11)
    energy = kinetic_energy(c.body, c.omega, velocity_center)
    assert energy.total == pytest.approx(
        0.5 * (c.masses * (c.velocities() ** 2).sum(axis=1)).sum(), rel=1e-12
    )


def test_moment_sum_on_a_moving_pivot_matches_a_lagrangian():
    """Lagrange's equations by sympy for a body that turns freely about a pivot on a given path.

    The generalized force of each angle is the moment about the pivot along that angle's partial spin; three
    angles give the whole moment. Neither the moment sum nor the spin equation is used to derive it.
    """
    t = dynamicsymbols._t
    q = dynamicsymbols("q0:3")
    rates, seconds = sp.symbols("u0:3"), sp.symbols("w0:3")
    m, k = sp.Symbol("m"), sp.symbols("k0:6")
    arm, path = sp.Matrix(sp.symbols("r0:3")), sp.Matrix(sp.symbols("v0:3")) * t
    accel = sp.symbols("a0:3")
    path += sp.Matrix(accel) * t**2 / 2
    base, body = ReferenceFrame("N"), ReferenceFrame("B")
    body.orient_body_fixed(base, q, "ZXY")
    tensor = sp.Matrix([[k[0], k[3], k[5]], [k[3], k[1], k[4]], [k[5], k[4], k[2]]])
    omega = body.ang_vel_in(base).to_matrix(body)
    velocity = path.diff(t) + (base.dcm(body) * arm).diff(t)
    energy = m * velocity.dot(velocity) / 2 + omega.dot(tensor * omega) / 2
    qd = [angle.diff(t) for angle in q]
    loads = [energy.diff(rate).diff(t) - energy.diff(angle) for angle, rate in zip(q, qd, strict=True)]
    spins = body.ang_vel_in(base)
    partials = [list(spins.to_matrix(base).diff(rate)) for rate in qd]
    outputs = [loads, *partials, list(spins.to_matrix(base)), list(spins.dt(base).to_matrix(base))]
    outputs += [list(row) for row in base.dcm(body).tolist()]
    angles = sp.symbols("b0:3")
    swap = [(angle.diff(t, 2), s) for angle, s in zip(q, seconds, strict=True)]
    swap += [(rate, u) for rate, u in zip(qd, rates, strict=True)]
    swap += [(angle, b) for angle, b in zip(q, angles, strict=True)] + [(t, 0)]
    flat = [[sp.sympify(x).subs(swap) for x in row] for row in outputs]
    names = [angles, rates, seconds, m, k, list(arm), sp.symbols("v0:3"), accel]
    evaluate = sp.lambdify(names, flat, cse=True)
    random = np.random.default_rng(9)
    for seed in range(15):
        c = Cloud(seed)
        i = c.inertia
        terms = [i[0, 0], i[1, 1], i[2, 2], i[0, 1], i[1, 2], i[0, 2]]
        state = random.uniform(-1, 1, (6, 3))
        rows = np.array(evaluate(*state[:3], c.mass, terms, *state[3:]), dtype=float)
        rotation = rows[6:9]
        found = moment_sum(
            rotation @ c.inertia @ rotation.T, c.mass, rotation @ state[3], rows[4], rows[5], state[5]
        )
        np.testing.assert_allclose(rows[1:4] @ found.total, rows[0], rtol=1e-9, atol=1e-9)


@SEEDS
def test_planar_moment_sum_is_the_case_of_the_general_one(seed):
    """The general sum with a tensor that has z as principal direction, at the same state."""
    c = Cloud(seed)
    arm, accel = c.center - c.pivot, c.acceleration * [1, 1, 0]
    arm[2] = 0.0
    w, al = float(c.omega[2]), float(c.alpha[2])
    general = moment_sum(np.diag([1.0, 2.0, 2.5]), c.mass, arm, w * Z, al * Z, accel)
    planar = moment_sum_planar(2.5, float(c.mass), arm, w, al, accel)
    assert planar.total == pytest.approx(general.total[2], rel=1e-12)
    assert planar.acceleration_x == pytest.approx(general.acceleration[0], rel=1e-12)
    assert planar.acceleration_y == pytest.approx(general.acceleration[1], rel=1e-12)


def test_columns_equal_their_rows():
    clouds = [Cloud(seed) for seed in range(6)]
    column = moment_sum(
        np.array([c.inertia for c in clouds]),
        np.array([c.mass for c in clouds]),
        np.array([c.center for c in clouds]),
        np.array([c.omega for c in clouds]),
        np.array([c.alpha for c in clouds]),
        np.array([c.acceleration for c in clouds]),
    )
    for row, c in enumerate(clouds):
        one = moment_sum(c.inertia, c.mass, c.center, c.omega, c.alpha, c.acceleration)
        np.testing.assert_allclose(column.total[row], one.total, rtol=1e-12, atol=1e-12)
    arms = np.array([c.center for c in clouds])
    alphas = np.arange(6.0)
    planar = moment_sum_planar(2.0, 3.0, arms, 0.5, alphas, arms)
    for row in range(6):
        one_planar = moment_sum_planar(2.0, 3.0, arms[row], 0.5, float(alphas[row]), arms[row])
        assert planar.total[row] == pytest.approx(one_planar.total, rel=1e-12, abs=1e-12)
    shared = spin_torque(clouds[0].inertia, column.total, arms)
    single = spin_torque(clouds[0].inertia, column.total[3], arms[3])
    np.testing.assert_allclose(shared.total[3], single.total, rtol=1e-12)


@pytest.mark.parametrize("moments", [(2.0, 3.0, 4.5), (0.5, 4.0, 4.2), (1e-6, 2.5e-6, 3e-6)])
def test_torque_free_spin_of_an_unsymmetric_body_needs_no_torque(moments):
    """L. D. Landau, E. M. Lifshitz, Mechanics, section 37: spins by Jacobi's functions (scipy.special.ellipj)."""
    a, b, c = moments
    energy_2 = a * 1.1**2 + c * 3.0**2
    square = (a * 1.1) ** 2 + (c * 3.0) ** 2
    assert square > energy_2 * b
    rate = np.sqrt((c - b) * (square - energy_2 * a) / (a * b * c))
    modulus = (b - a) * (energy_2 * c - square) / ((c - b) * (square - energy_2 * a))
    tops = np.sqrt(
        [
            (energy_2 * c - square) / (a * (c - a)),
            (energy_2 * c - square) / (b * (c - b)),
            (square - energy_2 * a) / (c * (c - a)),
        ]
    )
    times = np.linspace(0, 7, 50)
    sn, cn, dn, _ = ellipj(rate * times, modulus)
    omega = tops * np.stack([cn, sn, dn], axis=1)
    alpha = tops * rate * np.stack([-sn * dn, cn * dn, -modulus * sn * cn], axis=1)
    turn = Rotation.from_euler("zxy", [0.4, -1.1, 2.0]).as_matrix()
    found = spin_torque(turn @ np.diag(moments) @ turn.T, omega @ turn.T, alpha @ turn.T)
    assert np.abs(found.total).max() < 1e-13 * np.abs(found.inertial).max() * 100
    assert np.abs(found.gyroscopic).max() > 0.01 * c


def test_box_keeps_spin_about_its_long_and_short_axes_and_loses_it_about_the_middle_one():
    """Known behavior of a thrown book, integrated by scipy from the spin equation's own alpha."""
    sides = np.array([0.03, 0.16, 0.24])
    inertia = np.diag([(sides @ sides - s * s) / 12 for s in sides])
    order = np.argsort(np.diag(inertia))

    def rate(_: float, omega: np.ndarray) -> np.ndarray:
        return np.linalg.solve(inertia, -spin_torque(inertia, omega, ZERO).gyroscopic)

    flips = []
    for axis in order:
        start = np.full(3, 1e-3)
        start[axis] = 10.0
        run = solve_ivp(rate, (0, 12), start, rtol=1e-9, atol=1e-12)
        flips.append(run.y[axis].min() < 0)
        energy = 0.5 * (run.y * (inertia @ run.y)).sum(axis=0)
        assert np.ptp(energy) < 1e-6 * energy[0]
    assert flips == [False, True, False]


finite = st.floats(-5, 5, allow_nan=False)
vectors = st.tuples(finite, finite, finite).map(np.array)


@settings(max_examples=60, deadline=None)
@given(st.integers(0, 500), vectors, vectors, vectors, vectors)
def test_power_of_the_asked_loads_is_the_rate_of_kinetic_energy(seed, omega, alpha, velocity, acceleration):
    """Central difference of the energy along the motion, the body turned by scipy."""
    c = Cloud(seed)
    asked = moment_sum(c.inertia, c.mass, ZERO, omega, alpha, acceleration)
    power = asked.force @ velocity + asked.spin @ omega
    h = 1e-4

    def energy(sign: int) -> float:
        # The turn over a short time: exact to the third order in the time step.
        turn = Rotation.from_rotvec(sign * h * omega + h * h / 2 * alpha).as_matrix()
        turned = RigidBody(float(c.mass), c.center, turn @ c.inertia @ turn.T)
        return float(
            kinetic_energy(turned, omega + sign * h * alpha, velocity + sign * h * acceleration).total
        )

    numeric = (energy(1) - energy(-1)) / (2 * h)
    scale = c.mass * (1 + sum(float(x @ x) for x in (omega, alpha, velocity, acceleration))) ** 2
    assert numeric == pytest.approx(power, abs=1e-6 * scale)


@settings(max_examples=60, deadline=None)
@given(st.integers(0, 500), vectors)
def test_moment_sums_about_two_points_differ_by_the_moment_of_the_force(seed, shift):
    c = Cloud(seed)
    first = moment_sum(c.inertia, c.mass, c.center - c.pivot, c.omega, c.alpha, c.acceleration)
    at_other = (
        c.acceleration + np.cross(c.alpha, shift) + np.cross(c.omega, np.cross(c.omega, shift))
    )  # of the body's point at pivot + shift
    second = moment_sum(c.inertia, c.mass, c.center - c.pivot - shift, c.omega, c.alpha, at_other)
    np.testing.assert_allclose(first.force, second.force, atol=1e-9)
    np.testing.assert_allclose(first.total, second.total + np.cross(shift, first.force), atol=1e-8)


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
    # At 90 deg between spin and precession the torque is polar * spin * precession, whatever the other moment.
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
    """Known steady motion: a small bob at angle b from the vertical circles at omega^2 = g tan(b) / radius."""
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
