"""Motion of points of a body, against sympy's own differentiation and published examples."""

from __future__ import annotations

from math import cos, hypot, pi, radians, sin

import numpy as np
import pytest
import sympy as sp
from printed_digits import agrees
from sympy.physics.mechanics import ReferenceFrame, dynamicsymbols

from rigidsheet.core.errors import InputError, PhysicsError
from rigidsheet.core.motion import (
    acceleration_at,
    acceleration_sliding,
    spin_sum,
    velocity_at,
    velocity_sliding,
)
from rigidsheet.core.spin_fit import instant_center, instant_center_two, omega_from

ZERO = np.zeros(3)
STATES = 40


def spin(omega: float) -> np.ndarray:
    return np.array([0.0, 0.0, omega])


def vec(*parts: float) -> np.ndarray:
    return np.array([*parts, *([0.0] * (3 - len(parts)))], dtype=float)


@pytest.fixture(scope="module")
def sliding_states() -> dict[str, np.ndarray]:
    """States of a point that slides on a turning, moving body; derivatives taken by sympy alone.

    The path of the point is written in the fixed frame as A(t) + R(t) s(t) and differentiated twice; only the
    spin comes from sympy.physics.mechanics.
    """
    t = dynamicsymbols._t
    base, body = ReferenceFrame("N"), ReferenceFrame("B")
    # Every coordinate is a quadratic in time with its own random coefficients.
    coefficients = sp.symbols("c0:27")
    quadratic = [
        coefficients[3 * i] + coefficients[3 * i + 1] * t + coefficients[3 * i + 2] * t**2 / 2
        for i in range(9)
    ]
    origin, slide, angles = (sp.Matrix(quadratic[3 * i : 3 * i + 3]) for i in range(3))
    body.orient_body_fixed(base, tuple(angles), "ZXY")
    to_base = base.dcm(body)
    path = origin + to_base * slide
    omega = body.ang_vel_in(base).to_matrix(base)
    wanted = {
        "velocity_a": origin.diff(t),
        "acceleration_a": origin.diff(t, 2),
        "omega": omega,
        "alpha": omega.diff(t),
        "arm": to_base * slide,
        "slide_velocity": to_base * slide.diff(t),
        "slide_acceleration": to_base * slide.diff(t, 2),
        "velocity": path.diff(t),
        "acceleration": path.diff(t, 2),
        "fixed_velocity": origin.diff(t) + to_base.diff(t) * slide,
        "fixed_acceleration": origin.diff(t, 2) + to_base.diff(t, 2) * slide,
    }
    rows = [list(matrix.subs(t, 0).doit()) for matrix in wanted.values()]
    evaluate = sp.lambdify([coefficients], rows, cse=True)
    random = np.random.default_rng(11)
    values = np.array([evaluate(random.uniform(-2, 2, 27)) for _ in range(STATES)], dtype=float)
    return dict(zip(wanted, values.swapaxes(0, 1), strict=True))


def test_velocity_and_acceleration_match_sympy_at_random_states(sliding_states):
    s = sliding_states
    np.testing.assert_allclose(
        velocity_at(s["velocity_a"], s["omega"], s["arm"]), s["fixed_velocity"], rtol=1e-11, atol=1e-11
    )
    parts = acceleration_at(s["acceleration_a"], s["omega"], s["alpha"], s["arm"])
    np.testing.assert_allclose(parts.total, s["fixed_acceleration"], rtol=1e-11, atol=1e-10)
    np.testing.assert_allclose(s["acceleration_a"] + parts.tangential + parts.centripetal, parts.total)


def test_sliding_point_matches_sympy_at_random_states(sliding_states):
    s = sliding_states
    velocity = velocity_sliding(s["velocity_a"], s["omega"], s["arm"], s["slide_velocity"])
    np.testing.assert_allclose(velocity, s["velocity"], rtol=1e-11, atol=1e-11)
    parts = acceleration_sliding(
        s["acceleration_a"], s["omega"], s["alpha"], s["arm"], s["slide_velocity"], s["slide_acceleration"]
    )
    np.testing.assert_allclose(parts.total, s["acceleration"], rtol=1e-11, atol=1e-10)
    # The Coriolis part is perpendicular to both the spin and the slide.
    for other in (s["omega"], s["slide_velocity"]):
        assert np.abs((parts.coriolis * other).sum(axis=1)).max() < 1e-9


def test_one_row_equals_the_same_row_of_a_column(sliding_states):
    s = sliding_states
    names = ("acceleration_a", "omega", "alpha", "arm", "slide_velocity", "slide_acceleration")
    whole = acceleration_sliding(*(s[name] for name in names))
    for row in (0, 7, STATES - 1):
        one = acceleration_sliding(*(s[name][row] for name in names))
        np.testing.assert_allclose(one.total, whole.total[row], rtol=1e-13, atol=1e-13)
        np.testing.assert_allclose(one.coriolis, whole.coriolis[row], rtol=1e-13, atol=1e-13)


def test_one_spin_serves_many_arms():
    arms = np.random.default_rng(2).normal(size=(5, 3))
    many = velocity_at(vec(1, 2, 3), vec(0.1, -0.4, 2.0), arms)
    np.testing.assert_allclose(many, vec(1, 2, 3) + np.cross(vec(0.1, -0.4, 2.0), arms))


def test_spin_sum_matches_sympy():
    """The spin of a body on a carrier, both turning about changing axes, by sympy.physics.mechanics."""
    t = dynamicsymbols._t
    c = sp.symbols("c0:18")
    q = [c[3 * i] + c[3 * i + 1] * t + c[3 * i + 2] * t**2 / 2 for i in range(6)]
    base, carrier, body = (ReferenceFrame(name) for name in "NAB")
    carrier.orient_body_fixed(base, q[:3], "XYZ")
    body.orient_body_fixed(carrier, q[3:], "ZXZ")
    omega_1 = carrier.ang_vel_in(base)
    omega_2 = body.ang_vel_in(carrier)
    vectors = (
        omega_1,
        omega_2,
        omega_1.dt(base),
        omega_2.dt(carrier),
        body.ang_vel_in(base),
        body.ang_vel_in(base).dt(base),
    )
    evaluate = sp.lambdify([c], [list(v.to_matrix(base).subs(t, 0).doit()) for v in vectors], cse=True)
    random = np.random.default_rng(4)
    for _ in range(15):
        w1, w2, a1, a2, omega, alpha = np.array(evaluate(random.uniform(-2, 2, 18)), dtype=float)
        found = spin_sum(w1, w2, a1, a2)
        np.testing.assert_allclose(found.omega, omega, rtol=1e-11, atol=1e-11)
        np.testing.assert_allclose(found.alpha, alpha, rtol=1e-10, atol=1e-10)


# Published examples. Origin "read": number read in a retyped copy of the book; "memory": answer from memory.


def test_rim_of_an_accelerating_disk():
    """W. G. McLean, E. W. Nelson, Schaum's Engineering Mechanics, Ex. 14.2 (read): v 0.785, a 2.5."""
    alpha = 300 * pi / 30 / 20
    omega = alpha * 2
    arm = vec(0.25)
    assert agrees(hypot(*velocity_at(ZERO, spin(omega), arm)[:2]), "0.785")
    total = acceleration_at(ZERO, spin(omega), spin(alpha), arm).total
    assert agrees(float(np.linalg.norm(total)), "2.50")


def test_top_of_a_rolling_wheel():
    """McLean, Nelson, Schaum's Engineering Mechanics, Ex. 14.20 (read): v 24, a 96.7, 7.13 deg."""
    radius, omega, alpha = 1.5, spin(-8), spin(4)
    center_velocity = velocity_at(ZERO, omega, vec(0, radius))
    center_acceleration = vec(-4 * radius)
    assert agrees(velocity_at(center_velocity, omega, vec(0, radius))[0], "24")
    total = acceleration_at(center_acceleration, omega, alpha, vec(0, radius)).total
    assert agrees(float(np.linalg.norm(total)), "96.7")
    assert agrees(np.degrees(np.arctan2(abs(total[0]), abs(total[1]))), "7.13")


def test_arm_on_a_turntable():
    """Meriam, Kraige, Dynamics, Sample Problem 7/1 (answers from memory)."""
    carrier, raising = vec(0, 0, 2 * pi), vec(4, 0, 0)
    tip = vec(0, 0.8 * cos(pi / 6), 0.8 * sin(pi / 6))
    whole = spin_sum(carrier, raising, ZERO, ZERO)
    assert agrees(whole.alpha[1], "25.1")
    velocity = velocity_at(ZERO, whole.omega, tip)
    for value, printed in zip(velocity, ("-4.35", "-1.60", "2.77"), strict=True):
        assert agrees(value, printed)
    total = acceleration_at(ZERO, whole.omega, whole.alpha, tip).total
    for value, printed in zip(total, ("20.1", "-38.4", "-6.40"), strict=True):
        assert agrees(value, printed)


def test_rotor_in_a_precessing_frame():
    """Meriam, Kraige, Dynamics, Sample Problem 7/2 (answers from memory), inches."""
    precession = 2 * pi * vec(0, cos(radians(30)), sin(radians(30)))
    whole = spin_sum(precession, vec(0, 0, 4 * pi), ZERO, ZERO)
    assert agrees(whole.alpha[0], "68.4")
    arm = vec(0, 5, 10)
    assert agrees(velocity_at(ZERO, whole.omega, arm)[0], "-24.1")
    total = acceleration_at(ZERO, whole.omega, whole.alpha, arm).total
    assert agrees(total[1], "-1063")
    assert agrees(total[2], "473")


def test_pin_in_a_slotted_arm():
    """Meriam, Kraige, Dynamics, Sample Problem 5/17 (answers from memory): -4 rad/s, -636, 900 mm/s."""
    pin, pivot_c = vec(225, -225), vec(450, -225)
    along = pin / np.linalg.norm(pin)
    dragged = velocity_sliding(ZERO, spin(2), pin, ZERO)
    # The pin moves square to CA: its x velocity is zero, which fixes the slide.
    slide = -dragged[0] / along[0]
    velocity = velocity_sliding(ZERO, spin(2), pin, slide * along)
    assert agrees(slide, "-636")
    assert agrees(abs(velocity[1]), "900")
    assert agrees(velocity[1] / (pin - pivot_c)[0], "-4")


def test_cylinder_between_two_bars():
    """Hibbeler, Gupta, Engineering Mechanics: Dynamics, Ex. 16.12 (read): 2.60 rad/s, 0.075 m/s."""
    found = instant_center_two(vec(0, 0), vec(0.25), vec(0, 0.25), vec(-0.4))
    assert agrees(found.omega, "2.60")
    middle = velocity_at(ZERO, spin(found.omega), vec(0, 0.125) - found.center)
    assert agrees(abs(middle[0]), "0.075")


def test_link_in_square_guides():
    """Hibbeler, Gupta, Engineering Mechanics: Dynamics, Ex. 16.6 (read): 14.1 rad/s, v_B 2."""
    a, b = vec(0, 0.2 * cos(pi / 4)), vec(0.2 * sin(pi / 4), 0)
    found = instant_center_two(a, vec(0, -2), b, vec(2))
    assert agrees(abs(found.omega), "14.1")
    np.testing.assert_allclose(found.center, vec(b[0], a[1]), atol=1e-12)


# Instant center and fitted spin: first principles.


def test_instant_center_has_no_velocity():
    random = np.random.default_rng(5)
    points, velocities = random.normal(size=(2, 30, 3)) * [1, 1, 0]
    omega = random.uniform(0.1, 5, 30) * random.choice([-1, 1], 30)
    centers = instant_center(points, velocities, omega)
    spins = np.zeros((30, 3))
    spins[:, 2] = omega
    np.testing.assert_allclose(velocities + np.cross(spins, centers - points), 0, atol=1e-12)
    for row in range(30):
        other = points[row] + random.normal(size=3) * [1, 1, 0]
        at_other = velocities[row] + np.cross(spins[row], other - points[row])
        found = instant_center_two(points[row], velocities[row], other, at_other)
        np.testing.assert_allclose(found.center, centers[row], atol=1e-9)
        assert found.omega == pytest.approx(omega[row], rel=1e-9)
        assert found.misfit < 1e-12


def test_both_velocities_square_to_the_line_are_solved_by_their_ratio():
    """Handbook case: the center divides AB in the ratio of the speeds."""
    found = instant_center_two(vec(1, 0), vec(0, 2), vec(4, 0), vec(0, 8))
    np.testing.assert_allclose(found.center, vec(0, 0), atol=1e-12)
    assert found.omega == pytest.approx(2)


def test_velocities_of_no_rigid_body_are_refused_with_the_amount():
    with pytest.raises(PhysicsError, match=r"apart at 0\.5 m/s, 25 % of the greater speed"):
        instant_center_two(vec(0, 0), vec(1.5), vec(1, 0), vec(2.0))
    with pytest.raises(PhysicsError, match="together"):
        instant_center_two(vec(0, 0), vec(2.0), vec(1, 0), vec(1.5))


def test_printed_rounding_of_velocities_is_not_called_stretching():
    omega, arm = 3.0, vec(0.7, 0.4)
    exact = velocity_at(vec(1.234, 0.567), spin(omega), arm)
    found = instant_center_two(ZERO, vec(1.23, 0.567), arm, np.array([float(f"{v:.3g}") for v in exact]))
    assert found.omega == pytest.approx(omega, rel=5e-3)
    assert found.misfit > 0


def test_translation_and_rest_have_no_instant_center():
    with pytest.raises(PhysicsError, match="only translates"):
        instant_center_two(vec(0, 0), vec(1, 2), vec(3, 0), vec(1, 2))
    with pytest.raises(PhysicsError, match="at rest"):
        instant_center_two(vec(0, 0), ZERO, vec(3, 0), ZERO)
    with pytest.raises(PhysicsError, match="`omega` must be other than zero"):
        instant_center(vec(0, 0), vec(1, 2), 0.0)
    with pytest.raises(InputError, match="another point than point A"):
        instant_center_two(vec(1, 1), vec(1, 2), vec(1, 1), vec(1, 2))


@pytest.mark.parametrize("seed", range(6))
def test_fitted_spin_matches_a_plain_least_squares_solution(seed):
    """numpy.linalg.lstsq on the stacked equations v_i = v_c + omega x r_i, noise included."""
    random = np.random.default_rng(seed)
    points = random.normal(size=(7, 3)) * [1, 0.3, 0.05] + [5, -2, 1]
    omega, drift = random.normal(size=(2, 3))
    velocities = drift + np.cross(omega, points) + 1e-2 * random.normal(size=(7, 3))
    rows = [np.hstack([np.eye(3), [[0, z, -y], [-z, 0, x], [y, -x, 0]]]) for x, y, z in points]
    expected, *_ = np.linalg.lstsq(np.vstack(rows), velocities.ravel(), rcond=None)
    fit = omega_from(points, velocities)
    np.testing.assert_allclose(fit.omega, expected[3:], rtol=1e-8, atol=1e-9)
    left = velocities - (expected[:3] + np.cross(expected[3:], points))
    np.testing.assert_allclose(fit.residuals, left, atol=1e-9)
    assert fit.rms == pytest.approx(np.sqrt(np.mean(np.sum(left**2, axis=1))))
    assert fit.largest == pytest.approx(np.linalg.norm(left, axis=1).max())


def test_fitted_spin_is_exact_for_a_rigid_body_and_flags_a_stray_point():
    random = np.random.default_rng(8)
    points = random.normal(size=(6, 3)) + 100.0
    omega = vec(0.3, -2.0, 1.1)
    velocities = vec(4, 5, 6) + np.cross(omega, points - points[0])
    fit = omega_from(points, velocities)
    np.testing.assert_allclose(fit.omega, omega, rtol=1e-12)
    assert fit.rigid
    assert fit.misfit < 1e-13
    velocities[4] += vec(1.0, 0, 0)
    stray = omega_from(points, velocities)
    assert not stray.rigid
    assert stray.worst == 4


def test_planar_fit_takes_two_points():
    points = np.array([vec(0, 0), vec(2, 1)])
    velocities = np.array([vec(1, 1), vec(1 - 3.0, 1 + 6.0)])
    np.testing.assert_allclose(omega_from(points, velocities, planar=True).omega, spin(3), atol=1e-12)


def test_points_on_a_line_leave_the_spin_about_it_open():
    points = np.outer([0, 1, 2, 5], [1.0, 1.0, 0.0])
    with pytest.raises(PhysicsError, match=r"on one line, along \(0\.707, 0\.707, 0\)"):
        omega_from(points, np.cross(vec(1, 2, 3), points))
    with pytest.raises(PhysicsError, match="in one place"):
        omega_from(np.ones((4, 3)), np.zeros((4, 3)))
    with pytest.raises(InputError, match="at least 3 points in space"):
        omega_from(points[:2], points[:2])
    with pytest.raises(InputError, match="`velocities` must be as many rows"):
        omega_from(points, points[:3])
