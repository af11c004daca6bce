"""Moment balance, momentum and energy, against particles, a Lagrangian and known motions."""

from __future__ import annotations

import numpy as np
import pytest
import sympy as sp
from hypothesis import given, settings
from hypothesis import strategies as st
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
    about = c.pivot + np.array([0.3, -2.0, 0.7])
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
    """Landau, Lifshitz, Mechanics, section 37: the spins in Jacobi's functions (scipy.special.ellipj)."""
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
