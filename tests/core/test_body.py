"""Rigid bodies: joined, cut, moved and turned, against clouds of point masses and exact arithmetic."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray
from scipy.spatial.transform import Rotation

from rigidsheet.core.body import RigidBody, combine, combine_arrays, inertia_about, removed
from rigidsheet.core.errors import InputError, PhysicsError

Array = NDArray[np.float64]
moderate = settings(max_examples=40, deadline=None)
SEEDS = st.integers(0, 2**32 - 1)


def tensor_of(masses: Array, places: Array, about: Array) -> Array:
    """Return the tensor from its definition."""
    r = places - about
    return np.asarray(
        np.einsum("n,n,ij->ij", masses, (r * r).sum(axis=1), np.eye(3))
        - np.einsum("n,ni,nj->ij", masses, r, r)
    )


def body_of(masses: Array, places: Array) -> RigidBody:
    center = masses @ places / masses.sum()
    return RigidBody.of(float(masses.sum()), center, tensor_of(masses, places, center))


def cloud(rng: np.random.Generator, count: int = 8) -> tuple[Array, Array]:
    return rng.uniform(0.1, 3.0, count), rng.normal(size=(count, 3))


def assert_same(one: RigidBody, other: RigidBody, rtol: float = 1e-12) -> None:
    scale = np.abs(other.inertia).max()
    assert one.mass == pytest.approx(other.mass, rel=rtol)
    np.testing.assert_allclose(one.center, other.center, rtol=rtol, atol=rtol)
    np.testing.assert_allclose(one.inertia, other.inertia, rtol=rtol, atol=rtol * scale)


@moderate
@given(SEEDS)
def test_joining_bodies_equals_joining_their_points(seed: int) -> None:
    rng = np.random.default_rng(seed)
    groups = [cloud(rng) for _ in range(4)]
    whole = body_of(np.concatenate([m for m, _ in groups]), np.concatenate([p for _, p in groups]))
    parts = [body_of(m, p) for m, p in groups]
    assert_same(combine(parts), whole)
    assert_same(removed(whole, parts[0]), combine(parts[1:]), rtol=1e-10)


@moderate
@given(SEEDS)
def test_moving_and_turning_equals_moving_the_points(seed: int) -> None:
    """scipy Rotation on every point."""
    rng = np.random.default_rng(seed)
    masses, places = cloud(rng)
    body, rotation = body_of(masses, places), Rotation.random(rng=rng)
    by, point = rng.normal(size=3), rng.normal(size=3)
    assert_same(body.moved(by), body_of(masses, places + by))
    about_point = body_of(masses, rotation.apply(places - point) + point)
    assert_same(body.turned(rotation.as_matrix(), point), about_point)
    own = body.turned(rotation.as_matrix())
    np.testing.assert_array_equal(own.center, body.center)
    np.testing.assert_array_equal(own.inertia, body.turned(rotation.as_matrix(), point).inertia)
    assert_same(body.turned(rotation.as_matrix(), point).turned(rotation.inv().as_matrix(), point), body)


@moderate
@given(SEEDS)
def test_inertia_about_any_point(seed: int) -> None:
    rng = np.random.default_rng(seed)
    masses, places = cloud(rng)
    points = rng.normal(size=(5, 3)) * 4.0
    found = inertia_about(body_of(masses, places), points)
    for point, tensor in zip(points, found, strict=True):
        expected = tensor_of(masses, places, point)
        np.testing.assert_allclose(tensor, expected, rtol=1e-12, atol=1e-12 * np.abs(expected).max())


def test_dumbbell_by_hand() -> None:
    """Two points, 1 kg at x = 0 and 3 kg at x = 4 m: center 3 m, reduced mass 3/4, I = 3/4 * 16 = 12."""
    pair = combine_arrays([1.0, 3.0], [[0.0, 0, 0], [4.0, 0, 0]], np.zeros((2, 3, 3)))
    assert pair.mass == 4.0
    assert pair.center.tolist() == [3.0, 0.0, 0.0]
    assert pair.inertia.tolist() == [[0, 0, 0], [0, 12, 0], [0, 0, 12]]


def test_a_single_part_comes_back_as_it_is() -> None:
    body = RigidBody.of(2.0, [1.1, 2.2, 3.3], np.diag([1.0, 2.0, 2.5]))
    again = combine([body])
    np.testing.assert_array_equal(again.center, body.center)
    np.testing.assert_array_equal(again.inertia, body.inertia)


def exact_sum(masses: Array, places: Array) -> tuple[list[Fraction], list[list[Fraction]]]:
    """Return mass center and tensor about it of point masses in rational arithmetic, without rounding."""
    m = [Fraction(float(value)) for value in masses]
    r = [[Fraction(float(value)) for value in row] for row in places]
    total = sum(m)
    center = [sum((mi * row[k] for mi, row in zip(m, r, strict=True)), Fraction()) / total for k in range(3)]
    arm = [[row[k] - center[k] for k in range(3)] for row in r]
    second = [
        [sum((mi * a[i] * a[j] for mi, a in zip(m, arm, strict=True)), Fraction()) for j in range(3)]
        for i in range(3)
    ]
    trace = second[0][0] + second[1][1] + second[2][2]
    return center, [[(trace if i == j else 0) - second[i][j] for j in range(3)] for i in range(3)]


@pytest.mark.parametrize("origin", [0.0, 1e3, 1e6])
def test_a_far_origin_costs_no_digits(origin: float) -> None:
    """Rational arithmetic on the same floats; a small part far out beside a heavy one."""
    rng = np.random.default_rng(4)
    places = rng.normal(size=(50, 3)) * 0.1 + origin
    places[7] += 40.0
    masses = rng.uniform(1.0, 200.0, 50)
    masses[7] = 1e-5
    center, tensor = exact_sum(masses, places)
    found = combine_arrays(masses, places, np.zeros((50, 3, 3)))
    np.testing.assert_allclose(found.center, [float(value) for value in center], rtol=4e-16)
    expected = np.array([[float(value) for value in row] for row in tensor])
    # The mass center itself is rounded to a float; beside an origin of 1e6 that is 1e-10 m, squared 1e-20.
    np.testing.assert_allclose(np.diag(found.inertia), np.diag(expected), rtol=2e-14)
    np.testing.assert_allclose(found.inertia, expected, atol=1e-13 * expected.max())


def test_ten_thousand_parts_lose_no_digits() -> None:
    """Rational arithmetic on the same floats."""
    rng = np.random.default_rng(6)
    masses, places = rng.uniform(0.001, 50.0, 10_000), rng.normal(size=(10_000, 3)) * [3.0, 0.2, 1.0] + 5.0
    center, tensor = exact_sum(masses, places)
    found = combine_arrays(masses, places, np.zeros((10_000, 3, 3)))
    np.testing.assert_allclose(found.center, [float(value) for value in center], rtol=1e-15)
    expected = np.array([[float(value) for value in row] for row in tensor])
    np.testing.assert_allclose(np.diag(found.inertia), np.diag(expected), rtol=1e-14)
    np.testing.assert_allclose(found.inertia, expected, atol=1e-14 * expected.max())


def plate_with_hole(hole: float) -> RigidBody:
    """Return a 1 m cube of 1000 kg less a cube of the given side in its middle."""
    cube = RigidBody.of(1000.0, [0, 0, 0], 1000.0 / 6.0 * np.eye(3))
    mass = 1000.0 * hole**3
    return removed(cube, RigidBody.of(mass, [0, 0, 0], mass * hole**2 / 6.0 * np.eye(3)))


def test_cut_out_by_hand() -> None:
    """Cube less a cube of half its side: m = 875, I = 1000/6 * (1 - 1/32)."""
    body = plate_with_hole(0.5)
    assert body.mass == pytest.approx(875.0, rel=1e-15)
    np.testing.assert_allclose(body.inertia, 1000.0 / 6.0 * 31.0 / 32.0 * np.eye(3), rtol=1e-14)


@pytest.mark.parametrize("hole", [1.0, 1.2])
def test_cut_out_as_heavy_as_the_body(hole: float) -> None:
    with pytest.raises(PhysicsError, match="cut-outs weigh as much") as caught:
        plate_with_hole(hole)
    assert caught.value.argument == "total mass"


def test_rounding_is_not_mass() -> None:
    """0.1 + 0.2 - 0.3 leaves 5.6e-17 of binary rounding, no mass."""
    with pytest.raises(PhysicsError, match="total mass"):
        combine_arrays([0.1, 0.2, -0.3], np.zeros((3, 3)), np.zeros((3, 3, 3)))


def test_cut_out_outside_its_body() -> None:
    """A light cut-out far away leaves a positive mass but a tensor no body can have."""
    cube = RigidBody.of(10.0, [0, 0, 0], 0.1 * np.eye(3))
    with pytest.raises(PhysicsError, match="cut-out is larger than what it is cut from") as caught:
        removed(cube, RigidBody.of(1.0, [3.0, 0, 0], 0.001 * np.eye(3)))
    assert len(str(caught.value)) < 255


def test_sum_of_impossible_parts_without_cut_outs() -> None:
    with pytest.raises(PhysicsError, match="A part has a tensor that no body can have"):
        combine_arrays([1.0], [[0.0, 0, 0]], [np.diag([1.0, 1.0, 5.0])])


def test_positive_tensor_of_a_cut_out_is_refused() -> None:
    with pytest.raises(InputError, match=r"both negative for a cut-out.*part 2"):
        combine_arrays([2.0, -1.0], np.zeros((2, 3)), [np.eye(3), 0.1 * np.eye(3)])


def test_no_parts() -> None:
    with pytest.raises(InputError, match="at least one part"):
        combine([])
    with pytest.raises(InputError, match="at least one part"):
        combine_arrays([], np.zeros((0, 3)), np.zeros((0, 3, 3)))


@pytest.mark.parametrize("bad", [np.nan, np.inf])
def test_numbers_that_are_none_never_become_a_body(bad: float) -> None:
    with np.errstate(invalid="ignore"), pytest.raises(PhysicsError):
        combine_arrays([1.0, bad], np.zeros((2, 3)), np.zeros((2, 3, 3)))
    with np.errstate(invalid="ignore"), pytest.raises(PhysicsError):
        combine_arrays([1.0, 1.0], [[0.0, 0, 0], [bad, 0, 0]], np.zeros((2, 3, 3)))
    with np.errstate(invalid="ignore"), pytest.raises(PhysicsError):
        combine_arrays([1.0], np.zeros((1, 3)), [np.diag([bad, 1.0, 1.0])])


@pytest.mark.parametrize("mass", [0.0, -2.0, np.nan, np.inf])
def test_refused_mass(mass: float) -> None:
    with pytest.raises(InputError, match="`mass` must be a positive number"):
        RigidBody.of(mass, [0, 0, 0], np.eye(3))


@pytest.mark.parametrize("center", [[0, 0], [0, 0, np.nan], [[0, 0, 0]]])
def test_refused_center(center: object) -> None:
    with pytest.raises(InputError, match="`center` must be three finite numbers"):
        RigidBody.of(1.0, center, np.eye(3))  # type: ignore[arg-type]


@pytest.mark.parametrize(
    ("inertia", "words"),
    [(np.diag([1.0, 1.0, 3.0]), "more than Ixx"), (np.full((3, 3), np.nan), "finite"), (np.eye(2), "3 by 3")],
)
def test_refused_tensor(inertia: Array, words: str) -> None:
    with pytest.raises(InputError, match=words) as caught:
        RigidBody.of(1.0, [0, 0, 0], inertia)
    assert caught.value.argument == "inertia"
    assert len(str(caught.value)) < 255


def test_arrays_are_the_body_s_own() -> None:
    center, tensor = np.zeros(3), np.eye(3)
    body = RigidBody.of(1.0, center, tensor)
    center[0] = tensor[0, 0] = 9.0
    assert body.center[0] == 0.0
    assert body.inertia[0, 0] == 1.0
    with pytest.raises(ValueError, match="read-only"):
        body.center[0] = 1.0
    with pytest.raises(ValueError, match="read-only"):
        body.moved([1, 0, 0]).inertia[0, 0] = 1.0
