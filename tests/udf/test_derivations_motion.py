"""Motion through the cells: against rotation matrices differentiated by sympy, at random states."""

from __future__ import annotations

import re
from functools import cache
from types import SimpleNamespace

import numpy as np
import pytest
import sympy as sp
from cell_calls import OMITTED, array, ask, column, number, refused, row, rows, vector
from scipy.spatial.transform import Rotation
from sympy.physics.mechanics import ReferenceFrame, dynamicsymbols

SEEDS = pytest.mark.parametrize("seed", range(8))
T = dynamicsymbols._t
NAMES = "q1 q2 q3 a1 a2 a3 s1 s2 s3"
CLOSE = {"rtol": 1e-12, "atol": 1e-11}


@cache
def moving_slider():
    """Return a function from a random state to positions, spins, velocities and accelerations.

    A body turns by three angles and its point A moves; a slider moves along the body. Positions are written
    with the direction cosine matrix and differentiated in the fixed frame, so no rule for turning axes
    (omega x r, Coriolis) enters; only the spin itself is taken from sympy's frames.
    """
    q = dynamicsymbols(NAMES)
    first, second = [sp.diff(x, T) for x in q], [sp.diff(x, T, 2) for x in q]
    fixed = ReferenceFrame("N")
    body = fixed.orientnew("B", "Body", q[:3], "ZXY")
    turn = body.dcm(fixed).T
    omega = body.ang_vel_in(fixed).to_matrix(fixed)
    slider = sp.Matrix(q[6:])
    placed = sp.Matrix(q[3:6]) + turn * slider
    out = (
        turn,
        omega,
        omega.diff(T),
        turn * slider,
        placed.diff(T),
        placed.diff(T, 2),
        turn * slider.diff(T),
        turn * slider.diff(T, 2),
    )
    names = sp.symbols([f"{n}_{k}" for k in range(3) for n in NAMES.split()])
    swap = dict(zip([*second, *first, *q], [*names[18:], *names[9:18], *names[:9]], strict=True))
    plain = [
        part.subs({k: swap[k] for k in second}).subs({k: swap[k] for k in first}).subs(swap) for part in out
    ]
    return sp.lambdify([names], plain, cse=True)


def state(seed):
    """Return one random state of the slider, in SI."""
    q = np.random.default_rng(seed).normal(size=27)
    turn, *parts = (np.array(p, dtype=float) for p in moving_slider()(q))
    names = ("omega", "alpha", "arm", "v", "a", "slide_v", "slide_a")
    found = {n: p.ravel() for n, p in zip(names, parts, strict=True)}
    return SimpleNamespace(turn=turn, va=q[12:15], aa=q[21:24], **found)


@SEEDS
def test_sliding_point_equals_the_derivatives_of_its_position(seed):
    """Reference: first and second derivative of A(t) + R(t) s(t), by sympy."""
    s = state(seed)
    spin, bend, arm = row(s.omega), row(s.alpha), row(s.arm)
    v = vector("RB_VELOCITY_SLIDING", row(s.va), spin, arm, row(s.slide_v))
    np.testing.assert_allclose(v, s.v, **CLOSE)
    parts = ("total", "tangential", "centripetal", "slide", "coriolis")
    call = [row(s.aa), spin, bend, arm, row(s.slide_v), row(s.slide_a)]
    found = {p: vector("RB_ACCELERATION_SLIDING", *call, p) for p in parts}
    np.testing.assert_allclose(found["total"], s.a, **CLOSE)
    np.testing.assert_allclose(s.aa + sum(found[p] for p in parts[1:]), found["total"], **CLOSE)
    # Coriolis part: what changes when the slide reverses, halved (everything else is even in the slide speed)
    back = vector("RB_ACCELERATION_SLIDING", *call[:4], row(-s.slide_v), call[5])
    np.testing.assert_allclose(found["coriolis"], (s.a - back) / 2, **CLOSE)


@SEEDS
def test_body_point_equals_the_slider_that_does_not_slide(seed):
    """Reference: derivatives of A(t) + R(t) s with s constant, by sympy (the same expressions at zero slide)."""
    q = np.random.default_rng(seed + 100).normal(size=27)
    q[15:18] = q[24:27] = 0.0
    _, omega, alpha, arm, v, a, _, _ = (np.array(p, dtype=float).ravel() for p in moving_slider()(q))
    np.testing.assert_allclose(vector("RB_VELOCITY_AT", row(q[12:15]), row(omega), row(arm)), v, **CLOSE)
    call = ("RB_ACCELERATION_AT", row(q[21:24]), row(omega), row(alpha), row(arm))
    np.testing.assert_allclose(vector(*call), a, **CLOSE)
    parts = vector(*call, "tangential") + vector(*call, "centripetal")
    np.testing.assert_allclose(q[21:24] + parts, a, **CLOSE)
    # the centripetal part points to the axis and is omega^2 times the distance from it
    inward = vector(*call, "centripetal")
    axis = omega / np.linalg.norm(omega)
    np.testing.assert_allclose(inward, -(omega @ omega) * (arm - axis * (axis @ arm)), **CLOSE)


@SEEDS
def test_planar_cells_equal_complex_numbers(seed):
    """Reference: z = z_A + r exp(i phi), differentiated; planar cells with two numbers and one spin."""
    rng = np.random.default_rng(seed + 200)
    r, va, aa = (complex(*rng.normal(size=2)) for _ in range(3))
    w, al = rng.normal(size=2)
    v, a = va + 1j * w * r, aa + (1j * al - w * w) * r
    pair = lambda z: [[z.real, z.imag]]  # noqa: E731
    np.testing.assert_allclose(
        vector("RB_VELOCITY_AT", pair(va), float(w), pair(r)), [v.real, v.imag], **CLOSE
    )
    found = vector("RB_ACCELERATION_AT", pair(aa), float(w), float(al), pair(r))
    np.testing.assert_allclose(found, [a.real, a.imag], **CLOSE)


@cache
def carried_body():
    """Return a function from a random state to spins: a carrier turns in space, a body turns on it."""
    q = dynamicsymbols("u1:7")
    fixed = ReferenceFrame("N")
    carrier = fixed.orientnew("C", "Body", q[:3], "XYZ")
    body = carrier.orientnew("B", "Body", q[3:], "ZXZ")
    rate = lambda v: sp.Matrix([sp.diff(x, T) for x in v.to_matrix(carrier)])  # noqa: E731
    whole = body.dcm(fixed).T
    skew = (whole.diff(T) * whole.T).doit()
    omega = sp.Matrix([skew[2, 1], skew[0, 2], skew[1, 0]])
    seen = body.ang_vel_in(carrier)
    across = carrier.dcm(fixed).T
    out = (
        carrier.ang_vel_in(fixed).to_matrix(fixed),
        carrier.ang_vel_in(fixed).to_matrix(fixed).diff(T),
        across * seen.to_matrix(carrier),
        across * rate(seen),
        omega,
        omega.diff(T),
    )
    names = sp.symbols("x0:18")
    first, second = [sp.diff(x, T) for x in q], [sp.diff(x, T, 2) for x in q]
    steps = (
        dict(zip(second, names[12:], strict=True)),
        dict(zip(first, names[6:12], strict=True)),
        dict(zip(q, names[:6], strict=True)),
    )
    plain = []
    for part in out:
        for step in steps:
            part = part.subs(step)
        plain.append(part)
    return sp.lambdify([names], plain, cse=True)


@SEEDS
def test_spins_add_like_the_rotation_matrices_multiply(seed):
    """Reference: spin of the product of two rotation matrices, from its derivative, by sympy."""
    x = np.random.default_rng(seed + 300).normal(size=18)
    w1, a1, w2, a2, omega, alpha = (np.array(p, dtype=float).ravel() for p in carried_body()(x))
    call = ("RB_SPIN_SUM", row(w1), row(w2), row(a1), row(a2))
    np.testing.assert_allclose(vector(*call, "omega"), omega, **CLOSE)
    np.testing.assert_allclose(vector(*call, "alpha"), alpha, rtol=1e-11, atol=1e-10)
    steady = vector("RB_SPIN_SUM", row(w1), row(w2), OMITTED, OMITTED, "alpha")
    np.testing.assert_allclose(steady, alpha - a1 - a2, rtol=1e-11, atol=1e-10)
    np.testing.assert_allclose(vector(*call, "carried"), steady, **CLOSE)


def rigid_velocities(rng, count, planar=False):
    points = rng.normal(size=(count, 3)) + rng.normal(size=3)
    omega, at_origin = rng.normal(size=(2, 3))
    if planar:
        points[:, 2] = omega[0] = omega[1] = at_origin[2] = 0.0
    skew = np.array([[0, -omega[2], omega[1]], [omega[2], 0, -omega[0]], [-omega[1], omega[0], 0]])
    return points, omega, points @ skew.T + at_origin


@SEEDS
def test_fitted_spin_equals_least_squares(seed):
    """Reference: numpy lstsq of v_i = v_0 + omega x r_i written out as 3 n equations in 6 unknowns."""
    rng = np.random.default_rng(seed + 400)
    points, _, velocities = rigid_velocities(rng, 6)
    velocities += 0.05 * rng.normal(size=velocities.shape)
    equations = []
    for x, y, z in points:
        equations += [[1, 0, 0, 0, z, -y], [0, 1, 0, -z, 0, x], [0, 0, 1, y, -x, 0]]
    solved, _, rank, _ = np.linalg.lstsq(np.array(equations), velocities.ravel(), rcond=None)
    assert rank == 6
    call = ("RB_OMEGA_FROM", rows(points), rows(velocities))
    np.testing.assert_allclose(vector(*call), solved[3:], rtol=1e-10, atol=1e-11)
    left = np.linalg.norm((velocities.ravel() - np.array(equations) @ solved).reshape(-1, 3), axis=1)
    assert number(*call, "residual") == pytest.approx(left.max(), rel=1e-9)
    assert number(*call, "rms") == pytest.approx(np.sqrt(np.mean(left**2)), rel=1e-9)
    speed = np.linalg.norm(velocities, axis=1).max()
    assert number(*call, "misfit") == pytest.approx(left.max() / speed, rel=1e-9)
    told = re.fullmatch(r"Not one rigid body: point (\d) is off by (\S+) m/s", ask(*call, "verdict"))
    assert told is not None
    assert int(told[1]) == left.argmax() + 1
    assert float(told[2]) == pytest.approx(left.max(), rel=1e-5)


@SEEDS
@pytest.mark.parametrize("planar", [False, True])
def test_fitted_spin_of_one_body_is_its_spin(seed, planar):
    """Property: exact velocities of one body give its spin, no residual, and the verdict OK."""
    points, omega, velocities = rigid_velocities(np.random.default_rng(seed + 500), 5, planar)
    if planar:
        points, velocities = points[:, :2], velocities[:, :2]
        assert number("RB_OMEGA_FROM", rows(points), rows(velocities)) == pytest.approx(omega[2], rel=1e-11)
    else:
        found = vector("RB_OMEGA_FROM", rows(points), rows(velocities))
        np.testing.assert_allclose(found, omega, rtol=1e-10, atol=1e-11)
    assert number("RB_OMEGA_FROM", rows(points), rows(velocities), "residual") < 1e-13
    assert ask("RB_OMEGA_FROM", rows(points), rows(velocities), "verdict") == "OK"


@SEEDS
def test_fitted_spin_of_a_turned_body(seed):
    """Reference: chord velocities of scipy's Rotation over a small step fit the rotation vector's direction."""
    rng = np.random.default_rng(seed + 600)
    points = rng.normal(size=(7, 3))
    turn = rng.normal(size=3)
    turn *= 0.9 / np.linalg.norm(turn)
    start, end = points, Rotation.from_rotvec(turn).apply(points)
    # Between two places of a turn by angle a, chords over the middle places are those of a spin 2 tan(a/2).
    found = vector("RB_OMEGA_FROM", rows((start + end) / 2), rows(end - start))
    np.testing.assert_allclose(found, turn / 0.9 * 2 * np.tan(0.45), rtol=1e-11, atol=1e-12)


@SEEDS
def test_instant_center_is_at_rest_and_found_from_two_points(seed):
    """Reference: v = i omega (z - z_C) in complex numbers, with z_C chosen at random."""
    rng = np.random.default_rng(seed + 700)
    c, a, b = (complex(*rng.normal(size=2)) for _ in range(3))
    w = float(rng.normal())
    pair = lambda z: [[z.real, z.imag]]  # noqa: E731
    va, vb = 1j * w * (a - c), 1j * w * (b - c)
    expected = [c.real, c.imag]
    np.testing.assert_allclose(
        vector("RB_INSTANT_CENTER", pair(a), pair(va), w), expected, rtol=1e-10, atol=1e-11
    )
    two = vector("RB_INSTANT_CENTER_2", pair(a), pair(va), pair(b), pair(vb))
    np.testing.assert_allclose(two, expected, rtol=1e-9, atol=1e-10)
    at_rest = vector("RB_VELOCITY_AT", pair(va), w, [[c.real - a.real, c.imag - a.imag]])
    np.testing.assert_allclose(at_rest, 0.0, atol=1e-12)


def test_instant_center_of_crossed_velocities_square_to_the_line_between():
    """Reference: similar triangles (textbook case where the perpendiculars fall together)."""
    found = vector("RB_INSTANT_CENTER_2", "(0, 0) m", "(0, 2) m/s", "(3, 0) m", "(0, -1) m/s")
    np.testing.assert_allclose(found, [2.0, 0.0], atol=1e-14)


@SEEDS
def test_two_points_that_stretch_are_refused_with_the_amount(seed):
    """First principles: the speed along AB, and its part of the greater speed, stand in the sentence."""
    rng = np.random.default_rng(seed + 800)
    a, b, va, vb = rng.normal(size=(4, 2))
    along = (b - a) / np.linalg.norm(b - a)
    stretch = float((vb - va) @ along)
    part = 100 * abs(stretch) / max(np.linalg.norm(va), np.linalg.norm(vb))
    said = refused("RB_INSTANT_CENTER_2", row(a), row(va), row(b), row(vb))
    assert said.error == "#NUM!"
    way = "apart" if stretch > 0 else "together"
    assert f"they move {way} at {abs(stretch):.4g} m/s, {part:.3g} %" in said.reason


def test_translation_has_no_instant_center():
    for said in (
        refused("RB_INSTANT_CENTER", "(0, 1) m", "(2, 0) m/s", 0.0),
        refused("RB_INSTANT_CENTER_2", "(0, 1) m", "(2, 0) m/s", "(4, 2) m", "(2, 0) m/s"),
    ):
        assert said.error == "#NUM!"
        assert "only translates" in said.reason


def test_spins_of_a_column_of_three_are_three_rows():
    """Property: three spins about z with three arms are a column; each row equals its own call."""
    arms, spins = [[1.0, 0.0], [0.0, 2.0], [-1.0, 1.0]], [2.0, -1.0, 0.5]
    whole = array("RB_VELOCITY_AT", row((0, 0)), column(spins), arms)
    for k in range(3):
        alone = vector("RB_VELOCITY_AT", row((0, 0)), spins[k], [arms[k]])
        np.testing.assert_allclose(whole[k], alone, rtol=0, atol=0)
