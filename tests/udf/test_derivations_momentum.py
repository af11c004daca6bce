"""Moment balance, momentum, energy and drives through the cells: against sympy, particles and known motions."""

from __future__ import annotations

from functools import cache
from types import SimpleNamespace

import numpy as np
import pytest
import sympy as sp
from cell_calls import OMITTED, ask, body_cells, motion_cells, number, refused, row, rows, vector
from scipy.integrate import solve_ivp
from scipy.spatial.transform import Rotation
from scipy.special import ellipj
from sympy.physics.mechanics import ReferenceFrame, dynamicsymbols

SEEDS = pytest.mark.parametrize("seed", range(8))
T = dynamicsymbols._t


class Cloud:
    """Particles of one rigid body in motion, so that every sum can be taken from first principles."""

    def __init__(self, seed: int, planar: bool = False) -> None:
        random = np.random.default_rng(seed)
        flat = [1.0, 1.0, 0.0] if planar else [1.0, 1.0, 1.0]
        self.masses = random.uniform(0.1, 3.0, 9)
        self.points = (random.normal(size=(9, 3)) * [1.0, 0.6, 0.3] + random.normal(size=3)) * flat
        self.mass = float(self.masses.sum())
        self.center = self.masses @ self.points / self.mass
        self.tensor = self.about(self.center)
        spins = random.normal(size=(2, 3)) * ([0.0, 0.0, 1.0] if planar else [1.0, 1.0, 1.0])
        self.omega, self.alpha = spins
        self.velocity, self.acceleration, self.pivot, self.gravity = random.normal(size=(4, 3)) * flat
        self.body = body_cells(self.mass, self.center, self.tensor)

    def about(self, point: np.ndarray) -> np.ndarray:
        r = self.points - point
        return sum(m * (p @ p * np.eye(3) - np.outer(p, p)) for m, p in zip(self.masses, r, strict=True))

    def velocities(self) -> np.ndarray:
        """Return the particles' velocities from the pivot's, by the skew matrix of the spin."""
        return self.velocity + (self.points - self.pivot) @ skew(self.omega).T

    def accelerations(self) -> np.ndarray:
        change = skew(self.alpha) + skew(self.omega) @ skew(self.omega)
        return self.acceleration + (self.points - self.pivot) @ change.T


def skew(w: np.ndarray) -> np.ndarray:
    return np.array([[0, -w[2], w[1]], [w[2], 0, -w[0]], [-w[1], w[0], 0]])


@cache
def tumbling_body():
    """Return a function from a random state to the moments on a tumbling body, by sympy.

    The tensor along the fixed axes is R J R^T; the angular momentum about G is (R J R^T) omega, and its
    derivative is the moment. About a moving point B of the body: derivative of H_G, plus r_BG x m d2(r_G)/dt2.
    """
    q = dynamicsymbols("q1:4 b1:4")
    inertia = sp.symbols("Jxx Jyy Jzz Jxy Jyz Jzx")
    c, mass = sp.Matrix(sp.symbols("c1:4")), sp.Symbol("m")
    xx, yy, zz, xy, yz, zx = inertia
    own = sp.Matrix([[xx, xy, zx], [xy, yy, yz], [zx, yz, zz]])
    fixed = ReferenceFrame("N")
    body = fixed.orientnew("B", "Body", q[:3], "XYZ")
    turn = body.dcm(fixed).T
    omega = body.ang_vel_in(fixed).to_matrix(fixed)
    tensor = turn * own * turn.T
    spin = (tensor * omega).diff(T)
    arm = turn * c
    center = sp.Matrix(q[3:]) + arm
    whole = spin + arm.cross(mass * center.diff(T, 2))
    names = sp.symbols("x0:18")
    first, second = [sp.diff(x, T) for x in q], [sp.diff(x, T, 2) for x in q]
    steps = [
        dict(zip(old, new, strict=True))
        for old, new in ((second, names[12:]), (first, names[6:12]), (q, names[:6]))
    ]
    out = []
    for part in (tensor, omega, omega.diff(T), spin, arm, whole):
        for step in steps:
            part = part.subs(step)
        out.append(part)
    return sp.lambdify([names, inertia, tuple(c), mass], out, cse=True)


def tumbling(seed: int) -> SimpleNamespace:
    cloud, x = Cloud(seed), np.random.default_rng(seed + 5000).normal(size=18)
    t = cloud.tensor
    six = (t[0, 0], t[1, 1], t[2, 2], t[0, 1], t[1, 2], t[2, 0])
    c = np.random.default_rng(seed + 6000).normal(size=3)
    found = [np.array(p, dtype=float) for p in tumbling_body()(x, six, tuple(c), cloud.mass)]
    tensor, *vectors = found
    omega, alpha, spin, arm, whole = (v.ravel() for v in vectors)
    return SimpleNamespace(
        tensor=tensor, omega=omega, alpha=alpha, spin=spin, arm=arm, whole=whole, mass=cloud.mass, ab=x[15:18]
    )


@SEEDS
def test_spin_torque_is_the_derivative_of_angular_momentum(seed):
    """Reference: d/dt of R J R^T omega, by sympy."""
    s = tumbling(seed)
    found = vector("RB_SPIN_TORQUE", rows(s.tensor), row(s.omega), row(s.alpha))
    np.testing.assert_allclose(found, s.spin, rtol=1e-11, atol=1e-11 * np.abs(s.spin).max())


@SEEDS
def test_moment_sum_about_a_moving_pivot_in_space(seed):
    """Reference: derivative of the angular momentum and of the position of G, by sympy."""
    s = tumbling(seed)
    call = (rows(s.tensor), s.mass, row(s.arm), row(s.omega), row(s.alpha), row(s.ab))
    found = vector("RB_MOMENT_SUM", *call)
    np.testing.assert_allclose(found, s.whole, rtol=1e-11, atol=1e-11 * np.abs(s.whole).max())


@SEEDS
def test_moment_sum_about_a_moving_pivot_is_the_sum_over_particles(seed):
    """First principles: sum of r x m a over the particles about the pivot, in space and in the plane."""
    c = Cloud(seed)
    expected = np.cross(c.points - c.pivot, c.masses[:, None] * c.accelerations()).sum(axis=0)
    arm = row(c.center - c.pivot)
    found = vector(
        "RB_MOMENT_SUM", rows(c.tensor), c.mass, arm, row(c.omega), row(c.alpha), row(c.acceleration)
    )
    np.testing.assert_allclose(found, expected, rtol=1e-11, atol=1e-11 * np.abs(expected).max())
    p = Cloud(seed + 100, planar=True)
    expected = np.cross(p.points - p.pivot, p.masses[:, None] * p.accelerations()).sum(axis=0)
    spins = (float(p.omega[2]), float(p.alpha[2]))
    arm2, ab2 = row((p.center - p.pivot)[:2]), row(p.acceleration[:2])
    one = number("RB_MOMENT_SUM", float(p.tensor[2, 2]), p.mass, arm2, *spins, ab2)
    assert one == pytest.approx(expected[2], rel=1e-11, abs=1e-11)


@SEEDS
def test_momentum_and_energy_are_the_sums_over_particles(seed):
    """First principles: sum of r x m v and of m v^2 / 2; the motion told in each of its three ways."""
    c = Cloud(seed)
    v = c.velocities()
    center_velocity = c.masses @ v / c.mass
    energy = float(c.masses @ (v * v).sum(axis=1)) / 2
    about = c.pivot + np.array([0.3, -2.0, 0.7])
    momentum = np.cross(c.points - about, c.masses[:, None] * v).sum(axis=0)
    spin = np.cross(c.points - c.center, c.masses[:, None] * v).sum(axis=0)
    told = (
        motion_cells(omega=c.omega, center_velocity=center_velocity),
        motion_cells(omega=c.omega, point=c.pivot, point_velocity=c.velocity),
    )
    for motion in told:
        assert number("RB_KINETIC_ENERGY", c.body, motion) == pytest.approx(energy, rel=1e-11)
        found = vector("RB_ANGULAR_MOMENTUM", c.body, motion, row(about))
        np.testing.assert_allclose(found, momentum, rtol=1e-10, atol=1e-11 * np.abs(momentum).max())
        found = vector("RB_ANGULAR_MOMENTUM", c.body, motion)
        np.testing.assert_allclose(found, spin, rtol=1e-10, atol=1e-11 * np.abs(spin).max())
    c.velocity = np.zeros(3)
    turning = float(c.masses @ (c.velocities() ** 2).sum(axis=1)) / 2
    motion = motion_cells(omega=c.omega, fixed_point=c.pivot)
    assert number("RB_KINETIC_ENERGY", c.body, motion) == pytest.approx(turning, rel=1e-11)
    at_origin = np.cross(c.points, c.masses[:, None] * c.velocities()).sum(axis=0)
    found = vector("RB_ANGULAR_MOMENTUM", c.body, motion, "origin")
    np.testing.assert_allclose(found, at_origin, rtol=1e-10, atol=1e-11 * np.abs(at_origin).max())


@pytest.mark.parametrize("high", [True, False], ids=["about the largest", "about the smallest"])
@SEEDS
def test_torque_free_spin_of_an_asymmetric_body_needs_no_moment(seed, high):
    """Reference: Jacobi elliptic functions (Landau, Lifshitz: Mechanics, section 37), scipy.special.ellipj."""
    rng = np.random.default_rng(seed + 200)
    one, two, three = np.cumsum(rng.uniform([1.0, 0.2, 0.1], [2.0, 0.9, 0.6]))
    # energy and momentum on either side of the separatrix M^2 = 2 E I2
    square = rng.uniform(2 * two, 2 * three) if high else rng.uniform(2 * one, 2 * two)
    if not high:
        one, three = three, one
    energy, t = 1.0, float(rng.uniform(-5, 5))
    a = np.sqrt((2 * energy * three - square) / (one * (three - one)))
    b = np.sqrt((2 * energy * three - square) / (two * (three - two)))
    c = np.sqrt((square - 2 * energy * one) / (three * (three - one)))
    rate = np.sqrt((three - two) * (square - 2 * energy * one) / (one * two * three))
    m = (two - one) * (2 * energy * three - square) / ((three - two) * (square - 2 * energy * one))
    sn, cn, dn, _ = ellipj(rate * t, m)
    # with the moments descending along a right-handed triad the same functions run backward in time
    sense = 1.0 if high else -1.0
    omega = np.array([a * cn, b * sn, c * dn])
    alpha = sense * rate * np.array([-a * sn * dn, b * cn * dn, -c * m * sn * cn])
    moments = np.array([one, two, three])
    turn = Rotation.random(random_state=seed).as_matrix()
    tensor = turn @ np.diag(moments) @ turn.T
    tensor = (tensor + tensor.T) / 2
    found = vector("RB_SPIN_TORQUE", rows(tensor), row(turn @ omega), row(turn @ alpha))
    scale = np.abs(moments * alpha).max() + moments.max() * (omega @ omega)
    np.testing.assert_allclose(found, 0.0, atol=1e-13 * scale)
    # and it is the change of the spin that makes it vanish
    still = vector("RB_SPIN_TORQUE", rows(tensor), row(turn @ omega), row((0, 0, 0)))
    np.testing.assert_allclose(still, -tensor @ (turn @ alpha), atol=1e-13 * scale)


BOOK = "L 240 mm; W 170 mm; H 30 mm"


def book() -> tuple[list[list[float]], np.ndarray]:
    tensor = ask("RB_SHAPE", "box", "1.2 kg", BOOK)
    return tensor, np.diag(np.array(tensor))


def thrown(start: np.ndarray, end: float):
    """Integrate the spin of a thrown book in its own axes, the moment of the cells being zero."""
    tensor, moments = book()

    def change(_, omega):
        return -vector("RB_SPIN_TORQUE", tensor, row(omega), row((0, 0, 0))) / moments

    return solve_ivp(change, (0, end), start, rtol=1e-10, atol=1e-14, dense_output=True)


def test_book_turns_steadily_about_its_long_and_its_flat_axis_only():
    """Reference: linearised Euler equations of a free body: growth rate or frequency about each axis."""
    _, moments = book()
    for axis in range(3):
        one, two = (axis + 1) % 3, (axis + 2) % 3
        spin, small = 10.0, 1e-6
        k_one = (moments[two] - moments[axis]) / moments[one] * spin
        k_two = (moments[axis] - moments[one]) / moments[two] * spin
        square = k_one * k_two  # w_one' = -k_one w_two, w_two' = -k_two w_one
        start = np.zeros(3)
        start[axis], start[one] = spin, small
        rate = np.sqrt(abs(square))
        unstable = axis == int(np.argsort(moments)[1])
        assert unstable == (square > 0)
        end = (5.0 if unstable else 2 * np.pi) / rate
        t = np.linspace(0, end, 40)
        wobble = thrown(start, end).sol(t)[one]
        expected = small * (np.cosh(rate * t) if unstable else np.cos(rate * t))
        np.testing.assert_allclose(wobble, expected, rtol=0, atol=2e-5 * np.abs(expected).max())


def test_book_about_its_middle_axis_turns_over_and_keeps_energy_and_momentum():
    """Property: a free body keeps its energy and the size of its angular momentum; the middle axis turns over."""
    _, moments = book()
    order = np.argsort(moments)
    start = np.zeros(3)
    start[order[1]], start[order[0]] = 10.0, 0.01
    omega = thrown(start, 6.0).sol(np.linspace(0, 6, 400))
    energy, momentum = moments @ omega**2, np.sqrt(moments**2 @ omega**2)
    np.testing.assert_allclose(energy, energy[0], rtol=1e-7)
    np.testing.assert_allclose(momentum, momentum[0], rtol=1e-7)
    assert omega[order[1]].min() < -9.9
    about_long = np.zeros(3)
    about_long[order[0]], about_long[order[1]] = 10.0, 0.01
    assert thrown(about_long, 6.0).sol(np.linspace(0, 6, 400))[order[0]].min() > 9.9


@cache
def hung_body():
    """Return a function from a random state to the generalized force of a planar body on a moving pivot, by sympy.

    Lagrange: d/dt dL/dq' - dL/dq = T + the loads' share, the pivot's path being given in time.
    """
    phi, x, y = dynamicsymbols("phi x y")
    m, inertia, r, gx, gy, fx, fy, s, beta, couple = sp.symbols("m I r gx gy fx fy s beta couple")
    center = sp.Matrix([x + r * sp.cos(phi), y + r * sp.sin(phi)])
    loaded = sp.Matrix([x + s * sp.cos(phi + beta), y + s * sp.sin(phi + beta)])
    speed = center.diff(T)
    kinetic = m * speed.dot(speed) / 2 + inertia * phi.diff(T) ** 2 / 2
    lagrangian = kinetic + m * (gx * center[0] + gy * center[1])
    asked = lagrangian.diff(phi.diff(T)).diff(T) - lagrangian.diff(phi)
    share = sp.Matrix([fx, fy]).dot(loaded.diff(phi)) + couple
    moving = kinetic.diff(phi.diff(T)).diff(T) - kinetic.diff(phi)
    q = (phi, x, y)
    names = sp.symbols("q0:9")
    steps = [{old.diff(T, k) if k else old: names[3 * k + i] for i, old in enumerate(q)} for k in (2, 1, 0)]
    out = []
    for part in (asked - share, moving, share):
        for step in steps:
            part = part.subs(step)
        out.append(sp.simplify(part))
    return sp.lambdify([names, (m, inertia, r, gx, gy, fx, fy, s, beta, couple)], out)


@SEEDS
def test_drive_torque_is_the_generalized_force(seed):
    """Reference: Lagrange's equation of a body on a pivot that moves as it is told, by sympy."""
    rng = np.random.default_rng(seed + 300)
    q = rng.normal(size=9)
    m, inertia, r, s = rng.uniform(0.5, 3.0, 4)
    gx, gy, fx, fy, beta, couple = rng.normal(size=6)
    total, moving, share = hung_body()(q, (m, inertia, r, gx, gy, fx, fy, s, beta, couple))
    pivot = q[1:3]
    center = pivot + r * np.array([np.cos(q[0]), np.sin(q[0])])
    place = pivot + s * np.array([np.cos(q[0] + beta), np.sin(q[0] + beta)])
    body = body_cells(m, [*center, 0.0], np.diag([inertia / 2, inertia / 2, inertia]))
    loads = [
        ["load", "Fx [N]", "Fy [N]", "x [m]", "y [m]", "Mz [N*m]"],
        ["pull", fx, fy, *map(float, place), None],
        ["brake", None, None, None, None, couple],
    ]
    told = {"omega": q[3], "alpha": q[6], "gravity": [gx, gy]}
    motions = [motion_cells(**told, point=pivot, point_acceleration=q[7:9])]
    # the same motion told by the mass center: second derivative of its path
    w, al = q[3], q[6]
    a = q[7:9] + al * np.array([-1, 1]) * (center - pivot)[::-1] - w * w * (center - pivot)
    motions.append(motion_cells(**told, center_acceleration=a))
    for motion in motions:
        call = (body, motion, loads, row(pivot))
        parts = {
            w: number("RB_DRIVE_TORQUE", *call, w) for w in ("total", "motion", "weight", "loads", "power")
        }
        scale = 1e-11 * max(abs(v) for v in parts.values())
        assert number("RB_DRIVE_TORQUE", *call) == parts["total"]
        assert parts["total"] == pytest.approx(total, rel=1e-11, abs=scale)
        assert parts["motion"] == pytest.approx(moving, rel=1e-11, abs=scale)
        assert parts["loads"] == pytest.approx(-share, rel=1e-11, abs=scale)
        assert parts["weight"] == pytest.approx(total - moving + share, rel=1e-10, abs=scale)
        assert parts["power"] == pytest.approx(total * q[3], rel=1e-11, abs=scale)


@SEEDS
def test_drive_about_a_fixed_pivot_pays_for_energy(seed):
    """Property: torque times spin is the rate of kinetic energy plus that of lifting the weight."""
    c = Cloud(seed + 400, planar=True)
    motion = motion_cells(omega=c.omega[2], alpha=c.alpha[2], gravity="down", fixed_point=c.pivot)
    polar = float(c.about(c.pivot)[2, 2])
    lift = c.mass * 9.80665 * float(c.omega[2] * (c.center - c.pivot)[0])
    power = polar * float(c.omega[2] * c.alpha[2]) + lift
    found = number("RB_DRIVE_TORQUE", c.body, motion, "none", row(c.pivot), "power")
    assert found == pytest.approx(power, rel=1e-11, abs=1e-12)


@SEEDS
def test_motor_torque_keeps_the_books_of_power(seed):
    """First principles: power into the gear less power out is the loss, (1 - efficiency) of what goes in."""
    rng = np.random.default_rng(seed + 500)
    torque, speed = (float(v) for v in rng.normal(size=2) * [900, 3])
    ratio, efficiency = float(rng.uniform(2, 90) * rng.choice([-1, 1])), float(rng.uniform(0.4, 1.0))
    for w in (speed, -speed):
        motor = number("RB_MOTOR_TORQUE", torque, ratio, efficiency, OMITTED, w)
        at_motor, at_load = motor * ratio * w, torque * w
        incoming = at_motor if at_load > 0 else -at_load
        assert at_motor - at_load == pytest.approx((1 - efficiency) * incoming, rel=1e-12)
    driven = number("RB_MOTOR_TORQUE", torque, ratio, efficiency)
    assert driven == number("RB_MOTOR_TORQUE", torque, ratio, efficiency, OMITTED, torque)
    # an ideal gear: reflected inertia times the motor's angular acceleration is the ideal motor torque
    inertia = abs(torque) / 5.0
    alpha = number("RB_ANGULAR_ACCELERATION", torque, inertia)
    ideal = number("RB_MOTOR_TORQUE", torque, ratio, 1.0)
    reflected = number("RB_REFLECTED_INERTIA", inertia, ratio)
    assert number("RB_TORQUE", reflected, alpha * ratio) == pytest.approx(ideal, rel=1e-13)


def test_planar_tensor_refuses_a_spin_out_of_the_plane():
    said = refused("RB_MOMENT_SUM", 2.0, 1.0, row((1, 0, 0)), row((1, 0, 0)), 0.0, row((0, 0, 0)))
    assert "3 x 3" in said.reason
