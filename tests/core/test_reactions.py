"""Reactions in the plane: published examples, an integrated pendulum, sympy and plain numpy."""

from __future__ import annotations

from math import cos, hypot, pi, radians, sin

import numpy as np
import pytest
import sympy as sp
from planar_problem import AT_REST, PIN_O, UP, ZERO, Z, flat_body, loads, solve, turning, vec
from printed_digits import agrees
from scipy.integrate import solve_ivp
from sympy.physics.mechanics import KanesMethod, Point, ReferenceFrame, dynamicsymbols, inertia
from sympy.physics.mechanics import RigidBody as SympyBody

from rigidsheet.core.body import RigidBody
from rigidsheet.core.states import Motion
from rigidsheet.core.supports import planar_support

# Published examples. Origin "read": number read in a retyped copy of the book.


def test_falling_rod_with_a_couple():
    """Hibbeler, Gupta, Engineering Mechanics: Dynamics, Ex. 17.10 (read): 750 N, 19.05 N, 5.91 rad/s^2."""
    body = flat_body(20, 1.5, 0, 20 * 3**2 / 12)
    found = solve(body, turning(-5, None, ZERO), PIN_O, loads(couple=-60), 9.81)
    assert agrees(-found.value("O", "fx"), "750")
    assert agrees(found.value("O", "fy"), "19.05")
    assert agrees(-found.alpha[2], "5.91")


def test_unbalanced_flywheel():
    """Hibbeler, Gupta, Engineering Mechanics: Dynamics, Ex. 17.12 (read): 1600 N, 223.9 N, 10.66 rad/s^2."""
    body = flat_body(50, 0.5, 0, 18)
    found = solve(body, turning(-8, None, ZERO), PIN_O, loads(couple=-80), 9.81)
    assert agrees(-found.value("O", "fx"), "1600")
    assert agrees(found.value("O", "fy"), "223.9")
    assert agrees(-found.alpha[2], "10.66")


def test_rod_and_sphere_pendulum():
    """McLean, Nelson, Schaum's Engineering Mechanics, Ex. 16.49 (read): 13.3 rad/s^2, 5184 N, -96.3 N.

    The book counts the second component along the motion, which is downward here.
    """
    mass = 120.0
    center = (20 * 0.3 + 100 * 0.75) / mass
    polar = 20 * 0.6**2 / 12 + 20 * (center - 0.3) ** 2
    polar += 0.4 * 100 * 0.15**2 + 100 * (0.75 - center) ** 2
    found = solve(flat_body(mass, center, 0, polar), turning(-8, None, ZERO), PIN_O, loads(), 9.8)
    assert agrees(-found.alpha[2], "13.3")
    assert agrees(hypot(found.value("O", "fx"), 0), "5184")
    assert agrees(-found.value("O", "fy"), "-96.3")


def test_released_rod_at_45_degrees():
    """McLean, Nelson, Schaum's Engineering Mechanics, Ex. 17.19 (read): axial 177 lb."""
    mass, length, angle = 100 / 32.2, 4.0, -pi / 4
    omega = -np.sqrt(3 * 32.2 * sin(pi / 4) / length)
    body = flat_body(mass, 2 * cos(angle), 2 * sin(angle), mass * length**2 / 12)
    found = solve(body, turning(float(omega), None, ZERO), PIN_O, loads(), 32.2)
    along = vec(cos(angle), sin(angle))
    assert agrees(-float(np.dot(found.force_on_body("O"), along)), "177")


def test_car_that_speeds_up():
    """McLean, Nelson, Schaum's Engineering Mechanics, Ex. 16.36 (read): front 1809, rear 1576 lb."""
    acceleration = 60 * 5280 / 3600 / 13.8
    body = flat_body(3385 / 32.2, 0, 31, 1.0)
    holds = planar_support("front", "roller", vec(46), angle=UP) + planar_support("rear", "pin", vec(-66))
    motion = Motion(ZERO, ZERO, vec(acceleration))
    found = solve(body, motion, holds, loads(), 32.2)
    assert agrees(found.value("front", "force"), "1809")
    assert agrees(found.value("rear", "fy"), "1576")


def test_plate_on_two_parallel_links():
    """Hibbeler, Gupta, Engineering Mechanics: Dynamics, Ex. 17.8 (read): 1.32 kN each, 4.90 m/s^2.

    The links turn at 30 deg from the horizontal wall line; the plate only translates and its tangential
    acceleration is solved as a free slide.
    """
    normal = vec(sin(radians(30)), cos(radians(30)))
    along = vec(cos(radians(30)), -sin(radians(30)))
    # The book gives equal shares: the mass center midway between the pins.
    body = flat_body(100, 0.5, 0, 5.0)
    holds = planar_support("A", "link", vec(0, 0), to=0.5 * normal)
    holds += planar_support("B", "link", vec(1, 0), to=vec(1, 0) + 0.5 * normal)
    motion = Motion(ZERO, ZERO, 6.0**2 * 0.5 * normal, None, (), along)
    found = solve(body, motion, holds, loads(), 9.81)
    assert agrees(found.value("A", "tension") / 1000, "1.32")
    assert agrees(found.value("B", "tension") / 1000, "1.32")
    assert agrees(found.rates[0], "4.90")


def test_forearm():
    """OpenStax, University Physics Volume 1, Example 12.4 (read): muscle 433.3 lb, elbow -383.3 lb."""
    body = flat_body(1e-9, 0, 0, 1e-9)
    holds = planar_support("elbow", "pin", ZERO) + planar_support("muscle", "cable", vec(1.5), angle=UP)
    found = solve(body, AT_REST, holds, loads((vec(0, -50.0), vec(13))), 0.0)
    assert agrees(found.value("muscle", "tension"), "433.3")
    assert agrees(found.value("elbow", "fy"), "-383.3")


def test_ladder_on_a_smooth_wall():
    """OpenStax, University Physics Volume 1, section 12.2 problem (read): normal 784 N, friction 132.8 N."""
    angle = np.arccos(2.0 / 6.0)
    along = vec(cos(angle), sin(angle))
    body = RigidBody(10.0, 2.0 * along, np.eye(3))
    holds = planar_support("base", "pin", ZERO) + planar_support("wall", "roller", 6 * along, angle=pi)
    found = solve(body, AT_REST, holds, loads((vec(0, -70 * 9.8), 3 * along)), 9.8)
    assert agrees(found.value("base", "fy"), "784")
    assert agrees(found.value("base", "fx"), "132.8")


def test_frame_with_pin_and_roller():
    """Baker, Haynes, Engineering Statics: Open and Interactive, Ch. 5 "Pin and Roller" (read), lb and ft."""
    body = flat_body(1e-9, 0, 0, 1e-9)
    holds = planar_support("A", "pin", ZERO)
    holds += planar_support("B", "roller", vec(-7, 3), angle=radians(30))
    found = solve(body, AT_REST, holds, loads((vec(0, -250.0), vec(-4, 0)), couple=500), 0.0)
    assert agrees(found.value("B", "force"), "246.0")
    assert agrees(-found.value("A", "fx"), "213.0")
    assert agrees(found.value("A", "fy"), "127.0")
    assert agrees(hypot(*found.force_on_body("A")[:2]), "248.0")


# Independent derivations.


def test_pin_of_an_integrated_pendulum_with_drag():
    """scipy integrates the angle; the pin force is m a_G - weight, a_G differenced along the path."""
    mass, radius, polar, g = 7.0, 0.6, 1.9, 9.81
    drag = 0.8  # couple against the spin, N m s

    def rate(_: float, state: np.ndarray) -> list[float]:
        angle, omega = state
        return [omega, (-drag * omega - mass * g * radius * cos(angle)) / (polar + mass * radius**2)]

    run = solve_ivp(rate, (0, 3), [0.9, -1.0], rtol=1e-12, atol=1e-12, dense_output=True)
    step = 2e-3
    for time in np.linspace(0.2, 2.8, 9):
        path = [
            radius * np.array([np.cos(a), np.sin(a)])
            for a in run.sol(time + step * np.array([-2, -1, 0, 1, 2]))[0]
        ]
        weights = np.array([-1, 16, -30, 16, -1]) / (12 * step**2)
        expected = mass * (weights @ np.array(path)) + [0, mass * g]
        angle, omega = run.sol(time)
        body = flat_body(mass, radius * cos(angle), radius * sin(angle), polar)
        found = solve(body, turning(omega, None, ZERO), PIN_O, loads(couple=-drag * omega), g)
        np.testing.assert_allclose(found.force_on_body("O")[:2], expected, atol=2e-6 * mass * g)
        assert found.alpha[2] == pytest.approx(rate(0, np.array([angle, omega]))[1], rel=1e-10)


def test_pin_on_a_moving_carriage_matches_kane():
    """sympy's KanesMethod with auxiliary speeds brings the pin's forces into evidence."""
    t = dynamicsymbols._t
    q, u, px, py = dynamicsymbols("q u px py")
    ux, uy, rx, ry = dynamicsymbols("ux uy rx ry")
    m, polar, r, g, couple, ax, ay, qdd = sp.symbols("m I r g C ax ay qdd")
    base = ReferenceFrame("N")
    arm = base.orientnew("A", "Axis", (q, base.z))
    arm.set_ang_vel(base, u * base.z)
    origin, pin = Point("O"), Point("B")
    origin.set_vel(base, 0)
    pin.set_vel(base, (px + ux) * base.x + (py + uy) * base.y)
    center = pin.locatenew("G", r * arm.x)
    center.v2pt_theory(pin, base, arm)
    body = SympyBody("body", center, arm, m, (inertia(arm, 0, 0, polar), center))
    forces = [(center, -m * g * base.y), (arm, couple * base.z), (pin, rx * base.x + ry * base.y)]
    kane = KanesMethod(base, [q], [u], [q.diff(t) - u], u_auxiliary=[ux, uy])
    active, inertial = kane.kanes_equations([body], forces)
    swap = {ux.diff(t): 0, uy.diff(t): 0, px.diff(t): ax, py.diff(t): ay, u.diff(t): qdd, ux: 0, uy: 0}
    motion_equation = (active + inertial)[0].subs(swap)
    auxiliary = kane.auxiliary_eqs.subs(swap)
    solution = sp.solve([motion_equation, *auxiliary], [qdd, rx, ry], dict=True)[0]
    symbols = [q, u, m, polar, r, g, couple, ax, ay]
    evaluate = sp.lambdify(symbols, [solution[qdd], solution[rx], solution[ry]])
    random = np.random.default_rng(21)
    for _ in range(25):
        angle, omega, mass, i, radius, gravity, torque, pivot_x, pivot_y = random.uniform(0.2, 3, 9)
        expected = evaluate(angle, omega, mass, i, radius, gravity, torque, pivot_x, pivot_y)
        place = vec(*random.normal(size=2))
        body_here = flat_body(mass, place[0] + radius * cos(angle), place[1] + radius * sin(angle), i)
        motion = turning(omega, None, place, vec(pivot_x, pivot_y))
        found = solve(body_here, motion, planar_support("B", "pin", place), loads(couple=torque), gravity)
        values = [found.alpha[2], found.value("B", "fx"), found.value("B", "fy")]
        np.testing.assert_allclose(values, expected, rtol=1e-9, atol=1e-9)


@pytest.mark.parametrize("seed", range(10))
def test_three_links_match_a_plain_solution(seed):
    """numpy.linalg.solve on force and moment sums about the sheet's origin, written out here."""
    random = np.random.default_rng(seed)
    points, ends = random.normal(size=(2, 3, 2))
    along = (ends - points) / np.linalg.norm(ends - points, axis=1)[:, None]
    mass, (gx, gy), polar = 3.0, random.normal(size=2), 0.8
    (ax, ay), alpha = random.normal(size=2), random.normal()
    force, at = random.normal(size=(2, 2))
    matrix = np.vstack([along.T, points[:, 0] * along[:, 1] - points[:, 1] * along[:, 0]])
    wanted = np.array(
        [
            mass * ax - force[0],
            mass * (ay + 9.81) - force[1],
            polar * alpha + mass * (gx * (ay + 9.81) - gy * ax) - (at[0] * force[1] - at[1] * force[0]),
        ]
    )
    holds = sum((planar_support(f"L{i}", "link", vec(*points[i]), to=vec(*ends[i])) for i in range(3)), ())
    motion = Motion(ZERO, alpha * Z, vec(ax, ay))
    found = solve(flat_body(mass, gx, gy, polar), motion, holds, loads((vec(*force), vec(*at))), 9.81)
    expected = np.linalg.solve(matrix, wanted)
    scale = np.abs(expected).max()
    np.testing.assert_allclose([r.value for r in found.reactions], expected, atol=1e-11 * scale)
    assert found.residual.relative < 1e-14


def test_fixed_support_and_drive_take_the_moment():
    """Handbook cantilever: force, weight and end moment w L^2 / 2 + P L + C."""
    body = flat_body(12.0, 1.0, 0, 4.0)
    acting = loads((vec(0, -100.0), vec(2)), couple=-30)
    wall = solve(body, AT_REST, planar_support("W", "fixed", ZERO), acting, 9.81)
    moment = 12 * 9.81 * 1 + 100 * 2 + 30
    assert wall.value("W", "mz") == pytest.approx(moment)
    assert wall.value("W", "fy") == pytest.approx(12 * 9.81 + 100)
    driven = solve(body, AT_REST, PIN_O + planar_support("D", "drive", ZERO), acting, 9.81)
    assert driven.value("D", "mz") == pytest.approx(moment)
