"""Inertia tensors against clouds of point masses, SciPy's rotations and hand results."""

from __future__ import annotations

import re

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray
from scipy.spatial.transform import Rotation

from rigidsheet.core.tensors import (
    axis_inertia,
    offset_tensor,
    principal,
    radius_of_gyration,
    shift_from_center,
    shift_moment_from_center,
    shift_moment_to_center,
    shift_to_center,
    tensor_from_terms,
    tensor_problem,
    turned,
)

Array = NDArray[np.float64]
SEEDS = st.integers(0, 2**32 - 1)
moderate = settings(max_examples=60, deadline=None)


def cloud(seed: int, count: int = 6) -> tuple[Array, Array]:
    """Return masses and places of a cloud of point masses."""
    rng = np.random.default_rng(seed)
    return rng.uniform(0.1, 3.0, count), rng.normal(size=(count, 3)) * rng.uniform(0.01, 10.0, 3)


def tensor_of(masses: Array, places: Array, about: Array) -> Array:
    """Return the tensor from its definition, the sum of m (r.r 1 - r r^T)."""
    out = np.zeros((3, 3))
    for m, place in zip(masses, places, strict=True):
        r = place - about
        out += m * (r @ r * np.eye(3) - np.outer(r, r))
    return out


def center_of(masses: Array, places: Array) -> Array:
    return np.asarray(masses @ places / masses.sum())


def test_terms_go_where_they_belong() -> None:
    """Definition: the tensor holds minus the integral of xy."""
    as_tensor = tensor_from_terms(10, 20, 25, 1, 2, 3)
    assert as_tensor.tolist() == [[10, 1, 3], [1, 20, 2], [3, 2, 25]]
    as_integral = tensor_from_terms(10, 20, 25, 1, 2, 3, products="integral")
    assert as_integral.tolist() == [[10, -1, -3], [-1, 20, -2], [-3, -2, 25]]


def test_integral_products_of_a_point_mass() -> None:
    """A point of 2 kg at (1, 2, 3): integrals xy 4, yz 12, zx 6 kg m^2."""
    expected = tensor_of(np.array([2.0]), np.array([[1.0, 2.0, 3.0]]), np.zeros(3))
    np.testing.assert_array_equal(tensor_from_terms(26, 20, 10, 4, 12, 6, products="integral"), expected)


def test_no_negative_zero_from_products() -> None:
    assert not np.signbit(tensor_from_terms(1, 1, 1, 0, 0, 0, products="integral")).any()


@moderate
@given(SEEDS)
def test_parallel_axis_both_ways(seed: int) -> None:
    """Sum over point masses about the mass center and about any point."""
    masses, places = cloud(seed)
    center, point = center_of(masses, places), np.random.default_rng(seed + 1).normal(size=3) * 5.0
    own, about = tensor_of(masses, places, center), tensor_of(masses, places, point)
    scale = np.abs(about).max()
    np.testing.assert_allclose(
        shift_from_center(own, masses.sum(), center - point), about, rtol=1e-12, atol=1e-13 * scale
    )
    np.testing.assert_allclose(shift_to_center(about, masses.sum(), point - center), own, atol=1e-13 * scale)


def test_parallel_axis_broadcasts() -> None:
    masses, offsets = np.array([1.0, 2.0]), np.array([[1.0, 2.0, 3.0], [0.0, 0.0, 4.0]])
    out = shift_from_center(np.eye(3), masses, offsets)
    assert out[0].tolist() == [[14, -2, -3], [-2, 11, -6], [-3, -6, 6]]
    assert out[1].tolist() == [[33, 0, 0], [0, 33, 0], [0, 0, 1]]
    np.testing.assert_array_equal(offset_tensor(masses, offsets), out - np.eye(3))


def test_scalar_parallel_axis() -> None:
    """Rod of 3 kg and 2 m: m L^2/12 = 1 about its middle, m L^2/3 = 4 about its end (handbook, from memory)."""
    assert float(shift_moment_from_center(1.0, 3.0, 1.0)) == 4.0
    assert float(shift_moment_to_center(4.0, 3.0, 1.0)) == 1.0
    assert shift_moment_from_center([1.0, 2.0], 3.0, [1.0, 2.0]).tolist() == [4.0, 14.0]


@moderate
@given(SEEDS)
def test_turning_equals_turning_the_points(seed: int) -> None:
    """scipy Rotation applied to the points, then the definition of the tensor; and back again."""
    masses, places = cloud(seed)
    rotation = Rotation.random(rng=np.random.default_rng(seed))
    before = tensor_of(masses, places, np.zeros(3))
    after = turned(before, rotation.as_matrix())
    scale = np.abs(before).max()
    expected = tensor_of(masses, rotation.apply(places), np.zeros(3))
    np.testing.assert_allclose(after, expected, atol=1e-13 * scale)
    np.testing.assert_array_equal(after, after.T)
    np.testing.assert_allclose(turned(after, rotation.inv().as_matrix()), before, atol=1e-13 * scale)


@moderate
@given(SEEDS)
def test_axis_inertia_is_the_sum_of_m_distance_squared(seed: int) -> None:
    """Distance from the axis by numpy.cross."""
    masses, places = cloud(seed)
    direction = np.random.default_rng(seed + 2).normal(size=3)
    distance = np.linalg.norm(np.cross(places, direction / np.linalg.norm(direction)), axis=1)
    tensor = tensor_of(masses, places, np.zeros(3))
    assert float(axis_inertia(tensor, direction)) == pytest.approx(
        float(masses @ distance**2), rel=1e-11, abs=1e-13 * np.abs(tensor).max()
    )


def test_axis_inertia_of_a_zero_direction_is_nan() -> None:
    assert np.isnan(axis_inertia(np.eye(3), [0.0, 0.0, 0.0]))


def test_radius_of_gyration() -> None:
    """Disk: R / sqrt(2) (handbook, from memory)."""
    assert float(radius_of_gyration(0.5 * 8.0 * 0.3**2, 8.0)) == pytest.approx(0.3 / np.sqrt(2), rel=1e-15)


@moderate
@given(SEEDS)
def test_principal_axes_rebuild_the_tensor(seed: int) -> None:
    masses, places = cloud(seed)
    tensor = tensor_of(masses, places, center_of(masses, places))
    found = principal(tensor)
    scale = np.abs(tensor).max()
    assert (np.diff(found.moments) >= 0.0).all()
    np.testing.assert_allclose(found.axes @ np.diag(found.moments) @ found.axes.T, tensor, atol=1e-12 * scale)
    np.testing.assert_allclose(found.axes.T @ found.axes, np.eye(3), atol=1e-12)
    assert np.linalg.det(found.axes) == pytest.approx(1.0, abs=1e-12)


@moderate
@given(
    SEEDS,
    st.sampled_from([(1.0, 2.0, 2.0), (2.0, 2.0, 3.0), (2.0, 2.0, 2.0), (0.0, 1.0, 1.0), (0.0, 0.0, 0.0)]),
)
def test_principal_axes_at_equal_moments(seed: int, moments: tuple[float, float, float]) -> None:
    """A turned body of revolution: right-handed unit axes to 1e-12 that still rebuild the tensor."""
    rotation = Rotation.random(rng=np.random.default_rng(seed)).as_matrix()
    tensor = rotation @ np.diag(moments) @ rotation.T
    found = principal(0.5 * (tensor + tensor.T))
    np.testing.assert_allclose(found.axes.T @ found.axes, np.eye(3), atol=1e-12)
    assert np.linalg.det(found.axes) == pytest.approx(1.0, abs=1e-12)
    np.testing.assert_allclose(found.moments, moments, atol=1e-12)
    np.testing.assert_allclose(found.axes @ np.diag(found.moments) @ found.axes.T, tensor, atol=1e-11)


def test_principal_axes_prefer_the_sheet() -> None:
    """Where the body leaves the choice, the sheet's own axes are the answer."""
    assert principal(5.0 * np.eye(3)).axes.tolist() == np.eye(3).tolist()
    # The same with the rounding that a roll-up leaves in the products.
    noise = tensor_from_terms(0, 0, 0, 3e-15, -2e-15, 1e-15)
    assert principal(5.0 * np.eye(3) + noise).axes.tolist() == np.eye(3).tolist()
    np.testing.assert_array_equal(principal(np.diag([4.0, 4.0, 1.0])).axes, [[0, 1, 0], [0, 0, 1], [1, 0, 0]])
    np.testing.assert_array_equal(principal(np.diag([1.0, 1.0, 2.0])).axes, np.eye(3))
    # A shaft that lies askew in the x-y plane: one of the equal axes is the sheet's z.
    shaft = turned(np.diag([0.2, 3.0, 3.0]), Rotation.from_euler("z", 0.4).as_matrix())
    found = principal(shaft)
    np.testing.assert_allclose(found.axes[:, 2], [0, 0, 1], atol=1e-12)
    np.testing.assert_allclose(found.axes[:, 0], [np.cos(0.4), np.sin(0.4), 0], atol=1e-12)


@pytest.mark.parametrize("noise", [0.0, 1e-15, -1e-15, 3e-14, -3e-14])
def test_principal_axes_do_not_jump_with_rounding(noise: float) -> None:
    """The same body with rounding in one term gives the same axes: here a tube, turned 45 deg about y."""
    tube = turned(np.diag([2.0, 2.0, 0.5]), Rotation.from_euler("y", np.pi / 4).as_matrix())
    tube[1, 1] *= 1.0 + noise
    half = np.sqrt(0.5)
    np.testing.assert_allclose(
        principal(tube).axes, [[half, half, 0.0], [0.0, 0.0, 1.0], [half, -half, 0.0]], atol=1e-9
    )


def test_principal_of_a_diagonal_tensor_is_exact_and_sorted() -> None:
    found = principal(np.diag([3.0, 1.0, 2.0]))
    assert found.moments.tolist() == [1.0, 2.0, 3.0]
    assert found.axes.tolist() == [[0, 0, 1], [1, 0, 0], [0, 1, 0]]


@moderate
@given(SEEDS)
def test_every_cloud_of_masses_passes_the_check(seed: int) -> None:
    """What real point masses make is possible by definition."""
    masses, places = cloud(seed, count=1 + seed % 5)
    assert tensor_problem(tensor_of(masses, places, np.zeros(3)), 1e-12) is None
    # The same printed to four digits, as on a data sheet.
    printed = np.array(
        [[float(f"{term:.4g}") for term in row] for row in tensor_of(masses, places, np.zeros(3))]
    )
    assert tensor_problem(printed) is None


@pytest.mark.parametrize(
    "tensor",
    [
        np.zeros((3, 3)),
        np.diag([0.0, 2.0, 2.0]),
        np.diag([1.0, 2.0, 3.0]),
        np.diag([0.1667, 0.3333, 0.5001]),
        tensor_from_terms(1.0, 1.0, 2.0, 0.9999),
        tensor_from_terms(1.0, 1.0, 2.0, -1.0),
    ],
)
def test_limiting_bodies_pass(tensor: Array) -> None:
    """Point, slender rod, flat plate, plate with printed rounding, thin rods in the plane at 45 deg."""
    assert tensor_problem(tensor) is None


@pytest.mark.parametrize(
    ("tensor", "words"),
    [
        (np.eye(2), "3 by 3"),
        (np.full((3, 3), np.nan), "finite"),
        (np.diag([1.0, np.nan, 1.0]), "finite"),
        (np.diag([1.0, np.inf, 1.0]), "finite"),
        (np.array([[2.0, 0.1, 0.0], [0.2, 2.0, 0.0], [0.0, 0.0, 2.0]]), "Ixy is 0.1, Iyx is 0.2"),
        (np.array([[2.0, 0.0, 0.1], [0.0, 2.0, 0.0], [0.3, 0.0, 2.0]]), "Izx is 0.3, Ixz is 0.1"),
        (np.diag([-1.0, 2.0, 2.0]), "Ixx is -1: a moment of inertia can't be negative"),
        (np.diag([1.0, 1.0, 2.01]), r"Izz is 2.01, more than Ixx \+ Iyy = 2"),
        (np.diag([3.0, 1.0, 1.0]), r"Ixx is 3, more than Iyy \+ Izz = 2"),
        (tensor_from_terms(10, 10, 4, 2.1), "Ixy is 2.1.*half of Izz = 4"),
        (tensor_from_terms(4, 10, 10, 0, -2.1), "Iyz is -2.1.*half of Ixx = 4"),
        (tensor_from_terms(10, 4, 10, 0, 0, 2.1), "Izx is 2.1.*half of Iyy = 4"),
        (tensor_from_terms(1, 1, 2, 0.99, 0.49, -0.49), "smallest principal moment is -0.2"),
        (tensor_from_terms(1, 1, 1, 0.45, 0.45, 0.45), "sum of the other two"),
    ],
)
def test_impossible_tensors(tensor: Array, words: str) -> None:
    """Each broken in one way; bounds by Landau and Lifshitz, Mechanics, section 32, and |xy| <= (x^2+y^2)/2."""
    problem = tensor_problem(tensor)
    assert problem is not None
    assert re.search(words, problem)
    assert len(problem) < 200


def test_tolerance_is_an_argument() -> None:
    slightly = np.diag([1.0, 1.0, 2.0 + 1e-6])
    assert tensor_problem(slightly) is None
    assert tensor_problem(slightly, tolerance=1e-9) is not None
    assert tensor_problem(np.diag([1.0, 1.0, 2.1]), tolerance=0.1) is None


def test_a_small_wrong_sign_in_the_products_is_caught() -> None:
    """A body near a line along (1, 1, 1): all integrals positive; one tensor product turned over breaks it."""
    masses, line = np.array([1.0, 1.0, 0.01]), np.array([[1.0, 1, 1], [-1, -1, -1], [0.1, -0.1, 0.0]])
    tensor = tensor_of(masses, line, np.zeros(3))
    assert tensor_problem(tensor) is None
    tensor[0, 1] = tensor[1, 0] = -tensor[0, 1]
    assert tensor_problem(tensor) is not None
