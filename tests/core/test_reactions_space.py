"""Reactions in space, against particles, an integrated top, plain numpy and statics handbooks."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import solve_ivp
from scipy.spatial.transform import Rotation

from rigidsheet.core.body import RigidBody
from rigidsheet.core.reactions import SolvedReactions, solve_reactions
from rigidsheet.core.states import Loads, Motion
from rigidsheet.core.supports import Hold, planar_support, spatial_support

ZERO = np.zeros(3)
AXES = tuple(np.eye(3))
DOWN = np.array([0.0, 0.0, -9.81])
AT_REST = Motion(ZERO, ZERO, ZERO)


def solve(
    body: RigidBody,
    motion: Motion,
    holds: tuple[Hold, ...],
    acting: Loads | None = None,
    gravity: object = DOWN,
) -> SolvedReactions:
    return solve_reactions(
        body, motion, holds, loads=acting or Loads(), gravity=np.asarray(gravity), planar=False
    )


def values(found: SolvedReactions) -> np.ndarray:
    return np.array([reaction.value for reaction in found.reactions])


def random_body(random: np.random.Generator) -> RigidBody:
    """A body of particles, so that its tensor can belong to a body."""
    masses = random.uniform(0.2, 2.0, 6)
    points = random.normal(size=(6, 3))
    center = masses @ points / masses.sum()
    r = points - center
    tensor = np.einsum("i,ij,ij->", masses, r, r) * np.eye(3) - np.einsum("i,ij,ik->jk", masses, r, r)
    return RigidBody(float(masses.sum()), center, tensor)


def random_holds(random: np.random.Generator) -> tuple[Hold, ...]:
    """A ball and three links in random places: six unknowns of a rather well held body."""
    holds = spatial_support("ball", "ball", random.normal(size=3))
    for i in range(3):
        points = random.normal(size=(2, 3)) * 2
        holds += spatial_support(f"link {i}", "link", points[0], to=points[1])
    return holds


@pytest.mark.parametrize("seed", range(15))
def test_reactions_match_plain_newton_and_euler_about_the_origin(seed):
    """numpy.linalg.solve on sums about the sheet's origin, with d(H)/dt written out; unscaled, unjudged."""
    random = np.random.default_rng(seed)
    body, holds = random_body(random), random_holds(random)
    omega, alpha, acceleration, point = random.normal(size=(4, 3))
    forces, points, couples = random.normal(size=(3, 2, 3)) * 10
    r = body.center - point
    center = acceleration + np.cross(alpha, r) + np.cross(omega, np.cross(omega, r))
    spin = body.inertia @ alpha + np.cross(omega, body.inertia @ omega)
    force = body.mass * (center - DOWN) - forces.sum(axis=0)
    moment = spin + np.cross(body.center, body.mass * (center - DOWN))
    moment -= np.cross(points, forces).sum(axis=0) + couples.sum(axis=0)
    columns = [np.hstack([h.direction, np.cross(h.point, h.direction)]) for h in holds]
    expected = np.linalg.solve(np.array(columns).T, np.hstack([force, moment]))
    motion = Motion(omega, alpha, acceleration, point)
    found = solve(body, motion, holds, Loads(forces, points, couples))
    np.testing.assert_allclose(values(found), expected, atol=1e-10 * np.abs(expected).max())
    np.testing.assert_allclose(found.acceleration, center, atol=1e-12)
    assert found.residual.relative < 1e-13


def test_ball_joint_of_an_integrated_top():
    """scipy integrates attitude and angular momentum of a heavy top about its fixed point; the force is
    m a_G - weight, a_G from differences of the path of the mass center.
    """
    mass, arm = 3.0, np.array([0.05, -0.02, 0.4])
    about_center = np.array([[0.09, 0.01, 0.0], [0.01, 0.07, -0.02], [0.0, -0.02, 0.05]])
    about_pin = about_center + mass * (arm @ arm * np.eye(3) - np.outer(arm, arm))

    def spin(state: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        turn = Rotation.from_quat(state[:4]).as_matrix()
        return turn, turn @ np.linalg.solve(about_pin, turn.T @ state[4:])

    def rate(_: float, state: np.ndarray) -> np.ndarray:
        turn, (wx, wy, wz) = spin(state)
        x, y, z, w = state[:4]
        quaternion = 0.5 * np.array(
            [wx * w + wy * z - wz * y, wy * w + wz * x - wx * z, wz * w + wx * y - wy * x, -wx * x - wy * y - wz * z]
        )  # fmt: skip
        return np.hstack([quaternion, np.cross(turn @ arm, mass * DOWN)])

    first = Rotation.from_euler("xyz", [0.5, -0.3, 0.2])
    momentum = first.as_matrix() @ about_pin @ np.array([1.0, -2.0, 14.0])
    start = np.hstack([first.as_quat(), momentum])
    run = solve_ivp(rate, (0, 1.2), start, method="DOP853", rtol=1e-12, atol=1e-13, dense_output=True)
    pin = np.array([0.3, 1.0, -0.7])
    holds = spatial_support("pin", "ball", pin)
    step = 2e-3
    for time in np.linspace(0.1, 1.1, 7):
        states = run.sol(time + step * np.arange(-3, 4)).T
        weights = np.array([2, -27, 270, -490, 270, -27, 2]) / (180 * step**2)
        path = np.array([spin(state)[0] @ arm for state in states])
        expected = mass * (weights @ path - DOWN)
        turn, omega = spin(states[3])
        body = RigidBody(mass, pin + turn @ arm, turn @ about_center @ turn.T)
        found = solve(body, Motion(omega, ZERO, ZERO, pin, AXES), holds)
        scale = np.linalg.norm(expected)
        np.testing.assert_allclose(found.force_on_body("pin"), expected, atol=2e-5 * scale)
        faster = (spin(states[4])[1] - spin(states[2])[1]) / (2 * step)
        np.testing.assert_allclose(found.alpha, faster, atol=3e-4 * np.linalg.norm(faster))


def test_gate_on_two_hinges():
    """Handbook statics of a gate: upper and lower hinge carry W b / h across, the lower one all the weight."""
    width, height, weight = 1.8, 1.2, 400.0
    body = RigidBody(weight / 9.81, np.array([width / 2, 0, 0.6]), np.eye(3))
    holds = spatial_support("lower", "thrust bearing", ZERO, direction=(0, 0, 1))
    holds += spatial_support("upper", "bearing", (0, 0, height), direction=(0, 0, 1))
    holds += spatial_support("closer", "drive", ZERO, direction=(0, 0, 1))
    found = solve(body, AT_REST, holds)
    across = weight * width / 2 / height
    assert found.value("lower", "fz") == pytest.approx(weight)
    assert found.value("lower", "fx") == pytest.approx(across)
    assert found.value("upper", "fx") == pytest.approx(-across)
    assert found.value("closer", "torque") == pytest.approx(0, abs=1e-9)


def test_rotor_with_a_static_and_a_couple_unbalance():
    """Handbook of balancing: U omega^2 shared by the arms, and (Ixz) omega^2 / L in opposite directions."""
    length, omega, mass, offset, product = 0.8, 150.0, 12.0, 2e-4, 3e-4
    inertia = np.diag([0.4, 0.4, 0.1])
    inertia[0, 2] = inertia[2, 0] = -product
    body = RigidBody(mass, np.array([offset, 0, 0.3]), inertia)
    holds = spatial_support("A", "thrust bearing", ZERO, direction=(0, 0, 1))
    holds += spatial_support("B", "bearing", (0, 0, length), direction=(0, 0, 1))
    motion = Motion(omega * AXES[2], ZERO, ZERO, ZERO, (AXES[2],))
    found = solve(body, motion, holds, gravity=ZERO)
    unbalance = mass * offset * omega**2
    # The body is thrown along +x, so the bearings push it along -x; the couple tilts about y.
    at_b = -(unbalance * 0.3 + product * omega**2) / length
    assert found.value("B", "fx") == pytest.approx(at_b)
    assert found.value("A", "fx") == pytest.approx(-unbalance - at_b)
    assert found.alpha == pytest.approx((0, 0, 0), abs=1e-9)


def test_skew_disk_on_a_shaft():
    """Handbook case: a thin disk skewed by b on its shaft loads bearings L apart by
    m r^2 omega^2 sin(2b) / (8 L).
    """
    mass, radius, skew, omega, length = 5.0, 0.2, np.radians(8), 100.0, 0.5
    turn = Rotation.from_rotvec([0, skew, 0]).as_matrix()
    inertia = turn @ np.diag([1, 1, 2]) @ turn.T * mass * radius**2 / 4
    body = RigidBody(mass, np.array([0, 0, length / 2]), inertia)
    holds = spatial_support("A", "thrust bearing", ZERO, direction=(0, 0, 1))
    holds += spatial_support("B", "bearing", (0, 0, length), direction=(0, 0, 1))
    found = solve(body, Motion(omega * AXES[2], ZERO, ZERO, ZERO, (AXES[2],)), holds, gravity=ZERO)
    load = mass * radius**2 * omega**2 * np.sin(2 * skew) / (8 * length)
    assert abs(found.value("B", "fx")) == pytest.approx(load, rel=1e-12)
    assert found.value("A", "fx") == pytest.approx(-found.value("B", "fx"))


def test_hinge_with_unknown_alpha_equals_ball_and_bearing():
    """A door let go: one hinge with moments, or a ball and a bearing on the same line, give one motion."""
    random = np.random.default_rng(3)
    body = random_body(random)
    axis = np.array([1.0, 2.0, -0.5]) / np.linalg.norm([1, 2, -0.5])
    start = random.normal(size=3)
    motion = Motion(2.5 * axis, ZERO, ZERO, start, (axis,))
    one = solve(body, motion, spatial_support("hinge", "hinge", start, direction=axis))
    two = spatial_support("ball", "ball", start)
    two += spatial_support("bearing", "bearing", start + 0.9 * axis, direction=axis)
    other = solve(body, motion, two)
    np.testing.assert_allclose(one.alpha, other.alpha, rtol=1e-11)
    total = np.add(other.force_on_body("ball"), other.force_on_body("bearing"))
    np.testing.assert_allclose(one.force_on_body("hinge"), total, rtol=1e-10)
    # First principles: alpha about the axis is the moment of the weight over the axis inertia.
    arm = body.center - start
    polar = axis @ body.inertia @ axis + body.mass * (arm @ arm - (arm @ axis) ** 2)
    assert np.dot(one.alpha, axis) == pytest.approx(axis @ np.cross(arm, body.mass * DOWN) / polar)


def test_turned_components_give_the_same_vector():
    """A fixed support in turned axes: other components, the same force and moment."""
    body = random_body(np.random.default_rng(6))
    turn = Rotation.from_euler("zyx", [0.4, -1.0, 0.7]).as_matrix()
    parts = ("fx", "fy", "fz", "mx", "my", "mz")
    plain = solve(body, AT_REST, spatial_support("wall", "fixed", ZERO))
    turned = solve(body, AT_REST, spatial_support("wall", "held", ZERO, components=parts, axes=turn))
    np.testing.assert_allclose(turn @ values(turned)[:3], values(plain)[:3], atol=1e-12)
    np.testing.assert_allclose(turn @ values(turned)[3:], values(plain)[3:], atol=1e-12)


def test_tripod_of_rollers_and_cables():
    """Three legs under a plate carry it by the lever rule; a cable frame shares by direction cosines."""
    body = RigidBody(30.0, np.array([0.4, 0.3, 0.0]), np.eye(3))
    holds: tuple[Hold, ...] = ()
    for name, place in (("A", (0, 0, 0)), ("B", (1, 0, 0)), ("C", (0, 1, 0))):
        holds += spatial_support(name, "roller", place, direction=(0, 0, 1))
    holds += spatial_support("guide", "held", ZERO, components=("fx", "fy", "mz"))
    found = solve(body, AT_REST, holds)
    weight = 30 * 9.81
    assert [found.value(n, "force") for n in "ABC"] == pytest.approx(
        [0.3 * weight, 0.4 * weight, 0.3 * weight]
    )
    height = 2.0
    ropes: tuple[Hold, ...] = ()
    for name, angle in (("P", 0), ("Q", 120), ("R", 240)):
        to = (np.cos(np.radians(angle)), np.sin(np.radians(angle)), height)
        ropes += spatial_support(name, "cable", ZERO, to=to)
    ropes += spatial_support("stop", "held", ZERO, components=("mx", "my", "mz"))
    hung = solve(RigidBody(30.0, ZERO, np.eye(3)), AT_REST, ropes)
    tension = weight / 3 * np.hypot(1, height) / height
    assert [hung.value(n, "tension") for n in "PQR"] == pytest.approx([tension] * 3)


part = st.floats(-2, 2, allow_nan=False)
triples = st.tuples(part, part, part).map(np.array)


@settings(max_examples=50, deadline=None)
@given(st.integers(0, 10_000), triples, triples, triples, triples, triples)
def test_power_of_all_forces_is_the_rate_of_kinetic_energy(seed, omega, alpha, velocity, acceleration, force):
    """First principles: the sum of F.v and M.omega equals m v.a + omega.(I alpha), in any spatial motion."""
    random = np.random.default_rng(seed)
    body, holds, at = random_body(random), random_holds(random), random.normal(size=3)
    acting = Loads(force[None], at[None], force[None, ::-1])
    found = solve(body, Motion(omega, alpha, acceleration), holds, acting)

    def speed(point: object) -> np.ndarray:
        return velocity + np.cross(omega, np.asarray(point) - body.center)

    powers = [float(np.dot(r.vector, speed(r.hold.point))) for r in found.reactions]
    powers += [float(np.dot(found.weight, velocity)), float(force @ speed(at)), float(force[::-1] @ omega)]
    rate = body.mass * float(velocity @ acceleration) + float(omega @ body.inertia @ alpha)
    assert sum(powers) == pytest.approx(rate, abs=1e-10 * (1 + sum(map(abs, powers))))


@settings(max_examples=40, deadline=None)
@given(st.integers(0, 10_000), triples)
def test_scale_and_origin_change_no_reaction(seed, shift):
    """Millimetres and tonnes (N, mm, t, s), and another origin of the sheet."""
    random = np.random.default_rng(seed)
    body, holds = random_body(random), random_holds(random)
    omega, alpha, acceleration, force, at = random.normal(size=(5, 3))

    def moved(unit: float, mass: float, by: np.ndarray) -> SolvedReactions:
        other = RigidBody(body.mass * mass, unit * (body.center + by), body.inertia * mass * unit**2)
        rest = tuple(
            Hold(h.support, h.component, h.direction, tuple(unit * (np.array(h.point) + by))) for h in holds
        )
        motion = Motion(omega, alpha, unit * acceleration)
        acting = Loads(mass * unit * force[None], unit * (at + by)[None])
        return solve(other, motion, rest, acting, unit * DOWN)

    plain = moved(1.0, 1.0, ZERO)
    slack = 1e-13 * plain.condition**2 * (1 + np.abs(values(plain)).max())
    for unit, mass, by in ((1e3, 1e-3, ZERO), (1.0, 1.0, shift), (1e-3, 1e3, shift)):
        np.testing.assert_allclose(values(moved(unit, mass, by)), values(plain), atol=slack)
    assert moved(1e3, 1e-3, ZERO).condition == pytest.approx(plain.condition, rel=1e-6)


def test_planar_case_in_space_gives_the_planar_reactions():
    """The same body in both solvers: pin and roller, a flat motion; two assemblies of one balance."""
    body = RigidBody(8.0, np.array([0.7, 0.4, 0.0]), np.diag([0.3, 0.4, 0.7]))
    motion = Motion(np.array([0, 0, 2.0]), np.array([0, 0, -3.0]), np.array([0.4, 1.0, 0]), ZERO)
    flat = planar_support("A", "pin", ZERO) + planar_support("B", "slot", (1.2, 0.1, 0), angle=1.1)
    space = spatial_support("A", "held", ZERO, components=("fx", "fy", "fz", "mx", "my"))
    space += spatial_support("B", "slot", (1.2, 0.1, 0), direction=(np.cos(1.1), np.sin(1.1), 0))
    gravity = np.array([0, -9.81, 0])
    plane = solve_reactions(body, motion, flat, loads=Loads(), gravity=gravity, planar=True)
    solid = solve(body, motion, space, gravity=gravity)
    for support, component in (("A", "fx"), ("A", "fy"), ("B", "force")):
        assert solid.value(support, component) == pytest.approx(plane.value(support, component), rel=1e-12)
