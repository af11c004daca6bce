"""Vector kernels against NumPy's general routines and SciPy's rotations."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.spatial.transform import Rotation

from rigidsheet.core.vectors import cross, dot, norm, rotation_matrix, skew, turn_xyz


@pytest.fixture
def rng() -> np.random.Generator:
    return np.random.default_rng(20)


@pytest.mark.parametrize(
    ("one", "other"), [((3,), (3,)), ((7, 3), (3,)), ((3,), (7, 3)), ((4, 1, 3), (5, 3))]
)
def test_products_equal_numpy(rng: np.random.Generator, one: tuple[int, ...], other: tuple[int, ...]) -> None:
    """numpy.cross and numpy.sum."""
    a, b = rng.normal(size=one), rng.normal(size=other)
    np.testing.assert_array_equal(cross(a, b), np.cross(a, b))
    np.testing.assert_allclose(dot(a, b), (a * b).sum(axis=-1), rtol=1e-14, atol=1e-15)


def test_integer_lists_are_read() -> None:
    assert cross([1, 0, 0], [0, 1, 0]).tolist() == [0.0, 0.0, 1.0]
    assert float(dot([1, 2, 3], [4, 5, 6])) == 32.0


def test_norm(rng: np.random.Generator) -> None:
    """numpy.linalg.norm, and sizes whose squares leave the range of floats."""
    a = rng.normal(size=(6, 3))
    np.testing.assert_allclose(norm(a), np.linalg.norm(a, axis=1), rtol=1e-15)
    assert float(norm([3e-200, 4e-200, 0.0])) == pytest.approx(5e-200, rel=1e-15)
    assert float(norm([3e200, 4e200, 0.0])) == pytest.approx(5e200, rel=1e-15)


def test_skew_is_the_cross_product(rng: np.random.Generator) -> None:
    a, b = rng.normal(size=(5, 3)), rng.normal(size=(5, 3))
    np.testing.assert_allclose(np.einsum("nij,nj->ni", skew(a), b), np.cross(a, b), rtol=1e-13)
    np.testing.assert_array_equal(skew(a), -np.swapaxes(skew(a), -1, -2))


def test_rotation_matrix_is_an_active_turn(rng: np.random.Generator) -> None:
    """scipy.spatial.transform.Rotation.from_rotvec; a quarter turn about z takes x to y."""
    axes, angles = rng.normal(size=(40, 3)), rng.uniform(-7.0, 7.0, 40)
    units = axes / np.linalg.norm(axes, axis=1)[:, None]
    expected = Rotation.from_rotvec(units * angles[:, None]).as_matrix()
    np.testing.assert_allclose(rotation_matrix(axes, angles), expected, atol=2e-15)
    np.testing.assert_allclose(rotation_matrix([0, 0, 2], np.pi / 2) @ [1, 0, 0], [0, 1, 0], atol=3e-16)


def test_small_turn_keeps_its_digits() -> None:
    """1 - cos(1e-9) is 5e-19 (series); computed as a difference it would be 0."""
    matrix = rotation_matrix([1.0, 1.0, 0.0], 1e-9)
    assert matrix[0, 1] == pytest.approx(0.5 * 0.5e-18, rel=1e-12, abs=0.0)


def test_axis_of_no_length_gives_nan_without_a_warning() -> None:
    assert np.isnan(rotation_matrix([0.0, 0.0, 0.0], 1.0)).any()


def test_turn_xyz_is_about_the_fixed_axes_in_this_order(rng: np.random.Generator) -> None:
    """scipy Rotation.from_euler: lower-case axes are the fixed ones."""
    angles = rng.uniform(-np.pi, np.pi, (30, 3))
    np.testing.assert_allclose(turn_xyz(angles), Rotation.from_euler("xyz", angles).as_matrix(), atol=1e-15)


def test_turn_xyz_by_hand() -> None:
    """First x then y by 90 deg: y goes to z, then z to x."""
    np.testing.assert_allclose(turn_xyz([np.pi / 2, np.pi / 2, 0.0]) @ [0, 1, 0], [1, 0, 0], atol=1e-15)
